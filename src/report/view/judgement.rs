//! Shortcuts, hand value, reading, assumptions and cautions as templates see them.

use crate::report::figures;
use crate::solution::answer::{
    Assumption, Caution, Comparison, Explanation, HandVerdict, ShortcutResult,
};
use serde::Serialize;

/// A shortcut and what it costs.
#[derive(Debug, Serialize)]
pub(in crate::report) struct ShortcutView {
    name: &'static str,
    ph: f64,
    /// From the full result.
    shift: f64,
    /// As printed: `0.02`.
    limit: String,
    within_limit: bool,
    /// The condition attached to it and whether it holds.
    condition: String,
}

/// Whether a recorded hand value stands.
#[derive(Debug, Serialize)]
pub(in crate::report) struct HandValueView {
    recorded: String,
    by: &'static str,
    shortcut_gives: Option<f64>,
    shift: f64,
    limit: String,
    stands: bool,
    reason: String,
}

/// A reading beside the computed value.
#[derive(Debug, Serialize)]
pub(in crate::report) struct ComparisonView {
    reading: String,
    /// Reading less computed value, in pH.
    difference: f64,
    /// Expanded uncertainty (k = 2) of the difference.
    expanded: f64,
    agrees: bool,
    /// The acceptance limit as written.
    limit: Option<String>,
    within_limit: Option<bool>,
    explanations: Vec<ExplanationView>,
    remarks: Vec<String>,
}

/// One input that, wrong by so much, would explain a difference.
#[derive(Debug, Serialize)]
pub(in crate::report) struct ExplanationView {
    input: String,
    stated: String,
    needed: Option<f64>,
    /// 0.01 for 1 %.
    relative_change: Option<f64>,
}

/// A stated assumption.
#[derive(Debug, Serialize)]
pub(in crate::report) struct AssumptionView {
    statement: String,
    /// What takes its place.
    alternative: Option<String>,
    /// The pH then.
    ph: Option<f64>,
    /// Shift in pH from the result to that alternative.
    cost: Option<f64>,
}

/// A caution.
#[derive(Debug, Serialize)]
pub(in crate::report) struct CautionView {
    name: &'static str,
    sentence: String,
}

pub(super) fn shortcuts(shortcuts: &[ShortcutResult]) -> Vec<ShortcutView> {
    shortcuts
        .iter()
        .map(|shortcut| ShortcutView {
            name: shortcut.shortcut.name(),
            ph: shortcut.ph,
            shift: shortcut.shift,
            limit: figures::unrounded(shortcut.limit),
            within_limit: shortcut.within_limit(),
            condition: shortcut.condition.clone(),
        })
        .collect()
}

pub(super) fn assumptions(assumptions: &[Assumption]) -> Vec<AssumptionView> {
    assumptions
        .iter()
        .map(|assumption| AssumptionView {
            statement: assumption.statement.clone(),
            alternative: assumption
                .alternative
                .as_ref()
                .map(|(name, _)| name.clone()),
            ph: assumption.alternative.as_ref().map(|(_, ph)| *ph),
            cost: assumption.cost,
        })
        .collect()
}

pub(super) fn cautions(cautions: &[Caution]) -> Vec<CautionView> {
    cautions
        .iter()
        .map(|caution| CautionView {
            name: caution.name,
            sentence: caution.sentence.clone(),
        })
        .collect()
}

pub(super) fn explanations(explanations: &[Explanation]) -> Vec<ExplanationView> {
    explanations
        .iter()
        .map(|explanation| ExplanationView {
            input: explanation.input.as_str().to_owned(),
            stated: explanation.stated.clone(),
            needed: explanation.needed,
            relative_change: explanation.relative_change,
        })
        .collect()
}

impl HandValueView {
    pub(super) fn of(verdict: &HandVerdict) -> Self {
        Self {
            recorded: verdict.recorded.clone(),
            by: verdict.by.name(),
            shortcut_gives: verdict.shortcut_gives,
            shift: verdict.shift,
            limit: figures::unrounded(verdict.limit),
            stands: verdict.stands,
            reason: verdict.reason.clone(),
        }
    }
}

impl ComparisonView {
    pub(super) fn of(comparison: &Comparison) -> Self {
        let acceptance = comparison.acceptance.as_ref();
        Self {
            reading: comparison.reading.clone(),
            difference: comparison.difference,
            expanded: comparison.expanded,
            agrees: comparison.agrees,
            limit: acceptance.map(|(_, limit)| limit.clone()),
            within_limit: acceptance.map(|(within, _)| *within),
            explanations: explanations(&comparison.explanations),
            remarks: comparison.remarks.clone(),
        }
    }
}
