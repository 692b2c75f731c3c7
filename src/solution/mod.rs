//! Problem to answer, with budget, shortcuts and assumptions.
//!
//! [`solve`] turns what was stated into totals of components, has them solved, and works out what the task asks for. It knows no Markdown, no
//! text positions, no files; its only randomness is a named generator with a stated seed.

pub mod answer;
mod assumption;
mod budget;
mod caution;
mod comparison;
mod dose;
mod gas;
mod shortcut;
mod simulation;
mod solved;
mod speciation;
mod state;
mod tableau;

use crate::problem::{Problem, Statement};
use crate::solution::answer::Answer;

pub use budget::{Contribution, combined};

/// Why a statement has no answer.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum Unsolvable {
    /// The temperature is outside the range of liquid water.
    #[error("the temperature is outside 0 °C to 100 °C")]
    Temperature,
    /// A volume is needed and none is stated.
    #[error("a volume is needed and none is stated")]
    NoVolume,
    /// A mass of something without formula says no amount.
    #[error("{substance} has no formula, so a mass of it says no amount")]
    NoMolarMass {
        /// The substance.
        substance: String,
    },
    /// A model lacks its coefficients.
    #[error("the model {model} has no complete set of coefficients for these ions; use davies")]
    NoCoefficients {
        /// The model.
        model: &'static str,
    },
    /// The model is far outside its range and nobody accepted that.
    #[error(
        "the ionic strength is {ionic_strength:.2} mol/kg, where {model} is far outside its range; state `accept: model outside its range` to \
         have the figure all the same"
    )]
    ModelRange {
        /// The model.
        model: &'static str,
        /// Ionic strength in mol/kg.
        ionic_strength: f64,
    },
    /// A stock is stated as more than the solution can hold, or the like.
    #[error("{0}")]
    Tableau(crate::equilibrium::TableauError),
    /// The equations were not solved.
    #[error("the equations were not solved: {0}")]
    Unsolved(crate::equilibrium::Unsolved),
    /// A target cannot be reached.
    #[error("pH {target:.2} cannot be reached; from {lowest:.2} to {highest:.2} can")]
    Unreachable {
        /// The target.
        target: f64,
        /// Lowest pH that can be reached.
        lowest: f64,
        /// Highest pH that can be reached.
        highest: f64,
    },
    /// The task is not one that can be worked out with what was stated.
    #[error("{what}")]
    Unsuitable {
        /// What does not fit, in a sentence part.
        what: &'static str,
    },
}

/// Works out what a statement asks.
///
/// # Errors
/// [`Unsolvable`]: no answer is given that does not carry a valid certificate.
pub fn solve(statement: &Statement) -> Result<Answer, Unsolvable> {
    match &statement.problem {
        Problem::Speciation(task) => speciation::solve(statement, &task.composition),
        Problem::Mixing(_)
        | Problem::Preparation(_)
        | Problem::Adjustment(_)
        | Problem::Titration(_) => Err(Unsolvable::Unsuitable {
            what: "this task is not computed by this version",
        }),
    }
}
