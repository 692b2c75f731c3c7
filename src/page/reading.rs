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
        let rest = text
            .get(at..)
            .unwrap_or_default()
            .trim_start_matches(['\r', ' ', '>']);
        rest.starts_with("```") || rest.starts_with("~~~")
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
