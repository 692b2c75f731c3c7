//! Verification of one result: its bytes, its acts, their signatures, and what the policy asks.
//!
//! A key's dates are judged by the act's own time. That time is the signer's claim, unless a later witness bounds it.
//! Time stamps by a third party (RFC 3161) would be checked here, beside the signature of each act.

use std::fmt;

use chrono::{DateTime, FixedOffset};

use super::act::{Act, ActError, SignedAct};
use super::appearance::disguises;
use super::conformity::{order_faults, person_faults, policy_faults, signature_faults};
use super::digest::Digest;
use super::fault::Fault;
use super::finding::{Finding, Part, Place, Severity};
use super::identity::{NotebookId, NotebookPath};
use super::lines::LineError;
use super::policy::{Person, Policy};
use super::roster::Roster;
use super::statement::Statement;

/// What stands in the page and beside it, for one result.
#[derive(Clone, Copy)]
pub struct Parts<'a> {
    /// The notebook in which it stands.
    pub notebook: &'a NotebookId,
    /// The page on which it stands, from the notebook's folder.
    pub page: &'a str,
    /// The label under which it stands.
    pub label: &'a str,
    /// The block's content; none if no block has the label.
    pub question: Option<&'a [u8]>,
    /// The answer.
    pub answer: &'a [u8],
    /// The content of the `record` fence.
    pub record: Option<&'a [u8]>,
    /// The contents of the `act` fences, in their order.
    pub acts: &'a [&'a [u8]],
    /// The bytes of a file of the notebook, if it can be read.
    pub attachment: &'a dyn Fn(&NotebookPath) -> Option<Vec<u8>>,
    /// The notebook's defaults that bear on the block, as they were digested when sealing.
    pub defaults: Option<&'a [u8]>,
}

impl fmt::Debug for Parts<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "Parts({}#{})", self.page, self.label)
    }
}

/// Against what a result is judged.
#[derive(Clone, Copy, Debug)]
pub struct Authority<'a> {
    /// Who may sign.
    pub roster: &'a Roster,
    /// What is asked of a record.
    pub policy: &'a Policy,
    /// The people of the laboratory.
    pub people: &'a [Person],
    /// The verifier's time, for due dates.
    pub now: DateTime<FixedOffset>,
}

/// A sealed result, as read: what is claimed, and who did what with it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Record {
    /// What is claimed.
    pub statement: Statement,
    /// The digest of the record.
    pub digest: Digest,
    /// The acts, in their order.
    pub acts: Vec<SignedAct>,
}

/// Proof that verification found no failure. It is made by [`verify`] alone.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Verified<T>(T);

impl<T> Verified<T> {
    /// What was verified.
    pub const fn get(&self) -> &T {
        &self.0
    }
}

/// What verification of one result gave.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Verification {
    /// The result as read, whether it holds or not.
    pub record: Option<Record>,
    /// The result, if no finding is a failure.
    pub verified: Option<Verified<Record>>,
    /// Everything found, in the order of the page.
    pub findings: Vec<Finding>,
}

/// Verifies one result. Everything is checked that can be, whatever is found before.
#[must_use]
pub fn verify(parts: &Parts<'_>, authority: &Authority<'_>) -> Verification {
    let mut check = Check {
        parts,
        authority,
        findings: Vec::new(),
    };
    let statement = check.statement();
    let acts = check.acts(statement.as_ref());
    let record = statement.map(|statement| Record {
        digest: Digest::of_lines(parts.record.unwrap_or_default()),
        statement,
        acts,
    });
    if let Some(record) = &record {
        let acts: Vec<&Act> = record.acts.iter().map(SignedAct::act).collect();
        for (part, fault) in order_faults(&acts)
            .into_iter()
            .chain(policy_faults(&acts, authority))
        {
            check.find(part, fault);
        }
    }
    let failed = |finding: &Finding| finding.severity() == Severity::Failure;
    let sound = !check.findings.iter().any(failed);
    Verification {
        verified: record.clone().filter(|_| sound).map(Verified),
        record,
        findings: check.findings,
    }
}

struct Check<'a> {
    parts: &'a Parts<'a>,
    authority: &'a Authority<'a>,
    findings: Vec<Finding>,
}

impl Check<'_> {
    fn find(&mut self, part: Part, fault: Fault) {
        let place = Place {
            file: self.parts.page.to_owned(),
            label: Some(self.parts.label.to_owned()),
            part,
        };
        self.findings.push(Finding { place, fault });
    }

    fn statement(&mut self) -> Option<Statement> {
        let Some(bytes) = self.parts.record else {
            if !self.parts.acts.is_empty() {
                self.find(Part::Act(1), Fault::ActWithoutRecord);
            }
            return None;
        };
        match Statement::parse(bytes) {
            Ok(statement) => {
                self.place(&statement);
                self.texts(&statement);
                self.attachments(&statement);
                Some(statement)
            }
            Err(error) => {
                self.find(Part::Record, unreadable(error, Fault::RecordUnreadable));
                None
            }
        }
    }

    fn place(&mut self, statement: &Statement) {
        if statement.notebook != *self.parts.notebook {
            let signed = statement.notebook.clone();
            self.find(Part::Record, Fault::WrongNotebook { signed });
        }
        if statement.label.as_str() != self.parts.label {
            let signed = statement.label.clone();
            self.find(Part::Record, Fault::WrongLabel { signed });
        }
        if statement.page.as_str() != self.parts.page {
            let from = statement.page.clone();
            self.find(Part::Record, Fault::MovedPage { from });
        }
    }

    fn texts(&mut self, statement: &Statement) {
        let question = self.parts.question.unwrap_or_default();
        let texts = [
            (
                Part::Question,
                question,
                statement.question,
                Fault::QuestionChanged,
            ),
            (
                Part::Answer,
                self.parts.answer,
                statement.answer,
                Fault::AnswerChanged,
            ),
        ];
        for (part, bytes, digest, changed) in texts {
            if Digest::of_lines(bytes) != digest {
                self.find(part.clone(), changed);
            }
            for disguise in disguises(bytes) {
                self.find(part.clone(), Fault::LooksDifferent(disguise));
            }
        }
        if statement.defaults_digest() != self.parts.defaults.map(Digest::of_lines) {
            self.find(Part::Question, Fault::DefaultsChanged);
        }
    }

    fn attachments(&mut self, statement: &Statement) {
        for attachment in &statement.attachments {
            let part = Part::Attachment(attachment.name.clone());
            match (self.parts.attachment)(&attachment.name) {
                None => self.find(part, Fault::AttachmentMissing),
                Some(bytes) if !attachment.digest.agrees_with_file(&bytes) => {
                    self.find(part, Fault::AttachmentChanged);
                }
                Some(_) => {}
            }
        }
    }

    fn acts(&mut self, statement: Option<&Statement>) -> Vec<SignedAct> {
        let mut acts = Vec::new();
        for (bytes, place) in self.parts.acts.iter().zip(1..) {
            match SignedAct::parse(bytes) {
                Ok(signed) => {
                    self.act(&Part::Act(place), &signed, statement.is_some());
                    acts.push(signed);
                }
                Err(ActError::Lines(error)) => {
                    let fault = unreadable(error, |error| Fault::ActUnreadable(error.into()));
                    self.find(Part::Act(place), fault);
                }
                Err(error) => self.find(Part::Act(place), Fault::ActUnreadable(error)),
            }
        }
        if self.parts.record.is_some() && self.parts.acts.is_empty() {
            self.find(Part::Record, Fault::RecordWithoutAct);
        }
        acts
    }

    fn act(&mut self, part: &Part, signed: &SignedAct, readable: bool) {
        let act = signed.act();
        if let Some(record) = self.parts.record
            && readable
            && act.record != Digest::of_lines(record)
        {
            let signer = act.signer.clone();
            self.find(Part::Record, Fault::RecordChanged { signer });
        }
        for fault in signature_faults(signed, self.authority.roster) {
            self.find(part.clone(), fault);
        }
        for fault in person_faults(act, self.authority) {
            self.find(part.clone(), fault);
        }
    }
}

fn unreadable(error: LineError, otherwise: impl Fn(LineError) -> Fault) -> Fault {
    match error {
        LineError::Newer { version, .. } => Fault::NewerVersion { version },
        error => otherwise(error),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::specimen::{ANSWER, Laboratory, Page, names, page, statement};

    const AT: &str = "2026-11-03T10:12:45+01:00";

    fn found(change: impl FnOnce(&mut Laboratory, &mut Page)) -> Vec<&'static str> {
        let mut laboratory = Laboratory::new();
        let sealed = laboratory.seal(&statement(), "analyst", AT);
        let mut page = page(&[&sealed]);
        change(&mut laboratory, &mut page);
        let verification = laboratory.verify(&page);
        let failed = verification
            .findings
            .iter()
            .any(|f| f.severity() == Severity::Failure);
        assert_eq!(
            verification.verified.is_none(),
            failed || page.record.is_none()
        );
        names(&verification.findings)
    }

    #[test]
    fn a_sealed_result_verifies_with_either_line_ending() {
        assert_eq!(found(|_, _| ()), [""; 0]);
        let crlf = |text: &[u8]| String::from_utf8_lossy(text).replace('\n', "\r\n");
        let found = found(|_, page| {
            page.question = crlf(&page.question).into_bytes();
            page.answer = crlf(&page.answer).into_bytes();
            page.record = page.record.as_ref().map(|text| crlf(text.as_bytes()));
            page.acts = page.acts.iter().map(|text| crlf(text.as_bytes())).collect();
            page.readings = Some(b"volume,pH\n1.00,7.20\n".to_vec());
        });
        assert_eq!(found, [""; 0]);
    }

    #[test]
    fn changed_texts_and_files_are_named() {
        assert_eq!(found(|_, p| p.question.push(b' ')), ["question-changed"]);
        assert_eq!(found(|_, p| p.answer[4] = b'8'), ["answer-changed"]);
        assert_eq!(found(|_, p| p.readings = None), ["attachment-missing"]);
        assert_eq!(
            found(|_, p| p.readings = Some(vec![1])),
            ["attachment-changed"]
        );
        let hidden = |p: &mut Page| p.answer = [ANSWER, "\u{202e}".as_bytes()].concat();
        assert_eq!(
            found(|_, p| hidden(p)),
            ["answer-changed", "looks-different"]
        );
    }

    #[test]
    fn every_bit_of_record_and_act_counts() {
        let mut laboratory = Laboratory::new();
        let sealed = laboratory.seal(&statement(), "analyst", AT);
        let of_record = ["record-unreadable", "record-changed", "newer-version"];
        let of_act = [
            "act-unreadable",
            "signature-wrong",
            "newer-version",
            "record-changed",
        ];
        for bit in [0x01_u8, 0x02, 0x20] {
            for at in 0..sealed.record.len() {
                let mut page = page(&[&sealed]);
                let changed = flipped(&sealed.record, at, bit);
                let Ok(changed) = String::from_utf8(changed.clone()) else {
                    assert_eq!(Statement::parse(&changed), Err(LineError::NotText), "{at}");
                    continue;
                };
                page.record = Some(changed);
                let found = names(&laboratory.verify(&page).findings);
                assert!(
                    of_record.iter().any(|name| found.contains(name)),
                    "{at}: {found:?}"
                );
            }
            let act = sealed.act.print();
            for at in 0..act.len() {
                let mut page = page(&[&sealed]);
                page.acts = vec![String::from_utf8(flipped(&act, at, bit)).unwrap()];
                let found = names(&laboratory.verify(&page).findings);
                let other = found == ["record-without-act"];
                assert!(
                    other || of_act.iter().any(|name| found.contains(name)),
                    "{at} {bit}: {found:?}"
                );
            }
        }
    }

    fn flipped(text: &str, at: usize, bit: u8) -> Vec<u8> {
        let mut bytes = text.as_bytes().to_vec();
        bytes[at] ^= bit;
        bytes
    }

    #[test]
    fn a_result_belongs_to_its_place() {
        assert_eq!(found(|_, p| p.path = "rinse/copy.md"), ["moved-page"]);
        assert_eq!(found(|_, p| p.label = "rb-119"), ["wrong-label"]);
        let other = NotebookId::new("0000000000000000").unwrap();
        assert_eq!(found(|_, p| p.notebook = other), ["wrong-notebook"]);
        assert_eq!(found(|_, p| p.acts.clear()), ["record-without-act"]);
        assert_eq!(found(|_, p| p.record = None), ["act-without-record"]);
    }
}
