//! The uncertainty budget: exact sensitivities, standard uncertainties, and their sum in squares.
//!
//! Source: JCGM 100:2008, 5.1.2 (law of propagation) and G.4.1 (Welch-Satterthwaite); recalled.

use crate::equilibrium::ActivityModel;
use crate::problem::InputId;
use crate::quantity::{Spread, Unit};
use crate::solution::Unsolvable;
use crate::solution::answer::{Budget, BudgetLine};
use crate::solution::dose::InputFacts;
use crate::solution::solved::Solved;
use crate::solution::tableau::Variation;
use std::collections::BTreeMap;

/// Coverage factor of the expanded uncertainty: about 95 % (common practice).
const K: f64 = 2.0;

/// One contribution to a combined uncertainty, of whatever quantity.
#[derive(Clone, Debug)]
pub struct Contribution {
    /// What it is, for people.
    pub what: String,
    /// The input, where it is one.
    pub input: Option<InputId>,
    /// Value as written.
    pub value: String,
    /// Standard uncertainty in `unit`.
    pub standard: f64,
    /// Unit of value and uncertainty.
    pub unit: String,
    /// Derivative of the result by this quantity, in units of the result by `unit`.
    pub sensitivity: f64,
    /// Degrees of freedom, where given.
    pub degrees_of_freedom: Option<f64>,
    /// Where the uncertainty comes from.
    pub origin: String,
}

/// Combined standard uncertainty in the unit of the result, and effective degrees of freedom where any contribution has some.
pub fn combined(contributions: &[Contribution]) -> (f64, Option<f64>) {
    let part = |contribution: &Contribution| contribution.sensitivity * contribution.standard;
    let variance: f64 = contributions.iter().map(|c| part(c) * part(c)).sum();
    let denominator: f64 = contributions
        .iter()
        .filter_map(|c| Some(part(c) * part(c) * part(c) * part(c) / c.degrees_of_freedom?))
        .sum();
    let effective = (denominator > 0.0).then(|| variance * variance / denominator);
    (variance.sqrt(), effective)
}

/// The budget of contributions, largest share first.
pub(super) fn of(contributions: Vec<Contribution>) -> Budget {
    let (standard, effective_degrees_of_freedom) = combined(&contributions);
    let mut lines: Vec<BudgetLine> = contributions
        .into_iter()
        .map(|c| {
            let part = c.sensitivity * c.standard;
            BudgetLine {
                share: if standard > 0.0 {
                    part * part / (standard * standard)
                } else {
                    0.0
                },
                what: c.what,
                input: c.input,
                value: c.value,
                standard: c.standard,
                unit: c.unit,
                sensitivity: c.sensitivity,
                origin: c.origin,
            }
        })
        .collect();
    lines.sort_by(|a, b| {
        b.share
            .total_cmp(&a.share)
            .then_with(|| a.what.cmp(&b.what))
    });
    Budget {
        lines,
        standard,
        effective_degrees_of_freedom,
        k: K,
        expanded: K * standard,
    }
}

/// Everything that makes the pH of a solved liquid uncertain.
pub(super) fn contributions(solved: &Solved<'_>) -> Result<Vec<Contribution>, Unsolvable> {
    let sensitivities = solved.solution.sensitivities(&solved.tableau.system);
    let mut by_input: BTreeMap<&InputId, f64> = BTreeMap::new();
    for dose in &solved.doses.list {
        let by_ln =
            solved.ph_by_ln_dose(dose, &sensitivities.by_component, sensitivities.by_protons);
        for effect in &dose.effects {
            *by_input.entry(&effect.id).or_default() += by_ln * effect.relative;
        }
    }
    let mut found: Vec<Contribution> = by_input
        .into_iter()
        .filter_map(|(id, sensitivity)| {
            let facts = solved.doses.inputs.get(id)?;
            (facts.standard > 0.0).then(|| of_input(id, facts, sensitivity))
        })
        .collect();
    found.extend(of_constants(solved, &sensitivities.by_lg_beta));
    found.extend(of_temperature(solved)?);
    found.push(of_model(solved)?);
    Ok(found)
}

fn of_input(id: &InputId, facts: &InputFacts, by_base: f64) -> Contribution {
    // One unit as written is so many base units.
    let one = facts
        .unit
        .difference_to_base(crate::quantity::Decimal::whole(1));
    Contribution {
        what: id.to_string(),
        input: Some(id.clone()),
        value: facts.written.clone(),
        standard: facts.standard / one,
        unit: facts.unit.symbol().to_owned(),
        sensitivity: by_base * one,
        degrees_of_freedom: facts.degrees_of_freedom,
        origin: match facts.spread {
            Some(Spread::Triangular) => "tolerance, triangular",
            Some(Spread::Rectangular) => "rectangular",
            Some(Spread::Replicates) => "replicates",
            Some(Spread::Standard) if facts.unit == Unit::GramPerMole => "atomic weights",
            Some(Spread::Standard | Spread::Expanded { .. }) | None => "as stated",
        }
        .to_owned(),
    }
}

/// Published uncertainties of the constants, taken as standard uncertainties.
fn of_constants(solved: &Solved<'_>, by_lg_beta: &[f64]) -> Vec<Contribution> {
    let mut found = Vec::new();
    for place in &solved.tableau.ligands {
        for (index, step) in place.ligand.steps.iter().enumerate() {
            let Some(uncertainty) = step.preferred.uncertainty else {
                continue;
            };
            // pK of a step is part of lg beta of every state that has not yet lost the proton of that step.
            let sensitivity = place
                .species
                .iter()
                .take(index + 1)
                .filter_map(|species| by_lg_beta.get(species.place()))
                .sum();
            found.push(Contribution {
                what: format!("pK{} of {}", index + 1, place.ligand.name),
                input: None,
                value: step.preferred.pk.to_string(),
                standard: uncertainty.to_f64(),
                unit: String::new(),
                sensitivity,
                degrees_of_freedom: None,
                origin: "published with the constant, taken as a standard uncertainty".to_owned(),
            });
        }
    }
    found
}

/// The temperature, where its uncertainty is stated: by a difference of 0.1 K, for everything depends on it.
fn of_temperature(solved: &Solved<'_>) -> Result<Option<Contribution>, Unsolvable> {
    const STEP: f64 = 0.1;
    let input = &solved.conditions.temperature.value;
    let standard = input.measured.standard_uncertainty();
    if standard <= 0.0 {
        return Ok(None);
    }
    let t = solved.variation.temperature;
    let (low, high) = ((t - STEP).max(273.15), (t + STEP).min(373.15));
    let at = |temperature: f64| {
        solved.ph_with(Variation {
            temperature,
            ..solved.variation
        })
    };
    Ok(Some(Contribution {
        what: "temperature".to_owned(),
        input: Some(input.id.clone()),
        value: input.measured.to_string(),
        standard,
        unit: "K".to_owned(),
        sensitivity: (at(high)? - at(low)?) / (high - low),
        degrees_of_freedom: input.measured.degrees_of_freedom(),
        origin: "as stated".to_owned(),
    }))
}

/// The error of the activity model and of the constants' conventions together.
///
/// Up to 0.1 mol/kg: the root mean square distance from the primary pH standards that the program's tests measure, 0.008 at 25 °C and 0.010 from 0
/// to 50 °C. Above: at least that, and the distance of a second model.
fn of_model(solved: &Solved<'_>) -> Result<Contribution, Unsolvable> {
    let celsius = solved.variation.temperature - 273.15;
    let floor = if (celsius - 25.0).abs() < 0.5 {
        0.008
    } else {
        0.010
    };
    let second = solved.ph_with_model(second_model(solved.variation.model))?;
    let distance = (second - solved.solution.ph()).abs();
    let outside =
        solved.solution.ionic_strength() > 0.1 || solved.variation.model == ActivityModel::Ideal;
    let (standard, origin) = if outside && distance > floor {
        (distance, "distance of a second activity model")
    } else {
        (floor, "distance from primary pH standards")
    };
    Ok(Contribution {
        what: "activity model".to_owned(),
        input: None,
        value: solved.conditions.activity.value.name().to_owned(),
        standard,
        unit: "pH".to_owned(),
        sensitivity: 1.0,
        degrees_of_freedom: None,
        origin: origin.to_owned(),
    })
}

/// The model that another one is held against.
pub(super) fn second_model(model: ActivityModel) -> ActivityModel {
    match model {
        ActivityModel::Davies => ActivityModel::DebyeHueckel,
        _ => ActivityModel::Davies,
    }
}
