//! A value, or a stretch of one, with the places of its parts.

use crate::text::Span;
use crate::yaml::Scalar;

/// A value, or a stretch of one, that holds an amount.
#[derive(Clone, Copy, Debug)]
pub(super) struct Piece<'s> {
    scalar: &'s Scalar,
    within: Span,
}

impl<'s> Piece<'s> {
    /// The text that is to be read.
    pub(super) fn text(self) -> &'s str {
        self.within.of(self.scalar.text()).unwrap_or_default()
    }

    /// The place of a part of that text.
    pub(super) fn place(self, part: Span) -> Span {
        self.scalar.part(part.moved_by(self.within.start()))
    }

    /// The place of the whole of it.
    pub(super) fn span(self) -> Span {
        if self.within.len() == self.scalar.text().len() {
            self.scalar.span()
        } else {
            self.place(Span::new(0, self.within.len()))
        }
    }

    /// A part of it, without the blanks at its ends.
    pub(super) fn part(self, start: usize, end: usize) -> Self {
        let blank_free = trimmed(self.text(), start, end);
        Self {
            scalar: self.scalar,
            within: blank_free.moved_by(self.within.start()),
        }
    }

    /// What stands before and after the first `separator`.
    pub(super) fn split_once(self, separator: &str) -> Option<(Self, Self)> {
        let at = self.text().find(separator)?;
        let length = self.text().len();
        Some((self.part(0, at), self.part(at + separator.len(), length)))
    }
}

impl<'s> From<&'s Scalar> for Piece<'s> {
    fn from(scalar: &'s Scalar) -> Self {
        Self {
            scalar,
            within: Span::new(0, scalar.text().len()),
        }
    }
}

/// A span without the blanks at its ends.
pub(super) fn trimmed(text: &str, start: usize, end: usize) -> Span {
    let part = text.get(start..end).unwrap_or_default();
    let left = part.len() - part.trim_start().len();
    let right = part.trim_end().len();
    Span::new(start + left.min(right), start + right)
}
