//! `signer sign-roster`: a keeper signs roster and people as they are, so that a rewritten roster is found by the keeper's fingerprint.

use crate::notebook::{LockError, Notebook};
use crate::procedure::hand::{Hand, HandError};
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::seal::with_cause;
use crate::procedure::signer::{KeyChoice, key_of};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{Desk, DeskError, SignerError};
use crate::record::{
    self, Declaration, Digest, Meaning, Named, NotebookPath, TextLine, ValueFault,
};
use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// A roster that was signed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct RosterSigned {
    /// The keeper's fingerprint, to be handed on by another way than the notebook.
    pub fingerprint: String,
    /// The register that holds the act.
    pub register: Option<PathBuf>,
}

/// Why the roster was not signed.
#[derive(Debug, thiserror::Error)]
pub enum KeeperError {
    /// The notebook cannot be read.
    #[error(transparent)]
    Desk(#[from] DeskError),
    /// The notebook's records cannot be worked with.
    #[error(transparent)]
    Records(#[from] RecordsError),
    /// There is no key.
    #[error(transparent)]
    Signer(#[from] SignerError),
    /// The keeper cannot sign here.
    #[error(transparent)]
    Hand(#[from] HandError),
    /// Somebody else writes.
    #[error(transparent)]
    Lock(#[from] LockError),
    /// A file cannot be read; the roster must be there.
    #[error("{path}: {error}", path = .path.display())]
    File {
        /// The file.
        path: PathBuf,
        /// Why.
        error: io::Error,
    },
    /// A path does not fit into a record.
    #[error("{path:?} {fault}")]
    Path {
        /// The path.
        path: String,
        /// What is wrong with it.
        fault: ValueFault,
    },
    /// The act was not made.
    #[error("the roster was not signed: {}", with_cause(.0))]
    Record(record::SealError),
}

/// Signs the roster and the people of the notebook around a path as they are.
///
/// # Errors
/// [`KeeperError`]; nothing is written then.
pub fn sign_roster(
    at: &Path,
    key: &KeyChoice,
    surroundings: &Surroundings<'_>,
) -> Result<RosterSigned, KeeperError> {
    let desk = Desk::at(at)?;
    let _lock = desk.lock()?;
    let records = Records::of(desk.notebook.as_ref(), [0; 16])?;
    let files = desk
        .notebook
        .as_ref()
        .map_or_else(|| Ok(Vec::new()), |notebook| kept(&desk, notebook))?;
    let signer = key_of(surroundings, key, &records.roster)?;
    let fingerprint = signer.1.public_key().fingerprint();
    let says = TextLine::new("roster and people as they stand").into_iter();
    let declaration = Declaration {
        notebook: records.identity.clone(),
        files,
        says: says.collect(),
    };
    let mut hand = Hand::of(&desk, records, surroundings, signer, None)?;
    let sealed = hand
        .sign(None, |signing| {
            record::declare(&declaration, Meaning::Roster, signing)
        })
        .map_err(KeeperError::Record)?;
    hand.take(sealed.entry, &sealed.register_addition);
    Ok(RosterSigned {
        fingerprint,
        register: hand.write_register()?,
    })
}

/// Roster and people with their digests, in the order of their paths; people may be absent.
fn kept(desk: &Desk, notebook: &Notebook) -> Result<Vec<Named<NotebookPath>>, KeeperError> {
    let mut files = Vec::new();
    for path in [&notebook.roster, &notebook.people_file] {
        let bytes = match fs::read(path) {
            Ok(bytes) => bytes,
            Err(error)
                if error.kind() == io::ErrorKind::NotFound && *path == notebook.people_file =>
            {
                continue;
            }
            Err(error) => {
                return Err(KeeperError::File {
                    path: path.clone(),
                    error,
                });
            }
        };
        let relative = desk.relative(path);
        let name = NotebookPath::new(&relative).map_err(|fault| KeeperError::Path {
            path: relative,
            fault,
        })?;
        files.push(Named::new(name, Digest::of_lines(&bytes)));
    }
    files.sort_by(|one, other| one.name.cmp(&other.name));
    Ok(files)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory};
    use crate::procedure::{enrol, examine};

    #[test]
    fn a_roster_that_was_rewritten_is_found_by_the_keepers_fingerprint() {
        let laboratory = Laboratory::with(ACETIC);
        let (page, surroundings) = (laboratory.page(), laboratory.surroundings());
        let key = laboratory.path("keys/bench.analyst.pub");
        enrol(&page, "bench.analyst", &key, None, &surroundings).unwrap();
        let signed = sign_roster(&page, &KeyChoice::default(), &surroundings).unwrap();
        let found = || -> Vec<&'static str> {
            let examined = examine(&page, Some(&signed.fingerprint), &surroundings).unwrap();
            let findings = examined.findings.iter();
            findings.map(record::Finding::name).collect()
        };
        assert_eq!(found(), [""; 0]);
        let roster = laboratory.read("notebook/roster");
        laboratory.write("notebook/roster", &format!("# rewritten\n{roster}"));
        assert_eq!(found(), ["roster-not-the-keepers"]);
    }
}
