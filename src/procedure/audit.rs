//! `audit`: what an inspector asks of a notebook, as plain data: who did what when, with which constants, what was amended and why, what does
//! not verify, what was never reviewed.

use crate::procedure::Desk;
use crate::procedure::audit_contents::contents;
use crate::procedure::audit_filter::AuditFilter;
use crate::procedure::examination::{ExaminationError, examine};
use crate::procedure::surroundings::Surroundings;
use crate::record::Finding;
use serde::Serialize;
use std::path::Path;

/// A notebook as it was found. The names of the fields are those of the JSON form.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Audit {
    /// The notebook's title.
    pub title: Option<String>,
    /// The notebook's identity.
    pub notebook: Option<String>,
    /// The folder in the notebook that is reported on; empty for all of it.
    pub scope: String,
    /// What the report is narrowed to; empty where nothing is left out.
    pub filters: Vec<String>,
    /// What is left out by that.
    pub left_out: LeftOut,
    /// When it was examined.
    pub time: String,
    /// The program that examined it.
    pub program: String,
    /// The keeper's fingerprint, where one was given.
    pub keeper: Option<String>,
    /// How many pages were read.
    pub pages: usize,
    /// Every result, in the order of the pages.
    pub results: Vec<AuditResult>,
    /// Everything found, of results and of the notebook.
    pub findings: Vec<AuditFinding>,
    /// Every act of the registers, in the order of their times.
    pub acts: Vec<AuditAct>,
    /// Every signer.
    pub signers: Vec<AuditSigner>,
    /// Every constant that a sealed result was computed with.
    pub constants: Vec<AuditConstant>,
    /// Files that could not be read, and links that were not followed.
    pub unread: Vec<String>,
}

/// What a narrowed report does not show.
#[derive(Clone, Debug, Default, PartialEq, Eq, Serialize)]
pub struct LeftOut {
    /// How many results.
    pub results: usize,
    /// How many warnings and failures of those results.
    pub findings: usize,
    /// Whether any of those is a failure.
    pub failing: bool,
}

/// One result.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct AuditResult {
    /// Page and label.
    pub place: String,
    /// `draft`, `sealed`, `superseded` or `withdrawn`.
    pub state: &'static str,
    /// Whether everything that was signed holds; nothing for a draft.
    pub verifies: Option<bool>,
    /// The result in one line.
    pub result: Option<String>,
    /// Who performed it.
    pub performed: Option<String>,
    /// Who reviewed or approved it.
    pub reviewed: Vec<String>,
    /// What computing it again gave.
    pub recomputed: &'static str,
    /// The label that it takes the place of, and why.
    pub supersedes: Option<String>,
    /// Why it takes that place.
    pub reason: Option<String>,
    /// Sealed results that it is made from.
    pub uses: Vec<String>,
    /// Files that were signed with it.
    pub attachments: Vec<String>,
    /// The program that computed it.
    pub program: Option<String>,
}

/// Something found.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct AuditFinding {
    /// Its name, as `explain` knows it.
    pub name: String,
    /// `failure`, `warning` or `note`.
    pub severity: String,
    /// Where.
    pub place: String,
    /// What.
    pub sentence: String,
    /// What to do.
    pub remedy: String,
}

impl AuditFinding {
    /// A finding in words.
    pub fn of(finding: &Finding) -> Self {
        Self {
            name: finding.name().to_owned(),
            severity: finding.severity().to_string(),
            place: finding.place.to_string(),
            sentence: finding.sentence(),
            remedy: finding.remedy().to_owned(),
        }
    }
}

/// One act of a register.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct AuditAct {
    /// The time that the signer claims.
    pub time: String,
    /// The signer.
    pub signer: String,
    /// The printed name.
    pub name: String,
    /// What was done.
    pub meaning: String,
    /// Page and label; nothing for an act that is not on a page.
    pub place: Option<String>,
    /// The result in one line.
    pub result: Option<String>,
    /// Its number in the register.
    pub number: u64,
    /// A remark.
    pub note: Option<String>,
}

/// One signer.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct AuditSigner {
    /// The signer.
    pub signer: String,
    /// Fingerprint of the key, and from when to when it signs, of each key on the roster.
    pub keys: Vec<String>,
    /// How many acts the register holds.
    pub acts: usize,
}

/// One constant.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize)]
pub struct AuditConstant {
    /// The substance and the step.
    pub constant: String,
    /// The value as stated.
    pub value: String,
    /// Temperature and ionic strength, as far as stated.
    pub conditions: String,
    /// Where it is from.
    pub source: String,
    /// `read`, `recalled` or `stated`.
    pub basis: String,
    /// The results that it is used in.
    pub used_in: Vec<String>,
}

impl Audit {
    /// Whether anything is a failure.
    pub fn failed(&self) -> bool {
        let failure = |finding: &AuditFinding| finding.severity == "failure";
        self.findings.iter().any(failure) || self.results.iter().any(|r| r.verifies == Some(false))
    }

    /// Whether anything asks for something to be done; a note alone does not.
    pub fn asks(&self) -> bool {
        let more = |finding: &AuditFinding| finding.severity != "note";
        self.failed()
            || self.findings.iter().any(more)
            || self.left_out.findings > 0
            || !self.unread.is_empty()
    }
}

/// Audits the notebook around a path; a folder or page below the notebook's own narrows the report to it, and so does a filter. Whatever is
/// left out is examined all the same, and counted.
///
/// # Errors
/// [`ExaminationError`].
pub fn audit(
    path: &Path,
    keeper: Option<&str>,
    filter: &AuditFilter,
    surroundings: &Surroundings<'_>,
) -> Result<Audit, ExaminationError> {
    let examined = examine(path, keeper, surroundings)?;
    let scope = examined.notebook.relative(path).unwrap_or_default();
    let desk = Desk::at(path)?;
    let mut audit = contents(&examined, scope, keeper, &filter.at(&desk));
    audit.program.clone_from(&surroundings.program.name);
    audit.filters = filter.words();
    Ok(audit)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::amend_page;
    use crate::procedure::specimen::{ACETIC, CITRIC, Laboratory, MADE_FROM};

    fn audited(laboratory: &Laboratory) -> Audit {
        let notebook = laboratory.path("notebook");
        audit(
            &notebook,
            None,
            &AuditFilter::default(),
            &laboratory.surroundings(),
        )
        .unwrap()
    }

    #[test]
    fn an_amendment_keeps_what_was_signed_and_says_why() {
        let laboratory = Laboratory::with(CITRIC);
        laboratory.seal().unwrap();
        amend_page(&laboratory.page(), "acid", "lot was K-2292").unwrap();
        laboratory.change("notebook/rinse.md", "0.100 mol/L", "0.200 mol/L");
        laboratory.seal().unwrap();
        let audit = audited(&laboratory);
        assert!(!audit.failed(), "{:?}", audit.findings);
        let states: Vec<&str> = audit.results.iter().map(|result| result.state).collect();
        assert_eq!(states, ["superseded", "sealed"]);
        assert_ne!(audit.results[0].attachments, audit.results[1].attachments);
        assert_eq!(audit.results[1].reason.as_deref(), Some("lot was K-2292"));
        assert_eq!(audit.acts.len(), 2);
        assert!(
            audit
                .constants
                .iter()
                .any(|constant| constant.used_in.len() == 1)
        );
    }

    #[test]
    fn a_copied_page_is_a_copy_and_not_a_second_result() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        laboratory.write("notebook/copy.md", &laboratory.read("notebook/rinse.md"));
        let audit = audited(&laboratory);
        let copied: Vec<&str> = audit
            .findings
            .iter()
            .filter(|found| found.name == "copied-result")
            .map(|found| found.place.as_str())
            .collect();
        assert_eq!(copied, ["copy.md#acid, as a whole"]);
        assert!(audit.failed());
    }

    #[test]
    fn an_act_that_is_gone_from_a_register_is_found() {
        let laboratory = Laboratory::with(MADE_FROM);
        laboratory.seal().unwrap();
        let register = "notebook/registers/bench.analyst.md";
        let text = laboratory.read(register);
        let (_first, rest) = text.split_once("```record\n").unwrap();
        let (_first, second) = rest.split_once("```record\n").unwrap();
        laboratory.write(register, &format!("```record\n{second}"));
        let audit = audited(&laboratory);
        let found = |name: &str| audit.findings.iter().any(|found| found.name == name);
        assert!(found("chain-gap"), "{:?}", audit.findings);
        assert!(found("act-missing-from-register"));
        assert!(audit.failed());
    }

    #[test]
    fn a_result_that_is_gone_from_its_page_is_in_the_report() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        laboratory.write("notebook/rinse.md", "# Rinse\n");
        let audit = audited(&laboratory);
        let names: Vec<&str> = audit
            .findings
            .iter()
            .map(|found| found.name.as_str())
            .collect();
        assert!(names.contains(&"act-missing-from-page"), "{names:?}");
        assert!(audit.failed());
    }
}
