//! `compute` and `check`: drafts into the page, or what is wrong with it.

use crate::notebook::{FileError, LockError, ReplaceError, create, read_page, replace};
use crate::page::{PAGE_LIMIT, Page, PageError, Written};
use crate::procedure::claim::is_of_this_question;
use crate::procedure::page_work::{BlockWork, PageWork};
use crate::procedure::{Desk, DeskError};
use crate::report::{self, DRAFT_NOTICE};
use crate::text::Diagnostic;
use serde_json::Value;
use std::fs;
use std::path::Path;
use std::rc::Rc;

/// What is to be done with a page.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Mode {
    /// Read and check only.
    Check,
    /// Compute, write nothing.
    DryRun,
    /// Compute and write drafts.
    Write,
}

/// What became of one page.
#[derive(Debug)]
pub struct Computed {
    /// The page's path as given.
    pub name: String,
    /// The page, for showing places.
    pub page: Rc<Page>,
    /// What is wrong.
    pub faults: Vec<Diagnostic>,
    /// The blocks.
    pub blocks: Vec<ComputedBlock>,
    /// The page's bytes with its drafts; the same as before where nothing changed.
    pub bytes: Vec<u8>,
    /// Whether the page was written.
    pub written: bool,
}

/// What became of one block.
#[derive(Debug)]
pub struct ComputedBlock {
    /// Its label.
    pub label: String,
    /// The answer in one line, if there is one.
    pub headline: Option<String>,
    /// Where it stands.
    pub standing: Standing,
    /// The machine form, if there is an answer.
    pub json: Option<Value>,
    /// Whether something in it is outside its limit: a hand value that does not stand, a reading that is not accepted.
    pub outside_limit: Option<String>,
    /// Line of the result in the page as it is now, from 1.
    pub line: Option<usize>,
}

/// Where a block's result stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Standing {
    /// There is none: the block has errors, or was only checked.
    None,
    /// A draft was written, or would be.
    Drafted,
    /// The draft in the page is the same.
    Unchanged,
    /// It is sealed and was left alone.
    Sealed,
    /// It is sealed and was left alone, and its block was changed since.
    SealedOtherwise,
}

/// Why a page could not be worked on at all.
#[derive(Debug, thiserror::Error)]
pub enum ComputeError {
    /// The file cannot be read.
    #[error("{0}")]
    File(#[from] FileError),
    /// It is no text.
    #[error("{0}; save it as UTF-8")]
    Page(#[from] PageError),
    /// The notebook around it is at fault.
    #[error("{0}")]
    Desk(#[from] DeskError),
    /// The page or a plot was not written.
    #[error("{0}")]
    Replace(#[from] ReplaceError),
    /// Somebody else writes in the notebook.
    #[error(transparent)]
    Lock(#[from] LockError),
    /// It is larger than what is read.
    #[error("it is larger than {limit} bytes, the largest page that is read")]
    TooLarge {
        /// The limit in bytes.
        limit: u64,
    },
    /// A result does not fit into the page.
    #[error("the result of `{label}` does not go into the page: {reason}")]
    Placing {
        /// The label.
        label: String,
        /// Why.
        reason: String,
    },
}

/// Computes or checks a page in its file.
///
/// # Errors
/// [`ComputeError`]; the page is then as it was.
pub fn compute_page(path: &Path, mode: Mode) -> Result<Computed, ComputeError> {
    let desk = Desk::at(path)?;
    let _lock = match mode {
        Mode::Write => desk.lock()?,
        Mode::Check | Mode::DryRun => None,
    };
    let bytes = read_page(path, PAGE_LIMIT)?;
    let name = desk.relative(path);
    let mut computed = compute_text(&desk, &name, bytes.clone(), mode)?;
    computed.name = path.display().to_string();
    if mode == Mode::Write && computed.bytes != bytes {
        replace(path, &bytes, &computed.bytes)?;
        computed.written = true;
    }
    Ok(computed)
}

/// Computes or checks a page's text; nothing is written but, in [`Mode::Write`], the plots beside it.
///
/// # Errors
/// [`ComputeError`] where the text is no page or a result does not go into it.
pub fn compute_text(
    desk: &Desk,
    name: &str,
    bytes: Vec<u8>,
    mode: Mode,
) -> Result<Computed, ComputeError> {
    let page = Page::read(bytes.clone())?;
    let work = if mode == Mode::Check {
        PageWork::read(desk, name, page)
    } else {
        PageWork::solve(desk, name, page)
    };
    let mut edits = Vec::new();
    let mut blocks = Vec::new();
    for item in &work.blocks {
        let (edit, standing) = drafted(&work, item)?;
        edits.extend(edit);
        blocks.push(summary(&work, item, standing));
        if mode == Mode::Write && matches!(standing, Standing::Drafted | Standing::Unchanged) {
            write_plots(desk, name, item)?;
        }
    }
    let after = if mode == Mode::Check {
        bytes
    } else {
        work.page
            .with(edits)
            .map_err(|error| ComputeError::Placing {
                label: name.to_owned(),
                reason: error.to_string(),
            })?
    };
    place_lines(&mut blocks, &after);
    Ok(Computed {
        name: name.to_owned(),
        page: Rc::clone(&work.page),
        faults: work.faults,
        blocks,
        bytes: after,
        written: false,
    })
}

/// The edit that puts a block's draft into the page, and where its result stands.
fn drafted(
    work: &PageWork,
    item: &BlockWork,
) -> Result<(Option<crate::page::Edit>, Standing), ComputeError> {
    if let Some(region) = work.result(&item.label).filter(|region| !region.is_draft()) {
        let standing = if is_of_this_question(&work.page, region) {
            Standing::Sealed
        } else {
            Standing::SealedOtherwise
        };
        return Ok((None, standing));
    }
    let (Some(rendered), Some(block)) = (&item.rendered, work.block(item)) else {
        return Ok((None, Standing::None));
    };
    let placing = |reason: String| ComputeError::Placing {
        label: item.label.clone(),
        reason,
    };
    let text = format!("{DRAFT_NOTICE}\n\n{}", rendered.markdown);
    let same = work
        .result(&item.label)
        .is_some_and(|region| region.answer().text() == text);
    let written = Written::draft(&item.label, &text).map_err(|error| placing(error.to_string()))?;
    let edit = work
        .page
        .placing(block, &written)
        .map_err(|error| placing(error.to_string()))?;
    Ok((
        Some(edit),
        if same {
            Standing::Unchanged
        } else {
            Standing::Drafted
        },
    ))
}

fn summary(work: &PageWork, item: &BlockWork, standing: Standing) -> ComputedBlock {
    let both = item.statement.as_ref().zip(item.answer.as_ref());
    ComputedBlock {
        label: item.label.clone(),
        headline: item
            .rendered
            .as_ref()
            .map(|rendered| rendered.headline.clone()),
        standing,
        json: both.map(|(statement, answer)| report::json(&work.name, statement, answer)),
        outside_limit: item.answer.as_ref().and_then(outside_limit),
        line: None,
    }
}

/// What in an answer is outside its limit.
fn outside_limit(answer: &crate::solution::answer::Answer) -> Option<String> {
    if let Some(hand) = answer.hand_value.as_ref().filter(|hand| !hand.stands) {
        return Some(format!(
            "the recorded hand value {} does not stand",
            hand.recorded
        ));
    }
    let (inside, limit) = answer.comparison.as_ref()?.acceptance.as_ref()?;
    (!inside).then(|| format!("the reading is outside its limit {limit}"))
}

/// Writes the plots of a block beside its page; one that is there already with the same bytes is left alone.
pub(super) fn write_plots(desk: &Desk, name: &str, item: &BlockWork) -> Result<(), ComputeError> {
    let page = desk.root.join(name);
    let folder = page.parent().unwrap_or(&desk.root);
    for plot in item
        .rendered
        .iter()
        .flat_map(|rendered| &rendered.attachments)
    {
        let path = folder.join(&plot.file_name);
        match fs::read(&path) {
            Ok(before) if before == plot.bytes => {}
            Ok(before) => replace(&path, &before, &plot.bytes)?,
            Err(_absent) => create(&path, &plot.bytes)?,
        }
    }
    Ok(())
}

/// Tells the line at which each result begins.
fn place_lines(blocks: &mut [ComputedBlock], bytes: &[u8]) {
    let Ok(page) = Page::read(bytes.to_vec()) else {
        return;
    };
    let index = page.line_index();
    for block in blocks {
        block.line = page
            .results()
            .iter()
            .find(|region| region.label() == block.label && region.mark().is_none())
            .map(|region| index.line_column(region.span().start()).line);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory};

    #[test]
    fn a_second_run_changes_nothing_and_a_sealed_result_is_left_alone() {
        let laboratory = Laboratory::with(ACETIC);
        let run = |mode| compute_page(&laboratory.page(), mode).unwrap();
        assert!(!run(Mode::DryRun).written && !run(Mode::Check).written);
        assert_eq!(laboratory.read("notebook/rinse.md"), ACETIC);
        assert!(run(Mode::Write).written);
        let again = run(Mode::Write);
        assert!(!again.written && again.blocks[0].standing == Standing::Unchanged);
        laboratory.seal().unwrap();
        let sealed = run(Mode::Write);
        assert!(!sealed.written && sealed.blocks[0].standing == Standing::Sealed);
        laboratory.change("notebook/rinse.md", "0.100 mol/L", "0.200 mol/L");
        let changed = run(Mode::Write);
        assert!(!changed.written);
        assert_eq!(changed.blocks[0].standing, Standing::SealedOtherwise);
    }

    #[test]
    fn a_circle_of_blocks_is_an_error_and_no_recursion() {
        let block = |label: &str, from: &str| {
            format!(
                "```equilibrium\nlabel: {label}\ntask: mixing\nportions:\n  - volume: 1.00 mL\n    solution: {from}\n  - volume: 1.00 mL\n    contents: water\n```\n"
            )
        };
        let laboratory = Laboratory::with(&(block("a", "b") + &block("b", "a")));
        let computed = compute_page(&laboratory.page(), Mode::Write).unwrap();
        assert!(
            computed
                .faults
                .iter()
                .filter(|fault| fault.is_error())
                .count()
                >= 2
        );
        assert!(!computed.written);
    }
}
