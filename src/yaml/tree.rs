//! Reads a text to a tree, and goes on after a fault.

use crate::{
    text::{Diagnostic, Rule, Span},
    yaml::{
        Mapping, Node, Value,
        builder::{Builder, Entries, Stopped},
        fault::{leaves_open, line_without_key},
    },
};

/// How much of a YAML text is read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Limits {
    /// How deep lists and mappings may lie in each other; the outermost counts as 1.
    pub depth: usize,
    /// How many keys, texts, lists and mappings there may be together.
    pub nodes: usize,
}

impl Limits {
    /// For a block of a page.
    pub const BLOCK: Self = Self {
        depth: 12,
        nodes: 20_000,
    };
    /// For a file: settings, people, a laboratory's constants.
    pub const FILE: Self = Self {
        depth: 12,
        nodes: 1_000_000,
    };
}

/// Reads one YAML document. Nothing comes back if the text is empty or nothing of it can be used; the reason was
/// then reported, but for an empty text too, as [`Rule::NotAMapping`].
///
/// If a line is no YAML, it is reported and the top-level keys around it are read all the same; the mapping is then
/// [partial](Mapping::is_partial). So the diagnostics are complete as far as faults can be told apart, and a tree
/// may come back together with errors. All spans are those of `text`. A byte order mark at its start is passed over.
pub fn read(text: &str, limits: Limits, diagnostics: &mut Vec<Diagnostic>) -> Option<Node> {
    let body = text.strip_prefix('\u{feff}').unwrap_or(text);
    let base = text.len() - body.len();
    let mut builder = Builder::new(limits);
    let outcome = builder.read(body, base);
    let refused = builder.take_refusals();
    match outcome {
        Ok(root) => {
            diagnostics.extend(refused);
            if root.is_none() {
                let place = Span::at(base + body.trim_end().len());
                diagnostics.push(
                    Diagnostic::error(Rule::NotAMapping, place, "nothing stands here")
                        .expecting("a mapping"),
                );
            }
            root
        }
        Err(Stopped::Limit) => {
            diagnostics.extend(refused);
            None
        }
        Err(Stopped::Scanner(error)) => {
            let whole = builder.fault(body, base, &error);
            recover(body, base, limits, whole, diagnostics)
        }
    }
}

/// Reads each top-level key by itself, so that a fault in one does not hide the others. `whole` is the fault that
/// stopped the reading of the whole; it is reported if no key by itself shows one.
fn recover(
    body: &str,
    base: usize,
    limits: Limits,
    whole: Diagnostic,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Node> {
    let mut builder = Builder::new(limits);
    let mut recovery = Recovery::default();
    for chunk in chunks(body) {
        let source = chunk.of(body).unwrap_or_default();
        let outcome = builder.read(source, base + chunk.start());
        if let Err(Stopped::Limit) = outcome {
            diagnostics.append(&mut builder.take_refusals());
            return None;
        }
        recovery.add(outcome, source, base + chunk.start(), &builder);
        recovery.faults.append(&mut builder.take_refusals());
        if recovery.unreadable >= MOST_FAULTS {
            break;
        }
    }
    if recovery.unreadable == 0 {
        recovery.faults.push(whole);
    }
    recovery.faults.sort_by_key(|fault| fault.span().start());
    diagnostics.append(&mut recovery.faults);
    let entries = recovery.entries.list;
    let heading = entries.first()?.key.span();
    let span = Span::new(base, base + body.trim_end().len());
    let mapping = Mapping {
        entries,
        heading,
        partial: true,
    };
    Some(Node {
        span,
        value: Value::Mapping(mapping),
    })
}

/// Lines that cannot be read, above which a text is something else than a block and further faults are noise.
const MOST_FAULTS: usize = 20;

#[derive(Default)]
struct Recovery {
    entries: Entries,
    faults: Vec<Diagnostic>,
    unreadable: usize,
    /// Whether a quotation mark or bracket is open, so that lines without a colon may belong to it.
    open: bool,
}

impl Recovery {
    fn add(
        &mut self,
        outcome: Result<Option<Node>, Stopped>,
        source: &str,
        start: usize,
        builder: &Builder,
    ) {
        match outcome.map(|root| root.map(|node| node.value)) {
            Ok(Some(Value::Mapping(mapping))) => {
                self.open = false;
                for entry in mapping.entries {
                    self.entries.insert(entry, &mut self.faults);
                }
            }
            Ok(Some(Value::Text(_))) if !self.open => {
                self.unreadable += 1;
                self.faults.push(line_without_key(source, start));
            }
            Err(Stopped::Scanner(error)) if !self.open || begins_with_a_key(source) => {
                self.open = leaves_open(error.info());
                self.unreadable += 1;
                self.faults.push(builder.fault(source, start, &error));
            }
            Ok(_) | Err(_) => {}
        }
    }
}

fn begins_with_a_key(source: &str) -> bool {
    source
        .lines()
        .next()
        .is_some_and(|line| line.contains(": ") || line.trim_end().ends_with(':'))
}

/// The stretches of the text that begin with a top-level key each. A list item, a closing bracket or a remark in the
/// first column goes on with the key above it.
fn chunks(body: &str) -> Vec<Span> {
    let mut found: Vec<Span> = Vec::new();
    let mut at = 0;
    for line in body.split_inclusive('\n') {
        let end = at + line.len();
        let goes_on = line.starts_with([' ', '\t', '\r', '\n', '#', '-', ']', '}']);
        match found.last_mut() {
            Some(last) if goes_on => *last = Span::new(last.start(), end),
            _ => found.push(Span::new(at, end)),
        }
        at = end;
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rules(text: &str) -> Vec<(Rule, &str)> {
        let mut found = Vec::new();
        drop(read(text, Limits::BLOCK, &mut found));
        found
            .iter()
            .map(|one| (one.rule(), one.span().of(text).unwrap()))
            .collect()
    }

    /// Every key and text of the tree with what stands at its span.
    fn places(node: &Node, text: &str, found: &mut Vec<(String, String)>) {
        let at = |span: Span| span.of(text).unwrap().to_owned();
        match &node.value {
            Value::Text(scalar) => found.push((scalar.text().to_owned(), at(scalar.span()))),
            Value::List(items) => items.iter().for_each(|item| places(item, text, found)),
            Value::Mapping(mapping) => {
                for entry in mapping.entries() {
                    found.push((entry.key.text().to_owned(), at(entry.key.span())));
                    places(&entry.value, text, found);
                }
            }
            Value::Empty | Value::Refused => {}
        }
    }

    #[test]
    fn places_are_bytes_where_the_scanner_counts_characters() {
        let text = "µ-eq: 5 ± 1 µL # µ\r\n° C: '25 °C' # x\r\nlist: [±, \"µ\" ]\r\nk:\r\n- a: ±\r\n  b: °\r\n";
        let mut found = Vec::new();
        places(
            &read(text, Limits::BLOCK, &mut Vec::new()).unwrap(),
            text,
            &mut found,
        );
        let quoted = [("25 °C", "'25 °C'"), ("µ", "\"µ\"")];
        for (value, place) in found {
            let expected = quoted
                .iter()
                .find(|(inner, _)| *inner == value)
                .map_or(&*value, |(_, raw)| raw);
            assert_eq!(place, expected);
        }
    }

    #[test]
    fn values_stay_as_written() {
        let root = read(
            "a: 0.0500\nb: no\nc: 1e3\nd: 2026-11-03\n",
            Limits::BLOCK,
            &mut Vec::new(),
        )
        .unwrap();
        let Value::Mapping(mapping) = root.value else {
            panic!("no mapping")
        };
        let texts: Vec<_> = mapping
            .entries()
            .iter()
            .map(|e| e.value.as_text(&mut Vec::new()).unwrap().text())
            .collect();
        assert_eq!(texts, ["0.0500", "no", "1e3", "2026-11-03"]);
    }

    #[test]
    fn what_blocks_do_not_have_is_refused_where_it_stands() {
        assert_eq!(rules("µ: !t x"), [(Rule::YamlTag, "!t x")]);
        assert_eq!(
            rules("µ: &q x\nb: *q"),
            [(Rule::YamlAnchor, "&q x"), (Rule::YamlAlias, "*q")]
        );
        assert_eq!(rules("µ: *q\nb: 1"), [(Rule::YamlAlias, "*")]);
        assert_eq!(rules("µ: 1\n<<: x"), [(Rule::YamlMerge, "<<")]);
        assert_eq!(rules("µ: 1\n---\nb: 2"), [(Rule::SecondDocument, "---")]);
        assert_eq!(rules("? [µ]\n: b"), [(Rule::WrongKind, "[µ]")]);
        assert_eq!(rules(""), [(Rule::NotAMapping, "")]);
    }

    #[test]
    fn a_duplicate_key_points_at_both_places() {
        let text = "µ: 1\nb:\n  c: 1\n  c: 2\n";
        let mut found = Vec::new();
        drop(read(text, Limits::BLOCK, &mut found));
        assert_eq!(found.len(), 1);
        assert_eq!(
            (found[0].rule(), found[0].span()),
            (Rule::DuplicateKey, Span::new(18, 19))
        );
        assert_eq!(found[0].labels()[1].span, Span::new(11, 12));
    }

    #[test]
    fn one_fault_does_not_hide_the_others() {
        let text = "µ: a: b\nair: &q closed\ntask: [x\nair: open\nlabel: z\n";
        let expected = [
            (Rule::YamlSyntax, ":"),
            (Rule::YamlAnchor, "&q closed"),
            (Rule::YamlSyntax, "x"),
            (Rule::DuplicateKey, "air"),
        ];
        assert_eq!(rules(text), expected);
    }

    #[test]
    fn what_follows_an_open_quotation_mark_or_bracket_is_not_reported_line_by_line() {
        assert_eq!(
            rules("µ: 'x\ny\nz\nb: 1\nb: 2\n"),
            [(Rule::YamlSyntax, "'"), (Rule::DuplicateKey, "b")]
        );
        assert_eq!(rules("µ: [x,\ny,\nb: 1\n"), [(Rule::YamlSyntax, ",")]);
        let garbage = "a: b: c\n".repeat(1000);
        assert_eq!(rules(&garbage).len(), MOST_FAULTS);
    }

    #[test]
    fn depth_and_number_are_limited() {
        assert_eq!(
            rules(&format!("a: {}", "[".repeat(400)))[0].0,
            Rule::NestingTooDeep
        );
        assert_eq!(rules(&"- ".repeat(50_000))[0].0, Rule::NestingTooDeep);
        assert_eq!(
            rules(&format!("a: [{}]", "1,".repeat(30_000)))[0].0,
            Rule::TooManyKeys
        );
    }

    #[test]
    fn a_byte_order_mark_is_passed_over_and_counted() {
        let text = "\u{feff}a: 1\na: 2";
        assert_eq!(rules(text), [(Rule::DuplicateKey, "a")]);
    }

    proptest::proptest! {
        #![proptest_config(proptest::test_runner::Config {
            failure_persistence: None,
            ..proptest::test_runner::Config::default()
        })]

        #[test]
        fn no_text_breaks_the_reader_or_is_placed_outside(text in "[a-c:\\-\\[\\]{}'\"#&*!|>?%@\t\r\n µ\\\\~<,]{0,60}") {
            let mut found = Vec::new();
            let root = read(&text, Limits::BLOCK, &mut found);
            for one in &found {
                proptest::prop_assert!(one.labels().iter().all(|label| label.span.of(&text).is_some()), "{one:?}");
            }
            if let Some(root) = root {
                places(&root, &text, &mut Vec::new());
            } else {
                proptest::prop_assert!(!found.is_empty());
            }
        }
    }
}
