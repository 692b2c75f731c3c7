//! Problem to answer, with budget, shortcuts and assumptions.
//!
//! [`solve`] turns what was stated into totals of components, has them solved, and works out what the task asks for. Every pH in an answer
//! comes from a certified equilibrium. Knows no Markdown, no text positions, no files; its only randomness is a named generator with a stated
//! seed.

mod adjustment;
mod adjustment_start;
pub mod answer;
mod approach;
mod assembly;
mod assumption;
mod budget;
mod buffer_suggestion;
mod burette;
mod carbon_dioxide;
mod caution;
mod comparison;
mod composition;
mod conclusion;
mod dissociation;
mod distribution;
mod draft;
mod end_point;
mod equivalence;
mod fit;
mod fit_parameter;
mod hand;
mod hand_verdict;
mod indicator;
mod mixing;
mod model_choice;
mod outcome;
mod ph_budget;
mod polyborate;
mod preparation;
mod readings;
mod recipe;
mod residual;
mod search;
mod shortcut;
mod simulation;
mod source;
mod speciation;
#[cfg(test)]
mod specimen;
mod tape;
mod titration;
mod unsolvable;

pub use budget::Contribution;
pub use caution::{CAUTIONS, CautionEntry};
pub use unsolvable::Unsolvable;

use crate::problem::{Problem, Statement};
use crate::solution::answer::Answer;

/// The answer to a statement, in the units that the fields of [`Answer`] name; nothing in it is rounded.
///
/// # Errors
/// [`Unsolvable`] where something is missing or out of range, where a target cannot be reached, and where no certified solution was found.
pub fn solve(statement: &Statement) -> Result<Answer, Unsolvable> {
    let bench = conclusion::Bench::of(statement)?;
    match &statement.problem {
        Problem::Speciation(task) => mixing::solution(&bench, &task.composition),
        Problem::Mixing(task) => mixing::mixture(&bench, task),
        Problem::Preparation(task) => preparation::prepared(&bench, task),
        Problem::Adjustment(task) => adjustment::adjusted(&bench, task),
        Problem::Titration(task) => titration::titrated(&bench, task),
    }
}
