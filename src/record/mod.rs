//! Record and act lines, digest, signature, roster, chain, verification.

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
