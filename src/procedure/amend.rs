//! `amend`: a sealed result gives way to the next of its label, and stays with everything that was signed.

use crate::notebook::{read_page, replace};
use crate::page::{Mark, PAGE_LIMIT, Page, Region};
use crate::procedure::Desk;
use crate::procedure::compute::ComputeError;
use crate::procedure::countersign::{CountersignError, escaped, line, placing};
use crate::procedure::inspection::question_of;
use crate::record::{Digest, Statement};
use std::path::Path;

/// Marks a sealed result as superseded, with the reason in view and the question as it was signed above it; the next `compute` opens
/// a draft.
///
/// # Errors
/// [`CountersignError`]; the page is then as it was. A block that was changed before is refused: its text as signed would be lost.
pub fn amend_page(path: &Path, label: &str, reason: &str) -> Result<(), CountersignError> {
    let text = line(reason.trim())?;
    let desk = Desk::at(path).map_err(ComputeError::from)?;
    let _lock = desk.lock()?;
    let bytes = read_page(path, PAGE_LIMIT).map_err(ComputeError::from)?;
    let page = Page::read(bytes.clone()).map_err(ComputeError::from)?;
    let region = page
        .results()
        .iter()
        .find(|region| region.label() == label && region.mark().is_none() && !region.is_draft())
        .ok_or_else(|| CountersignError::NoResult {
            label: Some(label.to_owned()),
        })?;
    let question = question_of(&page, label)
        .filter(|question| is_signed(region, question))
        .ok_or_else(|| CountersignError::QuestionChanged {
            label: label.to_owned(),
        })?;
    let notice = format!(
        "by the next result of `{label}`. Reason: {}",
        escaped(text.as_str())
    );
    let edit = page
        .marking(region, Mark::Superseded, &notice, question)
        .map_err(|error| placing(label, &error))?;
    let after = page
        .with(vec![edit])
        .map_err(|error| placing(label, &error))?;
    replace(path, &bytes, &after).map_err(ComputeError::from)?;
    Ok(())
}

/// Whether the record of a result names this very question.
fn is_signed(region: &Region, question: &str) -> bool {
    let record = region.record().map(|fence| fence.content.text());
    let statement = record.and_then(|text| Statement::parse(text.as_bytes()).ok());
    statement.is_some_and(|said| said.question == Digest::of_lines(question.as_bytes()))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory};
    use crate::procedure::{CountersignRequest, Judgement, KeyChoice, countersign_page};

    const PAGE: &str = "notebook/rinse.md";

    /// Sealed, amended, asked anew and sealed again.
    fn amended() -> Laboratory {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        amend_page(&laboratory.page(), "acid", "lot was K-2292").unwrap();
        laboratory.change(PAGE, "0.100 mol/L", "0.200 mol/L");
        laboratory.seal().unwrap();
        laboratory
    }

    #[test]
    fn both_results_verify_with_their_own_questions() {
        let laboratory = amended();
        assert_eq!(laboratory.found(), [""; 0]);
        let page = laboratory.verify();
        let [old, new] = page.page.results() else {
            panic!("{:?}", page.page.results());
        };
        let kept = old.question().unwrap().content.text();
        assert!(kept.contains("0.100 mol/L"), "{kept}");
        let statement = |at: usize| page.results[at].statement().unwrap();
        assert_eq!(statement(0).question, Digest::of_lines(kept.as_bytes()));
        assert_ne!(statement(0).question, statement(1).question);
        let supersession = statement(1).supersedes.as_ref().unwrap();
        assert_eq!(supersession.reason.as_str(), "lot was K-2292");
        assert!(new.question().is_none());
        let author = ACETIC.replace("0.100", "0.200");
        assert_eq!(page.page.without_results(), author.as_bytes());
    }

    #[test]
    fn a_superseded_question_that_is_altered_or_taken_out_is_found() {
        let laboratory = amended();
        laboratory.change(PAGE, "0.100 mol/L", "0.101 mol/L");
        assert_eq!(laboratory.found(), ["question-changed"]);
        let laboratory = amended();
        laboratory.change(PAGE, "```signed-question acid", "```text");
        assert_eq!(laboratory.found(), ["question-changed"]);
    }

    #[test]
    fn a_block_that_was_changed_before_is_not_taken_for_what_was_signed() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.seal().unwrap();
        laboratory.change(PAGE, "0.100 mol/L", "0.200 mol/L");
        let before = laboratory.read(PAGE);
        let refused = amend_page(&laboratory.page(), "acid", "lot was K-2292");
        assert!(matches!(
            refused,
            Err(CountersignError::QuestionChanged { .. })
        ));
        assert_eq!(laboratory.read(PAGE), before);
    }

    #[test]
    fn a_rejected_result_is_reopened_and_a_withdrawn_one_keeps_its_question() {
        for (judgement, found) in [
            (Judgement::Rejected, "rejected"),
            (Judgement::Withdrawn, "withdrawn"),
        ] {
            let laboratory = Laboratory::with(ACETIC);
            laboratory.seal().unwrap();
            let request = CountersignRequest {
                label: None,
                key: KeyChoice::default(),
                judgement,
                note: None,
            };
            countersign_page(&laboratory.page(), &request, &laboratory.surroundings()).unwrap();
            if judgement == Judgement::Rejected {
                amend_page(&laboratory.page(), "acid", "dilution was wrong").unwrap();
            }
            let asked = laboratory.read(PAGE);
            assert_eq!(asked.matches("acetic acid: 0.100 mol/L\r\n```").count(), 2);
            laboratory.change(PAGE, "acetic acid: 0.100", "acetic acid: 0.200");
            laboratory.seal().unwrap();
            assert_eq!(laboratory.found(), [found]);
        }
    }
}
