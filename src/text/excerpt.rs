//! A text taken out of a page, and where each piece of it stood.

use crate::text::Span;

/// A text that was taken out of a larger one: the content of a fence without the prefixes of lists and quotations,
/// with CR LF read as LF. Each piece of it remembers where it stood, so that a span of the excerpt becomes a span
/// of the page.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Excerpt {
    text: String,
    pieces: Vec<Piece>,
    start: usize,
    end: usize,
}

/// One stretch of the excerpt and of the page.
///
/// Where the two are the same length they are the same bytes and every offset has its own place; else (CR LF read
/// as LF, a tab that a list's indentation cut in two) the stretch has a place only as a whole.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
struct Piece {
    inside: Span,
    page: Span,
}

impl Excerpt {
    /// An empty excerpt to which pieces are added; `at` is the place of an excerpt that stays empty.
    pub fn builder(at: usize) -> ExcerptBuilder {
        ExcerptBuilder {
            excerpt: Self {
                text: String::new(),
                pieces: Vec::new(),
                start: at,
                end: at,
            },
        }
    }

    /// The lines `span` of `page` with CR LF read as LF and nothing else changed. A span that does not fit the page
    /// gives an empty excerpt.
    pub fn of_lines(page: &str, span: Span) -> Self {
        let mut builder = Self::builder(span.start());
        let mut at = span.start();
        for line in span.of(page).unwrap_or_default().split_inclusive('\n') {
            let end = at + line.len();
            if let Some(content) = line.strip_suffix("\r\n") {
                let ending = at + content.len();
                builder.push(content, Span::new(at, ending));
                builder.push("\n", Span::new(ending, end));
            } else {
                builder.push(line, Span::new(at, end));
            }
            at = end;
        }
        builder.finish()
    }

    /// The text, with LF as line ending.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The page's bytes from the first piece to the last, the prefixes between them included.
    pub fn span(&self) -> Span {
        Span::new(self.start, self.end)
    }

    /// The span of the page for a span of the excerpt's text.
    ///
    /// A span that runs over several lines covers the prefixes between them. An empty span stays empty. A span past
    /// the end of the text is placed at its end.
    pub fn in_page(&self, span: Span) -> Span {
        let start = self.start_in_page(span.start());
        if span.is_empty() {
            Span::at(start)
        } else {
            Span::new(start, self.end_in_page(span.end()))
        }
    }

    fn start_in_page(&self, offset: usize) -> usize {
        let next = self
            .pieces
            .partition_point(|piece| piece.inside.end() <= offset);
        let Some(piece) = self.pieces.get(next) else {
            return self.end;
        };
        piece.place_of(offset).unwrap_or(piece.page.start())
    }

    fn end_in_page(&self, offset: usize) -> usize {
        let next = self
            .pieces
            .partition_point(|piece| piece.inside.end() < offset);
        let Some(piece) = self.pieces.get(next) else {
            return self.end;
        };
        piece.place_of(offset).unwrap_or(piece.page.end())
    }
}

impl Piece {
    fn place_of(self, offset: usize) -> Option<usize> {
        let verbatim = self.inside.len() == self.page.len();
        verbatim.then(|| self.page.start() + offset.saturating_sub(self.inside.start()))
    }
}

/// Puts an [`Excerpt`] together, piece by piece in the page's order.
#[derive(Debug)]
pub struct ExcerptBuilder {
    excerpt: Excerpt,
}

impl ExcerptBuilder {
    /// Adds `text`, which stands at `page`. If both are equally long they must be the same bytes.
    pub fn push(&mut self, text: &str, page: Span) {
        if text.is_empty() {
            return;
        }
        let excerpt = &mut self.excerpt;
        if excerpt.pieces.is_empty() {
            excerpt.start = page.start();
        }
        let start = excerpt.text.len();
        excerpt.text.push_str(text);
        excerpt.end = page.end();
        let inside = Span::new(start, excerpt.text.len());
        excerpt.pieces.push(Piece { inside, page });
    }

    /// The finished excerpt.
    pub fn finish(self) -> Excerpt {
        self.excerpt
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn quoted() -> (&'static str, Excerpt) {
        let page = "> ab: 5 µL\r\n> cd: 1\r\n";
        let mut builder = Excerpt::builder(2);
        builder.push("ab: 5 µL", Span::new(2, 11));
        builder.push("\n", Span::new(11, 13));
        builder.push("cd: 1", Span::new(15, 20));
        builder.push("\n", Span::new(20, 22));
        (page, builder.finish())
    }

    #[test]
    fn a_span_on_one_line_covers_the_same_bytes() {
        let (page, excerpt) = quoted();
        for word in ["ab", "5 µL", "cd", "1"] {
            let start = excerpt.text().find(word).unwrap();
            let placed = excerpt.in_page(Span::new(start, start + word.len()));
            assert_eq!(placed.of(page), Some(word));
        }
    }

    #[test]
    fn a_span_over_two_lines_covers_the_prefix_between_them() {
        let (page, excerpt) = quoted();
        let placed = excerpt.in_page(Span::new(4, excerpt.text().len()));
        assert_eq!(placed.of(page), Some("5 µL\r\n> cd: 1\r\n"));
    }

    #[test]
    fn the_line_ending_is_placed_as_a_whole_and_the_end_at_the_end() {
        let (page, excerpt) = quoted();
        assert_eq!(excerpt.in_page(Span::new(9, 10)).of(page), Some("\r\n"));
        assert_eq!(excerpt.in_page(Span::at(99)), Span::at(22));
        assert_eq!(excerpt.span(), Span::new(2, 22));
    }

    #[test]
    fn an_empty_excerpt_still_has_a_place() {
        let empty = Excerpt::builder(7).finish();
        assert_eq!(empty.in_page(Span::new(0, 3)), Span::at(7));
    }

    #[test]
    fn lines_are_read_with_lf_and_a_lone_cr_stays() {
        let page = "x\r\nµ\ry\r\nz";
        let excerpt = Excerpt::of_lines(page, Span::new(0, page.len()));
        assert_eq!(excerpt.text(), "x\nµ\ry\nz");
        let z = excerpt.text().find('z').unwrap();
        assert_eq!(excerpt.in_page(Span::new(z, z + 1)).of(page), Some("z"));
    }
}
