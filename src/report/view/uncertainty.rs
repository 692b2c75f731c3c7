//! Uncertainty budget and simulation as templates see them.

use crate::report::figures::Figures;
use crate::report::headline;
use crate::solution::answer::{Budget, Simulation};
use serde::Serialize;

/// An uncertainty budget of the pH.
#[derive(Debug, Serialize)]
pub(in crate::report) struct BudgetView {
    /// Largest share first.
    lines: Vec<BudgetLineView>,
    /// Combined standard uncertainty in pH.
    standard: f64,
    /// Effective degrees of freedom, where any were given.
    effective_degrees_of_freedom: Option<f64>,
    /// Coverage factor as printed: `2`.
    k: String,
    /// Expanded uncertainty in pH.
    expanded: f64,
}

/// One line of a budget.
#[derive(Debug, Serialize)]
struct BudgetLineView {
    what: String,
    /// As written.
    value: String,
    /// Standard uncertainty in `unit`.
    standard: f64,
    unit: String,
    /// Sensitivity coefficient in pH per unit.
    sensitivity: f64,
    /// Contribution to the standard uncertainty in pH.
    contribution: f64,
    /// Share of the combined variance, 0 to 1.
    share: f64,
    /// Where the uncertainty comes from.
    origin: String,
}

/// A Monte Carlo simulation of the pH.
#[derive(Debug, Serialize)]
pub(in crate::report) struct SimulationView {
    draws: u32,
    /// As text: no seed is too large for it.
    seed: String,
    mean: f64,
    standard: f64,
    /// Ends of the 95 % coverage interval.
    low: f64,
    high: f64,
}

impl BudgetView {
    pub(super) fn of(figures: Figures, budget: &Budget) -> Self {
        Self {
            lines: budget
                .lines
                .iter()
                .map(|line| BudgetLineView {
                    what: line.what.clone(),
                    value: line.value.clone(),
                    standard: line.standard,
                    unit: line.unit.clone(),
                    sensitivity: line.sensitivity,
                    contribution: (line.sensitivity * line.standard).abs(),
                    share: line.share,
                    origin: line.origin.clone(),
                })
                .collect(),
            standard: budget.standard,
            effective_degrees_of_freedom: budget.effective_degrees_of_freedom,
            k: headline::coverage(figures, budget.k),
            expanded: budget.expanded,
        }
    }
}

impl SimulationView {
    pub(super) fn of(simulation: &Simulation) -> Self {
        Self {
            draws: simulation.draws,
            seed: simulation.seed.to_string(),
            mean: simulation.mean,
            standard: simulation.standard,
            low: simulation.interval.0,
            high: simulation.interval.1,
        }
    }
}
