//! The parts of a result: answer, record, acts.

use crate::{
    page::region::Fenced,
    text::{Diagnostic, Excerpt, Rule, Span},
};

/// The parts of a result.
pub(super) struct Anatomy {
    pub(super) answer: Excerpt,
    pub(super) record: Option<Fenced>,
    pub(super) acts: Vec<Fenced>,
    pub(super) diagnostics: Vec<Diagnostic>,
}

/// Takes the inside of a result apart, line by line as a reader with `sed` would: the answer ends with the empty line
/// before the first line that is `` ```record ``; record and acts end with the next line that is `` ``` ``.
///
/// `fences` are the page's top-level fences by the rules of Markdown. Where they and the lines disagree, a Markdown
/// viewer shows something else than what is hashed, and that is reported.
pub(super) fn anatomy(text: &str, inner: Span, fences: &[(usize, bool)]) -> Anatomy {
    let mut knife = Knife::new(inner);
    let mut at = inner.start();
    for line in inner.of(text).unwrap_or_default().split_inclusive('\n') {
        let content = line
            .strip_suffix('\n')
            .map_or(line, |cut| cut.strip_suffix('\r').unwrap_or(cut));
        knife.line(
            text,
            content,
            Span::new(at, at + content.len()),
            at + line.len(),
        );
        at += line.len();
    }
    let answer = Excerpt::of_lines(text, Span::new(inner.start(), knife.answer_end));
    knife.compare(inner, fences);
    if let State::Within { opening, .. } = knife.state {
        knife.report(opening, "this fence is not closed inside the result");
    }
    Anatomy {
        answer,
        record: knife.record,
        acts: knife.acts,
        diagnostics: knife.diagnostics,
    }
}

#[derive(Clone, Copy, PartialEq, Eq)]
enum Part {
    Record,
    Act,
}

#[derive(Clone, Copy)]
enum State {
    Answer,
    Within {
        part: Part,
        opening: Span,
        content: usize,
    },
    Between,
}

struct Knife {
    state: State,
    answer_end: usize,
    /// Start of the line before, if that is empty.
    empty: Option<usize>,
    record: Option<Fenced>,
    acts: Vec<Fenced>,
    openings: Vec<Span>,
    diagnostics: Vec<Diagnostic>,
    strayed: bool,
}

impl Knife {
    fn new(inner: Span) -> Self {
        Self {
            state: State::Answer,
            answer_end: inner.end(),
            empty: None,
            record: None,
            acts: Vec::new(),
            openings: Vec::new(),
            diagnostics: Vec::new(),
            strayed: false,
        }
    }

    fn line(&mut self, text: &str, line: &str, span: Span, end: usize) {
        match (self.state, line) {
            (
                State::Within {
                    part,
                    opening,
                    content,
                },
                "```",
            ) => {
                let content = Excerpt::of_lines(text, Span::new(content, span.start()));
                let fenced = Fenced {
                    content,
                    span: opening.to(span),
                };
                match part {
                    Part::Record => self.record = Some(fenced),
                    Part::Act => self.acts.push(fenced),
                }
                self.state = State::Between;
            }
            (State::Answer | State::Between, "```record") => self.open(Part::Record, span, end),
            (State::Answer | State::Between, "```act") => self.open(Part::Act, span, end),
            (State::Answer | State::Within { .. }, _) | (State::Between, "") => {}
            (State::Between, _) => {
                if !self.strayed {
                    self.report(
                        span,
                        "this line belongs neither to the record nor to an act",
                    );
                    self.strayed = true;
                }
            }
        }
        self.empty = line.is_empty().then_some(span.start());
    }

    fn open(&mut self, part: Part, opening: Span, content: usize) {
        if matches!(self.state, State::Answer) {
            self.answer_end = self.empty.unwrap_or(opening.start());
            if self.empty.is_none() {
                self.report(
                    opening,
                    "no empty line stands between the answer and its record",
                );
            }
            if part == Part::Act {
                self.report(opening, "an act stands here without a record before it");
            }
        } else if part == Part::Record {
            self.report(opening, "a second record stands in the result");
        }
        self.openings.push(opening);
        self.state = State::Within {
            part,
            opening,
            content,
        };
    }

    /// Compares the lines taken for fences of a record or act with Markdown's fences.
    fn compare(&mut self, inner: Span, fences: &[(usize, bool)]) {
        let first = fences.partition_point(|(start, _)| *start < inner.start());
        let own = fences.get(first..).unwrap_or_default();
        let own: Vec<usize> = own
            .iter()
            .take_while(|(start, _)| *start < inner.end())
            .filter(|(_, ours)| *ours)
            .map(|(at, _)| *at)
            .collect();
        for opening in self.openings.clone() {
            if own.binary_search(&opening.start()).is_err() {
                self.report(
                    opening,
                    "this line reads like a record or act, and Markdown shows it as something else",
                );
            }
        }
        for start in own {
            if self
                .openings
                .binary_search_by_key(&start, |opening| opening.start())
                .is_err()
            {
                let place = Span::at(start);
                self.report(
                    place,
                    "Markdown shows a record or act here, and it is not written as one",
                );
            }
        }
    }

    fn report(&mut self, span: Span, message: &str) {
        self.diagnostics
            .push(Diagnostic::error(Rule::ResultForm, span, message));
    }
}

#[cfg(test)]
mod tests {
    use crate::{page::Page, text::Rule};

    fn messages(inner: &str) -> Vec<String> {
        let page = format!("<!-- ionfolio result a -->\n{inner}<!-- ionfolio end a -->\n");
        let page = Page::read(page.into_bytes()).unwrap();
        assert!(
            page.diagnostics()
                .iter()
                .all(|found| found.rule() == Rule::ResultForm)
        );
        page.diagnostics()
            .iter()
            .map(|found| found.message().to_owned())
            .collect()
    }

    #[test]
    fn a_result_as_written_is_not_complained_of() {
        assert!(messages("**x**\n").is_empty());
        assert!(
            messages("x\n\n```constants\n- a\n```\n\n```record\nr\n```\n\n```act\ns\n```\n")
                .is_empty()
        );
    }

    #[test]
    fn what_was_slipped_into_a_result_is_noticed() {
        for (inner, expected) in [
            ("x\n```record\nr\n```\n", "no empty line"),
            ("x\n\n```act\nr\n```\n", "without a record"),
            ("x\n\n```record\nr\n```\n\nmore\n", "belongs neither"),
            (
                "x\n\n```record\nr\n```\n\n```record\nr\n```\n",
                "second record",
            ),
            ("~~~\n\n```record\nr\n```\n~~~\n", "something else"),
            ("x\n\n~~~record\nr\n~~~\n", "not written as one"),
            ("x\n\n```record \nr\n```\n", "not written as one"),
        ] {
            let found = messages(inner);
            assert!(
                found.iter().any(|message| message.contains(expected)),
                "{inner:?}: {found:?}"
            );
        }
    }
}
