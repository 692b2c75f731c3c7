//! The keys of the block language, in one table: the reference and the editor's help are made from it, and a test holds the readers to it.

/// One key.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct KeyEntry {
    /// The key as it is written.
    pub key: &'static str,
    /// The tasks that have it; empty for keys of every block.
    pub tasks: &'static [&'static str],
    /// What it means.
    pub meaning: &'static str,
    /// An example of its value.
    pub example: &'static str,
}

const fn every(key: &'static str, meaning: &'static str, example: &'static str) -> KeyEntry {
    KeyEntry {
        key,
        tasks: &[],
        meaning,
        example,
    }
}

const fn of(
    key: &'static str,
    tasks: &'static [&'static str],
    meaning: &'static str,
    example: &'static str,
) -> KeyEntry {
    KeyEntry {
        key,
        tasks,
        meaning,
        example,
    }
}

/// Every top-level key of a block.
pub const KEYS: [KeyEntry; 41] = [
    every(
        "label",
        "name of the block, unique in the page",
        "rinse-0311",
    ),
    every("task", "what is asked", "speciation"),
    every(
        "temperature",
        "temperature of the solution, 0 to 100 °C",
        "25 °C",
    ),
    every("activity", "activity model", "davies"),
    every(
        "air",
        "what the solution exchanges with the air",
        "CO2 420 ppm",
    ),
    every(
        "constants",
        "own values with their source, or the name of a constants file",
        "house.yaml",
    ),
    every(
        "hand value",
        "a pH worked by hand, the shortcut used, the limit",
        "{pH: 2.15, by: x neglected, limit: 0.02}",
    ),
    every(
        "measured",
        "a reading with its uncertainty, calibration and acceptance limit",
        "{pH: 7.18 ± 0.02 (k=2)}",
    ),
    every("uncertainty", "how uncertainty is worked out", "budget"),
    every(
        "report",
        "decimals of pH, significant figures of amounts",
        "{pH: 2 decimals, amounts: 4 figures}",
    ),
    every(
        "accept",
        "what the analyst accepts in so many words",
        "model outside its range",
    ),
    every("method", "procedure and revision", "SOP-114 rev 3"),
    every(
        "equipment",
        "balances, pipettes, meters by their identity numbers",
        "[balance B-04]",
    ),
    every("notes", "free text", "flask rinsed twice"),
    every("solvent", "water; anything else is refused", "water"),
    of(
        "volume",
        &["speciation"],
        "final volume, needed where masses or portions are stated",
        "1.000 L",
    ),
    of(
        "contents",
        &["speciation"],
        "what the solution is made of",
        "{acetic acid: 0.100 mol/L}",
    ),
    of(
        "target",
        &["preparation", "adjustment"],
        "what is to be reached",
        "{pH: 7.20}",
    ),
    of(
        "from",
        &["preparation"],
        "what the buffer is made from",
        "[tris, hydrochloric acid]",
    ),
    of(
        "buffer",
        &["preparation"],
        "`suggest` ranks the library's buffers for the target",
        "suggest",
    ),
    of(
        "avoid",
        &["preparation"],
        "what a suggested buffer must not contain",
        "[phosphate]",
    ),
    of(
        "balance",
        &["preparation"],
        "readability of the balance",
        "0.1 mg",
    ),
    of(
        "pipette",
        &["preparation"],
        "smallest step of the pipette or burette",
        "0.01 mL",
    ),
    of(
        "flask",
        &["preparation"],
        "the flask with its tolerance",
        "1000 ± 0.4 mL (tolerance)",
    ),
    of(
        "weighed",
        &["preparation"],
        "what was really taken of each source",
        "[3.9003 g, 7.0982 g]",
    ),
    of(
        "start",
        &["adjustment"],
        "the solution before the adjustment",
        "{volume: 500 mL, contents: {tris: 50 mmol/L}}",
    ),
    of(
        "with",
        &["adjustment"],
        "what is added",
        "{substance: hydrochloric acid, concentration: 1.000 mol/L}",
    ),
    of(
        "back with",
        &["adjustment"],
        "what undoes an overshoot",
        "{substance: sodium hydroxide, concentration: 1.000 mol/L}",
    ),
    of(
        "add",
        &["adjustment"],
        "a stated addition, in place of a target",
        "2.00 mL",
    ),
    of("drop", &["adjustment"], "volume of one drop", "0.05 mL"),
    of(
        "portions",
        &["mixing"],
        "what is poured together",
        "[{volume: 100 mL, contents: water}]",
    ),
    of(
        "made up to",
        &["mixing", "adjustment"],
        "final volume, in place of the sum of the portions",
        "1.000 L",
    ),
    of(
        "dilution",
        &["mixing"],
        "a serial dilution of the mixture",
        "{take: 10 mL, made up to: 100 mL, steps: 3}",
    ),
    of(
        "sample",
        &["titration"],
        "the sample, with its volume",
        "{volume: 25.00 mL, contents: {acetic acid: 0.1 mol/L}}",
    ),
    of(
        "titrant",
        &["titration"],
        "the titrant",
        "{contents: {sodium hydroxide: 0.1000 mol/L}}",
    ),
    of(
        "to",
        &["titration"],
        "volume of titrant at the end of the curve",
        "20.00 mL",
    ),
    of(
        "points",
        &["titration"],
        "number of points; absent, as many as the curve needs",
        "200",
    ),
    of(
        "indicators",
        &["titration"],
        "indicators to look at; absent, all that are known",
        "[phenolphthalein]",
    ),
    of(
        "readings",
        &["titration"],
        "measured points, in a file beside the page",
        "readings/run-17.csv",
    ),
    of(
        "calibration",
        &["titration"],
        "the electrode, where readings are in mV",
        "{mV at pH 7: 2.1, slope: 98.9 %}",
    ),
    of(
        "fit",
        &["titration"],
        "what to determine from the readings",
        "[phosphoric acid, pKa 1 of phosphoric acid]",
    ),
];

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::{faults, statement};
    use crate::problem::Problem;
    use crate::text::Rule;
    use std::collections::BTreeSet;

    #[test]
    fn the_readers_know_the_keys_of_the_table_and_no_others() {
        for task in Problem::TASKS {
            let found = faults(task, "no such key: 1\n");
            let (_, _, expected) = found
                .iter()
                .find(|(rule, place, _)| *rule == Rule::UnknownKey && place == "no such key")
                .unwrap();
            let read: BTreeSet<&str> = expected.split('`').skip(1).step_by(2).collect();
            let table: BTreeSet<&str> = KEYS
                .iter()
                .filter(|entry| entry.tasks.is_empty() || entry.tasks.contains(&task))
                .map(|entry| entry.key)
                .collect();
            assert_eq!(read, table, "{task}");
        }
    }

    #[test]
    fn the_examples_of_keys_of_every_block_make_a_block() {
        let mut text = String::from("volume: 1.000 L\ncontents: {acetic acid: 0.100 mol/L}\n");
        for entry in KEYS.iter().filter(|entry| entry.tasks.is_empty()) {
            text.push_str(entry.key);
            text.push_str(": ");
            text.push_str(entry.example);
            text.push('\n');
        }
        drop(statement(&text));
    }

    #[test]
    fn each_key_stands_once() {
        let mut keys: Vec<&str> = KEYS.iter().map(|entry| entry.key).collect();
        keys.sort_unstable();
        keys.dedup();
        assert_eq!(keys.len(), KEYS.len());
    }
}
