//! `preparation`: a buffer to be made.

use crate::block::conditions::temperature_of_use;
use crate::block::reader::Reader;
use crate::block::{amount, contents, remarks, source};
use crate::problem::{
    BufferChoice, InputId, IonicStrengthTarget, Preparation, PreparationTarget, Readability,
    Source, Taken, Weighed,
};
use crate::quantity::{Dimension, Mass, Volume};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{Keys, Mapping, Node, Scalar};

/// Most sources of one buffer.
const MOST_SOURCES: usize = 8;

pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Preparation> {
    let readability = Readability {
        balance: reader.top(keys, "balance"),
        pipette: reader.top(keys, "pipette"),
        flask: reader.top(keys, "flask"),
    };
    let avoid = remarks::names(reader, keys, "avoid");
    let from = keys.take("from");
    let buffer = keys.text("buffer", &mut reader.diagnostics);
    let weighed = keys.take("weighed");
    let heading = keys.whole().heading();
    let target = keys
        .required("target", &mut reader.diagnostics)
        .and_then(|node| node.as_mapping(&mut reader.diagnostics))
        .and_then(|mapping| target(reader, mapping));
    let choice = match (from, buffer) {
        (Some(node), None) => sources(reader, node).map(BufferChoice::From),
        (None, Some(scalar)) if scalar.text() == "suggest" => Some(BufferChoice::Suggest { avoid }),
        (None, Some(scalar)) => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::UnknownChoice,
                    scalar.span(),
                    format!("`{}` is no choice of a buffer", scalar.text()),
                )
                .expecting("`suggest`, or `from: [...]` in place of `buffer`"),
            );
            None
        }
        (Some(node), Some(_)) => {
            reader.error(
                Rule::ConflictingKeys,
                node.span,
                "`from` and `buffer` exclude each other",
            );
            None
        }
        (None, None) => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::MissingKey,
                    heading,
                    "what the buffer is made from is not stated",
                )
                .expecting("`from: [...]`, or `buffer: suggest`"),
            );
            None
        }
    };
    let choice = choice?;
    let weighed = match (&choice, weighed) {
        (BufferChoice::From(list), Some(node)) => taken(reader, node, list.len()),
        _ => Vec::new(),
    };
    Some(Preparation {
        target: target?,
        buffer: choice,
        readability,
        weighed,
    })
}

fn sources(reader: &mut Reader<'_>, node: &Node) -> Option<Vec<Source>> {
    let items = node.as_list(&mut reader.diagnostics)?;
    if items.len() < 2 || items.len() > MOST_SOURCES {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::BadPair,
                node.span,
                format!("a buffer is made from 2 to {MOST_SOURCES} things"),
            )
            .expecting("two forms of a buffer, or an acid or base and a titrant"),
        );
        return None;
    }
    let id = InputId::new("from");
    let found: Vec<Option<Source>> = items
        .iter()
        .enumerate()
        .map(|(index, item)| source::read(reader, item, &id.within(&(index + 1).to_string())))
        .collect();
    found.into_iter().collect()
}

fn target(reader: &mut Reader<'_>, mapping: &Mapping) -> Option<PreparationTarget> {
    let mut keys = mapping.keys();
    let id = InputId::new("target");
    let ph = reader.required(&mut keys, "pH", &id);
    let volume = reader.required::<Volume>(&mut keys, "volume", &id);
    let concentration = reader.required(&mut keys, "concentration", &id);
    let temperature_of_use = temperature_of_use(reader, &mut keys, &id);
    let ionic_strength = match keys.text("ionic strength", &mut reader.diagnostics) {
        Some(scalar) => Some(ionic_strength(reader, scalar, &id)?),
        None => None,
    };
    keys.finish(&mut reader.diagnostics);
    Some(PreparationTarget {
        ph: ph?,
        volume: volume?,
        concentration: concentration?,
        ionic_strength,
        temperature_of_use,
    })
}

/// `0.150 mol/L with sodium chloride`.
fn ionic_strength(
    reader: &mut Reader<'_>,
    scalar: &Scalar,
    id: &InputId,
) -> Option<IonicStrengthTarget> {
    let Some((value, salt)) = scalar.text().split_once(" with ") else {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::BadTarget,
                scalar.span(),
                "the salt that sets the ionic strength is not named",
            )
            .expecting("`0.150 mol/L with sodium chloride`"),
        );
        return None;
    };
    let measured = amount::read_text(value, scalar, &mut reader.diagnostics)?;
    let Ok(form) = reader.catalogue.find(salt.trim()).cloned() else {
        reader.error(
            Rule::UnknownSubstance,
            scalar.span(),
            format!("`{}` is not in the library", salt.trim()),
        );
        return None;
    };
    if form.ligands().next().is_some()
        || form.protons() != 0
        || form.charge != 0
        || form.formula.is_none()
    {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::BadTarget,
                scalar.span(),
                format!("{} is no inert salt", form.name),
            )
            .expecting("a salt whose ions take no proton, such as sodium chloride"),
        );
        return None;
    }
    let id = id.within("ionic strength");
    reader.input_place(&id, scalar.span());
    Some(IonicStrengthTarget {
        value: crate::problem::Input::new(id, measured),
        salt: form,
    })
}

/// What was really taken, in the order of the sources and then the salt; `-` for nothing recorded.
fn taken(reader: &mut Reader<'_>, node: &Node, sources: usize) -> Vec<Weighed> {
    let mut weighed = Vec::new();
    for (index, item) in node.items().iter().enumerate() {
        let Some(scalar) = item.as_text(&mut reader.diagnostics) else {
            continue;
        };
        if scalar.text() == "-" {
            continue;
        }
        if index > sources {
            reader.error(
                Rule::OutOfRange,
                scalar.span(),
                "more was weighed than there are sources",
            );
            break;
        }
        let id = InputId::new("weighed").within(&(index + 1).to_string());
        let by_mass = amount::unit_of(scalar).is_some_and(|unit| Mass::UNITS.contains(&unit));
        let taken = if by_mass {
            reader.input(id, scalar).map(Taken::Mass)
        } else {
            reader.input(id, scalar).map(Taken::Volume)
        };
        weighed.extend(taken.map(|taken| Weighed {
            source: index,
            taken,
        }));
    }
    weighed
}

/// A liquid with a volume of its own, as a task's key has it.
pub(super) fn liquid(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    id: &InputId,
) -> Option<crate::problem::Composition> {
    if let Some(scalar) = keys.text("solution", &mut reader.diagnostics) {
        let portion = contents::portion(reader, keys, scalar, id)?;
        return Some(crate::problem::Composition {
            made_up: crate::problem::MadeUp::To(portion.volume.clone()),
            ingredients: vec![crate::problem::Ingredient::Solution(portion)],
        });
    }
    contents::composition(reader, keys, id, true)
}
