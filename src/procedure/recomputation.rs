//! Computing a sealed result again: its question, its own constants and defaults, its attachments, and no library.

use crate::block::{self, Context, Defaults};
use crate::page::{Page, Region};
use crate::procedure::Desk;
use crate::procedure::page_work::{PageWork, embedded};
use crate::procedure::plot_names::{generation, numbered, sealed_generation};
use crate::procedure::sources::Sources;
use crate::procedure::surroundings::Program;
use crate::record::{Digest, Statement, TextLine};
use crate::substance::Catalogue;
use crate::text::Diagnostic;
use std::rc::Rc;

/// What computing a result again gave.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Recomputed {
    /// It was not computed again: a draft, or something that was superseded.
    Not,
    /// Every byte of the answer is the same.
    Same,
    /// Every reported figure is the same, the wording is not. Where the template is another, only the result's own line can be compared.
    SameFigure {
        /// Why the text may differ.
        cause: String,
    },
    /// A reported figure is another.
    Different {
        /// The figure in the record.
        recorded: String,
        /// The figure now.
        now: String,
        /// Why they may differ.
        cause: String,
    },
    /// It could not be computed.
    Failed {
        /// Why.
        reason: String,
    },
}

impl Recomputed {
    /// One word for machines.
    pub fn word(&self) -> &'static str {
        match self {
            Self::Not => "not computed",
            Self::Same => "same",
            Self::SameFigure { .. } => "same figures",
            Self::Different { .. } => "different",
            Self::Failed { .. } => "failed",
        }
    }
}

/// A page whose results are computed again.
#[derive(Debug)]
pub(super) struct Again<'a> {
    pub(super) desk: &'a Desk,
    pub(super) name: &'a str,
    pub(super) page: &'a Rc<Page>,
    pub(super) program: &'a Program,
}

impl Again<'_> {
    /// Computes a result again and compares.
    pub(super) fn computed(
        &self,
        region: &Region,
        statement: &Statement,
        question: &str,
    ) -> Recomputed {
        match self.compared(region, statement, question) {
            Ok(recomputed) => recomputed,
            Err(reason) => Recomputed::Failed { reason },
        }
    }

    fn compared(
        &self,
        region: &Region,
        statement: &Statement,
        question: &str,
    ) -> Result<Recomputed, String> {
        let answer = region.answer().text();
        let desk = sealed_desk(self.desk, answer, statement)?;
        let sources = Sources::as_sealed(self.desk, self.name, Rc::clone(self.page))
            .for_block(region.label());
        let context = Context {
            catalogue: &desk.catalogue,
            defaults: &desk.defaults,
            solutions: &sources,
            attachments: &sources,
        };
        let reading = block::read(question, &context);
        let Some(stated) = reading.statement else {
            let first = reading.diagnostics.first().map_or("", Diagnostic::message);
            return Err(format!(
                "the question is not read with the constants of the answer: {first}"
            ));
        };
        // Plots are named after the page on which the result was signed.
        let rendered = PageWork::finish(&desk, statement.page.as_str(), &stated)?;
        let latest = generation(self.page, region.label());
        let signed = sealed_generation(&rendered, statement, latest);
        let rendered = numbered(rendered, signed);
        if rendered.markdown == answer {
            return Ok(Recomputed::Same);
        }
        let template = self.desk.template(stated.problem.task()).ok();
        let same_template = template.is_some_and(|template| {
            Digest::of_lines(template.source().as_bytes()) == statement.template.digest
        });
        let cause = self.cause(statement, same_template);
        let recorded = statement.result.as_str();
        let differing = if rendered.headline == recorded {
            same_template
                .then(|| differing_line(answer, &rendered.markdown))
                .flatten()
        } else {
            Some((recorded.to_owned(), rendered.headline))
        };
        Ok(match differing {
            None => Recomputed::SameFigure { cause },
            Some((recorded, now)) => Recomputed::Different {
                recorded,
                now,
                cause,
            },
        })
    }

    /// What has changed since: the program, the template, or neither.
    fn cause(&self, statement: &Statement, same_template: bool) -> String {
        let same_program = self.program.digest == Some(statement.program.digest);
        match (same_program, same_template) {
            (_, false) => "the template is another than it was".to_owned(),
            (false, true) => format!(
                "the program is another build than it was ({})",
                statement.program.name
            ),
            (true, true) => {
                "program and template are the same; the question or what it refers to has changed"
                    .to_owned()
            }
        }
    }
}

/// The desk as it was when a result was sealed: with the constants of its answer and the defaults of its record.
pub(super) fn sealed_desk(
    desk: &Desk,
    answer: &str,
    statement: &Statement,
) -> Result<Desk, String> {
    let constants = embedded(answer).ok_or("the answer carries no constants")?;
    let mut diagnostics = Vec::new();
    let stored = block::constants(constants, &mut diagnostics).unwrap_or_default();
    let catalogue = Catalogue::default()
        .overlaid(&stored)
        .map_err(|error| format!("the constants of the answer cannot be read: {error}"))?;
    let lines = statement.assumed.iter().map(TextLine::as_str);
    let defaults =
        Defaults::from_lines(lines).ok_or("the defaults of the record cannot be read")?;
    Ok(Desk {
        notebook: desk.notebook.clone(),
        root: desk.root.clone(),
        catalogue,
        defaults,
    })
}

/// The first lines in which two answers report another figure.
fn differing_line(recorded: &str, now: &str) -> Option<(String, String)> {
    let of = |text: &str| -> Vec<String> { text.lines().flat_map(figures).collect() };
    if of(recorded) == of(now) {
        return None;
    }
    let line = |text: &str| text.trim().to_owned();
    let mut pairs = recorded.lines().zip(now.lines());
    let found = pairs.find(|(recorded, now)| {
        figures(recorded).collect::<Vec<_>>() != figures(now).collect::<Vec<_>>()
    });
    Some(found.map_or_else(
        || {
            (
                "another number of lines".to_owned(),
                "another number of lines".to_owned(),
            )
        },
        |(recorded, now)| (line(recorded), line(now)),
    ))
}

/// The figures of a line: each run of digits with its point and sign, in the characters that answers use.
fn figures(line: &str) -> impl Iterator<Item = String> {
    line.split(|c: char| !is_of_a_figure(c))
        .filter(|run| run.chars().any(char::is_numeric))
        .map(|run| run.trim_matches(['.', ',']).to_owned())
}

fn is_of_a_figure(c: char) -> bool {
    c.is_numeric() || matches!(c, '.' | '-' | '−' | '⁻' | '×')
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn wording_may_change_and_figures_may_not() {
        let recorded = "**pH 2.20** at 25 °C\nshare 19.7 %\n";
        assert_eq!(
            differing_line(recorded, "**pH 2.20**, 25 °C.\npart 19.7 %\n"),
            None
        );
        let other = differing_line(recorded, "**pH 2.20** at 25 °C\nshare 19.8 %\n");
        assert_eq!(
            other,
            Some(("share 19.7 %".to_owned(), "share 19.8 %".to_owned()))
        );
        let exponent = differing_line("2.8 × 10⁻⁶", "2.8 × 10⁻⁵");
        assert!(exponent.is_some());
    }
}
