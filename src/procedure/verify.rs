//! `verify`: bytes, signatures, policy, and by computing again.

use crate::block::{self, Attachments, Context, Defaults, SolutionError, Solutions};
use crate::notebook::{Notebook, read_page};
use crate::page::{PAGE_LIMIT, Page, Region};
use crate::problem::{Composition, SolutionReference};
use crate::procedure::compute::ComputeError;
use crate::procedure::page_work::{PageWork, embedded, with_defaults};
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::sources::Sources;
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{Desk, SignerError};
use crate::record::{
    self, Authority, Digest, Fault, Finding, NotebookPath, Part, Parts, Place, Register, Severity,
    SignedAct, Standing, Statement, Verified,
};
use crate::substance::Catalogue;
use crate::text::Diagnostic;
use std::collections::BTreeSet;
use std::path::Path;
use std::rc::Rc;
use std::sync::Arc;

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
    /// What is claimed, if it can be read.
    pub statement: Option<Statement>,
    /// The acts, in their order.
    pub acts: Vec<SignedAct>,
    /// Everything found, registers included.
    pub findings: Vec<Finding>,
    /// What computing it again gave.
    pub recomputed: Recomputed,
    /// Signers that are on no roster, whose signatures are good all the same.
    pub unlisted: BTreeSet<String>,
    /// Proof that nothing failed, for countersigning.
    pub(super) verified: Option<Verified<record::Record>>,
}

/// What computing a result again gave.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Recomputed {
    /// It was not computed again: a draft, or nothing to compute from.
    Not,
    /// Every byte of the answer is the same.
    Same,
    /// The reported figure is the same, other parts of the text are not.
    SameFigure {
        /// Why the text may differ.
        cause: String,
    },
    /// The reported figure is another.
    Different {
        /// The figure in the record.
        recorded: String,
        /// The figure now.
        now: String,
        /// Why they may differ.
        cause: String,
    },
    /// It could not be computed.
    Failed {
        /// Why.
        reason: String,
    },
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
    /// Whether anything is a failure: altered, missing, not signed as claimed, or computed differently.
    pub fn failed(&self) -> bool {
        let failed = self
            .findings
            .iter()
            .any(|finding| finding.severity() == Severity::Failure);
        failed
            || matches!(
                self.recomputed,
                Recomputed::Different { .. } | Recomputed::Failed { .. }
            )
    }
}

/// Why a path leads to no pages.
#[derive(Debug, thiserror::Error)]
pub enum PagesError {
    /// The system refuses.
    #[error("{0}")]
    System(#[from] std::io::Error),
    /// There is nothing there.
    #[error("there is no such file or folder")]
    Missing,
}

/// The pages that a path means: itself, or all pages below a folder.
///
/// # Errors
/// [`PagesError`].
pub fn pages(path: &Path) -> Result<Vec<std::path::PathBuf>, PagesError> {
    if path.is_dir() {
        return Ok(crate::notebook::pages_below(path)?.pages);
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
    let name = desk.relative(path);
    let bytes = read_page(path, PAGE_LIMIT).map_err(ComputeError::from)?;
    let page = Rc::new(Page::read(bytes).map_err(ComputeError::from)?);
    let mut verified = VerifiedPage {
        name: name.clone(),
        faults: page.diagnostics().to_vec(),
        results: Vec::new(),
        page: Rc::clone(&page),
    };
    if page.results().iter().all(Region::is_draft) {
        verified.results = page.results().iter().map(draft).collect();
        return Ok(verified);
    }
    let records = Records::of(desk.notebook.as_ref(), [0; 16])?;
    let offset = desk
        .notebook
        .as_ref()
        .map_or(0, |notebook: &Notebook| notebook.offset_minutes);
    let inspection = Inspection {
        desk: &desk,
        records: &records,
        name: &name,
        page: &page,
        now: surroundings.clock.now(offset),
        surroundings,
    };
    verified.results = page
        .results()
        .iter()
        .map(|region| {
            if region.is_draft() {
                draft(region)
            } else {
                inspection.result(region)
            }
        })
        .collect();
    Ok(verified)
}

fn draft(region: &Region) -> VerifiedResult {
    VerifiedResult {
        label: region.label().to_owned(),
        draft: true,
        mark: None,
        statement: None,
        acts: Vec::new(),
        findings: Vec::new(),
        recomputed: Recomputed::Not,
        unlisted: BTreeSet::new(),
        verified: None,
    }
}

struct Inspection<'a> {
    desk: &'a Desk,
    records: &'a Records,
    name: &'a str,
    page: &'a Rc<Page>,
    now: chrono::DateTime<chrono::FixedOffset>,
    surroundings: &'a Surroundings<'a>,
}

impl Inspection<'_> {
    fn result(&self, region: &Region) -> VerifiedResult {
        let question = self.question(region.label());
        let acts: Vec<&[u8]> = region
            .acts()
            .iter()
            .map(|fence| fence.content.text().as_bytes())
            .collect();
        let (roster, unlisted) = self.roster_for(region);
        let defaults = embedded(region.answer().text()).map(|(_, lines)| {
            lines
                .iter()
                .map(|line| format!("{line}\n"))
                .collect::<String>()
        });
        let attachment = |path: &NotebookPath| {
            crate::notebook::attachment(&self.desk.root, &self.desk.root, path.as_str()).ok()
        };
        let parts = Parts {
            notebook: &self.records.identity,
            page: self.name,
            label: region.label(),
            question: question.as_deref().map(str::as_bytes),
            answer: region.answer().text().as_bytes(),
            record: region.record().map(|fence| fence.content.text().as_bytes()),
            acts: &acts,
            attachment: &attachment,
            defaults: defaults.as_deref().map(str::as_bytes),
        };
        let authority = Authority {
            roster: &roster,
            policy: &self.records.policy,
            people: &self.records.people,
            now: self.now,
        };
        let verification = record::verify(&parts, &authority);
        let mut findings = verification.findings;
        let (statement, acts) = match verification.record {
            Some(record) => (Some(record.statement), record.acts),
            None => (None, Vec::new()),
        };
        findings.extend(self.registered(region, &acts));
        let superseded = region.mark().is_some();
        if superseded {
            // What was asked then may stand changed in the page now: the block belongs to the successor.
            findings.retain(|finding| {
                !matches!(
                    finding.fault,
                    Fault::QuestionChanged
                        | Fault::RequiredActMissing { .. }
                        | Fault::Overdue { .. }
                )
            });
        }
        let recomputed = match (&statement, &question) {
            (Some(statement), Some(question)) if !superseded => {
                self.again(region, statement, question)
            }
            _ => Recomputed::Not,
        };
        VerifiedResult {
            label: region.label().to_owned(),
            draft: false,
            mark: region.mark().map(|mark| match mark {
                crate::page::Mark::Superseded => "superseded",
                crate::page::Mark::Withdrawn => "withdrawn",
            }),
            statement,
            acts,
            findings,
            recomputed,
            unlisted,
            verified: verification.verified,
        }
    }

    /// The content of the block of a label.
    fn question(&self, label: &str) -> Option<String> {
        let contents = self
            .page
            .blocks()
            .iter()
            .map(|block| block.content().text());
        contents
            .into_iter()
            .find(|content| block::outline(content).label.as_deref() == Some(label))
            .map(str::to_owned)
    }

    /// The roster, with signers that nobody enrolled yet taken at their own word; they are named.
    fn roster_for(&self, region: &Region) -> (record::Roster, BTreeSet<String>) {
        let mut roster = self.records.roster.clone();
        let mut unlisted = BTreeSet::new();
        for fence in region.acts() {
            let Ok(act) = SignedAct::parse(fence.content.text().as_bytes()) else {
                continue;
            };
            let (signer, time) = (act.act().signer.clone(), act.act().time);
            let Ok(key) = act.signature().public_key() else {
                continue;
            };
            if roster.standing(&signer, &key, time) == Standing::UnknownSigner
                && roster.enrol(signer.clone(), key, time).is_ok()
            {
                unlisted.insert(signer.to_string());
            } else if unlisted.contains(signer.as_str()) {
                // A second key of the same unlisted signer has nobody's word at all and stays a finding.
            }
        }
        (roster, unlisted)
    }

    /// Acts that are in only one of page and register.
    fn registered(&self, region: &Region, acts: &[SignedAct]) -> Vec<Finding> {
        let place = |part| Place {
            file: self.name.to_owned(),
            label: Some(region.label().to_owned()),
            part,
        };
        let in_register = |act: &SignedAct| {
            let own = self
                .records
                .registers
                .iter()
                .find(|register| *register.signer() == act.act().signer);
            own.is_some_and(|register| register.find(act.digest()).is_some())
        };
        let mut findings: Vec<Finding> = acts
            .iter()
            .filter(|act| !in_register(act))
            .map(|act| Finding {
                place: place(Part::Whole),
                fault: Fault::ActMissingFromRegister {
                    signer: act.act().signer.clone(),
                    number: act.act().number,
                },
            })
            .collect();
        let Some(fence) = region.record() else {
            return findings;
        };
        let digest = Digest::of_lines(fence.content.text().as_bytes());
        let entries = self.records.registers.iter().flat_map(Register::entries);
        for entry in entries.filter(|entry| entry.act.act().record == digest) {
            if !acts.iter().any(|act| act.digest() == entry.act.digest()) {
                findings.push(Finding {
                    place: place(Part::Whole),
                    fault: Fault::ActMissingFromPage {
                        signer: entry.act.act().signer.clone(),
                        number: entry.act.act().number,
                        meaning: entry.act.act().meaning,
                    },
                });
            }
        }
        findings
    }

    /// Computes a result again from its question, its own constants and its attachments.
    fn again(&self, region: &Region, statement: &Statement, question: &str) -> Recomputed {
        let failed = |reason: &str| Recomputed::Failed {
            reason: reason.to_owned(),
        };
        let answer = region.answer().text();
        let Some((constants, lines)) = embedded(answer) else {
            return failed("the answer carries no constants");
        };
        let mut diagnostics = Vec::new();
        let stored = block::constants(&constants, &mut diagnostics).unwrap_or_default();
        let Ok(catalogue) = Catalogue::default().overlaid(&stored) else {
            return failed("the constants of the answer cannot be read");
        };
        let Some(defaults) = Defaults::from_lines(lines.iter().map(String::as_str)) else {
            return failed("the defaults of the answer cannot be read");
        };
        let desk = Desk {
            notebook: self.desk.notebook.clone(),
            root: self.desk.root.clone(),
            catalogue,
            defaults,
        };
        let sources = Sources::of(self.desk, self.name, Rc::clone(self.page));
        let here = Again {
            sources: &sources.for_block(region.label()),
        };
        let context = Context {
            catalogue: &desk.catalogue,
            defaults: &desk.defaults,
            solutions: &here,
            attachments: &here,
        };
        let reading = block::read(question, &context);
        let Some(stated) = reading.statement else {
            let first = reading.diagnostics.first().map_or("", Diagnostic::message);
            return failed(&format!(
                "the question is not read with the constants of the answer: {first}"
            ));
        };
        let rendered = match PageWork::finish(&desk, self.name, &stated) {
            Ok(rendered) => rendered,
            Err(reason) => return failed(&reason),
        };
        let text = with_defaults(&rendered.markdown, &desk.defaults.lines());
        let headline = rendered.headline;
        if text == answer {
            return Recomputed::Same;
        }
        let cause = self.cause(statement, &stated);
        if headline == statement.result.as_str() {
            Recomputed::SameFigure { cause }
        } else {
            Recomputed::Different {
                recorded: statement.result.to_string(),
                now: headline,
                cause,
            }
        }
    }

    /// What has changed since: the program, the template, or neither.
    fn cause(&self, statement: &Statement, stated: &crate::problem::Statement) -> String {
        let template = self.desk.template(stated.problem.task()).ok();
        let template_same = template.is_some_and(|template| {
            Digest::of_lines(template.source().as_bytes()) == statement.template.digest
        });
        let program_same = self.surroundings.program.digest == Some(statement.program.digest);
        match (program_same, template_same) {
            (_, false) => "the template is another than it was".to_owned(),
            (false, true) => format!(
                "the program is another build than it was ({})",
                statement.program.name
            ),
            (true, true) => {
                "program and template are the same; the question or what it refers to has changed"
                    .to_owned()
            }
        }
    }
}

/// Other blocks and files as they are now, for a block that is computed again.
#[derive(Debug)]
struct Again<'s> {
    sources: &'s Sources<'s>,
}

impl Solutions for Again<'_> {
    fn solution(&self, reference: &SolutionReference) -> Result<Arc<Composition>, SolutionError> {
        self.sources.solution(reference)
    }
}

impl Attachments for Again<'_> {
    fn read(&self, path: &str) -> Result<Vec<u8>, String> {
        self.sources.read(path)
    }
}
