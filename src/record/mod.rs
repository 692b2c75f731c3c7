//! Record and act lines, digest, signature, roster, chain, verification.

mod act;
mod appearance;
mod declaration;
mod digest;
mod identity;
mod key;
mod lines;
mod register;
mod roster;
mod signature;
mod statement;

pub use act::{Act, ActError, Meaning, SignedAct};
pub use appearance::{Disguise, disguises};
pub use declaration::Declaration;
pub use digest::Digest;
pub use identity::{Label, NotebookId, NotebookPath, SignerName, TextLine};
pub use key::{KeyError, KeyFile, Lock};
pub use lines::{LineError, ValueFault};
pub use register::{Entry, Next, Register, RegisterFault, Seen};
pub use roster::{Enrolment, Roster, RosterError, Standing};
pub use signature::{
    NAMESPACE, PublicKey, PublicKeyError, Signature, SignatureFault, Signer, SigningError,
};
pub use statement::{Named, ResultName, Statement, Supersession};
