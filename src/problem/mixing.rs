//! Portions of solutions and water, and serial dilution.

use crate::problem::{Composition, Input};
use crate::quantity::Volume;

/// Portions poured together, and what is diluted from them.
#[derive(Clone, Debug, PartialEq)]
pub struct Mixing {
    /// The portions; `made_up` tells whether they are added or filled up to a volume.
    pub mixture: Composition,
    /// A serial dilution of the mixture, if asked for.
    pub series: Option<DilutionSeries>,
}

/// A serial dilution: `taken` of each solution is made up to `made_up_to` for the next.
#[derive(Clone, Debug, PartialEq)]
pub struct DilutionSeries {
    /// Volume carried over at each step.
    pub taken: Input<Volume>,
    /// Volume to which it is made up with water.
    pub made_up_to: Input<Volume>,
    /// Number of dilution steps.
    pub steps: u32,
}
