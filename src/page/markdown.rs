//! What Markdown says of a page: its fences and its comments.

use std::ops::Range;

use pulldown_cmark::{CodeBlockKind, Event, Options, Parser, Tag, TagEnd};

use crate::{
    page::{
        comment::{self, Comment},
        fence::Block,
        line_ending::line_end,
    },
    text::{Diagnostic, Excerpt, ExcerptBuilder, Rule, Span, nearest},
};

const WORD: &str = "equilibrium";

/// What was found in a page, each list in the page's order.
#[derive(Default)]
pub(super) struct Outline {
    pub(super) blocks: Vec<Block>,
    /// Comment lines of results at the start of a line and at top level.
    pub(super) comments: Vec<Comment>,
    /// Fences at top level and at the start of a line: where each begins and whether its first word is `record` or
    /// `act`.
    pub(super) fences: Vec<(usize, bool)>,
    pub(super) diagnostics: Vec<Diagnostic>,
}

/// Reads `text` by the rules of `CommonMark`. A byte order mark is passed over, since the parser takes it as text.
pub(super) fn outline(text: &str) -> Outline {
    let body = text.strip_prefix('\u{feff}').unwrap_or(text);
    let mut walk = Walk::new(text, text.len() - body.len());
    for (event, range) in Parser::new_ext(body, Options::empty()).into_offset_iter() {
        walk.step(&event, &range);
    }
    walk.outline
}

struct Walk<'t> {
    text: &'t str,
    base: usize,
    depth: usize,
    /// Where a result goes that belongs to the top-level element at hand.
    place: usize,
    fence: Option<OpenFence>,
    /// Start of the HTML block at hand if it stands at top level.
    html: Option<usize>,
    outline: Outline,
}

struct OpenFence {
    word: String,
    span: Span,
    opening: Span,
    content: ExcerptBuilder,
    /// Where the last piece of the content ends.
    content_end: usize,
}

impl<'t> Walk<'t> {
    fn new(text: &'t str, base: usize) -> Self {
        Self {
            text,
            base,
            depth: 0,
            place: base,
            fence: None,
            html: None,
            outline: Outline::default(),
        }
    }

    fn step(&mut self, event: &Event<'_>, range: &Range<usize>) {
        let span = Span::new(range.start, range.end).moved_by(self.base);
        match event {
            Event::Start(tag) => {
                if self.depth == 0 {
                    self.place = self.place_after(span);
                }
                self.start(tag, span);
                self.depth += 1;
            }
            Event::End(tag) => {
                self.depth = self.depth.saturating_sub(1);
                match tag {
                    TagEnd::CodeBlock => self.close_fence(),
                    TagEnd::HtmlBlock => self.html = None,
                    _ => {}
                }
            }
            Event::Text(piece) => {
                if let Some(fence) = &mut self.fence {
                    fence.content_end = span.end();
                    if fence.word == WORD {
                        fence.content.push(piece, span);
                    }
                }
            }
            Event::Html(lines) => self.html_lines(lines, span.start()),
            _ => {}
        }
    }

    fn start(&mut self, tag: &Tag<'_>, span: Span) {
        match tag {
            Tag::CodeBlock(CodeBlockKind::Fenced(info)) => {
                let word = info
                    .split_whitespace()
                    .next()
                    .unwrap_or_default()
                    .to_owned();
                let opening = Span::new(span.start(), line_end(self.text, span.start()));
                if self.depth == 0 && self.at_line_start(span.start()) {
                    let of_a_result = matches!(&*word, "record" | "act");
                    self.outline.fences.push((span.start(), of_a_result));
                }
                let content = Excerpt::builder(opening.end());
                self.fence = Some(OpenFence {
                    word,
                    span,
                    opening,
                    content,
                    content_end: opening.end(),
                });
            }
            Tag::HtmlBlock => self.html = (self.depth == 0).then_some(span.start()),
            _ => {}
        }
    }

    fn close_fence(&mut self) {
        let Some(fence) = self.fence.take() else {
            return;
        };
        let closed = fence.is_closed(self.text);
        if fence.word == WORD {
            let OpenFence {
                span,
                opening,
                content,
                ..
            } = fence;
            let content = content.finish();
            self.outline
                .diagnostics
                .extend(doubt(&content, opening, closed));
            self.outline.blocks.push(Block {
                content,
                span,
                opening,
                closed,
                place: self.place,
            });
        } else {
            self.outline
                .diagnostics
                .extend(fence.doubt(self.text, closed));
        }
    }

    fn html_lines(&mut self, lines: &str, start: usize) {
        let mut at = start;
        for line in lines.split_inclusive('\n') {
            if comment::resembles(line) {
                let first = self.html == Some(at) && self.at_line_start(at);
                let end = line_end(self.text, at);
                if first {
                    let whole = self.text.get(at..end).unwrap_or_default();
                    self.outline.comments.push(comment::parse(whole, at));
                } else {
                    self.outline.diagnostics.push(misplaced(Span::new(at, end)));
                }
            }
            at += line.len();
        }
    }

    fn at_line_start(&self, offset: usize) -> bool {
        offset == self.base
            || self
                .text
                .get(..offset)
                .is_some_and(|before| before.ends_with('\n'))
    }

    /// The parser lets a list end with the blank lines that follow it; a result goes before them.
    fn place_after(&self, element: Span) -> usize {
        let content = element
            .of(self.text)
            .unwrap_or_default()
            .trim_end_matches([' ', '\t', '\r', '\n']);
        line_end(self.text, element.start() + content.len())
    }
}

impl OpenFence {
    /// Whether a closing line follows the content: the parser's range of a fence includes it, its events do not.
    fn is_closed(&self, text: &str) -> bool {
        let opening = self.opening.of(text).unwrap_or_default();
        let Some(mark) = opening.chars().next() else {
            return false;
        };
        let needed = opening.chars().take_while(|next| *next == mark).count();
        let rest = text
            .get(self.content_end..self.span.end())
            .unwrap_or_default()
            .trim_end();
        rest.chars().rev().take_while(|next| *next == mark).count() >= needed
    }

    /// What is doubtful about a fence that is not one of ours.
    fn doubt(&self, text: &str, closed: bool) -> Option<Diagnostic> {
        if !nearest(&self.word, [WORD]).is_empty() {
            let message = format!(
                "this fence says `{}`, so it is not read as an equilibrium block",
                self.word
            );
            return Some(
                Diagnostic::warning(Rule::FenceName, self.opening, message)
                    .expecting(format!("`{WORD}`"))
                    .did_you_mean(&self.word, [WORD]),
            );
        }
        let content = Span::new(self.opening.end(), self.span.end())
            .of(text)
            .unwrap_or_default();
        (!closed && opens_inside(content)).then(|| {
            let message = "this fence is never closed and swallows an equilibrium block";
            Diagnostic::warning(Rule::UnclosedFence, self.opening, message)
        })
    }
}

/// What is doubtful about an equilibrium fence.
fn doubt(content: &Excerpt, opening: Span, closed: bool) -> Option<Diagnostic> {
    let help = "end the block with a line of as many backticks or tildes, with the same prefix";
    if !closed {
        let message = "this block is not closed";
        return Some(Diagnostic::error(Rule::UnclosedFence, opening, message).helped(help));
    }
    opens_inside(content.text()).then(|| {
        let message =
            "another equilibrium block opens inside this one, so this one was probably not closed";
        Diagnostic::error(Rule::UnclosedFence, opening, message).helped(help)
    })
}

fn opens_inside(content: &str) -> bool {
    content.lines().any(|line| {
        let bare = line.trim_start_matches([' ', '\t', '>', '-', '*', '+']);
        let info = bare.trim_start_matches(['`', '~']);
        bare.len() >= info.len() + 3 && info.split_whitespace().next() == Some(WORD)
    })
}

fn misplaced(span: Span) -> Diagnostic {
    Diagnostic::error(
        Rule::ResultMisplaced,
        span,
        "this comment of a result does not stand where results do",
    )
    .expecting("the comment at the start of a line, outside lists, quotations and other comments")
}
