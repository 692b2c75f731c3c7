//! One writer at a time in a notebook. The system gives the lock back when its holder ends, however it ends.

use std::fs::{File, TryLockError};
use std::io;
use std::path::Path;

/// A held lock; it ends with this value.
#[derive(Debug)]
pub struct Lock {
    _file: File,
}

/// Why a lock was not taken.
#[derive(Debug, thiserror::Error)]
pub enum LockError {
    /// Somebody else writes.
    #[error("another run of the program is writing in this notebook; try again when it has ended")]
    Busy,
    /// The system refuses.
    #[error("the notebook cannot be locked: {0}")]
    System(#[from] io::Error),
}

impl Lock {
    /// Takes the lock on a file that stays where it is.
    ///
    /// # Errors
    /// [`LockError::Busy`] where somebody else holds it.
    pub fn on(path: &Path) -> Result<Self, LockError> {
        let file = File::open(path)?;
        match file.try_lock() {
            Ok(()) => Ok(Self { _file: file }),
            Err(TryLockError::WouldBlock) => Err(LockError::Busy),
            Err(TryLockError::Error(error)) => Err(LockError::System(error)),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_second_writer_is_told() {
        let folder = tempfile::tempdir().unwrap();
        let path = folder.path().join("ionfolio.yaml");
        crate::notebook::create(&path, b"title: x\n").unwrap();
        let first = Lock::on(&path).unwrap();
        assert!(matches!(Lock::on(&path), Err(LockError::Busy)));
        drop(first);
        assert!(Lock::on(&path).is_ok());
    }
}
