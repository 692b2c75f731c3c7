//! What a liquid is made of, in the short and the long form.

use crate::block::outline::reference;
use crate::block::reader::Reader;
use crate::block::{SolutionError, amount};
use crate::problem::{
    Composition, Content, ContentAmount, Corrections, Ingredient, Input, InputId, MadeUp,
    SolutionPortion, Strength, Taken, Trace,
};
use crate::quantity::{
    Amount, AmountConcentration, Density, Dimension, Mass, MassConcentration, MassFraction,
    Molality, Number, Unit, Volume,
};
use crate::substance::Form;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{Keys, Mapping, Node, Scalar, Value};
use std::sync::Arc;

/// Most ingredients of one liquid.
const MOST_INGREDIENTS: usize = 64;

/// A liquid with the keys `volume` and `contents` of a mapping. `volume_key` says whether the volume belongs to it.
pub(super) fn composition(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    id: &InputId,
    volume_key: bool,
) -> Option<Composition> {
    let volume = if volume_key {
        let scalar = keys.text("volume", &mut reader.diagnostics);
        scalar.map(|scalar| {
            (
                reader.input::<Volume>(InputId::new("volume").in_same_place(id), scalar),
                scalar.span(),
            )
        })
    } else {
        None
    };
    let heading = keys.whole().heading();
    let node = keys.required("contents", &mut reader.diagnostics)?;
    let ingredients = ingredients(reader, node, id);
    let made_up = match volume {
        Some((Some(volume), span)) => {
            if volume.value().base() <= 0.0 {
                reader.error(Rule::OutOfRange, span, "a volume is more than nothing");
            }
            MadeUp::To(volume)
        }
        Some((None, _)) => return None,
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

/// The value of `contents`: `water`, a mapping of names to amounts, or a list of items.
pub(super) fn ingredients(reader: &mut Reader<'_>, node: &Node, id: &InputId) -> Vec<Ingredient> {
    let before = reader.diagnostics.len();
    let mut ingredients = Vec::new();
    let mut spans = Vec::new();
    match &node.value {
        Value::Text(scalar) if scalar.text() == "water" => return Vec::new(),
        Value::Mapping(mapping) => {
            for entry in mapping.entries() {
                spans.push(entry.key.span());
                ingredients.push(short(reader, &entry.key, &entry.value, id));
            }
        }
        Value::List(items) => {
            for (index, item) in items.iter().enumerate() {
                spans.push(item.span);
                let item_id = id.within(&format!("{}", index + 1));
                let Some(mapping) = item.as_mapping(&mut reader.diagnostics) else {
                    continue;
                };
                ingredients.push(long(reader, mapping, &item_id));
            }
        }
        _ => {
            node.refuse::<()>(
                "`water`, a mapping of substances to amounts, or a list of items",
                &mut reader.diagnostics,
            );
        }
    }
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
        unbalanced(reader, &found, &spans);
    }
    found
}

/// `malonic acid: 0.0350 mol/L`.
fn short(reader: &mut Reader<'_>, name: &Scalar, value: &Node, id: &InputId) -> Option<Ingredient> {
    let form = substance(reader, name);
    let scalar = value.as_text(&mut reader.diagnostics)?;
    let form = form?;
    let item = id.within(&form.name);
    let amount = match amount::unit_of(scalar) {
        Some(unit) if Volume::UNITS.contains(&unit) => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::AmountNeeded,
                    scalar.span(),
                    "a volume alone does not say how much of the substance is in it",
                )
                .helped(
                    "use the long form: `- substance: ...`, `volume: ...`, `concentration: ...`",
                ),
            );
            return None;
        }
        Some(Unit::PercentByMass | Unit::Percent) => {
            reader.diagnostics.push(
                Diagnostic::error(Rule::AmountNeeded, scalar.span(), "a mass fraction needs the density, and how much was taken")
                    .helped("use the long form: `- substance: ...`, `volume: ...`, `concentration: 37 % w/w`, `density: 1.18 g/mL`"),
            );
            return None;
        }
        Some(unit) if Mass::UNITS.contains(&unit) => {
            weighable(reader, &form, scalar.span())?;
            ContentAmount::Mass(reader.input(item.within("mass"), scalar)?)
        }
        Some(unit) if Amount::UNITS.contains(&unit) => {
            ContentAmount::Amount(reader.input(item.within("amount"), scalar)?)
        }
        _ => concentration(reader, &form, scalar, &item)?,
    };
    Some(Ingredient::Substance(Box::new(Content {
        id: item,
        form,
        amount,
        corrections: Corrections::default(),
        trace: Trace::default(),
    })))
}

/// A concentration in the final solution, in whichever unit.
fn concentration(
    reader: &mut Reader<'_>,
    form: &Form,
    scalar: &Scalar,
    item: &InputId,
) -> Option<ContentAmount> {
    let id = item.within("concentration");
    match amount::unit_of(scalar) {
        Some(unit) if Molality::UNITS.contains(&unit) => {
            Some(ContentAmount::Molality(reader.input(id, scalar)?))
        }
        Some(unit) if MassConcentration::UNITS.contains(&unit) => {
            weighable(reader, form, scalar.span())?;
            Some(ContentAmount::MassConcentration(reader.input(id, scalar)?))
        }
        _ => Some(ContentAmount::Concentration(
            reader.input::<AmountConcentration>(id, scalar)?,
        )),
    }
}

/// A mass needs a molar mass, hence a formula.
fn weighable(reader: &mut Reader<'_>, form: &Form, span: Span) -> Option<()> {
    if form.formula.is_none() {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::WrongUnit,
                span,
                format!(
                    "{} has no formula here, so a mass of it says no amount",
                    form.name
                ),
            )
            .expecting(
                "mol/L, mmol/L, mol/kg, mol, mmol; or `formula: ...` with the own constants",
            ),
        );
        return None;
    }
    Some(())
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
            item(reader, &mut keys, name, id)
                .map(|content| Ingredient::Substance(Box::new(content)))
        }
    } else {
        for key in ITEM_KEYS {
            keys.take(key);
        }
        None
    };
    keys.finish(&mut reader.diagnostics);
    found
}

const ITEM_KEYS: [&str; 13] = [
    "mass",
    "volume",
    "amount",
    "concentration",
    "density",
    "lot",
    "expiry",
    "assay",
    "purity",
    "water",
    "factor",
    "replicates",
    "solution",
];

/// A portion of another block's solution: `solution: stocks/2026-10.md#naoh-01` with its volume.
pub(super) fn portion(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    scalar: &Scalar,
    id: &InputId,
) -> Option<SolutionPortion> {
    let volume = reader.required::<Volume>(keys, "volume", id);
    let composition = solution(reader, scalar);
    Some(SolutionPortion {
        volume: volume?,
        reference: Some(reference(scalar.text())),
        composition: composition?,
    })
}

/// The composition of another block's solution, its inputs under that block's name.
pub(super) fn solution(reader: &mut Reader<'_>, scalar: &Scalar) -> Option<Arc<Composition>> {
    let wanted = reference(scalar.text());
    reader.references.push(wanted.clone());
    match reader.context.solutions.solution(&wanted) {
        Ok(composition) => Some(Arc::new(composition.seen_from(scalar.text()))),
        Err(error) => {
            let rule = match error {
                SolutionError::Unknown { .. } | SolutionError::Page { .. } => Rule::UnknownSolution,
                SolutionError::Circular => Rule::CircularSolution,
                SolutionError::Faulty => Rule::SolutionNotUsable,
            };
            let mut diagnostic = Diagnostic::error(
                rule,
                scalar.span(),
                format!("`{}` cannot be used: {error}", scalar.text()),
            );
            if let SolutionError::Unknown { labels } = &error {
                diagnostic =
                    diagnostic.did_you_mean(&wanted.label, labels.iter().map(String::as_str));
            }
            reader.diagnostics.push(diagnostic);
            None
        }
    }
}

/// One substance with how much of it, and what its certificate says.
fn item(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    name: &Scalar,
    id: &InputId,
) -> Option<Content> {
    let form = substance(reader, name);
    let id = form
        .as_ref()
        .map_or_else(|| id.clone(), |form| id.renamed(&form.name));
    let corrections = corrections(reader, keys, &id);
    let trace = trace(reader, keys);
    let replicates = keys.take("replicates");
    let mass = keys.text("mass", &mut reader.diagnostics);
    let volume = keys.text("volume", &mut reader.diagnostics);
    let substance_amount = keys.text("amount", &mut reader.diagnostics);
    let strength = keys.text("concentration", &mut reader.diagnostics);
    let density = reader.amount::<Density>(keys, "density", &id);
    let form = form?;
    let amount = match (mass, volume, substance_amount, strength) {
        (None, None, Some(scalar), None) => {
            ContentAmount::Amount(reader.input(id.within("amount"), scalar)?)
        }
        (Some(scalar), None, None, None) => {
            weighable(reader, &form, scalar.span())?;
            ContentAmount::Mass(reader.input(id.within("mass"), scalar)?)
        }
        (None, None, None, Some(scalar)) => concentration(reader, &form, scalar, &id)?,
        (None, Some(scalar), None, Some(strength_scalar)) => {
            let taken = Taken::Volume(reader.input(id.within("volume"), scalar)?);
            let strength = self::strength(reader, &form, strength_scalar, density, &id)?;
            checked_stock(reader, taken, strength, strength_scalar.span())?
        }
        (Some(scalar), None, None, Some(strength_scalar)) => {
            let taken = Taken::Mass(reader.input(id.within("mass"), scalar)?);
            let strength = self::strength(reader, &form, strength_scalar, density, &id)?;
            checked_stock(reader, taken, strength, strength_scalar.span())?
        }
        (None, None, None, None) => match replicates {
            Some(node) => return replicated(reader, node, id, form, corrections, trace),
            None => {
                reader.diagnostics.push(
                    Diagnostic::error(
                        Rule::AmountNeeded,
                        name.span(),
                        format!("how much {} is not stated", form.name),
                    )
                    .expecting(
                        "`mass`, `amount`, `concentration`, or `volume` with `concentration`",
                    ),
                );
                return None;
            }
        },
        (None, Some(scalar), None, None) => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::AmountNeeded,
                    scalar.span(),
                    "a volume alone does not say how much of the substance is in it",
                )
                .expecting("`concentration: ...` beside it"),
            );
            return None;
        }
        _ => {
            reader.error(
                Rule::TooManyAmounts,
                name.span(),
                format!("how much {} is stated in more than one way", form.name),
            );
            return None;
        }
    };
    if let Some(node) = replicates {
        reader.error(
            Rule::ConflictingKeys,
            node.span,
            "`replicates` stands in place of a single value, not beside it",
        );
    }
    Some(Content {
        id,
        form,
        amount,
        corrections,
        trace,
    })
}

/// A stock taken by volume needs its density where its strength is a mass fraction; taken by mass, where it is not.
fn checked_stock(
    reader: &mut Reader<'_>,
    taken: Taken,
    strength: Strength,
    span: Span,
) -> Option<ContentAmount> {
    let lacks = match (&taken, &strength) {
        (Taken::Volume(_), Strength::MassFraction { density, .. }) => density.is_none(),
        (Taken::Mass(_), Strength::MassFraction { .. }) | (Taken::Volume(_), _) => false,
        (Taken::Mass(_), _) => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::DensityNeeded,
                    span,
                    "a mass of a solution has an amount only by its mass fraction",
                )
                .expecting("`concentration: ... % w/w`, or a `volume` in place of the mass"),
            );
            return None;
        }
    };
    if lacks {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::DensityNeeded,
                span,
                "a volume of a stock given in % w/w has an amount only with its density",
            )
            .expecting("`density: 1.685 g/mL`"),
        );
        return None;
    }
    Some(ContentAmount::Stock { taken, strength })
}

/// The strength of a stock, in whichever unit.
pub(super) fn strength(
    reader: &mut Reader<'_>,
    form: &Form,
    scalar: &Scalar,
    density: Option<Input<Density>>,
    id: &InputId,
) -> Option<Strength> {
    let id = id.within("concentration");
    match amount::unit_of(scalar) {
        Some(Unit::PercentByMass | Unit::Percent) => {
            weighable(reader, form, scalar.span())?;
            let fraction = reader.input::<MassFraction>(id, scalar)?;
            if fraction.value().base() > 1.0 {
                reader.error(Rule::OutOfRange, scalar.span(), "more than 100 %");
                return None;
            }
            Some(Strength::MassFraction { fraction, density })
        }
        Some(unit) if MassConcentration::UNITS.contains(&unit) => {
            weighable(reader, form, scalar.span())?;
            Some(Strength::MassConcentration(reader.input(id, scalar)?))
        }
        _ => Some(Strength::Concentration(reader.input(id, scalar)?)),
    }
}

/// `replicates: [19.21 g, 19.22 g]`: the mean, with the standard deviation of the mean.
fn replicated(
    reader: &mut Reader<'_>,
    node: &Node,
    id: InputId,
    form: Arc<Form>,
    corrections: Corrections,
    trace: Trace,
) -> Option<Content> {
    let scalars: Vec<&Scalar> = node
        .as_list(&mut reader.diagnostics)?
        .iter()
        .filter_map(|item| item.as_text(&mut reader.diagnostics))
        .collect();
    let unit = scalars.first().and_then(|scalar| amount::unit_of(scalar));
    let amount = match unit {
        Some(unit) if Mass::UNITS.contains(&unit) => {
            weighable(reader, &form, node.span)?;
            ContentAmount::Mass(mean(reader, &scalars, node, id.within("mass"))?)
        }
        Some(unit) if Amount::UNITS.contains(&unit) => {
            ContentAmount::Amount(mean(reader, &scalars, node, id.within("amount"))?)
        }
        Some(unit) if Molality::UNITS.contains(&unit) => {
            ContentAmount::Molality(mean(reader, &scalars, node, id.within("concentration"))?)
        }
        _ => {
            ContentAmount::Concentration(mean(reader, &scalars, node, id.within("concentration"))?)
        }
    };
    Some(Content {
        id,
        form,
        amount,
        corrections,
        trace,
    })
}

fn mean<D: Dimension>(
    reader: &mut Reader<'_>,
    scalars: &[&Scalar],
    node: &Node,
    id: InputId,
) -> Option<Input<D>> {
    let mut readings = Vec::new();
    for scalar in scalars {
        readings.push(reader.input::<D>(id.clone(), scalar)?.measured);
    }
    let Some(measured) = crate::quantity::Measured::mean(&readings) else {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::EmptyList,
                node.span,
                "replicates are at least two readings in one unit",
            )
            .expecting("`replicates: [19.21 g, 19.22 g]`"),
        );
        return None;
    };
    reader.input_place(&id, node.span);
    Some(Input {
        id,
        measured,
        replicates: readings,
    })
}

/// Purity or assay, moisture, titre.
pub(super) fn corrections(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    id: &InputId,
) -> Corrections {
    let purity = reader.amount::<MassFraction>(keys, "purity", id);
    let assay = keys.take_entry("assay");
    let purity = match (purity, assay) {
        (purity, None) => purity,
        (Some(_), Some(entry)) => {
            reader.error(
                Rule::ConflictingKeys,
                entry.key.span(),
                "`assay` and `purity` mean the same; state one",
            );
            None
        }
        (None, Some(entry)) => entry
            .value
            .as_text(&mut reader.diagnostics)
            .and_then(|scalar| reader.input(id.within("assay"), scalar)),
    };
    Corrections {
        purity,
        water: reader.amount::<MassFraction>(keys, "water", id),
        factor: reader.amount::<Number>(keys, "factor", id),
    }
}

/// Lot and expiry, as written.
pub(super) fn trace(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Trace {
    let mut text = |key| {
        keys.text(key, &mut reader.diagnostics)
            .map(|scalar| scalar.text().to_owned())
    };
    Trace {
        lot: text("lot"),
        expiry: text("expiry"),
    }
}

/// The substance that a name means.
pub(super) fn substance(reader: &mut Reader<'_>, name: &Scalar) -> Option<Arc<Form>> {
    match reader.catalogue.find(name.text()) {
        Ok(form) => Some(Arc::clone(form)),
        Err(error) => {
            let diagnostic = Diagnostic::error(
                Rule::UnknownSubstance,
                name.span(),
                format!("`{}` is not in the library", name.text()),
            )
            .expecting("a name, formula or CAS number of the library, or own `constants`")
            .did_you_mean(name.text(), error.names.iter().map(String::as_str));
            reader.diagnostics.push(diagnostic);
            None
        }
    }
}

/// Ions given alone must leave no charge.
fn unbalanced(reader: &mut Reader<'_>, ingredients: &[Ingredient], spans: &[Span]) {
    let (mut charge, mut size) = (0.0, 0.0);
    let mut first = None;
    for (ingredient, span) in ingredients.iter().zip(spans) {
        let Ingredient::Substance(content) = ingredient else {
            continue;
        };
        if content.form.charge == 0 {
            continue;
        }
        let amount = match &content.amount {
            ContentAmount::Concentration(input) => input.value().base(),
            ContentAmount::Molality(input) => input.value().base(),
            ContentAmount::Amount(input) => input.value().base(),
            _ => continue,
        };
        let equivalents = f64::from(content.form.charge) * amount;
        charge += equivalents;
        size += equivalents.abs();
        first.get_or_insert(*span);
    }
    let Some(span) = first else { return };
    if charge.abs() > 1e-9 * size {
        let (sign, ion) = if charge > 0.0 {
            ("positive", "an anion such as `chloride ion`")
        } else {
            ("negative", "a cation such as `sodium ion`")
        };
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::UnbalancedIon,
                span,
                format!("the ions given alone leave {:.4e} of {sign} charge in the unit of their amounts", charge.abs()),
            )
            .expecting(format!("{ion} of the same size, or salts in place of ions")),
        );
    }
}
