//! `verify`: bytes, signatures, policy, registers, and by computing again.

use crate::notebook::{Notebook, SettingsError, pages_below, read_page};
use crate::page::{PAGE_LIMIT, Page};
use crate::procedure::compute::ComputeError;
use crate::procedure::inspection::Inspection;
use crate::procedure::recomputation::Recomputed;
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::trust::Trust;
use crate::procedure::{Desk, SignerError};
use crate::record::{Finding, Record, Severity, SignedAct, Statement, Verified};
use crate::text::Diagnostic;
use std::collections::BTreeSet;
use std::path::{Path, PathBuf};
use std::rc::Rc;

/// What verification of one page gave.
#[derive(Debug)]
pub struct VerifiedPage {
    /// The page's path in the notebook.
    pub name: String,
    /// The page, for showing places.
    pub page: Rc<Page>,
    /// What is wrong with the page itself.
    pub faults: Vec<Diagnostic>,
    /// Its results.
    pub results: Vec<VerifiedResult>,
}

/// What verification of one result gave.
#[derive(Debug)]
pub struct VerifiedResult {
    /// The label.
    pub label: String,
    /// Whether it is only a draft.
    pub draft: bool,
    /// Whether it is marked as superseded or withdrawn.
    pub mark: Option<&'static str>,
    /// The question: as it was signed where it is kept so, else the block as it stands.
    pub question: Option<String>,
    /// The answer as it stands.
    pub answer: String,
    /// What is claimed and who did what with it, if it can be read.
    pub record: Option<Record>,
    /// Everything found, registers included.
    pub findings: Vec<Finding>,
    /// What computing it again gave.
    pub recomputed: Recomputed,
    /// Signers that are on no roster, whose signatures are good all the same.
    pub unlisted: BTreeSet<String>,
    /// Proof that nothing failed, for countersigning.
    pub verified: Option<Verified<Record>>,
}

/// Why a page was not verified.
#[derive(Debug, thiserror::Error)]
pub enum VerifyError {
    /// The page cannot be read.
    #[error(transparent)]
    Page(#[from] ComputeError),
    /// The notebook's records cannot be worked with.
    #[error(transparent)]
    Records(#[from] RecordsError),
    /// There are no random bytes.
    #[error(transparent)]
    Signer(#[from] SignerError),
}

impl VerifiedResult {
    pub(super) fn draft(label: &str) -> Self {
        Self {
            label: label.to_owned(),
            draft: true,
            mark: None,
            question: None,
            answer: String::new(),
            record: None,
            findings: Vec::new(),
            recomputed: Recomputed::Not,
            unlisted: BTreeSet::new(),
            verified: None,
        }
    }

    /// What is claimed, if it can be read.
    pub fn statement(&self) -> Option<&Statement> {
        self.record.as_ref().map(|record| &record.statement)
    }

    /// The acts, in their order.
    pub fn acts(&self) -> &[SignedAct] {
        self.record
            .as_ref()
            .map_or(&[], |record| record.acts.as_slice())
    }

    /// Whether anything is a failure: altered, missing, not signed as claimed, or computed differently.
    pub fn failed(&self) -> bool {
        self.weighs(Severity::Failure)
            || matches!(
                self.recomputed,
                Recomputed::Different { .. } | Recomputed::Failed { .. }
            )
    }

    /// Whether anything asks for something to be done; a note alone does not.
    pub fn asks(&self) -> bool {
        self.failed() || self.weighs(Severity::Warning) || !self.unlisted.is_empty()
    }

    fn weighs(&self, severity: Severity) -> bool {
        let mut findings = self.findings.iter();
        findings.any(|finding| finding.severity() == severity)
    }
}

/// Why a path leads to no pages.
#[derive(Debug, thiserror::Error)]
pub enum PagesError {
    /// The system refuses.
    #[error("{0}")]
    System(#[from] std::io::Error),
    /// The notebook's settings cannot be used.
    #[error(transparent)]
    Settings(#[from] SettingsError),
    /// There is nothing there.
    #[error("there is no such file or folder")]
    Missing,
}

/// The pages that a path means: itself, or all pages below a folder.
///
/// # Errors
/// [`PagesError`].
pub fn pages(path: &Path) -> Result<Vec<PathBuf>, PagesError> {
    if path.is_dir() {
        let path = std::path::absolute(path)?;
        let notebook = Notebook::around(&path)?;
        let registers = notebook
            .as_ref()
            .map(|notebook| notebook.registers.as_path());
        return Ok(pages_below(&path, registers)?.pages);
    }
    if path.exists() {
        Ok(vec![path.to_owned()])
    } else {
        Err(PagesError::Missing)
    }
}

/// Verifies every result of a page.
///
/// # Errors
/// [`VerifyError`] where there is nothing to verify against.
pub fn verify_page(
    path: &Path,
    surroundings: &Surroundings<'_>,
) -> Result<VerifiedPage, VerifyError> {
    let desk = Desk::at(path).map_err(ComputeError::from)?;
    let mut verified = opened(&desk, path)?;
    let results = verified.page.results();
    if results.iter().all(crate::page::Region::is_draft) {
        verified.results = results
            .iter()
            .map(|region| VerifiedResult::draft(region.label()))
            .collect();
        return Ok(verified);
    }
    let records = Records::of(desk.notebook.as_ref(), [0; 16])?;
    let trust = Trust::of(&records);
    let page = Rc::clone(&verified.page);
    let inspection = Inspection {
        desk: &desk,
        records: &records,
        trust: &trust,
        name: &verified.name,
        page: &page,
        now: surroundings.clock.now(offset_of(desk.notebook.as_ref())),
        surroundings,
    };
    let results = page.results().iter().map(|region| {
        let mut result = inspection.result(region);
        result
            .findings
            .extend(inspection.registered(region, result.record.as_ref()));
        result
    });
    verified.results = results.collect();
    Ok(verified)
}

/// A page that is read and not yet inspected.
pub(super) fn opened(desk: &Desk, path: &Path) -> Result<VerifiedPage, ComputeError> {
    let page = Rc::new(Page::read(read_page(path, PAGE_LIMIT)?)?);
    Ok(VerifiedPage {
        name: desk.relative(path),
        faults: page.diagnostics().to_vec(),
        results: Vec::new(),
        page,
    })
}

/// Minutes east of Greenwich of a notebook's times.
pub(super) fn offset_of(notebook: Option<&Notebook>) -> i32 {
    notebook.map_or(0, |notebook| notebook.offset_minutes)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory, SETTINGS};

    #[test]
    fn whatever_is_altered_is_found() {
        let page = "notebook/rinse.md";
        for (file, before, after, found) in [
            (
                page,
                "acetic acid: 0.100",
                "acetic acid: 0.200",
                "question-changed",
            ),
            (page, "**pH 2.8", "**pH 2.9", "answer-changed"),
            (page, "result: pH 2.", "result: pH 3.", "record-changed"),
            (
                page,
                "meaning: performed",
                "meaning: reviewed",
                "signature-wrong",
            ),
            (
                page,
                "name: bench.analyst",
                "name: another",
                "signature-wrong",
            ),
        ] {
            let laboratory = Laboratory::with(ACETIC);
            laboratory.seal().unwrap();
            laboratory.change(file, before, after);
            let names = laboratory.found();
            assert!(names.contains(&found), "{before}: {names:?}");
            assert!(laboratory.verify().results[0].failed(), "{before}");
        }
    }

    #[test]
    fn a_page_without_its_register_is_found() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        std::fs::remove_dir_all(laboratory.path("notebook/registers")).unwrap();
        assert_eq!(laboratory.found(), ["act-missing-from-register"]);
    }

    #[test]
    fn settings_that_change_later_move_no_sealed_result() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        let warmer = SETTINGS.replace("25 °C", "37 °C");
        laboratory.write("notebook/ionfolio.yaml", &warmer);
        let verified = laboratory.verify();
        assert_eq!(verified.results[0].recomputed, Recomputed::Same);
        assert_eq!(laboratory.found(), [""; 0]);
    }

    #[test]
    fn a_page_that_was_renamed_is_moved_and_not_forged() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        let (old, new) = (laboratory.page(), laboratory.path("notebook/renamed.md"));
        std::fs::rename(old, &new).unwrap();
        let verified = verify_page(&new, &laboratory.surroundings()).unwrap();
        let result = &verified.results[0];
        assert_eq!(result.findings[0].name(), "moved-page");
        assert!(!result.failed(), "{:?}", result.recomputed);
    }
}
