//! The two line endings of a page.

/// How a line ends.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum LineEnding {
    Lf,
    CrLf,
}

impl LineEnding {
    /// The ending of the line that holds `offset`; LF for the last line of a page without one.
    pub(super) fn of_line(text: &str, offset: usize) -> Self {
        let rest = text.get(offset..).unwrap_or_default();
        let line = rest.split_inclusive('\n').next().unwrap_or_default();
        if line.ends_with("\r\n") {
            Self::CrLf
        } else {
            Self::Lf
        }
    }
}

/// `text`, whose lines end with LF, with another ending.
pub(super) fn with_ending(text: &str, ending: LineEnding) -> String {
    match ending {
        LineEnding::Lf => text.to_owned(),
        LineEnding::CrLf => text.replace('\n', "\r\n"),
    }
}

/// The end of the line that holds `offset`, before its line ending.
pub(super) fn line_end(text: &str, offset: usize) -> usize {
    let rest = text.get(offset..).unwrap_or_default();
    let line = rest.split_inclusive('\n').next().unwrap_or_default();
    let content = line
        .strip_suffix('\n')
        .map_or(line, |cut| cut.strip_suffix('\r').unwrap_or(cut));
    offset + content.len()
}

/// The start of the line ending that stands right before `offset`, if one does.
pub(super) fn ending_before(text: &str, offset: usize) -> Option<usize> {
    let before = text.get(..offset)?.strip_suffix('\n')?;
    Some(before.strip_suffix('\r').unwrap_or(before).len())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_line_ends_before_its_ending() {
        let text = "ab\r\nc\nd\r";
        assert_eq!([0, 4, 6].map(|offset| line_end(text, offset)), [2, 5, 8]);
        assert_eq!(
            [4, 6, 8].map(|offset| ending_before(text, offset)),
            [Some(2), Some(5), None]
        );
        assert_eq!(LineEnding::of_line(text, 1), LineEnding::CrLf);
        assert_eq!(LineEnding::of_line(text, 5), LineEnding::Lf);
    }
}
