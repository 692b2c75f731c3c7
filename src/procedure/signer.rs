//! Keys of signers: where they are, how they are made, how they are opened.

use crate::procedure::surroundings::Surroundings;
use crate::record::{KeyError, KeyFile, SignerName};
use std::fs::{self, OpenOptions};
use std::io::{self, Write};
use std::path::{Path, PathBuf};
use zeroize::Zeroizing;

/// Largest key file in bytes.
const LARGEST: u64 = 64 * 1024;

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
    /// There are no random bytes.
    #[error("no random bytes from the system: {0}")]
    Entropy(String),
}

/// A key that was made.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct KeyMade {
    /// Whose it is.
    pub signer: SignerName,
    /// The private key's file.
    pub path: PathBuf,
    /// Its permissions, in words.
    pub permissions: &'static str,
    /// Fingerprint of the public key.
    pub fingerprint: String,
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
    SignerName::new(&plain).map_err(|_fault| SignerError::Name {
        name: printed.to_owned(),
    })
}

/// Makes a key for a signer, private to the user.
///
/// # Errors
/// [`SignerError`]; a key that is there already is never overwritten.
pub fn make_key(
    surroundings: &Surroundings<'_>,
    signer: &SignerName,
) -> Result<KeyMade, SignerError> {
    let folder = surroundings.keys.folder().ok_or(SignerError::NoFolder)?;
    private_folder(&folder)?;
    let path = folder.join(signer.as_str());
    if path.exists() {
        return Err(SignerError::Exists {
            signer: signer.clone(),
            path,
        });
    }
    let mut seed = Zeroizing::new([0_u8; 32]);
    surroundings
        .entropy
        .fill(seed.as_mut())
        .map_err(SignerError::Entropy)?;
    let key = KeyFile::generate(&seed, signer.as_str()).map_err(|error| at(&path, error))?;
    let text = key.print(None).map_err(|error| at(&path, error))?;
    write_private(&path, text.as_bytes())?;
    let public = key_public_line(&key);
    write_public(&path.with_extension("pub"), public.as_bytes())?;
    Ok(KeyMade {
        signer: signer.clone(),
        fingerprint: crate::record::Signer::public_key(&key).fingerprint(),
        path,
        permissions: "read and write for you only (0600)",
    })
}

/// Opens the key of a signer, or the only key there is.
///
/// # Errors
/// [`SignerError`]; a key that others may read is refused.
pub fn key_of(
    surroundings: &Surroundings<'_>,
    signer: Option<&SignerName>,
) -> Result<(SignerName, KeyFile), SignerError> {
    let folder = surroundings.keys.folder().ok_or(SignerError::NoFolder)?;
    let signer = match signer {
        Some(signer) => signer.clone(),
        None => only_key(&folder)?,
    };
    let path = folder.join(signer.as_str());
    if !path.is_file() {
        return Err(SignerError::NoKey { signer, folder });
    }
    let key = open(surroundings, &path)?;
    Ok((signer, key))
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

fn open(surroundings: &Surroundings<'_>, path: &Path) -> Result<KeyFile, SignerError> {
    let system = |error| SignerError::System {
        path: path.to_owned(),
        error,
    };
    let metadata = fs::metadata(path).map_err(system)?;
    if metadata.len() > LARGEST {
        return Err(at(path, KeyError::Unreadable));
    }
    if exposed(&metadata) {
        return Err(SignerError::Exposed {
            path: path.to_owned(),
        });
    }
    let bytes = Zeroizing::new(fs::read(path).map_err(system)?);
    let locked = KeyFile::is_locked(&bytes).map_err(|error| at(path, error))?;
    let passphrase = if locked {
        surroundings.keys.passphrase(&path.display().to_string())
    } else {
        None
    };
    KeyFile::open(&bytes, passphrase.as_ref().map(|text| text.as_str()))
        .map_err(|error| at(path, error))
}

fn at(path: &Path, error: KeyError) -> SignerError {
    SignerError::Key {
        path: path.to_owned(),
        error,
    }
}

fn key_public_line(key: &KeyFile) -> String {
    format!("{}\n", crate::record::Signer::public_key(key).print())
}

#[cfg(unix)]
fn exposed(metadata: &fs::Metadata) -> bool {
    use std::os::unix::fs::PermissionsExt;
    metadata.permissions().mode() & 0o077 != 0
}

#[cfg(not(unix))]
fn exposed(_metadata: &fs::Metadata) -> bool {
    false
}

fn private_folder(folder: &Path) -> Result<(), SignerError> {
    let mut builder = fs::DirBuilder::new();
    builder.recursive(true);
    #[cfg(unix)]
    {
        use std::os::unix::fs::DirBuilderExt;
        builder.mode(0o700);
    }
    builder.create(folder).map_err(|error| SignerError::System {
        path: folder.to_owned(),
        error,
    })
}

/// Created private from the first byte on.
fn write_private(path: &Path, bytes: &[u8]) -> Result<(), SignerError> {
    let mut options = OpenOptions::new();
    options.write(true).create_new(true);
    #[cfg(unix)]
    {
        use std::os::unix::fs::OpenOptionsExt;
        options.mode(0o600);
    }
    write_with(&options, path, bytes)
}

fn write_public(path: &Path, bytes: &[u8]) -> Result<(), SignerError> {
    let mut options = OpenOptions::new();
    options.write(true).create(true).truncate(true);
    write_with(&options, path, bytes)
}

fn write_with(options: &OpenOptions, path: &Path, bytes: &[u8]) -> Result<(), SignerError> {
    let system = |error| SignerError::System {
        path: path.to_owned(),
        error,
    };
    let mut file = options.open(path).map_err(system)?;
    file.write_all(bytes).map_err(system)?;
    file.sync_all().map_err(system)
}
