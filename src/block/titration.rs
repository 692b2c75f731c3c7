//! `titration`: sample, titrant, curve, readings.

use crate::block::preparation::liquid;
use crate::block::reader::Reader;
use crate::block::{amount, readings, remarks};
use crate::problem::{FitParameter, InputId, MadeUp, Readings, Signal, Titration};
use crate::quantity::{Dimension, Volume};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{Keys, Mapping, Scalar};

pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Titration> {
    let points = remarks::count(reader, keys, "points", 2, 20_000);
    let indicators = remarks::names(reader, keys, "indicators");
    let calibration = keys
        .mapping("calibration", &mut reader.diagnostics)
        .and_then(|mapping| calibration(reader, mapping));
    let fit = fit(reader, keys);
    let readings = keys
        .text("readings", &mut reader.diagnostics)
        .and_then(|scalar| attached(reader, scalar, calibration, fit));
    let to = keys
        .required_text("to", &mut reader.diagnostics)
        .and_then(|scalar| reader.input::<Volume>(InputId::new("to"), scalar));
    let sample = side(reader, keys, "sample");
    let titrant = side(reader, keys, "titrant");
    let sample = sample?;
    let to = to?;
    if sample.made_up == MadeUp::Unstated {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::VolumeNeeded,
                keys.whole().heading(),
                "the volume of the sample is not stated",
            )
            .expecting("`volume: ...` in `sample`"),
        );
        return None;
    }
    if to.value().base() <= 0.0 {
        reader.error(
            Rule::BadTitration,
            keys.whole().heading(),
            "the curve ends where it begins; `to` is more than nothing",
        );
        return None;
    }
    Some(Titration {
        sample,
        titrant: titrant?,
        to,
        points,
        indicators,
        readings,
    })
}

fn side(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    key: &'static str,
) -> Option<crate::problem::Composition> {
    let mapping = keys
        .required(key, &mut reader.diagnostics)?
        .as_mapping(&mut reader.diagnostics)?;
    let mut inner = mapping.keys();
    let id = InputId::new(key);
    let found = if key == "titrant"
        && inner
            .whole()
            .entries()
            .iter()
            .any(|entry| entry.key.text() == "solution")
    {
        let scalar = inner.required_text("solution", &mut reader.diagnostics)?;
        super::contents::solution(reader, scalar).map(|composition| (*composition).clone())
    } else {
        liquid(reader, &mut inner, &id)
    };
    inner.finish(&mut reader.diagnostics);
    found
}

fn calibration(reader: &mut Reader<'_>, mapping: &Mapping) -> Option<Signal> {
    let mut keys = mapping.keys();
    let offset = keys
        .required_text("mV at pH 7", &mut reader.diagnostics)
        .and_then(|s| amount::number(s, &mut reader.diagnostics));
    let slope = keys
        .required_text("slope", &mut reader.diagnostics)
        .and_then(|scalar| {
            let plain = scalar.text().trim_end_matches('%').trim();
            crate::quantity::Decimal::parse(plain).ok()
        });
    keys.finish(&mut reader.diagnostics);
    Some(Signal::Millivolt {
        at_ph_7: offset?.to_f64(),
        slope_percent: slope?.to_f64(),
    })
}

fn attached(
    reader: &mut Reader<'_>,
    scalar: &Scalar,
    calibration: Option<Signal>,
    fit: Vec<FitParameter>,
) -> Option<Readings> {
    let path = scalar.text().to_owned();
    reader.attachments.push(path.clone());
    let bytes = match reader.context.attachments.read(&path) {
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
        Ok((points, millivolts)) => {
            let signal = match (millivolts, calibration) {
                (false, _) => Signal::Ph,
                (true, Some(signal)) => signal,
                (true, None) => {
                    reader.diagnostics.push(
                        Diagnostic::error(
                            Rule::BadAttachment,
                            scalar.span(),
                            format!("`{path}` holds millivolts"),
                        )
                        .expecting("`calibration: {mV at pH 7: ..., slope: ... %}` beside it"),
                    );
                    return None;
                }
            };
            Some(Readings {
                path,
                points,
                signal,
                fit,
            })
        }
        Err(reason) => {
            reader.error(
                Rule::BadAttachment,
                scalar.span(),
                format!("`{path}`: {reason}"),
            );
            None
        }
    }
}

/// What is to be determined.
fn fit(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Vec<FitParameter> {
    let Some(node) = keys.take("fit") else {
        return Vec::new();
    };
    let mut parameters = Vec::new();
    for item in node.items() {
        let Some(scalar) = item.as_text(&mut reader.diagnostics) else {
            continue;
        };
        match parameter(reader, scalar.text()) {
            Some(parameter) => parameters.push(parameter),
            None => reader.diagnostics.push(
                Diagnostic::error(Rule::BadFit, scalar.span(), format!("`{}` is nothing that can be determined", scalar.text())).expecting(
                    "a substance of the sample, `titrant`, `pKa 1 of SUBSTANCE`, `carbonate in titrant`, `electrode offset` or `electrode slope`",
                ),
            ),
        }
    }
    parameters
}

fn parameter(reader: &Reader<'_>, text: &str) -> Option<FitParameter> {
    match text {
        "carbonate in titrant" => return Some(FitParameter::CarbonateInTitrant),
        "electrode offset" => return Some(FitParameter::ElectrodeOffset),
        "electrode slope" => return Some(FitParameter::ElectrodeSlope),
        "titrant" => return Some(FitParameter::TitrantConcentration(String::new())),
        _ => {}
    }
    if let Some(rest) = text.strip_prefix("pKa ") {
        let (step, name) = rest.split_once(" of ")?;
        let ligand = reader.catalogue.ligand(name)?;
        let step = step
            .trim()
            .parse::<usize>()
            .ok()
            .filter(|step| (1..=ligand.steps.len()).contains(step))?;
        return Some(FitParameter::Pk {
            ligand: ligand.name.clone(),
            step,
        });
    }
    let form = reader.catalogue.find(text).ok()?;
    Some(FitParameter::SampleConcentration(form.name.clone()))
}
