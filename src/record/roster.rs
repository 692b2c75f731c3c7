//! Who may sign with which key, from when to when: OpenSSH's allowed-signers lines (`ssh-keygen(1)`, ALLOWED SIGNERS).
//!
//! Lines that this program would not write (comments, certificate authorities, patterns, other namespaces) are kept
//! byte for byte and give nobody a right here. Dates carry the `Z` of UTC (OpenSSH 9.1 and later): without it
//! `ssh-keygen` reads them in the time zone of whoever verifies, and the same roster would say two things.

use std::fmt::Write as _;

use chrono::{DateTime, FixedOffset, NaiveDate, NaiveDateTime, Utc};

use super::identity::SignerName;
use super::signature::{NAMESPACE, PublicKey};

/// The roster: its lines as they stand, and what they say.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Roster {
    lines: Vec<RosterLine>,
}

#[derive(Clone, Debug, PartialEq, Eq)]
struct RosterLine {
    bytes: Vec<u8>,
    meaning: LineMeaning,
}

#[derive(Clone, Debug, PartialEq, Eq)]
enum LineMeaning {
    Entry(Box<Enrolment>),
    Remark,
    Unread,
}

/// One line of the roster: a key of a signer, and the dates between which it signs.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Enrolment {
    /// Whose key it is.
    pub signer: SignerName,
    /// The key.
    pub key: PublicKey,
    /// The first second at which it signs.
    pub valid_after: Option<DateTime<Utc>>,
    /// The last second at which it signs; a key that has one is retired by then.
    pub valid_before: Option<DateTime<Utc>>,
}

/// How a key stands for a signer at a time.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Standing {
    /// It may sign.
    Valid,
    /// The roster does not name the signer.
    UnknownSigner,
    /// The roster names the signer, with other keys.
    UnknownKey,
    /// It may sign only from this time on.
    NotYet(DateTime<Utc>),
    /// It was retired at this time.
    Retired(DateTime<Utc>),
}

/// Why the roster cannot be changed so.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum RosterError {
    /// One key belongs to one person.
    #[error("the key belongs to {holder} already")]
    KeyTaken {
        /// Whose key it is.
        holder: SignerName,
    },
    /// No such key to retire.
    #[error("{signer} has no such key that is not retired yet")]
    NoSuchKey {
        /// Of whom it was said to be.
        signer: SignerName,
    },
}

impl Roster {
    /// Reads a roster. Nothing is lost: [`Self::print`] gives the bytes back.
    #[must_use]
    pub fn parse(bytes: &[u8]) -> Self {
        let lines = bytes
            .split_inclusive(|byte| *byte == b'\n')
            .map(RosterLine::read)
            .collect();
        Self { lines }
    }

    /// The roster's bytes.
    #[must_use]
    pub fn print(&self) -> Vec<u8> {
        self.lines
            .iter()
            .flat_map(|line| line.bytes.iter().copied())
            .collect()
    }

    /// The keys of the roster, in its order.
    pub fn enrolments(&self) -> impl Iterator<Item = &Enrolment> {
        self.lines.iter().filter_map(|line| match &line.meaning {
            LineMeaning::Entry(entry) => Some(entry.as_ref()),
            LineMeaning::Remark | LineMeaning::Unread => None,
        })
    }

    /// Numbers, from 1, of lines that are neither remarks nor enrolments as this program writes them.
    pub fn unread_lines(&self) -> impl Iterator<Item = usize> + '_ {
        self.lines
            .iter()
            .zip(1..)
            .filter(|(line, _)| line.meaning == LineMeaning::Unread)
            .map(|(_, number)| number)
    }

    /// Keys that the roster gives to two signers.
    pub fn shared_keys(&self) -> impl Iterator<Item = (&Enrolment, &Enrolment)> {
        self.enrolments().enumerate().flat_map(move |(at, first)| {
            self.enrolments()
                .skip(at + 1)
                .filter(|second| {
                    first.key.is_same_key(&second.key) && first.signer != second.signer
                })
                .map(move |second| (first, second))
        })
    }

    /// The keys with which the signer may sign at the time.
    pub fn keys_of<'a>(
        &'a self,
        signer: &'a SignerName,
        time: DateTime<FixedOffset>,
    ) -> impl Iterator<Item = &'a PublicKey> {
        self.enrolments()
            .filter(move |entry| entry.signer == *signer && entry.at(time) == Standing::Valid)
            .map(|entry| &entry.key)
    }

    /// How the key stands for the signer at the time; the most favourable line counts, as with `ssh-keygen`.
    #[must_use]
    pub fn standing(
        &self,
        signer: &SignerName,
        key: &PublicKey,
        time: DateTime<FixedOffset>,
    ) -> Standing {
        let mut found = Standing::UnknownSigner;
        for entry in self.enrolments().filter(|entry| entry.signer == *signer) {
            if !entry.key.is_same_key(key) {
                if found == Standing::UnknownSigner {
                    found = Standing::UnknownKey;
                }
                continue;
            }
            found = entry.at(time);
            if found == Standing::Valid {
                break;
            }
        }
        found
    }

    /// Adds a key for a signer, who may have others.
    ///
    /// # Errors
    ///
    /// [`RosterError::KeyTaken`] if the key stands there already, for anybody.
    pub fn enrol(
        &mut self,
        signer: SignerName,
        key: PublicKey,
        from: DateTime<FixedOffset>,
    ) -> Result<(), RosterError> {
        if let Some(holder) = self.enrolments().find(|entry| entry.key.is_same_key(&key)) {
            return Err(RosterError::KeyTaken {
                holder: holder.signer.clone(),
            });
        }
        if let Some(last) = self.lines.last_mut()
            && !last.bytes.ends_with(b"\n")
        {
            last.bytes.push(b'\n');
        }
        let entry = Enrolment {
            signer,
            key,
            valid_after: Some(from.to_utc()),
            valid_before: None,
        };
        self.lines.push(RosterLine::of(entry));
        Ok(())
    }

    /// Retires a key: its last second is `at`. What it signed before stays good.
    ///
    /// # Errors
    ///
    /// [`RosterError::NoSuchKey`] if the signer has no such key, or it is retired already.
    pub fn retire(
        &mut self,
        signer: &SignerName,
        key: &PublicKey,
        at: DateTime<FixedOffset>,
    ) -> Result<(), RosterError> {
        for line in &mut self.lines {
            if let LineMeaning::Entry(entry) = &line.meaning
                && entry.signer == *signer
                && entry.key.is_same_key(key)
                && entry.valid_before.is_none()
            {
                let mut entry = entry.as_ref().clone();
                entry.valid_before = Some(at.to_utc());
                *line = RosterLine::of(entry);
                return Ok(());
            }
        }
        Err(RosterError::NoSuchKey {
            signer: signer.clone(),
        })
    }
}

impl Enrolment {
    /// Both bounds belong to the dates, as `ssh-keygen` 9.2 has it; `tests/interoperation` holds the two together.
    fn at(&self, time: DateTime<FixedOffset>) -> Standing {
        let time = time.to_utc();
        match (self.valid_after, self.valid_before) {
            (Some(from), _) if time < from => Standing::NotYet(from),
            (_, Some(until)) if time > until => Standing::Retired(until),
            _ => Standing::Valid,
        }
    }

    /// The line, without a line end.
    #[must_use]
    pub fn print(&self) -> String {
        let mut line = format!("{} namespaces=\"{NAMESPACE}\"", self.signer);
        let bounds = [("after", self.valid_after), ("before", self.valid_before)];
        for (name, bound) in bounds {
            if let Some(time) = bound {
                // Writing to a String cannot fail.
                let _written = write!(line, ",valid-{name}=\"{}\"", time.format("%Y%m%d%H%M%SZ"));
            }
        }
        line.push(' ');
        line.push_str(&self.key.print());
        line
    }

    fn read(line: &str) -> Option<Self> {
        let mut words = line.splitn(3, ' ');
        let signer = SignerName::new(words.next()?).ok()?;
        let options = words.next()?;
        let key = PublicKey::parse(words.next()?).ok()?;
        let mut entry = Self {
            signer,
            key,
            valid_after: None,
            valid_before: None,
        };
        let mut namespaces = None;
        // `ssh-keygen` refuses a line whose quotation marks do not pair, so it gives nobody a right here either.
        for option in options.strip_suffix('"')?.split("\",") {
            let (name, value) = option.split_once("=\"")?;
            if value.contains('"') {
                return None;
            }
            match name {
                "namespaces" if namespaces.is_none() => namespaces = Some(value),
                "valid-after" if entry.valid_after.is_none() => {
                    entry.valid_after = Some(read_date(value)?);
                }
                "valid-before" if entry.valid_before.is_none() => {
                    entry.valid_before = Some(read_date(value)?);
                }
                _ => return None,
            }
        }
        (namespaces == Some(NAMESPACE)).then_some(entry)
    }
}

impl RosterLine {
    fn of(entry: Enrolment) -> Self {
        let mut bytes = entry.print().into_bytes();
        bytes.push(b'\n');
        Self {
            bytes,
            meaning: LineMeaning::Entry(Box::new(entry)),
        }
    }

    fn read(bytes: &[u8]) -> Self {
        let text = std::str::from_utf8(bytes).map(|text| text.trim_end_matches(['\n', '\r']));
        let meaning = match text {
            Err(_) => LineMeaning::Unread,
            Ok(text) if text.trim().is_empty() || text.starts_with('#') => LineMeaning::Remark,
            Ok(text) => match Enrolment::read(text) {
                Some(entry) => LineMeaning::Entry(Box::new(entry)),
                None => LineMeaning::Unread,
            },
        };
        Self {
            bytes: bytes.to_vec(),
            meaning,
        }
    }
}

/// `YYYYMMDD`, with `HHMM` or `HHMMSS` if wanted, and `Z`.
fn read_date(text: &str) -> Option<DateTime<Utc>> {
    let digits = text.strip_suffix('Z')?;
    if !digits.bytes().all(|byte| byte.is_ascii_digit()) {
        return None;
    }
    let naive = match digits.len() {
        8 => NaiveDate::parse_from_str(digits, "%Y%m%d")
            .ok()?
            .and_hms_opt(0, 0, 0)?,
        12 => NaiveDateTime::parse_from_str(&format!("{digits}00"), "%Y%m%d%H%M%S").ok()?,
        14 => NaiveDateTime::parse_from_str(digits, "%Y%m%d%H%M%S").ok()?,
        _ => return None,
    };
    Some(naive.and_utc())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::signature::Signer as _;
    use crate::record::specimen::{key, name, time};

    #[test]
    fn bytes_are_kept_and_foreign_lines_give_no_right() {
        let public = key("analyst").public_key().print();
        let text = format!(
            "# people of the bench\r\n\nanalyst namespaces=\"ionfolio\" {public}\r\n\
             *@example.org cert-authority {public}\n\
             other namespaces=\"git\" {public}\n\
             third namespaces=\"ionfolio\",valid-after=\"20260101\" {public}\n\
             fourth namespaces=\"ionfolio\",valid-after=\"20260101Z\",valid-before=\"202612312359Z\" {public}\n\
             fifth namespaces=\"ionfolio {public}\n\
             sixth namespaces=\"ionfolio\"\",valid-after=\"20260101Z\" {public}"
        );
        let roster = Roster::parse(text.as_bytes());
        assert_eq!(roster.print(), text.as_bytes());
        assert_eq!(roster.unread_lines().collect::<Vec<_>>(), [4, 5, 6, 8, 9]);
        let signers: Vec<_> = roster
            .enrolments()
            .map(|entry| entry.signer.as_str())
            .collect();
        assert_eq!(signers, ["analyst", "fourth"]);
        assert_eq!(roster.shared_keys().count(), 1);
    }

    #[test]
    fn keys_are_rotated_and_retired() {
        let (old, new) = (key("old"), key("new"));
        let analyst = name("analyst");
        let start = time("2026-01-01T00:00:00+01:00");
        let change = time("2026-06-01T12:00:00+02:00");
        let mut roster = Roster::parse(b"# no line end");
        roster
            .enrol(analyst.clone(), old.public_key().clone(), start)
            .unwrap();
        roster.retire(&analyst, old.public_key(), change).unwrap();
        roster
            .enrol(analyst.clone(), new.public_key().clone(), change)
            .unwrap();
        let roster = Roster::parse(&roster.print());
        let standing = |key: &PublicKey, at: &str| roster.standing(&analyst, key, time(at));
        let (before, after) = ("2026-06-01T09:59:59Z", "2026-06-01T10:00:01Z");
        assert_eq!(standing(old.public_key(), before), Standing::Valid);
        assert_eq!(
            standing(old.public_key(), after),
            Standing::Retired(change.to_utc())
        );
        assert_eq!(
            standing(new.public_key(), before),
            Standing::NotYet(change.to_utc())
        );
        assert_eq!(standing(new.public_key(), after), Standing::Valid);
        assert_eq!(roster.keys_of(&analyst, time(before)).count(), 1);
    }

    #[test]
    fn one_key_is_one_persons() {
        let mut roster = Roster::default();
        let start = time("2026-01-01T00:00:00Z");
        let key = key("analyst").public_key().clone();
        roster.enrol(name("analyst"), key.clone(), start).unwrap();
        let taken = roster.enrol(name("reviewer"), key.clone(), start);
        let holder = name("analyst");
        assert_eq!(taken, Err(RosterError::KeyTaken { holder }));
        let missing = roster.retire(&name("reviewer"), &key, start);
        assert!(missing.is_err());
    }
}
