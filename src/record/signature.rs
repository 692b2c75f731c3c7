//! SSH signatures (OpenSSH's `PROTOCOL.sshsig`) under the namespace `ionfolio`, as `ssh-keygen -Y` makes and checks.

use std::fmt;

use ssh_key::{Algorithm, EcdsaCurve, HashAlg, LineEnding, SshSig};

/// The namespace of every signature; a signature made for anything else fits no act.
pub const NAMESPACE: &str = "ionfolio";

/// A public key of a kind that may sign: Ed25519 in a file, an agent or a security key, or ECDSA on P-256 in a file or an
/// agent.
///
/// ECDSA keys of security keys are not taken: the library in use cannot write their signatures, so that one signature
/// could not be held to one spelling.
#[derive(Clone, PartialEq, Eq)]
pub struct PublicKey(ssh_key::PublicKey);

/// Why a line is not a public key that may sign.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum PublicKeyError {
    /// Not an OpenSSH public key.
    #[error("is not an OpenSSH public key")]
    Unreadable,
    /// A kind of key that is not taken.
    #[error("is not an Ed25519 or ECDSA P-256 key")]
    Kind,
}

impl PublicKey {
    /// Reads a line `TYPE BASE64 [COMMENT]`, as a `.pub` file holds it.
    ///
    /// # Errors
    ///
    /// [`PublicKeyError`] for another text, or a kind of key that is not taken.
    pub fn parse(line: &str) -> Result<Self, PublicKeyError> {
        let key = ssh_key::PublicKey::from_openssh(line.trim())
            .map_err(|_unreadable| PublicKeyError::Unreadable)?;
        Self::of(key)
    }

    /// Reads a key in the binary form in which an agent lists it.
    ///
    /// # Errors
    ///
    /// [`PublicKeyError`] for other bytes, or a kind of key that is not taken.
    pub fn from_wire(bytes: &[u8]) -> Result<Self, PublicKeyError> {
        let key = ssh_key::PublicKey::from_bytes(bytes)
            .map_err(|_unreadable| PublicKeyError::Unreadable)?;
        Self::of(key)
    }

    pub(super) fn of(key: ssh_key::PublicKey) -> Result<Self, PublicKeyError> {
        let taken = matches!(
            key.algorithm(),
            Algorithm::Ed25519
                | Algorithm::SkEd25519
                | Algorithm::Ecdsa {
                    curve: EcdsaCurve::NistP256
                }
        );
        taken.then_some(Self(key)).ok_or(PublicKeyError::Kind)
    }

    /// The binary form, by which an agent knows the key.
    #[must_use]
    pub fn wire(&self) -> Vec<u8> {
        self.0.to_bytes().unwrap_or_default()
    }

    /// The line of a `.pub` file, without a line end.
    #[must_use]
    pub fn print(&self) -> String {
        self.0.to_openssh().unwrap_or_default()
    }

    /// The SHA-256 fingerprint as `ssh-keygen -l` prints it: `SHA256:` and base64.
    #[must_use]
    pub fn fingerprint(&self) -> String {
        self.0.fingerprint(HashAlg::Sha256).to_string()
    }

    /// The remark that follows the key.
    pub fn comment(&self) -> &str {
        self.0.comment()
    }

    /// Whether both are one key, whatever their remarks.
    #[must_use]
    pub fn is_same_key(&self, other: &Self) -> bool {
        self.0.key_data() == other.0.key_data()
    }
}

impl fmt::Debug for PublicKey {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "PublicKey({})", self.fingerprint())
    }
}

/// Whoever can sign: a key file, an agent, a security key.
pub trait Signer {
    /// The key whose signatures it makes.
    fn public_key(&self) -> &PublicKey;

    /// Signs a message under a namespace.
    ///
    /// An agent signs [`Signature::signed_data`] and hands its answer to [`Signature::of_agent`].
    ///
    /// # Errors
    ///
    /// [`SigningError`] if the key cannot be used.
    fn sign(&self, namespace: &str, message: &[u8]) -> Result<Signature, SigningError>;
}

/// Why no signature was made.
#[derive(Debug, thiserror::Error)]
pub enum SigningError {
    /// The holder of the key (an agent, a security key) failed or refused.
    #[error("the holder of the key did not sign")]
    Holder(#[source] Box<dyn std::error::Error + Send + Sync>),
    /// What came back is not a signature of this key over this message.
    #[error("what the holder of the key gave back {0}")]
    Answer(#[from] SignatureFault),
}

/// What is wrong with a signature.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum SignatureFault {
    /// Not in the armour that `ssh-keygen` writes.
    #[error("is not in the form that ssh-keygen writes")]
    Armour,
    /// Armoured, but not an SSH signature of version 1.
    #[error("is not an SSH signature of version 1")]
    Unreadable,
    /// Made for another purpose.
    #[error("was made under another namespace than `ionfolio`")]
    Namespace,
    /// Hashed otherwise than with SHA-512, or with reserved bytes set.
    #[error("is not over a SHA-512 hash")]
    Hash,
    /// Made by a kind of key that is not taken.
    #[error("was made with another kind of key than Ed25519 or ECDSA P-256")]
    Kind,
    /// Made by another key.
    #[error("was made with another key")]
    Key,
    /// Does not fit what is signed.
    #[error("does not fit what stands above it")]
    Wrong,
}

/// An armoured SSH signature, kept as it stands.
#[derive(Clone, PartialEq, Eq)]
pub struct Signature {
    armour: String,
    decoded: SshSig,
}

impl Signature {
    /// Reads the armour, from its first line to the line end after its last.
    ///
    /// # Errors
    ///
    /// [`SignatureFault`] if the armour is not in the one form that `ssh-keygen` writes, or what it holds is not a
    /// version 1 signature of a known kind of key over a SHA-512 hash. The namespace is checked by [`Self::verify`].
    pub fn parse(armour: &str) -> Result<Self, SignatureFault> {
        let decoded = SshSig::from_pem(armour).map_err(|_unreadable| SignatureFault::Unreadable)?;
        if decoded.version() != SshSig::VERSION {
            return Err(SignatureFault::Unreadable);
        }
        if decoded.hash_alg() != HashAlg::Sha512 || !decoded.reserved().is_empty() {
            return Err(SignatureFault::Hash);
        }
        let signature = Self {
            armour: armour.to_owned(),
            decoded,
        };
        signature.public_key()?;
        // The reader overlooks some wrong lengths and spellings, which `ssh-keygen` does not.
        if print(&signature.decoded)? != armour {
            return Err(SignatureFault::Armour);
        }
        Ok(signature)
    }

    /// The bytes that an agent is to sign for a message: `PROTOCOL.sshsig`, with SHA-512.
    ///
    /// # Errors
    ///
    /// [`SignatureFault::Namespace`] if the namespace is empty.
    pub fn signed_data(namespace: &str, message: &[u8]) -> Result<Vec<u8>, SignatureFault> {
        SshSig::signed_data(namespace, HashAlg::Sha512, message)
            .map_err(|_empty| SignatureFault::Namespace)
    }

    /// Makes the signature from an agent's answer: the binary form of a signature over [`Self::signed_data`].
    ///
    /// # Errors
    ///
    /// [`SigningError`] if the answer cannot be read, or is no signature of this key.
    pub fn of_agent(key: &PublicKey, namespace: &str, answer: &[u8]) -> Result<Self, SigningError> {
        let raw = ssh_key::Signature::try_from(answer)
            .map_err(|_unreadable| SignatureFault::Unreadable)?;
        let made = SshSig::new(key.0.key_data().clone(), namespace, HashAlg::Sha512, raw)
            .map_err(|_unreadable| SignatureFault::Unreadable)?;
        Ok(Self::of(&made)?)
    }

    pub(super) fn of(made: &SshSig) -> Result<Self, SignatureFault> {
        Self::parse(&print(made)?)
    }

    /// The armour, with LF, ended by one.
    pub fn armour(&self) -> &str {
        &self.armour
    }

    /// The key that it says made it; [`Self::verify`] tells whether that is so.
    ///
    /// # Errors
    ///
    /// [`SignatureFault::Kind`] for a kind of key that is not taken.
    pub fn public_key(&self) -> Result<PublicKey, SignatureFault> {
        PublicKey::of(self.decoded.public_key().clone().into())
            .map_err(|_other| SignatureFault::Kind)
    }

    /// Whether the key made this signature over the message under the namespace `ionfolio`.
    ///
    /// # Errors
    ///
    /// [`SignatureFault`]: another namespace, another key, or not over this message.
    pub fn verify(&self, message: &[u8], key: &PublicKey) -> Result<(), SignatureFault> {
        if self.decoded.namespace() != NAMESPACE {
            return Err(SignatureFault::Namespace);
        }
        if self.decoded.public_key() != key.0.key_data() {
            return Err(SignatureFault::Key);
        }
        key.0
            .verify(NAMESPACE, message, &self.decoded)
            .map_err(|_wrong| SignatureFault::Wrong)
    }
}

impl fmt::Debug for Signature {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "Signature({})", self.armour)
    }
}

/// The one spelling of a signature: the armour that `ssh-keygen` writes.
fn print(signature: &SshSig) -> Result<String, SignatureFault> {
    let mut armour = signature
        .to_pem(LineEnding::LF)
        .map_err(|_unwritable| SignatureFault::Unreadable)?;
    if !armour.ends_with('\n') {
        armour.push('\n');
    }
    Ok(armour)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::specimen::key;

    #[test]
    fn a_signature_fits_its_message_key_and_namespace() {
        let (mine, other) = (key("analyst"), key("reviewer"));
        let signature = mine.sign(NAMESPACE, b"lines\n").unwrap();
        let verify = |message: &[u8], key: &PublicKey| signature.verify(message, key);
        assert_eq!(verify(b"lines\n", mine.public_key()), Ok(()));
        assert_eq!(
            verify(b"lines", mine.public_key()),
            Err(SignatureFault::Wrong)
        );
        assert_eq!(
            verify(b"lines\n", other.public_key()),
            Err(SignatureFault::Key)
        );
        let file = mine.sign("file", b"lines\n").unwrap();
        let found = file.verify(b"lines\n", mine.public_key());
        assert_eq!(found, Err(SignatureFault::Namespace));
    }

    #[test]
    fn an_agents_answer_makes_the_same_signature() {
        let mine = key("analyst");
        let signature = mine.sign(NAMESPACE, b"lines\n").unwrap();
        let answer = Vec::try_from(signature.decoded.signature().clone()).unwrap();
        let key = PublicKey::from_wire(&mine.public_key().wire()).unwrap();
        assert_eq!(
            Signature::of_agent(&key, NAMESPACE, &answer).unwrap(),
            signature
        );
    }

    #[test]
    fn a_signature_has_one_spelling() {
        let armour = key("analyst")
            .sign(NAMESPACE, b"x")
            .unwrap()
            .armour()
            .to_owned();
        let rewrapped = armour.replacen("U1NI", "U1NI\n", 1);
        for other in [
            armour.trim_start_matches('-'),
            &format!("{armour}\n"),
            &rewrapped,
            armour.trim_end(),
        ] {
            assert!(Signature::parse(other).is_err(), "{other}");
        }
    }
}
