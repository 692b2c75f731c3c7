//! The scanner's character counts as byte offsets.

use crate::text::Span;

/// The scanner counts characters; this turns its counts into bytes of the whole text.
pub(super) struct Offsets {
    base: usize,
    length: usize,
    /// Byte offset of each character; nothing if all are ASCII.
    starts: Option<Vec<usize>>,
}

impl Offsets {
    pub(super) fn of(source: &str, base: usize) -> Self {
        let starts =
            (!source.is_ascii()).then(|| source.char_indices().map(|(offset, _)| offset).collect());
        Self {
            base,
            length: source.len(),
            starts,
        }
    }

    pub(super) fn byte(&self, character: usize) -> usize {
        let inside = match &self.starts {
            None => character.min(self.length),
            Some(starts) => starts.get(character).copied().unwrap_or(self.length),
        };
        self.base + inside
    }

    /// What of `source` stands at a span of the whole text.
    pub(super) fn slice<'s>(&self, span: Span, source: &'s str) -> &'s str {
        let inside = span.start().saturating_sub(self.base)..span.end().saturating_sub(self.base);
        source.get(inside).unwrap_or_default()
    }
}
