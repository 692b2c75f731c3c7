//! The state of one solution.

use crate::problem::Composition;

/// pH, species and derived figures of one solution.
#[derive(Clone, Debug, PartialEq)]
pub struct Speciation {
    /// The solution.
    pub composition: Composition,
}
