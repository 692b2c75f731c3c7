//! Key files: made private from the first byte on, refused where others may read them.

use crate::procedure::signer::SignerError;
use crate::procedure::surroundings::Surroundings;
use crate::record::{KeyError, KeyFile, Lock, Signer, SignerName};
use std::fs::{self, OpenOptions};
use std::io::Write;
use std::path::{Path, PathBuf};
use zeroize::Zeroizing;

/// Largest key file in bytes.
pub(super) const LARGEST: u64 = 64 * 1024;

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

/// Makes a key for a signer, private to the user, locked with a passphrase if one is given.
///
/// # Errors
/// [`SignerError`]; a key that is there already is never overwritten.
pub fn make_key(
    surroundings: &Surroundings<'_>,
    signer: &SignerName,
    passphrase: Option<&str>,
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
    let mut drawn = [0_u8; 20];
    surroundings
        .entropy
        .fill(&mut drawn)
        .map_err(SignerError::Entropy)?;
    let lock = passphrase.map(|passphrase| Lock {
        passphrase,
        entropy: drawn,
    });
    let text = key.print(lock.as_ref()).map_err(|error| at(&path, error))?;
    write_private(&path, text.as_bytes())?;
    let public = key_public_line(&key);
    write_public(&folder.join(format!("{signer}.pub")), public.as_bytes())?;
    Ok(KeyMade {
        signer: signer.clone(),
        fingerprint: key.public_key().fingerprint(),
        path,
        permissions: "read and write for you only (0600)",
    })
}

pub(super) fn open(surroundings: &Surroundings<'_>, path: &Path) -> Result<KeyFile, SignerError> {
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

pub(super) fn at(path: &Path, error: KeyError) -> SignerError {
    SignerError::Key {
        path: path.to_owned(),
        error,
    }
}

fn key_public_line(key: &KeyFile) -> String {
    format!("{}\n", key.public_key().print())
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

#[cfg(test)]
#[cfg(unix)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory};
    use crate::procedure::{SealError, signer_name};
    use std::os::unix::fs::PermissionsExt;

    #[test]
    fn each_signer_has_files_of_their_own() {
        let laboratory = Laboratory::with(ACETIC);
        let signer = signer_name("Bench Reviewer").unwrap();
        make_key(&laboratory.surroundings(), &signer, None).unwrap();
        let again = make_key(&laboratory.surroundings(), &signer, None);
        assert!(matches!(again, Err(SignerError::Exists { .. })));
        let (one, other) = ("keys/bench.analyst.pub", "keys/bench.reviewer.pub");
        assert_ne!(laboratory.read(one), laboratory.read(other));
        let mode = |name| {
            fs::metadata(laboratory.path(name))
                .unwrap()
                .permissions()
                .mode()
        };
        assert_eq!(mode("keys") & 0o777, 0o700);
        assert_eq!(mode("keys/bench.analyst") & 0o777, 0o600);
    }

    #[test]
    fn a_key_that_others_may_read_does_not_sign() {
        let laboratory = Laboratory::with(ACETIC);
        let path = laboratory.path("keys/bench.analyst");
        fs::set_permissions(&path, fs::Permissions::from_mode(0o644)).unwrap();
        let refused = laboratory.seal();
        let exposed = matches!(refused, Err(SealError::Signer(SignerError::Exposed { .. })));
        assert!(exposed, "{refused:?}");
        assert_eq!(laboratory.read("notebook/rinse.md"), ACETIC);
    }
}
