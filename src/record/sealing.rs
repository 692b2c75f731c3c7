//! Sealing and countersigning: from a draft to a signed record, and from a verified record to a further act.

use chrono::{DateTime, FixedOffset};

use super::act::{Act, Meaning, SignedAct, print_time, whole_seconds};
use super::appearance::{Disguise, disguises};
use super::conformity::{person_faults, signature_faults};
use super::declaration::Declaration;
use super::digest::Digest;
use super::fault::Fault;
use super::identity::{SignerName, TextLine};
use super::policy::{Person, Policy};
use super::register::{Entry, Register, Seen};
use super::roster::Roster;
use super::signature::{NAMESPACE, SignatureFault, Signer, SigningError};
use super::statement::Statement;
use super::verification::{Authority, Record, Verified};

/// What is to be sealed: the statement, and the texts whose digests it carries.
#[derive(Clone, Copy, Debug)]
pub struct Draft<'a> {
    /// What is claimed.
    pub statement: &'a Statement,
    /// The block's content.
    pub question: &'a [u8],
    /// The answer.
    pub answer: &'a [u8],
}

/// Who signs, when, and with which registers and rules at hand.
#[derive(Clone, Copy)]
pub struct Signing<'a> {
    /// Who signs, as the roster names them.
    pub signer: &'a SignerName,
    /// Their printed name.
    pub name: &'a TextLine,
    /// The time by the signer's clock; fractions of a second are dropped.
    pub time: DateTime<FixedOffset>,
    /// A remark.
    pub note: Option<&'a TextLine>,
    /// Every register at hand, the signer's own among them if there is one.
    pub registers: &'a [Register],
    /// Who may sign.
    pub roster: &'a Roster,
    /// What is asked of a record.
    pub policy: &'a Policy,
    /// The people of the laboratory.
    pub people: &'a [Person],
    /// The signer's key.
    pub key: &'a dyn Signer,
}

impl std::fmt::Debug for Signing<'_> {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "Signing({} at {})", self.signer, print_time(&self.time))
    }
}

/// A signed act, and what is to be written: first the register, then the page.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Sealed {
    /// The content of the `record` fence, with LF.
    pub record: String,
    /// The digest of the record.
    pub digest: Digest,
    /// The act; [`SignedAct::print`] is the content of its fence.
    pub act: SignedAct,
    /// The entry for the signer's register.
    pub entry: Entry,
    /// The text to add at the end of the signer's register, with LF.
    pub register_addition: String,
}

/// Why nothing was signed.
#[derive(Debug, thiserror::Error)]
pub enum SealError {
    /// The statement carries another digest than the question has.
    #[error("the statement is not about this question")]
    OtherQuestion,
    /// The statement carries another digest than the answer has.
    #[error("the statement is not about this answer")]
    OtherAnswer,
    /// The question does not look like what it is.
    #[error("the question holds {0}")]
    QuestionLooksDifferent(Disguise),
    /// The answer does not look like what it is.
    #[error("the answer holds {0}")]
    AnswerLooksDifferent(Disguise),
    /// The printed record does not read back: lines out of order or twice.
    #[error("the statement cannot be written: {0}")]
    Statement(#[from] super::lines::LineError),
    /// An act of that meaning is not made this way.
    #[error("an act `{meaning}` cannot be made on this")]
    Meaning {
        /// The meaning.
        meaning: Meaning,
    },
    /// The record was withdrawn.
    #[error("the result is withdrawn")]
    Withdrawn,
    /// The signer has done that already.
    #[error("{signer} has signed `{meaning}` already")]
    Twice {
        /// Who.
        signer: SignerName,
        /// As what.
        meaning: Meaning,
    },
    /// The roster or the policy does not allow it.
    #[error("{0}")]
    NotAllowed(Fault),
    /// The signer's register is not in order, so that the chain would go on from something unknown.
    #[error("the register of {signer} is not in order")]
    Register {
        /// Whose.
        signer: SignerName,
    },
    /// The clock shows a time before that of an act at hand.
    #[error(
        "the clock shows {}, before an act of {}",
        print_time(time),
        print_time(before)
    )]
    ClockRanBack {
        /// The time by the clock.
        time: DateTime<FixedOffset>,
        /// The time of the latest act at hand.
        before: DateTime<FixedOffset>,
    },
    /// The key did not sign.
    #[error(transparent)]
    Signing(#[from] SigningError),
}

/// Seals a draft with the act `performed`.
///
/// # Errors
///
/// [`SealError`]: the statement does not fit the texts, a text looks different from what it is, the signer may not
/// sign, the clock ran back, or the key did not sign.
pub fn seal(draft: &Draft<'_>, signing: &Signing<'_>) -> Result<Sealed, SealError> {
    let statement = draft.statement;
    if Digest::of_lines(draft.question) != statement.question {
        return Err(SealError::OtherQuestion);
    }
    if Digest::of_lines(draft.answer) != statement.answer {
        return Err(SealError::OtherAnswer);
    }
    if let Some(disguise) = disguises(draft.question).into_iter().next() {
        return Err(SealError::QuestionLooksDifferent(disguise));
    }
    if let Some(disguise) = disguises(draft.answer).into_iter().next() {
        return Err(SealError::AnswerLooksDifferent(disguise));
    }
    let record = statement.print();
    Statement::parse(record.as_bytes())?;
    sign(record, Meaning::Performed, signing)
}

/// Adds a further act to a verified record: reviewed, approved, rejected or withdrawn.
///
/// # Errors
///
/// [`SealError`]: another meaning, a withdrawn record, an act that the signer made already or may not make, a clock
/// that ran back, or a key that did not sign.
pub fn countersign(
    record: &Verified<Record>,
    meaning: Meaning,
    signing: &Signing<'_>,
) -> Result<Sealed, SealError> {
    let record = record.get();
    if meaning == Meaning::Performed || !meaning.is_of_a_page() {
        return Err(SealError::Meaning { meaning });
    }
    for act in record.acts.iter().map(SignedAct::act) {
        if act.meaning == Meaning::Withdrawn {
            return Err(SealError::Withdrawn);
        }
        let signer = act.signer.clone();
        if act.meaning == Meaning::Performed
            && signing.policy.forbids_own(&signer, signing.signer, meaning)
        {
            return Err(SealError::NotAllowed(Fault::OwnReview { signer, meaning }));
        }
        if act.meaning == meaning && signer == *signing.signer {
            return Err(SealError::Twice { signer, meaning });
        }
        check_clock(signing.time, Some(act.time))?;
    }
    sign(record.statement.print(), meaning, signing)
}

/// Signs a declaration: a keeper's roster, or the adoption of a constant.
///
/// # Errors
///
/// [`SealError`]: a meaning that belongs to a page, a signer who may not sign it, a clock that ran back, or a key that
/// did not sign.
pub fn declare(
    declaration: &Declaration,
    meaning: Meaning,
    signing: &Signing<'_>,
) -> Result<Sealed, SealError> {
    if meaning.is_of_a_page() {
        return Err(SealError::Meaning { meaning });
    }
    let record = declaration.print();
    Declaration::parse(record.as_bytes())?;
    sign(record, meaning, signing)
}

fn sign(record: String, meaning: Meaning, signing: &Signing<'_>) -> Result<Sealed, SealError> {
    let signer = signing.signer.clone();
    let own = signing
        .registers
        .iter()
        .find(|register| *register.signer() == signer)
        .cloned()
        .unwrap_or_else(|| Register::empty(signer.clone()));
    if !own.is_sound() {
        return Err(SealError::Register { signer });
    }
    for register in signing.registers {
        check_clock(signing.time, register.latest_time())?;
    }
    let digest = Digest::of_lines(record.as_bytes());
    let seen = Seen::of(signing.registers, &signer);
    let next = own.next();
    let act = Act {
        record: digest,
        meaning,
        signer,
        name: signing.name.clone(),
        time: whole_seconds(signing.time),
        number: next.number,
        previous: next.previous,
        seen: seen.digest(),
        note: signing.note.cloned(),
    };
    let authority = Authority {
        roster: signing.roster,
        policy: signing.policy,
        people: signing.people,
        now: act.time,
    };
    if let Some(fault) = person_faults(&act, &authority).into_iter().next() {
        return Err(SealError::NotAllowed(fault));
    }
    let signature = signing.key.sign(NAMESPACE, act.print().as_bytes())?;
    signature
        .verify(act.print().as_bytes(), signing.key.public_key())
        .map_err(SigningError::from)?;
    let act = SignedAct::new(act, signature);
    if let Some(fault) = signature_faults(&act, signing.roster).into_iter().next() {
        return Err(SealError::NotAllowed(fault));
    }
    let entry = Entry {
        record: record.clone(),
        seen,
        act: act.clone(),
    };
    Ok(Sealed {
        record,
        digest,
        act,
        register_addition: own.addition(&entry),
        entry,
    })
}

fn check_clock(
    time: DateTime<FixedOffset>,
    before: Option<DateTime<FixedOffset>>,
) -> Result<(), SealError> {
    match before {
        Some(before) if whole_seconds(time) < before => {
            Err(SealError::ClockRanBack { time, before })
        }
        _ => Ok(()),
    }
}

impl From<SignatureFault> for SealError {
    fn from(fault: SignatureFault) -> Self {
        Self::Signing(fault.into())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::specimen::{Laboratory, names, page, statement};

    const FIRST: &str = "2026-11-03T10:12:45+01:00";
    const SECOND: &str = "2026-11-04T09:00:00+01:00";

    #[test]
    fn a_countersigned_result_verifies_and_fulfils_the_policy() {
        let mut laboratory = Laboratory::new();
        laboratory.policy.required.insert(Meaning::Reviewed);
        let sealed = laboratory.seal(&statement(), "analyst", FIRST);
        let first = laboratory.verify(&page(&[&sealed]));
        assert_eq!(names(&first.findings), ["required-act-missing"]);
        let verified = first.verified.unwrap();
        let reviewed = laboratory
            .try_countersign(&verified, Meaning::Reviewed, ("reviewer", SECOND))
            .unwrap();
        laboratory.keep(&reviewed);
        let both = laboratory.verify(&page(&[&sealed, &reviewed]));
        assert_eq!(both.findings, []);
        let again = laboratory.try_countersign(
            &both.verified.unwrap(),
            Meaning::Reviewed,
            ("reviewer", SECOND),
        );
        assert!(matches!(again, Err(SealError::Twice { .. })), "{again:?}");
    }

    #[test]
    fn own_review_is_refused_and_found_where_it_was_made() {
        let mut laboratory = Laboratory::new();
        let sealed = laboratory.seal(&statement(), "analyst", FIRST);
        let verified = laboratory.verify(&page(&[&sealed])).verified.unwrap();
        let own = |laboratory: &Laboratory| {
            laboratory.try_countersign(&verified, Meaning::Reviewed, ("analyst", SECOND))
        };
        let refused = own(&laboratory);
        let expected = matches!(refused, Err(SealError::NotAllowed(Fault::OwnReview { .. })));
        assert!(expected, "{refused:?}");
        laboratory.policy.own_review = true;
        let reviewed = own(&laboratory).unwrap();
        laboratory.policy.own_review = false;
        let found = laboratory.verify(&page(&[&sealed, &reviewed])).findings;
        assert_eq!(names(&found), ["own-review"]);
    }

    #[test]
    fn nothing_is_signed_against_clock_roster_or_texts() {
        let mut laboratory = Laboratory::new();
        laboratory.seal(&statement(), "analyst", SECOND);
        let early = laboratory.try_seal(&statement(), "reviewer", FIRST);
        assert!(
            matches!(early, Err(SealError::ClockRanBack { .. })),
            "{early:?}"
        );
        let stranger = laboratory.try_seal(&statement(), "stranger", SECOND);
        let expected = matches!(
            stranger,
            Err(SealError::NotAllowed(Fault::SignerNotOnRoster { .. }))
        );
        assert!(expected, "{stranger:?}");
        let mut other = statement();
        other.answer = other.question;
        let refused = laboratory.try_seal(&other, "analyst", SECOND);
        assert!(
            matches!(refused, Err(SealError::OtherAnswer)),
            "{refused:?}"
        );
    }

    #[test]
    fn a_text_in_disguise_is_not_sealed() {
        let mut laboratory = Laboratory::new();
        laboratory.seal(&statement(), "analyst", FIRST);
        let question = "note: 7.2\u{200b}0\n".as_bytes();
        let mut statement = statement();
        statement.question = Digest::of_lines(question);
        let draft = Draft {
            statement: &statement,
            question,
            answer: crate::record::specimen::ANSWER,
        };
        let refused = laboratory.signing("analyst", SECOND, |signing| seal(&draft, signing));
        assert!(
            matches!(refused, Err(SealError::QuestionLooksDifferent(_))),
            "{refused:?}"
        );
    }

    #[test]
    fn acts_are_numbered_and_chained() {
        let mut laboratory = Laboratory::new();
        let first = laboratory.seal(&statement(), "analyst", FIRST);
        let second = laboratory.seal(&statement(), "analyst", SECOND);
        assert_eq!((first.act.act().number, second.act.act().number), (1, 2));
        assert_eq!(second.act.act().previous, [first.act.digest()]);
        let reviewers = laboratory.seal(&statement(), "reviewer", SECOND);
        assert_eq!(reviewers.entry.seen.acts().len(), 1);
        assert_eq!(reviewers.entry.seen.acts()[0].digest, second.act.digest());
    }
}
