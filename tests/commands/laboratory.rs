//! A copy of the example notebook in a temporary folder, with keys of its own, and the program run in it.

use std::fs;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

/// A laboratory for one test.
pub(crate) struct Laboratory {
    folder: tempfile::TempDir,
}

/// What a run said.
pub(crate) struct Said {
    /// Exit status.
    pub(crate) status: i32,
    /// Standard output.
    pub(crate) output: String,
    /// Standard error.
    pub(crate) errors: String,
}

impl Laboratory {
    /// A copy of the example notebook.
    pub(crate) fn new() -> Self {
        let folder = tempfile::tempdir().unwrap();
        let source = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples/notebook");
        copy(&source, &folder.path().join("notebook"));
        // A newcomer may have sealed a page of the checkout already: each test starts from the pages as their authors wrote them.
        Self { folder }
    }

    /// A path in the notebook.
    pub(crate) fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join("notebook").join(name)
    }

    /// Where the keys of this laboratory are.
    pub(crate) fn keys(&self) -> PathBuf {
        self.folder.path().join("configuration/ionfolio/keys")
    }

    /// The text of a page.
    pub(crate) fn read(&self, name: &str) -> String {
        fs::read_to_string(self.path(name)).unwrap()
    }

    /// Writes a page.
    pub(crate) fn write(&self, name: &str, text: &str) {
        fs::write(self.path(name), text).unwrap();
    }

    /// The pages that are worked on, by their names; folders that hold finished or tampered ones left out.
    pub(crate) fn pages(&self) -> Vec<String> {
        let mut pages = Vec::new();
        for folder in fs::read_dir(self.path("")).unwrap() {
            let folder = folder.unwrap();
            let name = folder.file_name().into_string().unwrap();
            if !folder.path().is_dir() || ["registers", "sealed"].contains(&name.as_str()) {
                continue;
            }
            for page in fs::read_dir(folder.path()).unwrap() {
                let page = page.unwrap().file_name().into_string().unwrap();
                if Path::new(&page)
                    .extension()
                    .is_some_and(|extension| extension == "md")
                {
                    pages.push(format!("{name}/{page}"));
                }
            }
        }
        pages.sort();
        pages
    }

    /// Runs the program in the notebook.
    pub(crate) fn run(&self, arguments: &[&str]) -> Said {
        self.run_with(arguments, "")
    }

    /// Runs the program with a text on standard input.
    pub(crate) fn run_with(&self, arguments: &[&str], input: &str) -> Said {
        let mut child = Command::new(env!("CARGO_BIN_EXE_ionfolio"))
            .args(arguments)
            .current_dir(self.path(""))
            .env("XDG_CONFIG_HOME", self.folder.path().join("configuration"))
            .env("COLUMNS", "200")
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        // A program that stops early closes the pipe, which is its right.
        child
            .stdin
            .take()
            .unwrap()
            .write_all(input.as_bytes())
            .unwrap_or_default();
        let done = child.wait_with_output().unwrap();
        Said {
            status: done.status.code().unwrap_or(-1),
            output: String::from_utf8_lossy(&done.stdout).into_owned(),
            errors: String::from_utf8_lossy(&done.stderr).into_owned(),
        }
    }
}

fn copy(from: &Path, to: &Path) {
    fs::create_dir_all(to).unwrap();
    for entry in fs::read_dir(from).unwrap() {
        let entry = entry.unwrap();
        let target = to.join(entry.file_name());
        if entry.file_name() == "registers" {
            continue;
        }
        if entry.path().is_dir() {
            copy(&entry.path(), &target);
        } else if entry
            .path()
            .extension()
            .is_some_and(|extension| extension == "md")
        {
            let page = ionfolio::page::Page::read(fs::read(entry.path()).unwrap()).unwrap();
            fs::write(target, page.without_results()).unwrap();
        } else {
            fs::copy(entry.path(), target).unwrap();
        }
    }
}
