//! What a person did with a record: the lines of an act, and the signature below them.

use std::fmt;

use chrono::{DateTime, FixedOffset, SecondsFormat, Timelike as _};

use super::digest::Digest;
use super::identity::{SignerName, TextLine};
use super::lines::{LineError, LineReader, LineWriter, ValueFault, plain_number, text_of};
use super::signature::{Signature, SignatureFault};

const KIND: &str = "act";
const KEYS: &[&str] = &[
    "record", "meaning", "signer", "name", "time", "number", "previous", "seen", "note",
];
const ARMOUR: &str = "-----BEGIN SSH SIGNATURE-----";

/// What an act means.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Meaning {
    /// The work was done by the signer; the first act of every record.
    Performed,
    /// Somebody went through it.
    Reviewed,
    /// Somebody released it for use.
    Approved,
    /// Somebody found it wanting.
    Rejected,
    /// It is not to be used any more.
    Withdrawn,
    /// A keeper changed roster or people; the record is a [`super::Declaration`].
    Roster,
    /// A constant was checked against its source; the record is a [`super::Declaration`].
    Adopted,
}

impl Meaning {
    /// Every meaning, in the order in which they are documented.
    pub const ALL: [Self; 7] = [
        Self::Performed,
        Self::Reviewed,
        Self::Approved,
        Self::Rejected,
        Self::Withdrawn,
        Self::Roster,
        Self::Adopted,
    ];

    /// The word in the act's line.
    #[must_use]
    pub const fn word(self) -> &'static str {
        match self {
            Self::Performed => "performed",
            Self::Reviewed => "reviewed",
            Self::Approved => "approved",
            Self::Rejected => "rejected",
            Self::Withdrawn => "withdrawn",
            Self::Roster => "roster",
            Self::Adopted => "adopted",
        }
    }

    /// Whether acts of this meaning stand on pages, and not in the register alone.
    #[must_use]
    pub const fn is_of_a_page(self) -> bool {
        !matches!(self, Self::Roster | Self::Adopted)
    }

    /// Reads the word.
    ///
    /// # Errors
    ///
    /// [`ValueFault::Meaning`] for any other word.
    pub fn parse(word: &str) -> Result<Self, ValueFault> {
        Self::ALL
            .into_iter()
            .find(|meaning| meaning.word() == word)
            .ok_or(ValueFault::Meaning)
    }
}

impl fmt::Display for Meaning {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.word())
    }
}

/// Who did what with which record, when, as the how-manieth of their acts, and what they had seen by then.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Act {
    /// The digest of the record.
    pub record: Digest,
    /// What was done.
    pub meaning: Meaning,
    /// Who signs, as the roster names them.
    pub signer: SignerName,
    /// Their printed name.
    pub name: TextLine,
    /// When, by the signer's clock, in whole seconds.
    pub time: DateTime<FixedOffset>,
    /// The how-manieth act of the signer it is, from 1.
    pub number: u64,
    /// The signer's acts that it follows: none for the first, two or more where it joins branches.
    pub previous: Vec<Digest>,
    /// The digest of the list of the latest acts of other signers at hand, or none if no other register was.
    pub seen: Option<Digest>,
    /// A remark.
    pub note: Option<TextLine>,
}

impl Act {
    /// The act's lines, with LF: what is signed.
    #[must_use]
    pub fn print(&self) -> String {
        let mut lines = LineWriter::new(KIND, 1);
        lines
            .line("record", self.record)
            .line("meaning", self.meaning)
            .line("signer", &self.signer)
            .line("name", &self.name)
            .line("time", print_time(&self.time))
            .line("number", self.number);
        if self.previous.is_empty() {
            lines.line("previous", "none");
        }
        for previous in &self.previous {
            lines.line("previous", previous);
        }
        match &self.seen {
            Some(seen) => lines.line("seen", seen),
            None => lines.line("seen", "none"),
        };
        if let Some(note) = &self.note {
            lines.line("note", note);
        }
        lines.finish()
    }

    fn parse(text: &str) -> Result<Self, LineError> {
        let mut lines = LineReader::new(text, KIND, KEYS)?;
        let act = Self {
            record: lines.take("record", Digest::parse)?,
            meaning: lines.take("meaning", Meaning::parse)?,
            signer: lines.take("signer", SignerName::new)?,
            name: lines.take("name", TextLine::new)?,
            time: lines.take("time", parse_time)?,
            number: lines.take("number", |text| {
                plain_number(text).ok_or(ValueFault::Number)
            })?,
            previous: previous(&mut lines)?,
            seen: lines.take("seen", none_or_digest)?,
            note: lines.optional("note", TextLine::new)?,
        };
        lines.finish()?;
        Ok(act)
    }
}

/// An act and the signature below it, as they stand in an `act` fence.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SignedAct {
    act: Act,
    signature: Signature,
    digest: Digest,
}

/// Why the content of an `act` fence is not an act with a signature.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum ActError {
    /// The lines are not in their form.
    #[error(transparent)]
    Lines(#[from] LineError),
    /// No signature follows the lines.
    #[error("no signature follows the act's lines")]
    Unsigned,
    /// The signature cannot be read.
    #[error("the signature {0}")]
    Signature(#[from] SignatureFault),
}

impl SignedAct {
    /// Puts the signature below the act. Whether it fits is for verification to say.
    #[must_use]
    pub fn new(act: Act, signature: Signature) -> Self {
        let digest = Digest::of_file(content(&act, &signature).as_bytes());
        Self {
            act,
            signature,
            digest,
        }
    }

    /// What was done.
    pub const fn act(&self) -> &Act {
        &self.act
    }

    /// The signature.
    pub const fn signature(&self) -> &Signature {
        &self.signature
    }

    /// The content of the `act` fence, with LF: the act's lines and the armoured signature.
    #[must_use]
    pub fn print(&self) -> String {
        content(&self.act, &self.signature)
    }

    /// Reads the content of an `act` fence.
    ///
    /// # Errors
    ///
    /// [`ActError`] if a line departs from its form, or the signature is missing or not in the form that `ssh-keygen`
    /// writes.
    pub fn parse(bytes: &[u8]) -> Result<Self, ActError> {
        let text = text_of(bytes)?;
        let at = text.find(ARMOUR).ok_or(ActError::Unsigned)?;
        let (lines, armour) = text.split_at(at);
        Ok(Self::new(Act::parse(lines)?, Signature::parse(armour)?))
    }

    /// The digest by which later acts name this one: of the whole content of its fence, lines and signature.
    ///
    /// With the signature included, the chain also tells when a signature was exchanged for another valid one.
    pub const fn digest(&self) -> Digest {
        self.digest
    }
}

fn content(act: &Act, signature: &Signature) -> String {
    let mut text = act.print();
    text.push_str(signature.armour());
    text
}

fn previous(lines: &mut LineReader<'_>) -> Result<Vec<Digest>, LineError> {
    let first = lines.take("previous", none_or_digest)?;
    let Some(first) = first else {
        return Ok(Vec::new());
    };
    let mut previous = vec![first];
    previous.extend(lines.many("previous", Digest::parse)?);
    if previous.is_sorted_by(|a, b| a < b) {
        Ok(previous)
    } else {
        Err(lines.faulty("previous", ValueFault::Order))
    }
}

fn none_or_digest(text: &str) -> Result<Option<Digest>, ValueFault> {
    match text {
        "none" => Ok(None),
        _ => Digest::parse(text).map(Some),
    }
}

/// The time as RFC 3339 has it, in whole seconds and with a numeric offset.
pub(super) fn print_time(time: &DateTime<FixedOffset>) -> String {
    time.to_rfc3339_opts(SecondsFormat::Secs, false)
}

fn parse_time(text: &str) -> Result<DateTime<FixedOffset>, ValueFault> {
    let time = DateTime::parse_from_rfc3339(text).map_err(|_not_a_time| ValueFault::Time)?;
    (print_time(&time) == text)
        .then_some(time)
        .ok_or(ValueFault::Time)
}

/// The time without its fraction of a second.
pub(super) fn whole_seconds(time: DateTime<FixedOffset>) -> DateTime<FixedOffset> {
    time.with_nanosecond(0).unwrap_or(time)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::signature::{NAMESPACE, Signer as _};
    use crate::record::specimen::{key, name, time};

    fn act(previous: &[&[u8]]) -> Act {
        Act {
            record: Digest::of_lines(b"record\n"),
            meaning: Meaning::Reviewed,
            signer: name("analyst"),
            name: TextLine::new("Ana Lyst").unwrap(),
            time: time("2026-11-03T10:12:45-03:30"),
            number: 17,
            previous: previous
                .iter()
                .map(|bytes| Digest::of_file(bytes))
                .collect(),
            seen: Some(Digest::of_lines(b"seen\n")),
            note: Some(TextLine::new("figures agree with the balance's printout").unwrap()),
        }
    }

    #[test]
    fn every_meaning_and_every_line_reads_back() {
        for meaning in Meaning::ALL {
            let mut act = act(&[b"abc"]);
            act.meaning = meaning;
            assert_eq!(Act::parse(&act.print()), Ok(act));
        }
        let bare = Act {
            seen: None,
            note: None,
            ..act(&[])
        };
        assert_eq!(Act::parse(&bare.print()), Ok(bare));
    }

    #[test]
    fn acts_that_join_branches_name_both_in_order() {
        // SHA-256 of `abc` begins with ba, that of nothing with e3.
        assert!(Act::parse(&act(&[b"abc", b""]).print()).is_ok());
        for wrong in [act(&[b"", b"abc"]), act(&[b"abc", b"abc"])] {
            assert!(Act::parse(&wrong.print()).is_err());
        }
    }

    #[test]
    fn one_time_has_one_spelling() {
        for time in [
            "2026-11-03T10:12:45Z",
            "2026-11-03t10:12:45+01:00",
            "2026-11-03T10:12:45.5+01:00",
        ] {
            assert_eq!(parse_time(time), Err(ValueFault::Time));
        }
    }

    #[test]
    fn the_signature_belongs_below_the_lines() {
        let act = act(&[]);
        let signature = key("analyst")
            .sign(NAMESPACE, act.print().as_bytes())
            .unwrap();
        let signed = SignedAct::new(act, signature);
        let text = signed.print();
        assert_eq!(SignedAct::parse(text.as_bytes()).as_ref(), Ok(&signed));
        let unsigned = SignedAct::parse(signed.act().print().as_bytes());
        assert_eq!(unsigned, Err(ActError::Unsigned));
        let below = SignedAct::parse(format!("{text}note: more\n").as_bytes());
        assert_eq!(below, Err(ActError::Signature(SignatureFault::Unreadable)));
    }
}
