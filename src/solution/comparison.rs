//! A reading against the computed value, and what could explain a difference.

use crate::problem::MeasuredReading;
use crate::quantity::Dimension;
use crate::solution::answer::{Comparison, Explanation};
use crate::solution::solved::Solved;

/// Largest relative change of an input that still counts as an explanation.
const LARGEST_CHANGE: f64 = 0.5;

/// Standard uncertainty in pH of a reading that states none: two-point calibration of a common meter (common practice).
const USUAL_READING: f64 = 0.02;

/// Compares a reading with the computed pH and its standard uncertainty.
pub(super) fn of(
    reading: &MeasuredReading,
    solved: &Solved<'_>,
    ph: f64,
    standard: f64,
) -> Comparison {
    let value = reading.ph.value().base();
    let stated = reading.ph.measured.standard_uncertainty();
    let reading_standard = if stated > 0.0 { stated } else { USUAL_READING };
    let difference = value - ph;
    let expanded = 2.0 * (standard * standard + reading_standard * reading_standard).sqrt();
    let acceptance = reading.limit.as_ref().map(|limit| {
        // The written limits themselves are within; a reading is compared as written, to rounding of the double.
        let inside = (value - limit.nominal.base()).abs() <= limit.half_width.base() + 1e-9;
        (inside, limit.written.clone())
    });
    Comparison {
        reading: reading.ph.measured.to_string(),
        difference,
        expanded,
        agrees: difference.abs() <= expanded,
        acceptance,
        explanations: explanations(solved, difference),
        remarks: remarks(reading, solved, value, stated),
    }
}

/// Which input would have to be wrong by how much, the smallest change first.
pub(super) fn explanations(solved: &Solved<'_>, difference: f64) -> Vec<Explanation> {
    let sensitivities = solved.solution.sensitivities(&solved.tableau.system);
    let mut found: Vec<Explanation> = Vec::new();
    for (id, facts) in &solved.doses.inputs {
        let by_input: f64 = solved
            .doses
            .list
            .iter()
            .map(|dose| {
                let by_ln = solved.ph_by_ln_dose(
                    dose,
                    &sensitivities.by_component,
                    sensitivities.by_protons,
                );
                let relative: f64 = dose
                    .effects
                    .iter()
                    .filter(|effect| effect.id == *id)
                    .map(|effect| effect.relative)
                    .sum();
                by_ln * relative
            })
            .sum();
        let change = difference / by_input;
        let relative = change / facts.value;
        let explains = relative.is_finite()
            && relative.abs() <= LARGEST_CHANGE
            && !id.as_str().starts_with("molar mass");
        if explains {
            found.push(Explanation {
                input: id.clone(),
                stated: facts.written.clone(),
                needed: Some(facts.unit.from_base(facts.value + change)),
                relative_change: Some(relative),
            });
        }
    }
    let size =
        |explanation: &Explanation| explanation.relative_change.map_or(f64::INFINITY, f64::abs);
    found.sort_by(|a, b| size(a).total_cmp(&size(b)));
    found
}

fn remarks(reading: &MeasuredReading, solved: &Solved<'_>, value: f64, stated: f64) -> Vec<String> {
    let mut remarks = Vec::new();
    if stated <= 0.0 {
        remarks.push(format!("The reading states no uncertainty; a standard uncertainty of {USUAL_READING} is taken (common practice)."));
    }
    if let Some(temperature) = &reading.temperature {
        let off = temperature.value().celsius() - (solved.variation.temperature - 273.15);
        if off.abs() > 0.5 {
            remarks.push(format!(
                "The reading was taken {off:+.1} °C from the temperature that is computed for."
            ));
        }
    }
    let standards: Vec<f64> = reading
        .calibration
        .iter()
        .filter_map(|text| calibration_ph(text))
        .collect();
    let low = standards.iter().copied().fold(f64::INFINITY, f64::min);
    let high = standards.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    if standards.len() >= 2 && !(low..=high).contains(&value) {
        remarks.push(format!(
            "The reading lies outside the calibration standards, pH {low} to {high}."
        ));
    }
    if standards.len() == 1 {
        remarks.push(
            "The meter was calibrated with one standard only; its slope is not tested.".to_owned(),
        );
    }
    for text in &reading.calibration {
        if let Some(slope) = slope_percent(text)
            && !(95.0..=102.0).contains(&slope)
        {
            remarks.push(format!(
                "The electrode's slope of {slope} % is outside 95 % to 102 % (common practice)."
            ));
        }
    }
    remarks
}

/// `phthalate 4.005` is pH 4.005.
fn calibration_ph(text: &str) -> Option<f64> {
    if text.contains('%') {
        return None;
    }
    text.split_whitespace().last()?.parse().ok()
}

/// `slope 99.1 %` is 99.1.
fn slope_percent(text: &str) -> Option<f64> {
    text.trim()
        .strip_prefix("slope")?
        .trim()
        .strip_suffix('%')?
        .trim()
        .parse()
        .ok()
}
