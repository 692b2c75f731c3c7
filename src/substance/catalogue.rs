//! The library as it is searched: embedded, and overlaid value by value by a laboratory's or a block's own constants.

use crate::substance::names::folded;
use crate::substance::reaction::{StoredGas, StoredPolynuclear};
use crate::substance::stored::hazards;
use crate::substance::{
    Component, Constant, Form, Formula, GasSolubility, InertIon, LibraryError, Ligand, Polynuclear,
    StoredConstants, StoredForm, StoredIon, StoredSubstance,
};
use serde::Deserialize;
use std::collections::{BTreeMap, BTreeSet};
use std::sync::{Arc, OnceLock};

/// The library: every ligand, ion and form, found by name, synonym, formula or CAS number.
#[derive(Clone, Debug, Default)]
pub struct Catalogue {
    ligands: BTreeMap<String, Arc<Ligand>>,
    ions: BTreeMap<String, Arc<InertIon>>,
    forms: BTreeMap<String, Arc<Form>>,
    /// Folded spelling to the form's name: names, synonyms, CAS numbers, symbols of ions.
    index: BTreeMap<String, String>,
    /// Folded formula to the names of all forms that have it.
    formulas: BTreeMap<String, BTreeSet<String>>,
    gases: Vec<GasSolubility>,
    polynuclear: Vec<Polynuclear>,
    water: Option<Constant>,
}

/// No one substance of the library is meant.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
#[error("{}", self.sentence())]
pub struct NotFound {
    /// What was looked for.
    pub query: String,
    /// Every name that could have been meant, for a search of the nearest; where `ambiguous`, the substances that share the formula.
    pub names: Vec<String>,
    /// Whether it is the formula of several substances, which `names` then lists.
    pub ambiguous: bool,
}

impl NotFound {
    fn sentence(&self) -> String {
        if self.ambiguous {
            let names = self.names.join(", ");
            format!(
                "{:?} is the formula of several substances: {names}",
                self.query
            )
        } else {
            format!("no substance {:?} in the library", self.query)
        }
    }
}

const FILES: [(&str, &str); 14] = [
    ("amines.yaml", include_str!("data/amines.yaml")),
    ("amino_acids.yaml", include_str!("data/amino_acids.yaml")),
    (
        "carboxylic_acids.yaml",
        include_str!("data/carboxylic_acids.yaml"),
    ),
    (
        "complexing_acids.yaml",
        include_str!("data/complexing_acids.yaml"),
    ),
    (
        "dissolved_gases.yaml",
        include_str!("data/dissolved_gases.yaml"),
    ),
    ("inert_ions.yaml", include_str!("data/inert_ions.yaml")),
    (
        "inorganic_acids.yaml",
        include_str!("data/inorganic_acids.yaml"),
    ),
    (
        "inorganic_salts.yaml",
        include_str!("data/inorganic_salts.yaml"),
    ),
    (
        "organic_salts.yaml",
        include_str!("data/organic_salts.yaml"),
    ),
    ("phenols.yaml", include_str!("data/phenols.yaml")),
    ("polyborates.yaml", include_str!("data/polyborates.yaml")),
    ("single_ions.yaml", include_str!("data/single_ions.yaml")),
    (
        "strong_electrolytes.yaml",
        include_str!("data/strong_electrolytes.yaml"),
    ),
    (
        "zwitterionic_buffers.yaml",
        include_str!("data/zwitterionic_buffers.yaml"),
    ),
];

#[derive(Deserialize)]
#[serde(deny_unknown_fields)]
struct LibraryFile {
    #[serde(default)]
    substances: Vec<StoredSubstance>,
    #[serde(default)]
    ions: Vec<StoredIon>,
    #[serde(default)]
    forms: Vec<StoredForm>,
    #[serde(default)]
    gases: Vec<StoredGas>,
    #[serde(default)]
    polynuclear: Vec<StoredPolynuclear>,
}

impl Catalogue {
    /// The library that is built into the program.
    ///
    /// # Errors
    /// [`LibraryError`] if the program was built with a wrong file; a test reads every file.
    pub fn embedded() -> Result<&'static Self, LibraryError> {
        static LIBRARY: OnceLock<Result<Catalogue, LibraryError>> = OnceLock::new();
        LIBRARY
            .get_or_init(read_files)
            .as_ref()
            .map_err(Clone::clone)
    }

    /// The form that a name, synonym, formula or CAS number means; an ion alone also by its symbol.
    ///
    /// A name goes before a formula. A formula that several forms have means none of them.
    ///
    /// # Errors
    /// [`NotFound`] with every known name, or with those that share the formula.
    pub fn find(&self, query: &str) -> Result<&Arc<Form>, NotFound> {
        let spelling = folded(query);
        let sharing = || self.formulas.get(&spelling).into_iter().flatten();
        let mut only = sharing();
        let by_formula = only.next().filter(|_| only.next().is_none());
        self.index
            .get(&spelling)
            .or(by_formula)
            .and_then(|name| self.forms.get(name))
            .ok_or_else(|| {
                let ambiguous = sharing().next().is_some();
                NotFound {
                    query: query.to_owned(),
                    names: if ambiguous {
                        sharing().cloned().collect()
                    } else {
                        self.spellings()
                    },
                    ambiguous,
                }
            })
    }

    /// The ligand of that name, or of the substance that the name means.
    pub fn ligand(&self, query: &str) -> Option<&Arc<Ligand>> {
        self.ligands.get(query).or_else(|| {
            let form = self.find(query).ok()?;
            let mut ligands = form.ligands();
            match (ligands.next(), ligands.next()) {
                (Some(only), None) => self.ligands.get(&only.name),
                _ => None,
            }
        })
    }

    /// All ligands, by name.
    pub fn ligands(&self) -> impl Iterator<Item = &Arc<Ligand>> {
        self.ligands.values()
    }

    /// All forms, by name.
    pub fn forms(&self) -> impl Iterator<Item = &Arc<Form>> {
        self.forms.values()
    }

    /// The inert ion of that name.
    pub fn ion(&self, name: &str) -> Option<&Arc<InertIon>> {
        self.ions.get(name)
    }

    /// Gases with Henry's constant.
    pub fn gases(&self) -> impl Iterator<Item = &GasSolubility> {
        self.gases.iter()
    }

    /// Species of several units of a ligand.
    pub fn polynuclear(&self, ligand: &str) -> impl Iterator<Item = &Polynuclear> {
        self.polynuclear
            .iter()
            .filter(move |species| species.ligand == ligand)
    }

    /// The user's own pKw, where one was stated; otherwise water follows its formulation.
    pub fn water(&self) -> Option<&Constant> {
        self.water.as_ref()
    }

    /// Every spelling that is found, in order.
    pub fn spellings(&self) -> Vec<String> {
        let mut names: Vec<String> = self
            .forms
            .values()
            .flat_map(|form| std::iter::once(&form.name).chain(&form.synonyms))
            .cloned()
            .collect();
        names.sort();
        names
    }

    /// This library with other values in place of its own, and new substances added.
    ///
    /// # Errors
    /// [`LibraryError`] where a stored value is wrong, or does not fit the library's substance of that name.
    pub fn overlaid(&self, stored: &StoredConstants) -> Result<Self, LibraryError> {
        let mut catalogue = self.clone();
        for ion in &stored.ions {
            catalogue.ions.insert(ion.ion.clone(), Arc::new(ion.ion()?));
        }
        for substance in &stored.substances {
            catalogue.put_own(substance)?;
        }
        for form in &stored.forms {
            catalogue.put_form(form)?;
        }
        catalogue.renew_forms();
        Ok(catalogue)
    }

    fn put_own(&mut self, stored: &StoredSubstance) -> Result<(), LibraryError> {
        if folded(&stored.substance) == "water" {
            let step = stored
                .pka
                .first()
                .map(|pk| pk.step("water", true))
                .transpose()?;
            self.water = step.map(|step| step.preferred);
            return Ok(());
        }
        let known = self.ligand(&stored.substance).cloned();
        let Some(known) = known else {
            return self.put_substance(stored, true);
        };
        if known.steps.len() != stored.pka.len()
            || stored.charge.is_some_and(|charge| charge != known.charge)
        {
            return Err(LibraryError::Steps {
                name: known.name.clone(),
                expected: known.steps.len(),
                found: stored.pka.len(),
            });
        }
        let mut ligand = (*known).clone();
        for (step, value) in ligand.steps.iter_mut().zip(&stored.pka) {
            let own = value.step(&stored.substance, true)?.preferred;
            let library = std::mem::replace(&mut step.preferred, own);
            step.others.insert(0, library);
        }
        ligand.own = true;
        stored.dress(&mut ligand)?;
        self.ligands.insert(ligand.name.clone(), Arc::new(ligand));
        Ok(())
    }

    fn put_substance(&mut self, stored: &StoredSubstance, own: bool) -> Result<(), LibraryError> {
        let ligand = Arc::new(stored.ligand(own)?);
        self.ligands
            .insert(ligand.name.clone(), Arc::clone(&ligand));
        self.insert_form(Form {
            name: ligand.name.clone(),
            synonyms: stored.synonyms.clone(),
            formula: formula(&ligand.name, stored.formula.as_deref())?,
            cas: stored.cas.clone(),
            contains: vec![(Component::Ligand(ligand), 1)],
            charge: 0,
            hazards: Vec::new(),
        });
        Ok(())
    }

    fn put_form(&mut self, stored: &StoredForm) -> Result<(), LibraryError> {
        let mut contains = Vec::new();
        for (name, count) in &stored.contains {
            let component = if let Some(ligand) = self.ligands.get(name) {
                Component::Ligand(Arc::clone(ligand))
            } else if let Some(ion) = self.ions.get(name) {
                Component::Ion(Arc::clone(ion))
            } else {
                return Err(LibraryError::Component {
                    name: stored.form.clone(),
                    component: name.clone(),
                });
            };
            contains.push((component, *count));
        }
        self.insert_form(Form {
            name: stored.form.clone(),
            synonyms: stored.synonyms.clone(),
            formula: formula(&stored.form, stored.formula.as_deref())?,
            cas: stored.cas.clone(),
            contains,
            charge: stored.charge,
            hazards: hazards(&stored.form, &stored.hazards)?,
        });
        Ok(())
    }

    fn insert_form(&mut self, form: Form) {
        let spellings = std::iter::once(form.name.as_str())
            .chain(form.synonyms.iter().map(String::as_str))
            .chain(form.ion_symbol())
            .chain(form.cas.as_deref());
        for spelling in spellings {
            self.index
                .entry(folded(spelling))
                .or_insert_with(|| form.name.clone());
        }
        self.index.insert(folded(&form.name), form.name.clone());
        if let Some(formula) = &form.formula {
            let sharing = self.formulas.entry(folded(formula.text())).or_default();
            sharing.insert(form.name.clone());
        }
        self.forms.insert(form.name.clone(), Arc::new(form));
    }

    /// Gives each form the ligands and ions as they are now.
    fn renew_forms(&mut self) {
        let (ligands, ions) = (&self.ligands, &self.ions);
        for form in self.forms.values_mut() {
            let current = |component: &Component| match component {
                Component::Ligand(old) => ligands
                    .get(&old.name)
                    .filter(|new| !Arc::ptr_eq(new, old))
                    .map(|new| Component::Ligand(Arc::clone(new))),
                Component::Ion(old) => ions
                    .get(&old.name)
                    .filter(|new| !Arc::ptr_eq(new, old))
                    .map(|new| Component::Ion(Arc::clone(new))),
            };
            let renewed: Vec<_> = form
                .contains
                .iter()
                .map(|(component, _)| current(component))
                .collect();
            if renewed.iter().all(Option::is_none) {
                continue;
            }
            for ((component, _), new) in Arc::make_mut(form).contains.iter_mut().zip(renewed) {
                *component = new.unwrap_or_else(|| component.clone());
            }
        }
    }
}

fn formula(name: &str, text: Option<&str>) -> Result<Option<Formula>, LibraryError> {
    text.map(|text| {
        Formula::parse(text).map_err(|problem| LibraryError::Formula {
            name: name.to_owned(),
            problem,
        })
    })
    .transpose()
}

fn read_files() -> Result<Catalogue, LibraryError> {
    let mut catalogue = Catalogue::default();
    let mut forms = Vec::new();
    for (file, text) in FILES {
        let read: LibraryFile = serde_yaml::from_str(text).map_err(|error| LibraryError::File {
            file: file.to_owned(),
            problem: error.to_string(),
        })?;
        for ion in &read.ions {
            catalogue.ions.insert(ion.ion.clone(), Arc::new(ion.ion()?));
        }
        for substance in &read.substances {
            catalogue.put_substance(substance, false)?;
        }
        forms.extend(read.forms);
        for gas in &read.gases {
            catalogue.gases.push(gas.gas()?);
        }
        for species in &read.polynuclear {
            catalogue.polynuclear.push(species.polynuclear()?);
        }
    }
    for form in &forms {
        catalogue.put_form(form)?;
    }
    Ok(catalogue)
}
