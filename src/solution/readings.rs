//! Readings of a titration: fitted to the full equilibrium, and judged by their residuals.

use crate::equilibrium::elementary::LN_10;
use crate::problem::{Readings, Signal, Titration};
use crate::solution::Unsolvable;
use crate::solution::answer::{Fit, Fitted};
use crate::solution::burette::Titrated;
use crate::solution::conclusion::Bench;
use crate::solution::end_point;
use crate::solution::fit::{Minimum, Parameter, Series, minimise};
use crate::solution::fit_parameter::{parameter, with_carbonate};
use crate::solution::residual::{runs_probability, warnings};

/// Faraday constant in C/mol and gas constant in J/(mol K), CODATA 2018, exact; recalled.
const FARADAY: f64 = 96_485.332_12;
const GAS_CONSTANT: f64 = 8.314_462_618;

/// The fit of readings, or, where nothing is to be determined, their residuals from the curve as stated.
///
/// # Errors
/// [`Unsolvable::Fit`].
pub(super) fn fitted(
    bench: &Bench<'_>,
    task: &Titration,
    readings: &Readings,
) -> Result<Fit, Unsolvable> {
    let titrant = with_carbonate(&task.titrant, &readings.fit)?;
    let titrated = Titrated::of(bench, task, &titrant)?;
    let parameters = readings
        .fit
        .iter()
        .map(|wanted| parameter(bench, task, &titrated, wanted))
        .collect::<Result<Vec<_>, _>>()?;
    let series = series(readings, bench.setting.temperature);
    let count = series.volumes.len();
    let degrees_of_freedom = count
        .checked_sub(parameters.len())
        .filter(|degrees| *degrees > 0)
        .ok_or_else(|| Unsolvable::Fit {
            reason: format!(
                "{count} readings for {} quantities leave no degree of freedom",
                parameters.len()
            ),
        })?;
    let minimum = minimise(&titrated, &parameters, &series)?;
    Ok(told(
        readings,
        &series,
        &parameters,
        &minimum,
        degrees_of_freedom,
        titrated.sample_volume,
    ))
}

/// Volumes in L and pH; a cell voltage becomes a pH by the calibration, `pH = 7 + (E7 - E)/(s RT ln 10/F)`.
fn series(readings: &Readings, temperature: f64) -> Series {
    let nernst = 1000.0 * GAS_CONSTANT * temperature * LN_10 / FARADAY;
    let ph = |signal: f64| match readings.signal {
        Signal::Ph => signal,
        Signal::Millivolt {
            at_ph_7,
            slope_percent,
        } => 7.0 + (at_ph_7 - signal) / (nernst * slope_percent / 100.0),
    };
    Series {
        volumes: readings
            .points
            .iter()
            .map(|point| 1e-3 * point.volume_ml)
            .collect(),
        readings: readings
            .points
            .iter()
            .map(|point| ph(point.signal))
            .collect(),
    }
}

fn told(
    readings: &Readings,
    series: &Series,
    parameters: &[Parameter],
    minimum: &Minimum,
    degrees_of_freedom: usize,
    sample_volume: f64,
) -> Fit {
    let squares: f64 = minimum.residuals.iter().map(|off| off * off).sum();
    let degrees = f64::from(u32::try_from(degrees_of_freedom).unwrap_or(u32::MAX));
    let deviation = (squares / degrees).sqrt();
    let entry = |row: usize, column: usize| {
        let found = minimum.inverse.get((row, column));
        found.copied().unwrap_or(0.0)
    };
    let size = parameters.len();
    let correlation: Vec<Vec<f64>> = (0..size)
        .map(|row| {
            (0..size)
                .map(|column| entry(row, column) / (entry(row, row) * entry(column, column)).sqrt())
                .collect()
        })
        .collect();
    let fitted: Vec<Fitted> = parameters
        .iter()
        .zip(&minimum.values)
        .enumerate()
        .map(|(place, (parameter, value))| Fitted {
            quantity: parameter.quantity.clone(),
            value: value * parameter.told(),
            unit: parameter.unit,
            standard_error: deviation * entry(place, place).sqrt() * parameter.told(),
        })
        .collect();
    let runs_probability = runs_probability(&minimum.residuals);
    let points: Vec<(f64, f64)> = series
        .volumes
        .iter()
        .map(|litres| 1e3 * litres)
        .zip(series.readings.iter().copied())
        .collect();
    Fit {
        warnings: warnings(&fitted, &correlation, runs_probability, minimum.converged),
        fitted,
        correlation,
        residual_standard_deviation: deviation,
        degrees_of_freedom,
        runs_probability,
        outliers: readings
            .points
            .iter()
            .zip(&minimum.residuals)
            .filter(|(_, off)| off.abs() > 3.0 * deviation)
            .map(|(point, _)| point.line)
            .collect(),
        end_points: end_point::of(&points, 1e3 * sample_volume),
        residuals: minimum.residuals.clone(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::problem::{Composition, FitParameter, MadeUp, Problem, ReadingsPoint};
    use crate::quantity::Unit;
    use crate::solution::answer::Outcome;
    use crate::solution::recipe::Distribution;
    use crate::solution::simulation::Deviates;
    use crate::solution::solve;
    use crate::solution::specimen::{input, molar, statement};

    fn titration(acid: &str, readings: Option<Readings>, points: u32) -> Titration {
        Titration {
            sample: Composition {
                made_up: MadeUp::To(input("sample / volume", "25.00", Unit::Millilitre)),
                ..molar(&[("acetic acid", acid)])
            },
            titrant: molar(&[("sodium hydroxide", "0.1000")]),
            to: input("to", "20.00", Unit::Millilitre),
            points: Some(points),
            indicators: Vec::new(),
            readings,
        }
    }

    fn outcome(task: Titration) -> crate::solution::answer::TitrationOutcome {
        let answer = solve(&statement(Problem::Titration(Box::new(task)), "25")).unwrap();
        let Outcome::Titration(outcome) = answer.outcome else {
            panic!("a titration was asked for");
        };
        *outcome
    }

    /// Readings of 0.0512 mol/L acid with noise of 0.01 pH.
    fn noisy() -> Vec<ReadingsPoint> {
        let mut deviates = Deviates::of(11);
        outcome(titration("0.0512", None, 60))
            .points
            .iter()
            .zip(2..)
            .map(|(point, line)| ReadingsPoint {
                line,
                volume_ml: point.volume_ml,
                signal: point.ph + 0.01 * deviates.standard(Distribution::Normal),
            })
            .collect()
    }

    #[test]
    fn what_was_put_in_comes_out() {
        let readings = Readings {
            path: String::new(),
            points: noisy(),
            signal: Signal::Ph,
            fit: vec![
                FitParameter::SampleConcentration("acetic acid".to_owned()),
                FitParameter::Pk {
                    ligand: "acetic acid".to_owned(),
                    step: 1,
                },
            ],
        };
        let fit = outcome(titration("0.0500", Some(readings), 60))
            .fit
            .unwrap();
        let concentration = &fit.fitted[0];
        // Within four of its own standard errors, which are themselves a few parts in ten thousand.
        assert!((concentration.value - 0.0512).abs() < 4.0 * concentration.standard_error);
        assert!(concentration.standard_error < 1e-3 * concentration.value);
        assert!(
            (fit.fitted[1].value - 4.756).abs() < 0.01,
            "{}",
            fit.fitted[1].value
        );
        assert!((fit.residual_standard_deviation - 0.01).abs() < 0.004);
        assert!(fit.warnings.is_empty(), "{:?}", fit.warnings);
        let gran = fit
            .end_points
            .iter()
            .find(|(name, _)| name.contains("before"));
        assert!((gran.unwrap().1 - 12.8).abs() < 0.2, "{:?}", fit.end_points);
    }

    #[test]
    fn carbonate_in_the_titrant_is_not_found_where_there_is_none() {
        let readings = Readings {
            path: String::new(),
            points: noisy(),
            signal: Signal::Ph,
            fit: vec![
                FitParameter::SampleConcentration("acetic acid".to_owned()),
                FitParameter::CarbonateInTitrant,
            ],
        };
        let fit = outcome(titration("0.0500", Some(readings), 60))
            .fit
            .unwrap();
        assert!(fit.fitted[1].value.abs() < 5.0 * fit.fitted[1].standard_error + 1e-5);
    }
}
