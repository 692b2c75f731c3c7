//! A first glance at a block: its label and what it refers to, before anything is looked up.

use crate::problem::SolutionReference;
use crate::yaml::{self, Limits, Node, Value};

/// What a block refers to.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Outline {
    /// The label as written, if there is one.
    pub label: Option<String>,
    /// Other blocks whose solutions it uses.
    pub references: Vec<SolutionReference>,
    /// Files that it reads, by their paths relative to the page.
    pub attachments: Vec<String>,
}

/// Glances at a block; what cannot be read is passed over.
pub fn outline(content: &str) -> Outline {
    let mut unheard = Vec::new();
    let mut outline = Outline::default();
    let Some(root) = yaml::read(content, Limits::BLOCK, &mut unheard) else {
        return outline;
    };
    if let Value::Mapping(mapping) = &root.value {
        for entry in mapping.entries() {
            let Value::Text(scalar) = &entry.value.value else {
                continue;
            };
            match entry.key.text() {
                "label" => outline.label = Some(scalar.text().to_owned()),
                "readings" | "constants" => outline.attachments.push(scalar.text().to_owned()),
                _ => {}
            }
        }
    }
    gather(&root, &mut outline.references);
    outline
}

/// `label` or `page.md#label`.
pub(super) fn reference(text: &str) -> SolutionReference {
    match text.split_once('#') {
        Some((page, label)) => SolutionReference {
            page: Some(page.trim().to_owned()).filter(|page| !page.is_empty()),
            label: label.trim().to_owned(),
        },
        None => SolutionReference {
            page: None,
            label: text.trim().to_owned(),
        },
    }
}

fn gather(node: &Node, references: &mut Vec<SolutionReference>) {
    match &node.value {
        Value::List(items) => items.iter().for_each(|item| gather(item, references)),
        Value::Mapping(mapping) => {
            for entry in mapping.entries() {
                match (entry.key.text(), &entry.value.value) {
                    ("solution", Value::Text(scalar)) => references.push(reference(scalar.text())),
                    _ => gather(&entry.value, references),
                }
            }
        }
        Value::Empty | Value::Text(_) | Value::Refused => {}
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn references_are_found_wherever_they_stand() {
        let outline = outline(
            "label: a\nreadings: r.csv\nportions:\n  - volume: 1 L\n    solution: stocks/x.md#b\n  - {volume: 1 L, solution: c}\n",
        );
        assert_eq!(outline.label.as_deref(), Some("a"));
        assert_eq!(outline.attachments, ["r.csv"]);
        assert_eq!(
            outline.references,
            [reference("stocks/x.md#b"), reference("c")]
        );
    }
}
