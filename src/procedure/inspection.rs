//! One result held against everything that it names: block, files, acts, roster, policy, and a second computation.

use crate::block;
use crate::notebook::attachment;
use crate::page::{Mark, Page, Region};
use crate::procedure::Desk;
use crate::procedure::claim::{joined_lines, record_digest};
use crate::procedure::recomputation::{Again, Recomputed};
use crate::procedure::records::Records;
use crate::procedure::surroundings::Surroundings;
use crate::procedure::trust::Trust;
use crate::procedure::verify::VerifiedResult;
use crate::record::{
    self, Authority, Fault, Finding, NotebookPath, Part, Parts, Place, Record, Register, SignedAct,
    Statement,
};
use chrono::{DateTime, FixedOffset};
use std::rc::Rc;

/// The content of the block of a label, as it stands in the page.
pub(super) fn question_of<'p>(page: &'p Page, label: &str) -> Option<&'p str> {
    page.blocks()
        .iter()
        .map(|block| block.content().text())
        .find(|content| block::outline(content).label.as_deref() == Some(label))
}

/// A page to inspect, and against what.
#[derive(Debug)]
pub(super) struct Inspection<'a> {
    pub(super) desk: &'a Desk,
    pub(super) records: &'a Records,
    pub(super) trust: &'a Trust,
    pub(super) name: &'a str,
    pub(super) page: &'a Rc<Page>,
    pub(super) now: DateTime<FixedOffset>,
    pub(super) surroundings: &'a Surroundings<'a>,
}

impl Inspection<'_> {
    /// What is found of one result; a draft has nothing to be found.
    pub(super) fn result(&self, region: &Region) -> VerifiedResult {
        if region.is_draft() {
            return VerifiedResult::draft(region.label());
        }
        // A marked result keeps its own question; the block belongs to the successor.
        let kept = region.question().map(|fence| fence.content.text());
        let question = kept.or_else(|| question_of(self.page, region.label()));
        let trust = self.trust_for(region);
        let verification = self.verification(region, question, &trust);
        let mut findings = verification.findings;
        let superseded = region.mark().is_some();
        if superseded {
            findings.retain(|finding| {
                !matches!(
                    finding.fault,
                    Fault::RequiredActMissing { .. } | Fault::Overdue { .. }
                )
            });
        }
        let recomputed = match (&verification.record, question) {
            (Some(record), Some(question)) if !superseded => Again {
                desk: self.desk,
                name: self.name,
                page: self.page,
                program: self.surroundings.program,
            }
            .computed(region, &record.statement, question),
            _ => Recomputed::Not,
        };
        let acts = verification.record.as_ref().map(|record| &record.acts);
        let unlisted = acts
            .into_iter()
            .flatten()
            .map(|act| &act.act().signer)
            .filter(|signer| trust.unlisted.contains(*signer))
            .map(ToString::to_string)
            .collect();
        VerifiedResult {
            label: region.label().to_owned(),
            draft: false,
            mark: region.mark().map(|mark| match mark {
                Mark::Superseded => "superseded",
                Mark::Withdrawn => "withdrawn",
            }),
            question: question.map(str::to_owned),
            answer: region.answer().text().to_owned(),
            record: verification.record,
            findings,
            recomputed,
            unlisted,
            verified: verification.verified,
        }
    }

    fn verification(
        &self,
        region: &Region,
        question: Option<&str>,
        trust: &Trust,
    ) -> record::Verification {
        let acts: Vec<&[u8]> = region
            .acts()
            .iter()
            .map(|fence| fence.content.text().as_bytes())
            .collect();
        let record = region.record().map(|fence| fence.content.text().as_bytes());
        // The record states its defaults, so that settings changed since are no finding.
        let stated = record.and_then(|bytes| Statement::parse(bytes).ok());
        let defaults = stated.map(|statement| {
            let lines: Vec<String> = statement.assumed.iter().map(ToString::to_string).collect();
            joined_lines(&lines)
        });
        let attachment =
            |path: &NotebookPath| attachment(&self.desk.root, &self.desk.root, path.as_str()).ok();
        let parts = Parts {
            notebook: &self.records.identity,
            page: self.name,
            label: region.label(),
            question: question.map(str::as_bytes),
            answer: region.answer().text().as_bytes(),
            record,
            acts: &acts,
            attachment: &attachment,
            defaults: defaults.as_deref().map(str::as_bytes),
        };
        let authority = Authority {
            roster: &trust.roster,
            policy: &self.records.policy,
            people: &self.records.people,
            now: self.now,
        };
        record::verify(&parts, &authority)
    }

    /// The trust of the registers, and of acts that are in no register.
    fn trust_for(&self, region: &Region) -> Trust {
        let mut trust = self.trust.clone();
        for fence in region.acts() {
            if let Ok(act) = SignedAct::parse(fence.content.text().as_bytes()) {
                trust.take(&act);
            }
        }
        trust
    }

    /// Acts on one result that are in only one of page and register; for a whole notebook the chain tells it.
    pub(super) fn registered(&self, region: &Region, record: Option<&Record>) -> Vec<Finding> {
        if region.is_draft() {
            return Vec::new();
        }
        let acts = record.map_or(&[][..], |record| record.acts.as_slice());
        let finding = |fault| Finding {
            place: Place {
                file: self.name.to_owned(),
                label: Some(region.label().to_owned()),
                part: Part::Whole,
            },
            fault,
        };
        let registers = &self.records.registers;
        let in_register = |signed: &SignedAct| {
            registers
                .iter()
                .any(|register| register.find(signed.digest()).is_some())
        };
        let mut findings: Vec<Finding> = acts
            .iter()
            .filter(|signed| !in_register(signed))
            .map(|signed| {
                finding(Fault::ActMissingFromRegister {
                    signer: signed.act().signer.clone(),
                    number: signed.act().number,
                })
            })
            .collect();
        let digest = record_digest(region);
        for entry in registers.iter().flat_map(Register::entries) {
            let act = entry.act.act();
            let on_page = acts.iter().any(|on| on.digest() == entry.act.digest());
            if Some(act.record) == digest && !on_page {
                findings.push(finding(Fault::ActMissingFromPage {
                    signer: act.signer.clone(),
                    number: act.number,
                    meaning: act.meaning,
                }));
            }
        }
        findings
    }
}
