//! Computes a case with the program's own path from block to answer.

use crate::case::Case;
use ionfolio::block::{self, Attachments, Context, Defaults, SolutionError, Solutions};
use ionfolio::problem::{Composition, SolutionReference};
use ionfolio::solution;
use ionfolio::solution::answer::Answer;
use ionfolio::substance::Catalogue;
use libtest_mimic::Failed;
use std::sync::Arc;

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

/// Reads and solves a block that stands alone.
pub(crate) fn answer(content: &str) -> Result<Answer, Failed> {
    let catalogue = Catalogue::embedded().map_err(|error| Failed::from(error.to_string()))?;
    let context = Context {
        catalogue,
        defaults: &Defaults::program(),
        solutions: &Alone,
        attachments: &Alone,
    };
    let reading = block::read(content, &context);
    let Some(statement) = reading.statement else {
        let faults: Vec<String> = reading
            .diagnostics
            .iter()
            .map(|fault| format!("{}: {}", fault.rule().name(), fault.message()))
            .collect();
        return Err(format!("the block is not read:\n{}\n{content}", faults.join("\n")).into());
    };
    solution::solve(&statement).map_err(|error| Failed::from(error.to_string()))
}

/// A block with nothing around it.
#[derive(Debug)]
struct Alone;

impl Solutions for Alone {
    fn solution(&self, _reference: &SolutionReference) -> Result<Arc<Composition>, SolutionError> {
        Err(SolutionError::Unknown { labels: Vec::new() })
    }
}

impl Attachments for Alone {
    fn read(&self, _path: &str) -> Result<Vec<u8>, String> {
        Err("there are no files".to_owned())
    }
}
