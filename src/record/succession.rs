//! Results among each other: copies, labels that stand twice, what takes the place of what, what is made from what.

use std::collections::{BTreeMap, BTreeSet};

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

    /// Whether nothing has taken its place; a label may stand again on what does.
    fn is_in_force(&self) -> bool {
        !self.superseded && !self.has(Meaning::Withdrawn)
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

/// The results by what they are found by.
struct Index<'a> {
    by_digest: BTreeMap<Digest, Vec<Placed<'a>>>,
    /// By page and by the digest that they take the place of.
    successors: BTreeMap<(&'a str, Digest), Vec<Placed<'a>>>,
}

impl<'a> Index<'a> {
    fn of(results: &[Placed<'a>]) -> Self {
        let mut index = Self {
            by_digest: BTreeMap::new(),
            successors: BTreeMap::new(),
        };
        for placed in results {
            let same = index.by_digest.entry(placed.record.digest).or_default();
            same.push(*placed);
            if let Some(digest) = replaced(placed) {
                let others = index.successors.entry((placed.page, digest)).or_default();
                others.push(*placed);
            }
        }
        index
    }

    fn with_digest(&self, digest: Digest) -> &[Placed<'a>] {
        self.by_digest.get(&digest).map_or(&[], Vec::as_slice)
    }

    fn successors_of(&self, placed: &Placed<'a>) -> &[Placed<'a>] {
        let key = (placed.page, placed.record.digest);
        self.successors.get(&key).map_or(&[], Vec::as_slice)
    }
}

/// Examines every result against all others.
pub(super) fn examine(results: &[Placed<'_>], findings: &mut Vec<Finding>) {
    let index = Index::of(results);
    let mut places = BTreeSet::new();
    for placed in results {
        if let Some(original) = original(placed, &index) {
            findings.push(placed.finding(Part::Whole, Fault::CopiedResult { original }));
        }
        if placed.is_in_force() && !places.insert((placed.page, placed.label)) {
            findings.push(placed.finding(Part::Whole, Fault::DuplicateLabel));
        }
        successors(placed, &index, findings);
        sources(placed, &index, findings);
    }
}

/// Where the result was signed, if it stands there still and this is another place.
fn original(placed: &Placed<'_>, index: &Index<'_>) -> Option<ResultName> {
    let mut same = index.with_digest(placed.record.digest).iter();
    let copied = !placed.stands_as_signed() && same.any(Placed::stands_as_signed);
    let statement = &placed.record.statement;
    copied.then(|| ResultName {
        page: statement.page.clone(),
        label: statement.label.clone(),
    })
}

fn successors<'a>(placed: &Placed<'a>, index: &Index<'a>, findings: &mut Vec<Finding>) {
    let label = |placed: &Placed<'_>| placed.record.statement.label.clone();
    match index.successors_of(placed) {
        [first, second, ..] => {
            let (first, second) = (label(first), label(second));
            findings.push(placed.finding(Part::Whole, Fault::TwoSuccessors { first, second }));
        }
        [one] if !placed.superseded => {
            let successor = label(one);
            findings.push(placed.finding(Part::Whole, Fault::SupersessionNotMarked { successor }));
        }
        [] if placed.superseded => {
            findings.push(placed.finding(Part::Whole, Fault::SupersededWithoutSuccessor));
        }
        _ => {}
    }
    if let Some(supersession) = &placed.record.statement.supersedes {
        let mut old = index.with_digest(supersession.replaced.digest).iter();
        if !old.any(|old| old.page == placed.page) {
            let replaced = supersession.replaced.name.clone();
            findings.push(placed.finding(Part::Record, Fault::SupersededMissing { replaced }));
        }
    }
}

fn sources<'a>(placed: &Placed<'a>, index: &Index<'a>, findings: &mut Vec<Finding>) {
    for used in &placed.record.statement.uses {
        let fate = match index.with_digest(used.digest).first() {
            None => SourceFate::Missing,
            Some(source) if source.has(Meaning::Withdrawn) => SourceFate::Withdrawn,
            Some(source) if source.has(Meaning::Rejected) => SourceFate::Rejected,
            Some(source) if source.superseded || !index.successors_of(source).is_empty() => {
                SourceFate::Amended
            }
            Some(_) => continue,
        };
        let source_name = used.name.clone();
        findings.push(placed.finding(Part::Record, Fault::MadeFrom { source_name, fate }));
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::act::Meaning;
    use crate::record::identity::TextLine;
    use crate::record::specimen::{Laboratory, labelled, names, page, record, statement};
    use crate::record::statement::{Named, Supersession};

    const PAGE: &str = "rinse/2026-11-03.md";
    const AT: &str = "2026-11-03T10:12:45+01:00";

    fn found(results: &[Placed<'_>]) -> Vec<&'static str> {
        let mut findings = Vec::new();
        examine(results, &mut findings);
        names(&findings)
    }

    fn placed<'a>(label: &'a str, superseded: bool, record: &'a Record) -> Placed<'a> {
        Placed {
            page: PAGE,
            label,
            superseded,
            record,
        }
    }

    /// An old result, and one that takes its place.
    fn amended() -> (Record, Record) {
        let mut laboratory = Laboratory::new();
        let old = laboratory.seal(&labelled("old"), "analyst", AT);
        let mut statement = labelled("new");
        statement.supersedes = Some(Supersession {
            replaced: Named::new(labelled("old").label, old.digest),
            reason: TextLine::new("wrong lot").unwrap(),
        });
        let new = laboratory.seal(&statement, "analyst", AT);
        (record(&[&old]), record(&[&new]))
    }

    #[test]
    fn an_amendment_needs_both_results_and_the_mark() {
        let (old, new) = amended();
        let both = |mark| found(&[placed("old", mark, &old), placed("new", false, &new)]);
        assert_eq!(both(true), [""; 0]);
        assert_eq!(both(false), ["supersession-not-marked"]);
        let alone = found(&[placed("old", true, &old)]);
        assert_eq!(alone, ["superseded-without-successor"]);
        assert_eq!(found(&[placed("new", false, &new)]), ["superseded-missing"]);
    }

    #[test]
    fn copies_and_labels_that_stand_twice_are_found() {
        let (old, _) = amended();
        let other = Placed {
            page: "copy.md",
            ..placed("old", false, &old)
        };
        assert_eq!(
            found(&[placed("old", false, &old), other]),
            ["copied-result"]
        );
        let twice = [placed("old", false, &old), placed("old", false, &old)];
        assert_eq!(found(&twice), ["duplicate-label"]);
    }

    #[test]
    fn an_amendment_may_keep_the_label() {
        let mut laboratory = Laboratory::new();
        let old = laboratory.seal(&labelled("same"), "analyst", AT);
        let mut statement = labelled("same");
        statement.supersedes = Some(Supersession {
            replaced: Named::new(labelled("same").label, old.digest),
            reason: TextLine::new("wrong lot").unwrap(),
        });
        let new = record(&[&laboratory.seal(&statement, "analyst", AT)]);
        let old = record(&[&old]);
        let both = |mark| found(&[placed("same", mark, &old), placed("same", false, &new)]);
        assert_eq!(both(true), [""; 0]);
        assert_eq!(both(false), ["supersession-not-marked", "duplicate-label"]);
    }

    #[test]
    fn what_is_made_from_a_result_learns_its_fate() {
        let mut laboratory = Laboratory::new();
        let stock = laboratory.seal(&statement(), "analyst", AT);
        let mut made = labelled("made");
        let name = ResultName {
            page: statement().page,
            label: statement().label,
        };
        made.uses = vec![Named::new(name, stock.digest)];
        let made = record(&[&laboratory.seal(&made, "analyst", AT)]);
        let verified = laboratory.verify(&page(&[&stock])).verified.unwrap();
        let by = ("analyst", "2026-11-04T10:00:00+01:00");
        let withdrawn = laboratory
            .try_countersign(&verified, Meaning::Withdrawn, by)
            .unwrap();
        let (sound, gone) = (record(&[&stock]), record(&[&stock, &withdrawn]));
        let with = |stock| found(&[placed("rb-118", false, stock), placed("made", false, &made)]);
        assert_eq!(with(&sound), [""; 0]);
        assert_eq!(with(&gone), ["made-from-changed"]);
        assert_eq!(
            found(&[placed("made", false, &made)]),
            ["made-from-changed"]
        );
    }
}
