//! Record and act lines, digest, signature, roster, chain, verification.
//!
//! - A [`Statement`] is what is claimed: which question, with which files, got which answer, all by digest. [`seal`] signs
//!   it with the [`Act`] `performed`.
//! - [`verify`] checks one result against what stands in the page, the [`Roster`] and the [`Policy`]; it alone makes
//!   [`Verified`], without which [`countersign`] adds no further act.
//! - A [`Register`] keeps a signer's acts in order. [`examine`] finds what no single result shows: acts that are gone,
//!   forks, copies, supersession, sources that changed. [`examine_roster`] asks whether a keeper signed the roster.
//! - Everything found is a [`Finding`], from the closed list of [`Fault`].
//!
//! This module signs named byte strings. It never sees a pH or a Markdown page, and reads no clock, file, environment or
//! random source: times, bytes and entropy are passed in, and a private key stands behind [`Signer`].
//!
//! ```
//! use ionfolio::record::*;
//!
//! # fn main() -> Result<(), Box<dyn std::error::Error>> {
//! let (question, answer) = (&b"label: rb-118\n"[..], &b"**pH 7.20**\n"[..]);
//! let statement = Statement {
//!     notebook: NotebookId::new("5f1c9d0e7a2b4c68")?,
//!     page: NotebookPath::new("rinse.md")?,
//!     label: Label::new("rb-118")?,
//!     supersedes: None,
//!     question: Digest::of_lines(question),
//!     answer: Digest::of_lines(answer),
//!     defaults: None,
//!     attachments: vec![],
//!     uses: vec![],
//!     template: Named::new(TextLine::new("built-in speciation")?, Digest::of_file(b"")),
//!     assumed: vec![],
//!     program: Named::new(TextLine::new("ionfolio 0.1.0")?, Digest::of_file(b"")),
//!     result: TextLine::new("pH 7.20")?,
//! };
//! let key = KeyFile::generate(&[7; 32], "worthless")?;
//! let signer = SignerName::new("bench.analyst")?;
//! let time = chrono::DateTime::parse_from_rfc3339("2026-11-03T10:12:45+01:00")?;
//! let (mut roster, policy) = (Roster::default(), Policy::default());
//! roster.enrol(signer.clone(), key.public_key().clone(), time)?;
//! let sealed = seal(
//!     &Draft { statement: &statement, question, answer },
//!     &Signing {
//!         signer: &signer,
//!         name: &TextLine::new("Bench Analyst")?,
//!         time,
//!         note: None,
//!         registers: &[],
//!         roster: &roster,
//!         policy: &policy,
//!         people: &[],
//!         key: &key,
//!     },
//! )?;
//!
//! let act = sealed.act.print();
//! let parts = Parts {
//!     notebook: &statement.notebook,
//!     page: "rinse.md",
//!     label: "rb-118",
//!     question: Some(question),
//!     answer: b"**pH 7.30**\n",
//!     record: Some(sealed.record.as_bytes()),
//!     acts: &[act.as_bytes()],
//!     attachment: &|_| None,
//!     defaults: None,
//! };
//! let authority = Authority { roster: &roster, policy: &policy, people: &[], now: time };
//! let verification = verify(&parts, &authority);
//! assert_eq!(verification.findings[0].name(), "answer-changed");
//! assert!(verification.verified.is_none());
//! assert!(verify(&Parts { answer, ..parts }, &authority).verified.is_some());
//! # Ok(())
//! # }
//! ```
//!
//! What was not verified cannot be countersigned:
//!
//! ```compile_fail,E0308
//! use ionfolio::record::{Meaning, Record, Signing, countersign};
//! fn hasty(record: &Record, signing: &Signing<'_>) {
//!     let _act = countersign(record, Meaning::Reviewed, signing);
//! }
//! ```
//!
//! ```
//! use ionfolio::record::{Meaning, Record, Signing, Verified, countersign};
//! fn careful(record: &Verified<Record>, signing: &Signing<'_>) {
//!     let _act = countersign(record, Meaning::Reviewed, signing);
//! }
//! ```

mod act;
mod appearance;
mod chain;
mod conformity;
mod declaration;
mod digest;
mod fault;
mod finding;
mod identity;
mod keeper;
mod key;
mod lines;
mod policy;
mod register;
mod remedy;
mod roster;
mod sealing;
mod signature;
#[cfg(test)]
mod specimen;
mod statement;
mod succession;
mod verification;

pub use act::{Act, ActError, Meaning, SignedAct};
pub use appearance::{Disguise, disguises};
pub use chain::{Notebook, examine, register_file};
pub use declaration::Declaration;
pub use digest::Digest;
pub use fault::{Fault, SourceFate};
pub use finding::{Finding, Part, Place, Severity};
pub use identity::{Label, NotebookId, NotebookPath, SignerName, TextLine};
pub use keeper::{Keeping, examine_roster};
pub use key::{KeyError, KeyFile, Lock};
pub use lines::{LineError, ValueFault};
pub use policy::{Person, Policy, Role};
pub use register::{Entry, Next, Register, RegisterFault, Seen};
pub use roster::{Enrolment, Roster, RosterError, Standing};
pub use sealing::{Draft, SealError, Sealed, Signing, countersign, declare, seal};
pub use signature::{
    NAMESPACE, PublicKey, PublicKeyError, Signature, SignatureFault, Signer, SigningError,
};
pub use statement::{Named, ResultName, Statement, Supersession};
pub use succession::Placed;
pub use verification::{Authority, Parts, Record, Verification, Verified, verify};
