//! The entries of a list of constants: acid families, ions, forms.

use crate::block::{figure, pk_value};
use crate::substance::{Hazard, StoredConstants, StoredForm, StoredIon, StoredPk, StoredSubstance};
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{Keys, Node, Scalar, Value};
use std::collections::BTreeMap;

/// Most dissociation steps of one substance.
const MOST_STEPS: usize = 12;
/// Largest charge of an own substance or ion, up or down.
const LARGEST_CHARGE: i8 = 12;

/// What the entries state, and where each of them is named.
pub(super) struct Entries {
    pub(super) stored: StoredConstants,
    pub(super) names: Vec<(String, Span)>,
}

/// Reads the entries of a list.
pub(super) fn read(items: &[Node], diagnostics: &mut Vec<Diagnostic>) -> Entries {
    let mut stored = StoredConstants::default();
    let mut names: Vec<(String, Span)> = Vec::new();
    let mut named: BTreeMap<(&str, String), Span> = BTreeMap::new();
    for item in items {
        let Some(mapping) = item.as_mapping(diagnostics) else {
            continue;
        };
        let mut keys = mapping.keys();
        let named_by = |kind: &&str| mapping.entries().iter().any(|e| e.key.text() == *kind);
        let found = ["substance", "ion", "form"]
            .into_iter()
            .find(named_by)
            .and_then(|kind| Some((kind, keys.take(kind)?)));
        let Some((kind, node)) = found else {
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadConstants,
                    item.span,
                    "the entry does not say what it is of",
                )
                .expecting("`substance: ...`, `ion: ...` or `form: ...`"),
            );
            continue;
        };
        let Some(name) = node.as_text(diagnostics) else {
            continue;
        };
        names.push((name.text().to_owned(), name.span()));
        if let Some(first) = named.insert((kind, name.text().to_lowercase()), name.span()) {
            diagnostics.push(
                Diagnostic::error(
                    Rule::DuplicateSubstance,
                    name.span(),
                    format!("`{}` stands twice", name.text()),
                )
                .and(first, "first here"),
            );
        }
        match kind {
            "substance" => stored
                .substances
                .extend(substance(&mut keys, name, diagnostics)),
            "ion" => stored.ions.extend(ion(&mut keys, name, diagnostics)),
            _ => stored.forms.extend(form(&mut keys, name, diagnostics)),
        }
        keys.finish(diagnostics);
    }
    Entries { stored, names }
}

fn substance(
    keys: &mut Keys<'_>,
    name: &Scalar,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<StoredSubstance> {
    let source = text(keys, "source", diagnostics);
    let stored = StoredSubstance {
        substance: name.text().to_owned(),
        synonyms: texts(keys, "synonyms", diagnostics),
        formula: text(keys, "formula", diagnostics),
        cas: text(keys, "cas", diagnostics),
        charge: charge(keys, diagnostics),
        symbol: text(keys, "symbol", diagnostics),
        states: texts(keys, "states", diagnostics),
        ion_sizes: ion_sizes(keys, diagnostics),
        hazards: hazards(keys, diagnostics),
        pka: Vec::new(),
    };
    let heading = keys.whole().heading();
    let node = keys.required("pKa", diagnostics)?;
    let items = node.items();
    let most = if stored.substance == "water" {
        1
    } else {
        MOST_STEPS
    };
    if items.is_empty() || items.len() > most {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadConstants,
                node.span,
                "no such number of pKa values",
            )
            .expecting(format!("from 1 to {most}, the most acidic step first")),
        );
        return None;
    }
    let mut pka: Vec<StoredPk> = Vec::new();
    for item in items {
        let read = pk_value::read(item, source.as_deref(), heading, diagnostics)?;
        let before = pka.last().and_then(|last| last.value.parse::<f64>().ok());
        if let (Some(before), Ok(value)) = (before, read.value.parse::<f64>())
            && value < before
        {
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadConstants,
                    item.span,
                    format!("pKa {} after {before}", read.value),
                )
                .expecting("pKa in ascending order, the most acidic step first"),
            );
            return None;
        }
        pka.push(read);
    }
    Some(StoredSubstance { pka, ..stored })
}

fn ion(keys: &mut Keys<'_>, name: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<StoredIon> {
    let symbol = text(keys, "symbol", diagnostics);
    let ion_size = keys
        .text("ion size", diagnostics)
        .and_then(|scalar| ion_size(scalar, diagnostics));
    keys.required("charge", diagnostics)?;
    Some(StoredIon {
        ion: name.text().to_owned(),
        symbol: symbol.unwrap_or_else(|| name.text().to_owned()),
        charge: charge(keys, diagnostics)?,
        ion_size,
    })
}

fn form(
    keys: &mut Keys<'_>,
    name: &Scalar,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<StoredForm> {
    let stored = StoredForm {
        form: name.text().to_owned(),
        synonyms: texts(keys, "synonyms", diagnostics),
        formula: text(keys, "formula", diagnostics),
        cas: text(keys, "cas", diagnostics),
        contains: BTreeMap::new(),
        charge: charge(keys, diagnostics).unwrap_or(0),
        hazards: hazards(keys, diagnostics),
    };
    let mapping = keys
        .required("contains", diagnostics)?
        .as_mapping(diagnostics)?;
    let mut contains = BTreeMap::new();
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
    Some(StoredForm { contains, ..stored })
}

/// The text of a key, if the key is there.
pub(super) fn text(
    keys: &mut Keys<'_>,
    key: &'static str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<String> {
    keys.text(key, diagnostics)
        .map(|scalar| scalar.text().to_owned())
}

fn texts(keys: &mut Keys<'_>, key: &'static str, diagnostics: &mut Vec<Diagnostic>) -> Vec<String> {
    keys.take(key)
        .into_iter()
        .flat_map(Node::items)
        .filter_map(|item| item.as_text(diagnostics))
        .map(|scalar| scalar.text().to_owned())
        .collect()
}

/// A word of a closed list; anything else is reported with the nearest of them.
pub(super) fn word<'w>(
    scalar: &Scalar,
    known: impl Iterator<Item = &'w str> + Clone,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<String> {
    if known.clone().any(|word| word == scalar.text()) {
        return Some(scalar.text().to_owned());
    }
    let listed: Vec<&str> = known.clone().collect();
    diagnostics.push(
        Diagnostic::error(
            Rule::UnknownChoice,
            scalar.span(),
            format!("`{}` is not known here", scalar.text()),
        )
        .expecting(format!("one of `{}`", listed.join("`, `")))
        .did_you_mean(scalar.text(), known),
    );
    None
}

fn hazards(keys: &mut Keys<'_>, diagnostics: &mut Vec<Diagnostic>) -> Vec<String> {
    let Some(node) = keys.take("hazards") else {
        return Vec::new();
    };
    let mut found = Vec::new();
    for item in node.items() {
        if let Some(scalar) = item.as_text(diagnostics) {
            let known = Hazard::WORDS.iter().map(|(word, _)| *word);
            found.extend(word(scalar, known, diagnostics));
        }
    }
    found
}

fn ion_sizes(keys: &mut Keys<'_>, diagnostics: &mut Vec<Diagnostic>) -> Vec<String> {
    let Some(node) = keys.take("ion sizes") else {
        return Vec::new();
    };
    let mut found = Vec::new();
    for item in node.items() {
        match &item.value {
            Value::Text(scalar) if scalar.text() == "-" => found.push("-".to_owned()),
            _ => found.extend(
                item.as_text(diagnostics)
                    .and_then(|scalar| ion_size(scalar, diagnostics)),
            ),
        }
    }
    found
}

/// An ion size in nm, from 0 to 2 nm.
fn ion_size(scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<String> {
    let number = figure::number_in(scalar, "nm", diagnostics)?;
    if (0.0..=2.0).contains(&number.to_f64()) {
        return Some(number.to_string());
    }
    diagnostics.push(
        Diagnostic::error(Rule::OutOfRange, scalar.span(), "no size of an ion")
            .expecting("from 0 to 2 nm"),
    );
    None
}

fn charge(keys: &mut Keys<'_>, diagnostics: &mut Vec<Diagnostic>) -> Option<i8> {
    let scalar = keys.text("charge", diagnostics)?;
    let plain = scalar.text().trim_start_matches('+').replace('−', "-");
    match plain.parse::<i8>() {
        Ok(charge) if (-LARGEST_CHARGE..=LARGEST_CHARGE).contains(&charge) => Some(charge),
        _ => {
            diagnostics.push(
                Diagnostic::error(Rule::BadConstants, scalar.span(), "not a charge").expecting(
                    format!("a whole number from -{LARGEST_CHARGE} to {LARGEST_CHARGE}"),
                ),
            );
            None
        }
    }
}
