//! A YAML mapping with the place of every key and value.
//!
//! [`read`] turns a text into a tree of [`Node`]s, each with its [`Span`](crate::text::Span) in that text. Values stay
//! as they were written: `0.0500` is the text `0.0500`, `no` is the text `no`. Tags, anchors, aliases, merge keys,
//! second documents and duplicate keys are refused, and as many faults are reported at once as can be told apart.
//! [`Keys`] takes the known keys out of a mapping and reports the others with the nearest known one.
//!
//! This module refuses to know what any key means, and takes no value for a number.
//!
//! ```
//! use ionfolio::yaml::{Limits, read};
//!
//! let mut diagnostics = Vec::new();
//! let root = read("label: rb-118\nvolume: 0.500 L\n", Limits::BLOCK, &mut diagnostics).unwrap();
//! let mut keys = root.as_mapping(&mut diagnostics).unwrap().keys();
//! let volume = keys.required_text("volume", &mut diagnostics).unwrap();
//! assert_eq!(volume.text(), "0.500 L");
//! keys.finish(&mut diagnostics);
//! assert_eq!(diagnostics[0].message(), "`label` has no meaning here");
//! ```

mod builder;
mod fault;
mod keys;
mod node;
mod offsets;
mod tree;

pub use keys::Keys;
pub use node::{Entry, Mapping, Node, Scalar, Value};
pub use tree::{Limits, read};
