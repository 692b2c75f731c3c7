//! From comment lines to results: which belong together, and which stand alone.

use std::collections::{BTreeMap, BTreeSet};

use crate::{
    page::{
        anatomy::{Anatomy, anatomy},
        comment::{Comment, Kind, Mark},
        line_ending::{ending_before, line_end},
        markdown::Outline,
        region::Region,
        signed_question,
    },
    text::{Diagnostic, Excerpt, Rule, Span},
};

/// The results of a page, and the labels of comments that stand alone, so that nothing is put beside them.
#[derive(Default)]
pub(super) struct Pairing {
    pub(super) regions: Vec<Region>,
    pub(super) damaged: BTreeSet<String>,
    pub(super) diagnostics: Vec<Diagnostic>,
}

/// Pairs the comments of an outline. A first comment and a last one are a pair if they name the same label and no
/// other comment stands between them; anything else is reported. So no text can lie in two results, and a comment
/// that was slipped into a result is noticed.
pub(super) fn pairing(text: &str, outline: &Outline) -> Pairing {
    let mut pairing = Pairing::default();
    let ends = ends_by_label(&outline.comments);
    let mut comments = outline.comments.iter().peekable();
    while let Some(comment) = comments.next() {
        match (&comment.kind, comments.peek().map(|next| &next.kind)) {
            (
                Kind::Result {
                    label,
                    label_span,
                    mark,
                },
                Some(Kind::End { label: end }),
            ) if label == end => {
                let Some(last) = comments.next() else { break };
                let head = Head {
                    label,
                    label_span: *label_span,
                    mark: *mark,
                    opening: comment.span,
                };
                pairing.add(text, &head, last.span, outline);
            }
            _ => pairing.refuse(comment, &ends),
        }
    }
    pairing.chain();
    pairing.refuse_duplicates();
    pairing
}

/// What the first comment of a result says.
struct Head<'c> {
    label: &'c str,
    label_span: Span,
    mark: Option<Mark>,
    opening: Span,
}

impl Pairing {
    fn add(&mut self, text: &str, head: &Head<'_>, last: Span, outline: &Outline) {
        let opening = head.opening;
        let inner_start = text
            .get(opening.end()..)
            .and_then(|rest| rest.find('\n'))
            .map_or(last.start(), |at| opening.end() + at + 1);
        let inner = Span::new(inner_start, last.start());
        let Anatomy {
            answer,
            record,
            acts,
            diagnostics,
        } = anatomy(text, inner, &outline.fences);
        self.diagnostics.extend(diagnostics);
        let notice = head
            .mark
            .and_then(|mark| notice(text, opening.start(), mark));
        let question = notice.and_then(|notice| {
            signed_question::above(text, notice.start(), &outline.fences, head.label)
        });
        let marked = notice.map_or(opening.start(), Span::start);
        let first = question.as_ref().map_or(marked, |kept| kept.span.start());
        self.regions.push(Region {
            label: head.label.to_owned(),
            label_span: head.label_span,
            mark: head.mark,
            opening,
            notice,
            question,
            span: Span::new(opening.start(), last.end()),
            owned: Span::new(owned_start(text, first), last.end()),
            chain_end: last.end(),
            inner: Excerpt::of_lines(text, inner),
            answer,
            record,
            acts,
        });
    }

    fn refuse(&mut self, comment: &Comment, ends: &BTreeMap<&str, Vec<Span>>) {
        let diagnostic = match &comment.kind {
            Kind::Malformed => Diagnostic::error(
                Rule::ResultComment,
                comment.span,
                "this line begins like a comment of a result and is none",
            )
            .expecting("`<!-- ionfolio result LABEL -->` or `<!-- ionfolio end LABEL -->`"),
            Kind::End { label } => {
                self.damaged.insert(label.clone());
                let message = format!("the result `{label}` ends here without having begun");
                Diagnostic::error(Rule::ResultUnpaired, comment.span, message).expecting(format!(
                    "`<!-- ionfolio result {label} -->` before it, and no other comment between"
                ))
            }
            Kind::Result { label, .. } => {
                self.damaged.insert(label.clone());
                let later = ends.get(&**label).and_then(|all| {
                    all.get(all.partition_point(|end| end.start() < comment.span.start()))
                });
                if let Some(end) = later {
                    let message = format!("another comment of a result stands inside `{label}`");
                    Diagnostic::error(Rule::ResultNested, comment.span, message)
                        .and(*end, "it ends here")
                } else {
                    let message = format!("the result `{label}` begins here and does not end");
                    Diagnostic::error(Rule::ResultUnpaired, comment.span, message)
                        .expecting(format!("`<!-- ionfolio end {label} -->` after it"))
                }
            }
        };
        self.diagnostics.push(diagnostic);
    }

    /// Notes for each result where the last of those ends that follow it without a line between.
    fn chain(&mut self) {
        let mut next: Option<(usize, usize)> = None;
        for region in self.regions.iter_mut().rev() {
            if let Some((start, end)) = next
                && start == region.span.end()
            {
                region.chain_end = end;
            }
            next = Some((region.owned.start(), region.chain_end));
        }
    }

    fn refuse_duplicates(&mut self) {
        let mut first: BTreeMap<&str, Span> = BTreeMap::new();
        for region in self.regions.iter().filter(|region| region.mark.is_none()) {
            if let Some(earlier) = first.get(&*region.label) {
                let message = format!(
                    "the page has two results `{}`, and neither is superseded",
                    region.label
                );
                let found = Diagnostic::error(Rule::ResultDuplicate, region.label_span, message);
                self.diagnostics.push(found.and(*earlier, "the first one"));
            } else {
                first.insert(&region.label, region.label_span);
            }
        }
    }
}

fn ends_by_label(comments: &[Comment]) -> BTreeMap<&str, Vec<Span>> {
    let mut ends: BTreeMap<&str, Vec<Span>> = BTreeMap::new();
    for comment in comments {
        if let Kind::End { label } = &comment.kind {
            ends.entry(label).or_default().push(comment.span);
        }
    }
    ends
}

/// The visible line right above the first comment at `start`.
fn notice(text: &str, start: usize, mark: Mark) -> Option<Span> {
    let end = ending_before(text, start)?;
    let begin = text
        .get(..end)?
        .rfind('\n')
        .map_or(0, |newline| newline + 1);
    let line = Span::new(begin, line_end(text, begin));
    line.of(text)?.starts_with(mark.notice()).then_some(line)
}

/// A result was put in with two line endings before it: one ends the line before, one makes a blank line. Both go
/// when it goes. If the blank line is no longer there, only the ending of the line before does.
fn owned_start(text: &str, first: usize) -> usize {
    let Some(ending) = ending_before(text, first) else {
        return first;
    };
    ending_before(text, ending).unwrap_or(ending)
}

#[cfg(test)]
mod tests {
    use crate::{
        page::Page,
        text::{Diagnostic, Rule},
    };

    const A: &str = "<!-- ionfolio result a -->\n";
    const END_A: &str = "<!-- ionfolio end a -->\n";
    const B: &str = "<!-- ionfolio result b -->\n";
    const END_B: &str = "<!-- ionfolio end b -->\n";

    fn found(parts: &[&str]) -> (Vec<String>, Vec<Rule>) {
        let page = Page::read(parts.concat().into_bytes()).unwrap();
        let labels = page
            .results()
            .iter()
            .map(|region| region.label().to_owned())
            .collect();
        (
            labels,
            page.diagnostics().iter().map(Diagnostic::rule).collect(),
        )
    }

    fn labels(names: &[&str]) -> Vec<String> {
        names.iter().map(|&name| name.to_owned()).collect()
    }

    #[test]
    fn results_follow_each_other() {
        assert_eq!(
            found(&[A, "x\n", END_A, B, "y\n", END_B]),
            (labels(&["a", "b"]), vec![])
        );
        assert_eq!(
            found(&["text\n", A, END_A, "text\n"]),
            (labels(&["a"]), vec![])
        );
    }

    #[test]
    fn comments_that_stand_alone_are_reported() {
        assert_eq!(
            found(&[A, "x\n"]),
            (labels(&[]), vec![Rule::ResultUnpaired])
        );
        assert_eq!(found(&[END_A]), (labels(&[]), vec![Rule::ResultUnpaired]));
        assert_eq!(
            found(&[A, B, END_B]),
            (labels(&["b"]), vec![Rule::ResultUnpaired])
        );
        let nested = vec![Rule::ResultNested, Rule::ResultUnpaired];
        assert_eq!(found(&[A, B, END_B, END_A]), (labels(&["b"]), nested));
        let slipped = vec![
            Rule::ResultNested,
            Rule::ResultComment,
            Rule::ResultUnpaired,
        ];
        assert_eq!(
            found(&[A, "<!-- ionfolio end  a -->\n", END_A]),
            (labels(&[]), slipped)
        );
    }

    #[test]
    fn a_fence_left_open_in_a_result_takes_its_end_away() {
        assert_eq!(
            found(&[A, "```\nx\n", END_A]),
            (labels(&[]), vec![Rule::ResultUnpaired])
        );
    }

    #[test]
    fn comments_shown_in_code_are_no_results_and_moved_ones_are_reported() {
        assert_eq!(
            found(&["```\n", A, END_A, "```\n", "    ", A]),
            (labels(&[]), vec![])
        );
        for text in [
            ["- ", A],
            ["> ", A],
            ["  ", A],
            ["<div>\n", A],
            ["<!--\n", A],
        ] {
            assert_eq!(
                found(&text),
                (labels(&[]), vec![Rule::ResultMisplaced]),
                "{text:?}"
            );
        }
    }

    #[test]
    fn two_results_of_one_label_need_a_mark() {
        assert_eq!(found(&[A, END_A, A, END_A]).1, [Rule::ResultDuplicate]);
        assert_eq!(
            found(&["<!-- ionfolio result a superseded -->\n", END_A, A, END_A]).1,
            []
        );
    }
}
