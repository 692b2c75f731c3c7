//! A solution moved to a pH, or moved by an addition.

use crate::problem::{Composition, Input, Source, Taken};
use crate::quantity::{Number, Volume};

/// A solution and what is done to it.
#[derive(Clone, Debug, PartialEq)]
pub struct Adjustment {
    /// The solution at the start; it has a volume.
    pub start: Composition,
    /// The pH measured at the start, which may disagree with the composition.
    pub measured_ph: Option<Input<Number>>,
    /// What is added.
    pub with: Source,
    /// What undoes an overshoot, if stated.
    pub back_with: Option<Source>,
    /// What is asked.
    pub goal: AdjustmentGoal,
    /// Volume of one drop; 0.05 mL, common practice, where not stated.
    pub drop: Option<Input<Volume>>,
    /// Final volume to which the adjusted solution is made up, if stated.
    pub made_up_to: Option<Input<Volume>>,
}

/// What is asked of an adjustment.
#[derive(Clone, Debug, PartialEq)]
pub enum AdjustmentGoal {
    /// Reach a pH.
    Reach(Input<Number>),
    /// Tell the pH after an addition.
    Add(Taken),
}
