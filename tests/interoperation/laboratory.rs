//! A sealed result and its page, written by hand as the program writes them. Invented data.

use chrono::{DateTime, FixedOffset};
use ionfolio::record::{
    Authority, Digest, Draft, KeyFile, Label, Meaning, Named, NotebookId, NotebookPath, Policy,
    Roster, Sealed, Signer, SignerName, Signing, Statement, TextLine, Verification, countersign,
    seal, verify,
};

pub(crate) const SIGNER: &str = "bench.analyst";
pub(crate) const REVIEWER: &str = "bench.reviewer";
pub(crate) const QUESTION: &str = "label: rb-118\ntask: speciation\n\ntemperature: 25 °C\n";
pub(crate) const ANSWER: &str = "**pH 7.20** ± 0.03 (k=2)\n\n```constants\n- none\n```\n";

pub(crate) fn key(name: &str) -> KeyFile {
    KeyFile::open(&key_bytes(name), None).unwrap()
}

pub(crate) fn key_bytes(name: &str) -> Vec<u8> {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/interoperation/keys");
    std::fs::read(format!("{folder}/{name}_worthless")).unwrap()
}

pub(crate) fn time(text: &str) -> DateTime<FixedOffset> {
    DateTime::parse_from_rfc3339(text).unwrap()
}

pub(crate) fn signer(text: &str) -> SignerName {
    SignerName::new(text).unwrap()
}

pub(crate) fn roster(keys: &[(&str, &dyn Signer)]) -> Roster {
    let mut roster = Roster::default();
    for (name, key) in keys {
        let from = time("2026-01-01T00:00:00+00:00");
        roster
            .enrol(signer(name), key.public_key().clone(), from)
            .unwrap();
    }
    roster
}

pub(crate) fn statement() -> Statement {
    let line = |text| TextLine::new(text).unwrap();
    Statement {
        notebook: NotebookId::new("5f1c9d0e7a2b4c68").unwrap(),
        page: NotebookPath::new("rinse/2026-11-03.md").unwrap(),
        label: Label::new("rb-118").unwrap(),
        supersedes: None,
        question: Digest::of_lines(QUESTION.as_bytes()),
        answer: Digest::of_lines(ANSWER.as_bytes()),
        defaults: None,
        attachments: Vec::new(),
        uses: Vec::new(),
        template: Named::new(line("built-in speciation"), Digest::of_file(b"template")),
        assumed: Vec::new(),
        program: Named::new(line("ionfolio 0.1.0"), Digest::of_file(b"program")),
        result: line("pH 7.20, expanded uncertainty 0.03 (k=2)"),
    }
}

pub(crate) fn sealed(key: &dyn Signer) -> Sealed {
    signing(SIGNER, "2026-11-03T10:12:45+01:00", key, |signing| {
        let statement = statement();
        let (question, answer) = (QUESTION.as_bytes(), ANSWER.as_bytes());
        seal(
            &Draft {
                statement: &statement,
                question,
                answer,
            },
            signing,
        )
        .unwrap()
    })
}

pub(crate) fn reviewed(first: &Sealed, roster: &Roster, key: &dyn Signer) -> Sealed {
    let verified = judged(first.record.as_bytes(), &[first.act.print()], roster)
        .verified
        .unwrap();
    signing(REVIEWER, "2026-11-04T09:00:00+01:00", key, |signing| {
        countersign(&verified, Meaning::Reviewed, signing).unwrap()
    })
}

fn signing(
    name: &str,
    at: &str,
    key: &dyn Signer,
    then: impl Fn(&Signing<'_>) -> Sealed,
) -> Sealed {
    then(&Signing {
        signer: &signer(name),
        name: &TextLine::new("Bench Person").unwrap(),
        time: time(at),
        note: None,
        registers: &[],
        roster: &roster(&[(name, key)]),
        policy: &Policy::default(),
        people: &[],
        key,
    })
}

/// What verification says of a record and its acts.
pub(crate) fn judged(record: &[u8], acts: &[String], roster: &Roster) -> Verification {
    let acts: Vec<&[u8]> = acts.iter().map(String::as_bytes).collect();
    let parts = ionfolio::record::Parts {
        notebook: &statement().notebook,
        page: "rinse/2026-11-03.md",
        label: "rb-118",
        question: Some(QUESTION.as_bytes()),
        answer: ANSWER.as_bytes(),
        record: Some(record),
        acts: &acts,
        attachment: &|_: &NotebookPath| None,
        defaults: None,
    };
    verify(
        &parts,
        &Authority {
            roster,
            policy: &Policy::default(),
            people: &[],
            now: time("2026-12-01T00:00:00+00:00"),
        },
    )
}

/// The page, with prose around the block.
pub(crate) fn page(sealed: &[&Sealed]) -> String {
    let record = &sealed.first().unwrap().record;
    let acts: Vec<String> = sealed
        .iter()
        .map(|sealed| format!("```act\n{}```\n", sealed.act.print()))
        .collect();
    format!(
        "# Rinse\n\nBottle 3, new lot.\n\n```equilibrium\n{QUESTION}```\n\n\
         <!-- ionfolio result rb-118 -->\n{ANSWER}\n```record\n{record}```\n\n{}\
         <!-- ionfolio end rb-118 -->\n\nPut on the shelf.\n",
        acts.join("\n")
    )
}
