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
    /// Other private keys of the user, such as those in `~/.ssh`.
    fn others(&self) -> Vec<PathBuf>;
    /// Asks for the passphrase of a key; `None` where nobody can be asked.
    fn passphrase(&self, key: &str) -> Option<Zeroizing<String>>;
}

/// Which program this is.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Program {
    /// Name and version: `ionfolio 0.1.0`.
    pub name: String,
    /// The bytes of the program's file, from which its digest is made; empty where they cannot be read.
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
