//! Keys of signers: whose is which, and where it is found.

use crate::procedure::agent::{AgentError, AgentKey};
use crate::procedure::key_file::{LARGEST, at, open};
use crate::procedure::surroundings::Surroundings;
use crate::record::{KeyError, PublicKey, Roster, Signer, SignerName};
use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// Why there is no key.
#[derive(Debug, thiserror::Error)]
pub enum SignerError {
    /// The name makes no signer's name.
    #[error("{name:?} makes no signer's name; use letters, digits, points and hyphens")]
    Name {
        /// The name.
        name: String,
    },
    /// There is no folder for keys.
    #[error("there is no configuration folder for keys; set HOME or XDG_CONFIG_HOME")]
    NoFolder,
    /// There is no key of that signer.
    #[error("there is no key of {signer} in {folder}; make one with `ionfolio signer new` or `--new-signer`", folder = .folder.display())]
    NoKey {
        /// The signer.
        signer: SignerName,
        /// Where keys are kept.
        folder: PathBuf,
    },
    /// Several keys, and nobody said which.
    #[error("there are several keys ({names}); say which with `--signer NAME`")]
    Several {
        /// Their names.
        names: String,
    },
    /// There is no key at all.
    #[error("there is no key yet; make one with `--new-signer \"Your Name\"`")]
    None,
    /// There is a key of that name already.
    #[error("there is a key of {signer} already, in {path}", path = .path.display())]
    Exists {
        /// The signer.
        signer: SignerName,
        /// The key.
        path: PathBuf,
    },
    /// Others may read the key.
    #[error("{path} may be read by others; make it private (chmod 600) and consider the key known", path = .path.display())]
    Exposed {
        /// The key.
        path: PathBuf,
    },
    /// The key cannot be used.
    #[error("{path}: {error}", path = .path.display())]
    Key {
        /// The key.
        path: PathBuf,
        /// Why.
        error: KeyError,
    },
    /// The system refuses.
    #[error("{path}: {error}", path = .path.display())]
    System {
        /// The file.
        path: PathBuf,
        /// Why.
        error: io::Error,
    },
    /// A key outside the program's own folder, and nobody said whose it is.
    #[error("{path}: say whose key it is with `--signer NAME`", path = .path.display())]
    Whose {
        /// The key.
        path: PathBuf,
    },
    /// The private half of a public key is nowhere.
    #[error(
        "{path} is a public key; its private half is neither in a file beside it nor in an agent", path = .path.display()
    )]
    PublicOnly {
        /// The public key.
        path: PathBuf,
    },
    /// The agent did not help.
    #[error("{0}")]
    Agent(#[from] AgentError),
    /// There are no random bytes.
    #[error("no random bytes from the system: {0}")]
    Entropy(String),
}

/// The signer's name that a printed name makes: `Bench Analyst` is `bench.analyst`.
///
/// # Errors
/// [`SignerError::Name`].
pub fn signer_name(printed: &str) -> Result<SignerName, SignerError> {
    let joined = printed
        .split_whitespace()
        .collect::<Vec<_>>()
        .join(".")
        .to_lowercase();
    let plain: String = joined
        .chars()
        .map(|c| match c {
            'ä' | 'à' | 'á' | 'â' | 'å' => 'a',
            'ö' | 'ò' | 'ó' | 'ô' | 'ø' => 'o',
            'ü' | 'ù' | 'ú' | 'û' => 'u',
            'é' | 'è' | 'ê' | 'ë' => 'e',
            'í' | 'ì' | 'î' | 'ï' => 'i',
            'ç' => 'c',
            'ñ' => 'n',
            'ß' => 's',
            other => other,
        })
        .collect();
    let unusable = || SignerError::Name {
        name: printed.to_owned(),
    };
    // A key's public half stands beside it under the name with `.pub`.
    if Path::new(&plain)
        .extension()
        .is_some_and(|end| end == "pub")
    {
        return Err(unusable());
    }
    SignerName::new(&plain).map_err(|_fault| unusable())
}

/// Which key is to sign.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct KeyChoice {
    /// The signer; the only key of the program's own folder otherwise.
    pub signer: Option<SignerName>,
    /// A key elsewhere: a private key's file, or a `.pub` file whose private half an agent holds.
    pub file: Option<PathBuf>,
}

/// A signer with the key that signs.
pub(super) type SignerKey = (SignerName, Box<dyn Signer>);

/// Opens a signer's key: the file that was named; else the key in the program's own folder; else a key that the roster gives the signer,
/// from the user's SSH folder or an agent.
///
/// # Errors
/// [`SignerError`]; a key that others may read is refused.
pub(super) fn key_of(
    surroundings: &Surroundings<'_>,
    choice: &KeyChoice,
    roster: &Roster,
) -> Result<SignerKey, SignerError> {
    if let Some(path) = &choice.file {
        let signer = choice
            .signer
            .clone()
            .ok_or_else(|| SignerError::Whose { path: path.clone() })?;
        return Ok((signer, named_key(surroundings, path)?));
    }
    let folder = surroundings.keys.folder().ok_or(SignerError::NoFolder)?;
    let signer = match &choice.signer {
        Some(signer) => signer.clone(),
        None => only_key(&folder)?,
    };
    let path = folder.join(signer.as_str());
    if path.is_file() {
        let key = open(surroundings, &path)?;
        return Ok((signer, Box::new(key)));
    }
    let enrolled = roster
        .enrolments()
        .filter(|entry| entry.signer == signer && entry.valid_before.is_none());
    for entry in enrolled {
        if let Some(key) = held(surroundings, &entry.key)? {
            return Ok((signer, key));
        }
    }
    Err(SignerError::NoKey { signer, folder })
}

/// Whether the program's own folder holds a key of a signer.
pub fn has_key(surroundings: &Surroundings<'_>, signer: &SignerName) -> bool {
    let folder = surroundings.keys.folder();
    folder.is_some_and(|folder| folder.join(signer.as_str()).is_file())
}

fn named_key(surroundings: &Surroundings<'_>, path: &Path) -> Result<Box<dyn Signer>, SignerError> {
    if path.extension().is_none_or(|extension| extension != "pub") {
        return Ok(Box::new(open(surroundings, path)?));
    }
    let unreadable = || at(path, KeyError::Unreadable);
    let public = public_key(path).ok_or_else(unreadable)?;
    let private = path.with_extension("");
    match in_agent(surroundings, &public) {
        Ok(Some(key)) => Ok(key),
        _ if private.is_file() => Ok(Box::new(open(surroundings, &private)?)),
        Ok(None) => Err(SignerError::PublicOnly {
            path: path.to_owned(),
        }),
        Err(error) => Err(error),
    }
}

/// A key by its public half: in an agent, or in the user's SSH folder.
fn held(
    surroundings: &Surroundings<'_>,
    public: &PublicKey,
) -> Result<Option<Box<dyn Signer>>, SignerError> {
    // An agent that cannot be asked is told of only where no file has the key either.
    let asked = match in_agent(surroundings, public) {
        Ok(Some(key)) => return Ok(Some(key)),
        other => other,
    };
    let Some(entries) = surroundings
        .keys
        .ssh_folder()
        .and_then(|folder| fs::read_dir(folder).ok())
    else {
        return asked;
    };
    let private = entries
        .flatten()
        .map(|entry| entry.path())
        .filter(|path| path.extension().is_some_and(|extension| extension == "pub"))
        .find(|path| public_key(path).is_some_and(|other| other.is_same_key(public)))
        .map(|path| path.with_extension(""))
        .filter(|path| path.is_file());
    match private {
        Some(path) => Ok(Some(Box::new(open(surroundings, &path)?))),
        None => asked,
    }
}

fn in_agent(
    surroundings: &Surroundings<'_>,
    public: &PublicKey,
) -> Result<Option<Box<dyn Signer>>, SignerError> {
    let Some(socket) = surroundings.keys.agent() else {
        return Ok(None);
    };
    let key = AgentKey::held(&socket, public)?;
    Ok(key.map(|key| -> Box<dyn Signer> { Box::new(key) }))
}

fn public_key(path: &Path) -> Option<PublicKey> {
    let small = fs::metadata(path).is_ok_and(|metadata| metadata.len() <= LARGEST);
    let text = small.then(|| fs::read_to_string(path).ok()).flatten()?;
    PublicKey::parse(text.trim_end()).ok()
}

fn only_key(folder: &Path) -> Result<SignerName, SignerError> {
    let mut names: Vec<SignerName> = Vec::new();
    if let Ok(entries) = fs::read_dir(folder) {
        for entry in entries.flatten() {
            let name = entry.file_name();
            let name = name.to_string_lossy();
            if entry
                .path()
                .extension()
                .is_none_or(|extension| extension != "pub")
                && let Ok(signer) = SignerName::new(&name)
            {
                names.push(signer);
            }
        }
    }
    names.sort();
    match names.as_slice() {
        [] => Err(SignerError::None),
        [only] => Ok(only.clone()),
        several => {
            let names: Vec<&str> = several.iter().map(SignerName::as_str).collect();
            Err(SignerError::Several {
                names: names.join(", "),
            })
        }
    }
}
