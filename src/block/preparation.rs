//! `preparation`: a buffer to be made.

use crate::block::piece::Piece;
use crate::block::reader::Reader;
use crate::block::{amount, contents, origin, remarks, source};
use crate::problem::{
    BufferChoice, Composition, Ingredient, InputId, IonicStrengthTarget, MadeUp, Preparation,
    PreparationTarget, Readability, Source, Taken, Weighed,
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
    let buffer = buffer(reader, keys);
    let weighed = keys.take("weighed");
    let target = keys
        .required("target", &mut reader.diagnostics)
        .and_then(|node| node.as_mapping(&mut reader.diagnostics))
        .and_then(|mapping| target(reader, mapping));
    let (buffer, target) = (buffer?, target?);
    let weighed = match (weighed, &buffer) {
        (None, _) => Vec::new(),
        (Some(node), BufferChoice::From(list)) => {
            let salt = usize::from(target.ionic_strength.is_some());
            taken(reader, node, list.len() + salt)
        }
        (Some(node), BufferChoice::Suggest { .. }) => {
            reader.error(
                Rule::ConflictingKeys,
                node.span,
                "nothing was weighed yet of a buffer that is to be suggested",
            );
            Vec::new()
        }
    };
    Some(Preparation {
        target,
        buffer,
        readability,
        weighed,
    })
}

/// `from: [...]`, or `buffer: suggest` with `avoid`.
fn buffer(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<BufferChoice> {
    let from = keys.take("from");
    let buffer = keys.text("buffer", &mut reader.diagnostics);
    let unwanted = keys.take_entry("avoid").map(|entry| entry.key.span());
    let avoid = remarks::names(reader, keys, "avoid");
    let conflict = |reader: &mut Reader<'_>, span| {
        reader.error(
            Rule::ConflictingKeys,
            span,
            "`from` says what the buffer is made from; `buffer` and `avoid` ask for suggestions",
        );
    };
    let Some(node) = from else {
        return suggested(reader, keys, buffer, avoid);
    };
    for span in [buffer.map(Scalar::span), unwanted].into_iter().flatten() {
        conflict(reader, span);
    }
    sources(reader, node).map(BufferChoice::From)
}

fn suggested(
    reader: &mut Reader<'_>,
    keys: &Keys<'_>,
    buffer: Option<&Scalar>,
    avoid: Vec<String>,
) -> Option<BufferChoice> {
    let diagnostic = match buffer {
        Some(scalar) if scalar.text() == "suggest" => return Some(BufferChoice::Suggest { avoid }),
        Some(scalar) => Diagnostic::error(
            Rule::UnknownChoice,
            scalar.span(),
            format!("`{}` is no choice of a buffer", scalar.text()),
        )
        .expecting("`suggest`, or `from: [...]` in place of `buffer`"),
        None => Diagnostic::error(
            Rule::MissingKey,
            keys.whole().heading(),
            "what the buffer is made from is not stated",
        )
        .expecting("`from: [...]`, or `buffer: suggest`"),
    };
    if buffer.is_some() || !keys.whole().is_partial() {
        reader.diagnostics.push(diagnostic);
    }
    None
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
    let temperature_of_use = reader.amount(&mut keys, "temperature", &id);
    let ionic_strength = keys
        .text("ionic strength", &mut reader.diagnostics)
        .map(|scalar| ionic_strength(reader, scalar, &id));
    keys.finish(&mut reader.diagnostics);
    let ionic_strength = match ionic_strength {
        Some(found) => Some(found?),
        None => None,
    };
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
    let Some((value, salt)) = Piece::from(scalar).split_once(" with ") else {
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
    let value = reader.input(id.within("ionic strength"), value);
    let form = origin::substance(reader, salt)?;
    let inert = form.ligands().next().is_none() && form.protons() == 0 && form.charge == 0;
    if !inert || form.formula.is_none() {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::BadTarget,
                salt.span(),
                format!("{} is no inert salt", form.name),
            )
            .expecting("a salt whose ions take no proton, such as sodium chloride"),
        );
        return None;
    }
    Some(IonicStrengthTarget {
        value: value?,
        salt: form,
    })
}

/// What was really taken, in the order of the sources and then the salt; `none` where nothing was recorded.
fn taken(reader: &mut Reader<'_>, node: &Node, sources: usize) -> Vec<Weighed> {
    let mut weighed = Vec::new();
    for (index, item) in node.items().iter().enumerate() {
        let Some(scalar) = item.as_text(&mut reader.diagnostics) else {
            continue;
        };
        if scalar.text() == "none" {
            continue;
        }
        if index >= sources {
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
) -> Option<Composition> {
    if let Some(scalar) = keys.text("solution", &mut reader.diagnostics) {
        let portion = origin::portion(reader, keys, scalar, id)?;
        return Some(Composition {
            made_up: MadeUp::To(portion.volume.clone()),
            ingredients: vec![Ingredient::Solution(portion)],
        });
    }
    contents::composition(reader, keys, id)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::{faults, one_fault, problem};
    use crate::problem::{Problem, SourceKind};

    const TARGET: &str = "target: {pH: 7.20, volume: 2.000 L, concentration: 50.0 mmol/L}\n";

    #[test]
    fn the_example_of_the_language_is_read() {
        let Problem::Preparation(task) = problem(
            "preparation",
            "target:\n  pH: 7.20\n  volume: 2.000 L\n  concentration: 50.0 mmol/L\n  ionic strength: 0.150 mol/L with sodium chloride\n  temperature: 4 °C\nfrom:\n  - sodium dihydrogen phosphate monohydrate\n  - substance: disodium hydrogen phosphate\n    purity: 99.2 %\nbalance: 0.1 mg\nweighed: [6.90 g, none, 5.0 g]\n",
        ) else {
            panic!()
        };
        assert_eq!(
            task.target.ionic_strength.unwrap().salt.name,
            "sodium chloride"
        );
        let BufferChoice::From(sources) = task.buffer else {
            panic!()
        };
        assert!(
            sources
                .iter()
                .all(|source| matches!(source.kind, SourceKind::Solid { .. }))
        );
        let places: Vec<usize> = task.weighed.iter().map(|weighed| weighed.source).collect();
        assert_eq!(places, [0, 2]);
    }

    #[test]
    fn stocks_may_state_their_density_beside_the_strength() {
        let keys = format!(
            "{TARGET}from:\n  - {{substance: phosphoric acid, concentration: '85 % w/w, 1.685 g/mL'}}\n  - solution: naoh-01\n"
        );
        let Problem::Preparation(task) = problem("preparation", &keys) else {
            panic!()
        };
        let BufferChoice::From(sources) = task.buffer else {
            panic!()
        };
        assert!(matches!(sources[0].kind, SourceKind::Stock { .. }));
        assert!(matches!(sources[1].kind, SourceKind::Solution(_)));
    }

    #[test]
    fn faults_of_a_preparation() {
        let from = "from: [tris, hydrochloric acid]\n";
        for (keys, rule, place, help) in [
            (from.to_owned(), Rule::MissingKey, "label", "`target: ...`"),
            (
                TARGET.to_owned(),
                Rule::MissingKey,
                "label",
                "buffer: suggest",
            ),
            (
                format!("{TARGET}buffer: tris\n"),
                Rule::UnknownChoice,
                "tris",
                "`suggest`",
            ),
            (
                format!("{TARGET}{from}buffer: suggest\n"),
                Rule::ConflictingKeys,
                "suggest",
                "",
            ),
            (
                format!("{TARGET}{from}avoid: [tris]\n"),
                Rule::ConflictingKeys,
                "avoid",
                "",
            ),
            (
                format!("{TARGET}buffer: suggest\nweighed: [1 g]\n"),
                Rule::ConflictingKeys,
                "[1 g]",
                "",
            ),
            (
                format!("{TARGET}from: [tris]\n"),
                Rule::BadPair,
                "[tris]",
                "two forms",
            ),
            (
                format!("{TARGET}{from}weighed: [1 g, 1 mL, 1 g]\n"),
                Rule::OutOfRange,
                "1 g",
                "",
            ),
            (
                format!("{TARGET}from: [tris, {{substance: HCl, concentration: 37 % w/w}}]\n"),
                Rule::DensityNeeded,
                "37 % w/w",
                "density",
            ),
        ] {
            one_fault("preparation", &keys, rule, place, help);
        }
    }

    #[test]
    fn faults_of_a_target() {
        let from = "from: [tris, hydrochloric acid]\n";
        for (keys, rule, place, help) in [
            (
                format!("{from}target: {{pH: 20, volume: 1 L, concentration: 1 mol/L}}\n"),
                Rule::OutOfRange,
                "20",
                "16",
            ),
            (
                format!(
                    "{from}target: {{pH: 8, volume: 1 L, concentration: 1 mol/L, temperature: 4 K}}\n"
                ),
                Rule::BadTemperature,
                "4 K",
                "`4 °C`",
            ),
            (
                format!(
                    "{from}target: {{pH: 8, volume: 1 L, concentration: 1 mol/L, ionic strength: 1 mol/L}}\n"
                ),
                Rule::BadTarget,
                "1 mol/L",
                "with sodium chloride",
            ),
            (
                format!(
                    "{from}target: {{pH: 8, volume: 1 L, concentration: 1 mol/L, ionic strength: 1 mol/L with tris}}\n"
                ),
                Rule::BadTarget,
                "tris",
                "sodium chloride",
            ),
        ] {
            one_fault("preparation", &keys, rule, place, help);
        }
    }

    #[test]
    fn everything_that_a_target_lacks_is_told_at_once() {
        let found = faults("preparation", "target: {ph: 7}\nfrom: [tris, HCl]\n");
        let rules: Vec<Rule> = found.iter().map(|fault| fault.0).collect();
        assert_eq!(
            rules,
            [
                Rule::MissingKey,
                Rule::MissingKey,
                Rule::MissingKey,
                Rule::UnknownKey
            ]
        );
        assert!(found[3].2.contains("`pH`"));
    }
}
