//! What the YAML scanner complains of, in words that help, at the place where the mistake was made.

use crate::text::{Diagnostic, Rule, Span};

/// The diagnostic for a complaint of the scanner at byte `offset` of `source`, which stands at `base` in the text.
pub(super) fn fault(source: &str, offset: usize, complaint: &str, base: usize) -> Diagnostic {
    let offset = offset.min(source.len());
    let found = Found { source, offset };
    let diagnostic = KINDS
        .iter()
        .find(|(part, _)| complaint.contains(part))
        .map_or_else(
            || found.error(&format!("this cannot be read as YAML: {complaint}")),
            |(_, said)| said(&found),
        );
    diagnostic.moved_by(base)
}

/// The diagnostic for lines that are text without a key; `source` is what they are.
pub(super) fn line_without_key(source: &str, base: usize) -> Diagnostic {
    let found = Found {
        source,
        offset: source.trim_end().len(),
    };
    found.no_colon().moved_by(base)
}

/// Whether after this complaint of the scanner a quotation mark or bracket is open.
pub(super) fn leaves_open(complaint: &str) -> bool {
    ["flow ", "end of stream", "expected node content"]
        .iter()
        .any(|part| complaint.contains(part))
}

/// The span of the first `:` that follows a word and is followed by neither blank nor line end, in the first line of
/// `text`, if no colon of it is followed by a blank.
pub(super) fn colon_without_space(text: &str) -> Option<Span> {
    let line = text.lines().next().unwrap_or_default();
    if line.contains(": ")
        || line.trim_end().ends_with(':')
        || line.trim_start().starts_with(['#', '"', '\''])
    {
        return None;
    }
    let colon = line.find(':')?;
    let address = line.get(colon..)?.starts_with("://");
    (colon > 0 && !address).then(|| Span::new(colon, colon + 1))
}

/// The scanner's complaints by a part of their wording, the first that fits counts. The tests hold each to the
/// scanner, so that a changed wording is noticed.
const KINDS: &[(&str, Said)] = &[
    ("recursion limit", |found| found.deep()),
    ("unknown anchor", |found| found.alias()),
    ("unprintable", |found| found.control_character()),
    ("tab", |found| found.tab()),
    ("mapping values are not allowed", |found| {
        found.second_colon()
    }),
    ("illegal placement of ':'", |found| found.second_colon()),
    ("unexpected character", |found| found.special_character()),
    ("found unexpected end of stream", |found| {
        found.open_quotation()
    }),
    ("flow ", |found| found.open_bracket()),
    ("expected node content", |found| found.open_bracket()),
    ("misplaced bracket", |found| found.open_bracket()),
    ("trailing content", |found| found.after_quotation()),
    ("did not find expected key", |found| found.indentation()),
    ("'-' indicator", |found| found.among_items()),
    ("block sequence entries", |found| found.item_in_line()),
    ("simple key expect", |found| found.no_colon()),
    ("escape", |found| found.escape()),
];

type Said = fn(&Found<'_>) -> Diagnostic;

struct Found<'s> {
    source: &'s str,
    offset: usize,
}

impl Found<'_> {
    fn error(&self, message: &str) -> Diagnostic {
        Diagnostic::error(Rule::YamlSyntax, self.character(), message)
    }

    /// The character at the offset, or the last one before it that is not blank, if there is none on this line.
    fn character(&self) -> Span {
        let rest = self.source.get(self.offset..).unwrap_or_default();
        if let Some(next) = rest
            .chars()
            .next()
            .filter(|next| !matches!(next, '\r' | '\n'))
        {
            return Span::new(self.offset, self.offset + next.len_utf8());
        }
        let before = self
            .source
            .get(..self.offset)
            .unwrap_or_default()
            .trim_end();
        let width = before.chars().next_back().map_or(0, char::len_utf8);
        Span::new(before.len() - width, before.len())
    }

    /// The line of the offset up to the offset, with its start.
    fn line_before(&self) -> (usize, &str) {
        let before = self.source.get(..self.offset).unwrap_or_default();
        let start = before.rfind('\n').map_or(0, |newline| newline + 1);
        (start, before.get(start..).unwrap_or_default())
    }

    /// The colon that lacks its space in this line or the last line before it that is not blank.
    fn colon_without_space(&self) -> Option<Span> {
        let (start, line) = self.line_before();
        let above = self.source.get(..start)?.trim_end();
        let above_start = above.rfind('\n').map_or(0, |newline| newline + 1);
        colon_without_space(line)
            .map(|span| span.moved_by(start))
            .or_else(|| Some(colon_without_space(above.get(above_start..)?)?.moved_by(above_start)))
    }

    fn second_colon(&self) -> Diagnostic {
        if let Some(colon) = self.colon_without_space() {
            return Diagnostic::error(
                Rule::YamlSyntax,
                colon,
                "a space is missing after the colon",
            )
            .expecting("`key: value`");
        }
        let (start, line) = self.line_before();
        if line.contains(": ") {
            return self
                .error("a second colon followed by a space stands in this line")
                .helped(
                    "put the value in quotation marks, or the second key on a line of its own",
                );
        }
        let above = self.line_around(
            self.source
                .get(..start)
                .unwrap_or_default()
                .trim_end()
                .len(),
        );
        if above
            .of(self.source)
            .is_some_and(|text| !text.is_empty() && !text.contains(':'))
        {
            return self.without_key(above);
        }
        self.error("this key is indented as if it went on with the line above")
            .expecting("a key in the same column as the keys that it belongs to")
            .helped("align the keys, and check that the line above has a colon")
    }

    fn tab(&self) -> Diagnostic {
        let (start, line) = self.line_before();
        let tab = line.find('\t').map_or(self.character(), |inside| {
            Span::new(start + inside, start + inside + 1)
        });
        Diagnostic::error(Rule::YamlTab, tab, "a tab stands where only spaces may")
            .helped("indent with spaces")
    }

    fn alias(&self) -> Diagnostic {
        Diagnostic::error(
            Rule::YamlAlias,
            self.character(),
            "a value that begins with `*` is an alias, and refused",
        )
        .helped("write the value itself; if it begins with `*`, put it in quotation marks")
    }

    fn deep(&self) -> Diagnostic {
        Diagnostic::error(
            Rule::NestingTooDeep,
            self.character(),
            "brackets lie too deep in each other",
        )
    }

    fn special_character(&self) -> Diagnostic {
        let span = self.character();
        let character = span.of(self.source).unwrap_or_default();
        let shown = if character == "`" {
            "a backtick".to_owned()
        } else {
            format!("`{character}`")
        };
        self.error(&format!("a value cannot begin with {shown}"))
            .helped("put the value in quotation marks")
    }

    fn open_quotation(&self) -> Diagnostic {
        self.error("a quotation mark is opened and not closed")
            .helped("close it at the end of the value")
    }

    fn open_bracket(&self) -> Diagnostic {
        self.error("a bracket is not closed, or a comma is missing in it")
            .expecting("`,` or the closing bracket")
    }

    fn after_quotation(&self) -> Diagnostic {
        self.error("something follows the closing quotation mark")
            .helped("put the whole value in quotation marks")
    }

    fn indentation(&self) -> Diagnostic {
        self.error("the indentation of this line fits none of the lines above")
            .helped("put keys that belong together in the same column")
    }

    fn among_items(&self) -> Diagnostic {
        self.error("this line is no item of the list above")
            .expecting("`- ` and an item, or another indentation")
    }

    fn item_in_line(&self) -> Diagnostic {
        self.error("a list item begins in the middle of a line")
            .helped("put each `- item` on a line of its own")
    }

    fn control_character(&self) -> Diagnostic {
        let message = "an invisible control character stands here";
        Diagnostic::error(Rule::HiddenCharacter, self.character(), message).helped("remove it")
    }

    fn no_colon(&self) -> Diagnostic {
        if let Some(colon) = self.colon_without_space() {
            return Diagnostic::error(
                Rule::YamlSyntax,
                colon,
                "a space is missing after the colon",
            )
            .expecting("`key: value`");
        }
        self.without_key(self.line_around(self.character().start()))
    }

    /// The diagnostic for a line that has no key.
    fn without_key(&self, line: Span) -> Diagnostic {
        let text = line.of(self.source).unwrap_or_default();
        if text.starts_with('-') && !text.starts_with("- ") {
            let hyphen = Span::new(line.start(), line.start() + 1);
            return Diagnostic::error(
                Rule::YamlSyntax,
                hyphen,
                "a space is missing after the hyphen",
            )
            .expecting("`- ` and an item");
        }
        Diagnostic::error(
            Rule::YamlSyntax,
            line,
            "a line without a key and a colon stands here",
        )
        .expecting("`key: value`")
    }

    /// The line that holds `offset` without the blanks around it.
    fn line_around(&self, offset: usize) -> Span {
        let before = self.source.get(..offset).unwrap_or_default();
        let start = before.rfind('\n').map_or(0, |newline| newline + 1);
        let line = self
            .source
            .get(start..)
            .unwrap_or_default()
            .lines()
            .next()
            .unwrap_or_default();
        let start = start + line.len() - line.trim_start().len();
        Span::new(start, start + line.trim().len())
    }

    fn escape(&self) -> Diagnostic {
        self.error("the backslash begins no character that is known")
            .helped("put the value in single quotation marks, where a backslash stands for itself")
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::yaml::{Limits, read};

    fn only(text: &str) -> Diagnostic {
        let mut found = Vec::new();
        drop(read(text, Limits::BLOCK, &mut found));
        assert_eq!(found.len(), 1, "{text:?}: {found:#?}");
        found.remove(0)
    }

    fn holds(text: &str, message: &str, place: &str) {
        let found = only(text);
        assert!(found.message().contains(message), "{text:?} {found:?}");
        assert_eq!(found.span().of(text), Some(place), "{text:?} {found:?}");
    }

    #[test]
    fn a_mistake_about_keys_is_named_at_its_place() {
        holds("µ: 1\nnote: a: b", "a second colon", ":");
        holds("a:\n  b:1\n  c: 2", "space is missing after the colon", ":");
        holds(
            "µ: 1\nlabel:abc\ntask: x",
            "space is missing after the colon",
            ":",
        );
        holds("µ:\n  b: 1\n c: 2", "fits none of the lines above", "c");
        holds("µ: 1\n  b: 2", "as if it went on with the line above", ":");
        holds(
            "µ:\n  acid 1 mol/L\n  b: 2",
            "without a key",
            "acid 1 mol/L",
        );
        holds("µ: 1\nacid 1 mol/L\nb: 2", "without a key", "acid 1 mol/L");
    }

    #[test]
    fn a_mistake_about_values_is_named_at_its_place() {
        holds("µ: 1\na:\n\tb: 1", "a tab stands", "\t");
        holds("µ: @x", "cannot begin with `@`", "@");
        holds("µ: `x`", "cannot begin with a backtick", "`");
        holds("µ: [1, 2", "a bracket is not closed", "2");
        holds("µ: 'x", "a quotation mark is opened and not closed", "'");
        holds("µ: \"x\" y", "follows the closing quotation mark", "y");
        holds("µ: \"\\q\"", "the backslash begins no character", "\"");
        holds(
            "µ:\n- b\n-c\nd: 1",
            "space is missing after the hyphen",
            "-",
        );
        holds("µ: 1\0", "invisible control character", "\0");
        holds("µ: - x", "a list item begins in the middle of a line", "-");
    }

    #[test]
    fn an_address_is_no_key_without_space() {
        assert_eq!(colon_without_space("https://example.org"), None);
        assert_eq!(colon_without_space("volume:25 mL"), Some(Span::new(6, 7)));
        assert_eq!(colon_without_space("volume: 10:25"), None);
    }
}
