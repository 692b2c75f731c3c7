//! Taking the known keys out of a mapping.

use crate::{
    text::{Diagnostic, Rule},
    yaml::{Entry, Mapping, Node, Scalar},
};

/// Takes known keys out of a [`Mapping`], each by its exact name, and at the end reports every key that nobody asked
/// for, with the nearest of those that were.
///
/// Every key that the mapping can have must be asked for before [`finish`](Self::finish), whether it is needed or not.
#[derive(Debug)]
pub struct Keys<'m> {
    mapping: &'m Mapping,
    taken: Vec<bool>,
    known: Vec<&'static str>,
}

impl<'m> Keys<'m> {
    pub(super) fn of(mapping: &'m Mapping) -> Self {
        Self {
            mapping,
            taken: vec![false; mapping.entries().len()],
            known: Vec::new(),
        }
    }

    /// The value of a key, if the key is there; it may be [`Value::Empty`](crate::yaml::Value::Empty).
    pub fn take(&mut self, key: &'static str) -> Option<&'m Node> {
        self.take_entry(key).map(|entry| &entry.value)
    }

    /// Like [`take`](Self::take), with the key and its place.
    pub fn take_entry(&mut self, key: &'static str) -> Option<&'m Entry> {
        if !self.known.contains(&key) {
            self.known.push(key);
        }
        let mut entries = self.mapping.entries().iter().zip(&mut self.taken);
        let (entry, taken) = entries.find(|(entry, _)| entry.key.text() == key)?;
        *taken = true;
        Some(entry)
    }

    /// The value of a key that must be there; its absence is reported.
    pub fn required(
        &mut self,
        key: &'static str,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<&'m Node> {
        let found = self.take(key);
        if found.is_none() && !self.mapping.is_partial() {
            let message = format!("the key `{key}` is missing");
            diagnostics.push(
                Diagnostic::error(Rule::MissingKey, self.mapping.heading(), message)
                    .expecting(format!("`{key}: ...`"))
                    .labelled("needed here"),
            );
        }
        found
    }

    /// The text of a key, if the key is there; a value of another kind is reported.
    pub fn text(
        &mut self,
        key: &'static str,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<&'m Scalar> {
        self.take(key)?.as_text(diagnostics)
    }

    /// The text of a key that must be there; its absence and a value of another kind are reported.
    pub fn required_text(
        &mut self,
        key: &'static str,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<&'m Scalar> {
        self.required(key, diagnostics)?.as_text(diagnostics)
    }

    /// The mapping of a key, if the key is there; a value of another kind is reported.
    pub fn mapping(
        &mut self,
        key: &'static str,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<&'m Mapping> {
        self.take(key)?.as_mapping(diagnostics)
    }

    /// The mapping that is being read.
    pub fn whole(&self) -> &'m Mapping {
        self.mapping
    }

    /// Reports every key that was not asked for.
    pub fn finish(self, diagnostics: &mut Vec<Diagnostic>) {
        let left = self
            .mapping
            .entries()
            .iter()
            .zip(&self.taken)
            .filter(|(_, taken)| !**taken);
        for (entry, _) in left {
            let key = entry.key.text();
            let found = Diagnostic::error(
                Rule::UnknownKey,
                entry.key.span(),
                format!("`{key}` has no meaning here"),
            );
            let asked = self.known.iter().copied();
            diagnostics.push(
                found
                    .expecting(listed(&self.known))
                    .did_you_mean(key, asked),
            );
        }
    }
}

fn listed(names: &[&str]) -> String {
    match names {
        [] => "no key".to_owned(),
        [only] => format!("`{only}`"),
        _ => format!("one of `{}`", names.join("`, `")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::{
        text::Span,
        yaml::{Limits, read},
    };

    fn read_keys(
        text: &str,
        reader: impl Fn(&mut Keys<'_>, &mut Vec<Diagnostic>),
    ) -> Vec<Diagnostic> {
        let mut found = Vec::new();
        let root = read(text, Limits::BLOCK, &mut found).unwrap();
        let mut keys = root.as_mapping(&mut found).unwrap().keys();
        reader(&mut keys, &mut found);
        keys.finish(&mut found);
        found
    }

    #[test]
    fn an_unknown_key_is_reported_with_the_nearest_known_one() {
        let text = "label: a\ntemprature: 25 °C\n";
        let found = read_keys(text, |keys, _| {
            keys.take("label");
            keys.take("temperature");
        });
        assert_eq!(found.len(), 1);
        assert_eq!(found[0].span().of(text), Some("temprature"));
        assert_eq!(found[0].help(), Some("did you mean `temperature`?"));
        assert_eq!(found[0].expected(), Some("one of `label`, `temperature`"));
    }

    #[test]
    fn keys_hold_spaces_and_letters_of_either_case() {
        let found = read_keys(
            "measured pH: 8.31\nhand value:\n  by: x\n",
            |keys, found| {
                assert_eq!(keys.text("measured pH", found).unwrap().text(), "8.31");
                assert_eq!(
                    keys.mapping("hand value", found).unwrap().entries().len(),
                    1
                );
            },
        );
        assert_eq!(found, []);
    }

    #[test]
    fn a_missing_key_is_placed_at_the_key_that_lacks_it() {
        let text = "target:\n  volume: 2 L\n";
        let found = read_keys(text, |keys, found| {
            let mut target = keys.mapping("target", found).unwrap().keys();
            target.take("volume");
            target.required("pH", found);
        });
        assert_eq!(
            (found[0].rule(), found[0].span()),
            (Rule::MissingKey, Span::new(0, 6))
        );
    }

    #[test]
    fn a_key_on_a_line_that_could_not_be_read_is_not_called_missing() {
        let mut found = Vec::new();
        let root = read("label: a: b\ntask: mixing\n", Limits::BLOCK, &mut found).unwrap();
        let mut keys = root.as_mapping(&mut found).unwrap().keys();
        assert!(keys.required("label", &mut found).is_none());
        assert!(keys.required("task", &mut found).is_some());
        keys.finish(&mut found);
        assert_eq!(
            found.iter().map(Diagnostic::rule).collect::<Vec<_>>(),
            [Rule::YamlSyntax]
        );
    }
}
