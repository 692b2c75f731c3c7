//! Text of a fence to a statement and its source map.
//!
//! [`read`] takes a block's text and gives the [`Statement`](crate::problem::Statement) that it makes, with the place of every input, or
//! everything that is wrong with it at once. Places are those of the block's text; whoever took it out of a page turns them into the page's.
//! This module computes nothing but unit conversions, and reads no file: what a block refers to comes in through [`Context`].

mod adjustment;
mod amount;
mod certificate;
mod charge;
mod choice;
mod conditions;
mod constant_entry;
mod constants;
mod content_amount;
mod contents;
mod context;
mod defaults;
mod figure;
mod fit;
mod inner_keys;
mod item;
mod keys;
mod label;
mod mixing;
mod origin;
mod outline;
mod piece;
mod pk_value;
mod preparation;
mod range;
mod reader;
mod readings;
mod remarks;
mod replicates;
mod source;
mod spread;
mod stock;
mod task;
mod titration;
#[cfg(test)]
mod trial;

pub use constants::constants;
pub use context::{Attachments, Context, SolutionError, Solutions};
pub use defaults::Defaults;
pub use inner_keys::{INNER_KEYS, InnerKey};
pub use keys::{KEYS, KeyEntry};
pub use outline::{Outline, outline};
pub use reader::{Places, Reading, read};
