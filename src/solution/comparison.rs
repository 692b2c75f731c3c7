//! A reading against the computed value, and which input would have to be wrong by how much.

use crate::equilibrium::{Solver, Total};
use crate::problem::MeasuredReading;
use crate::quantity::{Decimal, Dimension, RoundingRule};
use crate::solution::answer::{Budget, Comparison, Explanation};
use crate::solution::assembly::{Assembly, Solved};
use crate::solution::assumption::Surroundings;
use crate::solution::conclusion::Bench;
use crate::solution::ph_budget;
use crate::solution::tape::VariableIndex;

/// Coverage factor of the uncertainty of a difference.
const COVERAGE_FACTOR: f64 = 2.0;

/// Explanations that are told, the smallest relative change first.
const MOST_EXPLANATIONS: usize = 6;

/// The comparison with the block's reading, if it has one.
pub(super) fn of(
    bench: &Bench<'_>,
    assembly: &Assembly,
    solved: &Solved,
    surroundings: &Surroundings,
) -> Option<Comparison> {
    let reading = bench.statement.measured.as_ref()?;
    let found = reading.ph.value().base();
    let difference = found - solved.certified.ph();
    let lines = ph_budget::contributions(bench, assembly, solved, surroundings);
    let computed = Budget::of(&lines, COVERAGE_FACTOR).standard;
    let read = reading.ph.measured.standard_uncertainty();
    let variance: f64 = [computed, read].iter().map(|u| u * u).sum();
    let expanded = COVERAGE_FACTOR * variance.sqrt();
    let agrees = difference.abs() <= expanded;
    Some(Comparison {
        reading: reading.ph.measured.to_string(),
        difference,
        expanded,
        agrees,
        acceptance: reading
            .limit
            .as_ref()
            .map(|limit| (accepted(reading, limit), limit.written.clone())),
        explanations: if agrees {
            Vec::new()
        } else {
            explanations(assembly, solved, found)
        },
        remarks: remarks(bench, reading, surroundings),
    })
}

/// Whether a reading is inside its limit, the limit included; decided on decimals as written.
fn accepted(reading: &MeasuredReading, limit: &crate::problem::AcceptanceLimit) -> bool {
    // 1e-9: half a unit of the last digit of any meter is far above, rounding of doubles far below.
    (reading.ph.value().base() - limit.nominal.base()).abs() <= limit.half_width.base() + 1e-9
}

/// Which stated input, alone and by how much wrong, would make the computed pH the one read.
pub(super) fn explanations(assembly: &Assembly, solved: &Solved, target: f64) -> Vec<Explanation> {
    let (gradient, _) = assembly.gradient(solved);
    let mut list: Vec<Explanation> = Vec::new();
    for (place, variable) in assembly.recipe.variables.iter().enumerate() {
        let by = gradient.get(place).copied().unwrap_or(0.0);
        let Some(input) = variable.input.clone().filter(|_| by.abs() > 0.0) else {
            continue;
        };
        let value = variable.value.to_f64();
        let index = assembly.recipe.tape.index_of(place);
        let needed = needed_value(assembly, index, value, target);
        list.push(Explanation {
            input,
            stated: variable.written.clone(),
            needed: needed.map(|needed| needed / variable.base_per_unit),
            relative_change: needed
                .filter(|_| value.abs() > 0.0)
                .map(|needed| needed / value - 1.0),
        });
    }
    let size =
        |explanation: &Explanation| explanation.relative_change.map_or(f64::INFINITY, f64::abs);
    list.sort_by(|a, b| size(a).total_cmp(&size(b)));
    list.truncate(MOST_EXPLANATIONS);
    list
}

/// The value between nothing and three times itself at which the pH is the target, by bisection on its logarithm's sign change.
fn needed_value(assembly: &Assembly, index: VariableIndex, value: f64, target: f64) -> Option<f64> {
    const STEPS: [f64; 9] = [0.001, 0.3, 0.7, 0.9, 1.0, 1.1, 1.4, 2.0, 3.0];
    let mut solver = Solver::new(&assembly.system);
    let mut values = assembly.stated();
    let mut off = |at: f64| -> Option<f64> {
        if let Some(place) = values.get_mut(index.place()) {
            *place = Total::from_f64(at);
        }
        Some(assembly.ph(&mut solver, &values, None).ok()?.0 - target)
    };
    let points: Vec<(f64, f64)> = STEPS
        .iter()
        .filter_map(|step| Some((step * value, off(step * value)?)))
        .collect();
    let brackets = points.windows(2).filter_map(|pair| match pair {
        [(a, at_a), (b, at_b)] if at_a.signum() * at_b.signum() <= 0.0 => Some((*a, *b, *at_a)),
        _ => None,
    });
    let (mut lower, mut upper, at_lower) = brackets.min_by(|a, b| {
        let distance = |(lower, upper, _): &(f64, f64, f64)| (0.5 * (lower + upper) - value).abs();
        distance(a).total_cmp(&distance(b))
    })?;
    for _ in 0..60 {
        let middle = 0.5 * (lower + upper);
        if off(middle)?.signum() * at_lower.signum() > 0.0 {
            lower = middle;
        } else {
            upper = middle;
        }
    }
    Some(0.5 * (lower + upper))
}

fn remarks(
    bench: &Bench<'_>,
    reading: &MeasuredReading,
    surroundings: &Surroundings,
) -> Vec<String> {
    let mut remarks = Vec::new();
    let shown = |value: f64, places: u8| RoundingRule::HalfEven.to_places(value, places);
    let block = &bench.statement.conditions.temperature.value;
    if let Some(temperature) = &reading.temperature {
        let apart = temperature.value().base() - block.value().base();
        if apart.abs() > 0.05 {
            remarks.push(format!(
                "Read at {}, computed at {}: {} pH by temperature.",
                temperature.measured,
                block.measured,
                shown(apart * surroundings.ph_per_kelvin, 3)
            ));
        }
    }
    let (mut standards, mut slope) = (Vec::new(), None);
    for entry in &reading.calibration {
        let Some(figure) = last_figure(entry) else {
            continue;
        };
        if entry.contains("slope") {
            slope = Some(figure);
        } else {
            standards.push(figure);
        }
    }
    let ph = reading.ph.value().base();
    let lowest = standards.iter().copied().min_by(f64::total_cmp);
    let highest = standards.iter().copied().max_by(f64::total_cmp);
    if let Some((lowest, highest)) = lowest.zip(highest) {
        if standards.len() < 2 {
            remarks.push("One calibration standard only: the slope was not tested.".to_owned());
        } else if !(lowest..=highest).contains(&ph) {
            remarks.push(format!(
                "The reading lies outside the calibration standards, {} to {}.",
                shown(lowest, 3),
                shown(highest, 3)
            ));
        }
    }
    if let Some(slope) = slope.filter(|slope| !(95.0..=102.0).contains(slope)) {
        remarks.push(format!(
            "The slope of {} % is outside 95 to 102 % (common practice).",
            shown(slope, 1)
        ));
    }
    remarks
}

/// The last number in a text: `phthalate 4.005`, `slope 99.1 %`.
fn last_figure(text: &str) -> Option<f64> {
    text.split_whitespace()
        .rev()
        .find_map(|word| Decimal::parse(word.trim_end_matches('%')).ok())
        .map(Decimal::to_f64)
}

#[cfg(test)]
mod tests {
    use crate::problem::MeasuredReading;
    use crate::quantity::Unit;
    use crate::solution::solve;
    use crate::solution::specimen::{input, molar, speciation};

    #[test]
    fn a_reading_is_explained_by_the_input_that_was_wrong() {
        let truth = solve(&speciation(
            molar(&[("acetic acid", "0.0500"), ("sodium acetate", "0.0600")]),
            "25",
        ));
        let read = format!("{:.6}", truth.unwrap().state.ph);
        let mut statement = speciation(
            molar(&[("acetic acid", "0.0500"), ("sodium acetate", "0.0500")]),
            "25",
        );
        statement.measured = Some(MeasuredReading {
            ph: input("measured / pH", &read, Unit::One),
            temperature: None,
            calibration: vec!["phthalate 4.005".to_owned(), "slope 92 %".to_owned()],
            limit: None,
        });
        let comparison = solve(&statement).unwrap().comparison.unwrap();
        assert!(!comparison.agrees);
        let needed: Vec<f64> = comparison
            .explanations
            .iter()
            .filter(|explanation| explanation.input.as_str() == "sodium acetate")
            .filter_map(|explanation| explanation.needed)
            .collect();
        // The reading was written with six decimals.
        assert!((needed[0] - 0.0600).abs() < 1e-6, "{needed:?}");
        assert_eq!(comparison.remarks.len(), 2);
    }
}
