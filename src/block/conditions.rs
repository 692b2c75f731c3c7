//! Temperature, activity model, air, uncertainty, acceptances.

use crate::block::Defaults;
use crate::block::choice::{activity, air, uncertainty};
use crate::block::reader::Reader;
use crate::problem::{Acceptance, Conditions, InputId, Origin, Stated};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{Keys, Scalar};
use std::collections::BTreeSet;

/// Reads the conditions; what is absent comes from the notebook, and what that leaves open from the program.
pub(super) fn read(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    defaults: &Defaults,
) -> Option<Conditions> {
    let temperature = match keys.text("temperature", &mut reader.diagnostics) {
        Some(scalar) => reader
            .input(InputId::new("temperature"), scalar)
            .map(stated),
        None => Some(defaults.temperature()),
    };
    let model = keyword(reader, keys, "activity", activity, &defaults.activity);
    let gas = keyword(reader, keys, "air", air, &defaults.air);
    let mode = match keys.take("uncertainty") {
        Some(node) => uncertainty(node, &mut reader.diagnostics).map(stated),
        None => Some(defaults.uncertainty.clone()),
    };
    Some(Conditions {
        temperature: temperature?,
        activity: model?,
        air: gas?,
        uncertainty: mode?,
        accepted: accepted(reader, keys),
        carbonate: reader.catalogue.ligand("carbonic acid").cloned(),
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
    read: impl Fn(&Scalar, &mut Vec<Diagnostic>) -> Option<T>,
    default: &Stated<T>,
) -> Option<Stated<T>> {
    match keys.text(key, &mut reader.diagnostics) {
        Some(scalar) => read(scalar, &mut reader.diagnostics).map(stated),
        None => Some(default.clone()),
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
        let mut known = Acceptance::NAMES.iter();
        if let Some((_, acceptance)) = known.find(|(words, _)| *words == scalar.text()) {
            accepted.insert(*acceptance);
            continue;
        }
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
    accepted
}
