//! Readings of a titration: fitted to the full equilibrium, and judged by their residuals.

use crate::equilibrium::elementary::{LN_10, erf};
use crate::problem::{
    Composition, Content, ContentAmount, Corrections, FitParameter, Ingredient, Input, InputId,
    Readings, Signal, Strength, Titration, Trace,
};
use crate::quantity::{Decimal, Measured, Unit};
use crate::solution::Unsolvable;
use crate::solution::answer::{Fit, Fitted};
use crate::solution::assembly::Assembly;
use crate::solution::burette::Titrated;
use crate::solution::conclusion::Bench;
use crate::solution::end_point;
use crate::solution::fit::{Lever, Minimum, Parameter, Series, minimise};
use crate::substance::Catalogue;
use std::sync::Arc;

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

/// The identity of carbonate supposed in the titrant.
fn carbonate_id() -> InputId {
    InputId::new("titrant").within("carbonate")
}

/// The titrant with a little carbon dioxide in it, where carbonate is to be determined: what it takes up from the air.
fn with_carbonate(
    titrant: &Composition,
    wanted: &[FitParameter],
) -> Result<Composition, Unsolvable> {
    let mut titrant = titrant.clone();
    if !wanted.contains(&FitParameter::CarbonateInTitrant) {
        return Ok(titrant);
    }
    let form = Catalogue::embedded()?.find("carbon dioxide").ok();
    let little = Measured::new(Decimal::new(false, 1, -4), Unit::MolePerLitre);
    if let Some((form, little)) = form.zip(little) {
        titrant
            .ingredients
            .push(Ingredient::Substance(Box::new(Content {
                id: carbonate_id(),
                form: Arc::clone(form),
                amount: ContentAmount::Concentration(Input::new(carbonate_id(), little)),
                corrections: Corrections::default(),
                trace: Trace::default(),
            })));
    }
    Ok(titrant)
}

fn parameter(
    bench: &Bench<'_>,
    task: &Titration,
    titrated: &Titrated,
    wanted: &FitParameter,
) -> Result<Parameter, Unsolvable> {
    let plain = |quantity: &str, unit, lever, start, step| Parameter {
        quantity: quantity.to_owned(),
        unit,
        lever,
        start,
        step,
    };
    match wanted {
        FitParameter::SampleConcentration(name) => {
            factor(bench, titrated, &task.sample, Some(name), "sample")
        }
        FitParameter::TitrantConcentration(name) => {
            let name = Some(name.as_str()).filter(|name| !name.is_empty());
            factor(bench, titrated, &task.titrant, name, "titrant")
        }
        FitParameter::Pk { ligand, step } => {
            let row = titrated
                .assembly
                .pks
                .iter()
                .position(|row| row.ligand.name == *ligand && row.step + 1 == *step);
            let row = row.ok_or_else(|| absent(&format!("pKa {step} of {ligand}")))?;
            let start = titrated
                .assembly
                .pks
                .get(row)
                .map_or(0.0, |pk| pk.found.value);
            let quantity = format!("pKa {step} of {ligand}");
            Ok(plain(&quantity, "", Lever::Pk { row }, start, 1e-4))
        }
        FitParameter::CarbonateInTitrant => {
            let index = titrated
                .assembly
                .variable(&carbonate_id())
                .ok_or_else(|| absent("carbonate in titrant"))?;
            let lever = Lever::Value { index };
            Ok(plain("carbonate in titrant", "mol/L", lever, 1e-4, 1e-7))
        }
        FitParameter::ElectrodeOffset => {
            Ok(plain("electrode offset", "pH", Lever::Offset, 0.0, 1e-3))
        }
        FitParameter::ElectrodeSlope => {
            Ok(plain("electrode slope", "%", Lever::Slope, 100.0, 1e-2))
        }
    }
}

fn absent(what: &str) -> Unsolvable {
    Unsolvable::Fit {
        reason: format!("{what} is nothing that sample and titrant have"),
    }
}

/// The amount of a substance of a liquid as a factor on what was stated; told as its amount concentration in that liquid.
fn factor(
    bench: &Bench<'_>,
    titrated: &Titrated,
    liquid: &Composition,
    name: Option<&str>,
    place: &str,
) -> Result<Parameter, Unsolvable> {
    let content = content_of(liquid, name).ok_or_else(|| absent(name.unwrap_or(place)))?;
    let what = format!("{} in {place}", content.form.name);
    let id = amount_id(content);
    let alone = bench.assemble(liquid)?;
    let (Some(index), Some(own)) = (titrated.assembly.variable(id), alone.variable(id)) else {
        return Err(absent(&what));
    };
    let variable = titrated.assembly.recipe.variables.get(index.place());
    let stated = variable.map_or(0.0, |variable| variable.value.to_f64());
    Ok(Parameter {
        unit: "mol/L",
        lever: Lever::Factor {
            index,
            stated,
            at_one: brought(&alone, content, own.place()),
        },
        start: 1.0,
        step: 1e-5,
        quantity: what,
    })
}

/// Amount concentration in mol/L of a content in its liquid: linear in its amount, so derivative times value.
fn brought(assembly: &Assembly, content: &Content, place: usize) -> f64 {
    let worked = assembly.recipe.tape.evaluate(&assembly.stated());
    let Some((component, count)) = content.form.contains.first() else {
        return 0.0;
    };
    let node = assembly
        .parts
        .iter()
        .find(|part| part.component.name() == component.name())
        .and_then(|part| part.concentration);
    let Some(node) = node else { return 0.0 };
    let gradient = assembly.recipe.tape.gradient(&worked, &[(node, 1.0)]);
    let value = assembly.recipe.variables.get(place);
    let value = value.map_or(0.0, |variable| variable.value.to_f64());
    gradient.get(place).copied().unwrap_or(0.0) * value / f64::from(*count)
}

fn content_of<'a>(liquid: &'a Composition, name: Option<&str>) -> Option<&'a Content> {
    liquid
        .ingredients
        .iter()
        .find_map(|ingredient| match ingredient {
            Ingredient::Substance(content) => {
                let fits = name.is_none_or(|name| content.form.name == name);
                fits.then_some(content.as_ref())
            }
            Ingredient::Solution(portion) => content_of(&portion.composition, name),
            Ingredient::Water(_) => None,
        })
}

fn amount_id(content: &Content) -> &InputId {
    match &content.amount {
        ContentAmount::Concentration(input) => &input.id,
        ContentAmount::Molality(input) => &input.id,
        ContentAmount::MassConcentration(input) => &input.id,
        ContentAmount::Mass(input) => &input.id,
        ContentAmount::Amount(input) => &input.id,
        ContentAmount::Stock { strength, .. } => match strength {
            Strength::Concentration(input) => &input.id,
            Strength::MassConcentration(input) => &input.id,
            Strength::MassFraction { fraction, .. } => &fraction.id,
        },
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

/// Correlation above which two quantities cannot be told apart by the readings, and relative standard error above which one is not determined;
/// common practice.
const MOST_CORRELATED: f64 = 0.98;
const LEAST_CERTAIN: f64 = 0.2;

/// Probability below which the order of signs speaks of a lack of fit.
const LEAST_PROBABLE: f64 = 0.05;

fn warnings(
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
fn runs_probability(residuals: &[f64]) -> f64 {
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
    use crate::problem::{MadeUp, Problem, ReadingsPoint};
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
