//! A small notebook in a temporary folder, with a fixed clock and counted entropy, for the tests of this module. All of it is invented.

use crate::procedure::surroundings::{Clock, Entropy, Keys, Program, Surroundings};
use crate::procedure::{
    KeyChoice, SealError, SealRequest, Sealed, VerifiedPage, make_key, seal_page, signer_name,
    verify_page,
};
use crate::record::Digest;
use chrono::{DateTime, FixedOffset, TimeDelta};
use std::cell::Cell;
use std::fs;
use std::path::PathBuf;
use zeroize::Zeroizing;

pub(super) const ACETIC: &str = "# Rinse\r\n\r\n```equilibrium\r\nlabel: acid\r\ntask: speciation\r\ncontents:\r\n  acetic acid: 0.100 mol/L\r\n```\r\n\r\nEnd  \r\n";

/// Of several steps, so that its result has a plot.
pub(super) const CITRIC: &str =
    "```equilibrium\nlabel: acid\ntask: speciation\ncontents:\n  citric acid: 0.100 mol/L\n```\n";

/// The first block is made from the second.
pub(super) const MADE_FROM: &str = "```equilibrium\nlabel: diluted\ntask: mixing\nportions:\n  - volume: 100.0 mL\n    solution: stock\n  - volume: 100.0 mL\n    contents: water\n```\n\n```equilibrium\nlabel: stock\ntask: speciation\nvolume: 1.000 L\ncontents:\n  acetic acid: 0.100 mol/L\n```\n";

pub(super) const SETTINGS: &str = "notebook: 5f1c9d0e7a2b4c685f1c9d0e7a2b4c68\ntitle: Vessel Street\ntime zone: \"+01:00\"\ndefaults:\n  temperature: 25 °C\n";

#[derive(Debug)]
pub(super) struct Laboratory {
    pub(super) folder: tempfile::TempDir,
    minutes: Cell<i64>,
    drawn: Cell<u8>,
    program: Program,
}

impl Laboratory {
    /// A notebook with one page, `rinse.md`, and a key of `bench.analyst`.
    pub(super) fn with(page: &str) -> Self {
        let laboratory = Self {
            folder: tempfile::tempdir().unwrap(),
            minutes: Cell::new(0),
            drawn: Cell::new(1),
            program: Program {
                name: "ionfolio 0.1.0".to_owned(),
                digest: Some(Digest::of_file(b"program")),
            },
        };
        fs::create_dir(laboratory.path("notebook")).unwrap();
        laboratory.write("notebook/ionfolio.yaml", SETTINGS);
        laboratory.write("notebook/rinse.md", page);
        let signer = signer_name("Bench Analyst").unwrap();
        make_key(&laboratory.surroundings(), &signer, None).unwrap();
        laboratory
    }

    pub(super) fn surroundings(&self) -> Surroundings<'_> {
        Surroundings {
            clock: self,
            entropy: self,
            keys: self,
            program: &self.program,
        }
    }

    pub(super) fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    pub(super) fn page(&self) -> PathBuf {
        self.path("notebook/rinse.md")
    }

    pub(super) fn read(&self, name: &str) -> String {
        fs::read_to_string(self.path(name)).unwrap()
    }

    pub(super) fn write(&self, name: &str, text: &str) {
        let path = self.path(name);
        match fs::read(&path) {
            Ok(before) => crate::notebook::replace(&path, &before, text.as_bytes()).unwrap(),
            Err(_absent) => crate::notebook::create(&path, text.as_bytes()).unwrap(),
        }
    }

    /// Replaces a text that must be there, once.
    pub(super) fn change(&self, name: &str, before: &str, after: &str) {
        let text = self.read(name);
        assert!(text.contains(before), "{before}");
        self.write(name, &text.replacen(before, after, 1));
    }

    pub(super) fn seal(&self) -> Result<Sealed, SealError> {
        let request = SealRequest {
            label: None,
            key: KeyChoice::default(),
            printed: None,
        };
        seal_page(&self.page(), &request, &self.surroundings())
    }

    pub(super) fn verify(&self) -> VerifiedPage {
        verify_page(&self.page(), &self.surroundings()).unwrap()
    }

    /// Names of everything that is found of the page, in order.
    pub(super) fn found(&self) -> Vec<&'static str> {
        let page = self.verify();
        let findings = page.results.iter().flat_map(|result| &result.findings);
        findings.map(crate::record::Finding::name).collect()
    }
}

impl Clock for Laboratory {
    /// Each look is a minute later.
    fn now(&self, _offset_minutes: i32) -> DateTime<FixedOffset> {
        self.minutes.set(self.minutes.get() + 1);
        let start = DateTime::parse_from_rfc3339("2026-11-03T10:00:00+01:00").unwrap();
        start + TimeDelta::minutes(self.minutes.get())
    }
}

impl Entropy for Laboratory {
    fn fill(&self, bytes: &mut [u8]) -> Result<(), String> {
        self.drawn.set(self.drawn.get() + 1);
        bytes.fill(self.drawn.get());
        Ok(())
    }
}

impl Keys for Laboratory {
    fn folder(&self) -> Option<PathBuf> {
        Some(self.path("keys"))
    }

    fn passphrase(&self, _key: &str) -> Option<Zeroizing<String>> {
        None
    }

    fn new_passphrase(&self, _key: &str) -> Option<Zeroizing<String>> {
        None
    }

    fn ssh_folder(&self) -> Option<PathBuf> {
        Some(self.path("ssh"))
    }

    fn agent(&self) -> Option<PathBuf> {
        None
    }
}
