//! Replacing a file so that nobody ever sees a part of it: written beside, synced, renamed, the folder synced.

use std::fs::{self, File};
use std::io::{self, Write};
use std::path::Path;

/// Why a file was not replaced; it is as it was.
#[derive(Debug, thiserror::Error)]
pub enum ReplaceError {
    /// Somebody changed it since it was read.
    #[error("it changed while it was worked on; nothing was written, run the command again")]
    Changed,
    /// It may not be written.
    #[error("it is read-only; nothing was written")]
    ReadOnly,
    /// There is a file of that name already.
    #[error("there is a file of that name already; nothing was written")]
    Exists,
    /// The system refuses.
    #[error("{0}; nothing was written")]
    System(#[from] io::Error),
}

/// Replaces a file whose bytes were `before` by `after`, keeping its permissions.
///
/// At each moment the file has either all of the old bytes or all of the new ones.
///
/// # Errors
/// [`ReplaceError`]; in each case the file is as it was.
pub fn replace(path: &Path, before: &[u8], after: &[u8]) -> Result<(), ReplaceError> {
    let permissions = fs::metadata(path)?.permissions();
    if permissions.readonly() {
        return Err(ReplaceError::ReadOnly);
    }
    let folder = folder_of(path);
    let mut beside = tempfile::Builder::new()
        .prefix(".ionfolio-")
        .tempfile_in(folder)?;
    beside.write_all(after)?;
    beside.as_file().set_permissions(permissions)?;
    beside.as_file().sync_all()?;
    if fs::read(path)? != before {
        return Err(ReplaceError::Changed);
    }
    beside.persist(path).map_err(|error| error.error)?;
    sync_folder(folder)?;
    Ok(())
}

/// Creates a file that is not there yet, whole or not at all.
///
/// # Errors
/// [`ReplaceError::Exists`] where it is there already, else as [`replace`].
pub fn create(path: &Path, bytes: &[u8]) -> Result<(), ReplaceError> {
    let folder = folder_of(path);
    let mut beside = tempfile::Builder::new()
        .prefix(".ionfolio-")
        .tempfile_in(folder)?;
    beside.write_all(bytes)?;
    make_readable(beside.as_file())?;
    beside.as_file().sync_all()?;
    beside
        .persist_noclobber(path)
        .map_err(|error| match error.error.kind() {
            io::ErrorKind::AlreadyExists => ReplaceError::Exists,
            _ => ReplaceError::System(error.error),
        })?;
    sync_folder(folder)?;
    Ok(())
}

fn folder_of(path: &Path) -> &Path {
    path.parent()
        .filter(|folder| !folder.as_os_str().is_empty())
        .unwrap_or_else(|| Path::new("."))
}

/// A temporary file is private; a page or a plot is not.
#[cfg(unix)]
fn make_readable(file: &File) -> io::Result<()> {
    use std::os::unix::fs::PermissionsExt;
    file.set_permissions(fs::Permissions::from_mode(0o644))
}

#[cfg(not(unix))]
fn make_readable(_file: &File) -> io::Result<()> {
    Ok(())
}

/// The new name of a file lasts only when its folder is synced; on systems that cannot, it is the system's word.
#[cfg(unix)]
fn sync_folder(folder: &Path) -> io::Result<()> {
    File::open(folder)?.sync_all()
}

#[cfg(not(unix))]
fn sync_folder(_folder: &Path) -> io::Result<()> {
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn old_or_new_and_nothing_left_beside() {
        let folder = tempfile::tempdir().unwrap();
        let page = folder.path().join("page.md");
        create(&page, b"old").unwrap();
        replace(&page, b"old", b"new").unwrap();
        assert_eq!(fs::read(&page).unwrap(), b"new");
        assert!(matches!(
            replace(&page, b"old", b"newer"),
            Err(ReplaceError::Changed)
        ));
        assert!(matches!(create(&page, b"x"), Err(ReplaceError::Exists)));
        assert_eq!(fs::read(&page).unwrap(), b"new");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1);
    }

    #[test]
    fn a_read_only_page_stays_as_it_is() {
        let folder = tempfile::tempdir().unwrap();
        let page = folder.path().join("page.md");
        create(&page, b"old").unwrap();
        let mut permissions = fs::metadata(&page).unwrap().permissions();
        permissions.set_readonly(true);
        fs::set_permissions(&page, permissions).unwrap();
        assert!(matches!(
            replace(&page, b"old", b"new"),
            Err(ReplaceError::ReadOnly)
        ));
        assert_eq!(fs::read(&page).unwrap(), b"old");
    }
}
