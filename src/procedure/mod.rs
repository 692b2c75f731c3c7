//! The uses, as functions: compute, check, seal, verify and the rest.
//!
//! The only place where pages, chemistry and records meet. What comes from outside (time, entropy, keys) comes through [`surroundings`]. Nothing
//! here prints: a function gives back what happened, and the command line tells it.

pub mod surroundings;

mod claim;
mod compute;
mod countersign;
mod desk;
mod entry;
mod explain;
mod hand;
mod library;
mod page_work;
mod records;
mod roster;
mod seal;
mod signer;
mod sources;
mod verify;

pub use compute::{
    ComputeError, Computed, ComputedBlock, Mode, Standing, compute_page, compute_text,
};
pub use countersign::{
    CountersignError, CountersignRequest, Judgement, amend_page, countersign_page,
};
pub use desk::{Desk, DeskError};
pub use entry::{EntryError, TEMPLATES, new_page};
pub use explain::{Explanation, explain};
pub use hand::HandError;
pub use library::{LibraryLine, list, show};
pub use page_work::{BlockWork, PageWork};
pub use records::RecordsError;
pub use roster::{RosterFileError, enrol, retire, roster_lines};
pub use seal::{SealError, SealRequest, Sealed, SealedBlock, seal_page};
pub use signer::{KeyMade, SignerError, key_of, make_key, signer_name};
pub use verify::{
    PagesError, Recomputed, VerifiedPage, VerifiedResult, VerifyError, pages, verify_page,
};
