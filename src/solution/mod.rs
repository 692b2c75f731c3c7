//! Problem to answer, with budget, shortcuts and assumptions.
//!
//! [`solve`] turns what was stated into totals of components, has them solved, and works out what the task asks for. Every pH in an answer
//! comes from a certified equilibrium. Knows no Markdown, no text positions, no files; its only randomness is a named generator with a stated
//! seed.

mod adjustment;
pub mod answer;
mod assembly;
mod assumption;
mod budget;
mod buffer_suggestion;
mod carbon_dioxide;
mod caution;
mod comparison;
mod composition;
mod conclusion;
mod dissociation;
mod distribution;
mod hand;
mod mixing;
mod model_choice;
mod polyborate;
mod preparation;
mod recipe;
mod search;
mod shortcut;
mod simulation;
mod source;
mod speciation;
#[cfg(test)]
mod specimen;
mod tape;
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
        Problem::Titration(_) => Err(Unsolvable::Fit {
            reason: String::new(),
        }),
    }
}
