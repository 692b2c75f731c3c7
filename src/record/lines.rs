//! The line form of records and acts: `ionfolio KIND VERSION`, then one `key: value` a line in a fixed order.
//!
//! Reading is strict, so that one meaning has one spelling: an unknown line in a known version, a line out of order or
//! a value in another spelling is an error that names the line.

use std::fmt::{Display, Write as _};

use super::appearance::is_hidden;
use super::digest::with_line_feeds;

/// Why a text is not in the line form. Lines count from 1.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum LineError {
    /// The text is not UTF-8.
    #[error("the text is not UTF-8")]
    NotText,
    /// The first line is not `ionfolio KIND VERSION`.
    #[error("the first line is not `ionfolio {kind} 1`")]
    FirstLine {
        /// `record`, `act` or another kind of lines.
        kind: &'static str,
    },
    /// A version that this program does not know.
    #[error(
        "written by a newer program: {kind} version {version}, this program reads version {known}"
    )]
    Newer {
        /// `record`, `act` or another kind of lines.
        kind: &'static str,
        /// The version in the first line.
        version: u32,
        /// The newest version that this program reads.
        known: u32,
    },
    /// A line that the version does not have.
    #[error("line {line} is not a line of this version")]
    Unknown {
        /// Number of the line.
        line: usize,
    },
    /// Another line, or none, stands where this key is due.
    #[error("line {line} should be `{key}:`")]
    Expected {
        /// Number of the line.
        line: usize,
        /// The key that is due.
        key: &'static str,
    },
    /// A value that its key cannot have.
    #[error("line {line}: `{key}:` {fault}")]
    Value {
        /// Number of the line.
        line: usize,
        /// The key.
        key: &'static str,
        /// What is wrong with the value.
        fault: ValueFault,
    },
    /// The last line has no line end.
    #[error("the last line is not ended")]
    Unended,
}

/// What is wrong with a single value.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum ValueFault {
    /// Nothing stands there.
    #[error("is empty")]
    Empty,
    /// A blank at the beginning or end, which print does not show.
    #[error("begins or ends with a blank")]
    Edge,
    /// A control character, or one that is invisible or turns the direction of reading.
    #[error("holds U+{:04X}, which does not show as what it is", u32::from(*character))]
    Character {
        /// The character.
        character: char,
    },
    /// Not `sha256:` and 64 lower-case hexadecimal digits.
    #[error("is not `sha256:` and 64 lower-case hexadecimal digits")]
    Digest,
    /// Not 16 or 32 lower-case hexadecimal digits.
    #[error("is not a notebook's identity of 16 or 32 lower-case hexadecimal digits")]
    Notebook,
    /// Not lower-case letters, digits and hyphens.
    #[error("is not a label of lower-case letters, digits and hyphens")]
    Label,
    /// Not the name of a signer.
    #[error("is not a signer of lower-case letters, digits and `.`, `-`, `_`, `@` between them")]
    Signer,
    /// Not a relative path with forward slashes inside the notebook.
    #[error("is not a relative path with forward slashes inside the notebook")]
    Path,
    /// Not a date and time with offset, in whole seconds.
    #[error("is not a time as 2026-11-03T10:12:45+01:00")]
    Time,
    /// Not a whole number from 1 on, without leading zeros.
    #[error("is not a whole number from 1 on")]
    Number,
    /// Not a meaning that an act can have.
    #[error("is not a meaning that an act can have")]
    Meaning,
    /// Not a name and a digest.
    #[error("is not a name followed by a digest")]
    NamedDigest,
    /// The digest of the defaults is not that of the lines that state them.
    #[error("states other defaults than `defaults:` gives the digest of")]
    Defaults,
    /// The same line twice, or lines out of their order.
    #[error("stands twice or out of order")]
    Order,
}

/// Checks a value that stands on a line of its own.
///
/// # Errors
///
/// [`ValueFault`] if it is empty, begins or ends with a blank, or holds a character that does not show.
pub(super) fn check_single_line(value: &str) -> Result<(), ValueFault> {
    if value.is_empty() {
        return Err(ValueFault::Empty);
    }
    if value.trim() != value {
        return Err(ValueFault::Edge);
    }
    let hidden = |c: &char| is_hidden(*c) || c.is_control();
    match value.chars().find(hidden) {
        Some(character) => Err(ValueFault::Character { character }),
        None => Ok(()),
    }
}

/// The text of the lines with LF, if they are UTF-8.
pub(super) fn text_of(bytes: &[u8]) -> Result<String, LineError> {
    String::from_utf8(with_line_feeds(bytes).into_owned()).map_err(|_not_text| LineError::NotText)
}

/// Writes lines in the order of the calls.
#[derive(Debug)]
pub(super) struct LineWriter(String);

impl LineWriter {
    pub(super) fn new(kind: &str, version: u32) -> Self {
        Self(format!("ionfolio {kind} {version}\n"))
    }

    pub(super) fn line(&mut self, key: &str, value: impl Display) -> &mut Self {
        // Writing to a String cannot fail.
        let _written = writeln!(self.0, "{key}: {value}");
        self
    }

    pub(super) fn finish(self) -> String {
        self.0
    }
}

/// Reads lines in the order of the calls.
#[derive(Debug)]
pub(super) struct LineReader<'a> {
    lines: Vec<&'a str>,
    at: usize,
    keys: &'static [&'static str],
}

impl<'a> LineReader<'a> {
    /// Begins to read a text of `kind` whose newest known version is 1 and whose keys are `keys`.
    pub(super) fn new(
        text: &'a str,
        kind: &'static str,
        keys: &'static [&'static str],
    ) -> Result<Self, LineError> {
        let body = text.strip_suffix('\n').ok_or(LineError::Unended)?;
        let lines: Vec<&str> = body.split('\n').collect();
        let version = lines
            .first()
            .and_then(|line| line.strip_prefix("ionfolio "))
            .and_then(|rest| rest.strip_prefix(kind))
            .and_then(|rest| rest.strip_prefix(' '))
            .ok_or(LineError::FirstLine { kind })?;
        let number = plain_number(version).ok_or(LineError::FirstLine { kind })?;
        if number > 1 {
            return Err(LineError::Newer {
                kind,
                version: number,
                known: 1,
            });
        }
        Ok(Self { lines, at: 1, keys })
    }

    /// The value of the key that is due next.
    pub(super) fn take<T>(
        &mut self,
        key: &'static str,
        read: impl Fn(&str) -> Result<T, ValueFault>,
    ) -> Result<T, LineError> {
        match self.optional(key, read)? {
            Some(value) => Ok(value),
            None => Err(self.unexpected(key)),
        }
    }

    /// The value of a key that may be absent.
    pub(super) fn optional<T>(
        &mut self,
        key: &'static str,
        read: impl Fn(&str) -> Result<T, ValueFault>,
    ) -> Result<Option<T>, LineError> {
        let value = self
            .lines
            .get(self.at)
            .and_then(|line| line.strip_prefix(key))
            .and_then(|rest| rest.strip_prefix(": "));
        let Some(value) = value else {
            return Ok(None);
        };
        self.at += 1;
        let line = self.at;
        let faulty = |fault| LineError::Value { line, key, fault };
        check_single_line(value).map_err(faulty)?;
        read(value).map(Some).map_err(faulty)
    }

    /// The values of a key that may stand on any number of lines.
    pub(super) fn many<T>(
        &mut self,
        key: &'static str,
        read: impl Fn(&str) -> Result<T, ValueFault>,
    ) -> Result<Vec<T>, LineError> {
        let mut values = Vec::new();
        while let Some(value) = self.optional(key, &read)? {
            values.push(value);
        }
        Ok(values)
    }

    /// An error of value about the line that was read last.
    pub(super) fn faulty(&self, key: &'static str, fault: ValueFault) -> LineError {
        LineError::Value {
            line: self.at,
            key,
            fault,
        }
    }

    /// Ends the reading.
    pub(super) fn finish(self) -> Result<(), LineError> {
        if self.at < self.lines.len() {
            Err(LineError::Unknown { line: self.at + 1 })
        } else {
            Ok(())
        }
    }

    fn unexpected(&self, key: &'static str) -> LineError {
        let line = self.at + 1;
        let known = |text: &&str| {
            let name = text.split(':').next().unwrap_or_default();
            self.keys.contains(&name)
        };
        match self.lines.get(self.at) {
            Some(text) if !known(text) => LineError::Unknown { line },
            _ => LineError::Expected { line, key },
        }
    }
}

/// A whole number from 1 on, without leading zeros or sign.
pub(super) fn plain_number<T: std::str::FromStr>(text: &str) -> Option<T> {
    let plain = text.bytes().all(|byte| byte.is_ascii_digit()) && !text.starts_with('0');
    if plain { text.parse().ok() } else { None }
}

#[cfg(test)]
mod tests {
    use super::*;

    const KEYS: &[&str] = &["a", "b"];

    fn read(text: &str) -> Result<(String, Vec<String>), LineError> {
        let own = |value: &str| Ok(value.to_owned());
        let mut reader = LineReader::new(text, "trial", KEYS)?;
        let read = (reader.take("a", own)?, reader.many("b", own)?);
        reader.finish()?;
        Ok(read)
    }

    #[test]
    fn lines_are_read_in_their_order() {
        let found = read("ionfolio trial 1\na: x: y\nb: 1\nb: 2\n").unwrap();
        assert_eq!(
            found,
            ("x: y".to_owned(), vec!["1".to_owned(), "2".to_owned()])
        );
    }

    #[test]
    fn departures_name_their_line() {
        let cases = [
            ("ionfolio trial 1\nc: 1\n", LineError::Unknown { line: 2 }),
            ("ionfolio trial 1\na: 1\n\n", LineError::Unknown { line: 3 }),
            (
                "ionfolio trial 1\nb: 1\n",
                LineError::Expected { line: 2, key: "a" },
            ),
            (
                "ionfolio trial 1\n",
                LineError::Expected { line: 2, key: "a" },
            ),
            ("ionfolio trial 1\na: 1", LineError::Unended),
            (
                "ionfolio trial 01\na: 1\n",
                LineError::FirstLine { kind: "trial" },
            ),
            (
                "ionfolio tria 1\na: 1\n",
                LineError::FirstLine { kind: "trial" },
            ),
            (
                "ionfolio trial 2\nz\n",
                LineError::Newer {
                    kind: "trial",
                    version: 2,
                    known: 1,
                },
            ),
        ];
        for (text, error) in cases {
            assert_eq!(read(text), Err(error), "{text}");
        }
    }

    #[test]
    fn values_show_as_what_they_are() {
        for value in [
            "",
            " x",
            "x\t",
            "a\u{202e}b",
            "a\u{0}b",
            "a\u{200b}b",
            "a\rb",
        ] {
            let text = format!("ionfolio trial 1\na: {value}\n");
            assert!(
                matches!(
                    read(&text),
                    Err(LineError::Value {
                        line: 2,
                        key: "a",
                        ..
                    })
                ),
                "{value:?}"
            );
        }
    }
}
