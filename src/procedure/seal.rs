//! `seal`: drafts become signed records.
//!
//! The register is written and synced before the page is replaced. A run that was stopped between the two is completed by the next one: the act
//! that the register holds is put into the page, and none is made anew.

use crate::notebook::{Lock, LockError, SETTINGS_FILE, read_page, replace};
use crate::page::{Edit, PAGE_LIMIT, Page, Written};
use crate::procedure::compute::{ComputeError, write_plots};
use crate::procedure::countersign::unescaped;
use crate::procedure::hand::{Hand, HandError};
use crate::procedure::page_work::{BlockWork, PageWork};
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{Desk, SignerError, key_of};
use crate::record::{
    self, Digest, Draft, Label, Named, NotebookPath, ResultName, SignerName, Statement,
    Supersession, TextLine, ValueFault,
};
use crate::text::Diagnostic;
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};
use std::rc::Rc;

/// What is to be sealed, and by whom.
#[derive(Clone, Debug)]
pub struct SealRequest {
    /// Only this label; all of the page otherwise.
    pub label: Option<String>,
    /// The signer; the only key there is otherwise.
    pub signer: Option<SignerName>,
    /// The printed name, where `people.yaml` has none.
    pub printed: Option<String>,
}

/// What became of a page that was to be sealed.
#[derive(Debug)]
pub struct Sealed {
    /// The page, for showing places.
    pub page: Rc<Page>,
    /// What is wrong; nothing was sealed if anything is an error.
    pub faults: Vec<Diagnostic>,
    /// What became of each block.
    pub blocks: Vec<SealedBlock>,
    /// Who signed.
    pub signer: Option<SignerName>,
    /// Whether the signer is on the roster.
    pub on_roster: bool,
    /// The register that was written.
    pub register: Option<PathBuf>,
}

/// What became of one block.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SealedBlock {
    /// Its label.
    pub label: String,
    /// The result in one line.
    pub headline: String,
    /// Whether it was sealed now, or completed, or was sealed before.
    pub now: bool,
}

/// Why nothing was sealed.
#[derive(Debug, thiserror::Error)]
pub enum SealError {
    /// The page cannot be computed or written.
    #[error(transparent)]
    Compute(#[from] ComputeError),
    /// The notebook's records cannot be worked with.
    #[error(transparent)]
    Records(#[from] RecordsError),
    /// There is no key.
    #[error(transparent)]
    Signer(#[from] SignerError),
    /// Somebody else writes.
    #[error(transparent)]
    Lock(#[from] LockError),
    /// The signature was not made, or may not be.
    #[error("`{label}` was not sealed: {error}")]
    Record {
        /// The label.
        label: String,
        /// Why.
        error: record::SealError,
    },
    /// The signer cannot sign here.
    #[error(transparent)]
    Hand(#[from] HandError),
    /// A name does not fit into a record.
    #[error("{what} {text:?} {fault}")]
    Name {
        /// What it is.
        what: &'static str,
        /// The text.
        text: String,
        /// What is wrong with it.
        fault: ValueFault,
    },
    /// A block is made from a result that is not sealed.
    #[error("`{label}` is made from `{source_label}`, which is not sealed; seal that first")]
    SourceNotSealed {
        /// The block.
        label: String,
        /// Its source.
        source_label: String,
    },
    /// There is no block of that label.
    #[error("the page has no block `{label}`; it has {known}")]
    NoSuchLabel {
        /// What was asked for.
        label: String,
        /// What there is.
        known: String,
    },
    /// An attachment disappeared, or the program's own file cannot be read.
    #[error("{0}")]
    Missing(String),
}

/// Seals the drafts of a page.
///
/// # Errors
/// [`SealError`]. The page is then as it was; if the register was written already, the next run completes it.
pub fn seal_page(
    path: &Path,
    request: &SealRequest,
    surroundings: &Surroundings<'_>,
) -> Result<Sealed, SealError> {
    let desk = Desk::at(path).map_err(ComputeError::from)?;
    let mut drawn = [0_u8; 16];
    surroundings
        .entropy
        .fill(&mut drawn)
        .map_err(SignerError::Entropy)?;
    let records = Records::of(desk.notebook.as_ref(), drawn)?;
    let _lock = Lock::on(&desk.root.join(SETTINGS_FILE))?;
    let bytes = read_page(path, PAGE_LIMIT).map_err(ComputeError::from)?;
    let name = desk.relative(path);
    let work = PageWork::solve(
        &desk,
        &name,
        Page::read(bytes.clone()).map_err(ComputeError::from)?,
    );
    let mut sealed = Sealed {
        page: Rc::clone(&work.page),
        faults: work.faults.clone(),
        blocks: Vec::new(),
        signer: None,
        on_roster: true,
        register: None,
    };
    if work.is_faulty() {
        return Ok(sealed);
    }
    let wanted = wanted(&work, request)?;
    let open: Vec<&BlockWork> = wanted
        .iter()
        .copied()
        .filter(|item| {
            work.result(&item.label)
                .is_none_or(crate::page::Region::is_draft)
        })
        .collect();
    if open.is_empty() {
        sealed.blocks = wanted.iter().map(|item| told(item, false)).collect();
        return Ok(sealed);
    }
    let (signer, key) = key_of(surroundings, request.signer.as_ref())?;
    let hand = Hand::of(
        &desk,
        records,
        surroundings,
        (signer, key),
        request.printed.as_deref(),
    )?;
    let mut session = Session {
        desk: &desk,
        hand,
        done: BTreeMap::new(),
    };
    let mut edits = Vec::new();
    for item in in_order(&work, open) {
        edits.push(session.seal(&work, item)?);
    }
    for item in &wanted {
        sealed
            .blocks
            .push(told(item, session.done.contains_key(&item.label)));
    }
    sealed.signer = Some(session.hand.signer.clone());
    sealed.on_roster = session.hand.on_roster;
    sealed.register = session.hand.write_register()?;
    for item in wanted
        .iter()
        .filter(|item| session.done.contains_key(&item.label))
    {
        write_plots(&desk, &name, item)?;
    }
    let after = work
        .page
        .with(edits)
        .map_err(|error| ComputeError::Placing {
            label: name.clone(),
            reason: error.to_string(),
        })?;
    replace(path, &bytes, &after).map_err(ComputeError::from)?;
    Ok(sealed)
}

fn told(item: &BlockWork, now: bool) -> SealedBlock {
    SealedBlock {
        label: item.label.clone(),
        headline: item
            .rendered
            .as_ref()
            .map(|rendered| rendered.headline.clone())
            .unwrap_or_default(),
        now,
    }
}

fn wanted<'w>(work: &'w PageWork, request: &SealRequest) -> Result<Vec<&'w BlockWork>, SealError> {
    let Some(label) = &request.label else {
        return Ok(work.blocks.iter().collect());
    };
    let found: Vec<&BlockWork> = work
        .blocks
        .iter()
        .filter(|item| item.label == *label)
        .collect();
    if found.is_empty() {
        let known: Vec<&str> = work.blocks.iter().map(|item| item.label.as_str()).collect();
        return Err(SealError::NoSuchLabel {
            label: label.clone(),
            known: known.join(", "),
        });
    }
    Ok(found)
}

/// Blocks after those that they are made from; circles were refused when the blocks were read.
fn in_order<'w>(work: &PageWork, open: Vec<&'w BlockWork>) -> Vec<&'w BlockWork> {
    let mut left = open;
    let mut ordered: Vec<&BlockWork> = Vec::new();
    while !left.is_empty() {
        let waits = |item: &BlockWork| {
            item.references.iter().any(|reference| {
                let here = reference
                    .page
                    .as_ref()
                    .is_none_or(|page| *page == work.name);
                here && left
                    .iter()
                    .any(|other| other.label == reference.label && other.label != item.label)
            })
        };
        let next = left.iter().position(|item| !waits(item)).unwrap_or(0);
        ordered.push(left.remove(next));
    }
    ordered
}

/// One run of sealing: the register grows, and what was sealed may be used by what follows.
struct Session<'d> {
    desk: &'d Desk,
    hand: Hand<'d>,
    /// Digest of the record of each label sealed in this run.
    done: BTreeMap<String, Digest>,
}

impl Session<'_> {
    /// The edit that puts a sealed result into the page.
    fn seal(&mut self, work: &PageWork, item: &BlockWork) -> Result<Edit, SealError> {
        let block = work.block(item);
        let (Some(rendered), Some(block)) = (&item.rendered, block) else {
            return Err(SealError::Missing(format!(
                "`{}` has no result",
                item.label
            )));
        };
        let question = block.content().text();
        let (record, act, digest) = match self.interrupted(work, item, question) {
            Some(found) => found,
            None => {
                let statement = self.statement(work, item, question)?;
                let draft = Draft {
                    statement: &statement,
                    question: question.as_bytes(),
                    answer: rendered.markdown.as_bytes(),
                };
                let signing = self.hand.signing(None);
                let sealed = record::seal(&draft, &signing).map_err(|error| SealError::Record {
                    label: item.label.clone(),
                    error,
                })?;
                self.hand.take(sealed.entry, &sealed.register_addition);
                (sealed.record, sealed.act.print(), sealed.digest)
            }
        };
        self.done.insert(item.label.clone(), digest);
        let placing = |reason: String| ComputeError::Placing {
            label: item.label.clone(),
            reason,
        };
        let written = Written::sealed(&item.label, &rendered.markdown, &record, vec![act])
            .map_err(|error| placing(error.to_string()))?;
        Ok(work
            .page
            .placing(block, &written)
            .map_err(|error| placing(error.to_string()))?)
    }

    /// The act of a run that was stopped before the page was written, if its question and answer are still the same.
    fn interrupted(
        &self,
        work: &PageWork,
        item: &BlockWork,
        question: &str,
    ) -> Option<(String, String, Digest)> {
        let rendered = item.rendered.as_ref()?;
        let own = self
            .hand
            .records
            .registers
            .iter()
            .find(|register| *register.signer() == self.hand.signer)?;
        let entry = own.entries().iter().rev().find(|entry| {
            Statement::parse(entry.record.as_bytes()).is_ok_and(|statement| {
                entry.act.act().meaning == record::Meaning::Performed
                    && statement.page.as_str() == work.name
                    && statement.label.as_str() == item.label
                    && statement.question == Digest::of_lines(question.as_bytes())
                    && statement.answer == Digest::of_lines(rendered.markdown.as_bytes())
            })
        })?;
        let digest = Digest::of_lines(entry.record.as_bytes());
        let in_page = work.page.results().iter().any(|region| {
            region
                .record()
                .is_some_and(|fence| Digest::of_lines(fence.content.text().as_bytes()) == digest)
        });
        (!in_page).then(|| (entry.record.clone(), entry.act.print(), digest))
    }

    fn statement(
        &self,
        work: &PageWork,
        item: &BlockWork,
        question: &str,
    ) -> Result<Statement, SealError> {
        let rendered = item
            .rendered
            .as_ref()
            .ok_or_else(|| SealError::Missing(format!("`{}` has no result", item.label)))?;
        let template = item
            .template
            .as_ref()
            .ok_or_else(|| SealError::Missing(format!("`{}` has no template", item.label)))?;
        let template_name = if template.is_built_in() {
            format!("built-in {}", template.name())
        } else {
            template.name().to_owned()
        };
        let program = self.hand.surroundings.program;
        let program_digest = program.digest.ok_or_else(|| {
            SealError::Missing(
                "the program's own file cannot be read, so its digest is not known".to_owned(),
            )
        })?;
        let defaults = self.desk.defaults.lines();
        let assumed: Vec<TextLine> = defaults
            .iter()
            .map(|line| named("a default", line, TextLine::new))
            .collect::<Result<_, _>>()?;
        let defaults: String = defaults.iter().map(|line| format!("{line}\n")).collect();
        Ok(Statement {
            notebook: self.hand.records.identity.clone(),
            page: named("the page", &work.name, NotebookPath::new)?,
            label: named("the label", &item.label, Label::new)?,
            supersedes: self.supersession(work, item)?,
            question: Digest::of_lines(question.as_bytes()),
            answer: Digest::of_lines(rendered.markdown.as_bytes()),
            defaults: Some(Digest::of_lines(defaults.as_bytes())),
            attachments: self.attachments(work, item)?,
            uses: self.uses(work, item)?,
            template: Named::new(
                named("the template", &template_name, TextLine::new)?,
                Digest::of_lines(template.source().as_bytes()),
            ),
            assumed,
            program: Named::new(
                named("the program", &program.name, TextLine::new)?,
                program_digest,
            ),
            result: named("the result", &rendered.headline, TextLine::new)?,
        })
    }

    /// What the draft supersedes: the latest sealed result of this label that is marked as superseded, with the reason in its notice.
    fn supersession(
        &self,
        work: &PageWork,
        item: &BlockWork,
    ) -> Result<Option<Supersession>, SealError> {
        let region = work.page.results().iter().rev().find(|region| {
            region.label() == item.label
                && region.mark() == Some(crate::page::Mark::Superseded)
                && region.record().is_some()
        });
        let Some(region) = region else {
            return Ok(None);
        };
        let digest = region
            .record()
            .map(|fence| Digest::of_lines(fence.content.text().as_bytes()))
            .ok_or_else(|| SealError::Missing("the superseded result has no record".to_owned()))?;
        let notice = region
            .notice()
            .and_then(|span| span.of(work.page.text()))
            .unwrap_or_default();
        let reason = unescaped(
            notice
                .rsplit_once("Reason: ")
                .map_or("not stated", |(_, reason)| reason.trim()),
        );
        Ok(Some(Supersession {
            replaced: Named::new(named("the label", &item.label, Label::new)?, digest),
            reason: named("the reason", &reason, TextLine::new)?,
        }))
    }

    /// Files of the question and of the answer, by their paths in the notebook.
    fn attachments(
        &self,
        work: &PageWork,
        item: &BlockWork,
    ) -> Result<Vec<Named<NotebookPath>>, SealError> {
        let folder = work.name.rsplit_once('/').map_or("", |(folder, _)| folder);
        let page_folder = self.desk.root.join(folder);
        let mut found = BTreeMap::new();
        for name in &item.attachments {
            let bytes = crate::notebook::attachment(&self.desk.root, &page_folder, name)
                .map_err(|error| SealError::Missing(format!("{name}: {error}")))?;
            let path = joined(folder, name);
            found.insert(
                named("the attachment", &path, NotebookPath::new)?,
                Digest::of_file(&bytes),
            );
        }
        for plot in item
            .rendered
            .iter()
            .flat_map(|rendered| &rendered.attachments)
        {
            let path = joined(folder, &plot.file_name);
            found.insert(
                named("the plot", &path, NotebookPath::new)?,
                Digest::of_file(&plot.bytes),
            );
        }
        Ok(found
            .into_iter()
            .map(|(path, digest)| Named::new(path, digest))
            .collect())
    }

    /// The sealed results that a block is made from.
    fn uses(&self, work: &PageWork, item: &BlockWork) -> Result<Vec<Named<ResultName>>, SealError> {
        let mut found = BTreeMap::new();
        for reference in &item.references {
            let page = reference.page.clone().unwrap_or_else(|| work.name.clone());
            let digest = if page == work.name {
                self.done
                    .get(&reference.label)
                    .copied()
                    .or_else(|| sealed_digest(&work.page, &reference.label))
            } else {
                let there = read_page(&self.desk.root.join(&page), PAGE_LIMIT)
                    .ok()
                    .and_then(|bytes| Page::read(bytes).ok());
                there.and_then(|page| sealed_digest(&page, &reference.label))
            };
            let digest = digest.ok_or_else(|| SealError::SourceNotSealed {
                label: item.label.clone(),
                source_label: format!("{page}#{}", reference.label),
            })?;
            let name = ResultName {
                page: named("the page", &page, NotebookPath::new)?,
                label: named("the label", &reference.label, Label::new)?,
            };
            found.insert(
                format!("{page}#{}", reference.label),
                Named::new(name, digest),
            );
        }
        Ok(found.into_values().collect())
    }
}

/// The digest of the record of a label's current result.
pub(super) fn sealed_digest(page: &Page, label: &str) -> Option<Digest> {
    let region = page
        .results()
        .iter()
        .find(|region| region.label() == label && region.mark().is_none())?;
    region
        .record()
        .map(|fence| Digest::of_lines(fence.content.text().as_bytes()))
}

/// A path beside a page, as the notebook has it; `..` and `.` taken out.
fn joined(folder: &str, name: &str) -> String {
    let mut parts: Vec<&str> = folder.split('/').filter(|part| !part.is_empty()).collect();
    for part in name.split('/') {
        match part {
            "" | "." => {}
            ".." => {
                parts.pop();
            }
            part => parts.push(part),
        }
    }
    parts.join("/")
}

fn named<T>(
    what: &'static str,
    text: &str,
    make: impl Fn(&str) -> Result<T, ValueFault>,
) -> Result<T, SealError> {
    make(text).map_err(|fault| SealError::Name {
        what,
        text: text.to_owned(),
        fault,
    })
}
