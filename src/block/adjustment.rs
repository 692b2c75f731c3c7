//! `adjustment`: a solution moved to a pH, or moved by an addition.

use crate::block::preparation::liquid;
use crate::block::reader::Reader;
use crate::block::{amount, source};
use crate::problem::{
    Adjustment, AdjustmentGoal, Composition, Input, InputId, MadeUp, Source, SourceKind, Strength,
    Taken,
};
use crate::quantity::{Dimension, Mass, Number};
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{Keys, Scalar};

pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Adjustment> {
    let drop = reader.top(keys, "drop");
    let made_up_to = reader.top(keys, "made up to");
    let with = keys.required("with", &mut reader.diagnostics);
    let with = with.and_then(|node| source::read(reader, node, &InputId::new("with")));
    let back_with = keys.take("back with");
    let back_with: Option<Source> =
        back_with.and_then(|node| source::read(reader, node, &InputId::new("back with")));
    let goal = goal(reader, keys, with.as_ref());
    let start = start(reader, keys);
    let (start, measured_ph) = start?;
    Some(Adjustment {
        start,
        measured_ph,
        with: with?,
        back_with,
        goal: goal?,
        drop,
        made_up_to,
    })
}

/// `start`, with the pH that was measured in it.
fn start(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
) -> Option<(Composition, Option<Input<Number>>)> {
    let mapping = keys
        .required("start", &mut reader.diagnostics)?
        .as_mapping(&mut reader.diagnostics)?;
    let mut inner = mapping.keys();
    let id = InputId::new("start");
    let measured_ph = reader.amount(&mut inner, "measured pH", &id);
    let start = liquid(reader, &mut inner, &id);
    inner.finish(&mut reader.diagnostics);
    let start = start?;
    if start.made_up == MadeUp::Unstated {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::VolumeNeeded,
                mapping.heading(),
                "how much solution is adjusted is not stated",
            )
            .expecting("`volume: ...`"),
        );
        return None;
    }
    Some((start, measured_ph))
}

/// `target: {pH: 7.40}`, or `add: 2.00 mL`.
fn goal(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    with: Option<&Source>,
) -> Option<AdjustmentGoal> {
    let heading = keys.whole().heading();
    let add = keys.text("add", &mut reader.diagnostics);
    let target = keys.take("target");
    match (target, add) {
        (Some(node), None) => {
            let mut inner = node.as_mapping(&mut reader.diagnostics)?.keys();
            let ph = reader.required(&mut inner, "pH", &InputId::new("target"));
            inner.finish(&mut reader.diagnostics);
            ph.map(AdjustmentGoal::Reach)
        }
        (None, Some(scalar)) => {
            let taken = addition(reader, scalar)?;
            if let Some(with) = with {
                fitting(reader, with, &taken, scalar.span())?;
            }
            Some(AdjustmentGoal::Add(taken))
        }
        (Some(_), Some(scalar)) => {
            reader.error(
                Rule::ConflictingKeys,
                scalar.span(),
                "`add` and `target` exclude each other",
            );
            None
        }
        (None, None) => {
            if !keys.whole().is_partial() {
                reader.diagnostics.push(
                    Diagnostic::error(
                        Rule::MissingKey,
                        heading,
                        "what is to be reached is not stated",
                    )
                    .expecting("`target: {pH: 7.40}`, or `add: 2.00 mL`"),
                );
            }
            None
        }
    }
}

fn addition(reader: &mut Reader<'_>, scalar: &Scalar) -> Option<Taken> {
    let id = InputId::new("add");
    if amount::unit_of(scalar).is_some_and(|unit| Mass::UNITS.contains(&unit)) {
        reader.input(id, scalar).map(Taken::Mass)
    } else {
        reader.input(id, scalar).map(Taken::Volume)
    }
}

/// A solid is added by mass, a solution by volume, one in percent by either.
fn fitting(reader: &mut Reader<'_>, with: &Source, taken: &Taken, span: Span) -> Option<()> {
    let expected = match (&with.kind, taken) {
        (SourceKind::Solid { .. }, Taken::Volume(_)) => {
            "a mass of the solid, or the `concentration` of its solution in `with`"
        }
        (
            SourceKind::Stock {
                strength: Strength::Concentration(_) | Strength::MassConcentration(_),
                ..
            }
            | SourceKind::Solution(_),
            Taken::Mass(_),
        ) => "a volume of the solution",
        _ => return Some(()),
    };
    reader.diagnostics.push(
        Diagnostic::error(
            Rule::AmountNeeded,
            span,
            "the addition is not of the kind that `with` describes",
        )
        .expecting(expected),
    );
    None
}
