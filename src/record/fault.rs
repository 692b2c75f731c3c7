//! The closed list of what verification can find, with the name, weight, sentence and remedy of each.

use chrono::{DateTime, FixedOffset, Utc};

use super::act::{ActError, Meaning, print_time};
use super::appearance::Disguise;
use super::identity::{Label, NotebookId, NotebookPath, SignerName, TextLine};
use super::lines::LineError;
use super::register::RegisterFault;
use super::signature::SignatureFault;
use super::statement::ResultName;

/// What became of a result that another is made from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum SourceFate {
    /// It was amended.
    #[error("was amended later")]
    Amended,
    /// It was withdrawn.
    #[error("was withdrawn later")]
    Withdrawn,
    /// It was rejected.
    #[error("was rejected later")]
    Rejected,
    /// No sealed result with that digest is in the notebook.
    #[error("is not in the notebook as it was then")]
    Missing,
}

/// What verification can find. Printed, it is the sentence without a full stop.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum Fault {
    /// The block is not the one that was sealed.
    #[error("the question is not the one that was signed")]
    QuestionChanged,
    /// The answer is not the one that was sealed.
    #[error("the answer is not the one that was signed")]
    AnswerChanged,
    /// The record is in its form, but an act names another.
    #[error("the record is not the one that {signer} signed")]
    RecordChanged {
        /// Who signed.
        signer: SignerName,
    },
    /// The record departs from its form.
    #[error("the record cannot be read: {0}")]
    RecordUnreadable(LineError),
    /// An act departs from its form.
    #[error("the act cannot be read: {0}")]
    ActUnreadable(ActError),
    /// The lines are of a newer version.
    #[error("written by a newer program: version {version}")]
    NewerVersion {
        /// The version.
        version: u32,
    },
    /// The notebook's defaults are others than at the time.
    #[error("the notebook's defaults that bear on this block have changed since it was signed")]
    DefaultsChanged,
    /// A file is not the one that was sealed.
    #[error("the attachment is not the file that was signed")]
    AttachmentChanged,
    /// A file is gone.
    #[error("the attachment is not there")]
    AttachmentMissing,
    /// The signature does not hold.
    #[error("the signature {0}")]
    SignatureWrong(SignatureFault),
    /// The roster does not name the signer.
    #[error("{signer} is not on the roster")]
    SignerNotOnRoster {
        /// Who signed.
        signer: SignerName,
    },
    /// The roster gives the signer other keys.
    #[error("the roster does not give {signer} the key {fingerprint}")]
    KeyNotOnRoster {
        /// Who signed.
        signer: SignerName,
        /// The key's fingerprint.
        fingerprint: String,
    },
    /// The act is from before the key's first day.
    #[error("the key of {signer} signs only from {from} on, and the act is from before")]
    KeyOutsideDates {
        /// Who signed.
        signer: SignerName,
        /// First time at which the key signs.
        from: DateTime<Utc>,
    },
    /// The act is from after the key's retirement.
    #[error("the key of {signer} was retired at {at}, and the act is from after")]
    KeyRetired {
        /// Who signed.
        signer: SignerName,
        /// When the key was retired.
        at: DateTime<Utc>,
    },
    /// An act without the record that it names.
    #[error("an act stands here without a record")]
    ActWithoutRecord,
    /// A record that nobody signed.
    #[error("the record has no act: nobody signed it")]
    RecordWithoutAct,
    /// The first act is not `performed`.
    #[error("the first act is `{found}` instead of `performed`")]
    FirstActNotPerformed {
        /// What it is.
        found: Meaning,
    },
    /// An act that cannot stand below a result, or a second `performed`.
    #[error("an act `{found}` does not belong here")]
    ActOutOfPlace {
        /// What it is.
        found: Meaning,
    },
    /// The register has an act on this record that its page has not.
    #[error("act {number} of {signer}, `{meaning}`, is in the register and not on the page")]
    ActMissingFromPage {
        /// Who signed.
        signer: SignerName,
        /// Number of the act.
        number: u64,
        /// What it means.
        meaning: Meaning,
    },
    /// The page has an act that its signer's register has not.
    #[error("act {number} of {signer} is on the page and not in the register")]
    ActMissingFromRegister {
        /// Who signed.
        signer: SignerName,
        /// Number of the act.
        number: u64,
    },
    /// The register's text is not as it was written.
    #[error("the register is not as it was written: {0}")]
    RegisterChanged(RegisterFault),
    /// An act of somebody else.
    #[error("an act of {signer} stands in another signer's register")]
    ForeignAct {
        /// Who signed.
        signer: SignerName,
    },
    /// The record kept with the act is not the one that the act names.
    #[error("the record kept with the act is not the one that was signed")]
    RegisterRecordChanged,
    /// The list of seen acts is not the one that the act names.
    #[error("the list of seen acts is not the one that was signed")]
    SeenListChanged,
    /// Acts are missing from the chain.
    #[error("an act before this one is missing from the register")]
    ChainGap,
    /// Two acts follow the same act.
    #[error("the chain of {signer} forks at this act")]
    ChainFork {
        /// Whose chain.
        signer: SignerName,
    },
    /// Two acts follow the same act, and a later one names both.
    #[error("the chain of {signer} forked at this act and was joined later")]
    JoinedFork {
        /// Whose chain.
        signer: SignerName,
    },
    /// Two acts of a signer have one number.
    #[error("{signer} has two acts with this number")]
    DuplicateNumber {
        /// Whose acts.
        signer: SignerName,
    },
    /// An act that somebody saw is gone.
    #[error(
        "{witness} saw an act of {signer} that is gone: the register of {signer} was rolled back"
    )]
    RolledBack {
        /// Whose act is gone.
        signer: SignerName,
        /// Who saw it.
        witness: SignerName,
    },
    /// The page has another name than the record says.
    #[error("the result was signed on the page {from}: this page was moved or renamed")]
    MovedPage {
        /// The page then.
        from: NotebookPath,
    },
    /// The same record stands in two places.
    #[error("the result is a copy: it was signed at {original}")]
    CopiedResult {
        /// Where it was signed.
        original: ResultName,
    },
    /// The label is another than the record says.
    #[error("the result was signed under the label {signed}")]
    WrongLabel {
        /// The label then.
        signed: Label,
    },
    /// The notebook is another than the record says.
    #[error("the result was signed in another notebook, {signed}")]
    WrongNotebook {
        /// The notebook then.
        signed: NotebookId,
    },
    /// Two results of a page have one label.
    #[error("two results of the page have this label")]
    DuplicateLabel,
    /// Marked as superseded, and nothing takes its place.
    #[error("the result is marked as superseded, and no sealed result takes its place")]
    SupersededWithoutSuccessor,
    /// Something takes its place, and it is not marked.
    #[error("{successor} takes the place of this result, which is not marked as superseded")]
    SupersessionNotMarked {
        /// The label of what takes its place.
        successor: Label,
    },
    /// Two results take the place of one.
    #[error("{first} and {second} both take the place of this result")]
    TwoSuccessors {
        /// The label of one.
        first: Label,
        /// The label of the other.
        second: Label,
    },
    /// What it takes the place of is gone.
    #[error("the result takes the place of {replaced}, which is not on the page as it was then")]
    SupersededMissing {
        /// The label of what is gone.
        replaced: Label,
    },
    /// Made from something that does not stand any more.
    #[error("the result is made from {source_name}, which {fate}")]
    MadeFrom {
        /// What it is made from.
        source_name: ResultName,
        /// What became of it.
        fate: SourceFate,
    },
    /// A time before that of an earlier act.
    #[error(
        "the clock ran back: the act is from {}, an act before it from {}",
        print_time(time),
        print_time(before)
    )]
    ClockRanBack {
        /// The time of the act.
        time: DateTime<FixedOffset>,
        /// The time of an act that came before it.
        before: DateTime<FixedOffset>,
    },
    /// The act is from after the verifier's own time.
    #[error("the act is from {}, which is still to come", print_time(time))]
    TimeToCome {
        /// The time of the act.
        time: DateTime<FixedOffset>,
    },
    /// An act that the policy asks for is not there.
    #[error("the policy asks for an act `{meaning}`, and there is none")]
    RequiredActMissing {
        /// What is asked for.
        meaning: Meaning,
    },
    /// An act that the policy asks for is not there, and late.
    #[error("an act `{meaning}` is overdue by {days} days")]
    Overdue {
        /// What is asked for.
        meaning: Meaning,
        /// Whole days past the due date.
        days: i64,
    },
    /// Somebody reviewed their own work.
    #[error("{signer} signed `{meaning}` on their own work, which the policy forbids")]
    OwnReview {
        /// Who signed.
        signer: SignerName,
        /// As what.
        meaning: Meaning,
    },
    /// The policy does not let the signer do that.
    #[error("no role of {signer} may sign `{meaning}`")]
    NotAuthorised {
        /// Who signed.
        signer: SignerName,
        /// As what.
        meaning: Meaning,
    },
    /// The printed name is another than the notebook gives.
    #[error("the act prints the name {printed}, and the notebook gives {given}")]
    NameDiffers {
        /// The name in the act.
        printed: TextLine,
        /// The name in the notebook.
        given: TextLine,
    },
    /// Somebody rejected it.
    #[error("{signer} rejected the result")]
    Rejected {
        /// Who.
        signer: SignerName,
    },
    /// Somebody withdrew it.
    #[error("{signer} withdrew the result")]
    Withdrawn {
        /// Who.
        signer: SignerName,
    },
    /// The text does not look like what it is.
    #[error("the text looks different from what it is: {0}")]
    LooksDifferent(Disguise),
    /// Nobody vouches for the roster from outside.
    #[error("the roster is trusted as found: no keeper's fingerprint was given")]
    RosterTrustedAsFound,
    /// The keeper did not sign this roster.
    #[error("the roster is not the one that the keeper signed last")]
    RosterNotTheKeepers,
    /// A line that gives nobody a right.
    #[error("the line is not as this program writes it and gives nobody a right here")]
    RosterLineUnread,
    /// One key, two persons.
    #[error("{first} and {second} have the same key")]
    SharedKey {
        /// One signer.
        first: SignerName,
        /// The other.
        second: SignerName,
    },
}
