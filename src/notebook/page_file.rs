//! A page's bytes from its file, with the limits that keep a wrong file from being read.

use std::fs;
use std::io::{self, Read};
use std::path::Path;

/// Why a file cannot be read.
#[derive(Debug, thiserror::Error)]
pub enum FileError {
    /// There is no such file.
    #[error("there is no such file")]
    Missing,
    /// It is a directory.
    #[error("it is a directory; name the pages in it, or a pattern such as `folder/*.md`")]
    Directory,
    /// It is neither a file nor a link to one.
    #[error("it is not an ordinary file")]
    NotAFile,
    /// It is a symbolic link, which is not followed for something that is to be replaced or signed.
    #[error("it is a symbolic link; name the file itself")]
    Link,
    /// It is larger than what is read.
    #[error("it has {size} bytes; {limit} bytes at most are read")]
    TooLarge {
        /// Its size.
        size: u64,
        /// The limit.
        limit: u64,
    },
    /// The system refuses.
    #[error("{0}")]
    System(#[from] io::Error),
}

/// Reads a page of at most `limit` bytes.
///
/// # Errors
/// [`FileError`] says why not.
pub fn read_page(path: &Path, limit: usize) -> Result<Vec<u8>, FileError> {
    let limit = u64::try_from(limit).unwrap_or(u64::MAX);
    let metadata = fs::symlink_metadata(path).map_err(|error| match error.kind() {
        io::ErrorKind::NotFound => FileError::Missing,
        _ => FileError::System(error),
    })?;
    if metadata.is_symlink() {
        return Err(FileError::Link);
    }
    if metadata.is_dir() {
        return Err(FileError::Directory);
    }
    if !metadata.is_file() {
        return Err(FileError::NotAFile);
    }
    if metadata.len() > limit {
        return Err(FileError::TooLarge {
            size: metadata.len(),
            limit,
        });
    }
    let mut bytes = Vec::new();
    // The file may grow while it is read.
    fs::File::open(path)?
        .take(limit + 1)
        .read_to_end(&mut bytes)?;
    let size = u64::try_from(bytes.len()).unwrap_or(u64::MAX);
    if size > limit {
        return Err(FileError::TooLarge { size, limit });
    }
    Ok(bytes)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_no_page_is_named() {
        let folder = tempfile::tempdir().unwrap();
        assert!(matches!(
            read_page(folder.path(), 10),
            Err(FileError::Directory)
        ));
        assert!(matches!(
            read_page(&folder.path().join("none.md"), 10),
            Err(FileError::Missing)
        ));
        let page = folder.path().join("page.md");
        create_for_test(&page, b"0123456789");
        assert_eq!(read_page(&page, 10).unwrap(), b"0123456789");
        assert!(matches!(
            read_page(&page, 9),
            Err(FileError::TooLarge { .. })
        ));
    }

    fn create_for_test(path: &Path, bytes: &[u8]) {
        use std::io::Write;
        fs::File::create(path).unwrap().write_all(bytes).unwrap();
    }
}
