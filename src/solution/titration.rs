//! A titration: the curve, its equivalence points, indicators, and the fit to readings.

use crate::problem::Titration;
use crate::quantity::Dimension;
use crate::solution::Unsolvable;
use crate::solution::answer::{Answer, CurvePoint, Outcome, TitrationOutcome};
use crate::solution::burette::{Burette, Titrated};
use crate::solution::conclusion::{Bench, Finding};
use crate::solution::{equivalence, indicator, readings};

/// The answer to a titration; its state is that of the sample before the first addition.
///
/// # Errors
/// [`Unsolvable`].
pub(super) fn titrated(bench: &Bench<'_>, task: &Titration) -> Result<Answer, Unsolvable> {
    let to = task.to.value().base();
    if to <= 0.0 {
        return Err(Unsolvable::NotPositive {
            input: task.to.id.clone(),
            value: task.to.measured.to_string(),
        });
    }
    let titrated = Titrated::of(bench, task, &task.titrant)?;
    let sample = bench.assemble(&task.sample)?;
    let titrant = bench.assemble(&task.titrant)?;
    let fine = curve(&mut Burette::stated(&titrated), to)?;
    let equivalence_points = equivalence::points(&titrated, &sample, &titrant, &fine, to)?;
    let points = match task.points {
        Some(count) => even(&mut Burette::stated(&titrated), to, count)?,
        None => fine,
    };
    let fit = match &task.readings {
        Some(found) => Some(readings::fitted(bench, task, found)?),
        None => None,
    };
    let indicators = indicator::end_points(&titrated, &equivalence_points, &task.indicators, to)?;
    let outcome = TitrationOutcome {
        points,
        equivalence_points,
        indicators,
        unknown_indicators: indicator::unknown(&task.indicators),
        fit,
    };
    bench.conclude(Finding {
        assembly: sample,
        outcome: Outcome::Titration(Box::new(outcome)),
        liquid: task.sample.clone(),
        assumptions: Vec::new(),
    })
}

/// Points of the first, even division.
const FIRST_POINTS: u32 = 33;

/// Largest change of pH between neighbouring points.
const LARGEST_RISE: f64 = 0.25;

/// Largest distance in pH of a point from the straight line between its neighbours.
const LARGEST_BEND: f64 = 0.03;

/// Halvings of one of the first intervals.
const MOST_HALVINGS: u32 = 14;

/// As many points as the curve needs: intervals are halved until they neither rise nor bend much.
fn curve(burette: &mut Burette<'_>, to: f64) -> Result<Vec<CurvePoint>, Unsolvable> {
    let first = even(burette, to, FIRST_POINTS)?;
    let mut points: Vec<CurvePoint> = first.first().copied().into_iter().collect();
    for pair in first.windows(2) {
        let [before, after] = pair else { continue };
        halved(burette, (*before, *after), MOST_HALVINGS, &mut points)?;
        points.push(*after);
    }
    Ok(points)
}

/// The points between two, in order, as far as they are needed.
fn halved(
    burette: &mut Burette<'_>,
    (before, after): (CurvePoint, CurvePoint),
    left: u32,
    points: &mut Vec<CurvePoint>,
) -> Result<(), Unsolvable> {
    let straight = 0.5 * (before.ph + after.ph);
    let width = after.volume_ml - before.volume_ml;
    // What the slopes at both ends say of the middle.
    let bend = 0.125 * width * (before.slope - after.slope).abs();
    let rise = (after.ph - before.ph).abs();
    if left == 0 || (rise <= LARGEST_RISE && bend <= LARGEST_BEND) {
        return Ok(());
    }
    let middle = burette.point(0.5e-3 * (before.volume_ml + after.volume_ml))?;
    let bent = (middle.ph - straight).abs() > LARGEST_BEND || rise > LARGEST_RISE;
    if bent {
        halved(burette, (before, middle), left - 1, points)?;
    }
    points.push(middle);
    if bent {
        halved(burette, (middle, after), left - 1, points)?;
    }
    Ok(())
}

/// So many points at equal distances, both ends included; at least two.
fn even(burette: &mut Burette<'_>, to: f64, count: u32) -> Result<Vec<CurvePoint>, Unsolvable> {
    let last = count.max(2) - 1;
    (0..=last)
        .map(|place| burette.point(to * f64::from(place) / f64::from(last)))
        .collect()
}

#[cfg(test)]
mod tests {
    use crate::problem::{Composition, MadeUp, Problem, Titration};
    use crate::quantity::Unit;
    use crate::solution::answer::{Outcome, TitrationOutcome};
    use crate::solution::solve;
    use crate::solution::specimen::{input, molar, statement};

    fn titration(sample: &[(&str, &str)], titrant: &[(&str, &str)], to: &str) -> TitrationOutcome {
        let task = Titration {
            sample: Composition {
                made_up: MadeUp::To(input("sample / volume", "25.00", Unit::Millilitre)),
                ..molar(sample)
            },
            titrant: molar(titrant),
            to: input("to", to, Unit::Millilitre),
            points: None,
            indicators: Vec::new(),
            readings: None,
        };
        let answer = solve(&statement(Problem::Titration(Box::new(task)), "25")).unwrap();
        let Outcome::Titration(outcome) = answer.outcome else {
            panic!("a titration was asked for");
        };
        *outcome
    }

    #[test]
    fn phosphoric_acid_has_its_two_steps() {
        // 25.00 mL × 0.0320 / 0.1000 = 8.00 mL for each proton; the third comes at 24 mL, beyond the curve.
        let found = titration(
            &[("phosphoric acid", "0.0320")],
            &[("sodium hydroxide", "0.1000")],
            "20.00",
        );
        let volumes: Vec<f64> = found
            .equivalence_points
            .iter()
            .map(|point| point.volume_ml)
            .collect();
        assert_eq!(volumes.len(), 2);
        assert!((volumes[0] - 8.0).abs() < 1e-9 && (volumes[1] - 16.0).abs() < 1e-9);
        // The curve is steepest within 0.5 % of each.
        for point in &found.equivalence_points {
            assert!((point.steepest_ml.unwrap() / point.volume_ml - 1.0).abs() < 0.005);
        }
        assert!(found.points.windows(2).all(|pair| pair[0].ph < pair[1].ph));
        assert!(
            found.points.len() > 50 && found.points.len() < 400,
            "{}",
            found.points.len()
        );
        assert!(
            found
                .indicators
                .iter()
                .any(|one| one.indicator == "methyl red" || one.indicator == "bromocresol green")
        );
    }

    #[test]
    fn a_base_is_titrated_downwards() {
        // Carbonate with acid: 25.00 × 0.0500 / 0.1000 = 12.50 mL for each of two protons.
        let found = titration(
            &[("sodium carbonate", "0.0500")],
            &[("hydrochloric acid", "0.1000")],
            "40.0",
        );
        let volumes: Vec<f64> = found
            .equivalence_points
            .iter()
            .map(|point| point.volume_ml)
            .collect();
        assert!((volumes[0] - 12.5).abs() < 1e-9 && (volumes[1] - 25.0).abs() < 1e-9);
        assert!(found.points.windows(2).all(|pair| pair[0].ph > pair[1].ph));
        assert!(found.points.iter().all(|point| point.slope < 0.0));
    }

    #[test]
    fn slopes_are_the_derivatives() {
        let found = titration(
            &[("acetic acid", "0.1000")],
            &[("sodium hydroxide", "0.1000")],
            "40.0",
        );
        let middle = found
            .points
            .iter()
            .position(|point| (point.volume_ml - 12.5).abs() < 0.7)
            .unwrap();
        let (before, here, after) = (
            &found.points[middle - 1],
            &found.points[middle],
            &found.points[middle + 1],
        );
        let difference = (after.ph - before.ph) / (after.volume_ml - before.volume_ml);
        // A difference over 2.5 mL in the flat part; its own error is of the order of 2 %.
        assert!((difference / here.slope - 1.0).abs() < 0.03);
    }
}
