//! Places in a text, and what is wrong there.
//!
//! A [`Span`] is a range of bytes; a [`LineIndex`] turns it into lines and columns for people; an [`Excerpt`] is a
//! text that was taken out of a page piece by piece and remembers where each piece stood. A [`Diagnostic`] says
//! which [`Rule`] is broken, where, what was expected and what was probably meant: data only, drawn elsewhere.
//!
//! This module refuses to know what a page, a block or an amount is, and prints nothing.

mod diagnostic;
mod excerpt;
mod line_index;
mod nearest;
mod rule;
mod span;

pub use diagnostic::{Diagnostic, Label, Severity};
pub use excerpt::{Excerpt, ExcerptBuilder};
pub use line_index::{LineColumn, LineIndex};
pub use nearest::{Suggestion, nearest};
pub use rule::Rule;
pub use span::Span;
