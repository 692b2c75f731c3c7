//! Blocks read for a test, with a stock of another block and a file of readings beside them. All of it is invented.

use crate::block::{Attachments, Context, Defaults, Reading, SolutionError, Solutions, read};
use crate::problem::{Composition, Problem, SolutionReference, Statement};
use crate::substance::Catalogue;
use crate::text::Rule;
use std::sync::Arc;

/// The stock that `naoh-01` names, on this page and on `stocks/2026-10.md`.
const STOCK: &str = "label: naoh-01\ntask: speciation\ncontents:\n  - substance: sodium hydroxide\n    concentration: 0.1000 ± 0.0003 mol/L (k=2)\n    factor: 1.0023\n";

/// What is read of a block.
pub(super) fn reading(text: &str) -> Reading {
    read(
        text,
        &Context {
            catalogue: Catalogue::embedded().unwrap(),
            defaults: &Defaults::program(),
            solutions: &Shelf,
            attachments: &Shelf,
        },
    )
}

/// The statement of a block without a fault.
pub(super) fn statement(text: &str) -> Statement {
    let reading = reading(text);
    assert_eq!(reading.diagnostics, [], "{text}");
    reading.statement.unwrap()
}

/// The problem of a task's keys, given without label and task.
pub(super) fn problem(task: &str, keys: &str) -> Problem {
    statement(&block(task, keys)).problem
}

/// The faults of a task's keys: the rule, what is underlined, and what is said to help or was expected.
pub(super) fn faults(task: &str, keys: &str) -> Vec<(Rule, String, String)> {
    let text = block(task, keys);
    let reading = reading(&text);
    assert_eq!(reading.statement, None, "{keys}");
    reading
        .diagnostics
        .iter()
        .map(|fault| {
            (
                fault.rule(),
                fault.span().of(&text).unwrap().to_owned(),
                format!(
                    "{}. {}",
                    fault.help().unwrap_or_default(),
                    fault.expected().unwrap_or_default()
                ),
            )
        })
        .collect()
}

/// Checks one fault: its rule, its place and a part of what is said to help.
pub(super) fn one_fault(task: &str, keys: &str, rule: Rule, place: &str, help: &str) {
    let found = faults(task, keys);
    assert_eq!(found.len(), 1, "{keys}\n{found:?}");
    assert_eq!((found[0].0, found[0].1.as_str()), (rule, place), "{keys}");
    assert!(found[0].2.contains(help), "{keys}\n{found:?}");
}

fn block(task: &str, keys: &str) -> String {
    format!("label: a\ntask: {task}\n{keys}")
}

#[derive(Debug)]
struct Shelf;

impl Solutions for Shelf {
    fn solution(&self, reference: &SolutionReference) -> Result<Arc<Composition>, SolutionError> {
        match reference.label.as_str() {
            "naoh-01" => match statement(STOCK).problem {
                Problem::Speciation(task) => Ok(Arc::new(task.composition)),
                _ => Err(SolutionError::Faulty),
            },
            "round" => Err(SolutionError::Circular),
            "wrong" => Err(SolutionError::Faulty),
            _ => Err(SolutionError::Unknown {
                labels: vec!["naoh-01".to_owned()],
            }),
        }
    }
}

impl Attachments for Shelf {
    fn read(&self, path: &str) -> Result<Vec<u8>, String> {
        let text = match path {
            "run.csv" => "volume_mL,pH\n0,2.1\n1,2.2\n2,2.3\n3,2.5\n4,2.8\n5,7.0\n",
            "run-mv.csv" => "volume_mL,mV\n0,210\n1,205\n2,198\n3,190\n",
            "broken.csv" => "volume_mL,pH\n0,2.1\n1,x\n2,y\n",
            "house.yaml" => {
                "- {substance: acid A, charge: 0, pKa: [2.15, 7.20, 12.35], source: report 11-204}\n"
            }
            "broken.yaml" => "# invented\n- {substance: acid A, charge: 0, pKa: [2.15]}\n",
            _ => return Err("there is no such file".to_owned()),
        };
        Ok(text.as_bytes().to_vec())
    }
}
