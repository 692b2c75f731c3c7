//! What every task ends in: the state with its budget, assumptions and cautions.

use crate::problem::{Composition, Ingredient, InputId, Statement, UncertaintyMode};
use crate::solution::Unsolvable;
use crate::solution::answer::{Answer, Assumption, ConstantsUsed, ModelFacts, Outcome};
use crate::solution::assembly::{Assembly, CARBONIC_ACID, Setting};
use crate::solution::model_choice::{ChosenModel, choose, within_range};
use crate::solution::recipe::{Recipe, Writer};
use crate::solution::speciation::state;
use crate::solution::{
    assumption, carbon_dioxide, caution, comparison, distribution, ph_budget, polyborate, shortcut,
    simulation,
};
use crate::substance::Component;
use std::sync::Arc;

/// A statement with its model and setting: where its liquids are assembled.
#[derive(Debug)]
pub(super) struct Bench<'a> {
    pub(super) statement: &'a Statement,
    pub(super) chosen: ChosenModel,
    pub(super) setting: Setting,
}

/// What a task found: the liquid it ends in, assembled, and what it was asked besides.
#[derive(Debug)]
pub(super) struct Finding {
    pub(super) assembly: Assembly,
    pub(super) outcome: Outcome,
    pub(super) liquid: Composition,
    /// Assumptions of the task itself.
    pub(super) assumptions: Vec<Assumption>,
}

impl<'a> Bench<'a> {
    /// The bench of a statement.
    ///
    /// # Errors
    /// [`Unsolvable::ModelLacksCoefficients`].
    pub(super) fn of(statement: &'a Statement) -> Result<Self, Unsolvable> {
        let chosen = choose(&statement.conditions)?;
        let setting = Setting::of(&statement.conditions, chosen.model);
        Ok(Self {
            statement,
            chosen,
            setting,
        })
    }

    /// The assembly of a composition.
    ///
    /// # Errors
    /// [`Unsolvable`]; a charge that ions given alone leave is an error.
    pub(super) fn assemble(&self, composition: &Composition) -> Result<Assembly, Unsolvable> {
        let mut writer = Writer::new();
        let liquid = writer.liquid(composition)?;
        let recipe = Arc::new(writer.finish(&liquid));
        let assembly = Assembly::new(&recipe, &self.setting)?;
        charges_balance(&assembly, composition)?;
        Ok(assembly)
    }

    /// The answer from what a task found.
    ///
    /// # Errors
    /// [`Unsolvable`], also where the ionic strength is beyond the model.
    pub(super) fn conclude(&self, finding: Finding) -> Result<Answer, Unsolvable> {
        let Finding {
            assembly,
            outcome,
            liquid,
            assumptions,
        } = finding;
        let solved = assembly.solve(&assembly.stated())?;
        let state = state(&assembly, &solved);
        within_range(
            &self.chosen,
            &self.statement.conditions,
            state.ionic_strength,
        )?;
        let surroundings = assumption::Surroundings::of(self, &assembly, &solved)?;
        let budget = match self.statement.conditions.uncertainty.value {
            UncertaintyMode::None => None,
            UncertaintyMode::Budget | UncertaintyMode::Simulation { .. } => {
                Some(ph_budget::of(self, &assembly, &solved, &surroundings))
            }
        };
        let simulation = match self.statement.conditions.uncertainty.value {
            UncertaintyMode::Simulation { draws, seed } => {
                let added = ph_budget::added(self, &solved, &surroundings);
                Some(simulation::simulate(
                    &assembly, &solved, &added, draws, seed,
                )?)
            }
            UncertaintyMode::None | UncertaintyMode::Budget => None,
        };
        let (shortcuts, hand_value) = shortcut::tested(self, &assembly, &solved);
        let mut all = assumption::list(self, &assembly, &surroundings, &liquid)?;
        all.extend(assumptions);
        Ok(Answer {
            model: self.model_facts(&assembly),
            simulation,
            shortcuts,
            hand_value,
            comparison: comparison::of(self, &assembly, &solved, &surroundings),
            budget,
            distribution: distribution::over_ph(&assembly, &solved, &state),
            constants: ConstantsUsed {
                water: self.statement.conditions.pkw.clone(),
                ..constants(&assembly)
            },
            assumptions: all,
            cautions: caution::list(self, &assembly, &state, &surroundings, &liquid),
            liquid,
            outcome,
            state,
        })
    }

    fn model_facts(&self, assembly: &Assembly) -> ModelFacts {
        let water = assembly.system.water();
        ModelFacts {
            activity: self.chosen.choice,
            choice: self.chosen.reason.clone(),
            debye_hueckel_a: water.debye_hueckel_a,
            debye_hueckel_b: water.debye_hueckel_b,
            pkw: water.pkw,
            temperature_c: water.temperature - 273.15,
            density: assembly.density,
            permittivity: water.permittivity,
        }
    }
}

/// Largest charge that ions given alone may leave, relative to theirs: rounding in the last of double-double's 30 digits is far below.
const CHARGE_TOLERANCE: f64 = 1e-9;

fn charges_balance(assembly: &Assembly, composition: &Composition) -> Result<(), Unsolvable> {
    let recipe: &Recipe = &assembly.recipe;
    let worked = recipe.tape.evaluate(&assembly.stated());
    let charge = worked.at(recipe.charge).to_f64();
    let terms = worked.at(recipe.charge_terms).to_f64();
    if charge.abs() <= CHARGE_TOLERANCE * terms {
        return Ok(());
    }
    Err(Unsolvable::ChargeLeft {
        charge,
        input: charged_input(composition).unwrap_or_else(|| InputId::new("contents")),
    })
}

fn charged_input(composition: &Composition) -> Option<InputId> {
    composition
        .ingredients
        .iter()
        .find_map(|ingredient| match ingredient {
            Ingredient::Substance(content) => {
                (content.form.charge != 0).then(|| content.id.clone())
            }
            Ingredient::Solution(portion) => charged_input(&portion.composition),
            Ingredient::Water(_) => None,
        })
}

/// The constants that an assembly was computed with.
fn constants(assembly: &Assembly) -> ConstantsUsed {
    let mut used = ConstantsUsed {
        forms: assembly.recipe.forms.clone(),
        ..ConstantsUsed::default()
    };
    for part in &assembly.parts {
        match &part.component {
            Component::Ligand(ligand) => used.ligands.push(Arc::clone(ligand)),
            Component::Ion(ion) => used.ions.push(Arc::clone(ion)),
        }
        if part.held && part.component.name() == CARBONIC_ACID {
            used.further.push(carbon_dioxide::SOURCE.to_owned());
        }
    }
    if assembly.species.iter().any(|row| row.nuclearity > 1) {
        used.further.push(polyborate::SOURCE.to_owned());
    }
    used.pk_at_temperature = assembly
        .pks
        .iter()
        .map(|pk| (pk.ligand.name.clone(), pk.step + 1, pk.found.value))
        .collect();
    used
}
