//! A signer's register: every act of theirs, whole and in order, each with its record and with what had been seen.
//!
//! The file is Markdown and only ever grows: an entry has a heading and three fences, `record`, `seen` and `act`. One
//! content has one spelling, so that a changed byte anywhere in it is found.

use std::collections::BTreeSet;

use chrono::{DateTime, FixedOffset};

use super::act::{ActError, SignedAct};
use super::digest::{Digest, with_line_feeds};
use super::identity::SignerName;
use super::lines::ValueFault;
use super::statement::{Named, Statement};

/// The latest acts of other signers whose registers were at hand: one line each, sorted.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Seen(Vec<Named<SignerName>>);

/// One act in a register.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Entry {
    /// The lines of the record or declaration that the act is about.
    pub record: String,
    /// The acts of others that the signer had at hand.
    pub seen: Seen,
    /// The act.
    pub act: SignedAct,
}

/// The acts of one signer.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Register {
    signer: SignerName,
    entries: Vec<Entry>,
    faults: Vec<RegisterFault>,
}

/// What is wrong with the text of a register. Lines count from 1.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum RegisterFault {
    /// An `act` fence that is no act.
    #[error("line {line}: {error}")]
    Act {
        /// Line of the fence.
        line: usize,
        /// What is wrong.
        error: ActError,
    },
    /// A `seen` fence that is no list of acts.
    #[error("line {line}: a line of the list of seen acts {fault}")]
    Seen {
        /// Line of the fence.
        line: usize,
        /// What is wrong.
        fault: ValueFault,
    },
    /// Text that the program does not write, or not so.
    #[error("line {line} is not as it was written")]
    Text {
        /// The first such line.
        line: usize,
    },
}

impl RegisterFault {
    /// The line that it is about.
    pub const fn line(&self) -> usize {
        match self {
            Self::Act { line, .. } | Self::Seen { line, .. } | Self::Text { line } => *line,
        }
    }
}

/// Number and previous acts of the act to come.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Next {
    /// Its number.
    pub number: u64,
    /// The acts that no other follows yet, sorted; two or more where branches meet.
    pub previous: Vec<Digest>,
}

impl Seen {
    /// What the signer sees of the registers at hand; their own does not count, since `previous` names it.
    #[must_use]
    pub fn of(registers: &[Register], signer: &SignerName) -> Self {
        let others = registers
            .iter()
            .filter(|register| register.signer != *signer);
        let latest = others.flat_map(|register| {
            let heads = register.next().previous.into_iter();
            heads.map(|head| Named::new(register.signer.clone(), head))
        });
        let sorted: BTreeSet<Named<SignerName>> = latest.collect();
        Self(sorted.into_iter().collect())
    }

    /// The acts seen.
    pub fn acts(&self) -> &[Named<SignerName>] {
        &self.0
    }

    /// The digest of the list, or none if nothing was seen.
    #[must_use]
    pub fn digest(&self) -> Option<Digest> {
        (!self.0.is_empty()).then(|| Digest::of_lines(self.print().as_bytes()))
    }

    fn print(&self) -> String {
        let lines: Vec<String> = self.0.iter().map(|act| format!("{act}\n")).collect();
        lines.concat()
    }

    fn parse(text: &str) -> Result<Self, ValueFault> {
        let acts: Vec<_> = text
            .lines()
            .map(|line| Named::parse(line, SignerName::new))
            .collect::<Result<_, _>>()?;
        if acts.is_sorted_by(|a, b| a < b) {
            Ok(Self(acts))
        } else {
            Err(ValueFault::Order)
        }
    }
}

impl Register {
    /// A register without acts.
    #[must_use]
    pub const fn empty(signer: SignerName) -> Self {
        Self {
            signer,
            entries: Vec::new(),
            faults: Vec::new(),
        }
    }

    /// Reads a register; what cannot be read is among its [`Self::faults`].
    #[must_use]
    pub fn parse(signer: SignerName, bytes: &[u8]) -> Self {
        let mut register = Self::empty(signer);
        if bytes.is_empty() {
            return register;
        }
        let text = String::from_utf8_lossy(&with_line_feeds(bytes)).into_owned();
        register.read_fences(&text);
        let printed = register.print();
        if register.faults.is_empty() && printed != text {
            let same = printed
                .lines()
                .zip(text.lines())
                .take_while(|(a, b)| a == b);
            let line = same.count() + 1;
            register.faults.push(RegisterFault::Text { line });
        }
        register
    }

    fn read_fences(&mut self, text: &str) {
        let mut record = String::new();
        let mut seen = Seen::default();
        let mut lines = text.lines().zip(1..);
        while let Some((opening, line)) = lines.next() {
            let Some(kind) = opening.strip_prefix("```") else {
                continue;
            };
            let inside = lines.by_ref().map(|(line, _)| line);
            let content: String = inside
                .take_while(|line| *line != "```")
                .flat_map(|line| [line, "\n"])
                .collect();
            match kind {
                "record" => record = content,
                "seen" => match Seen::parse(&content) {
                    Ok(read) => seen = read,
                    Err(fault) => self.faults.push(RegisterFault::Seen { line, fault }),
                },
                "act" => match SignedAct::parse(content.as_bytes()) {
                    Ok(act) => self.entries.push(Entry {
                        record: std::mem::take(&mut record),
                        seen: std::mem::take(&mut seen),
                        act,
                    }),
                    Err(error) => self.faults.push(RegisterFault::Act { line, error }),
                },
                _ => self.faults.push(RegisterFault::Text { line }),
            }
        }
    }

    /// Whose register it is.
    pub const fn signer(&self) -> &SignerName {
        &self.signer
    }

    /// The acts that could be read, in the order of the file.
    pub fn entries(&self) -> &[Entry] {
        &self.entries
    }

    /// What is wrong with its text.
    pub fn faults(&self) -> &[RegisterFault] {
        &self.faults
    }

    /// The act with this digest.
    #[must_use]
    pub fn find(&self, digest: Digest) -> Option<&Entry> {
        let mut entries = self.entries.iter();
        entries.find(|entry| entry.act.digest() == digest)
    }

    /// Whether a further act can follow: nothing is wrong with the text, each entry has the record and the list that its
    /// act names, and the acts that it follows stand before it.
    #[must_use]
    pub fn is_sound(&self) -> bool {
        let mut before = BTreeSet::new();
        self.faults.is_empty()
            && self.entries.iter().all(|entry| {
                let act = entry.act.act();
                let follows = act.previous.iter().all(|digest| before.contains(digest));
                before.insert(entry.act.digest());
                follows && entry.is_whole() && act.signer == self.signer
            })
    }

    /// Number and previous acts of the act to come.
    #[must_use]
    pub fn next(&self) -> Next {
        let followed: BTreeSet<Digest> = self
            .entries
            .iter()
            .flat_map(|entry| entry.act.act().previous.iter().copied())
            .collect();
        let digests: BTreeSet<Digest> = self.entries.iter().map(|e| e.act.digest()).collect();
        let numbers = self.entries.iter().map(|entry| entry.act.act().number);
        Next {
            number: numbers.max().unwrap_or(0).saturating_add(1),
            previous: digests.difference(&followed).copied().collect(),
        }
    }

    /// The latest time of its acts, before which no further act can be.
    #[must_use]
    pub fn latest_time(&self) -> Option<DateTime<FixedOffset>> {
        self.entries.iter().map(|entry| entry.act.act().time).max()
    }

    /// The text to add at the end of a file without faults for an entry, with LF.
    #[must_use]
    pub fn addition(&self, entry: &Entry) -> String {
        if self.entries.is_empty() && self.faults.is_empty() {
            return format!("{}\n{}", heading(&self.signer), entry.print());
        }
        format!("\n{}", entry.print())
    }

    /// The register with the entry at its end.
    #[must_use]
    pub fn with(mut self, entry: Entry) -> Self {
        self.entries.push(entry);
        self
    }

    /// The whole file, with LF, as far as it could be read.
    #[must_use]
    pub fn print(&self) -> String {
        let mut text = heading(&self.signer);
        for entry in &self.entries {
            text.push('\n');
            text.push_str(&entry.print());
        }
        text
    }
}

impl Entry {
    /// The statement that the act is about, if it is about a result and not a declaration.
    #[must_use]
    pub fn statement(&self) -> Option<Statement> {
        Statement::parse(self.record.as_bytes()).ok()
    }

    fn is_whole(&self) -> bool {
        let act = self.act.act();
        Digest::of_lines(self.record.as_bytes()) == act.record && self.seen.digest() == act.seen
    }

    fn print(&self) -> String {
        let act = self.act.act();
        format!(
            "## Act {}: {}\n\n```record\n{}```\n\n```seen\n{}```\n\n```act\n{}```\n",
            act.number,
            act.meaning,
            self.record,
            self.seen.print(),
            self.act.print()
        )
    }
}

fn heading(signer: &SignerName) -> String {
    format!(
        "# Register of {signer}\n\nThe acts of one signer in their order. The program adds at the end; nobody changes it.\n"
    )
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::specimen::{Laboratory, labelled, name};

    fn written() -> String {
        let mut laboratory = Laboratory::new();
        laboratory.seal(&labelled("z"), "reviewer", "2026-11-01T09:00:00+01:00");
        let mut text = String::new();
        for (label, at) in [("a", "2026-11-02T09:00:00Z"), ("b", "2026-11-03T09:00:00Z")] {
            text += &laboratory
                .seal(&labelled(label), "analyst", at)
                .register_addition;
        }
        text
    }

    #[test]
    fn additions_make_the_whole_file() {
        let text = written();
        let register = Register::parse(name("analyst"), text.as_bytes());
        assert_eq!(register.faults(), []);
        assert_eq!(register.print(), text);
        assert_eq!(register.entries().len(), 2);
        let crlf = text.replace('\n', "\r\n");
        assert_eq!(Register::parse(name("analyst"), crlf.as_bytes()), register);
    }

    #[test]
    fn every_changed_byte_of_the_text_shows() {
        let text = written();
        let right = Register::parse(name("analyst"), text.as_bytes());
        for at in 0..text.len() {
            let mut bytes = text.clone().into_bytes();
            bytes[at] ^= 0x04;
            let changed = Register::parse(name("analyst"), &bytes);
            assert!(
                !changed.faults().is_empty() || changed != right,
                "byte {at}"
            );
        }
        let more = Register::parse(name("analyst"), format!("{text}\n").as_bytes());
        let line = text.lines().count() + 1;
        assert_eq!(more.faults(), [RegisterFault::Text { line }]);
    }

    #[test]
    fn no_act_follows_a_register_with_something_missing_or_exchanged() {
        let right = Register::parse(name("analyst"), written().as_bytes());
        assert!(right.is_sound());
        let mut without = right.clone();
        without.entries.remove(0);
        assert!(!without.is_sound());
        let mut exchanged = right.clone();
        exchanged.entries[1].record = right.entries[0].record.clone();
        assert!(!exchanged.is_sound());
        let mut unseen = right;
        unseen.entries[1].seen = Seen::default();
        assert!(!unseen.is_sound());
    }
}
