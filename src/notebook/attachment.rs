//! Files beside a page: readings, constants, plots. Never outside the notebook, never through a link.

use crate::notebook::{FileError, read_page};
use std::fs;
use std::path::{Component, Path, PathBuf};

/// Largest attachment in bytes.
const LARGEST: usize = 16 * 1024 * 1024;

/// Why an attachment is not read.
#[derive(Debug, thiserror::Error)]
pub enum AttachmentError {
    /// The path is not a plain relative one.
    #[error(
        "the path must be relative, with forward slashes and without `..` that leaves the notebook"
    )]
    Path,
    /// A part of the path is a symbolic link.
    #[error("a part of its path is a symbolic link")]
    Link,
    /// The file cannot be read.
    #[error("{0}")]
    File(#[from] FileError),
}

/// The bytes of a file named relative to a page's folder; `root` is the notebook, or the page's folder where there is none.
///
/// # Errors
/// [`AttachmentError`]: above all where the path leaves the notebook or passes through a link.
pub fn attachment(root: &Path, page_folder: &Path, name: &str) -> Result<Vec<u8>, AttachmentError> {
    Ok(read_page(&located(root, page_folder, name)?, LARGEST)?)
}

fn located(root: &Path, page_folder: &Path, name: &str) -> Result<PathBuf, AttachmentError> {
    if name.is_empty()
        || name.contains('\\')
        || name.contains('\0')
        || Path::new(name).is_absolute()
    {
        return Err(AttachmentError::Path);
    }
    let inside = page_folder
        .strip_prefix(root)
        .map_err(|_outside| AttachmentError::Path)?;
    let mut parts: Vec<std::ffi::OsString> = inside
        .components()
        .map(|part| part.as_os_str().to_owned())
        .collect();
    for part in Path::new(name).components() {
        match part {
            Component::Normal(part) => parts.push(part.to_owned()),
            Component::CurDir => {}
            Component::ParentDir => {
                parts.pop().ok_or(AttachmentError::Path)?;
            }
            Component::Prefix(_) | Component::RootDir => return Err(AttachmentError::Path),
        }
    }
    let mut path = root.to_owned();
    for part in parts {
        path.push(part);
        if fs::symlink_metadata(&path).is_ok_and(|metadata| metadata.is_symlink()) {
            return Err(AttachmentError::Link);
        }
    }
    Ok(path)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_path_stays_inside() {
        let folder = tempfile::tempdir().unwrap();
        let page_folder = folder.path().join("rinse");
        fs::create_dir(&page_folder).unwrap();
        crate::notebook::create(&folder.path().join("run.csv"), b"x").unwrap();
        let read = |name| attachment(folder.path(), &page_folder, name);
        assert_eq!(read("../run.csv").unwrap(), b"x");
        for name in ["../../run.csv", "/etc/hostname", "", "a\\b"] {
            assert!(matches!(read(name), Err(AttachmentError::Path)), "{name}");
        }
    }

    #[cfg(unix)]
    #[test]
    fn a_link_is_not_followed() {
        let folder = tempfile::tempdir().unwrap();
        std::os::unix::fs::symlink("/etc", folder.path().join("readings")).unwrap();
        let read = attachment(folder.path(), folder.path(), "readings/hostname");
        assert!(matches!(read, Err(AttachmentError::Link)));
    }
}
