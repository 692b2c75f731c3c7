//! The tree of a YAML text: texts, lists and mappings, each with its place.

use crate::{
    text::{Diagnostic, Rule, Span},
    yaml::{Keys, fault::colon_without_space},
};

/// A value with its place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Node {
    /// The bytes of the text that it stands on. Empty, just after the key's colon, for an absent value.
    pub span: Span,
    /// What stands there.
    pub value: Value,
}

/// What a value is.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Value {
    /// Nothing, `~` or `null`.
    Empty,
    /// A text as written; a number is one too.
    Text(Scalar),
    /// A list.
    List(Vec<Node>),
    /// A mapping.
    Mapping(Mapping),
    /// Something that was refused and reported; every reader passes over it without a second report.
    Refused,
}

/// A text as written, with its place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Scalar {
    pub(super) text: String,
    pub(super) span: Span,
    pub(super) quoted: bool,
    /// Where the text begins if it stands in the source byte for byte.
    pub(super) verbatim: Option<usize>,
}

/// A mapping: keys and values in the order in which they stand.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Mapping {
    pub(super) entries: Vec<Entry>,
    pub(super) heading: Span,
    /// Set if lines of the mapping could not be read, so that an absent key may stand in them.
    pub(super) partial: bool,
}

/// A key with its value.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Entry {
    /// The key.
    pub key: Scalar,
    /// The value.
    pub value: Node,
}

impl Node {
    /// The value as text. Anything else is reported: an absent or blank value as missing, a list or mapping as of
    /// the wrong kind.
    pub fn as_text(&self, diagnostics: &mut Vec<Diagnostic>) -> Option<&Scalar> {
        match &self.value {
            Value::Text(scalar) if !scalar.text.trim().is_empty() => Some(scalar),
            _ => self.refuse("text", diagnostics),
        }
    }

    /// The value as a list, which may be empty. Anything else is reported.
    pub fn as_list(&self, diagnostics: &mut Vec<Diagnostic>) -> Option<&[Self]> {
        match &self.value {
            Value::List(items) => Some(items),
            _ => self.refuse("a list", diagnostics),
        }
    }

    /// The value as a mapping. Anything else is reported.
    pub fn as_mapping(&self, diagnostics: &mut Vec<Diagnostic>) -> Option<&Mapping> {
        match &self.value {
            Value::Mapping(mapping) => Some(mapping),
            Value::Text(scalar) if !scalar.text.trim().is_empty() => {
                let message = "found text instead of a mapping";
                let help = match colon_without_space(&scalar.text) {
                    Some(_) => "put a space after the colon",
                    None => "write `key: value`",
                };
                let found = Diagnostic::error(Rule::NotAMapping, self.span, message);
                diagnostics.push(found.expecting("a mapping").helped(help));
                None
            }
            _ => self.refuse("a mapping", diagnostics),
        }
    }

    /// The items of a list, or the value itself as the only item: for keys that take one or several. An absent or
    /// refused value has none.
    pub fn items(&self) -> &[Self] {
        match &self.value {
            Value::List(items) => items,
            Value::Empty | Value::Refused => &[],
            Value::Text(_) | Value::Mapping(_) => std::slice::from_ref(self),
        }
    }

    /// Whether there is no value: nothing, `~` or `null`.
    pub fn is_empty(&self) -> bool {
        self.value == Value::Empty
    }

    /// Reports that something else was expected: for readers that accept several kinds and got none of them.
    /// Returns `None`, so that it can end a match. A refused value was reported before.
    pub fn refuse<T>(&self, expected: &str, diagnostics: &mut Vec<Diagnostic>) -> Option<T> {
        let diagnostic = match &self.value {
            Value::Refused => return None,
            Value::Empty => {
                Diagnostic::error(Rule::MissingValue, self.span, "the value is missing")
            }
            Value::Text(scalar) if scalar.text.trim().is_empty() => {
                Diagnostic::error(Rule::MissingValue, self.span, "the value is blank")
            }
            Value::Text(_) => self.wrong_kind("text", expected),
            Value::List(_) => self.wrong_kind("a list", expected),
            Value::Mapping(_) => self.wrong_kind("a mapping", expected),
        };
        diagnostics.push(diagnostic.expecting(expected));
        None
    }

    fn wrong_kind(&self, found: &str, expected: &str) -> Diagnostic {
        Diagnostic::error(
            Rule::WrongKind,
            self.span,
            format!("found {found} instead of {expected}"),
        )
    }
}

impl Scalar {
    /// The text, without quotation marks.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// Its place, quotation marks included.
    pub fn span(&self) -> Span {
        self.span
    }

    /// Whether it stands in quotation marks or is a block of lines (`|`, `>`), and is text beyond doubt.
    pub fn is_quoted(&self) -> bool {
        self.quoted
    }

    /// The place of a part of the text, given as a span of [`text`](Self::text). Where the text does not stand in
    /// the source as it is (escapes, folded lines) the whole value is the place.
    pub fn part(&self, part: Span) -> Span {
        self.verbatim
            .map_or(self.span, |start| part.moved_by(start))
    }
}

impl Mapping {
    /// A reader that takes the known keys and reports the others.
    pub fn keys(&self) -> Keys<'_> {
        Keys::of(self)
    }

    /// The entries in the order in which they stand: for mappings whose keys are names, such as contents.
    pub fn entries(&self) -> &[Entry] {
        &self.entries
    }

    /// The place to report a lack at: the key that the mapping belongs to, or its first key.
    pub fn heading(&self) -> Span {
        self.heading
    }

    /// Whether lines of it could not be read, which was reported. What seems to be absent may stand in them.
    pub fn is_partial(&self) -> bool {
        self.partial
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::yaml::{Limits, read};

    fn value(text: &str) -> Node {
        let mut found = Vec::new();
        let root = read(text, Limits::BLOCK, &mut found).unwrap();
        assert_eq!(found, []);
        root.as_mapping(&mut found).unwrap().entries()[0]
            .value
            .clone()
    }

    #[test]
    fn an_absent_value_is_missing_and_not_of_the_wrong_kind() {
        for text in ["a:", "a: ~", "a: null", "a: ''", "a: # remark"] {
            let mut found = Vec::new();
            assert!(value(text).as_text(&mut found).is_none());
            assert_eq!(found[0].rule(), Rule::MissingValue, "{text}");
        }
        assert!(value("a: 'null'").as_text(&mut Vec::new()).is_some());
    }

    #[test]
    fn a_list_where_text_is_expected_is_underlined_as_a_whole() {
        let text = "a: [1, 2] # µ";
        let mut found = Vec::new();
        assert!(value(text).as_text(&mut found).is_none());
        assert_eq!(found[0].rule(), Rule::WrongKind);
        assert_eq!(found[0].span().of(text), Some("[1, 2]"));
        assert_eq!(found[0].expected(), Some("text"));
    }

    #[test]
    fn text_where_a_mapping_is_expected_is_told_what_it_lacks() {
        let help = |text| {
            let mut found = Vec::new();
            assert!(value(text).as_mapping(&mut found).is_none());
            (found[0].rule(), found[0].help().map(str::to_owned))
        };
        assert_eq!(
            help("a: pH:7").1.as_deref(),
            Some("put a space after the colon")
        );
        assert_eq!(help("a: pH 7").0, Rule::NotAMapping);
    }

    #[test]
    fn a_part_of_a_value_has_its_place_where_it_stands_as_written() {
        for (text, expected) in [
            ("µ: 5 µL", "µL"),
            ("µ: '5 µL'", "µL"),
            ("µ: \"5 \\u00b5L\"", "\"5 \\u00b5L\""),
        ] {
            let value = value(text);
            let scalar = value.as_text(&mut Vec::new()).unwrap();
            assert_eq!(scalar.text(), "5 µL");
            assert_eq!(scalar.part(Span::new(2, 5)).of(text), Some(expected));
        }
    }

    #[test]
    fn one_or_several_are_read_alike() {
        assert_eq!(value("a: x").items().len(), 1);
        assert_eq!(value("a: [x, y]").items().len(), 2);
        assert_eq!(value("a:").items().len(), 0);
    }
}
