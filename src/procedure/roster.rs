//! `signer`: who is on a notebook's roster.

use crate::notebook::{LockError, ReplaceError, create, replace};
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{Desk, DeskError, SignerError, signer_name};
use crate::record::{Entry, PublicKey, Register, Roster, RosterError, SignerName};
use chrono::{DateTime, FixedOffset, Utc};
use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// Why the roster was not read or changed.
#[derive(Debug, thiserror::Error)]
pub enum RosterFileError {
    /// The notebook cannot be read.
    #[error(transparent)]
    Desk(#[from] DeskError),
    /// There is none.
    #[error("there is no notebook here (no `ionfolio.yaml`), so there is no roster")]
    NoNotebook,
    /// The signer's name is none.
    #[error(transparent)]
    Signer(#[from] SignerError),
    /// The roster refuses.
    #[error(transparent)]
    Roster(#[from] RosterError),
    /// The notebook's records cannot be worked with.
    #[error(transparent)]
    Records(#[from] RecordsError),
    /// Somebody else writes.
    #[error(transparent)]
    Lock(#[from] LockError),
    /// There are acts from before, and nothing was said of them.
    #[error(
        "{signer} signed with this key from {} on: say whether these acts count (`--earlier-acts count`) or not (`--earlier-acts refuse`)", first.to_rfc3339()
    )]
    EarlierActs {
        /// The signer.
        signer: SignerName,
        /// The time of the first.
        first: DateTime<FixedOffset>,
    },
    /// A file cannot be read or written, or holds no public key.
    #[error("{path}: {reason}", path = .path.display())]
    File {
        /// The file.
        path: PathBuf,
        /// Why.
        reason: String,
    },
}

/// The roster's enrolments, a line each.
///
/// # Errors
/// [`RosterFileError`].
pub fn roster_lines(at: &Path) -> Result<Vec<String>, RosterFileError> {
    let (_, _, roster, _) = open(at)?;
    let day = |time: &DateTime<Utc>| time.format("%Y-%m-%d %H:%M:%SZ").to_string();
    Ok(roster
        .enrolments()
        .map(|entry| {
            let from = entry
                .valid_after
                .as_ref()
                .map_or_else(|| "always".to_owned(), day);
            let until = entry.valid_before.as_ref().map_or_else(
                || "not retired".to_owned(),
                |time| format!("retired {}", day(time)),
            );
            format!(
                "{}  {}  from {from}, {until}",
                entry.signer,
                entry.key.fingerprint()
            )
        })
        .collect())
}

/// What enrolling makes of acts that were signed with the key before.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EarlierActs {
    /// The key signs from its first act on.
    Count,
    /// The key signs from now on; what was signed before does not verify.
    Refuse,
}

/// Puts a public key on the roster; gives back the roster's path.
///
/// # Errors
/// [`RosterFileError`]; above all [`RosterFileError::EarlierActs`] where there are some and nothing was said of them.
pub fn enrol(
    at: &Path,
    signer: &str,
    key: &Path,
    earlier: Option<EarlierActs>,
    surroundings: &Surroundings<'_>,
) -> Result<PathBuf, RosterFileError> {
    let (desk, path, mut roster, before) = open(at)?;
    let _lock = desk.lock()?;
    let signer = signer_name(signer)?;
    let text = fs::read_to_string(key).map_err(|error| failed(key, &error))?;
    let public = PublicKey::parse(text.trim_end()).map_err(|error| failed(key, &error))?;
    let records = Records::of(desk.notebook.as_ref(), [0; 16])?;
    let with_this_key = |entry: &&Entry| {
        let used = entry.act.signature().public_key();
        entry.act.act().signer == signer && used.is_ok_and(|used| used.is_same_key(&public))
    };
    let acts = records.registers.iter().flat_map(Register::entries);
    let times = acts.filter(with_this_key).map(|entry| entry.act.act().time);
    let now = surroundings.clock.now(0);
    let from = match (times.min().filter(|first| *first < now), earlier) {
        (None, _) | (Some(_), Some(EarlierActs::Refuse)) => now,
        (Some(first), Some(EarlierActs::Count)) => first,
        (Some(first), None) => return Err(RosterFileError::EarlierActs { signer, first }),
    };
    roster.enrol(signer, public, from)?;
    write(&path, before, &roster)
}

/// Retires every key of a signer from now on; gives back the roster's path.
///
/// # Errors
/// [`RosterFileError`].
pub fn retire(
    at: &Path,
    signer: &str,
    surroundings: &Surroundings<'_>,
) -> Result<PathBuf, RosterFileError> {
    let (desk, path, mut roster, before) = open(at)?;
    let _lock = desk.lock()?;
    let signer = signer_name(signer)?;
    let keys: Vec<PublicKey> = roster
        .enrolments()
        .filter(|entry| entry.signer == signer && entry.valid_before.is_none())
        .map(|entry| entry.key.clone())
        .collect();
    if keys.is_empty() {
        return Err(RosterError::NoSuchKey { signer }.into());
    }
    for key in keys {
        roster.retire(&signer, &key, surroundings.clock.now(0))?;
    }
    write(&path, before, &roster)
}

type Opened = (Desk, PathBuf, Roster, Option<Vec<u8>>);

fn open(at: &Path) -> Result<Opened, RosterFileError> {
    let desk = Desk::at(at)?;
    let notebook = desk.notebook.as_ref().ok_or(RosterFileError::NoNotebook)?;
    let path = notebook.roster.clone();
    let before = match fs::read(&path) {
        Ok(bytes) => Some(bytes),
        Err(error) if error.kind() == io::ErrorKind::NotFound => None,
        Err(error) => return Err(failed(&path, &error)),
    };
    let roster = Roster::parse(before.as_deref().unwrap_or_default());
    Ok((desk, path, roster, before))
}

fn write(
    path: &Path,
    before: Option<Vec<u8>>,
    roster: &Roster,
) -> Result<PathBuf, RosterFileError> {
    let after = roster.print();
    let written: Result<(), ReplaceError> = match before {
        Some(before) => replace(path, &before, &after),
        None => create(path, &after),
    };
    written.map_err(|error| failed(path, &error))?;
    Ok(path.to_owned())
}

fn failed(path: &Path, error: &dyn std::error::Error) -> RosterFileError {
    RosterFileError::File {
        path: path.to_owned(),
        reason: error.to_string(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory};

    #[test]
    fn a_key_that_signed_before_is_enrolled_only_with_a_word_on_that() {
        for (earlier, found) in [
            (EarlierActs::Count, &[][..]),
            (EarlierActs::Refuse, &["key-outside-dates"]),
        ] {
            let laboratory = Laboratory::with(ACETIC);
            laboratory.seal().unwrap();
            let key = laboratory.path("keys/bench.analyst.pub");
            let (page, surroundings) = (laboratory.page(), laboratory.surroundings());
            let enrol = |earlier| enrol(&page, "bench.analyst", &key, earlier, &surroundings);
            let silent = enrol(None);
            assert!(
                matches!(silent, Err(RosterFileError::EarlierActs { .. })),
                "{silent:?}"
            );
            enrol(Some(earlier)).unwrap();
            assert_eq!(laboratory.found(), found);
            assert!(laboratory.verify().results[0].unlisted.is_empty());
        }
    }

    #[test]
    fn a_retired_key_signs_no_more_and_what_it_signed_stays_good() {
        let laboratory = Laboratory::with(ACETIC);
        let key = laboratory.path("keys/bench.analyst.pub");
        let (page, surroundings) = (laboratory.page(), laboratory.surroundings());
        enrol(&page, "bench.analyst", &key, None, &surroundings).unwrap();
        laboratory.seal().unwrap();
        retire(&page, "bench.analyst", &surroundings).unwrap();
        assert_eq!(laboratory.found(), [""; 0]);
        laboratory.write("notebook/rinse.md", &ACETIC.replace("0.100", "0.200"));
        assert!(laboratory.seal().is_err());
    }
}
