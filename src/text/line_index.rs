//! Byte offsets as lines and columns, and back.

use crate::text::Span;

/// A place as people count: line and column from 1, the column in characters (Unicode scalar values).
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct LineColumn {
    /// Line, from 1.
    pub line: usize,
    /// Column in characters, from 1.
    pub column: usize,
}

impl std::fmt::Display for LineColumn {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(formatter, "{}:{}", self.line, self.column)
    }
}

/// Where the lines of a text begin. Made once for a text, in time linear in its length, and asked often.
///
/// A line ends with LF, with CR LF, or with a lone CR, as `CommonMark` counts. A byte order mark at the start of
/// the text is no column.
#[derive(Clone, Debug)]
pub struct LineIndex<'t> {
    text: &'t str,
    starts: Vec<usize>,
}

impl<'t> LineIndex<'t> {
    /// The lines of `text`.
    pub fn new(text: &'t str) -> Self {
        let bytes = text.as_bytes();
        let mut starts = vec![if text.starts_with('\u{feff}') {
            '\u{feff}'.len_utf8()
        } else {
            0
        }];
        for (offset, byte) in bytes.iter().enumerate() {
            let ends = *byte == b'\n' || (*byte == b'\r' && bytes.get(offset + 1) != Some(&b'\n'));
            if ends {
                starts.push(offset + 1);
            }
        }
        Self { text, starts }
    }

    /// Line and column of a byte offset. An offset inside a character is taken as the character's start, one past
    /// the end of the text as its end.
    pub fn line_column(&self, offset: usize) -> LineColumn {
        let mut offset = offset.min(self.text.len());
        while !self.text.is_char_boundary(offset) {
            offset -= 1;
        }
        let line = self.starts.partition_point(|start| *start <= offset).max(1);
        let start = self.starts.get(line - 1).copied().unwrap_or_default();
        let before = self.text.get(start..offset).unwrap_or_default();
        LineColumn {
            line,
            column: before.chars().count() + 1,
        }
    }

    /// Byte offset of a line and column; a column past the line's last character is the line's end. Nothing if
    /// there is no such line, or for a line or column of 0.
    pub fn offset(&self, place: LineColumn) -> Option<usize> {
        let span = self.line_span(place.line)?;
        let passed = place.column.checked_sub(1)?;
        let line = span.of(self.text)?;
        Some(
            line.char_indices()
                .nth(passed)
                .map_or(span.end(), |(inside, _)| span.start() + inside),
        )
    }

    /// The bytes of a line (from 1) without its line ending.
    pub fn line_span(&self, line: usize) -> Option<Span> {
        let start = *self.starts.get(line.checked_sub(1)?)?;
        let end = self.starts.get(line).copied().unwrap_or(self.text.len());
        let content = self.text.get(start..end)?.trim_end_matches(['\r', '\n']);
        Some(Span::new(start, start + content.len()))
    }

    /// The text of a line (from 1) without its line ending.
    pub fn line(&self, line: usize) -> Option<&'t str> {
        self.line_span(line)?.of(self.text)
    }

    /// How many lines there are: line endings plus one.
    pub fn count(&self) -> usize {
        self.starts.len()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn place(text: &str, offset: usize) -> (usize, usize) {
        let found = LineIndex::new(text).line_column(offset);
        (found.line, found.column)
    }

    #[test]
    fn columns_count_characters_not_bytes() {
        let text = "5 µL ± 1 °C";
        assert_eq!(place(text, text.find('°').unwrap()), (1, 10));
    }

    #[test]
    fn each_of_the_three_line_endings_ends_one_line() {
        let text = "a\r\nb\nc\rd";
        assert_eq!(
            [0, 3, 5, 7].map(|offset| place(text, offset)),
            [(1, 1), (2, 1), (3, 1), (4, 1)]
        );
        assert_eq!(LineIndex::new(text).count(), 4);
        assert_eq!(LineIndex::new(text).line(1), Some("a"));
    }

    #[test]
    fn a_byte_order_mark_is_no_column() {
        assert_eq!(place("\u{feff}ab", 3), (1, 1));
        assert_eq!(place("\u{feff}ab", 0), (1, 1));
    }

    #[test]
    fn offsets_come_back_from_lines_and_columns() {
        let text = "µ\r\n\r\nab°c";
        let index = LineIndex::new(text);
        for (offset, character) in text.char_indices().filter(|(_, c)| !"\r\n".contains(*c)) {
            assert_eq!(
                index.offset(index.line_column(offset)),
                Some(offset),
                "{character}"
            );
        }
        assert_eq!(
            index.offset(LineColumn {
                line: 3,
                column: 99
            }),
            Some(text.len())
        );
        assert_eq!(index.offset(LineColumn { line: 0, column: 1 }), None);
        assert_eq!(index.offset(LineColumn { line: 9, column: 1 }), None);
    }

    #[test]
    fn an_offset_beyond_the_text_is_its_end() {
        assert_eq!(place("ab\n", 99), (2, 1));
        assert_eq!(place("µ", 1), (1, 1));
    }
}
