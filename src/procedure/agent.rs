//! A key that an SSH agent holds: it signs through the agent's socket and never leaves it.
//!
//! Messages and their numbers are those of the SSH agent protocol (draft-miller-ssh-agent, from memory): each message is its length in four
//! bytes, its number in one, and its fields.

use crate::record::{PublicKey, Signature, Signer, SigningError};
use std::io::{self, Read, Write};
use std::path::{Path, PathBuf};

const REQUEST_IDENTITIES: u8 = 11;
const IDENTITIES_ANSWER: u8 = 12;
const SIGN_REQUEST: u8 = 13;
const SIGN_RESPONSE: u8 = 14;

/// Longest answer that is read, in bytes; the agents in use send no longer ones.
const LONGEST: usize = 256 * 1024;

/// A key in an agent.
#[derive(Clone, Debug)]
pub(super) struct AgentKey {
    socket: PathBuf,
    key: PublicKey,
}

/// Why an agent did not help.
#[derive(Debug, thiserror::Error)]
pub enum AgentError {
    /// The socket cannot be used.
    #[error("the agent cannot be asked: {0}")]
    System(#[from] io::Error),
    /// It does not hold the key, or its user said no.
    #[error("the agent refused; `ssh-add -l` lists what it holds")]
    Refused,
    /// What came back is no answer to what was asked.
    #[error("the agent gave an answer that cannot be read")]
    Answer,
}

impl AgentKey {
    /// The key, if the agent behind a socket holds it.
    ///
    /// # Errors
    /// [`AgentError`] where the agent cannot be asked.
    pub(super) fn held(socket: &Path, key: &PublicKey) -> Result<Option<Self>, AgentError> {
        let answer = exchange(&mut connect(socket)?, &[REQUEST_IDENTITIES])?;
        let held = identities(&answer)?
            .iter()
            .any(|wire| *wire == key.wire().as_slice());
        Ok(held.then(|| Self {
            socket: socket.to_owned(),
            key: key.clone(),
        }))
    }
}

impl Signer for AgentKey {
    fn public_key(&self) -> &PublicKey {
        &self.key
    }

    fn sign(&self, namespace: &str, message: &[u8]) -> Result<Signature, SigningError> {
        let holder = |error: AgentError| SigningError::Holder(Box::new(error));
        let data = Signature::signed_data(namespace, message)?;
        let mut stream = connect(&self.socket).map_err(|error| holder(error.into()))?;
        let answer = signed_by(&mut stream, &self.key.wire(), &data).map_err(holder)?;
        Signature::of_agent(&self.key, namespace, &answer)
    }
}

#[cfg(unix)]
fn connect(socket: &Path) -> io::Result<impl Read + Write + use<>> {
    std::os::unix::net::UnixStream::connect(socket)
}

#[cfg(not(unix))]
fn connect(_socket: &Path) -> io::Result<io::Cursor<Vec<u8>>> {
    Err(io::Error::from(io::ErrorKind::Unsupported))
}

/// Asks for a signature; gives back its binary form.
fn signed_by(
    stream: &mut (impl Read + Write),
    key: &[u8],
    data: &[u8],
) -> Result<Vec<u8>, AgentError> {
    let mut request = vec![SIGN_REQUEST];
    request.extend(field(key)?);
    request.extend(field(data)?);
    request.extend([0; 4]);
    let answer = exchange(stream, &request)?;
    let mut rest = expecting(&answer, SIGN_RESPONSE)?;
    Ok(take(&mut rest)?.to_vec())
}

/// The binary forms of the keys in an answer.
fn identities(answer: &[u8]) -> Result<Vec<&[u8]>, AgentError> {
    let mut rest = expecting(answer, IDENTITIES_ANSWER)?;
    let count = number(&mut rest)?;
    let mut keys = Vec::new();
    for _ in 0..count {
        keys.push(take(&mut rest)?);
        take(&mut rest)?;
    }
    Ok(keys)
}

fn exchange(stream: &mut (impl Read + Write), request: &[u8]) -> Result<Vec<u8>, AgentError> {
    stream.write_all(&field(request)?)?;
    stream.flush()?;
    let mut length = [0; 4];
    stream.read_exact(&mut length)?;
    let length = size(length)?;
    if length > LONGEST {
        return Err(AgentError::Answer);
    }
    let mut answer = vec![0; length];
    stream.read_exact(&mut answer)?;
    Ok(answer)
}

fn expecting(answer: &[u8], kind: u8) -> Result<&[u8], AgentError> {
    match answer.split_first() {
        Some((found, rest)) if *found == kind => Ok(rest),
        Some(_) => Err(AgentError::Refused),
        None => Err(AgentError::Answer),
    }
}

fn field(bytes: &[u8]) -> Result<Vec<u8>, AgentError> {
    let length = u32::try_from(bytes.len()).map_err(|_too_long| AgentError::Answer)?;
    Ok([&length.to_be_bytes(), bytes].concat())
}

fn number(rest: &mut &[u8]) -> Result<usize, AgentError> {
    let (bytes, after) = rest.split_first_chunk::<4>().ok_or(AgentError::Answer)?;
    *rest = after;
    size(*bytes)
}

fn size(bytes: [u8; 4]) -> Result<usize, AgentError> {
    usize::try_from(u32::from_be_bytes(bytes)).map_err(|_too_large| AgentError::Answer)
}

fn take<'a>(rest: &mut &'a [u8]) -> Result<&'a [u8], AgentError> {
    let length = number(rest)?;
    let (bytes, after) = rest.split_at_checked(length).ok_or(AgentError::Answer)?;
    *rest = after;
    Ok(bytes)
}

#[cfg(test)]
#[cfg(unix)]
mod tests {
    use super::*;
    use std::os::unix::net::UnixListener;

    /// An agent that answers each connection with one message.
    fn agent(answers: Vec<Vec<u8>>) -> (tempfile::TempDir, std::thread::JoinHandle<()>) {
        let folder = tempfile::tempdir().unwrap();
        let listener = UnixListener::bind(folder.path().join("agent")).unwrap();
        let thread = std::thread::spawn(move || {
            for answer in answers {
                let (mut stream, _) = listener.accept().unwrap();
                let mut length = [0; 4];
                stream.read_exact(&mut length).unwrap();
                let mut request = vec![0; size(length).unwrap()];
                stream.read_exact(&mut request).unwrap();
                stream.write_all(&field(&answer).unwrap()).unwrap();
            }
        });
        (folder, thread)
    }

    fn key() -> PublicKey {
        let key = crate::record::KeyFile::generate(&[7; 32], "worthless").unwrap();
        Signer::public_key(&key).clone()
    }

    #[test]
    fn a_key_is_used_only_if_the_agent_holds_it() {
        let key = key();
        let mut holds = vec![IDENTITIES_ANSWER, 0, 0, 0, 1];
        holds.extend(field(&key.wire()).unwrap());
        holds.extend(field(b"remark").unwrap());
        let empty = vec![IDENTITIES_ANSWER, 0, 0, 0, 0];
        let (folder, thread) = agent(vec![holds, empty, vec![5]]);
        let socket = folder.path().join("agent");
        assert!(AgentKey::held(&socket, &key).unwrap().is_some());
        assert!(AgentKey::held(&socket, &key).unwrap().is_none());
        let refused = AgentKey::held(&socket, &key);
        assert!(matches!(refused, Err(AgentError::Refused)));
        thread.join().unwrap();
    }

    #[test]
    fn an_answer_cut_short_is_no_answer() {
        for answer in [
            vec![IDENTITIES_ANSWER, 0, 0],
            vec![IDENTITIES_ANSWER, 0, 0, 0, 9, 0],
        ] {
            assert!(matches!(identities(&answer), Err(AgentError::Answer)));
        }
    }
}
