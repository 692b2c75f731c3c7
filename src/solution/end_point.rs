//! End points of measured readings without a model of the solution: derivatives and Gran's lines.

use crate::equilibrium::elementary::exp10;

/// One reading: volume in mL and pH.
pub(super) type Reading = (f64, f64);

/// End points by name with their volumes in mL: where the readings allow them.
pub(super) fn of(readings: &[Reading], sample_ml: f64) -> Vec<(String, f64)> {
    let mut found = Vec::new();
    let Some(steepest) = first_derivative(readings) else {
        return found;
    };
    found.push(("first derivative".to_owned(), steepest));
    if let Some(volume) = second_derivative(readings, steepest) {
        found.push(("second derivative".to_owned(), volume));
    }
    let rising = readings
        .first()
        .zip(readings.last())
        .is_none_or(|(first, last)| last.1 > first.1);
    let sign = if rising { 1.0 } else { -1.0 };
    // Gran (1952), Analyst 77, 661, recalled: before the end point of a weak acid v 10^-pH falls in a straight line to zero there; beyond it
    // (V + v) 10^pH rises in one from zero. For a base the signs of pH change.
    let before = gran(
        readings,
        |volume| (0.5..0.95).contains(&(volume / steepest)),
        |(volume, ph)| volume * exp10(-sign * ph),
    );
    if let Some(volume) = before {
        found.push(("Gran, before the end point".to_owned(), volume));
    }
    let beyond = gran(
        readings,
        |volume| volume > 1.03 * steepest,
        |(volume, ph)| (sample_ml + volume) * exp10(sign * ph - 14.0),
    );
    if let Some(volume) = beyond {
        found.push(("Gran, beyond the end point".to_owned(), volume));
    }
    found
}

/// Slopes between neighbouring readings: middle volume in mL and slope in pH per mL; readings at one volume are passed over.
fn slopes(readings: &[Reading]) -> Vec<Reading> {
    readings
        .windows(2)
        .filter_map(|pair| match pair {
            [(v1, ph1), (v2, ph2)] if v2 > v1 => Some((0.5 * (v1 + v2), (ph2 - ph1) / (v2 - v1))),
            _ => None,
        })
        .collect()
}

/// The middle of the steepest interval, in mL.
fn first_derivative(readings: &[Reading]) -> Option<f64> {
    slopes(readings)
        .into_iter()
        .max_by(|a, b| a.1.abs().total_cmp(&b.1.abs()))
        .map(|(volume, _)| volume)
}

/// Where the second derivative, taken between neighbouring slopes, changes its sign next to the steepest interval; in mL.
fn second_derivative(readings: &[Reading], steepest: f64) -> Option<f64> {
    let second = slopes(&slopes(readings));
    second
        .windows(2)
        .filter_map(|pair| match pair {
            [(v1, d1), (v2, d2)] if d1.signum() * d2.signum() < 0.0 => {
                Some(v1 + (v2 - v1) * d1 / (d1 - d2))
            }
            _ => None,
        })
        .min_by(|a, b| (a - steepest).abs().total_cmp(&(b - steepest).abs()))
}

/// The volume in mL at which the straight line through a function of some readings is zero.
fn gran(
    readings: &[Reading],
    counts: impl Fn(f64) -> bool,
    function: impl Fn(Reading) -> f64,
) -> Option<f64> {
    let points: Vec<Reading> = readings
        .iter()
        .filter(|(volume, _)| counts(*volume))
        .map(|reading| (reading.0, function(*reading)))
        .collect();
    let count = f64::from(u32::try_from(points.len()).ok()?);
    if count < 3.0 {
        return None;
    }
    let mean_v = points.iter().map(|point| point.0).sum::<f64>() / count;
    let mean_f = points.iter().map(|point| point.1).sum::<f64>() / count;
    let square: f64 = points
        .iter()
        .map(|(v, _)| (v - mean_v) * (v - mean_v))
        .sum();
    let product: f64 = points
        .iter()
        .map(|(v, f)| (v - mean_v) * (f - mean_f))
        .sum();
    let slope = product / square;
    let zero = mean_v - mean_f / slope;
    (zero.is_finite() && zero > 0.0).then_some(zero)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn gran_lines_end_at_the_end_point() {
        // A weak acid by hand: [H] = K (Ve - v)/v with pK 5 and Ve 10 mL; beyond, [OH] = 0.1 (v - Ve)/(25 + v).
        let readings: Vec<Reading> = (1..20)
            .filter(|place| *place != 10)
            .map(|place| {
                let v = f64::from(place);
                let ph = if v < 10.0 {
                    5.0 - crate::equilibrium::elementary::log10((10.0 - v) / v)
                } else {
                    14.0 + crate::equilibrium::elementary::log10(0.1 * (v - 10.0) / (25.0 + v))
                };
                (v, ph)
            })
            .collect();
        let found = of(&readings, 25.0);
        for (name, volume) in &found {
            let within = if name.contains("Gran") { 1e-9 } else { 0.51 };
            assert!((volume - 10.0).abs() < within, "{name} {volume}");
        }
        assert_eq!(found.len(), 4);
    }
}
