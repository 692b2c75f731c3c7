//! Name, weight and remedy of everything that verification can find: one row each.

use super::fault::Fault;
use super::finding::Severity;

macro_rules! rows {
    ($($pattern:pat => $name:literal, $severity:ident, $remedy:expr;)*) => {
        impl Fault {
            /// Its name: lower-case words joined by hyphens, the same in every version.
            pub const fn name(&self) -> &'static str {
                use Fault as F;
                match self { $($pattern => $name,)* }
            }

            /// How much it weighs.
            pub const fn severity(&self) -> Severity {
                use Fault as F;
                match self { $($pattern => Severity::$severity,)* }
            }

            /// What to do about it.
            pub const fn remedy(&self) -> &'static str {
                use Fault as F;
                match self { $($pattern => $remedy,)* }
            }

            /// Every name, in the order of the list.
            pub const NAMES: &'static [&'static str] = &[$($name,)*];

            /// Name, weight and remedy of each, in the order of the list.
            pub const ROWS: &'static [(&'static str, Severity, &'static str)] =
                &[$(($name, Severity::$severity, $remedy),)*];
        }
    };
}

const RESTORE: &str =
    "restore the page from version control or a copy; a wanted change is an amendment";
const REGISTER: &str = "restore the register from version control or a copy; it only ever grows";
const INQUIRE: &str = "ask the signer, and treat the result as unsigned until it is explained";
const KEEPER: &str = "have the keeper set the roster right and sign it";
const COUNTERSIGN: &str = "have an authorised person countersign the result";

rows! {
    F::QuestionChanged => "question-changed", Failure, RESTORE;
    F::AnswerChanged => "answer-changed", Failure, RESTORE;
    F::RecordChanged { .. } => "record-changed", Failure, RESTORE;
    F::RecordUnreadable(_) => "record-unreadable", Failure, RESTORE;
    F::ActUnreadable(_) => "act-unreadable", Failure, RESTORE;
    F::NewerVersion { .. } => "newer-version", Failure, "verify with a program of that version or later";
    F::DefaultsChanged => "defaults-changed", Note, "none; recomputing uses the defaults of today and may differ";
    F::AttachmentChanged => "attachment-changed", Failure, "restore the file from version control or the instrument";
    F::AttachmentMissing => "attachment-missing", Failure, "put the file back to its place";
    F::SignatureWrong(_) => "signature-wrong", Failure, RESTORE;
    F::SignerNotOnRoster { .. } => "signer-not-on-roster", Failure, KEEPER;
    F::KeyNotOnRoster { .. } => "key-not-on-roster", Failure, KEEPER;
    F::KeyOutsideDates { .. } => "key-outside-dates", Failure, INQUIRE;
    F::KeyRetired { .. } => "key-retired", Failure, "have the result signed again with a key in force";
    F::ActWithoutRecord => "act-without-record", Failure, RESTORE;
    F::RecordWithoutAct => "record-without-act", Failure, RESTORE;
    F::FirstActNotPerformed { .. } => "first-act-not-performed", Failure, RESTORE;
    F::ActOutOfPlace { .. } => "act-out-of-place", Failure, RESTORE;
    F::ActMissingFromPage { .. } => "act-missing-from-page", Failure,
        "complete an interrupted sealing with `seal`; else restore the page";
    F::ActMissingFromRegister { .. } => "act-missing-from-register", Failure, REGISTER;
    F::RegisterChanged(_) => "register-changed", Failure, REGISTER;
    F::ForeignAct { .. } => "foreign-act", Failure, REGISTER;
    F::RegisterRecordChanged => "register-record-changed", Failure, REGISTER;
    F::SeenListChanged => "seen-list-changed", Failure, REGISTER;
    F::ChainGap => "chain-gap", Failure, REGISTER;
    F::ChainFork { .. } => "chain-fork", Warning, "bring both branches together; the signer's next act joins them";
    F::JoinedFork { .. } => "joined-fork", Note, "none; both branches are kept and named by a later act";
    F::DuplicateNumber { .. } => "duplicate-number", Warning, "bring both branches together; the signer's next act joins them";
    F::RolledBack { .. } => "rolled-back", Failure, REGISTER;
    F::MovedPage { .. } => "moved-page", Warning, "give the page its old name back, or amend the result on the new one";
    F::CopiedResult { .. } => "copied-result", Failure, "remove the copy, or compute and seal a result of its own";
    F::WrongLabel { .. } => "wrong-label", Failure, RESTORE;
    F::WrongNotebook { .. } => "wrong-notebook", Failure, "verify it in the notebook where it was signed";
    F::DuplicateLabel => "duplicate-label", Failure, "give each block of the page a label of its own";
    F::SupersededWithoutSuccessor => "superseded-without-successor", Warning, "seal the draft that takes its place";
    F::SupersessionNotMarked { .. } => "supersession-not-marked", Failure, RESTORE;
    F::TwoSuccessors { .. } => "two-successors", Failure, "withdraw one of the two";
    F::SupersededMissing { .. } => "superseded-missing", Failure, RESTORE;
    F::MadeFrom { .. } => "made-from-changed", Warning, "compute again with the result as it stands now, and amend";
    F::ClockRanBack { .. } => "clock-ran-back", Failure, INQUIRE;
    F::TimeToCome { .. } => "time-to-come", Warning, "set the clocks right; ask the signer";
    F::RequiredActMissing { .. } => "required-act-missing", Warning, COUNTERSIGN;
    F::Overdue { .. } => "overdue", Warning, COUNTERSIGN;
    F::OwnReview { .. } => "own-review", Warning, "have somebody else countersign the result";
    F::NotAuthorised { .. } => "not-authorised", Warning, COUNTERSIGN;
    F::NameDiffers { .. } => "name-differs", Warning, "set the name right in the notebook, or ask the signer";
    F::Rejected { .. } => "rejected", Warning, "amend the result, or withdraw it";
    F::Withdrawn { .. } => "withdrawn", Note, "do not use the result";
    F::LooksDifferent(_) => "looks-different", Failure, "look at the bytes; take the characters out and seal again";
    F::RosterTrustedAsFound => "roster-trusted-as-found", Note, "give the keeper's fingerprint, learnt by another way";
    F::RosterNotTheKeepers => "roster-not-the-keepers", Failure, KEEPER;
    F::RosterLineUnread => "roster-line-unread", Warning, KEEPER;
    F::SharedKey { .. } => "shared-key", Warning, "give each person a key of their own";
}

#[cfg(test)]
mod tests {
    use std::collections::BTreeSet;

    use super::*;

    #[test]
    fn names_are_unique_and_in_one_form() {
        let unique: BTreeSet<&str> = Fault::NAMES.iter().copied().collect();
        assert_eq!(unique.len(), Fault::NAMES.len());
        for name in unique {
            assert!(
                name.bytes()
                    .all(|byte| byte.is_ascii_lowercase() || byte == b'-'),
                "{name}"
            );
        }
    }
}
