//! `titration`: sample, titrant, curve.

use crate::block::preparation::liquid;
use crate::block::reader::Reader;
use crate::block::{contents, figure, fit, readings, remarks};
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
        Some(scalar) => contents::solution(reader, scalar).map(|found| (*found).clone()),
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
