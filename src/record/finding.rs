//! Findings: what verification found, each with a name, a severity, a place, a sentence and a remedy.

use std::fmt;

use super::fault::Fault;
use super::identity::NotebookPath;

/// How much a finding weighs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// Worth knowing; nothing is asked.
    Note,
    /// The evidence stands, but something that is asked is not done, or cannot be told.
    Warning,
    /// The evidence does not stand.
    Failure,
}

impl fmt::Display for Severity {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(match self {
            Self::Note => "note",
            Self::Warning => "warning",
            Self::Failure => "failure",
        })
    }
}

/// The part of a result, or of a file beside the pages, that a finding is about.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Part {
    /// The result or the file as a whole.
    Whole,
    /// The block's content.
    Question,
    /// The answer.
    Answer,
    /// The `record` fence.
    Record,
    /// An `act` fence, counted from 1.
    Act(usize),
    /// A file that belongs to the result.
    Attachment(NotebookPath),
    /// An act in a register, by its number.
    RegisterAct(u64),
    /// A line, counted from 1.
    Line(usize),
}

impl fmt::Display for Part {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Whole => f.write_str("as a whole"),
            Self::Question => f.write_str("question"),
            Self::Answer => f.write_str("answer"),
            Self::Record => f.write_str("record"),
            Self::Act(place) => write!(f, "act {place} below the record"),
            Self::Attachment(path) => write!(f, "attachment {path}"),
            Self::RegisterAct(number) => write!(f, "act number {number}"),
            Self::Line(line) => write!(f, "line {line}"),
        }
    }
}

/// Where a finding is: in which file, under which label, in which part.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Place {
    /// The page, `registers/SIGNER.md` or `roster`, from the notebook's folder.
    pub file: String,
    /// The label of the result, where the file is a page.
    pub label: Option<String>,
    /// The part.
    pub part: Part,
}

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match &self.label {
            Some(label) => write!(f, "{}#{label}, {}", self.file, self.part),
            None => write!(f, "{}, {}", self.file, self.part),
        }
    }
}

/// What is found, and where.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Finding {
    /// Where it is.
    pub place: Place,
    /// What it is.
    pub fault: Fault,
}

impl Finding {
    /// Its name: lower-case words joined by hyphens, the same in every version.
    pub const fn name(&self) -> &'static str {
        self.fault.name()
    }

    /// How much it weighs.
    pub const fn severity(&self) -> Severity {
        self.fault.severity()
    }

    /// What it says, in one sentence.
    #[must_use]
    pub fn sentence(&self) -> String {
        self.fault.to_string()
    }

    /// What to do about it.
    pub const fn remedy(&self) -> &'static str {
        self.fault.remedy()
    }
}
