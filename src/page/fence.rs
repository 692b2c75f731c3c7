//! An equilibrium fence.

use crate::text::{Excerpt, Span};

/// A fence whose first word is `equilibrium`, wherever Markdown allows one.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Block {
    pub(super) content: Excerpt,
    pub(super) span: Span,
    pub(super) opening: Span,
    pub(super) closed: bool,
    pub(super) place: usize,
}

impl Block {
    /// What stands between the fences, without the prefixes of lists and quotations and with LF as line ending: the
    /// bytes of it are the question that a record hashes. It knows where each piece of it stands in the page.
    pub fn content(&self) -> &Excerpt {
        &self.content
    }

    /// The whole fence in the page, from its first backtick or tilde to its last.
    pub fn span(&self) -> Span {
        self.span
    }

    /// The opening line from its first backtick or tilde to its end: where to point at the block as a whole.
    pub fn opening(&self) -> Span {
        self.opening
    }

    /// Whether the fence is closed by a line of its own. No result can be placed after one that is not.
    pub fn is_closed(&self) -> bool {
        self.closed
    }

    /// Where a result goes: the end of the last line of the top-level Markdown element that holds the block, before
    /// its line ending. Several blocks of one list or quotation have the same place.
    pub fn place(&self) -> usize {
        self.place
    }
}
