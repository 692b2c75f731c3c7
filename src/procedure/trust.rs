//! Whose key counts as whose: the roster, and signers that nobody enrolled yet, taken at their own first word.

use crate::procedure::records::Records;
use crate::record::{Register, Roster, SignedAct, SignerName, Standing};
use std::collections::BTreeSet;

/// The roster with the first key of every signer that it does not name. A second key of such a signer has nobody's word and stays a finding.
#[derive(Clone, Debug)]
pub(super) struct Trust {
    pub(super) roster: Roster,
    /// Signers that are on no roster.
    pub(super) unlisted: BTreeSet<SignerName>,
}

impl Trust {
    /// What the registers say of signers that the roster does not name.
    pub(super) fn of(records: &Records) -> Self {
        let mut trust = Self {
            roster: records.roster.clone(),
            unlisted: BTreeSet::new(),
        };
        for entry in records.registers.iter().flat_map(Register::entries) {
            trust.take(&entry.act);
        }
        trust
    }

    /// Takes the signer of an act at their word, if nothing else is known of them.
    pub(super) fn take(&mut self, signed: &SignedAct) {
        let act = signed.act();
        let Ok(key) = signed.signature().public_key() else {
            return;
        };
        // A signature that does not hold vouches for no key.
        if signed
            .signature()
            .verify(act.print().as_bytes(), &key)
            .is_err()
        {
            return;
        }
        let unknown = self.roster.standing(&act.signer, &key, act.time) == Standing::UnknownSigner;
        if unknown && self.roster.enrol(act.signer.clone(), key, act.time).is_ok() {
            self.unlisted.insert(act.signer.clone());
        }
    }
}
