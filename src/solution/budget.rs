//! An uncertainty budget: independent contributions, their shares, combined and expanded uncertainty.

use crate::problem::InputId;
use crate::solution::answer::{Budget, BudgetLine};

/// One quantity that a result depends on, with its uncertainty.
#[derive(Clone, Debug)]
pub struct Contribution {
    /// What it is, for people.
    pub what: String,
    /// The input, where it is one.
    pub input: Option<InputId>,
    /// Its value as written.
    pub value: String,
    /// Standard uncertainty in `unit`.
    pub standard: f64,
    /// Unit.
    pub unit: String,
    /// Sensitivity coefficient: change of the result per `unit`.
    pub sensitivity: f64,
    /// Degrees of freedom, where given.
    pub degrees_of_freedom: Option<f64>,
    /// Where the uncertainty comes from.
    pub origin: String,
}

impl Budget {
    /// The budget of independent contributions, with coverage factor `k`; standard and expanded uncertainty in the unit of the result.
    ///
    /// Source: JCGM 100:2008, 5.1.2 and, for the effective degrees of freedom, G.4.1 (Welch-Satterthwaite); recalled.
    pub fn of(contributions: &[Contribution], k: f64) -> Self {
        let part = |line: &Contribution| line.standard * line.sensitivity;
        let variance: f64 = contributions
            .iter()
            .map(|line| part(line) * part(line))
            .sum();
        let fourth: f64 = contributions
            .iter()
            .filter_map(|line| {
                let square = part(line) * part(line);
                Some(square * square / line.degrees_of_freedom?)
            })
            .sum();
        let share = |line: &Contribution| {
            if variance > 0.0 {
                part(line) * part(line) / variance
            } else {
                0.0
            }
        };
        let mut lines: Vec<BudgetLine> = contributions
            .iter()
            .map(|line| BudgetLine {
                what: line.what.clone(),
                input: line.input.clone(),
                value: line.value.clone(),
                standard: line.standard,
                unit: line.unit.clone(),
                sensitivity: line.sensitivity,
                share: share(line),
                degrees_of_freedom: line.degrees_of_freedom,
                origin: line.origin.clone(),
            })
            .collect();
        lines.sort_by(|a, b| b.share.total_cmp(&a.share));
        let standard = variance.sqrt();
        Self {
            lines,
            standard,
            effective_degrees_of_freedom: (fourth > 0.0).then(|| variance * variance / fourth),
            k,
            expanded: k * standard,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn line(value: f64, standard: f64, sensitivity: f64, dof: Option<f64>) -> Contribution {
        Contribution {
            what: String::new(),
            input: None,
            value: value.to_string(),
            standard,
            unit: String::new(),
            sensitivity,
            degrees_of_freedom: dof,
            origin: String::new(),
        }
    }

    #[test]
    fn end_gauge_of_the_guide() {
        // JCGM 100:2008, annex H.1: u = 32 nm within 0.5, effective degrees of freedom 16 within 1 (printed figures are rounded; read and
        // recalled). ls = 50 000 623 nm; thermal terms enter through ls.
        let length = 50_000_623.0;
        let third = 3.0_f64.sqrt();
        let budget = Budget::of(
            &[
                line(length, 25.0, 1.0, Some(18.0)),
                line(215.0, 5.8, 1.0, Some(24.0)),
                line(0.0, 3.9, 1.0, Some(5.0)),
                line(0.0, 6.7, 1.0, Some(8.0)),
                line(0.0, 1.0e-6 / third, 0.1 * length, Some(50.0)),
                line(0.0, 0.05 / third, -11.5e-6 * length, Some(2.0)),
            ],
            2.92,
        );
        assert!((budget.standard - 32.0).abs() <= 0.5, "{}", budget.standard);
        let dof = budget.effective_degrees_of_freedom.unwrap();
        assert!((dof - 16.0).abs() <= 1.0, "{dof}");
        assert!((budget.expanded - 93.0).abs() <= 1.5, "{}", budget.expanded);
    }

    /// Relative contributions of a product: value times relative uncertainty.
    fn product(value: f64, parts: &[(f64, f64)]) -> Budget {
        let lines: Vec<Contribution> = parts
            .iter()
            .map(|(figure, standard)| line(*figure, *standard, value / figure, None))
            .collect();
        Budget::of(&lines, 2.0)
    }

    #[test]
    fn examples_of_analytical_chemistry() {
        // EURACHEM/CITAC QUAM, examples A1 to A3; unrounded figures, each with the tolerance of its rounding; read.
        let (r3, r6) = (3.0_f64.sqrt(), 6.0_f64.sqrt());
        let root = |parts: &[f64]| parts.iter().map(|u| u * u).sum::<f64>().sqrt();
        let flask = root(&[0.1 / r6, 0.02, 0.084 / r3]);
        let a1 = product(
            1002.7,
            &[(0.9999, 0.0001 / r3), (100.28, 0.05), (100.0, flask)],
        );
        assert!((a1.standard - 0.835_199).abs() <= 0.0005, "{}", a1.standard);
        let weighing = root(&[0.000_15 / r3, 0.000_15 / r3]);
        let burette = root(&[0.03 / r6, 0.006]);
        let a2 = product(
            0.102_136_159_706,
            &[
                (1.0, 0.0005),
                (0.3888, weighing),
                (1.0, 0.0005 / r3),
                (204.2212, 0.0038),
                (18.64, burette),
            ],
        );
        assert!(
            (a2.standard - 0.000_100_500_722).abs() <= 1e-7,
            "{}",
            a2.standard
        );
        let a3 = product(
            0.101_39,
            &[
                (1.0, 0.001),
                (0.3888, weighing),
                (1.0, 0.0005 / r3),
                (14.89, root(&[0.03 / r6, 0.0126 / r3])),
                (18.64, root(&[0.03 / r6, 0.015_96 / r3])),
                (204.2212, 0.0038),
                (15.0, root(&[0.02 / r6, 0.0126 / r3])),
            ],
        );
        assert!((a3.standard - 0.000_184_3).abs() <= 5e-7, "{}", a3.standard);
    }
}
