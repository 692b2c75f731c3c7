//! `entry`: a new page from a template.

use crate::notebook::{ReplaceError, create};
use std::path::Path;

/// The templates that come with the program: name, what it is for, text.
pub const TEMPLATES: [(&str, &str, &str); 6] = [
    (
        "blank",
        "an empty page with one block",
        include_str!("../../entry_templates/blank.md"),
    ),
    (
        "solution-preparation",
        "a solution made up from weighed substances",
        include_str!("../../entry_templates/solution-preparation.md"),
    ),
    (
        "received-lot",
        "pH check of a received lot",
        include_str!("../../entry_templates/received-lot.md"),
    ),
    (
        "mobile-phase",
        "buffer for a column, aqueous part of a mobile phase",
        include_str!("../../entry_templates/mobile-phase.md"),
    ),
    (
        "standard-titration",
        "titration of a standard: before, and at the equivalence point",
        include_str!("../../entry_templates/standard-titration.md"),
    ),
    (
        "calculation-review",
        "a calculation reviewed",
        include_str!("../../entry_templates/calculation-review.md"),
    ),
];

/// Why there is no new page.
#[derive(Debug, thiserror::Error)]
pub enum EntryError {
    /// There is no such template.
    #[error("there is no template {name:?}; there are {known}")]
    Unknown {
        /// What was asked for.
        name: String,
        /// The names that there are.
        known: String,
    },
    /// The page was not written.
    #[error("{0}")]
    Replace(#[from] ReplaceError),
}

/// Writes a new page; one that is there already is left alone.
///
/// # Errors
/// [`EntryError`].
pub fn new_page(path: &Path, template: &str) -> Result<(), EntryError> {
    let Some((_, _, text)) = TEMPLATES.iter().find(|(name, ..)| *name == template) else {
        let names: Vec<&str> = TEMPLATES.iter().map(|(name, ..)| *name).collect();
        return Err(EntryError::Unknown {
            name: template.to_owned(),
            known: names.join(", "),
        });
    };
    Ok(create(path, text.as_bytes())?)
}
