//! Stated assumptions, each with what it costs in pH where that can be computed.

use crate::equilibrium::ActivityModel;
use crate::problem::{Air, Origin};
use crate::solution::Unsolvable;
use crate::solution::answer::Assumption;
use crate::solution::budget::second_model;
use crate::solution::solved::Solved;
use crate::solution::tableau::Variation;

/// Carbon dioxide of ordinary air, as a fraction (common practice: about 420 ppm outdoors).
const ORDINARY_AIR: &str = "CO2 420 ppm";

/// All assumptions of a solved liquid.
pub(super) fn all(solved: &Solved<'_>) -> Result<Vec<Assumption>, Unsolvable> {
    let mut found = vec![activity(solved)?];
    if solved.variation.model != ActivityModel::Ideal {
        found.push(unit_coefficients(solved)?);
    }
    found.push(temperature(solved)?);
    found.push(scale(solved)?);
    found.push(air(solved));
    found.extend(ion_sizes(solved));
    found.extend(defaults(solved));
    Ok(found)
}

fn priced(statement: String, alternative: &str, ph: f64, solved: &Solved<'_>) -> Assumption {
    Assumption {
        statement,
        alternative: Some((alternative.to_owned(), ph)),
        cost: Some(ph - solved.solution.ph()),
    }
}

fn activity(solved: &Solved<'_>) -> Result<Assumption, Unsolvable> {
    let second = second_model(solved.variation.model);
    let name = match second {
        ActivityModel::DebyeHueckel => "debye-hueckel",
        _ => "davies",
    };
    let ph = solved.ph_with_model(second)?;
    let asked = solved.conditions.activity.value.name();
    Ok(priced(
        format!("Activity coefficients after the model {asked}."),
        name,
        ph,
        solved,
    ))
}

fn unit_coefficients(solved: &Solved<'_>) -> Result<Assumption, Unsolvable> {
    let ph = solved.ph_with_model(ActivityModel::Ideal)?;
    Ok(priced(
        "Activity coefficients are not neglected.".to_owned(),
        "activity coefficients of 1",
        ph,
        solved,
    ))
}

fn temperature(solved: &Solved<'_>) -> Result<Assumption, Unsolvable> {
    let t = solved.variation.temperature;
    let other = if t + 1.0 <= 373.15 { t + 1.0 } else { t - 1.0 };
    let ph = solved.ph_with(Variation {
        temperature: other,
        ..solved.variation
    })?;
    Ok(priced(
        format!("The solution is at {:.2} °C throughout.", t - 273.15),
        if other > t {
            "1 °C warmer"
        } else {
            "1 °C colder"
        },
        ph,
        solved,
    ))
}

/// Molality from amount concentration by the density of water: what 1 % more or less water means.
fn scale(solved: &Solved<'_>) -> Result<Assumption, Unsolvable> {
    let sensitivities = solved.solution.sensitivities(&solved.tableau.system);
    let by_ln: f64 = solved
        .doses
        .list
        .iter()
        .map(|dose| {
            solved.ph_by_ln_dose(dose, &sensitivities.by_component, sensitivities.by_protons)
        })
        .sum();
    let share = displaced(solved);
    Ok(Assumption {
        statement: format!(
            "A litre of the solution holds as much water as a litre of water ({:.4} kg); the solutes take up roughly {:.1} % of it.",
            solved.tableau.density,
            100.0 * share
        ),
        alternative: Some((
            "that much less water".to_owned(),
            solved.solution.ph() + by_ln * share,
        )),
        cost: Some(by_ln * share),
    })
}

/// Rough share of the volume that solutes take up: 30 cm³ for each mole of dissolved formula units (common practice for an order of magnitude).
fn displaced(solved: &Solved<'_>) -> f64 {
    let moles: f64 = solved
        .doses
        .list
        .iter()
        .map(|dose| dose.molality.to_f64())
        .sum();
    0.030 * moles
}

fn air(solved: &Solved<'_>) -> Assumption {
    match &solved.conditions.air.value {
        Air::Closed => Assumption {
            statement: "Nothing is exchanged with the air.".to_owned(),
            alternative: None,
            cost: None,
        },
        Air::CarbonDioxide(_) | Air::CarbonDioxideFraction(_) => Assumption {
            statement: format!(
                "The solution has come to equilibrium with carbon dioxide of the air as stated (ordinary air: {ORDINARY_AIR})."
            ),
            alternative: None,
            cost: None,
        },
    }
}

fn ion_sizes(solved: &Solved<'_>) -> Option<Assumption> {
    if solved.variation.model != ActivityModel::DebyeHueckel {
        return None;
    }
    let mut missing: Vec<&str> = Vec::new();
    for place in &solved.tableau.ligands {
        for (state, name) in place.ligand.states.iter().enumerate() {
            let sized = place
                .ligand
                .ion_sizes
                .get(state)
                .copied()
                .flatten()
                .is_some();
            if !sized && place.ligand.state_charge(state) != 0 {
                missing.push(name);
            }
        }
    }
    missing.extend(
        solved
            .tableau
            .ions
            .iter()
            .filter(|place| place.ion.ion_size.is_none())
            .map(|place| place.ion.symbol.as_str()),
    );
    (!missing.is_empty()).then(|| Assumption {
        statement: format!("Ion size 0.4 nm assumed for {}.", missing.join(", ")),
        alternative: None,
        cost: None,
    })
}

/// What the block did not state.
fn defaults(solved: &Solved<'_>) -> Vec<Assumption> {
    let conditions = solved.conditions;
    let origins = [
        ("temperature", conditions.temperature.origin),
        ("activity model", conditions.activity.origin),
        ("air", conditions.air.origin),
    ];
    let from = |origin: Origin| {
        let names: Vec<&str> = origins
            .iter()
            .filter(|(_, o)| *o == origin)
            .map(|(name, _)| *name)
            .collect();
        names.join(", ")
    };
    let mut found = Vec::new();
    for (origin, source) in [
        (Origin::Notebook, "the notebook's settings"),
        (Origin::Program, "the program's defaults"),
    ] {
        let names = from(origin);
        if !names.is_empty() {
            found.push(Assumption {
                statement: format!("Not stated in the block, taken from {source}: {names}."),
                alternative: None,
                cost: None,
            });
        }
    }
    found
}
