//! `entry`: a new page from a template.

use crate::notebook::{ReplaceError, create};
use std::path::Path;

/// The templates that come with the program: name, what it is for, text.
pub const TEMPLATES: [(&str, &str, &str); 11] = [
    (
        "blank",
        "an empty page with one block",
        include_str!("../../entry_templates/blank.md"),
    ),
    (
        "speciation",
        "the state of one solution",
        include_str!("../../entry_templates/speciation.md"),
    ),
    (
        "solution-preparation",
        "a solution made up from weighed substances and stocks",
        include_str!("../../entry_templates/solution-preparation.md"),
    ),
    (
        "received-lot",
        "pH check of a received lot",
        include_str!("../../entry_templates/received-lot.md"),
    ),
    (
        "mobile-phase",
        "buffer for a column, before any organic solvent",
        include_str!("../../entry_templates/mobile-phase.md"),
    ),
    (
        "standard-titration",
        "titration of a weighed standard, with readings",
        include_str!("../../entry_templates/standard-titration.md"),
    ),
    (
        "calculation-review",
        "a calculation worked by hand, reviewed",
        include_str!("../../entry_templates/calculation-review.md"),
    ),
    (
        "preparation",
        "a buffer from two forms, with its weighings",
        include_str!("../../entry_templates/preparation.md"),
    ),
    (
        "adjustment",
        "a solution moved to a pH",
        include_str!("../../entry_templates/adjustment.md"),
    ),
    (
        "mixing",
        "portions poured together, and a serial dilution",
        include_str!("../../entry_templates/mixing.md"),
    ),
    (
        "titration",
        "a titration curve before it is run",
        include_str!("../../entry_templates/titration.md"),
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
