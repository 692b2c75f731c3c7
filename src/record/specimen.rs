//! A small notebook for the tests of this module: two people, a roster, sealed results. All of it is invented.

use std::collections::BTreeSet;

use chrono::{DateTime, FixedOffset};

use super::act::{Meaning, SignedAct};
use super::digest::Digest;
use super::finding::Finding;
use super::identity::{Label, NotebookPath, SignerName, TextLine};
use super::key::KeyFile;
use super::policy::{Person, Policy};
use super::register::Register;
use super::roster::Roster;
use super::sealing::{Draft, SealError, Sealed, Signing, countersign, seal};
use super::signature::Signer as _;
use super::statement::{Statement, tests::full};
use super::verification::{Authority, Parts, Record, Verification, Verified, verify};

pub(super) const QUESTION: &[u8] = b"label: rb-118\ntemperature: 25 \xc2\xb0C\n";
pub(super) const ANSWER: &[u8] = b"**pH 7.20**\n\n```constants\n- none\n```\n";
pub(super) const READINGS: &[u8] = b"volume,pH\r\n1.00,7.20\r\n";

pub(super) fn name(text: &str) -> SignerName {
    SignerName::new(text).unwrap()
}

pub(super) fn time(text: &str) -> DateTime<FixedOffset> {
    DateTime::parse_from_rfc3339(text).unwrap()
}

/// The key of a person; each has one, made from their name.
pub(super) fn key(signer: &str) -> KeyFile {
    let mut entropy = [0; 32];
    entropy
        .iter_mut()
        .zip(signer.bytes())
        .for_each(|(to, from)| *to = from);
    KeyFile::generate(&entropy, signer).unwrap()
}

/// Analyst and reviewer, their keys, and whatever has been signed so far.
pub(super) struct Laboratory {
    pub(super) roster: Roster,
    pub(super) policy: Policy,
    pub(super) people: Vec<Person>,
    pub(super) registers: Vec<Register>,
    pub(super) now: DateTime<FixedOffset>,
}

impl Laboratory {
    pub(super) fn new() -> Self {
        let mut roster = Roster::default();
        let from = time("2026-01-01T00:00:00+00:00");
        let mut people = Vec::new();
        for signer in ["analyst", "reviewer"] {
            let public = key(signer).public_key().clone();
            roster.enrol(name(signer), public, from).unwrap();
            people.push(Person {
                signer: name(signer),
                name: TextLine::new(&format!("Bench {signer}")).unwrap(),
                roles: BTreeSet::from([TextLine::new(signer).unwrap()]),
            });
        }
        Self {
            roster,
            policy: Policy::default(),
            people,
            registers: Vec::new(),
            now: time("2026-11-10T08:00:00+01:00"),
        }
    }

    pub(super) fn signing<R>(
        &self,
        signer: &str,
        at: &str,
        then: impl FnOnce(&Signing<'_>) -> R,
    ) -> R {
        then(&Signing {
            signer: &name(signer),
            name: &TextLine::new(&format!("Bench {signer}")).unwrap(),
            time: time(at),
            note: None,
            registers: &self.registers,
            roster: &self.roster,
            policy: &self.policy,
            people: &self.people,
            key: &key(signer),
        })
    }

    pub(super) fn keep(&mut self, sealed: &Sealed) {
        let signer = &sealed.act.act().signer;
        let at = self
            .registers
            .iter()
            .position(|register| register.signer() == signer);
        let register = match at {
            Some(at) => self.registers.remove(at),
            None => Register::empty(signer.clone()),
        };
        self.registers.push(register.with(sealed.entry.clone()));
    }

    pub(super) fn try_seal(
        &self,
        statement: &Statement,
        signer: &str,
        at: &str,
    ) -> Result<Sealed, SealError> {
        let draft = Draft {
            statement,
            question: QUESTION,
            answer: ANSWER,
        };
        self.signing(signer, at, |signing| seal(&draft, signing))
    }

    pub(super) fn seal(&mut self, statement: &Statement, signer: &str, at: &str) -> Sealed {
        let sealed = self.try_seal(statement, signer, at).unwrap();
        self.keep(&sealed);
        sealed
    }

    pub(super) fn try_countersign(
        &self,
        record: &Verified<Record>,
        meaning: Meaning,
        (signer, at): (&str, &str),
    ) -> Result<Sealed, SealError> {
        self.signing(signer, at, |signing| countersign(record, meaning, signing))
    }

    pub(super) fn declare(
        &mut self,
        declaration: &super::declaration::Declaration,
        (signer, at): (&str, &str),
    ) -> Sealed {
        let declared = |signing: &Signing<'_>| {
            super::sealing::declare(declaration, Meaning::Roster, signing).unwrap()
        };
        let sealed = self.signing(signer, at, declared);
        self.keep(&sealed);
        sealed
    }

    pub(super) fn verify(&self, page: &Page) -> Verification {
        let acts: Vec<&[u8]> = page.acts.iter().map(String::as_bytes).collect();
        let parts = Parts {
            notebook: &page.notebook,
            page: page.path,
            label: page.label,
            question: Some(&page.question),
            answer: &page.answer,
            record: page.record.as_deref().map(str::as_bytes),
            acts: &acts,
            attachment: &|_: &NotebookPath| page.readings.clone(),
            defaults: Some("temperature: 25 °C\nair: closed\n".as_bytes()),
        };
        let authority = Authority {
            roster: &self.roster,
            policy: &self.policy,
            people: &self.people,
            now: self.now,
        };
        verify(&parts, &authority)
    }
}

/// What stands in a page for one result.
pub(super) struct Page {
    pub(super) notebook: super::identity::NotebookId,
    pub(super) path: &'static str,
    pub(super) label: &'static str,
    pub(super) question: Vec<u8>,
    pub(super) answer: Vec<u8>,
    pub(super) record: Option<String>,
    pub(super) acts: Vec<String>,
    pub(super) readings: Option<Vec<u8>>,
}

/// The page on which sealed acts on one record stand.
pub(super) fn page(acts: &[&Sealed]) -> Page {
    Page {
        notebook: full().notebook,
        path: "rinse/2026-11-03.md",
        label: "rb-118",
        question: QUESTION.to_vec(),
        answer: ANSWER.to_vec(),
        record: acts.first().map(|sealed| sealed.record.clone()),
        acts: acts.iter().map(|sealed| sealed.act.print()).collect(),
        readings: Some(READINGS.to_vec()),
    }
}

/// A statement about the question and answer above.
pub(super) fn statement() -> Statement {
    let mut statement = full();
    statement.supersedes = None;
    statement.uses.clear();
    statement.question = Digest::of_lines(QUESTION);
    statement.answer = Digest::of_lines(ANSWER);
    for attachment in &mut statement.attachments {
        attachment.digest = Digest::of_file(READINGS);
    }
    statement
}

/// The same under another label.
pub(super) fn labelled(label: &str) -> Statement {
    let mut statement = statement();
    statement.label = Label::new(label).unwrap();
    statement
}

pub(super) fn record(sealed: &[&Sealed]) -> Record {
    let first = sealed.first().unwrap();
    Record {
        statement: Statement::parse(first.record.as_bytes()).unwrap(),
        digest: first.digest,
        acts: sealed
            .iter()
            .map(|sealed| sealed.act.clone())
            .collect::<Vec<SignedAct>>(),
    }
}

pub(super) fn names(findings: &[Finding]) -> Vec<&'static str> {
    findings.iter().map(Finding::name).collect()
}
