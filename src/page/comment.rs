//! The comment lines between which a result stands.

use crate::text::Span;

/// What the first comment of a result says besides the label.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Mark {
    /// A later result takes its place.
    Superseded,
    /// It was taken back.
    Withdrawn,
}

impl Mark {
    /// Every mark.
    pub const ALL: [Self; 2] = [Self::Superseded, Self::Withdrawn];

    /// The word in the comment.
    pub const fn word(self) -> &'static str {
        match self {
            Self::Superseded => "superseded",
            Self::Withdrawn => "withdrawn",
        }
    }

    /// How the visible line above a result with this mark begins.
    pub(super) const fn notice(self) -> &'static str {
        match self {
            Self::Superseded => "> **Superseded** ",
            Self::Withdrawn => "> **Withdrawn** ",
        }
    }
}

/// A line that begins like a result's comment.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Comment {
    /// The line without its ending.
    pub(super) span: Span,
    pub(super) kind: Kind,
}

#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    Result {
        label: String,
        label_span: Span,
        mark: Option<Mark>,
    },
    End {
        label: String,
    },
    Malformed,
}

const OPENING: &str = "<!-- ionfolio";

/// Whether a line is or resembles a result's comment, wherever in the line it begins.
pub(super) fn resembles(line: &str) -> bool {
    line.trim_start()
        .get(..OPENING.len())
        .is_some_and(|start| start.eq_ignore_ascii_case(OPENING))
}

/// Reads a line that resembles a comment; `line` is without its ending and stands at `start`.
pub(super) fn parse(line: &str, start: usize) -> Comment {
    let span = Span::new(start, start + line.len());
    let words = line
        .strip_prefix("<!-- ionfolio ")
        .and_then(|rest| rest.strip_suffix(" -->"));
    let mut words = words.unwrap_or_default().split(' ');
    let kind = match (words.next(), words.next(), words.next(), words.next()) {
        (Some("result"), Some(label), mark, None) if is_label(label) => {
            let known =
                mark.and_then(|word| Mark::ALL.into_iter().find(|known| known.word() == word));
            if mark.is_some() && known.is_none() {
                Kind::Malformed
            } else {
                let label_start = start + "<!-- ionfolio result ".len();
                let label_span = Span::new(label_start, label_start + label.len());
                Kind::Result {
                    label: label.to_owned(),
                    label_span,
                    mark: known,
                }
            }
        }
        (Some("end"), Some(label), None, None) if is_label(label) => Kind::End {
            label: label.to_owned(),
        },
        _ => Kind::Malformed,
    };
    Comment { span, kind }
}

/// Whether `word` can stand in a comment as a label: lower-case letters, digits and hyphens.
pub(super) fn is_label(word: &str) -> bool {
    let plain = |byte: u8| byte.is_ascii_lowercase() || byte.is_ascii_digit() || byte == b'-';
    !word.is_empty() && word.bytes().all(plain)
}

/// The first comment of a result, without line ending.
pub(super) fn opening(label: &str, mark: Option<Mark>) -> String {
    match mark {
        None => format!("<!-- ionfolio result {label} -->"),
        Some(mark) => format!("<!-- ionfolio result {label} {} -->", mark.word()),
    }
}

/// The last comment of a result, without line ending.
pub(super) fn closing(label: &str) -> String {
    format!("<!-- ionfolio end {label} -->")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_written_is_read() {
        for mark in [None, Some(Mark::Superseded), Some(Mark::Withdrawn)] {
            let line = opening("rb-118", mark);
            let Kind::Result {
                label,
                label_span,
                mark: read,
            } = parse(&line, 0).kind
            else {
                panic!("{line}")
            };
            assert_eq!(
                (&*label, read, label_span.of(&line)),
                ("rb-118", mark, Some("rb-118"))
            );
        }
        assert_eq!(
            parse(&closing("a"), 0).kind,
            Kind::End {
                label: "a".to_owned()
            }
        );
    }

    #[test]
    fn a_line_that_only_resembles_a_comment_is_malformed() {
        for line in [
            "<!-- ionfolio result -->",
            "<!-- ionfolio result A -->",
            "<!-- ionfolio result a superseeded -->",
            "<!-- ionfolio result a superseded withdrawn -->",
            "<!-- ionfolio result a --> ",
            "<!-- ionfolio  result a -->",
            "<!-- ionfolio end a b -->",
            "<!-- ionfolio end a--->",
            "<!-- ionfolio",
        ] {
            assert!(resembles(line));
            assert_eq!(parse(line, 0).kind, Kind::Malformed, "{line}");
        }
        assert!(resembles("  <!-- IONFOLIO end a -->") && !resembles("<!-- other -->"));
    }
}
