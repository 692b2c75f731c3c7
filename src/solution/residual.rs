//! Residuals judged: the order of their signs, and what the readings cannot decide.

use crate::equilibrium::elementary::erf;
use crate::solution::answer::Fitted;

/// Correlation above which two quantities cannot be told apart by the readings, and relative standard error above which one is not determined;
/// common practice.
const MOST_CORRELATED: f64 = 0.98;
const LEAST_CERTAIN: f64 = 0.2;

/// Probability below which the order of signs speaks of a lack of fit.
const LEAST_PROBABLE: f64 = 0.05;

/// What a reader of the fit has to know.
pub(super) fn warnings(
    fitted: &[Fitted],
    correlation: &[Vec<f64>],
    runs_probability: f64,
    converged: bool,
) -> Vec<String> {
    let mut warnings = Vec::new();
    if !converged {
        warnings.push("the search did not say that it converged".to_owned());
    }
    for (row, (one, line)) in fitted.iter().zip(correlation).enumerate() {
        for (other, value) in fitted.iter().zip(line).skip(row + 1) {
            if value.abs() > MOST_CORRELATED {
                warnings.push(format!(
                    "{} and {} can hardly be told apart by these readings: correlation {value:.3}",
                    one.quantity, other.quantity
                ));
            }
        }
        let relative = one.standard_error / one.value.abs();
        if relative > LEAST_CERTAIN && one.unit == "mol/L" {
            warnings.push(format!(
                "{} is hardly determined: standard error {:.0} % of it",
                one.quantity,
                100.0 * relative
            ));
        }
    }
    if runs_probability < LEAST_PROBABLE {
        warnings.push(format!(
            "lack of fit: the signs of the residuals are not in random order, probability {runs_probability:.4}"
        ));
    }
    warnings
}

/// Probability of so few or so many runs of signs by chance, dimensionless; 1 where there are too few signs of a kind to tell.
///
/// Source: Wald and Wolfowitz (1940), Ann. Math. Stat. 11, 147, normal approximation with continuity correction; recalled.
pub(super) fn runs_probability(residuals: &[f64]) -> f64 {
    let signs: Vec<bool> = residuals
        .iter()
        .filter(|off| off.abs() > 0.0)
        .map(|off| *off > 0.0)
        .collect();
    let count = |sign: bool| {
        let count = signs.iter().filter(|one| **one == sign).count();
        f64::from(u32::try_from(count).unwrap_or(0))
    };
    let (plus, minus) = (count(true), count(false));
    if plus < 2.0 || minus < 2.0 {
        return if plus + minus > 7.0 { 0.0 } else { 1.0 };
    }
    let changes = signs
        .windows(2)
        .filter(|pair| pair.first() != pair.last())
        .count();
    let runs = f64::from(u32::try_from(changes).unwrap_or(0)) + 1.0;
    let all = plus + minus;
    let product = 2.0 * plus * minus;
    let expected = product / all + 1.0;
    let variance = product * (product - all) / (all * all * (all - 1.0));
    let distance = ((runs - expected).abs() - 0.5).max(0.0) / variance.sqrt();
    1.0 - erf(distance / std::f64::consts::SQRT_2)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn runs_are_judged() {
        let alternating: Vec<f64> = (0..40)
            .map(|i| if i % 2 == 0 { 1.0 } else { -1.0 })
            .collect();
        let halves: Vec<f64> = (0..40).map(|i| if i < 20 { 1.0 } else { -1.0 }).collect();
        assert!(runs_probability(&alternating) < 0.001);
        assert!(runs_probability(&halves) < 0.001);
    }
}
