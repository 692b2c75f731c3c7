//! A result that is to be put into a page.

use crate::{
    page::{
        comment::{closing, is_label, opening, resembles},
        reading::Page,
    },
    text::Excerpt,
};

/// The text of a result, checked so that it is read back from a page exactly as it was put in.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Written {
    label: String,
    answer: String,
    record: Option<String>,
    acts: Vec<String>,
}

/// Why a text cannot stand in a page as a result.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum WrittenError {
    /// The label has other characters than lower-case letters, digits and hyphens.
    #[error("`{label}` cannot stand as a label in a comment")]
    Label {
        /// The label.
        label: String,
    },
    /// A part is empty or does not end with a line feed.
    #[error("the {part} is not made of whole lines")]
    Lines {
        /// `answer`, `record` or `act`.
        part: &'static str,
    },
    /// A line holds a carriage return, or opens or closes something that would be taken for a part of the result.
    #[error("line {line} of the {part} would be taken for a part of the result itself")]
    Line {
        /// `answer`, `record` or `act`.
        part: &'static str,
        /// The line, from 1.
        line: usize,
    },
    /// Markdown would read the result otherwise: a fence or an HTML element of the answer is not closed. HTML ends
    /// with an empty line only, so a draft that ends with HTML needs one.
    #[error("the answer leaves a fence or an element open")]
    Open,
}

impl Written {
    /// A draft: an answer alone.
    ///
    /// # Errors
    ///
    /// See [`WrittenError`]. The answer must be made of whole lines that end with LF.
    pub fn draft(label: &str, answer: &str) -> Result<Self, WrittenError> {
        Self::checked(Self {
            label: label.to_owned(),
            answer: answer.to_owned(),
            record: None,
            acts: Vec::new(),
        })
    }

    /// A sealed result: the answer, the lines of its record, and the lines of each act.
    ///
    /// # Errors
    ///
    /// See [`WrittenError`]. Each part must be made of whole lines that end with LF.
    pub fn sealed(
        label: &str,
        answer: &str,
        record: &str,
        acts: Vec<String>,
    ) -> Result<Self, WrittenError> {
        let record = Some(record.to_owned());
        Self::checked(Self {
            label: label.to_owned(),
            answer: answer.to_owned(),
            record,
            acts,
        })
    }

    /// The label.
    pub fn label(&self) -> &str {
        &self.label
    }

    /// The answer.
    pub fn answer(&self) -> &str {
        &self.answer
    }

    /// The record's lines, if the result is sealed.
    pub fn record(&self) -> Option<&str> {
        self.record.as_deref()
    }

    /// The lines of each act.
    pub fn acts(&self) -> &[String] {
        &self.acts
    }

    /// What stands between the two comments, with LF as line ending.
    pub fn inner(&self) -> String {
        let mut inner = self.answer.clone();
        let record = self.record.iter().map(|lines| ("record", lines));
        for (word, lines) in record.chain(self.acts.iter().map(|lines| ("act", lines))) {
            inner.push_str("\n```");
            inner.push_str(word);
            inner.push('\n');
            inner.push_str(lines);
            inner.push_str("```\n");
        }
        inner
    }

    fn checked(self) -> Result<Self, WrittenError> {
        if !is_label(&self.label) {
            return Err(WrittenError::Label { label: self.label });
        }
        check_lines("answer", &self.answer, |line| {
            resembles(line) || opens_a_part(line)
        })?;
        let closes = |line: &str| line.trim_start().starts_with("```");
        if let Some(record) = &self.record {
            check_lines("record", record, closes)?;
        }
        for act in &self.acts {
            check_lines("act", act, closes)?;
        }
        if self.is_read_back() {
            Ok(self)
        } else {
            Err(WrittenError::Open)
        }
    }

    fn is_read_back(&self) -> bool {
        let alone = format!(
            "{}\n{}{}\n",
            opening(&self.label, None),
            self.inner(),
            closing(&self.label)
        );
        let Ok(page) = Page::read(alone.into_bytes()) else {
            return false;
        };
        let [region] = page.results() else {
            return false;
        };
        let text = Excerpt::text;
        page.diagnostics().is_empty()
            && region.answer().text() == self.answer
            && region.record().map(|fenced| text(&fenced.content)) == self.record.as_deref()
            && region
                .acts()
                .iter()
                .map(|fenced| text(&fenced.content))
                .eq(self.acts.iter().map(String::as_str))
    }
}

fn check_lines(
    part: &'static str,
    lines: &str,
    is_refused: impl Fn(&str) -> bool,
) -> Result<(), WrittenError> {
    if !lines.ends_with('\n') {
        return Err(WrittenError::Lines { part });
    }
    let refused = lines
        .lines()
        .position(|line| line.contains('\r') || is_refused(line));
    match refused {
        None if lines.contains('\r') => Err(WrittenError::Line { part, line: 1 }),
        None => Ok(()),
        Some(index) => Err(WrittenError::Line {
            part,
            line: index + 1,
        }),
    }
}

/// Whether a line opens a fence that belongs to the result's own parts or to a question.
fn opens_a_part(line: &str) -> bool {
    let bare = line.trim_start();
    let info = bare.trim_start_matches(['`', '~']);
    let word = info.split_whitespace().next().unwrap_or_default();
    bare.len() >= info.len() + 3 && matches!(word, "record" | "act" | "equilibrium")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_answer_that_could_be_taken_for_something_else_is_refused() {
        for (answer, line) in [
            ("a\n<!-- ionfolio end a -->\n", 2),
            ("  <!-- ionfolio result b -->\n", 1),
            ("a\n\n```record\n", 3),
            ("~~~~ act\n~~~~\n", 1),
            ("```equilibrium\n```\n", 1),
            ("a\rb\n", 1),
            ("a\n\r\n", 1),
        ] {
            assert_eq!(
                Written::draft("a", answer),
                Err(WrittenError::Line {
                    part: "answer",
                    line
                }),
                "{answer:?}"
            );
        }
        for answer in ["```\nx\n", "<script>\n", "<!-- x\n", "    \n```text\n"] {
            assert_eq!(
                Written::draft("a", answer),
                Err(WrittenError::Open),
                "{answer:?}"
            );
        }
        assert_eq!(
            Written::draft("a", "x"),
            Err(WrittenError::Lines { part: "answer" })
        );
        assert!(matches!(
            Written::draft("A b", "x\n"),
            Err(WrittenError::Label { .. })
        ));
    }

    #[test]
    fn a_record_that_would_close_its_fence_is_refused() {
        let refused = Written::sealed("a", "x\n", "r\n```\n", Vec::new());
        assert_eq!(
            refused,
            Err(WrittenError::Line {
                part: "record",
                line: 2
            })
        );
        assert!(Written::sealed("a", "x\n\n", "r\n", vec!["act\nsig\n".to_owned()]).is_ok());
    }
}
