//! A diagnostic for the terminal, as one line, or as JSON.

use crate::cli::terminal::Terminal;
use crate::text::{Diagnostic, LineIndex, Severity};
use annotate_snippets::{AnnotationKind, Group, Level, Renderer, Snippet};
use serde_json::{Value, json};

/// Tells diagnostics of a page on standard error, in the order of their places.
pub(super) fn tell(terminal: &Terminal, path: &str, text: &str, faults: &[Diagnostic]) {
    let mut sorted: Vec<&Diagnostic> = faults.iter().collect();
    sorted.sort_by_key(|fault| (fault.span().start(), fault.span().end()));
    let renderer = if terminal.colour {
        Renderer::styled()
    } else {
        Renderer::plain()
    };
    let renderer = renderer.term_width(terminal.width);
    for fault in sorted {
        terminal.say_line(&renderer.render(&[group(path, text, fault)]));
        terminal.say_line("");
    }
}

fn group<'a>(path: &'a str, text: &'a str, fault: &'a Diagnostic) -> Group<'a> {
    let level = match fault.severity() {
        Severity::Error => Level::ERROR,
        Severity::Warning => Level::WARNING,
        Severity::Note => Level::NOTE,
    };
    let mut snippet = Snippet::source(text).path(path).line_start(1);
    for (place, label) in fault.labels().iter().enumerate() {
        let kind = if place == 0 {
            AnnotationKind::Primary
        } else {
            AnnotationKind::Context
        };
        let annotation = kind.span(visible(text, label.span.range()));
        snippet = snippet.annotation(if label.text.is_empty() {
            annotation
        } else {
            annotation.label(&label.text)
        });
    }
    let mut group = level
        .primary_title(fault.message())
        .id(fault.rule().name())
        .element(snippet);
    if let Some(expected) = fault.expected() {
        group = group.element(Level::NOTE.with_name("expected").message(expected));
    }
    if let Some(help) = fault.help() {
        group = group.element(Level::HELP.message(help));
    }
    group
}

/// A range that shows: an empty one covers the character at it, none leaves the text.
fn visible(text: &str, range: std::ops::Range<usize>) -> std::ops::Range<usize> {
    let start = range.start.min(text.len());
    let end = range.end.clamp(start, text.len());
    if start < end {
        return start..end;
    }
    let next = text.get(start..).and_then(|rest| rest.chars().next());
    match next {
        Some(c) if c != '\n' && c != '\r' => start..start + c.len_utf8(),
        _ => start..start,
    }
}

/// `page:line:column: rule: message`.
pub(super) fn short(path: &str, text: &str, fault: &Diagnostic) -> String {
    let place = LineIndex::new(text).line_column(fault.span().start());
    format!(
        "{path}:{}:{}: {} [{}]: {}",
        place.line,
        place.column,
        fault.severity().name(),
        fault.rule().name(),
        fault.message()
    )
}

/// One object with everything that the terminal shows.
pub(super) fn object(path: &str, text: &str, fault: &Diagnostic) -> Value {
    let index = LineIndex::new(text);
    let place = |offset: usize| {
        let place = index.line_column(offset);
        json!({"line": place.line, "column": place.column})
    };
    let labels: Vec<Value> = fault
        .labels()
        .iter()
        .map(|label| json!({"start": place(label.span.start()), "end": place(label.span.end()), "text": label.text}))
        .collect();
    json!({
        "page": path,
        "rule": fault.rule().name(),
        "severity": fault.severity().name(),
        "message": fault.message(),
        "expected": fault.expected(),
        "help": fault.help(),
        "labels": labels,
    })
}
