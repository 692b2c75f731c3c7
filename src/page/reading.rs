//! A page that was read.

use std::collections::BTreeSet;

use crate::{
    page::{
        Block, Region,
        markdown::outline,
        pairing::{Pairing, pairing},
    },
    text::{Diagnostic, LineIndex, Rule, Span},
};

/// Bytes of a page above which a caller should refuse it before reading: 8 MiB, some hundred times a long page.
pub const PAGE_LIMIT: usize = 8 << 20;

/// Blocks of a page above which the page is reported.
const MOST_BLOCKS: usize = 20_000;

/// A Markdown page: its bytes, its equilibrium blocks, its results, and what is wrong with them as far as the page
/// goes. Nothing of the bytes is changed, a byte order mark included; all spans count from the first byte.
#[derive(Clone, Debug)]
pub struct Page {
    text: String,
    blocks: Vec<Block>,
    results: Vec<Region>,
    damaged: BTreeSet<String>,
    diagnostics: Vec<Diagnostic>,
}

/// Why bytes are no page.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PageError {
    /// The bytes are not UTF-8.
    #[error("the page is not UTF-8: byte {offset} begins no character")]
    NotUtf8 {
        /// The first byte that belongs to no character, from 0.
        offset: usize,
        /// Its line, from 1, counted by line feeds.
        line: usize,
    },
}

impl Page {
    /// Reads a page, in time linear in its length.
    ///
    /// # Errors
    ///
    /// [`PageError::NotUtf8`] with the place of the first byte that is not.
    pub fn read(bytes: Vec<u8>) -> Result<Self, PageError> {
        let text = String::from_utf8(bytes).map_err(|error| {
            let offset = error.utf8_error().valid_up_to();
            let line = error
                .as_bytes()
                .iter()
                .take(offset)
                .filter(|byte| **byte == b'\n')
                .count()
                + 1;
            PageError::NotUtf8 { offset, line }
        })?;
        let outline = outline(&text);
        let Pairing {
            regions,
            damaged,
            diagnostics: found,
        } = pairing(&text, &outline);
        let blocks = outside(outline.blocks, &regions);
        let mut diagnostics = outline.diagnostics;
        diagnostics.extend(found);
        diagnostics.extend(too_many(&blocks));
        diagnostics.extend(lone_carriage_returns(&text, &blocks, &regions));
        diagnostics.sort_by_key(|diagnostic| diagnostic.span().start());
        Ok(Self {
            text,
            blocks,
            results: regions,
            damaged,
            diagnostics,
        })
    }

    /// The whole text, a byte order mark included.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The whole page as bytes.
    pub fn bytes(&self) -> &[u8] {
        self.text.as_bytes()
    }

    /// The page's lines, counted anew by each call: keep it.
    pub fn line_index(&self) -> LineIndex<'_> {
        LineIndex::new(&self.text)
    }

    /// The equilibrium blocks in the page's order. What stands in a result, in a comment or in another fence is none.
    pub fn blocks(&self) -> &[Block] {
        &self.blocks
    }

    /// The results in the page's order, superseded and withdrawn ones too.
    pub fn results(&self) -> &[Region] {
        &self.results
    }

    /// What is wrong with fences, line endings and results, in the page's order. With an error about a result or a
    /// line ending in it the page should not be written to.
    pub fn diagnostics(&self) -> &[Diagnostic] {
        &self.diagnostics
    }

    /// Whether a comment of a result of that label stands alone.
    pub(super) fn is_damaged(&self, label: &str) -> bool {
        self.damaged.contains(label)
    }
}

/// The blocks that lie in no result.
fn outside(blocks: Vec<Block>, regions: &[Region]) -> Vec<Block> {
    let inside = |block: &Block| {
        let next = regions.partition_point(|region| region.span.end() <= block.span.start());
        regions
            .get(next)
            .is_some_and(|region| region.span.contains(block.span))
    };
    blocks.into_iter().filter(|block| !inside(block)).collect()
}

fn too_many(blocks: &[Block]) -> Option<Diagnostic> {
    let first = blocks.get(MOST_BLOCKS)?;
    let message = format!("the page has more than {MOST_BLOCKS} equilibrium blocks");
    Some(Diagnostic::error(
        Rule::TooManyBlocks,
        first.opening,
        message,
    ))
}

/// One diagnostic for lone carriage returns: an error at the first that stands in a block or result or hides a
/// fence, else a warning at the first of all.
fn lone_carriage_returns(text: &str, blocks: &[Block], regions: &[Region]) -> Option<Diagnostic> {
    let bytes = text.as_bytes();
    let lone = |(at, byte): (usize, &u8)| {
        (*byte == b'\r' && bytes.get(at + 1) != Some(&b'\n')).then_some(at)
    };
    let found: Vec<usize> = bytes.iter().enumerate().filter_map(lone).collect();
    let first = *found.first()?;
    let in_block = |at: usize| {
        let next = blocks.partition_point(|block| block.span.end() < at);
        blocks
            .get(next)
            .is_some_and(|block| block.span.start() <= at)
    };
    let in_region = |at: usize| {
        let next = regions.partition_point(|region| region.span.end() < at);
        regions
            .get(next)
            .is_some_and(|region| region.span.start() <= at)
    };
    let hides = |at: usize| {
        let rest = text.get(at + 1..).unwrap_or_default();
        let line = rest.trim_start_matches([' ', '>']);
        line.starts_with("```") || line.starts_with("~~~")
    };
    let worst = found
        .iter()
        .copied()
        .find(|at| in_block(*at) || in_region(*at) || hides(*at));
    let count = found.len();
    let message = format!("{count} carriage return(s) without a line feed, the first one here");
    let at = worst.unwrap_or(first);
    let place = Span::new(at, at + 1);
    let diagnostic = match worst {
        Some(_) => Diagnostic::error(Rule::LoneCarriageReturn, place, message),
        None => Diagnostic::warning(Rule::LoneCarriageReturn, place, message),
    };
    Some(diagnostic.helped("save the page with LF or CR LF as line ending"))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn page(text: &str) -> Page {
        Page::read(text.as_bytes().to_vec()).unwrap()
    }

    fn contents(text: &str) -> Vec<String> {
        page(text)
            .blocks()
            .iter()
            .map(|block| block.content().text().to_owned())
            .collect()
    }

    fn rules(text: &str) -> Vec<Rule> {
        page(text)
            .diagnostics()
            .iter()
            .map(Diagnostic::rule)
            .collect()
    }

    #[test]
    fn blocks_are_found_wherever_markdown_allows_a_fence() {
        assert_eq!(contents("```equilibrium\na: 1\n```\n"), ["a: 1\n"]);
        assert_eq!(
            contents("\u{feff}```equilibrium\r\na: 1\r\n```"),
            ["a: 1\n"]
        );
        assert_eq!(
            contents("> - ~~~~ equilibrium x\r\n>   a: 1\r\n>\r\n>     b: 2\r\n>   ~~~~\r\n"),
            ["a: 1\n\n  b: 2\n"]
        );
        assert_eq!(
            contents("1. x\n   ```equilibrium\n   a: 1\n   ```\n2. ```equilibrium\n   ```\n"),
            ["a: 1\n", ""]
        );
        assert_eq!(
            contents("   ```equilibrium\n   a: 1\n  b: 2\n   ```\n"),
            ["a: 1\nb: 2\n"]
        );
    }

    #[test]
    fn what_only_looks_like_a_block_is_none() {
        for text in [
            "    ```equilibrium\n    a: 1\n    ```\n",
            "````\n```equilibrium\na: 1\n```\n````\n",
            "<!--\n```equilibrium\na: 1\n```\n-->\n",
            "<!-- ionfolio result a -->\n~~~ equilibrium\na: 1\n~~~\n<!-- ionfolio end a -->\n",
            "```equilibriums\n```\n",
        ] {
            assert!(contents(text).is_empty(), "{text}");
        }
    }

    #[test]
    fn a_place_in_a_quoted_block_is_the_place_in_the_page() {
        let text = "- x\r\n\r\n  > ```equilibrium\r\n  > µ: 5 µL\r\n  > pH: 7\r\n  > ```\r\n";
        let page = page(text);
        let block = &page.blocks()[0];
        let start = block.content().text().find("pH").unwrap();
        let placed = block.content().in_page(Span::new(start, start + 2));
        assert_eq!(placed.of(text), Some("pH"));
        let line_column = page.line_index().line_column(placed.start());
        assert_eq!((line_column.line, line_column.column), (5, 5));
    }

    #[test]
    fn a_block_that_is_not_closed_is_reported_at_its_opening() {
        for text in [
            "```equilibrium\na: 1\n",
            "- ```equilibrium\n  a: 1\n\ntext\n",
            "````equilibrium\n```\n",
        ] {
            let page = page(text);
            assert_eq!(rules(text), [Rule::UnclosedFence], "{text}");
            assert!(page.diagnostics()[0].is_error() && !page.blocks()[0].is_closed());
        }
        assert_eq!(
            rules("```equilibrium\na: 1\n\n```equilibrium\nb: 1\n```\n"),
            [Rule::UnclosedFence]
        );
        assert_eq!(
            rules("```text\nx\n\n```equilibrium\nb: 1\n"),
            [Rule::UnclosedFence]
        );
        assert_eq!(rules("````markdown\n```equilibrium\nb: 1\n```\n````\n"), []);
    }

    #[test]
    fn an_almost_right_word_is_asked_about() {
        let found = page("```Equilibrum\n```\n").diagnostics()[0].clone();
        assert_eq!(
            (found.rule(), found.help()),
            (Rule::FenceName, Some("did you mean `equilibrium`?"))
        );
        assert_eq!(rules("```yaml\n```\n```\n```\n"), []);
    }

    #[test]
    fn lone_carriage_returns_weigh_by_where_they_stand() {
        let severity = |text: &str| page(text).diagnostics().first().map(Diagnostic::is_error);
        assert_eq!(severity("a\rb\n"), Some(false));
        assert_eq!(severity("text\r```equilibrium\ra: 1\r```\r"), Some(true));
        assert_eq!(
            severity("a\rb\n\n```equilibrium\na: 1\rb: 2\n```\n"),
            Some(true)
        );
        assert_eq!(severity("a\r\n"), None);
    }

    #[test]
    fn bytes_that_are_no_text_are_named_by_their_place() {
        let refused = Page::read(b"a\n\xb5L".to_vec())
            .map(|page| page.text)
            .unwrap_err();
        assert_eq!(refused, PageError::NotUtf8 { offset: 2, line: 2 });
    }
}
