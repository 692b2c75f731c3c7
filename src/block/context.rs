//! What a block may refer to, passed in.

use crate::block::Defaults;
use crate::problem::{Composition, SolutionReference};
use crate::substance::Catalogue;
use std::sync::Arc;

/// Everything outside the block's text that its meaning depends on.
#[derive(Clone, Copy, Debug)]
pub struct Context<'a> {
    /// The constants library, with the laboratory's own constants.
    pub catalogue: &'a Catalogue,
    /// The notebook's defaults.
    pub defaults: &'a Defaults,
    /// The solutions of other blocks.
    pub solutions: &'a dyn Solutions,
    /// Files beside the page.
    pub attachments: &'a dyn Attachments,
}

/// Finds the solutions of other blocks.
pub trait Solutions: std::fmt::Debug {
    /// What the named block's solution is made of.
    ///
    /// # Errors
    /// [`SolutionError`] where there is no such block, or it cannot be used.
    fn solution(&self, reference: &SolutionReference) -> Result<Arc<Composition>, SolutionError>;
}

/// Why another block's solution cannot be used.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum SolutionError {
    /// There is no block of that label.
    #[error("there is no block of that label")]
    Unknown {
        /// The labels that there are.
        labels: Vec<String>,
    },
    /// The page cannot be read.
    #[error("its page cannot be read: {reason}")]
    Page {
        /// Why.
        reason: String,
    },
    /// It is made from the block that wants to use it.
    #[error("it is itself made from this block")]
    Circular,
    /// It has errors of its own.
    #[error("that block has errors of its own")]
    Faulty,
}

/// Reads files beside the page.
pub trait Attachments: std::fmt::Debug {
    /// The bytes of a file, by its path relative to the page.
    ///
    /// # Errors
    /// A sentence part that says why not: `there is no such file`, `it lies outside the notebook`.
    fn read(&self, path: &str) -> Result<Vec<u8>, String>;
}
