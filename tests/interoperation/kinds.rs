//! Kinds of keys and of signatures that a trial cannot make with `ssh-keygen` alone: a security key, short scalars.

use ionfolio::record::{PublicKey, Signature, Signer, SigningError};
use sha2::{Digest as _, Sha256};
use ssh_key::private::{Ed25519Keypair, KeypairData};
use ssh_key::{PrivateKey, SigningKey, SshSig};

use crate::VERIFY;
use crate::laboratory::{SIGNER, judged, key, roster, sealed};
use crate::shell::Shell;

const ALGORITHM: &[u8] = b"sk-ssh-ed25519@openssh.com";
const APPLICATION: &[u8] = b"ssh:";
/// Flags (somebody touched the key) and a counter, as OpenSSH's `PROTOCOL.u2f` lays them out.
const TRAILER: [u8; 5] = [1, 0, 0, 0, 9];

/// What a security key does, without the hardware (`PROTOCOL.u2f`, SSH U2F signatures; recalled).
struct SecurityKey {
    inside: PrivateKey,
    public: PublicKey,
}

impl SecurityKey {
    fn new() -> Self {
        let pair = Ed25519Keypair::from_seed(&[11; 32]);
        let wire = [ALGORITHM, &pair.public.0, APPLICATION]
            .map(string)
            .concat();
        Self {
            inside: PrivateKey::new(KeypairData::from(pair), "worthless").unwrap(),
            public: PublicKey::from_wire(&wire).unwrap(),
        }
    }
}

impl Signer for SecurityKey {
    fn public_key(&self) -> &PublicKey {
        &self.public
    }

    fn sign(&self, namespace: &str, message: &[u8]) -> Result<Signature, SigningError> {
        let data = Signature::signed_data(namespace, message)?;
        let signed = [
            &Sha256::digest(APPLICATION)[..],
            &TRAILER,
            &Sha256::digest(data)[..],
        ]
        .concat();
        let raw = raw_signature(&self.inside, &signed);
        let answer = [string(ALGORITHM), string(&raw), TRAILER.to_vec()].concat();
        Signature::of_agent(&self.public, namespace, &answer)
    }
}

fn raw_signature(key: &impl SigningKey, message: &[u8]) -> Vec<u8> {
    key.try_sign(message).unwrap().as_bytes().to_vec()
}

/// A string of SSH's wire format: its length in four bytes, and its bytes.
fn string(bytes: &[u8]) -> Vec<u8> {
    let length = u32::try_from(bytes.len()).unwrap();
    [&length.to_be_bytes()[..], bytes].concat()
}

/// And a changed act is found by both.
pub(crate) fn a_security_key_signs_for_both() {
    let key = SecurityKey::new();
    let sealed = sealed(&key);
    let roster = roster(&[(SIGNER, &key)]);
    let act = sealed.act.print();
    let (lines, armour) = act.split_at(act.find("-----BEGIN").unwrap());
    let shell = Shell::new();
    shell.put("roster", roster.print());
    shell.put("t", lines);
    shell.put("s", armour);
    assert!(shell.succeeds(VERIFY));
    assert_eq!(
        judged(
            sealed.record.as_bytes(),
            std::slice::from_ref(&act),
            &roster
        )
        .findings,
        []
    );
    let changed = act.replace("name: Bench", "name: Bensh");
    shell.put("t", lines.replace("name: Bench", "name: Bensh"));
    assert!(!shell.succeeds(VERIFY));
    let verification = judged(sealed.record.as_bytes(), &[changed], &roster);
    assert!(verification.verified.is_none());
}

/// One ECDSA signature in about 128 has a number of less than 32 bytes, which the wire format writes shorter.
pub(crate) fn a_short_ecdsa_signature_fits_in_both() {
    let key = key("ecdsa");
    let shell = Shell::new();
    shell.put("roster", roster(&[(SIGNER, &key)]).print());
    let short = (0..4000).find_map(|number| {
        let message = format!("message {number}\n");
        let signature = key.sign("ionfolio", message.as_bytes()).unwrap();
        let length = SshSig::from_pem(signature.armour())
            .unwrap()
            .signature_bytes()
            .len();
        // Two numbers of 32 bytes with their lengths take 72.
        (length < 72).then_some((message, signature))
    });
    let (message, signature) = short.unwrap();
    let read = Signature::parse(signature.armour()).unwrap();
    assert_eq!(read.verify(message.as_bytes(), key.public_key()), Ok(()));
    shell.put("t", message);
    shell.put("s", signature.armour());
    assert!(shell.succeeds(VERIFY));
}
