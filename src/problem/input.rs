//! A stable name for every input, so that errors, budgets and source maps speak of the same thing.

use crate::quantity::{Dimension, Measured};
use std::fmt;

/// The name of one input of a block, as a path of the keys that lead to it: `contents / malonic acid / concentration`.
///
/// Two inputs are the same physical quantity exactly if their identities are equal; a quantity that flows in from
/// another block carries that block's label in front, so that a budget can see that it entered twice.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct InputId(String);

impl InputId {
    /// The identity of a top-level key.
    pub fn new(key: &str) -> Self {
        Self(key.to_owned())
    }

    /// The identity of `key` below this one.
    #[must_use]
    pub fn within(&self, key: &str) -> Self {
        Self(format!("{} / {key}", self.0))
    }

    /// The identity with its last part, a place in a list, followed by a name: `contents / 1 sodium chloride`.
    #[must_use]
    pub fn renamed(&self, name: &str) -> Self {
        Self(format!("{} {name}", self.0))
    }

    /// This key beside another: the top-level key itself beside `contents`, and `sample / volume` beside `sample`.
    #[must_use]
    pub fn in_same_place(&self, other: &Self) -> Self {
        if other.0 == "contents" {
            self.clone()
        } else {
            other.within(&self.0)
        }
    }

    /// The identity as seen from another block that uses the solution `reference`.
    #[must_use]
    pub fn seen_from(&self, reference: &str) -> Self {
        Self(format!("{reference} : {}", self.0))
    }

    /// The identity as seen from another page: a block that is named without a page is one of `page`.
    #[must_use]
    pub(super) fn on_page(&self, page: &str) -> Self {
        match self.0.split_once(" : ") {
            Some((block, _)) if !block.contains('#') => Self(format!("{page}#{}", self.0)),
            _ => self.clone(),
        }
    }

    /// The path, for people and machines alike.
    pub fn as_str(&self) -> &str {
        &self.0
    }
}

impl fmt::Display for InputId {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.0)
    }
}

/// One stated quantity with its identity.
#[derive(Clone, Debug, PartialEq)]
pub struct Input<D: Dimension> {
    /// Which input this is.
    pub id: InputId,
    /// The value as written, with unit and uncertainty. For replicates: their mean, with the standard deviation of the
    /// mean and its degrees of freedom.
    pub measured: Measured<D>,
    /// The single readings where replicates were given, else empty.
    pub replicates: Vec<Measured<D>>,
}

impl<D: Dimension> Input<D> {
    /// A single stated quantity.
    pub fn new(id: InputId, measured: Measured<D>) -> Self {
        Self {
            id,
            measured,
            replicates: Vec::new(),
        }
    }

    /// The value in its dimension.
    pub fn value(&self) -> D {
        self.measured.value()
    }
}
