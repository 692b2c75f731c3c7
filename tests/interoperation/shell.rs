//! A folder of its own for each trial, and the real tools in it.

use std::fs::{self, File, Permissions};
use std::io::Write as _;
use std::path::PathBuf;
use std::process::{Command, Output};

use tempfile::TempDir;

pub(crate) struct Shell(TempDir);

impl Shell {
    pub(crate) fn new() -> Self {
        Self(TempDir::new().unwrap())
    }

    pub(crate) fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    pub(crate) fn put(&self, name: &str, bytes: impl AsRef<[u8]>) {
        let mut file = File::create(self.path(name)).unwrap();
        file.write_all(bytes.as_ref()).unwrap();
    }

    /// Puts a private key, which `ssh-keygen` refuses unless it is its owner's alone.
    pub(crate) fn put_key(&self, name: &str, bytes: impl AsRef<[u8]>) {
        use std::os::unix::fs::PermissionsExt as _;
        self.put(name, bytes);
        fs::set_permissions(self.path(name), Permissions::from_mode(0o600)).unwrap();
    }

    pub(crate) fn read(&self, name: &str) -> String {
        fs::read_to_string(self.path(name)).unwrap()
    }

    fn output(&self, script: &str) -> Output {
        let mut command = Command::new("sh");
        command
            .current_dir(self.0.path())
            .args(["-e", "-c", script]);
        command.env("LC_ALL", "C").output().unwrap()
    }

    /// What the script prints; it must succeed.
    pub(crate) fn run(&self, script: &str) -> String {
        let output = self.output(script);
        let errors = String::from_utf8_lossy(&output.stderr);
        assert!(output.status.success(), "{script}\n{errors}");
        String::from_utf8(output.stdout).unwrap()
    }

    pub(crate) fn succeeds(&self, script: &str) -> bool {
        self.output(script).status.success()
    }
}
