//! `signer`: who is on a notebook's roster.

use crate::notebook::{ReplaceError, create, replace};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{Desk, DeskError, SignerError, signer_name};
use crate::record::{PublicKey, Roster, RosterError};
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
    let (_, roster, _) = open(at)?;
    let day = |time: &chrono::DateTime<chrono::Utc>| time.format("%Y-%m-%d %H:%M:%SZ").to_string();
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

/// Puts a public key on the roster; gives back the roster's path.
///
/// # Errors
/// [`RosterFileError`].
pub fn enrol(
    at: &Path,
    signer: &str,
    key: &Path,
    surroundings: &Surroundings<'_>,
) -> Result<PathBuf, RosterFileError> {
    let (path, mut roster, before) = open(at)?;
    let signer = signer_name(signer)?;
    let text = fs::read_to_string(key).map_err(|error| failed(key, &error))?;
    let public = PublicKey::parse(text.trim_end()).map_err(|error| failed(key, &error))?;
    roster.enrol(signer, public, surroundings.clock.now(0))?;
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
    let (path, mut roster, before) = open(at)?;
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

type Opened = (PathBuf, Roster, Option<Vec<u8>>);

fn open(at: &Path) -> Result<Opened, RosterFileError> {
    let desk = Desk::at(at)?;
    let notebook = desk.notebook.ok_or(RosterFileError::NoNotebook)?;
    let before = match fs::read(&notebook.roster) {
        Ok(bytes) => Some(bytes),
        Err(error) if error.kind() == io::ErrorKind::NotFound => None,
        Err(error) => return Err(failed(&notebook.roster, &error)),
    };
    let roster = Roster::parse(before.as_deref().unwrap_or_default());
    Ok((notebook.roster, roster, before))
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
