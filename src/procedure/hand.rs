//! The hand that signs: a signer's key with the registers and the roster at hand, and the register it writes.

use crate::notebook::{ReplaceError, create, replace};
use crate::procedure::Desk;
use crate::procedure::records::Records;
use crate::procedure::surroundings::Surroundings;
use crate::record::{Entry, PublicKey, Register, Signer, SignerName, Signing, Standing, TextLine};
use chrono::{DateTime, FixedOffset, TimeDelta};
use std::fs;
use std::path::PathBuf;

/// A signer about to sign.
pub(super) struct Hand<'s> {
    pub(super) records: Records,
    pub(super) surroundings: &'s Surroundings<'s>,
    pub(super) signer: SignerName,
    /// Whether the signer is on the roster.
    pub(super) on_roster: bool,
    printed: TextLine,
    key: Box<dyn Signer>,
    offset_minutes: i32,
    addition: String,
}

/// Why a signer cannot sign here.
#[derive(Debug, thiserror::Error)]
pub enum HandError {
    /// The roster does not let this key sign for this signer.
    #[error("the roster does not let this key sign for {signer}: {standing}")]
    NotOnRoster {
        /// The signer.
        signer: SignerName,
        /// How the key stands.
        standing: &'static str,
    },
    /// A printed name holds what no record may hold.
    #[error("{printed:?} cannot stand in a record as a printed name")]
    Name {
        /// The printed name.
        printed: String,
    },
    /// The register was not written.
    #[error("{path}: {error}", path = .path.display())]
    Register {
        /// The register.
        path: PathBuf,
        /// Why.
        error: ReplaceError,
    },
}

impl std::fmt::Debug for Hand<'_> {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(formatter, "Hand({})", self.signer)
    }
}

impl<'s> Hand<'s> {
    /// The hand of a signer with a key. A signer that nobody enrolled yet may sign, and is told so; a key that the roster refuses may not.
    pub(super) fn of(
        desk: &Desk,
        mut records: Records,
        surroundings: &'s Surroundings<'s>,
        (signer, key): (SignerName, Box<dyn Signer>),
        printed: Option<&str>,
    ) -> Result<Self, HandError> {
        let offset_minutes = desk
            .notebook
            .as_ref()
            .map_or(0, |notebook| notebook.offset_minutes);
        let now = surroundings.clock.now(offset_minutes);
        let public = key.public_key();
        let refused = |standing| HandError::NotOnRoster {
            signer: signer.clone(),
            standing,
        };
        let standing = records.roster.standing(&signer, public, now);
        match standing {
            Standing::Valid => {}
            Standing::UnknownSigner => records
                .roster
                .enrol(signer.clone(), public.clone(), now - TimeDelta::seconds(1))
                .map_err(|_taken| refused("the key is enrolled for somebody else"))?,
            Standing::UnknownKey => return Err(refused("another key is enrolled")),
            Standing::NotYet(_) => return Err(refused("its dates have not begun")),
            Standing::Retired(_) => return Err(refused("it is retired")),
        }
        let printed = printed_name(&records, &signer, public, printed)?;
        Ok(Self {
            on_roster: standing == Standing::Valid,
            records,
            surroundings,
            signer,
            printed,
            key,
            offset_minutes,
            addition: String::new(),
        })
    }

    /// The time by the notebook's clock.
    pub(super) fn now(&self) -> DateTime<FixedOffset> {
        self.surroundings.clock.now(self.offset_minutes)
    }

    /// Signs with everything that a signature needs.
    pub(super) fn sign<R>(
        &self,
        note: Option<&TextLine>,
        act: impl FnOnce(&Signing<'_>) -> R,
    ) -> R {
        act(&Signing {
            signer: &self.signer,
            name: &self.printed,
            time: self.now(),
            note,
            registers: &self.records.registers,
            roster: &self.records.roster,
            policy: &self.records.policy,
            people: &self.records.people,
            key: self.key.as_ref(),
        })
    }

    /// The signer's register as it is with what was taken into it.
    pub(super) fn register(&self) -> Option<&Register> {
        self.records
            .registers
            .iter()
            .find(|register| *register.signer() == self.signer)
    }

    /// Takes an act into the signer's register, in memory.
    pub(super) fn take(&mut self, entry: Entry, addition: &str) {
        self.addition.push_str(addition);
        let at = self
            .records
            .registers
            .iter()
            .position(|register| *register.signer() == self.signer);
        let before = match at {
            Some(at) => self.records.registers.remove(at),
            None => Register::empty(self.signer.clone()),
        };
        self.records.registers.push(before.with(entry));
    }

    /// Writes what was added to the register, synced; `None` where nothing was.
    pub(super) fn write_register(&self) -> Result<Option<PathBuf>, HandError> {
        if self.addition.is_empty() {
            return Ok(None);
        }
        let folder = &self.records.register_folder;
        let path = folder.join(format!("{}.md", self.signer));
        let failed = |error| HandError::Register {
            path: path.clone(),
            error,
        };
        fs::create_dir_all(folder).map_err(|error| failed(ReplaceError::System(error)))?;
        match fs::read(&path) {
            Ok(before) => {
                let mut after = before.clone();
                after.extend_from_slice(self.addition.as_bytes());
                replace(&path, &before, &after).map_err(failed)?;
            }
            Err(_absent) => create(&path, self.addition.as_bytes()).map_err(failed)?,
        }
        Ok(Some(path))
    }
}

/// The printed name: as `people.yaml` has it; else as it was said; else as the signer's last act with this key has it; else the signer's name.
fn printed_name(
    records: &Records,
    signer: &SignerName,
    key: &PublicKey,
    said: Option<&str>,
) -> Result<TextLine, HandError> {
    if let Some(known) = records
        .people
        .iter()
        .find(|person| person.signer == *signer)
    {
        return Ok(known.name.clone());
    }
    let with_this_key = |entry: &&Entry| {
        let public = entry.act.signature().public_key();
        entry.act.act().signer == *signer && public.is_ok_and(|public| public.is_same_key(key))
    };
    let mut entries = records.registers.iter().flat_map(Register::entries).rev();
    let text = match (said, entries.find(with_this_key)) {
        (Some(said), _) => said,
        (None, Some(entry)) => return Ok(entry.act.act().name.clone()),
        (None, None) => signer.as_str(),
    };
    TextLine::new(text).map_err(|_fault| HandError::Name {
        printed: text.to_owned(),
    })
}
