//! Answer to Markdown, SVG and JSON.
//!
//! [`render`] writes the answer as a page of a notebook, by a built-in [`Template`] or one that a laboratory puts in its place; [`json`] gives the
//! machine form with nothing rounded. What a template sees is a versioned contract of its own, so that an answer's types can change without
//! breaking a laboratory's templates. This module computes no chemistry, reads no files, and knows neither records nor pages: it only makes sure
//! that no answer holds a line that could be taken for part of either.

mod attachment;
mod escape;
mod figures;
mod headline;
mod json;
mod plot;
mod rendering;
#[cfg(test)]
mod sample;
#[cfg(test)]
mod solved;
mod template;
#[cfg(test)]
mod verification;
mod view;
mod working;

pub use attachment::Attachment;
pub use json::json;
pub use rendering::{DRAFT_NOTICE, Rendered, ReportError, render};
pub use template::{Template, TemplateError};
