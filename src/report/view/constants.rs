//! The constants of an answer as templates see them.

use crate::quantity::Decimal;
use crate::solution::answer::ConstantsUsed;
use crate::substance::{self, Constant, Kind};
use serde::Serialize;

/// The constants that were used.
#[derive(Debug, Serialize)]
pub(in crate::report) struct ConstantsView {
    /// One for each dissociation step.
    steps: Vec<StepView>,
    /// Further constants that entered, each with its source.
    further: Vec<String>,
    /// The content of the fenced `constants` block that ends the answer, ending in a line feed; print it with `safe`.
    pub(in crate::report) written: String,
}

/// One dissociation step.
#[derive(Debug, Serialize)]
struct StepView {
    ligand: String,
    /// From 1; 0 for water.
    step: usize,
    /// As the source prints it.
    pk: String,
    /// Standard uncertainty as the source prints it.
    uncertainty: Option<String>,
    /// pK at the temperature of the block.
    pk_at_temperature: Option<f64>,
    /// Kind and conditions: `25 °C, zero ionic strength`.
    conditions: String,
    source: String,
    locator: Option<String>,
    /// `read`, `recalled` or `stated`.
    basis: &'static str,
    note: Option<String>,
}

impl ConstantsView {
    /// The constants used, with the user's own pKw where one was stated.
    pub(super) fn of(water: Option<&Constant>, used: &ConstantsUsed) -> Self {
        let mut steps: Vec<StepView> = water
            .iter()
            .map(|water| StepView::of("water", 0, water, None))
            .collect();
        for ligand in &used.ligands {
            for (index, step) in ligand.steps.iter().enumerate() {
                let number = index + 1;
                let here = used
                    .pk_at_temperature
                    .iter()
                    .find(|(name, step, _)| *name == ligand.name && *step == number)
                    .map(|(_, _, pk)| *pk);
                steps.push(StepView::of(&ligand.name, number, &step.preferred, here));
            }
        }
        Self {
            steps,
            further: used.further.clone(),
            written: substance::written(water, &used.ligands, &used.ions, &used.forms),
        }
    }
}

impl StepView {
    fn of(ligand: &str, step: usize, constant: &Constant, here: Option<f64>) -> Self {
        Self {
            ligand: ligand.to_owned(),
            step,
            pk: shown(constant.pk),
            uncertainty: constant.uncertainty.map(shown),
            pk_at_temperature: here,
            conditions: conditions(constant),
            source: constant.source.clone(),
            locator: constant.locator.clone(),
            basis: constant.basis.word(),
            note: constant.note.clone(),
        }
    }
}

fn conditions(constant: &Constant) -> String {
    let temperature = format!("{} °C", shown(constant.temperature_c));
    match &constant.kind {
        Kind::Thermodynamic => format!("{temperature}, zero ionic strength"),
        Kind::Conditional {
            ionic_strength,
            medium,
        } => match medium {
            Some(medium) => format!("{temperature}, I = {ionic_strength} mol/kg ({medium})"),
            None => format!("{temperature}, I = {ionic_strength} mol/kg"),
        },
        Kind::Unstated => format!("{temperature}, ionic strength not stated"),
    }
}

fn shown(decimal: Decimal) -> String {
    decimal.to_string().replace('-', "−")
}
