//! An answer rendered to Markdown with its plots.

use crate::problem::Statement;
use crate::report::attachment::Attachment;
use crate::report::figures::Figures;
use crate::report::template::{Template, TemplateError};
use crate::report::view::View;
use crate::report::{escape, headline, plot};
use crate::solution::answer::Answer;

/// What a draft's first line says: that it is one.
pub const DRAFT_NOTICE: &str =
    "*Draft: not sealed, not signed; replaced whenever the page is computed again.*";

/// Longest answer in bytes.
const LONGEST: usize = 4 * 1024 * 1024;

/// An answer as it is written into a page.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rendered {
    /// Markdown with LF line ends, no trailing blanks, one final line feed; it ends with the fenced `constants` block.
    pub markdown: String,
    /// Plots to be written beside the page; `markdown` names them.
    pub attachments: Vec<Attachment>,
    /// The single line for the record: `pH 7.20, expanded uncertainty 0.03 (k=2)`.
    pub headline: String,
}

/// Why an answer could not be rendered.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum ReportError {
    /// The template failed.
    #[error(transparent)]
    Template(#[from] TemplateError),
    /// A line would be taken for part of a record, or for a question.
    #[error("line {line} of the answer by template {template} would be taken for part of a record")]
    ReservedLine {
        /// The template's name.
        template: String,
        /// The line, counted from 1.
        line: usize,
    },
    /// The answer does not end with the `constants` block that recomputing needs.
    #[error("the answer by template {template} does not end with the constants block")]
    NoConstants {
        /// The template's name.
        template: String,
    },
    /// The answer is longer than any page.
    #[error("the answer by template {template} is longer than {LONGEST} bytes")]
    TooLong {
        /// The template's name.
        template: String,
    },
}

/// Renders an answer.
///
/// `page` is the page's path or name; plots are named after it and the block's label.
///
/// # Errors
/// [`ReportError`] where the template fails or runs without end, or where what it gives could not stand in a page: too long, without the
/// `constants` block at its end, or with a line that opens a `record`, `act` or `equilibrium` fence or a comment of the program.
pub fn render(
    page: &str,
    statement: &Statement,
    answer: &Answer,
    template: &Template,
) -> Result<Rendered, ReportError> {
    let figures = Figures::new(statement.reporting);
    let plots = plot::of(page, statement, answer);
    let view = View::of(statement, answer, &plots);
    let markdown = escape::tidied(&template.rendered(&view, figures)?);
    let name = || template.name().to_owned();
    if markdown.len() > LONGEST {
        return Err(ReportError::TooLong { template: name() });
    }
    if let Some(line) = escape::reserved_line(&markdown) {
        return Err(ReportError::ReservedLine {
            template: name(),
            line,
        });
    }
    let ending = format!("```constants\n{}```\n", view.constants.written);
    if !markdown.ends_with(&ending) {
        return Err(ReportError::NoConstants { template: name() });
    }
    Ok(Rendered {
        markdown,
        attachments: plots.into_iter().map(|plot| plot.attachment).collect(),
        headline: headline::record_line(statement, answer),
    })
}
