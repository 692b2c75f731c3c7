//! `countersign`: further acts on sealed results.

use crate::notebook::{LockError, replace};
use crate::page::{Edit, Mark, Written};
use crate::procedure::compute::ComputeError;
use crate::procedure::hand::{Hand, HandError};
use crate::procedure::inspection::question_of;
use crate::procedure::records::{Records, RecordsError};
use crate::procedure::seal::with_cause;
use crate::procedure::signer::{KeyChoice, key_of};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::verify::{VerifiedPage, VerifiedResult, VerifyError, verify_page};
use crate::procedure::{Desk, SignerError};
use crate::record::{self, Meaning, TextLine};
use std::path::Path;

/// What a second person says of a result.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Judgement {
    /// Gone through and found right.
    Reviewed,
    /// May be used.
    Approved,
    /// Found wrong.
    Rejected,
    /// No longer valid.
    Withdrawn,
}

impl Judgement {
    /// The word that the act carries.
    pub fn word(self) -> &'static str {
        self.meaning().word()
    }

    fn meaning(self) -> Meaning {
        match self {
            Self::Reviewed => Meaning::Reviewed,
            Self::Approved => Meaning::Approved,
            Self::Rejected => Meaning::Rejected,
            Self::Withdrawn => Meaning::Withdrawn,
        }
    }
}

/// What is to be countersigned, by whom.
#[derive(Clone, Debug)]
pub struct CountersignRequest {
    /// Only this label; every sealed result of the page otherwise.
    pub label: Option<String>,
    /// Who signs with which key.
    pub key: KeyChoice,
    /// What is said.
    pub judgement: Judgement,
    /// A remark.
    pub note: Option<String>,
}

/// Why nothing was countersigned or amended.
#[derive(Debug, thiserror::Error)]
pub enum CountersignError {
    /// The page cannot be read or written.
    #[error(transparent)]
    Compute(#[from] ComputeError),
    /// It cannot be verified.
    #[error(transparent)]
    Verify(#[from] VerifyError),
    /// The notebook's records cannot be worked with.
    #[error(transparent)]
    Records(#[from] RecordsError),
    /// There is no key.
    #[error(transparent)]
    Signer(#[from] SignerError),
    /// The signer cannot sign here.
    #[error(transparent)]
    Hand(#[from] HandError),
    /// Somebody else writes.
    #[error(transparent)]
    Lock(#[from] LockError),
    /// There is no sealed result of that label.
    #[error("there is no sealed result{}", .label.as_ref().map(|label| format!(" `{label}`")).unwrap_or_default())]
    NoResult {
        /// The label, if one was named.
        label: Option<String>,
    },
    /// It does not verify, so nothing may be added to it.
    #[error("`{label}` does not verify; nothing was signed")]
    NotVerified {
        /// The label.
        label: String,
    },
    /// The block was changed before the amendment, so that its text as signed cannot be kept.
    #[error(
        "the block of `{label}` is not the one that was signed, so it cannot be kept; put it back as it was, amend, and change it then"
    )]
    QuestionChanged {
        /// The label.
        label: String,
    },
    /// The act was not made.
    #[error("`{label}`: {}", with_cause(error))]
    Act {
        /// The label.
        label: String,
        /// Why.
        error: record::SealError,
    },
    /// A remark or reason does not fit on a line of a record.
    #[error("{text:?} cannot stand in a record; use one line of plain text")]
    Text {
        /// The text.
        text: String,
    },
}

/// Adds an act to the sealed results of a page; gives back their labels.
///
/// # Errors
/// [`CountersignError`]; the page is then as it was.
pub fn countersign_page(
    path: &Path,
    request: &CountersignRequest,
    surroundings: &Surroundings<'_>,
) -> Result<Vec<String>, CountersignError> {
    let desk = Desk::at(path).map_err(ComputeError::from)?;
    let records = Records::of(desk.notebook.as_ref(), [0; 16])?;
    let _lock = desk.lock()?;
    let note = request.note.as_deref().map(line).transpose()?;
    let verified = verify_page(path, surroundings)?;
    let chosen: Vec<&VerifiedResult> = verified
        .results
        .iter()
        .filter(|result| !result.draft && result.mark.is_none())
        .filter(|result| {
            request
                .label
                .as_ref()
                .is_none_or(|label| *label == result.label)
        })
        .collect();
    if chosen.is_empty() {
        return Err(CountersignError::NoResult {
            label: request.label.clone(),
        });
    }
    let signer = key_of(surroundings, &request.key, &records.roster)?;
    let mut hand = Hand::of(&desk, records, surroundings, signer, None)?;
    let mut edits = Vec::new();
    let mut labels = Vec::new();
    for result in chosen {
        edits.extend(act_on(
            &verified,
            result,
            request.judgement,
            note.as_ref(),
            &mut hand,
        )?);
        labels.push(result.label.clone());
    }
    hand.write_register()?;
    let after = verified
        .page
        .with(edits)
        .map_err(|error| placing(&verified.name, &error))?;
    replace(path, verified.page.bytes(), &after).map_err(ComputeError::from)?;
    Ok(labels)
}

/// The edits that one further act makes in the page.
fn act_on(
    verified: &VerifiedPage,
    result: &VerifiedResult,
    judgement: Judgement,
    note: Option<&TextLine>,
    hand: &mut Hand<'_>,
) -> Result<Vec<Edit>, CountersignError> {
    let label = &result.label;
    let not_verified = || CountersignError::NotVerified {
        label: label.clone(),
    };
    let proof = result
        .verified
        .as_ref()
        .filter(|_| !result.failed())
        .ok_or_else(not_verified)?;
    let region = verified
        .page
        .results()
        .iter()
        .find(|region| region.label() == label && region.mark().is_none())
        .ok_or_else(not_verified)?;
    let sealed = hand
        .sign(note, |signing| {
            record::countersign(proof, judgement.meaning(), signing)
        })
        .map_err(|error| CountersignError::Act {
            label: label.clone(),
            error,
        })?;
    let mut acts: Vec<String> = region
        .acts()
        .iter()
        .map(|fence| fence.content.text().to_owned())
        .collect();
    acts.push(sealed.act.print());
    let record = region.record().map_or("", |fence| fence.content.text());
    let written = Written::sealed(label, region.answer().text(), record, acts)
        .map_err(|error| placing(label, &error))?;
    let mut edits = vec![
        verified
            .page
            .replacing(region, &written)
            .map_err(|error| placing(label, &error))?,
    ];
    if judgement == Judgement::Withdrawn {
        let question = question_of(&verified.page, label).ok_or_else(not_verified)?;
        let notice = format!(
            "on {} by {}.",
            hand.now().format("%Y-%m-%d"),
            escaped(hand.signer.as_str())
        );
        edits.push(
            verified
                .page
                .marking(region, Mark::Withdrawn, &notice, question)
                .map_err(|error| placing(label, &error))?,
        );
    }
    hand.take(sealed.entry, &sealed.register_addition);
    Ok(edits)
}

pub(super) fn line(text: &str) -> Result<TextLine, CountersignError> {
    TextLine::new(text).map_err(|_fault| CountersignError::Text {
        text: text.to_owned(),
    })
}

pub(super) fn placing(label: &str, error: &dyn std::error::Error) -> ComputeError {
    ComputeError::Placing {
        label: label.to_owned(),
        reason: error.to_string(),
    }
}

/// Characters that Markdown or HTML would take for more than text.
const SPECIAL: &str = "\\`*_[]<>&#|!~";

/// A text as Markdown shows it unchanged.
pub(super) fn escaped(text: &str) -> String {
    text.chars()
        .flat_map(|c| {
            SPECIAL
                .contains(c)
                .then_some('\\')
                .into_iter()
                .chain(std::iter::once(c))
        })
        .collect()
}

/// The text that [`escaped`] was made of.
pub(super) fn unescaped(text: &str) -> String {
    let mut plain = String::new();
    let mut rest = text.chars();
    while let Some(c) = rest.next() {
        plain.extend(if c == '\\' { rest.next() } else { Some(c) });
    }
    plain
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn reasons_survive_the_page() {
        for text in ["wrong lot: K_2291*", "a <b> & c", "back\\slash `code`"] {
            assert_eq!(unescaped(&escaped(text)), text);
        }
    }
}
