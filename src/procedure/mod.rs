//! The uses, as functions: compute, check, seal, verify and the rest.
//!
//! The only place where pages, chemistry and records meet. What comes from outside (time, entropy, keys) comes through [`surroundings`]. Nothing
//! here prints: a function gives back what happened, and the command line tells it.

pub mod surroundings;

mod agent;
mod amend;
mod audit;
mod audit_contents;
mod audit_filter;
mod audit_report;
mod audit_sections;
mod claim;
mod compute;
mod countersign;
mod desk;
mod entry;
mod examination;
mod explain;
mod hand;
mod inspection;
mod keeper;
mod key_file;
mod library;
mod page_work;
mod plot_names;
mod recomputation;
mod records;
mod roster;
mod seal;
mod sealing;
mod signer;
mod sources;
#[cfg(test)]
mod specimen;
mod trust;
mod verify;

pub use agent::AgentError;
pub use amend::amend_page;
pub use audit::{
    Audit, AuditAct, AuditConstant, AuditFinding, AuditResult, AuditSigner, LeftOut, audit,
};
pub use audit_filter::{AuditFilter, AuditFilterError};
pub use audit_report::{AuditFormat, audit_report};
pub use compute::{
    ComputeError, Computed, ComputedBlock, Mode, Standing, compute_page, compute_text,
};
pub use countersign::{CountersignError, CountersignRequest, Judgement, countersign_page};
pub use desk::{Desk, DeskError};
pub use entry::{EntryError, TEMPLATES, new_page};
pub use examination::{ExaminationError, Examined, examine, is_notebook};
pub use explain::{Explanation, explain};
pub use hand::HandError;
pub use keeper::{KeeperError, RosterSigned, sign_roster};
pub use key_file::{KeyMade, make_key};
pub use library::{LibraryLine, list, show};
pub use page_work::{BlockWork, PageWork};
pub use recomputation::Recomputed;
pub use records::RecordsError;
pub use roster::{EarlierActs, RosterFileError, enrol, retire, roster_lines};
pub use seal::{SealError, SealRequest, Sealed, SealedBlock, seal_page};
pub use signer::{KeyChoice, SignerError, has_key, signer_name};
pub use verify::{PagesError, VerifiedPage, VerifiedResult, VerifyError, pages, verify_page};
