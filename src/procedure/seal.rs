//! `seal`: drafts become signed records.
//!
//! The register is written and synced before the page is replaced. A run that was stopped between the two is completed by the next one: the act
//! that the register holds is put into the page, and none is made anew.

use crate::notebook::{LockError, read_page, replace};
use crate::page::{PAGE_LIMIT, Page, Region};
use crate::procedure::compute::{ComputeError, write_plots};
use crate::procedure::hand::{Hand, HandError};
use crate::procedure::page_work::{BlockWork, PageWork};
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::sealing::Sealing;
use crate::procedure::signer::{KeyChoice, key_of};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{Desk, SignerError};
use crate::record::{self, SignerName, ValueFault};
use crate::text::Diagnostic;
use std::path::{Path, PathBuf};
use std::rc::Rc;

/// What is to be sealed, and by whom.
#[derive(Clone, Debug)]
pub struct SealRequest {
    /// Only this label; all of the page otherwise.
    pub label: Option<String>,
    /// Who signs with which key.
    pub key: KeyChoice,
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
    #[error("`{label}` was not sealed: {}", with_cause(error))]
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
    /// A block is made from a result that was sealed for another text of its block.
    #[error(
        "`{label}` is made from `{source_label}`, whose block was changed since it was sealed; amend and seal that first"
    )]
    SourceChanged {
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
    let _lock = desk.lock()?;
    let bytes = read_page(path, PAGE_LIMIT).map_err(ComputeError::from)?;
    let page = Page::read(bytes.clone()).map_err(ComputeError::from)?;
    let work = PageWork::solve(&desk, &desk.relative(path), page);
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
    let is_open = |item: &&BlockWork| work.result(&item.label).is_none_or(Region::is_draft);
    let open: Vec<&BlockWork> = wanted.iter().copied().filter(is_open).collect();
    if open.is_empty() {
        sealed.blocks = wanted.iter().map(|item| told(item, false)).collect();
        return Ok(sealed);
    }
    let signer = key_of(surroundings, &request.key, &records.roster)?;
    let printed = request.printed.as_deref();
    let hand = Hand::of(&desk, records, surroundings, signer, printed)?;
    let mut sealing = Sealing::by(&desk, hand);
    let mut edits = Vec::new();
    for item in in_order(&work, open) {
        edits.push(sealing.seal(&work, item)?);
    }
    sealed.signer = Some(sealing.hand.signer.clone());
    sealed.on_roster = sealing.hand.on_roster;
    sealed.register = sealing.hand.write_register()?;
    for item in wanted {
        let now = sealing.done.contains_key(&item.label);
        sealed.blocks.push(told(item, now));
        if now {
            write_plots(&desk, &work.name, item)?;
        }
    }
    let after = work
        .page
        .with(edits)
        .map_err(|error| ComputeError::Placing {
            label: work.name.clone(),
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

/// What the record says, with what the holder of the key said where it was the one that failed.
pub(super) fn with_cause(error: &record::SealError) -> String {
    let holder = match error {
        record::SealError::Signing(signing) => std::error::Error::source(signing),
        _ => None,
    };
    holder.map_or_else(|| error.to_string(), |cause| format!("{error}: {cause}"))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::Recomputed;
    use crate::procedure::specimen::{ACETIC, Laboratory, MADE_FROM};

    #[test]
    fn what_is_sealed_verifies_and_stays_as_it_is() {
        let laboratory = Laboratory::with(ACETIC);
        let sealed = laboratory.seal().unwrap();
        assert!(sealed.blocks[0].now && !sealed.on_roster);
        let page = laboratory.read("notebook/rinse.md");
        assert!(page.ends_with("\r\n\r\nEnd  \r\n"));
        let verified = laboratory.verify();
        assert_eq!(verified.results[0].recomputed, Recomputed::Same);
        assert_eq!(verified.results[0].findings, []);
        assert!(!laboratory.seal().unwrap().blocks[0].now);
        assert_eq!(laboratory.read("notebook/rinse.md"), page);
    }

    #[test]
    fn a_run_stopped_before_the_page_was_written_is_named_and_completed() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        let sealed = laboratory.read("notebook/rinse.md");
        let register = laboratory.read("notebook/registers/bench.analyst.md");
        laboratory.write("notebook/rinse.md", ACETIC);
        let examined = crate::procedure::examine(
            &laboratory.path("notebook"),
            None,
            &laboratory.surroundings(),
        );
        let findings = examined.unwrap().findings;
        assert_eq!(findings[0].name(), "act-missing-from-page");
        laboratory.seal().unwrap();
        assert_eq!(laboratory.read("notebook/rinse.md"), sealed);
        assert_eq!(
            laboratory.read("notebook/registers/bench.analyst.md"),
            register
        );
    }

    #[test]
    fn sources_are_sealed_before_what_is_made_from_them() {
        let laboratory = Laboratory::with(MADE_FROM);
        laboratory.seal().unwrap();
        let verified = laboratory.verify();
        let numbers: Vec<u64> = verified
            .results
            .iter()
            .map(|result| result.acts()[0].act().number)
            .collect();
        assert_eq!(numbers, [2, 1]);
        let uses = &verified.results[0].statement().unwrap().uses;
        assert_eq!(uses[0].name.to_string(), "rinse.md#stock");
        assert_eq!(verified.results[0].recomputed, Recomputed::Same);
    }

    #[test]
    fn nothing_is_made_from_a_source_that_is_not_sealed_as_it_stands() {
        let laboratory = Laboratory::with(MADE_FROM);
        let only = |label: &str| {
            let request = SealRequest {
                label: Some(label.to_owned()),
                key: KeyChoice::default(),
                printed: None,
            };
            seal_page(&laboratory.page(), &request, &laboratory.surroundings())
        };
        let draft = only("diluted");
        assert!(
            matches!(draft, Err(SealError::SourceNotSealed { .. })),
            "{draft:?}"
        );
        only("stock").unwrap();
        laboratory.change("notebook/rinse.md", "0.100 mol/L", "0.200 mol/L");
        let changed = only("diluted");
        assert!(
            matches!(changed, Err(SealError::SourceChanged { .. })),
            "{changed:?}"
        );
    }
}
