//! Results among each other: copies, labels that stand twice, what takes the place of what, what is made from what.

use super::act::{Meaning, SignedAct};
use super::digest::Digest;
use super::fault::{Fault, SourceFate};
use super::finding::{Finding, Part, Place};
use super::statement::ResultName;
use super::verification::Record;

/// A sealed result and where it stands.
#[derive(Clone, Copy, Debug)]
pub struct Placed<'a> {
    /// The page, from the notebook's folder.
    pub page: &'a str,
    /// The label in its comment.
    pub label: &'a str,
    /// Whether its comment says that it is superseded.
    pub superseded: bool,
    /// What was read there.
    pub record: &'a Record,
}

impl Placed<'_> {
    pub(super) fn finding(&self, part: Part, fault: Fault) -> Finding {
        let place = Place {
            file: self.page.to_owned(),
            label: Some(self.label.to_owned()),
            part,
        };
        Finding { place, fault }
    }

    fn stands_as_signed(&self) -> bool {
        let statement = &self.record.statement;
        statement.page.as_str() == self.page && statement.label.as_str() == self.label
    }

    /// Whether this is the result that the other says it takes the place of.
    fn is_replaced_by(&self, other: &Self) -> bool {
        self.page == other.page
            && replaced(other).is_some_and(|digest| digest == self.record.digest)
    }

    fn has(&self, meaning: Meaning) -> bool {
        let mut acts = self.record.acts.iter().map(SignedAct::act);
        acts.any(|act| act.meaning == meaning)
    }
}

fn replaced(placed: &Placed<'_>) -> Option<Digest> {
    let supersession = placed.record.statement.supersedes.as_ref()?;
    Some(supersession.replaced.digest)
}

/// Examines every result against all others.
pub(super) fn examine(results: &[Placed<'_>], findings: &mut Vec<Finding>) {
    for (at, placed) in results.iter().enumerate() {
        copies(placed, results, findings);
        let earlier = results.iter().take(at);
        let mut twins =
            earlier.filter(|other| (other.page, other.label) == (placed.page, placed.label));
        if twins.next().is_some() {
            findings.push(placed.finding(Part::Whole, Fault::DuplicateLabel));
        }
        successors(placed, results, findings);
        sources(placed, results, findings);
    }
}

fn copies(placed: &Placed<'_>, results: &[Placed<'_>], findings: &mut Vec<Finding>) {
    let original = |other: &Placed<'_>| {
        other.stands_as_signed() && other.record.digest == placed.record.digest
    };
    if !placed.stands_as_signed() && results.iter().any(original) {
        let statement = &placed.record.statement;
        let original = ResultName {
            page: statement.page.clone(),
            label: statement.label.clone(),
        };
        findings.push(placed.finding(Part::Whole, Fault::CopiedResult { original }));
    }
}

fn successors(placed: &Placed<'_>, results: &[Placed<'_>], findings: &mut Vec<Finding>) {
    let mut labels = results
        .iter()
        .filter(|other| placed.is_replaced_by(other))
        .map(|other| other.record.statement.label.clone());
    match (labels.next(), labels.next()) {
        (Some(first), Some(second)) => {
            findings.push(placed.finding(Part::Whole, Fault::TwoSuccessors { first, second }));
        }
        (Some(successor), None) if !placed.superseded => {
            findings.push(placed.finding(Part::Whole, Fault::SupersessionNotMarked { successor }));
        }
        (None, _) if placed.superseded => {
            findings.push(placed.finding(Part::Whole, Fault::SupersededWithoutSuccessor));
        }
        _ => {}
    }
    if let Some(supersession) = &placed.record.statement.supersedes
        && !results.iter().any(|other| other.is_replaced_by(placed))
    {
        let replaced = supersession.replaced.name.clone();
        findings.push(placed.finding(Part::Record, Fault::SupersededMissing { replaced }));
    }
}

fn sources(placed: &Placed<'_>, results: &[Placed<'_>], findings: &mut Vec<Finding>) {
    for used in &placed.record.statement.uses {
        let mut found = results
            .iter()
            .filter(|other| other.record.digest == used.digest);
        let fate = match found.next() {
            None => SourceFate::Missing,
            Some(source) if source.has(Meaning::Withdrawn) => SourceFate::Withdrawn,
            Some(source) if source.has(Meaning::Rejected) => SourceFate::Rejected,
            Some(source) => {
                let amended =
                    source.superseded || results.iter().any(|other| source.is_replaced_by(other));
                if !amended {
                    continue;
                }
                SourceFate::Amended
            }
        };
        let source_name = used.name.clone();
        findings.push(placed.finding(Part::Record, Fault::MadeFrom { source_name, fate }));
    }
}
