//! Which edit puts a result into a page, marks it or takes it out.

use crate::{
    page::{
        Block, Edit, Mark, Page, Region, SpliceError, Written,
        comment::{closing, opening},
        line_ending::{LineEnding, with_ending},
        signed_question,
        splice::spliced,
    },
    text::Span,
};

/// Why a result cannot be put into the page, or marked.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PlacingError {
    /// The block's fence is not closed, so that a result would become part of it.
    #[error("the block is not closed")]
    OpenBlock,
    /// The line after which the result goes ends with a lone carriage return.
    #[error("a lone carriage return stands where the result goes")]
    LoneCarriageReturn,
    /// The page has two current results of that label.
    #[error("the page has two results `{label}`")]
    Duplicate {
        /// The label.
        label: String,
    },
    /// One of the two comments of a result of that label is missing or stands in the wrong place.
    #[error("the comments of the result `{label}` are damaged")]
    Damaged {
        /// The label.
        label: String,
    },
    /// The result is sealed: acts may be added to it, but answer, record and the acts it has stay.
    #[error("the result `{label}` is sealed and can only be added to")]
    Sealed {
        /// The label.
        label: String,
    },
    /// The text is for another result.
    #[error("the result is `{label}`, the text is for another")]
    OtherLabel {
        /// The result's label.
        label: String,
    },
    /// The notice is not one line of text.
    #[error("the notice is not one line")]
    Notice,
    /// The question to be kept is not whole lines that end with LF.
    #[error("the question is not whole lines")]
    Question,
}

impl Page {
    /// The edit that puts a result after its block, or in the place of the current result of the same label.
    ///
    /// A new result goes after the top-level Markdown element that holds the block, and after the results that
    /// already follow it; a blank line is put before it, none after it, and nothing else of the page changes. The line
    /// ending is that of the block's first line, or of the result that is replaced. If the same text stands there
    /// already, the edit changes nothing.
    ///
    /// The label is the one of `written`; that it is the block's is for the caller to see to.
    ///
    /// # Errors
    ///
    /// See [`PlacingError`]. A sealed result is never replaced, only added to.
    pub fn placing(&self, block: &Block, written: &Written) -> Result<Edit, PlacingError> {
        let label = written.label();
        let named = || label.to_owned();
        if self.is_damaged(label) {
            return Err(PlacingError::Damaged { label: named() });
        }
        let mut current = self
            .results()
            .iter()
            .filter(|region| region.label() == label && region.mark().is_none());
        match (current.next(), current.next()) {
            (Some(_), Some(_)) => Err(PlacingError::Duplicate { label: named() }),
            (Some(region), None) => self.replacing(region, written),
            (None, _) => self.inserting(block, written),
        }
    }

    /// The edit that puts a text in the place of this very result, whatever its mark; the mark and the notice stay.
    ///
    /// # Errors
    ///
    /// [`PlacingError::Sealed`] if the result is sealed and the text does more than add acts,
    /// [`PlacingError::OtherLabel`] if the text is for another label.
    pub fn replacing(&self, region: &Region, written: &Written) -> Result<Edit, PlacingError> {
        if written.label() != region.label() {
            return Err(PlacingError::OtherLabel {
                label: region.label().to_owned(),
            });
        }
        if !region.is_draft() && !adds_to(written, region) {
            return Err(PlacingError::Sealed {
                label: region.label().to_owned(),
            });
        }
        let inner = written.inner();
        let comment_end = region.opening.end();
        if region.inner().text() == inner {
            return Ok(Edit {
                span: Span::at(comment_end),
                replacement: String::new(),
            });
        }
        let ending = LineEnding::of_line(self.text(), region.opening.start());
        let last = closing(region.label());
        let span = Span::new(comment_end, region.span().end());
        Ok(Edit {
            span,
            replacement: with_ending(&format!("\n{inner}{last}"), ending),
        })
    }

    /// The edit that marks a result and puts a visible line above it: `> **Superseded** ` and the notice, which
    /// must be one line of Markdown, escaped by the caller. A mark and line that stand there already are replaced.
    ///
    /// Above that line goes `question`, the content of the block as it was signed, in a fence of its own: the block may
    /// change from now on. A copy that stands there already stays.
    ///
    /// # Errors
    ///
    /// [`PlacingError::Notice`] if the notice is empty or not one line, [`PlacingError::Question`] if the question is
    /// not whole lines.
    pub fn marking(
        &self,
        region: &Region,
        mark: Mark,
        notice: &str,
        question: &str,
    ) -> Result<Edit, PlacingError> {
        if notice.trim().is_empty() || notice.contains(['\n', '\r']) {
            return Err(PlacingError::Notice);
        }
        let fence =
            signed_question::fence(region.label(), question).ok_or(PlacingError::Question)?;
        let kept = region.question().map_or(fence, |_| String::new());
        let ending = LineEnding::of_line(self.text(), region.opening.start());
        let comment = opening(region.label(), Some(mark));
        let start = region.notice().map_or(region.opening.start(), Span::start);
        let span = Span::new(start, region.opening.end());
        Ok(Edit {
            span,
            replacement: with_ending(
                &format!("{kept}{}{notice}\n{comment}", mark.notice()),
                ending,
            ),
        })
    }

    /// The edit that takes a result out, with its notice, the question kept above it and the blank line that was put before it.
    pub fn removing(&self, region: &Region) -> Edit {
        Edit {
            span: region.owned,
            replacement: String::new(),
        }
    }

    /// The page's bytes with every result taken out: the page as its author wrote it.
    pub fn without_results(&self) -> Vec<u8> {
        let edits = self
            .results()
            .iter()
            .map(|region| self.removing(region))
            .collect();
        // Results do not overlap and lie in the page, so that nothing is refused here.
        spliced(self.text(), edits).unwrap_or_else(|_| self.bytes().to_vec())
    }

    /// The page's bytes with edits made, in any order; everything outside them is copied.
    ///
    /// # Errors
    ///
    /// [`SpliceError`] if two edits overlap or one does not fit the page.
    pub fn with(&self, edits: Vec<Edit>) -> Result<Vec<u8>, SpliceError> {
        spliced(self.text(), edits)
    }

    fn inserting(&self, block: &Block, written: &Written) -> Result<Edit, PlacingError> {
        if !block.is_closed() {
            return Err(PlacingError::OpenBlock);
        }
        let text = self.text();
        if text
            .get(..block.place())
            .is_none_or(|before| before.ends_with('\r'))
        {
            return Err(PlacingError::LoneCarriageReturn);
        }
        let ending = LineEnding::of_line(text, block.opening().start());
        let (first, last) = (opening(written.label(), None), closing(written.label()));
        let replacement = with_ending(&format!("\n\n{first}\n{}{last}", written.inner()), ending);
        Ok(Edit {
            span: Span::at(self.after_results_at(block.place())),
            replacement,
        })
    }

    /// The end of the results that follow `place` without a line between; `place` itself if there are none.
    fn after_results_at(&self, place: usize) -> usize {
        let regions = self.results();
        let next = regions.partition_point(|region| region.owned.start() < place);
        regions
            .get(next)
            .filter(|region| region.owned.start() == place)
            .map_or(place, |region| region.chain_end)
    }
}

fn adds_to(written: &Written, region: &Region) -> bool {
    let record = region.record().map(|fenced| fenced.content.text());
    let acts = region.acts();
    written.answer() == region.answer().text()
        && written.record() == record
        && written.acts().len() >= acts.len()
        && acts
            .iter()
            .zip(written.acts())
            .all(|(stands, given)| stands.content.text() == given)
}

#[cfg(test)]
mod tests {
    use super::*;

    const PAGE: &str = "- x\r\n\r\n  ```equilibrium\r\n  label: a\r\n  ```\r\n\r\n\r\ntext  \r\n";

    fn read(text: impl Into<Vec<u8>>) -> Page {
        Page::read(text.into()).unwrap()
    }

    fn put(page: &Page, written: &Written) -> Result<String, PlacingError> {
        let edit = page.placing(&page.blocks()[0], written)?;
        Ok(String::from_utf8(page.with(vec![edit]).unwrap()).unwrap())
    }

    fn sealed(acts: &[&str]) -> Written {
        let acts = acts.iter().map(|&act| act.to_owned()).collect();
        Written::sealed("a", "**x**\n", "r 1\nr 2\n", acts).unwrap()
    }

    #[test]
    fn a_result_stands_after_the_list_with_the_pages_line_endings() {
        let with_result = put(&read(PAGE), &Written::draft("a", "**x**\n").unwrap()).unwrap();
        let inserted = "\r\n<!-- ionfolio result a -->\r\n**x**\r\n<!-- ionfolio end a -->\r\n";
        assert_eq!(
            with_result,
            PAGE.replace("  ```\r\n\r\n\r\n", &format!("  ```\r\n{inserted}\r\n\r\n"))
        );
    }

    #[test]
    fn the_parts_are_the_bytes_that_are_hashed() {
        let page = read(put(&read(PAGE), &sealed(&["act 1\nsig\n"])).unwrap());
        let region = &page.results()[0];
        assert_eq!(
            region.inner().text(),
            "**x**\n\n```record\nr 1\nr 2\n```\n\n```act\nact 1\nsig\n```\n"
        );
        assert_eq!(region.answer().text(), "**x**\n");
        assert_eq!(region.record().unwrap().content.text(), "r 1\nr 2\n");
        assert_eq!(region.acts()[0].content.text(), "act 1\nsig\n");
        assert_eq!(
            region.acts()[0].span.of(page.text()),
            Some("```act\r\nact 1\r\nsig\r\n```")
        );
        assert!(!region.is_draft());
    }

    #[test]
    fn a_sealed_result_is_only_added_to() {
        let draft = read(put(&read(PAGE), &Written::draft("a", "old\n").unwrap()).unwrap());
        let page = read(put(&draft, &sealed(&["one\n"])).unwrap());
        let refused = Err(PlacingError::Sealed {
            label: "a".to_owned(),
        });
        assert_eq!(
            put(&page, &Written::draft("a", "**x**\n").unwrap()),
            refused
        );
        assert_eq!(put(&page, &sealed(&[])), refused);
        assert_eq!(put(&page, &sealed(&["other\n", "two\n"])), refused);
        let other = Written::draft("b", "x\n").unwrap();
        let expected = Err(PlacingError::OtherLabel {
            label: "a".to_owned(),
        });
        assert_eq!(page.replacing(&page.results()[0], &other), expected);
        let added = read(put(&page, &sealed(&["one\n", "two\n"])).unwrap());
        assert_eq!(added.results()[0].acts().len(), 2);
        assert_eq!(added.without_results(), PAGE.as_bytes());
    }

    #[test]
    fn a_superseded_result_stays_and_the_new_one_stands_below() {
        let page = read(put(&read(PAGE), &sealed(&["one\n"])).unwrap());
        let old = page.results()[0].answer().clone();
        let edit = page
            .marking(
                &page.results()[0],
                Mark::Superseded,
                "by `a`: balance was out",
                "label: a\n",
            )
            .unwrap();
        let page = read(page.with(vec![edit]).unwrap());
        assert_eq!(page.results()[0].answer().text(), old.text());
        let notice = page.results()[0]
            .notice()
            .and_then(|line| line.of(page.text()));
        assert_eq!(notice, Some("> **Superseded** by `a`: balance was out"));
        let page = read(put(&page, &Written::draft("a", "new\n").unwrap()).unwrap());
        let answers: Vec<_> = page
            .results()
            .iter()
            .map(|region| region.answer().text())
            .collect();
        assert_eq!(answers, [old.text(), "new\n"]);
        assert_eq!(page.diagnostics(), []);
    }

    #[test]
    fn results_of_one_list_stand_below_each_other_in_the_order_in_which_they_came() {
        let list = "- ```equilibrium\n  ```\n- ```equilibrium\n  ```\n\nend\n";
        let mut page = read(list);
        for label in ["a", "b", "c"] {
            page = read(put(&page, &Written::draft(label, "x\n").unwrap()).unwrap());
        }
        let labels: Vec<_> = page.results().iter().map(Region::label).collect();
        assert_eq!(labels, ["a", "b", "c"]);
        assert_eq!(page.without_results(), list.as_bytes());
    }

    #[test]
    fn nothing_is_put_where_it_would_be_lost_or_doubled() {
        let written = Written::draft("a", "x\n").unwrap();
        let refused = |text: &str| put(&read(text), &written).unwrap_err();
        assert_eq!(refused("```equilibrium\n"), PlacingError::OpenBlock);
        assert_eq!(
            refused("```equilibrium\n```\r"),
            PlacingError::LoneCarriageReturn
        );
        let (first, last) = ("<!-- ionfolio result a -->\n", "<!-- ionfolio end a -->\n");
        let block = "```equilibrium\n```\n";
        let label = || "a".to_owned();
        assert_eq!(
            refused(&format!("{block}{first}")),
            PlacingError::Damaged { label: label() }
        );
        assert_eq!(
            refused(&format!("{block}{first}{last}{first}{last}")),
            PlacingError::Duplicate { label: label() }
        );
        let page = read(format!("{block}{first}{last}"));
        assert_eq!(
            page.marking(&page.results()[0], Mark::Withdrawn, "a\nb", ""),
            Err(PlacingError::Notice)
        );
    }
}
