//! Replacements in a page; every other byte is copied.

use crate::text::Span;

/// A replacement: the bytes of `span` give way to `replacement`. An empty span inserts.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Edit {
    /// What is replaced, in bytes of the page.
    pub span: Span,
    /// What stands there afterwards, with the page's line endings.
    pub replacement: String,
}

/// Why edits cannot be made.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum SpliceError {
    /// Two edits touch the same bytes.
    #[error("two edits overlap at byte {at}")]
    Overlap {
        /// Where the second begins.
        at: usize,
    },
    /// An edit reaches past the end of the page or cuts a character.
    #[error("an edit at byte {at} does not fit the page")]
    OutOfPage {
        /// Where it begins.
        at: usize,
    },
}

/// `text` with the edits made. Insertions at the same place keep the order in which they are given.
pub(super) fn spliced(text: &str, mut edits: Vec<Edit>) -> Result<Vec<u8>, SpliceError> {
    edits.sort_by_key(|edit| (edit.span.start(), edit.span.end()));
    let added: usize = edits.iter().map(|edit| edit.replacement.len()).sum();
    let mut bytes = Vec::with_capacity(text.len() + added);
    let mut copied = 0;
    for edit in &edits {
        let at = edit.span.start();
        if at < copied {
            return Err(SpliceError::Overlap { at });
        }
        if edit.span.of(text).is_none() {
            return Err(SpliceError::OutOfPage { at });
        }
        let kept = text.get(copied..at).ok_or(SpliceError::OutOfPage { at })?;
        bytes.extend_from_slice(kept.as_bytes());
        bytes.extend_from_slice(edit.replacement.as_bytes());
        copied = edit.span.end();
    }
    bytes.extend_from_slice(text.get(copied..).unwrap_or_default().as_bytes());
    Ok(bytes)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn edit(start: usize, end: usize, replacement: &str) -> Edit {
        Edit {
            span: Span::new(start, end),
            replacement: replacement.to_owned(),
        }
    }

    #[test]
    fn everything_outside_the_edits_is_copied() {
        let edits = vec![edit(4, 4, "+"), edit(0, 2, "u"), edit(4, 4, "-")];
        assert_eq!(spliced("µL\r\nx", edits).unwrap(), "uL\r+-\nx".as_bytes());
        assert_eq!(
            spliced("\u{feff}x ", Vec::new()).unwrap(),
            "\u{feff}x ".as_bytes()
        );
    }

    #[test]
    fn edits_that_overlap_or_do_not_fit_are_refused() {
        assert_eq!(
            spliced("abcd", vec![edit(0, 2, ""), edit(1, 3, "")]),
            Err(SpliceError::Overlap { at: 1 })
        );
        assert_eq!(
            spliced("abcd", vec![edit(2, 9, "")]),
            Err(SpliceError::OutOfPage { at: 2 })
        );
        assert_eq!(
            spliced("µ", vec![edit(1, 1, "x")]),
            Err(SpliceError::OutOfPage { at: 1 })
        );
    }
}
