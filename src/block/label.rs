//! The block's label.

use crate::block::reader::Reader;
use crate::problem::Label;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::Keys;

/// The value of `label` with its place.
pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<(Label, Span)> {
    let Some(node) = keys.take("label") else {
        if !keys.whole().is_partial() {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::MissingLabel,
                    keys.whole().heading(),
                    "the block has no label",
                )
                .expecting("`label: a-name`, in lower-case letters, digits and hyphens"),
            );
        }
        return None;
    };
    let scalar = node.as_text(&mut reader.diagnostics)?;
    match Label::new(scalar.text()) {
        Ok(label) => Some((label, scalar.span())),
        Err(error) => {
            reader.diagnostics.push(
                Diagnostic::error(Rule::BadLabel, scalar.span(), error.to_string())
                    .helped(format!("write `label: {}`", suggested_label(scalar.text()))),
            );
            None
        }
    }
}

/// A label that would be accepted, made of what was written.
fn suggested_label(text: &str) -> String {
    let mut label = String::new();
    for c in text.chars().flat_map(char::to_lowercase) {
        if c.is_ascii_lowercase() || c.is_ascii_digit() {
            label.push(c);
        } else if !label.is_empty() && !label.ends_with('-') {
            label.push('-');
        }
        if label.len() >= Label::LONGEST {
            break;
        }
    }
    let label = label.trim_end_matches('-');
    if label.is_empty() {
        "a-name".to_owned()
    } else {
        label.to_owned()
    }
}
