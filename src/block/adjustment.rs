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

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::{one_fault, problem};
    use crate::problem::Problem;

    const START: &str = "start: {volume: 500 mL, contents: {tris: 50 mmol/L}, measured pH: 8.31}\n";
    const WITH: &str = "with: {substance: hydrochloric acid, concentration: 1.000 mol/L}\n";

    #[test]
    fn the_example_of_the_language_is_read() {
        let keys = format!("{START}{WITH}target:\n  pH: 7.40\n");
        let Problem::Adjustment(task) = problem("adjustment", &keys) else {
            panic!()
        };
        assert!((task.measured_ph.unwrap().value().base() - 8.31).abs() < 1e-12);
        assert!(matches!(task.goal, AdjustmentGoal::Reach(_)));
    }

    #[test]
    fn a_start_may_be_a_portion_of_another_solution() {
        let keys = format!(
            "start: {{solution: naoh-01, volume: 100 mL}}\n{WITH}add: 2.00 mL\ndrop: 0.05 mL\n"
        );
        let Problem::Adjustment(task) = problem("adjustment", &keys) else {
            panic!()
        };
        assert!(matches!(task.start.made_up, MadeUp::To(_)));
        assert!(matches!(task.goal, AdjustmentGoal::Add(Taken::Volume(_))));
    }

    #[test]
    fn faults_of_an_adjustment() {
        for (keys, rule, place, help) in [
            (
                format!("{START}target: {{pH: 7}}\n"),
                Rule::MissingKey,
                "label",
                "`with: ...`",
            ),
            (
                format!("{WITH}target: {{pH: 7}}\n"),
                Rule::MissingKey,
                "label",
                "`start: ...`",
            ),
            (
                format!("{START}{WITH}"),
                Rule::MissingKey,
                "label",
                "add: 2.00 mL",
            ),
            (
                format!("{START}{WITH}target: {{pH: 7}}\nadd: 1 mL\n"),
                Rule::ConflictingKeys,
                "1 mL",
                "",
            ),
            (
                format!("{START}{WITH}add: 1 g\n"),
                Rule::AmountNeeded,
                "1 g",
                "a volume",
            ),
            (
                format!("{START}with: NaOH\nadd: 1 mL\n"),
                Rule::AmountNeeded,
                "1 mL",
                "a mass",
            ),
            (
                format!("start: {{contents: {{tris: 1 mmol/L}}}}\n{WITH}add: 1 mL\n"),
                Rule::VolumeNeeded,
                "start",
                "`volume: ...`",
            ),
        ] {
            one_fault("adjustment", &keys, rule, place, help);
        }
    }
}
