//! Preparation, adjustment and mixing as templates see them.

use crate::problem::{AdjustmentGoal, Problem, Statement};
use crate::report::figures::{self, Figures};
use crate::report::view::judgement::{self, ExplanationView};
use crate::report::view::state::StateView;
use crate::solution::answer::{
    Addition, AdjustmentOutcome, Answer, MixingOutcome, PreparationOutcome,
};
use serde::Serialize;

/// A buffer as it is to be made.
#[derive(Debug, Serialize)]
pub(in crate::report) struct PreparationView {
    /// In the order of work.
    additions: Vec<AdditionView>,
    /// Final volume as written, with its unit.
    volume: String,
    /// pH at the temperature of preparation after rounding.
    ph_at_preparation: f64,
    /// pH at the temperature of use after rounding.
    ph_at_use: f64,
    /// As printed: `4 °C`.
    temperature_of_use: String,
    /// Whether it is used at another temperature than it is made at.
    used_at_another_temperature: bool,
    target_ph: f64,
    /// Change of pH with temperature in 1/K.
    ph_per_kelvin: f64,
    ph_as_weighed: Option<f64>,
    /// Best first.
    suggestions: Vec<SuggestionView>,
}

/// One thing to weigh or measure out.
#[derive(Debug, Serialize)]
struct AdditionView {
    substance: String,
    /// Unrounded, in `unit`.
    amount: f64,
    /// As it is weighed or pipetted, without the unit.
    rounded: String,
    unit: &'static str,
    /// Whether it is weighed rather than pipetted.
    weighed: bool,
    /// Shift of the pH for 1 % more of it.
    ph_per_percent: f64,
}

/// One buffer of the library, ranked for a target.
#[derive(Debug, Serialize)]
struct SuggestionView {
    ligand: String,
    step: usize,
    pk: f64,
    buffer_capacity: f64,
    ph_per_kelvin: f64,
    remark: String,
}

/// What an adjustment needs.
#[derive(Debug, Serialize)]
pub(in crate::report) struct AdjustmentView {
    additions: Vec<AdditionView>,
    /// Whether a pH was asked for rather than what an addition does.
    reaches: bool,
    ph_before: f64,
    ph_after: f64,
    ml_per_hundredth: f64,
    drops_per_hundredth: f64,
    /// Stops before the target: cumulative amount in the unit of the first addition, and pH.
    steps: Vec<AdjustmentStepView>,
    overshoot: Vec<OvershootView>,
    explanations: Vec<ExplanationView>,
}

/// One stop.
#[derive(Debug, Serialize)]
struct AdjustmentStepView {
    amount: f64,
    ph: f64,
}

/// An overshoot and the way back.
#[derive(Debug, Serialize)]
struct OvershootView {
    what: String,
    ph: f64,
    remedy: String,
}

/// What mixing gives besides the mixture.
#[derive(Debug, Serialize)]
pub(in crate::report) struct MixingView {
    /// As printed, with its unit.
    volume: String,
    /// The state after each step of a serial dilution.
    series: Vec<StateView>,
}

impl PreparationView {
    pub(super) fn of(
        figures: Figures,
        statement: &Statement,
        answer: &Answer,
        made: &PreparationOutcome,
    ) -> Self {
        let as_written = match &statement.problem {
            Problem::Preparation(asked) => {
                let volume = &asked.target.volume.measured;
                Some(format!("{} {}", volume.decimal, volume.unit.symbol()))
            }
            _ => None,
        };
        let away = (made.temperature_of_use_c - answer.model.temperature_c).abs();
        Self {
            additions: additions(figures, &made.additions),
            volume: as_written.unwrap_or_else(|| volume(made.volume)),
            ph_at_preparation: made.ph_at_preparation,
            ph_at_use: made.ph_at_use,
            temperature_of_use: format!("{} °C", figures::short(made.temperature_of_use_c)),
            used_at_another_temperature: away > 1e-9,
            target_ph: made.target_ph,
            ph_per_kelvin: made.ph_per_kelvin,
            ph_as_weighed: made.ph_as_weighed,
            suggestions: made
                .suggestions
                .iter()
                .map(|suggestion| SuggestionView {
                    ligand: suggestion.ligand.clone(),
                    step: suggestion.step,
                    pk: suggestion.pk,
                    buffer_capacity: suggestion.buffer_capacity,
                    ph_per_kelvin: suggestion.ph_per_kelvin,
                    remark: suggestion.remark.clone(),
                })
                .collect(),
        }
    }
}

impl AdjustmentView {
    pub(super) fn of(
        figures: Figures,
        statement: &Statement,
        adjusted: &AdjustmentOutcome,
    ) -> Self {
        Self {
            additions: additions(figures, &adjusted.additions),
            reaches: matches!(
                &statement.problem,
                Problem::Adjustment(asked) if matches!(asked.goal, AdjustmentGoal::Reach(_))
            ),
            ph_before: adjusted.ph_before,
            ph_after: adjusted.ph_after,
            ml_per_hundredth: adjusted.ml_per_hundredth,
            drops_per_hundredth: adjusted.drops_per_hundredth,
            steps: adjusted
                .steps
                .iter()
                .map(|(amount, ph)| AdjustmentStepView {
                    amount: *amount,
                    ph: *ph,
                })
                .collect(),
            overshoot: adjusted
                .overshoot
                .iter()
                .map(|overshoot| OvershootView {
                    what: overshoot.what.clone(),
                    ph: overshoot.ph,
                    remedy: overshoot.remedy.clone(),
                })
                .collect(),
            explanations: judgement::explanations(&adjusted.explanations),
        }
    }
}

impl MixingView {
    pub(super) fn of(mixed: &MixingOutcome) -> Self {
        Self {
            volume: volume(mixed.volume),
            series: mixed.series.iter().map(StateView::of).collect(),
        }
    }
}

fn additions(figures: Figures, additions: &[Addition]) -> Vec<AdditionView> {
    additions
        .iter()
        .map(|addition| AdditionView {
            substance: addition.substance.clone(),
            amount: addition.amount,
            rounded: figures.places(addition.rounded, addition.decimals),
            unit: addition.unit,
            weighed: addition.unit == "g",
            ph_per_percent: addition.ph_per_percent,
        })
        .collect()
}

/// A volume in litres, or in millilitres below one litre, with its digits.
fn volume(litres: f64) -> String {
    if litres.abs() >= 1.0 {
        format!("{} L", figures::short(litres))
    } else {
        format!("{} mL", figures::short(litres * 1000.0))
    }
}
