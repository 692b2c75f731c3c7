//! What is wrong at a place, as data.

use serde::Serialize;

use crate::text::{Excerpt, Rule, Span, Suggestion};

/// How much a diagnostic weighs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Severity {
    /// Worth knowing; nothing need be done.
    Note,
    /// Probably not what was meant; the work goes on.
    Warning,
    /// The block or page cannot be used as it stands.
    Error,
}

impl Severity {
    /// The word for it, in lower case.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Note => "note",
            Self::Warning => "warning",
            Self::Error => "error",
        }
    }
}

/// A place, and what is to be said of it there.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Label {
    /// The bytes to underline.
    pub span: Span,
    /// A few words beside the underline; may be empty.
    pub text: String,
}

/// One thing that is wrong, with its place, what was expected and what may help.
///
/// Made with [`error`](Self::error), [`warning`](Self::warning) or [`note`](Self::note), then completed:
///
/// ```
/// use ionfolio::text::{Diagnostic, Rule, Span};
///
/// let diagnostic = Diagnostic::error(Rule::UnknownUnit, Span::new(21, 24), "`mll` is not a unit")
///     .expecting("a unit of volume: L, mL, µL")
///     .did_you_mean("mll", ["L", "mL", "µL"]);
/// assert_eq!(diagnostic.help(), Some("did you mean `mL`?"));
/// ```
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    rule: Rule,
    severity: Severity,
    message: String,
    labels: Vec<Label>,
    expected: Option<String>,
    help: Option<String>,
}

impl Diagnostic {
    /// An error at `span`. The message says what was found, in one sentence without a full stop.
    pub fn error(rule: Rule, span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Error, rule, span, message.into())
    }

    /// A warning at `span`.
    pub fn warning(rule: Rule, span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Warning, rule, span, message.into())
    }

    /// A note at `span`.
    pub fn note(rule: Rule, span: Span, message: impl Into<String>) -> Self {
        Self::new(Severity::Note, rule, span, message.into())
    }

    fn new(severity: Severity, rule: Rule, span: Span, message: String) -> Self {
        let labels = vec![Label {
            span,
            text: String::new(),
        }];
        Self {
            rule,
            severity,
            message,
            labels,
            expected: None,
            help: None,
        }
    }

    /// Puts words beside the primary underline.
    #[must_use]
    pub fn labelled(mut self, text: impl Into<String>) -> Self {
        if let Some(first) = self.labels.first_mut() {
            first.text = text.into();
        }
        self
    }

    /// Adds a second place that has to do with it, with words beside it.
    #[must_use]
    pub fn and(mut self, span: Span, text: impl Into<String>) -> Self {
        self.labels.push(Label {
            span,
            text: text.into(),
        });
        self
    }

    /// Says what was expected, as a noun phrase: "a mapping", "one of `closed`, `CO2 420 ppm`".
    #[must_use]
    pub fn expecting(self, expected: impl Into<String>) -> Self {
        Self {
            expected: Some(expected.into()),
            ..self
        }
    }

    /// Says what may help, as a sentence without a full stop.
    #[must_use]
    pub fn helped(self, help: impl Into<String>) -> Self {
        Self {
            help: Some(help.into()),
            ..self
        }
    }

    /// Asks whether the nearest of the candidates was meant; leaves the help as it is if none is near.
    #[must_use]
    pub fn did_you_mean<'c>(
        self,
        word: &str,
        candidates: impl IntoIterator<Item = &'c str>,
    ) -> Self {
        match Suggestion::of(word, candidates) {
            Some(suggestion) => self.helped(suggestion),
            None => self,
        }
    }

    /// The same diagnostic with every place of an excerpt's text turned into the place of the page.
    #[must_use]
    pub fn in_page(mut self, excerpt: &Excerpt) -> Self {
        for label in &mut self.labels {
            label.span = excerpt.in_page(label.span);
        }
        self
    }

    /// The same diagnostic for a text to whose front `bytes` were added.
    #[must_use]
    pub fn moved_by(mut self, bytes: usize) -> Self {
        for label in &mut self.labels {
            label.span = label.span.moved_by(bytes);
        }
        self
    }

    /// The rule that is broken.
    pub const fn rule(&self) -> Rule {
        self.rule
    }

    /// How much it weighs.
    pub const fn severity(&self) -> Severity {
        self.severity
    }

    /// What was found.
    pub fn message(&self) -> &str {
        &self.message
    }

    /// The primary place.
    pub fn span(&self) -> Span {
        self.labels.first().map_or(Span::at(0), |label| label.span)
    }

    /// All places, the primary one first.
    pub fn labels(&self) -> &[Label] {
        &self.labels
    }

    /// What was expected.
    pub fn expected(&self) -> Option<&str> {
        self.expected.as_deref()
    }

    /// What may help.
    pub fn help(&self) -> Option<&str> {
        self.help.as_deref()
    }

    /// Whether it is an error.
    pub fn is_error(&self) -> bool {
        self.severity == Severity::Error
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_place_of_a_block_becomes_the_place_of_the_page() {
        let mut builder = Excerpt::builder(0);
        builder.push("ab\n", Span::new(2, 5));
        builder.push("cd\n", Span::new(7, 10));
        let excerpt = builder.finish();
        let diagnostic =
            Diagnostic::error(Rule::DuplicateKey, Span::new(3, 5), "`cd` stands twice")
                .labelled("again here")
                .and(Span::new(0, 2), "first here")
                .in_page(&excerpt);
        assert_eq!(diagnostic.span(), Span::new(7, 9));
        assert_eq!(diagnostic.labels()[1].span, Span::new(2, 4));
        assert_eq!(diagnostic.labels()[0].text, "again here");
    }

    #[test]
    fn an_error_weighs_more_than_a_warning_and_a_warning_more_than_a_note() {
        assert!(Severity::Error > Severity::Warning && Severity::Warning > Severity::Note);
    }

    #[test]
    fn without_a_near_name_the_help_stays() {
        let diagnostic =
            Diagnostic::note(Rule::UnknownKey, Span::at(0), "`zzz`").helped("see the list");
        assert_eq!(
            diagnostic.did_you_mean("zzz", ["label"]).help(),
            Some("see the list")
        );
    }
}
