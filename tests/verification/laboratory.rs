//! Computes a case with the program's own path from block to answer.

use crate::case::Case;
use ionfolio::solution::answer::Answer;
use libtest_mimic::Failed;

/// The value that the program finds for the quantity of a case.
pub(crate) fn found(case: &Case) -> Result<f64, Failed> {
    let answer = answer(&case.block)?;
    let state = &answer.state;
    let molality = |name: &str| {
        state
            .species
            .iter()
            .find(|species| species.name == name)
            .map(|species| species.molality)
            .ok_or_else(|| Failed::from(format!("no species {name}")))
    };
    match case.quantity.as_str() {
        "pH" => Ok(state.ph),
        "hydrogen ion" => molality("H⁺"),
        "hydroxide ion" => molality("OH⁻"),
        "percent dissociated" => dissociated(&answer),
        other => Err(format!("unknown quantity {other}").into()),
    }
}

/// Percentage of the first ligand that gave up its first proton; for a base, that took one up.
fn dissociated(answer: &Answer) -> Result<f64, Failed> {
    let step = answer
        .state
        .dissociation
        .first()
        .ok_or_else(|| Failed::from("no dissociation step"))?;
    Ok(100.0 * step.degree)
}
