//! A result in a page.

use crate::{
    page::comment::Mark,
    text::{Excerpt, Span},
};

/// A result: what stands between `<!-- ionfolio result LABEL -->` and `<!-- ionfolio end LABEL -->`.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Region {
    pub(super) label: String,
    pub(super) label_span: Span,
    pub(super) mark: Option<Mark>,
    pub(super) opening: Span,
    pub(super) notice: Option<Span>,
    pub(super) question: Option<Fenced>,
    pub(super) span: Span,
    pub(super) owned: Span,
    pub(super) chain_end: usize,
    pub(super) inner: Excerpt,
    pub(super) answer: Excerpt,
    pub(super) record: Option<Fenced>,
    pub(super) acts: Vec<Fenced>,
}

/// A fence of a result.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fenced {
    /// The lines between the fences, with LF as line ending: the hashed bytes.
    pub content: Excerpt,
    /// The fence in the page, from its first backtick to the end of its closing line.
    pub span: Span,
}

impl Region {
    /// The label that both comments name.
    pub fn label(&self) -> &str {
        &self.label
    }

    /// The label in the first comment: where to point at the result as a whole.
    pub fn label_span(&self) -> Span {
        self.label_span
    }

    /// Whether the first comment says that the result is superseded or withdrawn.
    pub fn mark(&self) -> Option<Mark> {
        self.mark
    }

    /// The result in the page, both comments included, without the line ending after the last.
    pub fn span(&self) -> Span {
        self.span
    }

    /// The visible line above a superseded or withdrawn result, if it stands there.
    pub fn notice(&self) -> Option<Span> {
        self.notice
    }

    /// The question as it was signed, kept above the notice of a superseded or withdrawn result when it was marked.
    pub fn question(&self) -> Option<&Fenced> {
        self.question.as_ref()
    }

    /// Everything between the two comments' lines.
    pub fn inner(&self) -> &Excerpt {
        &self.inner
    }

    /// The answer: from the line after the first comment to the empty line before the record, which is not part of
    /// it; in a draft, to the last comment. Its text is the hashed bytes.
    pub fn answer(&self) -> &Excerpt {
        &self.answer
    }

    /// The record.
    pub fn record(&self) -> Option<&Fenced> {
        self.record.as_ref()
    }

    /// The acts in the order in which they stand.
    pub fn acts(&self) -> &[Fenced] {
        &self.acts
    }

    /// Whether the result has neither record nor acts, so that it may be computed anew.
    pub fn is_draft(&self) -> bool {
        self.record.is_none() && self.acts.is_empty()
    }
}
