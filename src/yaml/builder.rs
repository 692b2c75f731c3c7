//! Builds a tree from the events of the YAML parser.

use std::{borrow::Cow, collections::BTreeMap};

use saphyr_parser::{Event, Parser, ScalarStyle, ScanError, Span as CharSpan};

use crate::{
    text::{Diagnostic, Rule, Span},
    yaml::{Entry, Limits, Mapping, Node, Scalar, Value, fault::fault, offsets::Offsets},
};

/// Why the reading of a source ended before its end.
pub(super) enum Stopped {
    /// The scanner could not go on.
    Scanner(ScanError),
    /// A limit is passed; the builder holds the diagnostic.
    Limit,
}

/// Entries with a guard against duplicates.
#[derive(Default)]
pub(super) struct Entries {
    pub(super) list: Vec<Entry>,
    places: BTreeMap<String, Span>,
}

impl Entries {
    pub(super) fn insert(&mut self, entry: Entry, diagnostics: &mut Vec<Diagnostic>) {
        let key = entry.key.text().to_owned();
        if let Some(first) = self.places.get(&key) {
            let message = format!("the key `{key}` stands twice");
            let found = Diagnostic::error(Rule::DuplicateKey, entry.key.span(), message);
            diagnostics.push(found.labelled("again here").and(*first, "first here"));
            return;
        }
        self.places.insert(key, entry.key.span());
        self.list.push(entry);
    }
}

/// A list or mapping that is not closed yet.
enum Open {
    List {
        start: usize,
        items: Vec<Node>,
    },
    Mapping {
        start: usize,
        entries: Entries,
        awaited: Awaited,
    },
}

/// What comes next in a mapping.
#[derive(Default)]
enum Awaited {
    /// A key.
    #[default]
    Key,
    /// The value of this key.
    Value(Scalar),
    /// The value of a key that was refused.
    Discarded,
}

/// Builds trees from sources that are parts of one text, under common limits.
pub(super) struct Builder {
    limits: Limits,
    nodes: usize,
    refusals: Vec<Diagnostic>,
    offsets: Offsets,
    open: Vec<Open>,
    root: Option<Node>,
}

impl Builder {
    pub(super) fn new(limits: Limits) -> Self {
        let offsets = Offsets::of("", 0);
        Self {
            limits,
            nodes: 0,
            refusals: Vec::new(),
            offsets,
            open: Vec::new(),
            root: None,
        }
    }

    pub(super) fn take_refusals(&mut self) -> Vec<Diagnostic> {
        std::mem::take(&mut self.refusals)
    }

    pub(super) fn fault(&self, source: &str, base: usize, error: &ScanError) -> Diagnostic {
        let offset = self
            .offsets
            .byte(error.marker().index())
            .saturating_sub(base);
        fault(source, offset, error.info(), base)
    }

    pub(super) fn read(&mut self, source: &str, base: usize) -> Result<Option<Node>, Stopped> {
        self.offsets = Offsets::of(source, base);
        self.open.clear();
        self.root = None;
        for event in Parser::new_from_str(source) {
            let (event, place) = event.map_err(Stopped::Scanner)?;
            let second = matches!(event, Event::DocumentStart(_)) && self.root.is_some();
            if second {
                let message = "a second document begins here";
                self.refusals.push(Diagnostic::error(
                    Rule::SecondDocument,
                    self.span(place),
                    message,
                ));
                break;
            }
            self.event(event, place, source)?;
        }
        Ok(self.root.take())
    }

    fn event(&mut self, event: Event<'_>, place: CharSpan, source: &str) -> Result<(), Stopped> {
        let span = self.span(place);
        match event {
            Event::Scalar(text, style, anchor, tag) => {
                self.count(span)?;
                self.refuse_marks(anchor, tag.is_some(), span);
                let value = scalar_node(text, style, span, self.offsets.slice(span, source));
                self.finish(value);
            }
            Event::Alias(_) => {
                self.count(span)?;
                let message = "a value that begins with `*` is an alias, and refused";
                self.refusals.push(
                    Diagnostic::error(Rule::YamlAlias, span, message)
                        .helped("write the value itself"),
                );
                self.finish(Node {
                    span,
                    value: Value::Refused,
                });
            }
            Event::SequenceStart(anchor, tag) => {
                self.refuse_marks(anchor, tag.is_some(), span);
                self.enter(
                    Open::List {
                        start: span.start(),
                        items: Vec::new(),
                    },
                    span,
                )?;
            }
            Event::MappingStart(anchor, tag) => {
                self.refuse_marks(anchor, tag.is_some(), span);
                let open = Open::Mapping {
                    start: span.start(),
                    entries: Entries::default(),
                    awaited: Awaited::Key,
                };
                self.enter(open, span)?;
            }
            Event::SequenceEnd | Event::MappingEnd => self.leave(span),
            Event::Nothing
            | Event::StreamStart
            | Event::StreamEnd
            | Event::DocumentStart(_)
            | Event::DocumentEnd => {}
        }
        Ok(())
    }

    fn count(&mut self, span: Span) -> Result<(), Stopped> {
        self.nodes += 1;
        if self.nodes <= self.limits.nodes {
            return Ok(());
        }
        let message = format!("more than {} keys and values", self.limits.nodes);
        self.refusals
            .push(Diagnostic::error(Rule::TooManyKeys, span, message));
        Err(Stopped::Limit)
    }

    fn enter(&mut self, open: Open, span: Span) -> Result<(), Stopped> {
        self.count(span)?;
        if self.open.len() >= self.limits.depth {
            let message = format!(
                "lists and mappings lie more than {} deep in each other",
                self.limits.depth
            );
            self.refusals
                .push(Diagnostic::error(Rule::NestingTooDeep, span, message));
            return Err(Stopped::Limit);
        }
        self.open.push(open);
        Ok(())
    }

    fn leave(&mut self, end: Span) {
        let node = match self.open.pop() {
            None => return,
            Some(Open::List { start, items }) => {
                let last = items.last().map_or(start, |item| item.span.end());
                Node {
                    span: closed(start, last, end),
                    value: Value::List(items),
                }
            }
            Some(Open::Mapping { start, entries, .. }) => {
                let last = entries
                    .list
                    .last()
                    .map_or(start, |entry| entry.value.span.end());
                let span = closed(start, last, end);
                let heading = entries.list.first().map_or(span, |entry| entry.key.span());
                let mapping = Mapping {
                    entries: entries.list,
                    heading,
                    partial: false,
                };
                Node {
                    span,
                    value: Value::Mapping(mapping),
                }
            }
        };
        self.finish(node);
    }

    /// Puts a finished node where it belongs: into the list, as key or value into the mapping, or as the root.
    fn finish(&mut self, node: Node) {
        match self.open.last_mut() {
            None => self.root = Some(node),
            Some(Open::List { items, .. }) => items.push(node),
            Some(Open::Mapping {
                entries, awaited, ..
            }) => match std::mem::take(awaited) {
                Awaited::Key => {
                    let key = key_of(node, &mut self.refusals);
                    *awaited = key.map_or(Awaited::Discarded, Awaited::Value);
                }
                Awaited::Value(key) => entries.insert(entry_of(key, node), &mut self.refusals),
                Awaited::Discarded => {}
            },
        }
    }

    fn refuse_marks(&mut self, anchor: usize, tagged: bool, span: Span) {
        if anchor != 0 {
            let message = "a value that begins with `&` carries an anchor, and is refused";
            let found = Diagnostic::error(Rule::YamlAnchor, span, message);
            self.refusals
                .push(found.helped("remove the anchor, or put the value in quotation marks"));
        }
        if tagged {
            let message = "a value that begins with `!` carries a tag, and is refused";
            let found = Diagnostic::error(Rule::YamlTag, span, message);
            self.refusals
                .push(found.helped("remove the tag, or put the value in quotation marks"));
        }
    }

    fn span(&self, place: CharSpan) -> Span {
        Span::new(
            self.offsets.byte(place.start.index()),
            self.offsets.byte(place.end.index()),
        )
    }
}

/// A flow collection ends with its bracket, to which the scanner adds blanks and remarks; a block collection with its last value.
fn closed(start: usize, last: usize, end: Span) -> Span {
    if end.is_empty() {
        Span::new(start, last)
    } else {
        Span::new(start, end.start() + 1)
    }
}

fn key_of(node: Node, refusals: &mut Vec<Diagnostic>) -> Option<Scalar> {
    let fault = match node.value {
        Value::Text(key) if key.text() == "<<" && !key.is_quoted() => Diagnostic::error(
            Rule::YamlMerge,
            node.span,
            "`<<` is a merge key, and refused",
        )
        .helped("write the keys themselves"),
        Value::Text(key) if !key.text().trim().is_empty() => return Some(key),
        Value::Refused => return None,
        Value::Empty | Value::Text(_) => Diagnostic::error(
            Rule::WrongKind,
            node.span,
            "a key is missing before the colon",
        ),
        Value::List(_) => {
            Diagnostic::error(Rule::WrongKind, node.span, "found a list instead of a key")
        }
        Value::Mapping(_) => Diagnostic::error(
            Rule::WrongKind,
            node.span,
            "found a mapping instead of a key",
        ),
    };
    refusals.push(fault.expecting("a key of plain words"));
    None
}

fn entry_of(key: Scalar, mut value: Node) -> Entry {
    match &mut value.value {
        Value::Mapping(mapping) => mapping.heading = key.span(),
        Value::Empty if value.span.is_empty() => {
            value.span = Span::at(value.span.start().max(key.span().end()));
        }
        _ => {}
    }
    Entry { key, value }
}

/// The node of a scalar whose place `span` holds `raw`.
fn scalar_node(text: Cow<'_, str>, style: ScalarStyle, span: Span, raw: &str) -> Node {
    let plain = style == ScalarStyle::Plain;
    if plain && (raw.is_empty() || matches!(&*text, "" | "~" | "null" | "Null" | "NULL")) {
        return Node {
            span,
            value: Value::Empty,
        };
    }
    // The scanner lets a quoted value end with the blanks and remarks that follow it.
    let length = match style {
        ScalarStyle::SingleQuoted => quoted_length(raw, '\''),
        ScalarStyle::DoubleQuoted => quoted_length(raw, '"'),
        ScalarStyle::Plain | ScalarStyle::Literal | ScalarStyle::Folded => raw.trim_end().len(),
    };
    let span = Span::new(span.start(), span.start() + length);
    let inset = usize::from(matches!(
        style,
        ScalarStyle::SingleQuoted | ScalarStyle::DoubleQuoted
    ));
    let as_written = raw
        .get(inset..length.saturating_sub(inset))
        .is_some_and(|inner| inner == text);
    let verbatim = as_written.then_some(span.start() + inset);
    let scalar = Scalar {
        text: text.into_owned(),
        span,
        quoted: !plain,
        verbatim,
    };
    Node {
        span,
        value: Value::Text(scalar),
    }
}

/// Length of the quoted value at the start of `raw`, both marks included; a doubled single mark and what follows a
/// backslash in double marks are part of it.
fn quoted_length(raw: &str, mark: char) -> usize {
    let mut characters = raw.char_indices().skip(1).peekable();
    while let Some((offset, character)) = characters.next() {
        if character == '\\' && mark == '"' {
            characters.next();
        } else if character == mark {
            let doubled = mark == '\'' && characters.peek().is_some_and(|(_, next)| *next == mark);
            if !doubled {
                return offset + mark.len_utf8();
            }
            characters.next();
        }
    }
    raw.trim_end().len()
}
