//! Private keys in OpenSSH's file format. Nothing secret shows in debug output or errors.

use std::fmt;

use ssh_key::private::{Ed25519Keypair, KeypairData};
use ssh_key::{Cipher, HashAlg, Kdf, LineEnding, PrivateKey};
use zeroize::Zeroizing;

use super::signature::{PublicKey, Signature, SignatureFault, Signer, SigningError};

/// Rounds of bcrypt-pbkdf for a new key, as `ssh-keygen` takes them (OpenSSH 9: 24).
const ROUNDS: u32 = 24;

/// A private key that can sign.
pub struct KeyFile {
    private: PrivateKey,
    public: PublicKey,
}

/// Why a private key cannot be used or made.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum KeyError {
    /// Not a private key in OpenSSH's format.
    #[error("not a private key in OpenSSH's format")]
    Unreadable,
    /// A passphrase is needed.
    #[error("the key is locked with a passphrase")]
    Locked,
    /// The passphrase does not open it.
    #[error("the passphrase does not open the key")]
    Passphrase,
    /// A kind of key that is not taken.
    #[error("the key is neither an Ed25519 nor an ECDSA P-256 key of a file")]
    Kind,
    /// A remark that does not stand on one line.
    #[error("the key's remark does not stand on one line")]
    Comment,
    /// The passphrase to lock with is empty.
    #[error("an empty passphrase locks nothing")]
    Empty,
}

/// A passphrase to lock a new key with, and 20 random bytes that the caller drew for it.
pub struct Lock<'a> {
    /// The passphrase.
    pub passphrase: &'a str,
    /// Random bytes.
    pub entropy: [u8; 20],
}

impl fmt::Debug for Lock<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str("Lock(..)")
    }
}

impl KeyFile {
    /// Whether the bytes are a private key that needs a passphrase.
    ///
    /// # Errors
    ///
    /// [`KeyError::Unreadable`] if they are no private key in OpenSSH's format.
    pub fn is_locked(bytes: &[u8]) -> Result<bool, KeyError> {
        Ok(read(bytes)?.is_encrypted())
    }

    /// Reads a private key, with its passphrase if it is locked.
    ///
    /// # Errors
    ///
    /// [`KeyError`]: unreadable, locked and no passphrase given, the wrong one, or a kind of key that is not taken
    /// (keys of a security key sign through an agent).
    pub fn open(bytes: &[u8], passphrase: Option<&str>) -> Result<Self, KeyError> {
        let read = read(bytes)?;
        let private = match (read.is_encrypted(), passphrase) {
            (false, _) => read,
            (true, None) => return Err(KeyError::Locked),
            (true, Some(passphrase)) => read
                .decrypt(passphrase)
                .map_err(|_wrong| KeyError::Passphrase)?,
        };
        Self::of(private)
    }

    /// Makes an Ed25519 key from 32 random bytes that the caller drew.
    ///
    /// # Errors
    ///
    /// [`KeyError::Comment`] if the remark holds a line end or control character.
    pub fn generate(entropy: &[u8; 32], comment: &str) -> Result<Self, KeyError> {
        if comment.chars().any(char::is_control) {
            return Err(KeyError::Comment);
        }
        let pair = KeypairData::from(Ed25519Keypair::from_seed(entropy));
        let private = PrivateKey::new(pair, comment).map_err(|_unusable| KeyError::Unreadable)?;
        Self::of(private)
    }

    /// The text of the key's file, locked with a passphrase if one is given. To be kept with mode 0600.
    ///
    /// # Errors
    ///
    /// [`KeyError`] if the passphrase is empty or the key cannot be written.
    pub fn print(&self, lock: Option<&Lock<'_>>) -> Result<Zeroizing<String>, KeyError> {
        let unwritable = |_| KeyError::Unreadable;
        let Some(lock) = lock else {
            return self.private.to_openssh(LineEnding::LF).map_err(unwritable);
        };
        if lock.passphrase.is_empty() {
            return Err(KeyError::Empty);
        }
        let (check, salt) = lock
            .entropy
            .split_first_chunk::<4>()
            .ok_or(KeyError::Unreadable)?;
        let kdf = Kdf::Bcrypt {
            salt: salt.to_vec(),
            rounds: ROUNDS,
        };
        self.private
            .encrypt_with(
                Cipher::Aes256Ctr,
                kdf,
                u32::from_be_bytes(*check),
                lock.passphrase,
            )
            .and_then(|locked| locked.to_openssh(LineEnding::LF))
            .map_err(unwritable)
    }

    fn of(private: PrivateKey) -> Result<Self, KeyError> {
        let plain = matches!(
            private.key_data(),
            KeypairData::Ed25519(_) | KeypairData::Ecdsa(_)
        );
        let public =
            PublicKey::of(private.public_key().clone()).map_err(|_other| KeyError::Kind)?;
        plain
            .then_some(Self { private, public })
            .ok_or(KeyError::Kind)
    }
}

impl Signer for KeyFile {
    fn public_key(&self) -> &PublicKey {
        &self.public
    }

    fn sign(&self, namespace: &str, message: &[u8]) -> Result<Signature, SigningError> {
        let made = self
            .private
            .sign(namespace, HashAlg::Sha512, message)
            .map_err(|_unusable| SignatureFault::Namespace)?;
        Ok(Signature::of(&made)?)
    }
}

impl fmt::Debug for KeyFile {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "KeyFile({})", self.public.fingerprint())
    }
}

fn read(bytes: &[u8]) -> Result<PrivateKey, KeyError> {
    PrivateKey::from_openssh(bytes).map_err(|_unreadable| KeyError::Unreadable)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_made_key_is_printed_locked_and_opened_again() {
        let key = KeyFile::generate(&[7; 32], "bench.analyst").unwrap();
        let lock = Lock {
            passphrase: "seven buffers",
            entropy: [3; 20],
        };
        let locked = key.print(Some(&lock)).unwrap();
        assert_eq!(KeyFile::is_locked(locked.as_bytes()), Ok(true));
        let open = |passphrase| KeyFile::open(locked.as_bytes(), passphrase).map(|key| key.public);
        assert_eq!(open(None), Err(KeyError::Locked));
        assert_eq!(open(Some("six buffers")), Err(KeyError::Passphrase));
        assert!(
            open(Some("seven buffers"))
                .unwrap()
                .is_same_key(&key.public)
        );
        let plain = key.print(None).unwrap();
        let again = KeyFile::open(plain.as_bytes(), None).unwrap();
        assert_eq!(again.public.comment(), "bench.analyst");
    }

    #[test]
    fn nothing_secret_shows() {
        let key = KeyFile::generate(&[7; 32], "x").unwrap();
        let shown = format!("{key:?}");
        assert!(shown.starts_with("KeyFile(SHA256:"), "{shown}");
        let lock = Lock {
            passphrase: "seven",
            entropy: [0; 20],
        };
        assert_eq!(format!("{lock:?}"), "Lock(..)");
    }

    #[test]
    fn remarks_stand_on_one_line() {
        let made = KeyFile::generate(&[7; 32], "a\nb").map(|key| key.public);
        assert_eq!(made, Err(KeyError::Comment));
    }
}
