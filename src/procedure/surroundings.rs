//! The doors to the outside: clock, entropy, keys, and which program this is. They are passed in, so that tests pass fixed ones; no environment
//! variable and no hidden flag sets the clock of the installed program.

use chrono::{DateTime, FixedOffset};
use std::path::PathBuf;
use zeroize::Zeroizing;

/// Tells the time.
pub trait Clock: std::fmt::Debug {
    /// Now, with the offset of a notebook in minutes east of Greenwich.
    fn now(&self, offset_minutes: i32) -> DateTime<FixedOffset>;
}

/// Draws random bytes.
pub trait Entropy: std::fmt::Debug {
    /// Fills bytes from the system's source.
    ///
    /// # Errors
    /// The system's own words where it has none.
    fn fill(&self, bytes: &mut [u8]) -> Result<(), String>;
}

/// Where private keys are kept and how their passphrases are asked for.
pub trait Keys: std::fmt::Debug {
    /// The folder of the user's own keys made by this program.
    fn folder(&self) -> Option<PathBuf>;
    /// Asks for the passphrase of a key; `None` where nobody can be asked.
    fn passphrase(&self, key: &str) -> Option<Zeroizing<String>>;
    /// Asks twice for the passphrase of a new key; `None` where nobody can be asked or the two differ.
    fn new_passphrase(&self, key: &str) -> Option<Zeroizing<String>>;
    /// The folder of the user's SSH keys.
    fn ssh_folder(&self) -> Option<PathBuf>;
    /// The socket of the user's SSH agent.
    fn agent(&self) -> Option<PathBuf>;
}

/// Which program this is.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Program {
    /// Name and version: `ionfolio 0.1.0`.
    pub name: String,
    /// The digest of the program's file, where it can be read.
    pub digest: Option<crate::record::Digest>,
}

/// Everything from outside.
#[derive(Clone, Copy, Debug)]
pub struct Surroundings<'a> {
    /// The clock.
    pub clock: &'a dyn Clock,
    /// The source of random bytes.
    pub entropy: &'a dyn Entropy,
    /// The keys.
    pub keys: &'a dyn Keys,
    /// The program.
    pub program: &'a Program,
}

/// The machine as it is.
#[derive(Clone, Copy, Debug)]
pub struct System;

impl Clock for System {
    #[expect(clippy::disallowed_methods, reason = "this is the clock's door")]
    fn now(&self, offset_minutes: i32) -> DateTime<FixedOffset> {
        let now = chrono::Utc::now();
        match FixedOffset::east_opt(offset_minutes * 60) {
            Some(offset) => now.with_timezone(&offset),
            None => now.fixed_offset(),
        }
    }
}

impl Entropy for System {
    fn fill(&self, bytes: &mut [u8]) -> Result<(), String> {
        getrandom::fill(bytes).map_err(|error| error.to_string())
    }
}

impl Keys for System {
    fn folder(&self) -> Option<PathBuf> {
        let configuration = set("XDG_CONFIG_HOME")
            .or_else(|| set("APPDATA"))
            .or_else(|| set("HOME").map(|home| home.join(".config")))?;
        Some(configuration.join("ionfolio").join("keys"))
    }

    fn passphrase(&self, key: &str) -> Option<Zeroizing<String>> {
        asked(&format!("Passphrase of {key}: "))
    }

    fn new_passphrase(&self, key: &str) -> Option<Zeroizing<String>> {
        let first = asked(&format!("New passphrase of {key}: "))?;
        let second = asked("The same again: ")?;
        (first == second && !first.is_empty()).then_some(first)
    }

    fn ssh_folder(&self) -> Option<PathBuf> {
        set("HOME")
            .or_else(|| set("USERPROFILE"))
            .map(|home| home.join(".ssh"))
    }

    fn agent(&self) -> Option<PathBuf> {
        set("SSH_AUTH_SOCK")
    }
}

#[expect(
    clippy::disallowed_methods,
    reason = "this is the door to the user's folders"
)]
fn set(name: &str) -> Option<PathBuf> {
    std::env::var(name)
        .ok()
        .filter(|value| !value.is_empty())
        .map(PathBuf::from)
}

fn asked(prompt: &str) -> Option<Zeroizing<String>> {
    if !std::io::IsTerminal::is_terminal(&std::io::stdin()) {
        return None;
    }
    rpassword::prompt_password(prompt).ok().map(Zeroizing::new)
}

impl Program {
    /// The running program with the digest of its own file.
    pub fn running() -> Self {
        let bytes = std::env::current_exe().and_then(std::fs::read).ok();
        Self {
            name: format!("ionfolio {}", env!("CARGO_PKG_VERSION")),
            digest: bytes.map(|bytes| crate::record::Digest::of_file(&bytes)),
        }
    }
}
