//! The value of one variable at which a quantity has a target value.

use crate::solution::Unsolvable;

/// Halvings of a bracket: 2⁻⁶⁰ of its width is below the last digit of a double.
const MOST_HALVINGS: u32 = 60;

/// The point in a bracket where a function whose signs differ at its ends is zero, by the method of Illinois, bisecting every third step.
///
/// # Errors
/// What the function says.
pub(super) fn root(
    (mut lower, mut upper): (f64, f64),
    (mut at_lower, mut at_upper): (f64, f64),
    mut off: impl FnMut(f64) -> Result<f64, Unsolvable>,
) -> Result<f64, Unsolvable> {
    for round in 0..3 * MOST_HALVINGS {
        let width = upper - lower;
        if at_lower.abs() <= 0.0 {
            return Ok(lower);
        }
        if at_upper.abs() <= 0.0 {
            return Ok(upper);
        }
        if width.abs() <= 1e-14 * lower.abs().max(upper.abs()) {
            break;
        }
        let secant = lower - at_lower * width / (at_upper - at_lower);
        let inside = secant > lower.min(upper) && secant < lower.max(upper);
        let next = if round % 3 == 2 || !inside {
            0.5 * (lower + upper)
        } else {
            secant
        };
        let at_next = off(next)?;
        if at_next.abs() <= 1e-13 {
            return Ok(next);
        }
        if at_next.signum() * at_lower.signum() > 0.0 {
            (lower, at_lower) = (next, at_next);
            if round % 3 == 1 {
                at_upper *= 0.5;
            }
        } else {
            (upper, at_upper) = (next, at_next);
            if round % 3 == 1 {
                at_lower *= 0.5;
            }
        }
    }
    Ok(0.5 * (lower + upper))
}

/// Where along `0, first, first × growth, … ≤ most` a function changes its sign: the bracket with its values, or the values at both ends.
///
/// # Errors
/// What the function says.
pub(super) fn bracket(
    first: f64,
    most: f64,
    mut off: impl FnMut(f64) -> Result<f64, Unsolvable>,
) -> Result<Result<Bracket, (f64, f64)>, Unsolvable> {
    const GROWTH: f64 = 1.5;
    let at_zero = off(0.0)?;
    let (mut lower, mut at_lower) = (0.0, at_zero);
    let mut upper = first.min(most);
    loop {
        // Beyond what can be solved nothing is within reach.
        let Ok(at_upper) = off(upper) else {
            return Ok(Err((at_zero, at_lower)));
        };
        if at_lower.signum() * at_upper.signum() <= 0.0 {
            return Ok(Ok(((lower, upper), (at_lower, at_upper))));
        }
        if upper >= most {
            return Ok(Err((at_zero, at_upper)));
        }
        (lower, at_lower) = (upper, at_upper);
        upper = (upper * GROWTH).min(most);
    }
}

/// A bracket and the values at its ends.
pub(super) type Bracket = ((f64, f64), (f64, f64));

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_steep_step_is_found() {
        let off = |x: f64| Ok(1e6 * (x - 0.3) / (1.0 + 1e6 * (x - 0.3).abs()));
        let found = root((0.0, 1.0), (off(0.0).unwrap(), off(1.0).unwrap()), off).unwrap();
        assert!((found - 0.3).abs() < 1e-13, "{found}");
        let bracketed = bracket(0.01, 10.0, off).unwrap().unwrap();
        assert!(bracketed.0.0 < 0.3 && bracketed.0.1 > 0.3);
        assert!(bracket(0.01, 0.2, off).unwrap().is_err());
    }
}
