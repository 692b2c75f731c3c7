//! The block's task, and the keys that belong to it.

use crate::block::reader::Reader;
use crate::block::{KEYS, adjustment, contents, mixing, preparation, titration};
use crate::problem::{InputId, Problem, Speciation};
use crate::text::{Diagnostic, Rule};
use crate::yaml::Keys;

/// The value of `task`, with the keys of that task.
pub(super) fn read(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<Problem> {
    let Some(node) = keys.take("task") else {
        if !keys.whole().is_partial() {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::MissingKey,
                    keys.whole().heading(),
                    "the key `task` is missing",
                )
                .expecting(format!("one of {}", Problem::TASKS.join(", "))),
            );
        }
        skip_task_keys(keys);
        return None;
    };
    let scalar = node.as_text(&mut reader.diagnostics)?;
    match scalar.text() {
        "speciation" => contents::composition(reader, keys, &InputId::new("contents"))
            .map(|composition| Problem::Speciation(Speciation { composition })),
        "preparation" => {
            preparation::read(reader, keys).map(|task| Problem::Preparation(Box::new(task)))
        }
        "adjustment" => {
            adjustment::read(reader, keys).map(|task| Problem::Adjustment(Box::new(task)))
        }
        "mixing" => mixing::read(reader, keys).map(Problem::Mixing),
        "titration" => titration::read(reader, keys).map(|task| Problem::Titration(Box::new(task))),
        other => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::UnknownTask,
                    scalar.span(),
                    format!("`{other}` is no task"),
                )
                .expecting(format!("one of {}", Problem::TASKS.join(", ")))
                .did_you_mean(other, Problem::TASKS),
            );
            skip_task_keys(keys);
            None
        }
    }
}

/// Without a task nobody can say which of its keys belong; none is reported as unknown.
fn skip_task_keys(keys: &mut Keys<'_>) {
    for entry in KEYS.iter().filter(|entry| !entry.tasks.is_empty()) {
        keys.take(entry.key);
    }
}
