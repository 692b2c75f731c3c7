//! What the notebook's records are judged against: roster, registers, policy, people.

use crate::notebook::{Notebook, Policy as StatedPolicy};
use crate::record::{Meaning, NotebookId, Person, Policy, Register, Roster, SignerName, TextLine};
use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// Largest register in bytes.
const LARGEST_REGISTER: u64 = 256 * 1024 * 1024;

/// Roster, registers, policy and people, as found.
#[derive(Debug)]
pub(super) struct Records {
    pub(super) identity: NotebookId,
    pub(super) roster: Roster,
    /// Whether there is a roster file at all.
    pub(super) has_roster: bool,
    pub(super) registers: Vec<Register>,
    pub(super) register_folder: PathBuf,
    pub(super) policy: Policy,
    pub(super) people: Vec<Person>,
}

/// Why records cannot be worked with.
#[derive(Debug, thiserror::Error)]
pub enum RecordsError {
    /// There is no notebook around the page.
    #[error(
        "a signed result belongs to a notebook, and there is none here; put a file `ionfolio.yaml` into its folder with the line\n  notebook: {suggestion}"
    )]
    NoNotebook {
        /// An identity that could be used.
        suggestion: String,
    },
    /// The notebook has no identity.
    #[error("the notebook has no identity; add to {path} the line\n  notebook: {suggestion}", path = .path.display())]
    NoIdentity {
        /// The settings file.
        path: PathBuf,
        /// An identity that could be used.
        suggestion: String,
    },
    /// A word of the policy is no act.
    #[error("{word:?} in `policy` is no act; expected reviewed or approved")]
    Policy {
        /// The word.
        word: String,
    },
    /// A file cannot be read.
    #[error("{path}: {error}", path = .path.display())]
    File {
        /// The file.
        path: PathBuf,
        /// Why.
        error: io::Error,
    },
}

impl Records {
    /// The records of a notebook; `drawn` are random bytes for an identity to suggest where there is none.
    pub(super) fn of(notebook: Option<&Notebook>, drawn: [u8; 16]) -> Result<Self, RecordsError> {
        let suggestion = NotebookId::of_random(drawn).to_string();
        let Some(notebook) = notebook else {
            return Err(RecordsError::NoNotebook { suggestion });
        };
        let identity = notebook
            .identity
            .as_deref()
            .and_then(|text| NotebookId::new(text).ok());
        let Some(identity) = identity else {
            return Err(RecordsError::NoIdentity {
                path: notebook.root.join(crate::notebook::SETTINGS_FILE),
                suggestion,
            });
        };
        let roster_bytes = read_if_there(&notebook.roster)?;
        Ok(Self {
            identity,
            has_roster: roster_bytes.is_some(),
            roster: Roster::parse(&roster_bytes.unwrap_or_default()),
            registers: registers(&notebook.registers)?,
            register_folder: notebook.registers.clone(),
            policy: policy(&notebook.policy)?,
            people: people(notebook),
        })
    }
}

fn read_if_there(path: &Path) -> Result<Option<Vec<u8>>, RecordsError> {
    match fs::read(path) {
        Ok(bytes) => Ok(Some(bytes)),
        Err(error) if error.kind() == io::ErrorKind::NotFound => Ok(None),
        Err(error) => Err(RecordsError::File {
            path: path.to_owned(),
            error,
        }),
    }
}

/// Every register of a folder, by signer.
fn registers(folder: &Path) -> Result<Vec<Register>, RecordsError> {
    let failed = |path: &Path, error| RecordsError::File {
        path: path.to_owned(),
        error,
    };
    let entries = match fs::read_dir(folder) {
        Ok(entries) => entries,
        Err(error) if error.kind() == io::ErrorKind::NotFound => return Ok(Vec::new()),
        Err(error) => return Err(failed(folder, error)),
    };
    let mut found = BTreeMap::new();
    for entry in entries {
        let entry = entry.map_err(|error| failed(folder, error))?;
        let path = entry.path();
        let name = entry.file_name();
        let name = name.to_string_lossy();
        let Some(signer) = name
            .strip_suffix(".md")
            .and_then(|stem| SignerName::new(stem).ok())
        else {
            continue;
        };
        let size = entry
            .metadata()
            .map_err(|error| failed(&path, error))?
            .len();
        if size > LARGEST_REGISTER {
            return Err(failed(
                &path,
                io::Error::other("the register is larger than what is read"),
            ));
        }
        let bytes = fs::read(&path).map_err(|error| failed(&path, error))?;
        found.insert(signer.clone(), Register::parse(signer, &bytes));
    }
    Ok(found.into_values().collect())
}

fn policy(stated: &StatedPolicy) -> Result<Policy, RecordsError> {
    let mut required = BTreeSet::new();
    for word in &stated.required {
        match Meaning::parse(word) {
            Ok(Meaning::Performed) => {}
            Ok(meaning @ (Meaning::Reviewed | Meaning::Approved)) => {
                required.insert(meaning);
            }
            Ok(_) | Err(_) => return Err(RecordsError::Policy { word: word.clone() }),
        }
    }
    Ok(Policy {
        required,
        own_review: stated.own_review,
        due_days: stated.review_days,
        reserved: BTreeMap::new(),
    })
}

fn people(notebook: &Notebook) -> Vec<Person> {
    notebook
        .people
        .all()
        .filter_map(|(signer, person)| {
            Some(Person {
                signer: SignerName::new(signer).ok()?,
                name: TextLine::new(&person.name).ok()?,
                roles: person
                    .roles
                    .iter()
                    .filter_map(|role| TextLine::new(role).ok())
                    .collect(),
            })
        })
        .collect()
}
