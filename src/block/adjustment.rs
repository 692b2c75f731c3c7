//! `adjustment`: a solution moved to a pH, or moved by an addition.

use crate::block::preparation::liquid;
use crate::block::reader::Reader;
use crate::block::{amount, source};
use crate::problem::{Adjustment, AdjustmentGoal, InputId, MadeUp, Source, Taken};
use crate::quantity::{Dimension, Mass};
use crate::text::{Diagnostic, Rule};
use crate::yaml::Keys;

pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Adjustment> {
    let drop = reader.top(keys, "drop");
    let made_up_to = reader.top(keys, "made up to");
    let with = keys.required("with", &mut reader.diagnostics);
    let with = with.and_then(|node| source::read(reader, node, &InputId::new("with")));
    let back_with = keys.take("back with");
    let back_with: Option<Source> =
        back_with.and_then(|node| source::read(reader, node, &InputId::new("back with")));
    let heading = keys.whole().heading();
    let add = keys.text("add", &mut reader.diagnostics);
    let target = keys.mapping("target", &mut reader.diagnostics);
    let goal = match (target, add) {
        (Some(mapping), None) => {
            let mut inner = mapping.keys();
            let ph = reader.required(&mut inner, "pH", &InputId::new("target"));
            inner.finish(&mut reader.diagnostics);
            ph.map(AdjustmentGoal::Reach)
        }
        (None, Some(scalar)) => {
            let id = InputId::new("add");
            if amount::unit_of(scalar).is_some_and(|unit| Mass::UNITS.contains(&unit)) {
                reader
                    .input(id, scalar)
                    .map(|mass| AdjustmentGoal::Add(Taken::Mass(mass)))
            } else {
                reader
                    .input(id, scalar)
                    .map(|volume| AdjustmentGoal::Add(Taken::Volume(volume)))
            }
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
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::MissingKey,
                    heading,
                    "what is to be reached is not stated",
                )
                .expecting("`target: {pH: 7.40}`, or `add: 2.00 mL`"),
            );
            None
        }
    };
    let mapping = keys
        .required("start", &mut reader.diagnostics)?
        .as_mapping(&mut reader.diagnostics)?;
    let mut inner = mapping.keys();
    let measured_ph = reader.amount(&mut inner, "measured pH", &InputId::new("start"));
    let start = liquid(reader, &mut inner, &InputId::new("start"));
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
