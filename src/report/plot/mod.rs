//! Plots as SVG documents, the same bytes on every platform.
//!
//! Every number in a document is a decimal rounded to hundredths of a pixel. Curves differ by dash pattern and carry their names, so that
//! a black-and-white print says as much as the screen.

mod axis;
mod distribution;
mod document;
mod panel;
mod titration;

use crate::problem::{Problem, Statement};
use crate::report::attachment::{self, Attachment};
use crate::report::plot::document::Document;
use crate::solution::answer::{Answer, Outcome};

/// A plot with what a page says of it.
#[derive(Debug)]
pub(super) struct Plot {
    /// `curve`, `residuals` or `distribution`.
    pub(super) kind: &'static str,
    /// What it shows, in a sentence.
    pub(super) description: String,
    /// The file.
    pub(super) attachment: Attachment,
}

/// The plots of an answer.
///
/// A titration has its curve, and its residuals where readings were fitted. Any other task has the distribution of species over pH, where a
/// ligand has more than one step; with one step the table says all.
pub(super) fn of(page: &str, statement: &Statement, answer: &Answer) -> Vec<Plot> {
    let label = statement.label.as_str();
    let document = |kind: &'static str, document: Document| Plot {
        kind,
        description: document.description.clone(),
        attachment: Attachment {
            file_name: attachment::file_name(page, label, kind),
            bytes: document.svg().into_bytes(),
        },
    };
    let mut plots = Vec::new();
    if let Outcome::Titration(titrated) = &answer.outcome {
        let readings = match &statement.problem {
            Problem::Titration(asked) => asked.readings.as_ref(),
            _ => None,
        };
        plots.extend(
            titration::curve(label, titrated, readings).map(|found| document("curve", found)),
        );
        if let (Some(fit), Some(readings)) = (&titrated.fit, readings) {
            plots.extend(
                titration::residuals(label, fit, readings)
                    .map(|found| document("residuals", found)),
            );
        }
    } else if let Some(distribution) = &answer.distribution {
        plots.extend(
            distribution::over_ph(label, distribution, &answer.state)
                .map(|found| document("distribution", found)),
        );
    }
    plots
}
