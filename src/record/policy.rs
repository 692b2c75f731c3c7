//! What a laboratory asks of its records, and who its people are: plain data that the notebook reads.

use std::collections::{BTreeMap, BTreeSet};

use super::act::Meaning;
use super::identity::{SignerName, TextLine};

/// A role that people have and the policy speaks of, such as `analyst` or `reviewer`.
pub type Role = TextLine;

/// Which acts a record needs, and who may do them.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Policy {
    /// Acts that a record needs besides `performed`.
    pub required: BTreeSet<Meaning>,
    /// Whether one may review or approve one's own work.
    pub own_review: bool,
    /// Days after `performed` within which the required acts are due; none means no date.
    pub due_days: Option<u32>,
    /// The roles that an act is kept for; an act without an entry is open to all on the roster.
    pub reserved: BTreeMap<Meaning, BTreeSet<Role>>,
}

impl Default for Policy {
    /// Nothing but `performed` is asked for; one's own work is for somebody else to review.
    fn default() -> Self {
        Self {
            required: BTreeSet::new(),
            own_review: false,
            due_days: None,
            reserved: BTreeMap::new(),
        }
    }
}

/// A person of the laboratory.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Person {
    /// How the roster names them.
    pub signer: SignerName,
    /// The name that acts print.
    pub name: TextLine,
    /// Their roles.
    pub roles: BTreeSet<Role>,
}

impl Policy {
    /// Whether the signer's roles let them do this.
    #[must_use]
    pub fn authorises(&self, people: &[Person], signer: &SignerName, meaning: Meaning) -> bool {
        self.reserved.get(&meaning).is_none_or(|roles| {
            people
                .iter()
                .filter(|person| person.signer == *signer)
                .any(|person| !person.roles.is_disjoint(roles))
        })
    }

    /// Whether the act is a judgement on one's own work that is forbidden here.
    #[must_use]
    pub fn forbids_own(
        &self,
        performer: &SignerName,
        signer: &SignerName,
        meaning: Meaning,
    ) -> bool {
        let judgement = matches!(meaning, Meaning::Reviewed | Meaning::Approved);
        judgement && !self.own_review && performer == signer
    }
}
