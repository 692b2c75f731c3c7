//! Which files of a folder are pages, in a stable order.

use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// Folders nested deeper than this are not searched.
const DEEPEST: usize = 32;

/// The pages of a folder, and what was passed over.
#[derive(Debug, Default)]
pub struct PageList {
    /// Every `.md` file, sorted by path.
    pub pages: Vec<PathBuf>,
    /// Symbolic links, which are not followed.
    pub links: Vec<PathBuf>,
}

/// The pages below a folder, hidden files, `target`, registers and links passed over.
///
/// # Errors
/// The system's error where a folder cannot be read.
pub fn pages_below(folder: &Path) -> io::Result<PageList> {
    let mut list = PageList::default();
    gather(folder, 0, &mut list)?;
    list.pages.sort();
    list.links.sort();
    Ok(list)
}

fn gather(folder: &Path, depth: usize, list: &mut PageList) -> io::Result<()> {
    if depth > DEEPEST {
        return Ok(());
    }
    for entry in fs::read_dir(folder)? {
        let entry = entry?;
        let name = entry.file_name();
        let name = name.to_string_lossy();
        let kind = entry.file_type()?;
        if name.starts_with('.') {
            continue;
        }
        if kind.is_symlink() {
            list.links.push(entry.path());
        } else if kind.is_dir() {
            if name != "registers" && name != "target" {
                gather(&entry.path(), depth + 1, list)?;
            }
        } else if kind.is_file()
            && Path::new(name.as_ref())
                .extension()
                .is_some_and(|extension| extension.eq_ignore_ascii_case("md"))
        {
            list.pages.push(entry.path());
        }
    }
    Ok(())
}
