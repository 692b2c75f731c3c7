//! `mixing`: portions poured together, and a serial dilution.

use crate::block::reader::Reader;
use crate::block::{contents, origin, remarks};
use crate::problem::{
    Composition, DilutionSeries, Ingredient, Input, InputId, MadeUp, Mixing, SolutionPortion,
};
use crate::quantity::{Dimension, Volume};
use crate::text::Rule;
use crate::yaml::{Keys, Mapping, Value};
use std::sync::Arc;

/// Most portions of one mixture.
const MOST_PORTIONS: usize = 64;

pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Mixing> {
    let id = InputId::new("portions");
    let made_up = match keys.take("made up to") {
        Some(node) => {
            let scalar = node.as_text(&mut reader.diagnostics)?;
            MadeUp::To(reader.input(InputId::new("made up to"), scalar)?)
        }
        None => MadeUp::SumOfPortions,
    };
    let series = keys
        .mapping("dilution", &mut reader.diagnostics)
        .and_then(|mapping| dilution(reader, mapping));
    let node = keys.required("portions", &mut reader.diagnostics)?;
    let items = node.as_list(&mut reader.diagnostics)?;
    if items.is_empty() || items.len() > MOST_PORTIONS {
        reader.error(
            Rule::EmptyList,
            node.span,
            format!("a mixture has 1 to {MOST_PORTIONS} portions"),
        );
        return None;
    }
    let mut ingredients = Vec::new();
    for (index, item) in items.iter().enumerate() {
        if let Some(mapping) = item.as_mapping(&mut reader.diagnostics) {
            ingredients.extend(portion(
                reader,
                mapping,
                &id.within(&(index + 1).to_string()),
            ));
        }
    }
    if let MadeUp::To(whole) = &made_up {
        overfull(reader, whole, &ingredients);
    }
    Some(Mixing {
        mixture: Composition {
            made_up,
            ingredients,
        },
        series,
    })
}

/// A volume of water, of another block's solution, or of a solution with contents of its own.
fn portion(reader: &mut Reader<'_>, mapping: &Mapping, id: &InputId) -> Option<Ingredient> {
    let mut keys = mapping.keys();
    let found = if let Some(scalar) = keys.text("solution", &mut reader.diagnostics) {
        origin::portion(reader, &mut keys, scalar, id).map(Ingredient::Solution)
    } else {
        own(reader, &mut keys, id)
    };
    keys.finish(&mut reader.diagnostics);
    found
}

fn own(reader: &mut Reader<'_>, keys: &mut Keys<'_>, id: &InputId) -> Option<Ingredient> {
    let volume = reader.required::<Volume>(keys, "volume", id);
    let node = keys.required("contents", &mut reader.diagnostics)?;
    if matches!(&node.value, Value::Text(scalar) if scalar.text() == "water") {
        return volume.map(Ingredient::Water);
    }
    let ingredients = contents::ingredients(reader, node, id, volume.as_ref());
    let volume = volume?;
    Some(Ingredient::Solution(SolutionPortion {
        reference: None,
        composition: Arc::new(Composition {
            made_up: MadeUp::To(volume.clone()),
            ingredients,
        }),
        volume,
    }))
}

/// The portions must fit into what they are made up to.
fn overfull(reader: &mut Reader<'_>, whole: &Input<Volume>, portions: &[Ingredient]) {
    let sum: f64 = portions
        .iter()
        .map(|portion| match portion {
            Ingredient::Solution(portion) => portion.volume.value().base(),
            Ingredient::Water(volume) => volume.value().base(),
            Ingredient::Substance(_) => 0.0,
        })
        .sum();
    if sum > whole.value().base() * (1.0 + 1e-9) {
        let span = reader.place(&whole.id);
        reader.error(
            Rule::OutOfRange,
            span,
            format!("the portions together are more than `{}`", whole.measured),
        );
    }
}

fn dilution(reader: &mut Reader<'_>, mapping: &Mapping) -> Option<DilutionSeries> {
    let mut keys = mapping.keys();
    let id = InputId::new("dilution");
    let taken = reader.required::<Volume>(&mut keys, "take", &id);
    let made_up_to = reader.required::<Volume>(&mut keys, "made up to", &id);
    let steps = remarks::count(reader, &mut keys, "steps", 1, 30);
    keys.finish(&mut reader.diagnostics);
    let (taken, made_up_to) = (taken?, made_up_to?);
    if taken.value().base() > made_up_to.value().base() {
        reader.error(
            Rule::OutOfRange,
            mapping.heading(),
            "more is taken than it is made up to",
        );
        return None;
    }
    Some(DilutionSeries {
        taken,
        made_up_to,
        steps: steps.unwrap_or(1),
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::{one_fault, problem};
    use crate::problem::Problem;

    const PORTIONS: &str = "portions:\n  - volume: 100.0 mL\n    contents:\n      acetic acid: 0.100 mol/L\n  - volume: 400.0 mL\n    solution: naoh-01\n  - volume: 500.0 mL\n    contents: water\n";

    #[test]
    fn the_example_of_the_language_is_read() {
        let keys = format!("{PORTIONS}dilution: {{take: 10 mL, made up to: 100 mL, steps: 3}}\n");
        let Problem::Mixing(task) = problem("mixing", &keys) else {
            panic!()
        };
        assert_eq!(task.mixture.made_up, MadeUp::SumOfPortions);
        assert!(matches!(
            task.mixture.ingredients.as_slice(),
            [
                Ingredient::Solution(_),
                Ingredient::Solution(_),
                Ingredient::Water(_)
            ]
        ));
        assert_eq!(task.series.unwrap().steps, 3);
    }

    #[test]
    fn faults_of_a_mixture() {
        for (keys, rule, place, help) in [
            (String::new(), Rule::MissingKey, "label", "`portions: ...`"),
            ("portions: []\n".to_owned(), Rule::EmptyList, "[]", ""),
            (
                format!("{PORTIONS}made up to: 0.9 L\n"),
                Rule::OutOfRange,
                "0.9 L",
                "",
            ),
            (
                format!("{PORTIONS}dilution: {{take: 200 mL, made up to: 100 mL}}\n"),
                Rule::OutOfRange,
                "dilution",
                "",
            ),
            (
                format!("{PORTIONS}dilution: {{take: 2 mL, made up to: 100 mL, steps: 1.5}}\n"),
                Rule::OutOfRange,
                "1.5",
                "whole number",
            ),
            (
                "portions: [{contents: water}]\n".to_owned(),
                Rule::MissingKey,
                "contents",
                "`volume: ...`",
            ),
            (
                "portions: [{volume: 0 mL, contents: water}]\n".to_owned(),
                Rule::OutOfRange,
                "0 mL",
                "more than nothing",
            ),
        ] {
            one_fault("mixing", &keys, rule, place, help);
        }
    }
}
