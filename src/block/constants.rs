//! Own constants: in the block, in a file beside it, or as an answer carries them.

use crate::block::figure;
use crate::block::reader::Reader;
use crate::substance::{
    StoredConstants, StoredEquation, StoredForm, StoredIon, StoredPk, StoredSubstance,
};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{self, Keys, Limits, Mapping, Node, Value};
use std::collections::BTreeMap;

/// Reads `constants` and lays them over the library.
pub(super) fn read(reader: &mut Reader<'_>, node: &Node) {
    let before = reader.diagnostics.iter().filter(|d| d.is_error()).count();
    let stored = match &node.value {
        Value::Text(scalar) => {
            reader.attachments.push(scalar.text().to_owned());
            match reader.context.attachments.read(scalar.text()) {
                Ok(bytes) => from_file(reader, &bytes, node),
                Err(reason) => {
                    reader.error(
                        Rule::MissingConstantsFile,
                        node.span,
                        format!("`{}` cannot be read: {reason}", scalar.text()),
                    );
                    return;
                }
            }
        }
        Value::List(items) => entries(items, &mut reader.diagnostics),
        _ => {
            node.refuse::<()>(
                "a list of own constants, or the name of a constants file",
                &mut reader.diagnostics,
            );
            return;
        }
    };
    if reader.diagnostics.iter().filter(|d| d.is_error()).count() > before {
        return;
    }
    match reader.catalogue.overlaid(&stored) {
        Ok(catalogue) => reader.catalogue = catalogue,
        Err(error) => reader.error(Rule::BadConstants, node.span, error.to_string()),
    }
}

/// The entries of a constants list: acid families, ions, forms.
pub(super) fn entries(items: &[Node], diagnostics: &mut Vec<Diagnostic>) -> StoredConstants {
    let mut stored = StoredConstants::default();
    for item in items {
        let Some(mapping) = item.as_mapping(diagnostics) else {
            continue;
        };
        let mut keys = mapping.keys();
        if let Some(name) = keys.text("substance", diagnostics) {
            let name = name.text().to_owned();
            stored
                .substances
                .extend(substance(&mut keys, name, diagnostics));
        } else if let Some(name) = keys.text("ion", diagnostics) {
            let name = name.text().to_owned();
            stored.ions.extend(ion(&mut keys, name, diagnostics));
        } else if let Some(name) = keys.text("form", diagnostics) {
            let name = name.text().to_owned();
            stored.forms.extend(form(&mut keys, name, diagnostics));
        } else {
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadConstants,
                    item.span,
                    "the entry does not say what it is of",
                )
                .expecting("`substance: ...` first"),
            );
            continue;
        }
        keys.finish(diagnostics);
    }
    stored
}

/// A file of constants: a list, or a mapping with the list under `constants`.
fn from_file(reader: &mut Reader<'_>, bytes: &[u8], node: &Node) -> StoredConstants {
    let mut inside = Vec::new();
    let stored = std::str::from_utf8(bytes).ok().and_then(|text| {
        let root = yaml::read(text, Limits::BLOCK, &mut inside)?;
        Some(entries(root.as_list(&mut inside)?, &mut inside))
    });
    if let Some(first) = inside.first() {
        let message = format!(
            "the constants file has errors, the first: {}",
            first.message()
        );
        reader.error(Rule::BadConstants, node.span, message);
    } else if stored.is_none() {
        reader.error(
            Rule::BadConstants,
            node.span,
            "the constants file holds no list of constants",
        );
    }
    stored.unwrap_or_default()
}

fn text(
    keys: &mut Keys<'_>,
    key: &'static str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<String> {
    keys.text(key, diagnostics)
        .map(|scalar| scalar.text().to_owned())
}

/// A number, as written.
fn figure(
    keys: &mut Keys<'_>,
    key: &'static str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<String> {
    let scalar = keys.text(key, diagnostics)?;
    figure::number(scalar, diagnostics).map(|number| number.to_string())
}

fn texts(keys: &mut Keys<'_>, key: &'static str, diagnostics: &mut Vec<Diagnostic>) -> Vec<String> {
    let Some(node) = keys.take(key) else {
        return Vec::new();
    };
    node.items()
        .iter()
        .filter_map(|item| {
            item.as_text(diagnostics)
                .map(|scalar| scalar.text().to_owned())
        })
        .collect()
}

fn charge(keys: &mut Keys<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<i8> {
    let scalar = keys.text("charge", diagnostics)?;
    let plain = scalar.text().trim_start_matches('+').replace('−', "-");
    match plain.parse::<i8>() {
        Ok(charge) if (-12..=12).contains(&charge) => Some(charge),
        _ => {
            diagnostics.push(
                Diagnostic::error(Rule::BadConstants, scalar.span(), "not a charge")
                    .expecting("a whole number from -12 to 12"),
            );
            None
        }
    }
}

fn substance(
    keys: &mut Keys<'_>,
    name: String,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<StoredSubstance> {
    let source = text(keys, "source", diagnostics);
    let stored = StoredSubstance {
        substance: name,
        synonyms: texts(keys, "synonyms", diagnostics),
        formula: text(keys, "formula", diagnostics),
        cas: text(keys, "cas", diagnostics),
        charge: charge(keys, diagnostics),
        symbol: text(keys, "symbol", diagnostics),
        states: texts(keys, "states", diagnostics),
        ion_sizes: texts(keys, "ion sizes", diagnostics),
        hazards: texts(keys, "hazards", diagnostics),
        pka: Vec::new(),
    };
    let heading = keys.whole().heading();
    let node = keys.required("pKa", diagnostics)?;
    let mut pka = Vec::new();
    for item in node.items() {
        match &item.value {
            Value::Mapping(mapping) => pka.extend(value(mapping, source.as_deref(), diagnostics)),
            _ => {
                let Some(scalar) = item.as_text(diagnostics) else {
                    continue;
                };
                let Some(number) = figure::number(scalar, diagnostics) else {
                    continue;
                };
                let Some(source) = source.clone() else {
                    diagnostics.push(
                        Diagnostic::error(
                            Rule::MissingSource,
                            heading,
                            "own constants need their source",
                        )
                        .expecting("`source: ...`"),
                    );
                    return None;
                };
                pka.push(StoredPk {
                    value: number.to_string(),
                    source,
                    ..StoredPk::default()
                });
            }
        }
    }
    if pka.is_empty() || pka.len() > 12 {
        diagnostics.push(Diagnostic::error(
            Rule::BadConstants,
            node.span,
            "one to twelve pKa values are expected",
        ));
        return None;
    }
    Some(StoredSubstance { pka, ..stored })
}

/// One value of a step with its conditions.
fn value(
    mapping: &Mapping,
    source: Option<&str>,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<StoredPk> {
    let mut keys = mapping.keys();
    let number = keys
        .required_text("value", diagnostics)
        .and_then(|scalar| figure::number(scalar, diagnostics));
    let own_source = text(&mut keys, "source", diagnostics).or_else(|| source.map(str::to_owned));
    if own_source.is_none() {
        diagnostics.push(
            Diagnostic::error(
                Rule::MissingSource,
                mapping.heading(),
                "own constants need their source",
            )
            .expecting("`source: ...`"),
        );
    }
    let temperature = keys.text("temperature", diagnostics).map(|scalar| {
        let plain = scalar.text().trim_end_matches("°C").trim();
        plain.to_owned()
    });
    let equation = keys
        .mapping("equation", diagnostics)
        .and_then(|mapping| equation(mapping, diagnostics));
    let stored = StoredPk {
        value: number.map(|number| number.to_string()).unwrap_or_default(),
        uncertainty: figure(&mut keys, "uncertainty", diagnostics),
        kind: text(&mut keys, "kind", diagnostics),
        ionic_strength: figure(&mut keys, "ionic strength", diagnostics),
        medium: text(&mut keys, "medium", diagnostics),
        temperature,
        enthalpy: figure(&mut keys, "enthalpy", diagnostics),
        heat_capacity: figure(&mut keys, "heat capacity", diagnostics),
        thermal_source: text(&mut keys, "thermal source", diagnostics),
        thermal_basis: text(&mut keys, "thermal basis", diagnostics),
        equation,
        source: own_source.unwrap_or_default(),
        locator: text(&mut keys, "locator", diagnostics),
        basis: text(&mut keys, "basis", diagnostics),
        note: text(&mut keys, "note", diagnostics),
        others: Vec::new(),
    };
    keys.finish(diagnostics);
    number.map(|_| stored)
}

fn equation(mapping: &Mapping, diagnostics: &mut Vec<Diagnostic>) -> Option<StoredEquation> {
    let mut keys = mapping.keys();
    let form = keys
        .required_text("form", diagnostics)
        .map(|scalar| scalar.text().to_owned());
    let coefficients = texts(&mut keys, "coefficients", diagnostics);
    let from = figure(&mut keys, "from", diagnostics);
    let to = figure(&mut keys, "to", diagnostics);
    let source = keys
        .required_text("source", diagnostics)
        .map(|scalar| scalar.text().to_owned());
    let basis = text(&mut keys, "basis", diagnostics);
    keys.finish(diagnostics);
    Some(StoredEquation {
        form: form?,
        coefficients,
        from: from.unwrap_or_else(|| "0".to_owned()),
        to: to.unwrap_or_else(|| "100".to_owned()),
        source: source?,
        basis,
    })
}

fn ion(keys: &mut Keys<'_>, name: String, diagnostics: &mut Vec<Diagnostic>) -> Option<StoredIon> {
    let heading = keys.whole().heading();
    let symbol = text(keys, "symbol", diagnostics).unwrap_or_else(|| name.clone());
    let ion_size = figure(keys, "ion size", diagnostics);
    let Some(charge) = charge(keys, diagnostics) else {
        diagnostics.push(
            Diagnostic::error(Rule::BadConstants, heading, "an ion needs its charge")
                .expecting("`charge: 1`"),
        );
        return None;
    };
    Some(StoredIon {
        ion: name,
        symbol,
        charge,
        ion_size,
    })
}

fn form(
    keys: &mut Keys<'_>,
    name: String,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<StoredForm> {
    let formula = text(keys, "formula", diagnostics);
    let synonyms = texts(keys, "synonyms", diagnostics);
    let cas = text(keys, "cas", diagnostics);
    let hazards = texts(keys, "hazards", diagnostics);
    let charge = charge(keys, diagnostics).unwrap_or(0);
    let mut contains = BTreeMap::new();
    let mapping = keys
        .required("contains", diagnostics)?
        .as_mapping(diagnostics)?;
    for entry in mapping.entries() {
        let Some(scalar) = entry.value.as_text(diagnostics) else {
            continue;
        };
        match scalar.text().parse::<u8>() {
            Ok(count) if count > 0 => {
                contains.insert(entry.key.text().to_owned(), count);
            }
            _ => diagnostics.push(
                Diagnostic::error(Rule::BadConstants, scalar.span(), "not a count")
                    .expecting("a whole number from 1 to 255"),
            ),
        }
    }
    Some(StoredForm {
        form: name,
        synonyms,
        formula,
        cas,
        contains,
        charge,
        hazards,
    })
}
