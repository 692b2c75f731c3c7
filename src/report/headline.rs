//! The answer in one line, for the record and for the first line of the page.

use crate::problem::{AdjustmentGoal, Problem, Statement};
use crate::report::escape;
use crate::report::figures::{self, Figures};
use crate::solution::answer::{
    Addition, AdjustmentOutcome, Answer, Budget, Outcome, PreparationOutcome, TitrationOutcome,
};

/// The `result:` line of the record: one line, plain text, the figures as reported.
pub(super) fn record_line(statement: &Statement, answer: &Answer) -> String {
    let figures = Figures::new(statement.reporting);
    let with_uncertainty = |text: String| match &answer.budget {
        Some(budget) => format!("{text}, {}", expanded(figures, budget)),
        None => text,
    };
    let line = match &answer.outcome {
        Outcome::Speciation | Outcome::Mixing(_) => {
            with_uncertainty(format!("pH {}", figures.ph(answer.state.ph)))
        }
        Outcome::Preparation(made) => {
            with_uncertainty(prepared(figures, made, answer.model.temperature_c))
        }
        Outcome::Adjustment(adjusted) => {
            with_uncertainty(self::adjusted(figures, statement, adjusted))
        }
        Outcome::Titration(titration) => titrated(figures, titration),
    };
    escape::single_line(&line)
}

/// How much of what, as it is weighed or pipetted: `3.9003 g sodium dihydrogen phosphate`.
pub(super) fn taken(figures: Figures, addition: &Addition) -> String {
    format!(
        "{} {} {}",
        figures.places(addition.rounded, addition.decimals),
        addition.unit,
        addition.substance
    )
}

fn expanded(figures: Figures, budget: &Budget) -> String {
    format!(
        "expanded uncertainty {} (k={})",
        figures.uncertainty(budget.expanded),
        coverage(figures, budget.k)
    )
}

/// A coverage factor: `2`, `2.13`.
pub(super) fn coverage(figures: Figures, k: f64) -> String {
    let text = figures.places(k, 2);
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

fn prepared(figures: Figures, made: &PreparationOutcome, temperature_c: f64) -> String {
    let ph = figures.ph(made.ph_at_use);
    if (made.temperature_of_use_c - temperature_c).abs() < 1e-9 {
        format!("pH {ph} as made")
    } else {
        format!(
            "pH {ph} at {} °C as made",
            figures::short(made.temperature_of_use_c)
        )
    }
}

fn adjusted(figures: Figures, statement: &Statement, outcome: &AdjustmentOutcome) -> String {
    let ph = figures.ph(outcome.ph_after);
    let what: Vec<String> = outcome
        .additions
        .iter()
        .map(|addition| taken(figures, addition))
        .collect();
    let reaches = matches!(
        &statement.problem,
        Problem::Adjustment(asked) if matches!(asked.goal, AdjustmentGoal::Reach(_))
    );
    match (what.is_empty(), reaches) {
        (true, _) => format!("pH {ph}, nothing to add"),
        (false, true) => format!("{} to pH {ph}", what.join(", ")),
        (false, false) => format!("pH {ph} after {}", what.join(", ")),
    }
}

fn titrated(figures: Figures, titration: &TitrationOutcome) -> String {
    if let Some(fit) = &titration.fit
        && !fit.fitted.is_empty()
    {
        let fitted: Vec<String> = fit
            .fitted
            .iter()
            .map(|fitted| {
                let (value, error) = figures.with_error(fitted.value, fitted.standard_error);
                let unit = if fitted.unit.is_empty() { "" } else { " " };
                format!(
                    "{} {value}{unit}{unit_name}, standard error {error}{unit}{unit_name}",
                    fitted.quantity,
                    unit_name = fitted.unit
                )
            })
            .collect();
        return fitted.join("; ");
    }
    let points: Vec<String> = titration
        .equivalence_points
        .iter()
        .map(|point| {
            format!(
                "equivalence point {} mL at pH {}",
                figures.figures(point.volume_ml, figures.significant()),
                figures.ph(point.ph)
            )
        })
        .collect();
    if points.is_empty() {
        "no equivalence point on the curve".to_owned()
    } else {
        points.join("; ")
    }
}
