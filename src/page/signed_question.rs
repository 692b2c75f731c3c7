//! The question of a marked result as it was signed: a fence above the notice, since the block below it belongs to the successor.

use crate::{
    page::{
        line_ending::{ending_before, line_end},
        region::Fenced,
    },
    text::{Excerpt, Span},
};

/// First word of the fence; the label follows it.
const WORD: &str = "signed-question";

/// The fence, with LF as line ending; none if `question` is not whole lines.
pub(super) fn fence(label: &str, question: &str) -> Option<String> {
    let whole = question.is_empty() || question.ends_with('\n');
    if !whole || question.contains('\r') {
        return None;
    }
    let ticks = "`".repeat(longest_run(question).max(2) + 1);
    Some(format!("{ticks}{WORD} {label}\n{question}{ticks}\n"))
}

fn longest_run(text: &str) -> usize {
    let runs = text.split(|c| c != '`');
    runs.map(str::len).max().unwrap_or(0)
}

/// The fence that ends in the line right above `notice`. It must be the last of `fences`, the page's top-level fences, before
/// that place, so that Markdown shows what is hashed.
pub(super) fn above(
    text: &str,
    notice: usize,
    fences: &[(usize, bool)],
    label: &str,
) -> Option<Fenced> {
    let end = ending_before(text, notice)?;
    let before = fences.partition_point(|(start, _)| *start < notice);
    let (start, _) = *fences.get(before.checked_sub(1)?)?;
    let opening = Span::new(start, line_end(text, start));
    let line = opening.of(text)?;
    let info = line.trim_start_matches('`');
    let ticks = line.get(..line.len() - info.len())?;
    if info.strip_prefix(WORD)?.strip_prefix(' ')? != label {
        return None;
    }
    let content = opening.end() + text.get(opening.end()..)?.find('\n')? + 1;
    let closing = text.get(..end)?.rfind('\n')? + 1;
    if closing < content || text.get(closing..end)? != ticks {
        return None;
    }
    Some(Fenced {
        content: Excerpt::of_lines(text, Span::new(content, closing)),
        span: Span::new(start, end),
    })
}

#[cfg(test)]
mod tests {
    use crate::page::{Mark, Page, PlacingError};

    const RESULT: &str = "<!-- ionfolio result a -->\nx\n<!-- ionfolio end a -->\n";

    fn marked(question: &str, crlf: bool) -> Page {
        let before = format!("text\n\n{RESULT}");
        let before = if crlf {
            before.replace('\n', "\r\n")
        } else {
            before
        };
        let page = Page::read(before.into_bytes()).unwrap();
        let edit = page
            .marking(&page.results()[0], Mark::Superseded, "by `a`", question)
            .unwrap();
        Page::read(page.with(vec![edit]).unwrap()).unwrap()
    }

    #[test]
    fn what_was_asked_is_read_back_byte_for_byte() {
        for question in [
            "",
            "label: a\n",
            "label: a\n\n  note: \"```\"\n",
            "```signed-question a\nx\n```\n````\n",
            "~~~\n> **Superseded** by b\n<!-- ionfolio end a -->\n",
        ] {
            for crlf in [false, true] {
                let page = marked(question, crlf);
                let [region] = page.results() else {
                    panic!("{question:?}: {:?}", page.results());
                };
                let kept = region.question().map(|fence| fence.content.text());
                assert_eq!(kept, Some(question), "{crlf}");
                assert_eq!(page.diagnostics(), []);
            }
        }
    }

    #[test]
    fn a_fence_that_is_not_right_above_or_not_of_that_label_is_somebody_elses() {
        let page = marked("label: a\n", false);
        for (before, after) in [
            ("```\n> **", "```\n\n> **"),
            ("question a", "question b"),
            ("```signed", "~~~~\n```signed"),
            ("```signed", "````signed"),
        ] {
            let text = page.text().replacen(before, after, 1);
            let page = Page::read(text.clone().into_bytes()).unwrap();
            let found = page.results().iter().find_map(|region| region.question());
            assert_eq!(found, None, "{text}");
        }
    }

    #[test]
    fn a_second_mark_keeps_the_first_copy_and_broken_lines_are_refused() {
        let page = marked("label: a\n", false);
        let region = &page.results()[0];
        let edit = page.marking(region, Mark::Withdrawn, "by `b`", "other\n");
        let page = Page::read(page.with(vec![edit.unwrap()]).unwrap()).unwrap();
        let region = &page.results()[0];
        assert_eq!(region.question().unwrap().content.text(), "label: a\n");
        let plain = Page::read(RESULT.as_bytes().to_vec()).unwrap();
        for broken in ["no end", "a\rb\n"] {
            let refused = plain.marking(&plain.results()[0], Mark::Superseded, "by `a`", broken);
            assert_eq!(refused, Err(PlacingError::Question), "{broken:?}");
        }
    }
}
