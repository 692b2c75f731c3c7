//! A range of bytes of a text.

use std::ops::Range;

/// A range of bytes of one text, `start` included and `end` excluded; `start <= end` always.
///
/// Which text is meant is said by whoever hands the span on: the page, or an excerpt of it such as a block.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Span {
    start: usize,
    end: usize,
}

impl Span {
    /// The span of the bytes `start..end`; an `end` before `start` gives the empty span at `start`.
    pub const fn new(start: usize, end: usize) -> Self {
        let end = if end < start { start } else { end };
        Self { start, end }
    }

    /// The empty span at `offset`: a place between two characters.
    pub const fn at(offset: usize) -> Self {
        Self {
            start: offset,
            end: offset,
        }
    }

    /// First byte.
    pub const fn start(self) -> usize {
        self.start
    }

    /// Byte after the last one.
    pub const fn end(self) -> usize {
        self.end
    }

    /// Length in bytes.
    pub const fn len(self) -> usize {
        self.end - self.start
    }

    /// Whether the span is a place only.
    pub const fn is_empty(self) -> bool {
        self.start == self.end
    }

    /// Whether `other` lies wholly inside.
    pub const fn contains(self, other: Self) -> bool {
        self.start <= other.start && other.end <= self.end
    }

    /// Whether the byte at `offset` is one of the span's.
    pub const fn holds(self, offset: usize) -> bool {
        self.start <= offset && offset < self.end
    }

    /// The smallest span that holds both.
    #[must_use]
    pub fn to(self, other: Self) -> Self {
        Self {
            start: self.start.min(other.start),
            end: self.end.max(other.end),
        }
    }

    /// The same span in a text to whose front `bytes` were added.
    #[must_use]
    pub const fn moved_by(self, bytes: usize) -> Self {
        Self {
            start: self.start.saturating_add(bytes),
            end: self.end.saturating_add(bytes),
        }
    }

    /// The bytes as a range, for slicing.
    pub const fn range(self) -> Range<usize> {
        self.start..self.end
    }

    /// What stands there in `text`; nothing if the span does not fit it or cuts a character.
    pub fn of(self, text: &str) -> Option<&str> {
        text.get(self.range())
    }
}

impl From<Range<usize>> for Span {
    fn from(range: Range<usize>) -> Self {
        Self::new(range.start, range.end)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_span_never_ends_before_it_starts() {
        assert_eq!(Span::new(5, 2), Span::at(5));
        assert_eq!(Span::new(2, 5).to(Span::at(9)), Span::new(2, 9));
    }

    #[test]
    fn a_span_that_cuts_a_character_holds_nothing() {
        assert_eq!(Span::new(0, 1).of("µL"), None);
        assert_eq!(Span::new(0, 2).of("µL"), Some("µ"));
        assert_eq!(Span::new(0, 9).of("µL"), None);
    }
}
