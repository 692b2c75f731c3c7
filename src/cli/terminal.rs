//! Where output goes, decided once: colour, width, a reader that has gone away.

use crate::cli::ExitStatus;
use std::io::{self, IsTerminal, Write};

/// Narrowest width that text is wrapped to.
const NARROWEST: usize = 40;

/// Widest width that text is wrapped to; longer lines are hard to read.
const WIDEST: usize = 110;

/// Standard output and standard error.
#[derive(Debug)]
pub(super) struct Terminal {
    /// Whether standard error shows colours.
    pub(super) colour: bool,
    /// Columns of the terminal.
    pub(super) width: usize,
    /// What went wrong when writing to standard output, if anything.
    failed: Option<io::ErrorKind>,
}

impl Terminal {
    pub(super) fn new() -> Self {
        let width = terminal_width().unwrap_or(WIDEST).clamp(NARROWEST, WIDEST);
        Self {
            colour: io::stderr().is_terminal() && !no_colour(),
            width,
            failed: None,
        }
    }

    /// A line of the result, to standard output.
    pub(super) fn out(&mut self, line: &str) {
        if self.failed.is_none()
            && let Err(error) = writeln!(io::stdout(), "{line}")
        {
            self.failed = Some(error.kind());
        }
    }

    /// Bytes of the result, to standard output.
    pub(super) fn out_bytes(&mut self, bytes: &[u8]) {
        if self.failed.is_none()
            && let Err(error) = io::stdout().write_all(bytes)
        {
            self.failed = Some(error.kind());
        }
    }

    /// A message for people, to standard error, wrapped with its further lines indented.
    pub(super) fn say(&self, message: &str) {
        let options = textwrap::Options::new(self.width)
            .subsequent_indent("  ")
            .break_words(false);
        for line in message.lines() {
            for piece in textwrap::wrap(line, &options) {
                self.say_line(&piece);
            }
        }
    }

    /// A line as it is, to standard error. If even that is gone, nobody is left to be told.
    #[expect(
        clippy::unused_self,
        reason = "what is said goes through the one terminal"
    )]
    pub(super) fn say_line(&self, line: &str) {
        writeln!(io::stderr(), "{line}").unwrap_or_default();
    }

    /// The exit status when everything was told; a reader that closed the pipe had enough, which is no error.
    pub(super) fn finish(&mut self, status: ExitStatus) -> ExitStatus {
        if self.failed.is_none()
            && let Err(error) = io::stdout().flush()
        {
            self.failed = Some(error.kind());
        }
        match self.failed {
            None | Some(io::ErrorKind::BrokenPipe) => status,
            Some(_) => status.and(ExitStatus::CannotReadOrWrite),
        }
    }
}

#[expect(clippy::disallowed_methods, reason = "NO_COLOR is read here, once")]
fn no_colour() -> bool {
    std::env::var("NO_COLOR").is_ok_and(|value| !value.is_empty())
}

#[expect(clippy::disallowed_methods, reason = "COLUMNS is read here, once")]
fn terminal_width() -> Option<usize> {
    let stated = std::env::var("COLUMNS")
        .ok()
        .and_then(|columns| columns.parse().ok());
    stated.or_else(|| terminal_size::terminal_size().map(|(width, _)| usize::from(width.0)))
}
