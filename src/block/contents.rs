//! What a liquid is made of, in the short and the long form.

use crate::block::origin::{portion, substance};
use crate::block::reader::Reader;
use crate::block::{amount, charge, content_amount, item};
use crate::problem::{
    Composition, Content, ContentAmount, Corrections, Ingredient, Input, InputId, MadeUp, Trace,
};
use crate::quantity::{Dimension, Unit, Volume};
use crate::substance::Form;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{Keys, Mapping, Node, Scalar, Value};
use std::collections::BTreeMap;

/// Most ingredients of one liquid.
const MOST_INGREDIENTS: usize = 64;

/// A liquid with the keys `volume` and `contents` of a mapping.
pub(super) fn composition(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    id: &InputId,
) -> Option<Composition> {
    let volume = keys.text("volume", &mut reader.diagnostics);
    let heading = keys.whole().heading();
    let volume =
        volume.map(|scalar| reader.input(InputId::new("volume").in_same_place(id), scalar));
    let node = keys.required("contents", &mut reader.diagnostics)?;
    let ingredients = ingredients(reader, node, id, volume.as_ref().and_then(Option::as_ref));
    let made_up = match volume {
        Some(volume) => MadeUp::To(volume?),
        None => MadeUp::Unstated,
    };
    if made_up == MadeUp::Unstated && ingredients.iter().any(needs_volume) {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::VolumeNeeded,
                heading,
                "masses and portions make a concentration only in a stated volume",
            )
            .expecting("`volume: ...`, the volume that the solution is made up to"),
        );
    }
    Some(Composition {
        made_up,
        ingredients,
    })
}

/// Whether an ingredient says how much is there only together with a final volume.
fn needs_volume(ingredient: &Ingredient) -> bool {
    match ingredient {
        Ingredient::Substance(content) => !matches!(
            content.amount,
            ContentAmount::Concentration(_)
                | ContentAmount::Molality(_)
                | ContentAmount::MassConcentration(_)
        ),
        Ingredient::Solution(_) => true,
        Ingredient::Water(_) => false,
    }
}

/// The value of `contents`: `water`, a mapping of names to amounts, or a list of items; `volume` is that of the whole, where stated.
pub(super) fn ingredients(
    reader: &mut Reader<'_>,
    node: &Node,
    id: &InputId,
    volume: Option<&Input<Volume>>,
) -> Vec<Ingredient> {
    let before = reader.diagnostics.len();
    let (ingredients, spans) = match &node.value {
        Value::Text(scalar) if scalar.text() == "water" => return Vec::new(),
        Value::Mapping(mapping) => short_form(reader, mapping, id),
        Value::List(items) => long_form(reader, items, id),
        _ => {
            node.refuse::<()>(
                "`water`, a mapping of substances to amounts, or a list of items",
                &mut reader.diagnostics,
            );
            return Vec::new();
        }
    };
    if spans.is_empty() && reader.diagnostics.len() == before {
        reader.diagnostics.push(
            Diagnostic::error(Rule::EmptyContents, node.span, "nothing is stated")
                .helped("write `contents: water` for pure water"),
        );
    }
    if spans.len() > MOST_INGREDIENTS {
        reader.error(
            Rule::TooManyKeys,
            node.span,
            format!("more than {MOST_INGREDIENTS} ingredients"),
        );
    }
    let found: Vec<Ingredient> = ingredients.into_iter().flatten().collect();
    if reader.diagnostics.len() == before {
        charge::check(reader, &found, &spans, volume);
    }
    found
}

type Found = (Vec<Option<Ingredient>>, Vec<Span>);

fn short_form(reader: &mut Reader<'_>, mapping: &Mapping, id: &InputId) -> Found {
    let mut found = Found::default();
    let mut seen: BTreeMap<String, Span> = BTreeMap::new();
    for entry in mapping.entries() {
        let span = entry.key.span();
        let ingredient = short(reader, &entry.key, &entry.value, id);
        if let Some(Ingredient::Substance(content)) = &ingredient
            && let Some(first) = seen.insert(content.form.name.clone(), span)
        {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::DuplicateSubstance,
                    span,
                    format!("{} is stated twice", content.form.name),
                )
                .and(first, "first here")
                .helped("add the amounts, or use the long form with an item for each portion"),
            );
        }
        found.0.push(ingredient);
        found.1.push(span);
    }
    found
}

fn long_form(reader: &mut Reader<'_>, items: &[Node], id: &InputId) -> Found {
    let mut found = Found::default();
    for (index, item) in items.iter().enumerate() {
        found.1.push(item.span);
        if let Some(mapping) = item.as_mapping(&mut reader.diagnostics) {
            let item_id = id.within(&(index + 1).to_string());
            found.0.push(long(reader, mapping, &item_id));
        }
    }
    found
}

/// `malonic acid: 0.0350 mol/L`.
fn short(reader: &mut Reader<'_>, name: &Scalar, value: &Node, id: &InputId) -> Option<Ingredient> {
    let form = substance(reader, name);
    let scalar = value.as_text(&mut reader.diagnostics)?;
    let item = id.within(form.as_ref().map_or(name.text(), |form| &form.name));
    let amount = short_amount(reader, form.as_deref(), scalar, &item);
    Some(Ingredient::Substance(Box::new(Content {
        id: item,
        form: form?,
        amount: amount?,
        corrections: Corrections::default(),
        trace: Trace::default(),
    })))
}

fn short_amount(
    reader: &mut Reader<'_>,
    form: Option<&Form>,
    scalar: &Scalar,
    item: &InputId,
) -> Option<ContentAmount> {
    let (message, help) = match amount::unit_of(scalar) {
        Some(unit) if Volume::UNITS.contains(&unit) => (
            "a volume alone does not say how much of the substance is in it",
            "use the long form: `- substance: ...`, `volume: ...`, `concentration: ...`",
        ),
        Some(Unit::PercentByMass | Unit::Percent) => (
            "a mass fraction needs the density, and how much was taken",
            "use the long form: `- substance: ...`, `volume: ...`, `concentration: 37 % w/w`, `density: 1.18 g/mL`",
        ),
        _ => return content_amount::any_amount(reader, form, scalar, item),
    };
    reader
        .diagnostics
        .push(Diagnostic::error(Rule::AmountNeeded, scalar.span(), message).helped(help));
    None
}

/// A list item with its keys.
fn long(reader: &mut Reader<'_>, mapping: &Mapping, id: &InputId) -> Option<Ingredient> {
    let mut keys = mapping.keys();
    let found = if let Some(scalar) = keys.text("solution", &mut reader.diagnostics) {
        portion(reader, &mut keys, scalar, id).map(Ingredient::Solution)
    } else if let Some(name) = keys.required_text("substance", &mut reader.diagnostics) {
        if name.text() == "water" {
            reader
                .required::<Volume>(&mut keys, "volume", id)
                .map(Ingredient::Water)
        } else {
            item::read(reader, &mut keys, name, id)
                .map(|content| Ingredient::Substance(Box::new(content)))
        }
    } else {
        for key in item::KEYS {
            keys.take(key);
        }
        None
    };
    keys.finish(&mut reader.diagnostics);
    found
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::{faults, one_fault, problem};
    use crate::problem::Problem;

    fn ingredients(keys: &str) -> Vec<Ingredient> {
        match problem("speciation", keys) {
            Problem::Speciation(task) => task.composition.ingredients,
            other => panic!("{other:?}"),
        }
    }

    fn amounts(keys: &str) -> Vec<ContentAmount> {
        let of = |ingredient| match ingredient {
            Ingredient::Substance(content) => content.amount,
            other => panic!("{other:?}"),
        };
        ingredients(keys).into_iter().map(of).collect()
    }

    #[test]
    fn the_unit_tells_what_is_stated() {
        let amounts = amounts(
            "volume: 1 L\ncontents:\n  malonic acid: 0.0350 mol/L\n  NaCl: 0.1 mol/kg\n  tris: 6 g/L\n  KCl: 7 g\n  citric acid: 2 mmol\n",
        );
        assert!(matches!(amounts[0], ContentAmount::Concentration(_)));
        assert!(matches!(amounts[1], ContentAmount::Molality(_)));
        assert!(matches!(amounts[2], ContentAmount::MassConcentration(_)));
        assert!(matches!(amounts[3], ContentAmount::Mass(_)));
        assert!(matches!(amounts[4], ContentAmount::Amount(_)));
    }

    #[test]
    fn an_input_has_its_name_and_its_place() {
        let text = "label: a\ntask: speciation\ncontents:\n  malonic acid: 0.0350 mol/L\n";
        let reading = crate::block::trial::reading(text);
        let id = InputId::new("contents")
            .within("malonic acid")
            .within("concentration");
        assert_eq!(
            reading.places.of(&id).and_then(|span| span.of(text)),
            Some("0.0350 mol/L")
        );
    }

    #[test]
    fn water_is_written_so_and_nothing_is_not() {
        assert_eq!(ingredients("contents: water\n"), []);
        one_fault(
            "speciation",
            "contents: []\n",
            Rule::EmptyContents,
            "[]",
            "contents: water",
        );
        one_fault(
            "speciation",
            "contents:\n",
            Rule::MissingValue,
            "",
            "`water`",
        );
    }

    #[test]
    fn masses_need_the_volume() {
        one_fault(
            "speciation",
            "contents:\n  NaCl: 5 g\n",
            Rule::VolumeNeeded,
            "label",
            "`volume: ...`",
        );
    }

    #[test]
    fn faults_of_a_short_item() {
        for (keys, rule, place, help) in [
            (
                "contents:\n  malonic acd: 1 mol/L\n",
                Rule::UnknownSubstance,
                "malonic acd",
                "`malonic acid`",
            ),
            (
                "contents:\n  NaCl: 5 mL\n",
                Rule::AmountNeeded,
                "5 mL",
                "long form",
            ),
            (
                "contents:\n  HCl: 37 % w/w\n",
                Rule::AmountNeeded,
                "37 % w/w",
                "density",
            ),
            ("contents:\n  HCl: 0.1 N\n", Rule::RefusedUnit, "N", "mol/L"),
            (
                "contents:\n  HCl: 0.1\n",
                Rule::MissingUnit,
                "0.1",
                "mol/kg",
            ),
            ("contents:\n  HCl: 25 °C\n", Rule::WrongUnit, "°C", "mol/kg"),
            (
                "contents:\n  HCl: 0,1 mol/L\n",
                Rule::DecimalComma,
                "0,1",
                "`0.1`",
            ),
            (
                "contents:\n  HCl: -0.1 mol/L\n",
                Rule::OutOfRange,
                "-0.1 mol/L",
                "more than nothing",
            ),
            (
                "contents:\n  HCl: 100 mol/L\n",
                Rule::OutOfRange,
                "100 mol/L",
                "60 mol/L",
            ),
        ] {
            one_fault("speciation", keys, rule, place, help);
        }
    }

    #[test]
    fn an_unknown_substance_does_not_hide_what_is_wrong_with_its_amount() {
        let found = faults("speciation", "contents:\n  malonic acd: 0,1 mol/L\n");
        let rules: Vec<Rule> = found.iter().map(|fault| fault.0).collect();
        assert_eq!(rules, [Rule::UnknownSubstance, Rule::DecimalComma]);
    }

    #[test]
    fn one_substance_under_two_names_is_found_out() {
        one_fault(
            "speciation",
            "contents:\n  NaCl: 0.1 mol/L\n  sodium chloride: 0.2 mol/L\n",
            Rule::DuplicateSubstance,
            "sodium chloride",
            "add the amounts",
        );
    }
}
