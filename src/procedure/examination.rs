//! A whole notebook held against itself: every page, the chain of every signer, and the roster.

use crate::notebook::{Notebook, PageList, SETTINGS_FILE, pages_below};
use crate::procedure::Desk;
use crate::procedure::compute::ComputeError;
use crate::procedure::inspection::Inspection;
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::trust::Trust;
use crate::procedure::verify::{VerifiedPage, offset_of, opened};
use crate::record::{self, Finding, Keeping, Placed, Register, Roster, Severity};
use chrono::{DateTime, FixedOffset};
use std::collections::BTreeSet;
use std::fs;
use std::path::{Path, PathBuf};
use std::rc::Rc;

/// What examining a notebook gave.
#[derive(Debug)]
pub struct Examined {
    /// The notebook.
    pub notebook: Notebook,
    /// When, by the notebook's clock.
    pub now: DateTime<FixedOffset>,
    /// Every page, in the order of the paths.
    pub pages: Vec<VerifiedPage>,
    /// Pages that could not be read, and why.
    pub unread: Vec<(PathBuf, ComputeError)>,
    /// Symbolic links, which were not followed.
    pub links: Vec<PathBuf>,
    /// What no single result shows: chain, registers, succession, roster.
    pub findings: Vec<Finding>,
    /// Every register.
    pub registers: Vec<Register>,
    /// Who may sign.
    pub roster: Roster,
    /// Signers of the registers that the roster does not name.
    pub unlisted: BTreeSet<String>,
}

impl Examined {
    /// Whether anything that no single result shows asks for something to be done.
    pub fn asks(&self) -> bool {
        let mut findings = self.findings.iter();
        findings.any(|finding| finding.severity() != Severity::Note)
    }
}

/// Whether a path is the folder of a notebook, which is examined as a whole.
pub fn is_notebook(path: &Path) -> bool {
    path.join(SETTINGS_FILE).is_file()
}

/// Why a notebook was not examined.
#[derive(Debug, thiserror::Error)]
pub enum ExaminationError {
    /// The notebook around it is at fault.
    #[error(transparent)]
    Desk(#[from] crate::procedure::DeskError),
    /// The notebook's records cannot be worked with.
    #[error(transparent)]
    Records(#[from] RecordsError),
    /// A folder or file cannot be read.
    #[error("{path}: {error}", path = .path.display())]
    System {
        /// The folder or file.
        path: PathBuf,
        /// Why.
        error: std::io::Error,
    },
}

/// Examines the whole notebook around a path; `keeper` is the fingerprint of the roster's keeper, learnt from outside.
///
/// # Errors
/// [`ExaminationError`] where there is no notebook, or its settings, roster or registers cannot be read.
pub fn examine(
    path: &Path,
    keeper: Option<&str>,
    surroundings: &Surroundings<'_>,
) -> Result<Examined, ExaminationError> {
    let desk = Desk::at(path)?;
    let records = Records::of(desk.notebook.as_ref(), [0; 16])?;
    let trust = Trust::of(&records);
    let now = surroundings.clock.now(offset_of(desk.notebook.as_ref()));
    let registers = desk
        .notebook
        .as_ref()
        .map(|notebook| notebook.registers.as_path());
    let failed = |error| ExaminationError::System {
        path: desk.root.clone(),
        error,
    };
    let PageList { pages, links } = pages_below(&desk.root, registers).map_err(failed)?;
    let mut verified = Vec::new();
    let mut unread = Vec::new();
    for path in pages {
        match opened(&desk, &path) {
            Ok(page) => verified.push(inspected(&desk, &records, &trust, page, surroundings, now)),
            Err(error) => unread.push((path, error)),
        }
    }
    let mut findings = record::examine(&record::Notebook {
        results: &placed(&verified),
        registers: &records.registers,
        roster: &trust.roster,
    });
    findings.extend(roster_findings(&desk, &records, keeper)?);
    let notebook = desk.notebook.ok_or_else(|| RecordsError::NoNotebook {
        suggestion: String::new(),
    })?;
    Ok(Examined {
        notebook,
        now,
        pages: verified,
        unread,
        links,
        findings,
        roster: records.roster,
        registers: records.registers,
        unlisted: trust.unlisted.iter().map(ToString::to_string).collect(),
    })
}

fn inspected(
    desk: &Desk,
    records: &Records,
    trust: &Trust,
    mut verified: VerifiedPage,
    surroundings: &Surroundings<'_>,
    now: DateTime<FixedOffset>,
) -> VerifiedPage {
    let page = Rc::clone(&verified.page);
    let inspection = Inspection {
        desk,
        records,
        trust,
        name: &verified.name,
        page: &page,
        now,
        surroundings,
    };
    verified.results = page
        .results()
        .iter()
        .map(|region| inspection.result(region))
        .collect();
    verified
}

/// The sealed results that could be read, where they stand.
fn placed(pages: &[VerifiedPage]) -> Vec<Placed<'_>> {
    pages
        .iter()
        .flat_map(|page| page.results.iter().map(move |result| (page, result)))
        .filter_map(|(page, result)| {
            Some(Placed {
                page: &page.name,
                label: &result.label,
                superseded: result.mark == Some("superseded"),
                record: result.record.as_ref()?,
            })
        })
        .collect()
}

/// What is found of the roster; nothing where there is none.
fn roster_findings(
    desk: &Desk,
    records: &Records,
    keeper: Option<&str>,
) -> Result<Vec<Finding>, ExaminationError> {
    let Some(notebook) = desk.notebook.as_ref().filter(|_| records.has_roster) else {
        return Ok(Vec::new());
    };
    let mut files = Vec::new();
    for path in [&notebook.roster, &notebook.people_file] {
        match fs::read(path) {
            Ok(bytes) => files.push((desk.relative(path), bytes)),
            Err(error) if error.kind() == std::io::ErrorKind::NotFound => {}
            Err(error) => {
                return Err(ExaminationError::System {
                    path: path.clone(),
                    error,
                });
            }
        }
    }
    let named: Vec<(&str, &[u8])> = files
        .iter()
        .map(|(name, bytes)| (name.as_str(), bytes.as_slice()))
        .collect();
    Ok(record::examine_roster(&Keeping {
        roster: &records.roster,
        files: &named,
        registers: &records.registers,
        keeper,
    }))
}
