//! A recipe with its tableau: what is solved, again and again, with other values.

use crate::equilibrium::{
    ActivityModel, Certified, ComponentIndex, Sensitivities, Solver, SpeciesIndex, Start, System,
    Total, Totals, Water,
};
use crate::problem::Conditions;
use crate::quantity::Dimension;
use crate::solution::Unsolvable;
use crate::solution::carbon_dioxide;
use crate::solution::dissociation::FoundPk;
use crate::solution::draft::{Draft, SpeciesDraft};
use crate::solution::polyborate;
use crate::solution::recipe::Recipe;
use crate::solution::tape::{Node, Worked};
use crate::substance::{Component, Ligand};
use std::sync::Arc;

/// Temperature, model, air and pKw under which a recipe is assembled.
#[derive(Clone, Debug)]
pub(super) struct Setting {
    /// Temperature in K.
    pub(super) temperature: f64,
    /// Activity model.
    pub(super) model: ActivityModel,
    /// Partial pressure of CO₂ in atm that the solution is in equilibrium with; closed to air where there is none.
    pub(super) carbon_dioxide: Option<f64>,
    /// The acid family of dissolved carbon dioxide, where the statement names it.
    pub(super) carbonate: Option<Arc<Ligand>>,
    /// The user's own pKw at zero ionic strength, at the temperature of the block.
    pub(super) own_pkw: Option<f64>,
}

impl Setting {
    /// The setting of a block's conditions with a model.
    pub(super) fn of(conditions: &Conditions, model: ActivityModel) -> Self {
        let temperature = conditions.temperature.value.value().base();
        Self {
            temperature,
            model,
            carbon_dioxide: carbon_dioxide::pressure(&conditions.air.value),
            carbonate: conditions.carbonate.clone(),
            own_pkw: conditions
                .pkw
                .as_ref()
                .map(|constant| super::dissociation::at_temperature(constant, temperature).0),
        }
    }

    /// The same at another temperature in K.
    pub(super) fn at(&self, temperature: f64) -> Self {
        Self {
            temperature,
            ..self.clone()
        }
    }

    /// The same with another model.
    pub(super) fn with_model(&self, model: ActivityModel) -> Self {
        Self {
            model,
            ..self.clone()
        }
    }

    /// The same in equilibrium with CO₂ at a partial pressure in atm, or closed to air.
    pub(super) fn with_carbon_dioxide(&self, pressure: Option<f64>) -> Self {
        Self {
            carbon_dioxide: pressure,
            ..self.clone()
        }
    }

    fn water(&self) -> Result<Water, Unsolvable> {
        let water = Water::at(self.temperature)?;
        Ok(match self.own_pkw {
            Some(pkw) => water.with_pkw(pkw),
            None => water,
        })
    }
}

/// One component in the tableau.
#[derive(Clone, Debug)]
pub(super) struct Part {
    /// The component.
    pub(super) component: Component,
    /// Its place in the tableau.
    pub(super) index: ComponentIndex,
    /// Its analytical concentration in mol/L; `None` where only the air brings it.
    pub(super) concentration: Option<Node>,
    /// Whether the air holds one of its species.
    pub(super) held: bool,
}

/// One species in the tableau.
#[derive(Clone, Debug)]
pub(super) struct SpeciesRow {
    /// Its place in the tableau.
    pub(super) index: SpeciesIndex,
    /// Name as printed.
    pub(super) name: String,
    /// Place of its component among the parts.
    pub(super) part: usize,
    /// Formula units of the component in it.
    pub(super) nuclearity: u8,
    /// Protons above the component.
    pub(super) protons: i8,
    /// Charge in elementary charges.
    pub(super) charge: i8,
}

/// One pK in the tableau.
#[derive(Clone, Debug)]
pub(super) struct PkRow {
    /// The ligand.
    pub(super) ligand: Arc<Ligand>,
    /// The step, from 0.
    pub(super) step: usize,
    /// Its value as computed with.
    pub(super) found: FoundPk,
    /// Species whose lg beta has it, and how often.
    pub(super) effects: Vec<(SpeciesIndex, f64)>,
}

/// A recipe with its tableau.
#[derive(Clone, Debug)]
pub(super) struct Assembly {
    pub(super) recipe: Arc<Recipe>,
    pub(super) setting: Setting,
    pub(super) system: System,
    pub(super) parts: Vec<Part>,
    pub(super) species: Vec<SpeciesRow>,
    pub(super) pks: Vec<PkRow>,
    /// Density of water in kg/L.
    pub(super) density: f64,
    /// Species whose lg beta has pKw in it, and how often.
    pub(super) pkw_effects: Vec<(SpeciesIndex, f64)>,
}

/// A solution of an assembly at some values.
#[derive(Clone, Debug)]
pub(super) struct Solved {
    pub(super) worked: Worked<Total>,
    pub(super) certified: Certified,
}

impl Assembly {
    /// Builds the tableau of a recipe.
    ///
    /// # Errors
    /// [`Unsolvable`] for a temperature or a tableau that cannot be computed with.
    pub(super) fn new(recipe: &Arc<Recipe>, setting: &Setting) -> Result<Self, Unsolvable> {
        let water = setting.water()?;
        let mut draft = Draft::new(water, setting.model);
        for entry in &recipe.components {
            draft.put(&entry.component, Some(entry.concentration));
        }
        if let Some(pressure) = setting.carbon_dioxide {
            draft.hold_carbon_dioxide(pressure, setting.carbonate.as_ref())?;
        }
        let polyborates = polyborate::add(&mut draft.builder, &draft.parts, &draft.pks, &water);
        let Draft {
            builder,
            parts,
            species,
            pks,
            ..
        } = draft;
        let system = builder.build()?;
        let mut assembly = Self {
            recipe: Arc::clone(recipe),
            setting: setting.clone(),
            density: water.density / 1000.0,
            system,
            parts,
            species: Vec::new(),
            pks,
            pkw_effects: Vec::new(),
        };
        assembly.name_species(species);
        assembly.append(polyborates);
        assembly.link_constants();
        Ok(assembly)
    }

    /// The same recipe under another setting.
    ///
    /// # Errors
    /// As [`Assembly::new`].
    pub(super) fn under(&self, setting: &Setting) -> Result<Self, Unsolvable> {
        Self::new(&self.recipe, setting)
    }

    fn name_species(&mut self, drafts: Vec<Vec<SpeciesDraft>>) {
        for (part, drafts) in drafts.into_iter().enumerate() {
            let Some(index) = self.parts.get(part).map(|part| part.index) else {
                continue;
            };
            for (index, draft) in self.system.species_of(index).zip(drafts) {
                self.species.push(SpeciesRow {
                    index,
                    name: draft.name,
                    part,
                    nuclearity: 1,
                    protons: draft.protons,
                    charge: draft.charge,
                });
            }
        }
    }

    fn append(&mut self, polyborates: Vec<polyborate::Polyborate>) {
        let indices: Vec<SpeciesIndex> = self.system.polynuclear_species().collect();
        for (index, species) in indices.into_iter().zip(polyborates) {
            self.pkw_effects.push((index, species.pkw_multiple()));
            self.species.push(SpeciesRow {
                index,
                name: species.name.to_owned(),
                part: species.part,
                nuclearity: species.boron,
                protons: species.protons(),
                charge: species.charge,
            });
        }
    }

    /// Each pK counts in the species that have kept its proton; in a polyborate once for each boron.
    fn link_constants(&mut self) {
        for pk in &mut self.pks {
            let steps = pk.ligand.steps.len();
            let own = self.species.iter().filter(|row| {
                self.parts
                    .get(row.part)
                    .is_some_and(|part| part.component.name() == pk.ligand.name)
            });
            pk.effects = own
                .filter_map(|row| {
                    let kept = usize::try_from(row.protons).unwrap_or(0);
                    let counts = row.nuclearity > 1 || kept >= steps - pk.step;
                    counts.then(|| (row.index, f64::from(row.nuclearity)))
                })
                .collect();
        }
    }

    /// The same tableau with other pK: `pk` gives the value for each row.
    pub(super) fn with_pks(&self, pk: impl Fn(&PkRow) -> f64) -> System {
        let mut system = self.system.clone();
        for row in &self.pks {
            let change = pk(row) - row.found.value;
            for (species, count) in &row.effects {
                system.set_lg_beta(*species, system.lg_beta(*species) + count * change);
            }
        }
        system
    }

    /// pH at the stated values in another tableau of the same shape.
    ///
    /// # Errors
    /// [`Unsolvable::Uncertified`].
    pub(super) fn ph_in(&self, system: &System) -> Result<f64, Unsolvable> {
        let worked = self.recipe.tape.evaluate(&self.stated());
        Ok(Solver::new(system).ph(&self.totals(&worked), None)?.0)
    }

    /// The totals at worked values.
    pub(super) fn totals(&self, worked: &Worked<Total>) -> Totals {
        let density = worked.at(self.recipe.density);
        let mut totals = Totals::none(&self.system);
        for part in &self.parts {
            if let Some(node) = part.concentration {
                totals.set(part.index, worked.at(node) / density);
            }
        }
        totals.set_protons(worked.at(self.recipe.protons) / density);
        totals
    }

    /// The stated values under this setting.
    pub(super) fn stated(&self) -> Vec<Total> {
        self.recipe.stated(self.density)
    }

    /// The certified solution at values of the variables.
    ///
    /// # Errors
    /// [`Unsolvable::Uncertified`].
    pub(super) fn solve(&self, values: &[Total]) -> Result<Solved, Unsolvable> {
        let worked = self.recipe.tape.evaluate(values);
        let totals = self.totals(&worked);
        let certified = Solver::new(&self.system).solve(&totals, None)?;
        Ok(Solved { worked, certified })
    }

    /// pH at values of the variables, by a solver that is used again.
    ///
    /// # Errors
    /// [`Unsolvable::Uncertified`].
    pub(super) fn ph(
        &self,
        solver: &mut Solver<'_>,
        values: &[Total],
        start: Option<Start>,
    ) -> Result<(f64, Start), Unsolvable> {
        let worked = self.recipe.tape.evaluate(values);
        Ok(solver.ph(&self.totals(&worked), start)?)
    }

    /// pH at the stated values.
    ///
    /// # Errors
    /// [`Unsolvable::Uncertified`].
    pub(super) fn stated_ph(&self) -> Result<f64, Unsolvable> {
        Ok(self.solve(&self.stated())?.certified.ph())
    }

    /// Derivative of pH with respect to each variable in base units, and the sensitivities that it comes from.
    pub(super) fn gradient(&self, solved: &Solved) -> (Vec<f64>, Sensitivities) {
        let sensitivities = solved.certified.sensitivities(&self.system);
        let density = solved.worked.at(self.recipe.density).to_f64();
        let mut weights: Vec<(Node, f64)> = self
            .parts
            .iter()
            .zip(&sensitivities.by_component)
            .filter_map(|(part, by)| Some((part.concentration?, by / density)))
            .collect();
        weights.push((self.recipe.protons, sensitivities.by_protons / density));
        let mut gradient = self.recipe.tape.gradient(&solved.worked, &weights);
        if let Some(by_density) = gradient.first_mut() {
            // molality = concentration / density: the division itself.
            let direct: f64 = weights
                .iter()
                .map(|(node, weight)| weight * solved.worked.at(*node).to_f64())
                .sum();
            *by_density -= direct / density;
        }
        (gradient, sensitivities)
    }

    /// Derivative of pH with respect to a pK.
    pub(super) fn by_pk(pk: &PkRow, sensitivities: &Sensitivities) -> f64 {
        pk.effects
            .iter()
            .map(|(species, count)| {
                let by = sensitivities.by_lg_beta.get(species.place());
                count * by.copied().unwrap_or(0.0)
            })
            .sum()
    }
}

/// The name of the ligand that carbon dioxide belongs to.
pub(super) const CARBONIC_ACID: &str = "carbonic acid";
