//! The chain: each signer's acts in order, what one person's acts witness of another's, and pages against registers.

use std::collections::{BTreeMap, BTreeSet};

use super::act::SignedAct;
use super::conformity::signature_faults;
use super::digest::Digest;
use super::fault::Fault;
use super::finding::{Finding, Part, Place};
use super::identity::SignerName;
use super::register::{Entry, Register};
use super::roster::Roster;
use super::succession::{self, Placed};

/// A whole notebook's sealed results and registers.
#[derive(Clone, Copy, Debug)]
pub struct Notebook<'a> {
    /// Every sealed result that could be read, in the order of the pages.
    pub results: &'a [Placed<'a>],
    /// Every register.
    pub registers: &'a [Register],
    /// Who may sign.
    pub roster: &'a Roster,
}

/// Examines what no single result shows: gaps, forks, acts that are gone, copies, supersession, sources that changed.
#[must_use]
pub fn examine(notebook: &Notebook<'_>) -> Vec<Finding> {
    let mut findings = Vec::new();
    let on_pages = acts_on_pages(notebook.results);
    for register in notebook.registers {
        let mut check = RegisterCheck {
            register,
            notebook,
            on_pages: &on_pages,
            positions: positions(register),
            findings: &mut findings,
        };
        check.text();
        check.forks();
        for (at, entry) in register.entries().iter().enumerate() {
            check.entry(entry);
            check.chain(at, entry);
            check.witness(entry);
        }
    }
    missing_from_registers(notebook, &mut findings);
    succession::examine(notebook.results, &mut findings);
    findings
}

/// The file of a signer's register, from the notebook's folder.
#[must_use]
pub fn register_file(signer: &SignerName) -> String {
    format!("registers/{signer}.md")
}

struct RegisterCheck<'a> {
    register: &'a Register,
    notebook: &'a Notebook<'a>,
    on_pages: &'a BTreeSet<Digest>,
    positions: BTreeMap<Digest, usize>,
    findings: &'a mut Vec<Finding>,
}

impl RegisterCheck<'_> {
    fn find(&mut self, part: Part, fault: Fault) {
        let place = Place {
            file: register_file(self.register.signer()),
            label: None,
            part,
        };
        self.findings.push(Finding { place, fault });
    }

    fn text(&mut self) {
        for fault in self.register.faults() {
            let part = Part::Line(fault.line());
            self.find(part, Fault::RegisterChanged(fault.clone()));
        }
    }

    /// Forks, and numbers that stand twice, unless a later act joined all branches.
    fn forks(&mut self) {
        let signer = self.register.signer().clone();
        let joined = self.register.next().previous.len() <= 1;
        let mut numbers = BTreeSet::new();
        let mut followers: BTreeMap<Option<Digest>, usize> = BTreeMap::new();
        for act in self.register.entries().iter().map(|entry| entry.act.act()) {
            if act.previous.is_empty() {
                *followers.entry(None).or_default() += 1;
            }
            for previous in &act.previous {
                *followers.entry(Some(*previous)).or_default() += 1;
            }
            if !numbers.insert(act.number) && !joined {
                let signer = signer.clone();
                self.find(
                    Part::RegisterAct(act.number),
                    Fault::DuplicateNumber { signer },
                );
            }
        }
        for (digest, _) in followers.into_iter().filter(|(_, count)| *count > 1) {
            let before = digest.and_then(|digest| self.register.find(digest));
            let part = before.map_or(Part::Whole, |entry| {
                Part::RegisterAct(entry.act.act().number)
            });
            let signer = signer.clone();
            let fault = if joined {
                Fault::JoinedFork { signer }
            } else {
                Fault::ChainFork { signer }
            };
            self.find(part, fault);
        }
    }

    /// The entry by itself: whose act, which record, which list, which signature; and its page.
    fn entry(&mut self, entry: &Entry) {
        let act = entry.act.act();
        let part = Part::RegisterAct(act.number);
        if act.signer != *self.register.signer() {
            let signer = act.signer.clone();
            self.find(part.clone(), Fault::ForeignAct { signer });
        }
        if Digest::of_lines(entry.record.as_bytes()) != act.record {
            self.find(part.clone(), Fault::RegisterRecordChanged);
        }
        if entry.seen.digest() != act.seen {
            self.find(part.clone(), Fault::SeenListChanged);
        }
        if self.on_pages.contains(&entry.act.digest()) {
            return;
        }
        for fault in signature_faults(&entry.act, self.notebook.roster) {
            self.find(part.clone(), fault);
        }
        if act.meaning.is_of_a_page() {
            self.missing_from_page(entry);
        }
    }

    fn missing_from_page(&mut self, entry: &Entry) {
        let act = entry.act.act();
        let fault = Fault::ActMissingFromPage {
            signer: act.signer.clone(),
            number: act.number,
            meaning: act.meaning,
        };
        match entry.statement() {
            Some(statement) => self.findings.push(Finding {
                place: Place {
                    file: statement.page.to_string(),
                    label: Some(statement.label.to_string()),
                    part: Part::Whole,
                },
                fault,
            }),
            None => self.find(Part::RegisterAct(act.number), fault),
        }
    }

    /// The entry against those before it.
    fn chain(&mut self, at: usize, entry: &Entry) {
        let act = entry.act.act();
        let part = Part::RegisterAct(act.number);
        let earlier = |digest: &Digest| {
            let position = self
                .positions
                .get(digest)
                .filter(|position| **position < at)?;
            self.register.entries().get(*position)
        };
        let previous: Vec<Option<&Entry>> = act.previous.iter().map(earlier).collect();
        let known = previous.iter().flatten().map(|entry| entry.act.act());
        let due = known.clone().map(|act| act.number).max().unwrap_or(0) + 1;
        if previous.iter().any(Option::is_none) || act.number != due {
            self.find(part.clone(), Fault::ChainGap);
        }
        let before = known.map(|act| act.time).max();
        if let Some(before) = before.filter(|before| act.time < *before) {
            let time = act.time;
            self.find(part, Fault::ClockRanBack { time, before });
        }
    }

    /// Said once, however many acts of the witness saw what is gone.
    fn rolled_back(&mut self, signer: &SignerName, witness: &SignerName) {
        let finding = Finding {
            place: Place {
                file: register_file(signer),
                label: None,
                part: Part::Whole,
            },
            fault: Fault::RolledBack {
                signer: signer.clone(),
                witness: witness.clone(),
            },
        };
        if !self.findings.contains(&finding) {
            self.findings.push(finding);
        }
    }

    /// The acts of others that it saw: each must be there still, and none be of a later time.
    fn witness(&mut self, entry: &Entry) {
        let act = entry.act.act();
        if entry.seen.digest() != act.seen {
            return;
        }
        for seen in entry.seen.acts() {
            let mut registers = self.notebook.registers.iter();
            let theirs = registers.find(|register| *register.signer() == seen.name);
            let Some(found) = theirs.and_then(|register| register.find(seen.digest)) else {
                self.rolled_back(&seen.name, &act.signer);
                continue;
            };
            let (time, before) = (act.time, found.act.act().time);
            if time < before {
                self.find(
                    Part::RegisterAct(act.number),
                    Fault::ClockRanBack { time, before },
                );
            }
        }
    }
}

fn positions(register: &Register) -> BTreeMap<Digest, usize> {
    let digests = register.entries().iter().map(|entry| entry.act.digest());
    digests.zip(0..).collect()
}

fn acts_on_pages(results: &[Placed<'_>]) -> BTreeSet<Digest> {
    results
        .iter()
        .flat_map(|placed| &placed.record.acts)
        .map(SignedAct::digest)
        .collect()
}

fn missing_from_registers(notebook: &Notebook<'_>, findings: &mut Vec<Finding>) {
    let in_registers: BTreeSet<Digest> = notebook
        .registers
        .iter()
        .flat_map(Register::entries)
        .map(|entry| entry.act.digest())
        .collect();
    for placed in notebook.results {
        for (signed, at) in placed.record.acts.iter().zip(1..) {
            if !in_registers.contains(&signed.digest()) {
                let act = signed.act();
                findings.push(placed.finding(
                    Part::Act(at),
                    Fault::ActMissingFromRegister {
                        signer: act.signer.clone(),
                        number: act.number,
                    },
                ));
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::sealing::Sealed;
    use crate::record::specimen::{Laboratory, labelled, name, names, record};

    /// The analyst signs on Monday, Wednesday and Friday; the reviewer on Thursday.
    struct Week {
        laboratory: Laboratory,
        analysts: Vec<Sealed>,
        reviewers: Sealed,
    }

    fn week() -> Week {
        let mut laboratory = Laboratory::new();
        let mut seal = |signer, label: &str, at| laboratory.seal(&labelled(label), signer, at);
        let monday = seal("analyst", "a", "2026-11-02T09:00:00+01:00");
        let wednesday = seal("analyst", "b", "2026-11-04T09:00:00+01:00");
        let reviewers = seal("reviewer", "c", "2026-11-05T09:00:00+01:00");
        let friday = seal("analyst", "d", "2026-11-06T09:00:00+01:00");
        let analysts = vec![monday, wednesday, friday];
        Week {
            laboratory,
            analysts,
            reviewers,
        }
    }

    impl Week {
        fn found(&self, pages: &[&Sealed]) -> Vec<&'static str> {
            let records: Vec<_> = pages.iter().map(|sealed| record(&[*sealed])).collect();
            let placed = records.iter().map(|record| Placed {
                page: record.statement.page.as_str(),
                label: record.statement.label.as_str(),
                superseded: false,
                record,
            });
            names(&examine(&Notebook {
                results: &placed.collect::<Vec<_>>(),
                registers: &self.laboratory.registers,
                roster: &self.laboratory.roster,
            }))
        }

        fn all(&self) -> Vec<&Sealed> {
            self.analysts.iter().chain([&self.reviewers]).collect()
        }

        /// Leaves only these acts in the analyst's register.
        fn keep_of_analyst(&mut self, kept: &[usize]) {
            let mut register = Register::empty(name("analyst"));
            for at in kept {
                register = register.with(self.analysts[*at].entry.clone());
            }
            self.laboratory
                .registers
                .retain(|other| *other.signer() != name("analyst"));
            self.laboratory.registers.push(register);
        }
    }

    #[test]
    fn a_whole_week_is_in_order() {
        let week = week();
        assert_eq!(week.found(&week.all()), [""; 0]);
    }

    #[test]
    fn an_act_that_is_gone_from_the_middle_leaves_a_gap() {
        let mut week = week();
        week.keep_of_analyst(&[0, 2]);
        let found = week.found(&[&week.analysts[0], &week.reviewers, &week.analysts[2]]);
        assert_eq!(found, ["rolled-back", "chain-gap"]);
    }

    #[test]
    fn acts_that_are_gone_from_the_end_are_found_if_somebody_saw_them() {
        let mut week = week();
        week.keep_of_analyst(&[0]);
        assert_eq!(
            week.found(&[&week.analysts[0], &week.reviewers]),
            ["rolled-back"]
        );
        week.keep_of_analyst(&[0, 1]);
        let unseen = week.found(&[&week.analysts[0], &week.analysts[1], &week.reviewers]);
        assert_eq!(
            unseen, [""; 0],
            "nobody saw the last act: an outside copy is needed"
        );
    }

    #[test]
    fn pages_and_registers_are_held_against_each_other() {
        let mut week = week();
        let without = week.found(&week.all()[1..]);
        assert_eq!(without, ["act-missing-from-page"]);
        week.keep_of_analyst(&[0, 1]);
        assert_eq!(week.found(&week.all()), ["act-missing-from-register"]);
    }

    #[test]
    fn branches_fork_the_chain_and_the_next_act_joins_them() {
        let mut laboratory = Laboratory::new();
        let first = laboratory.seal(&labelled("a"), "analyst", "2026-11-02T09:00:00+01:00");
        let at = "2026-11-03T09:00:00+01:00";
        let left = laboratory.try_seal(&labelled("b"), "analyst", at).unwrap();
        let right = laboratory.try_seal(&labelled("c"), "analyst", at).unwrap();
        laboratory.keep(&left);
        laboratory.keep(&right);
        let reviewers = laboratory.seal(&labelled("e"), "reviewer", at);
        let mut week = Week {
            laboratory,
            analysts: vec![first, left, right],
            reviewers,
        };
        assert_eq!(week.found(&week.all()), ["duplicate-number", "chain-fork"]);
        let next = week.laboratory.seal(&labelled("d"), "analyst", at);
        assert_eq!(next.act.act().previous.len(), 2);
        week.analysts.push(next);
        assert_eq!(week.found(&week.all()), ["joined-fork"]);
    }
}
