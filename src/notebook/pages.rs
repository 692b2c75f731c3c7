//! Which files of a folder are pages, in a stable order.

use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// Folders nested deeper than this are an error: a page that nobody looks at would pass for one that verifies.
const DEEPEST: usize = 32;

/// The pages of a folder, and what was passed over.
#[derive(Debug, Default)]
pub struct PageList {
    /// Every `.md` file, sorted by path.
    pub pages: Vec<PathBuf>,
    /// Symbolic links, which are not followed.
    pub links: Vec<PathBuf>,
}

/// The pages below a folder; hidden files, links and the notebook's folder of registers are passed over.
///
/// # Errors
/// The system's error where a folder cannot be read.
pub fn pages_below(folder: &Path, registers: Option<&Path>) -> io::Result<PageList> {
    let mut list = PageList::default();
    gather(folder, registers, 0, &mut list)?;
    list.pages.sort();
    list.links.sort();
    Ok(list)
}

fn gather(
    folder: &Path,
    registers: Option<&Path>,
    depth: usize,
    list: &mut PageList,
) -> io::Result<()> {
    if depth > DEEPEST {
        return Err(io::Error::other(format!(
            "{}: folders are nested deeper than {DEEPEST}",
            folder.display()
        )));
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
            if registers != Some(entry.path().as_path()) {
                gather(&entry.path(), registers, depth + 1, list)?;
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pages_come_in_order_without_registers_and_links() {
        let folder = tempfile::tempdir().unwrap();
        for name in [
            "b/2.md",
            "a/1.md",
            "acts/bench.md",
            ".git/x.md",
            "b/run.csv",
        ] {
            let path = folder.path().join(name);
            fs::create_dir_all(path.parent().unwrap()).unwrap();
            crate::notebook::create(&path, b"x").unwrap();
        }
        #[cfg(unix)]
        std::os::unix::fs::symlink(folder.path(), folder.path().join("round")).unwrap();
        let list = pages_below(folder.path(), Some(&folder.path().join("acts"))).unwrap();
        let pages = ["a/1.md", "b/2.md"].map(|name| folder.path().join(name));
        assert_eq!(list.pages, pages);
        #[cfg(unix)]
        assert_eq!(list.links, [folder.path().join("round")]);
    }
}
