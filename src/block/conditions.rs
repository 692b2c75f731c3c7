//! Temperature, activity model, air, uncertainty, acceptances.

use crate::block::defaults::{Default, activity, air, uncertainty};
use crate::block::reader::Reader;
use crate::block::{Defaults, amount};
use crate::problem::{Acceptance, Conditions, InputId, Origin, Stated};
use crate::quantity::{Dimension, Temperature};
use crate::text::{Diagnostic, Rule};
use crate::yaml::Keys;
use std::collections::BTreeSet;

/// Reads the conditions; what is absent comes from the notebook, and what that leaves open from the program.
pub(super) fn read(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    defaults: &Defaults,
) -> Option<Conditions> {
    let temperature = match keys.text("temperature", &mut reader.diagnostics) {
        Some(scalar) => reader
            .input::<Temperature>(InputId::new("temperature"), scalar)
            .map(|input| {
                let celsius = input.value().celsius();
                if !(0.0..=100.0).contains(&celsius) {
                    reader.diagnostics.push(
                        Diagnostic::error(
                            Rule::BadTemperature,
                            scalar.span(),
                            format!("{celsius:.2} °C is outside 0 °C to 100 °C"),
                        )
                        .expecting("a temperature of liquid water at normal pressure"),
                    );
                }
                stated(input)
            }),
        None => Some(defaults.temperature()),
    };
    let model = keyword(reader, keys, "activity", activity, &defaults.activity);
    let gas = keyword(reader, keys, "air", air, &defaults.air);
    let mode = match keys.take("uncertainty") {
        Some(node) => uncertainty(node, &mut reader.diagnostics).map(stated),
        None => Some(defaults.uncertainty.clone().into_stated()),
    };
    Some(Conditions {
        temperature: temperature?,
        activity: model?,
        air: gas?,
        uncertainty: mode?,
        accepted: accepted(reader, keys),
        pkw: reader.catalogue.water().cloned(),
    })
}

fn stated<T>(value: T) -> Stated<T> {
    Stated {
        value,
        origin: Origin::Block,
    }
}

fn keyword<T: Clone>(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    key: &'static str,
    read: impl Fn(&crate::yaml::Scalar, &mut Vec<Diagnostic>) -> Option<T>,
    default: &Default<T>,
) -> Option<Stated<T>> {
    match keys.text(key, &mut reader.diagnostics) {
        Some(scalar) => read(scalar, &mut reader.diagnostics).map(stated),
        None => Some(default.clone().into_stated()),
    }
}

fn accepted(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> BTreeSet<Acceptance> {
    let Some(node) = keys.take("accept") else {
        return BTreeSet::new();
    };
    let mut accepted = BTreeSet::new();
    for item in node.items() {
        let Some(scalar) = item.as_text(&mut reader.diagnostics) else {
            continue;
        };
        match Acceptance::NAMES
            .iter()
            .find(|(words, _)| *words == scalar.text())
        {
            Some((_, acceptance)) => {
                accepted.insert(*acceptance);
            }
            None => {
                let words = Acceptance::NAMES.iter().map(|(words, _)| *words);
                reader.diagnostics.push(
                    Diagnostic::error(
                        Rule::UnknownChoice,
                        scalar.span(),
                        format!("`{}` cannot be accepted here", scalar.text()),
                    )
                    .expecting("`model outside its range`")
                    .did_you_mean(scalar.text(), words),
                );
            }
        }
    }
    accepted
}

/// Kelvin or Celsius as typed, checked for the range of liquid water.
pub(super) fn temperature_of_use(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    id: &InputId,
) -> Option<crate::problem::Input<Temperature>> {
    let scalar = keys.text("temperature", &mut reader.diagnostics)?;
    let measured = amount::read::<Temperature>(scalar, &mut reader.diagnostics)?;
    if !(273.15..=373.15).contains(&measured.value().base()) {
        reader.error(
            Rule::BadTemperature,
            scalar.span(),
            "the temperature of use is outside 0 °C to 100 °C",
        );
        return None;
    }
    reader.input(id.within("temperature"), scalar)
}
