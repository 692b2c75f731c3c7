//! `titration`: sample, titrant, curve.

use crate::block::preparation::liquid;
use crate::block::reader::Reader;
use crate::block::{contents, figure, fit, origin, readings, remarks};
use crate::problem::{Composition, FitParameter, InputId, MadeUp, Readings, Signal, Titration};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{Keys, Mapping, Scalar};

pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Titration> {
    let points = remarks::count(reader, keys, "points", 2, 20_000);
    let indicators = remarks::names(reader, keys, "indicators");
    let to = keys
        .required_text("to", &mut reader.diagnostics)
        .and_then(|scalar| reader.input(InputId::new("to"), scalar));
    let sample = sample(reader, keys);
    let titrant = titrant(reader, keys);
    let fit = fit::read(reader, keys, sample.as_ref(), titrant.as_ref());
    let readings = measured(reader, keys, fit);
    Some(Titration {
        sample: sample?,
        titrant: titrant?,
        to: to?,
        points,
        indicators,
        readings,
    })
}

/// The sample has a volume, stated or that of the portion.
fn sample(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Composition> {
    let mapping = keys
        .required("sample", &mut reader.diagnostics)?
        .as_mapping(&mut reader.diagnostics)?;
    let mut inner = mapping.keys();
    let sample = liquid(reader, &mut inner, &InputId::new("sample"));
    inner.finish(&mut reader.diagnostics);
    let sample = sample?;
    if sample.made_up == MadeUp::Unstated {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::VolumeNeeded,
                mapping.heading(),
                "the volume of the sample is not stated",
            )
            .expecting("`volume: ...` in `sample`"),
        );
        return None;
    }
    Some(sample)
}

/// The titrant needs no volume: how much is used is what the curve runs over.
fn titrant(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Composition> {
    let mapping = keys
        .required("titrant", &mut reader.diagnostics)?
        .as_mapping(&mut reader.diagnostics)?;
    let mut inner = mapping.keys();
    let found = match inner.text("solution", &mut reader.diagnostics) {
        Some(scalar) => origin::solution(reader, scalar).map(|found| (*found).clone()),
        None => contents::composition(reader, &mut inner, &InputId::new("titrant")),
    };
    inner.finish(&mut reader.diagnostics);
    let found = found?;
    if found.ingredients.is_empty() {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::BadTitration,
                mapping.heading(),
                "the titrant is water",
            )
            .expecting("an acid or a base with its concentration"),
        );
        return None;
    }
    Some(found)
}

/// `readings` with the electrode's `calibration`; what is to be fitted needs readings.
fn measured(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    fit: Vec<FitParameter>,
) -> Option<Readings> {
    let electrode = keys
        .mapping("calibration", &mut reader.diagnostics)
        .map(|mapping| calibration(reader, mapping));
    let scalar = keys.text("readings", &mut reader.diagnostics);
    if scalar.is_none() && keys.take("readings").is_none() {
        for key in ["fit", "calibration"] {
            if let Some(entry) = keys.take_entry(key) {
                reader.diagnostics.push(
                    Diagnostic::error(
                        Rule::ConflictingKeys,
                        entry.key.span(),
                        format!("`{key}` has nothing to work on"),
                    )
                    .expecting("`readings: file.csv` beside it"),
                );
            }
        }
    }
    let scalar = scalar?;
    let path = scalar.text().to_owned();
    let table = attached(reader, scalar)?;
    let signal = match (table.in_millivolts, electrode) {
        (false, None) => Signal::Ph,
        (true, Some(electrode)) => electrode?,
        (in_millivolts, _) => {
            let (found, expected) = if in_millivolts {
                (
                    "millivolts",
                    "`calibration: {mV at pH 7: ..., slope: ... %}` beside it",
                )
            } else {
                ("pH", "no `calibration`, which turns millivolts into pH")
            };
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::BadAttachment,
                    scalar.span(),
                    format!("`{path}` holds {found}"),
                )
                .expecting(expected),
            );
            return None;
        }
    };
    if fit.len() >= table.points.len() {
        reader.error(
            Rule::BadFit,
            scalar.span(),
            format!("`{path}` has no more readings than there are unknowns"),
        );
    }
    Some(Readings {
        path,
        points: table.points,
        signal,
        fit,
    })
}

fn attached(reader: &mut Reader<'_>, scalar: &Scalar) -> Option<readings::Table> {
    let path = scalar.text();
    reader.attachments.push(path.to_owned());
    let bytes = match reader.context.attachments.read(path) {
        Ok(bytes) => bytes,
        Err(reason) => {
            reader.error(
                Rule::MissingAttachment,
                scalar.span(),
                format!("`{path}` cannot be read: {reason}"),
            );
            return None;
        }
    };
    match readings::read(&bytes) {
        Ok(table) => Some(table),
        Err(faults) => {
            for fault in faults {
                let message = format!("`{path}`, {fault}");
                reader.error(Rule::BadAttachment, scalar.span(), message);
            }
            None
        }
    }
}

fn calibration(reader: &mut Reader<'_>, mapping: &Mapping) -> Option<Signal> {
    let mut keys = mapping.keys();
    let mut value_of = |key, unit, range: std::ops::RangeInclusive<f64>, expected: &str| {
        let scalar = keys.required_text(key, &mut reader.diagnostics)?;
        let number = figure::number_in(scalar, unit, &mut reader.diagnostics)?;
        let value = number.to_f64();
        if range.contains(&value) {
            return Some(value);
        }
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::OutOfRange,
                scalar.span(),
                format!("`{}` is no calibration of a pH electrode", scalar.text()),
            )
            .expecting(expected),
        );
        None
    };
    let at_ph_7 = value_of("mV at pH 7", "mV", -500.0..=500.0, "from -500 to 500 mV");
    let slope_percent = value_of("slope", "%", 50.0..=120.0, "from 50 to 120 %");
    keys.finish(&mut reader.diagnostics);
    Some(Signal::Millivolt {
        at_ph_7: at_ph_7?,
        slope_percent: slope_percent?,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::{faults, one_fault, problem};
    use crate::problem::Problem;

    const SAMPLE: &str = "sample: {volume: 25.00 mL, contents: {phosphoric acid: 0.0320 mol/L}}\n";
    const TITRANT: &str = "titrant: {contents: {sodium hydroxide: 0.1000 mol/L}}\n";

    fn keys(more: &str) -> String {
        format!("{SAMPLE}{TITRANT}to: 20.00 mL\n{more}")
    }

    #[test]
    fn the_example_of_the_language_is_read() {
        let more = "points: 200\nreadings: run.csv\nfit: [phosphoric acid, titrant, pKa 1 of phosphoric acid, carbonate in titrant]\n";
        let Problem::Titration(task) = problem("titration", &keys(more)) else {
            panic!()
        };
        let readings = task.readings.unwrap();
        assert_eq!(readings.points.len(), 6);
        assert_eq!(
            readings.fit,
            [
                FitParameter::SampleConcentration("phosphoric acid".to_owned()),
                FitParameter::TitrantConcentration("sodium hydroxide".to_owned()),
                FitParameter::Pk {
                    ligand: "phosphoric acid".to_owned(),
                    step: 1
                },
                FitParameter::CarbonateInTitrant,
            ]
        );
    }

    #[test]
    fn millivolts_need_the_electrode() {
        let more = "readings: run-mv.csv\ncalibration: {mV at pH 7: 2.1, slope: 98.9 %}\n";
        let Problem::Titration(task) = problem("titration", &keys(more)) else {
            panic!()
        };
        assert_eq!(
            task.readings.unwrap().signal,
            Signal::Millivolt {
                at_ph_7: 2.1,
                slope_percent: 98.9
            }
        );
    }

    #[test]
    fn faults_of_a_titration() {
        for (keys, rule, place, help) in [
            (
                format!("{TITRANT}to: 1 mL\n"),
                Rule::MissingKey,
                "label",
                "`sample: ...`",
            ),
            (
                format!("{SAMPLE}to: 1 mL\n"),
                Rule::MissingKey,
                "label",
                "`titrant: ...`",
            ),
            (
                format!("{SAMPLE}{TITRANT}"),
                Rule::MissingKey,
                "label",
                "`to: ...`",
            ),
            (
                format!("{SAMPLE}{TITRANT}to: 0 mL\n"),
                Rule::OutOfRange,
                "0 mL",
                "more than nothing",
            ),
            (
                format!("{SAMPLE}titrant: {{contents: water}}\nto: 1 mL\n"),
                Rule::BadTitration,
                "titrant",
                "",
            ),
            (
                format!("{TITRANT}to: 1 mL\nsample: {{contents: {{acetic acid: 1 mol/L}}}}\n"),
                Rule::VolumeNeeded,
                "sample",
                "",
            ),
            (keys("points: 1\n"), Rule::OutOfRange, "1", "from 2 to"),
        ] {
            one_fault("titration", &keys, rule, place, help);
        }
    }

    #[test]
    fn faults_of_readings_and_fit() {
        for (keys, rule, place, help) in [
            (
                keys("readings: no.csv\n"),
                Rule::MissingAttachment,
                "no.csv",
                "",
            ),
            (
                keys("readings: run-mv.csv\n"),
                Rule::BadAttachment,
                "run-mv.csv",
                "calibration",
            ),
            (
                keys("fit: [titrant]\n"),
                Rule::ConflictingKeys,
                "fit",
                "readings",
            ),
            (
                keys("readings: run.csv\nfit: [citric acid]\n"),
                Rule::BadFit,
                "citric acid",
                "a substance of",
            ),
            (
                keys("readings: run.csv\nfit: [pKa 4 of phosphoric acid]\n"),
                Rule::BadFit,
                "pKa 4 of phosphoric acid",
                "",
            ),
            (
                keys("readings: run.csv\nfit: [titrant, NaOH]\n"),
                Rule::BadFit,
                "NaOH",
                "",
            ),
        ] {
            one_fault("titration", &keys, rule, place, help);
        }
    }

    #[test]
    fn every_wrong_line_of_the_readings_is_told() {
        let found = faults("titration", &keys("readings: broken.csv\n"));
        assert_eq!(found.len(), 2);
        assert!(found.iter().all(|fault| fault.0 == Rule::BadAttachment));
    }
}
