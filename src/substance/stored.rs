//! The stored form of constants: the files of the library, and the `constants` part of an answer.
//!
//! The keys are those of the block language. Figures are texts, so that their digits stay.

use crate::quantity::Decimal;
use crate::substance::{
    Basis, Constant, EquationForm, Hazard, InertIon, Kind, Ligand, PkEquation, Step, ThermalData,
    names,
};
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;

/// What can be wrong in stored constants.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum LibraryError {
    /// A file of the library does not have the stored form.
    #[error("{file}: {problem}")]
    File {
        /// The file.
        file: String,
        /// What the reader says.
        problem: String,
    },
    /// A figure is no number.
    #[error("{name}: {text:?} is no number")]
    Figure {
        /// The entry.
        name: String,
        /// What stands there.
        text: String,
    },
    /// A word is not one of a closed list.
    #[error("{name}: {word:?} is not known here")]
    Word {
        /// The entry.
        name: String,
        /// What stands there.
        word: String,
    },
    /// A component is named that is not there.
    #[error("{name} contains {component:?}, which is not known")]
    Component {
        /// The entry.
        name: String,
        /// The component.
        component: String,
    },
    /// A new substance has no charge of its fully protonated form.
    #[error("{name} is not in the library, so its `charge` must be stated")]
    Charge {
        /// The entry.
        name: String,
    },
    /// Values are given for other steps than the library's substance has.
    #[error(
        "{name} has {expected} dissociation steps in the library, {found} are given; use a name of your own"
    )]
    Steps {
        /// The entry.
        name: String,
        /// Steps in the library.
        expected: usize,
        /// Steps given.
        found: usize,
    },
    /// A formula cannot be read.
    #[error("{name}: {problem}")]
    Formula {
        /// The entry.
        name: String,
        /// What is wrong.
        problem: crate::substance::FormulaError,
    },
}

/// Constants as stored, in any number and order.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct StoredConstants {
    /// Acid families.
    pub substances: Vec<StoredSubstance>,
    /// Inert ions.
    pub ions: Vec<StoredIon>,
    /// Forms.
    pub forms: Vec<StoredForm>,
}

/// An acid family as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
pub struct StoredSubstance {
    /// The name of its neutral form.
    pub substance: String,
    /// Other names.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub synonyms: Vec<String>,
    /// Formula of the neutral form.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub formula: Option<String>,
    /// CAS registry number of the neutral form.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub cas: Option<String>,
    /// Charge of the fully protonated form.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub charge: Option<i8>,
    /// What the fully deprotonated form is called.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub symbol: Option<String>,
    /// Printed names of the states, most protonated first, in place of `symbol`.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub states: Vec<String>,
    /// Ion sizes in nm by state, `-` where none is known.
    #[serde(rename = "ion sizes", default, skip_serializing_if = "Vec::is_empty")]
    pub ion_sizes: Vec<String>,
    /// Hazard words.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub hazards: Vec<String>,
    /// One entry a step, most acidic first.
    #[serde(rename = "pKa")]
    pub pka: Vec<StoredPk>,
}

/// One value of a step as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredPk {
    pub value: String,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub uncertainty: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub kind: Option<String>,
    #[serde(
        rename = "ionic strength",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub ionic_strength: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub medium: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub temperature: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub enthalpy: Option<String>,
    #[serde(
        rename = "heat capacity",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub heat_capacity: Option<String>,
    #[serde(
        rename = "thermal source",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub thermal_source: Option<String>,
    #[serde(
        rename = "thermal basis",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub thermal_basis: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub equation: Option<StoredEquation>,
    pub source: String,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub locator: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub basis: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub others: Vec<Self>,
}

/// An equation pK(T) as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredEquation {
    pub form: String,
    pub coefficients: Vec<String>,
    pub from: String,
    pub to: String,
    pub source: String,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub basis: Option<String>,
}

/// An inert ion as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredIon {
    pub ion: String,
    pub symbol: String,
    pub charge: i8,
    #[serde(rename = "ion size", default, skip_serializing_if = "Option::is_none")]
    pub ion_size: Option<String>,
}

/// A form as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredForm {
    pub form: String,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub synonyms: Vec<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub formula: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub cas: Option<String>,
    pub contains: BTreeMap<String, u8>,
    #[serde(default, skip_serializing_if = "is_neutral")]
    pub charge: i8,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub hazards: Vec<String>,
}

#[expect(
    clippy::trivially_copy_pass_by_ref,
    reason = "the signature is serde's"
)]
fn is_neutral(charge: &i8) -> bool {
    *charge == 0
}

impl StoredSubstance {
    /// The ligand that the entry describes; `own` marks the user's own.
    ///
    /// # Errors
    /// [`LibraryError`] where a figure, a word or the charge is wrong or missing.
    pub(super) fn ligand(&self, own: bool) -> Result<Ligand, LibraryError> {
        let name = &self.substance;
        let charge = self
            .charge
            .ok_or_else(|| LibraryError::Charge { name: name.clone() })?;
        let steps = self
            .pka
            .iter()
            .map(|stored| stored.step(name, own))
            .collect::<Result<Vec<_>, _>>()?;
        let states = if self.states.len() == steps.len() + 1 {
            self.states.clone()
        } else {
            names::states(self.symbol.as_deref().unwrap_or(name), charge, steps.len())
        };
        let mut ion_sizes = Vec::new();
        for index in 0..states.len() {
            let text = self.ion_sizes.get(index).map_or("-", String::as_str);
            ion_sizes.push(if text == "-" {
                None
            } else {
                Some(figure(name, text)?)
            });
        }
        Ok(Ligand {
            name: name.clone(),
            charge,
            steps,
            states,
            ion_sizes,
            hazards: hazards(name, &self.hazards)?,
            own,
        })
    }
}

impl StoredPk {
    /// The step that the entry describes.
    pub(super) fn step(&self, name: &str, own: bool) -> Result<Step, LibraryError> {
        Ok(Step {
            preferred: self.constant(name, own)?,
            others: self
                .others
                .iter()
                .map(|other| other.constant(name, own))
                .collect::<Result<_, _>>()?,
        })
    }

    fn constant(&self, name: &str, own: bool) -> Result<Constant, LibraryError> {
        let temperature_c = match &self.temperature {
            Some(text) => figure(name, text.trim_end_matches("°C").trim())?,
            None => Decimal::whole(25),
        };
        Ok(Constant {
            pk: figure(name, &self.value)?,
            uncertainty: optional(name, self.uncertainty.as_deref())?,
            kind: self.kind(name)?,
            temperature_c,
            thermal: self.thermal(name, own)?,
            equation: self
                .equation
                .as_ref()
                .map(|e| e.equation(name, own))
                .transpose()?,
            source: self.source.clone(),
            locator: self.locator.clone(),
            basis: basis(name, self.basis.as_deref(), own)?,
            note: self.note.clone(),
        })
    }

    fn kind(&self, name: &str) -> Result<Kind, LibraryError> {
        match (self.kind.as_deref(), &self.ionic_strength) {
            (None | Some("thermodynamic"), None) => Ok(Kind::Thermodynamic),
            (Some("thermodynamic"), Some(text)) if figure(name, text)?.is_zero() => {
                Ok(Kind::Thermodynamic)
            }
            (None | Some("conditional"), Some(text)) => Ok(Kind::Conditional {
                ionic_strength: figure(name, text)?,
                medium: self.medium.clone(),
            }),
            (Some("unstated"), _) => Ok(Kind::Unstated),
            (Some(word), _) => Err(LibraryError::Word {
                name: name.to_owned(),
                word: word.to_owned(),
            }),
        }
    }

    fn thermal(&self, name: &str, own: bool) -> Result<Option<ThermalData>, LibraryError> {
        let Some(enthalpy) = &self.enthalpy else {
            return Ok(None);
        };
        Ok(Some(ThermalData {
            enthalpy: figure(name, enthalpy)?,
            heat_capacity: optional(name, self.heat_capacity.as_deref())?,
            source: self
                .thermal_source
                .clone()
                .unwrap_or_else(|| self.source.clone()),
            basis: basis(
                name,
                self.thermal_basis.as_deref().or(self.basis.as_deref()),
                own,
            )?,
        }))
    }
}

impl StoredEquation {
    fn equation(&self, name: &str, own: bool) -> Result<PkEquation, LibraryError> {
        let known = EquationForm::FORMS
            .iter()
            .find(|(text, _, count)| *text == self.form && *count == self.coefficients.len());
        let Some((_, form, _)) = known else {
            return Err(LibraryError::Word {
                name: name.to_owned(),
                word: self.form.clone(),
            });
        };
        Ok(PkEquation {
            form: *form,
            coefficients: self
                .coefficients
                .iter()
                .map(|text| figure(name, text))
                .collect::<Result<_, _>>()?,
            from_c: figure(name, &self.from)?,
            to_c: figure(name, &self.to)?,
            source: self.source.clone(),
            basis: basis(name, self.basis.as_deref(), own)?,
        })
    }
}

impl StoredIon {
    /// The ion that the entry describes.
    pub(super) fn ion(&self) -> Result<InertIon, LibraryError> {
        Ok(InertIon {
            name: self.ion.clone(),
            symbol: self.symbol.clone(),
            charge: self.charge,
            ion_size: optional(&self.ion, self.ion_size.as_deref())?,
        })
    }
}

/// The hazards that words name.
pub(super) fn hazards(name: &str, words: &[String]) -> Result<Vec<Hazard>, LibraryError> {
    words
        .iter()
        .map(|word| {
            Hazard::WORDS
                .iter()
                .find(|(known, _)| known == word)
                .map(|(_, hazard)| *hazard)
                .ok_or_else(|| LibraryError::Word {
                    name: name.to_owned(),
                    word: word.clone(),
                })
        })
        .collect()
}

fn figure(name: &str, text: &str) -> Result<Decimal, LibraryError> {
    Decimal::parse(text).map_err(|_error| LibraryError::Figure {
        name: name.to_owned(),
        text: text.to_owned(),
    })
}

fn optional(name: &str, text: Option<&str>) -> Result<Option<Decimal>, LibraryError> {
    text.map(|text| figure(name, text)).transpose()
}

fn basis(name: &str, word: Option<&str>, own: bool) -> Result<Basis, LibraryError> {
    match word {
        None if own => Ok(Basis::Stated),
        None => Ok(Basis::Recalled),
        Some(word) => Basis::from_word(word).ok_or_else(|| LibraryError::Word {
            name: name.to_owned(),
            word: word.to_owned(),
        }),
    }
}
