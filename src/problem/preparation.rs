//! A buffer to be made: the target, and what it is made from.

use crate::problem::{Corrections, Input, InputId, SolutionPortion, Strength, Trace};
use crate::quantity::{AmountConcentration, Mass, Number, Temperature, Volume};
use crate::substance::Form;
use std::sync::Arc;

/// A buffer to be made.
#[derive(Clone, Debug, PartialEq)]
pub struct Preparation {
    /// What is wanted.
    pub target: PreparationTarget,
    /// What it is made from.
    pub buffer: BufferChoice,
    /// What balance, pipette and flask can do.
    pub readability: Readability,
    /// What was really weighed or pipetted, once it has been.
    pub weighed: Vec<Weighed>,
}

/// What is wanted of a buffer.
#[derive(Clone, Debug, PartialEq)]
pub struct PreparationTarget {
    /// pH at the temperature of use.
    pub ph: Input<Number>,
    /// Final volume.
    pub volume: Input<Volume>,
    /// Total analytical concentration of the buffering family.
    pub concentration: Input<AmountConcentration>,
    /// Ionic strength to be reached with an inert salt.
    pub ionic_strength: Option<IonicStrengthTarget>,
    /// Temperature of use where it differs from that of preparation.
    pub temperature_of_use: Option<Input<Temperature>>,
}

/// An ionic strength to be reached with an inert salt.
#[derive(Clone, Debug, PartialEq)]
pub struct IonicStrengthTarget {
    /// The ionic strength, on the amount concentration scale.
    pub value: Input<AmountConcentration>,
    /// The salt.
    pub salt: Arc<Form>,
}

/// Which buffer is made.
#[derive(Clone, Debug, PartialEq)]
pub enum BufferChoice {
    /// From the listed sources.
    From(Vec<Source>),
    /// To be suggested from the library.
    Suggest {
        /// Substances or families to be avoided, as written.
        avoid: Vec<String>,
    },
}

/// Something a buffer is made from.
#[derive(Clone, Debug, PartialEq)]
pub struct Source {
    /// The path of this item.
    pub id: InputId,
    /// How it is supplied.
    pub kind: SourceKind,
    /// Where it came from.
    pub trace: Trace,
}

/// How a source is supplied.
#[derive(Clone, Debug, PartialEq)]
pub enum SourceKind {
    /// A solid, weighed.
    Solid {
        /// What is weighed.
        form: Arc<Form>,
        /// Purity and moisture.
        corrections: Corrections,
    },
    /// A stock of one substance, pipetted.
    Stock {
        /// What is dissolved in it.
        form: Arc<Form>,
        /// Its strength.
        strength: Strength,
        /// Titre.
        corrections: Corrections,
    },
    /// A solution of another block; its volume is what is sought and the stated one is ignored.
    Solution(SolutionPortion),
}

/// What balance, pipette and flask can do.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Readability {
    /// Smallest step of the balance.
    pub balance: Option<Input<Mass>>,
    /// Smallest step of the pipette or burette.
    pub pipette: Option<Input<Volume>>,
    /// The flask in which it is made up, with its tolerance.
    pub flask: Option<Input<Volume>>,
}

/// What was really taken of one source.
#[derive(Clone, Debug, PartialEq)]
pub struct Weighed {
    /// Index of the source in the list, or of the inert salt (one past the last).
    pub source: usize,
    /// How much was taken.
    pub taken: crate::problem::Taken,
}
