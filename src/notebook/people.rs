//! `people.yaml`: printed names and roles of signers.

use crate::text::{Diagnostic, Rule};
use crate::yaml::{self, Limits};
use std::collections::BTreeMap;

/// One person.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Person {
    /// Printed name.
    pub name: String,
    /// Roles, as the laboratory calls them.
    pub roles: Vec<String>,
}

/// All people by their signer names.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct People(BTreeMap<String, Person>);

impl People {
    /// Reads the file's text.
    pub fn read(text: &str, diagnostics: &mut Vec<Diagnostic>) -> Self {
        let mut people = BTreeMap::new();
        let root = yaml::read(text, Limits::FILE, diagnostics);
        let Some(mapping) = root.as_ref().and_then(|root| root.as_mapping(diagnostics)) else {
            return Self::default();
        };
        for entry in mapping.entries() {
            let Some(inner) = entry.value.as_mapping(diagnostics) else {
                continue;
            };
            let mut keys = inner.keys();
            let name = keys
                .required_text("name", diagnostics)
                .map(|scalar| scalar.text().to_owned());
            let roles = keys.take("roles").map_or_else(Vec::new, |node| {
                node.items()
                    .iter()
                    .filter_map(|item| {
                        item.as_text(diagnostics)
                            .map(|scalar| scalar.text().to_owned())
                    })
                    .collect()
            });
            keys.finish(diagnostics);
            match name {
                Some(name) => {
                    people.insert(entry.key.text().to_owned(), Person { name, roles });
                }
                None => diagnostics.push(Diagnostic::note(
                    Rule::BadSetting,
                    entry.key.span(),
                    "this person is passed over",
                )),
            }
        }
        Self(people)
    }

    /// The person behind a signer's name.
    pub fn of(&self, signer: &str) -> Option<&Person> {
        self.0.get(signer)
    }

    /// Everybody, by signer name.
    pub fn all(&self) -> impl Iterator<Item = (&str, &Person)> {
        self.0
            .iter()
            .map(|(signer, person)| (signer.as_str(), person))
    }

    /// The file's text for these people and one more, or one changed.
    #[must_use]
    pub fn with(&self, signer: &str, person: &Person) -> String {
        let mut people = self.0.clone();
        people.insert(signer.to_owned(), person.clone());
        let mut text = String::from("# Printed names and roles of signers.\n");
        for (signer, person) in people {
            text.extend([signer.as_str(), ":\n  name: ", &quoted(&person.name), "\n"]);
            if !person.roles.is_empty() {
                let roles: Vec<String> = person.roles.iter().map(|role| quoted(role)).collect();
                text.extend(["  roles: [", &roles.join(", "), "]\n"]);
            }
        }
        text
    }
}

fn quoted(text: &str) -> String {
    format!("\"{}\"", text.replace('\\', "\\\\").replace('"', "\\\""))
}
