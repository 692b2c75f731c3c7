//! The stored form of constants: the files of the library, and the `constants` part of an answer.
//!
//! The keys are those of the block language. Figures are texts, so that their digits stay.

use crate::quantity::Decimal;
use crate::substance::stored_pk::{figure, optional};
use crate::substance::{Hazard, InertIon, Ligand, StoredPk, names};
use serde::{Deserialize, Serialize};
use std::collections::BTreeMap;

/// What can be wrong in stored constants.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum LibraryError {
    /// A file of the library does not have the stored form.
    #[error("{file}: {problem}")]
    File {
        /// The file.
        file: String,
        /// What the reader says.
        problem: String,
    },
    /// A figure is no number.
    #[error("{name}: {text:?} is no number")]
    Figure {
        /// The entry.
        name: String,
        /// What stands there.
        text: String,
    },
    /// A word is not one of a closed list.
    #[error("{name}: {word:?} is not known here")]
    Word {
        /// The entry.
        name: String,
        /// What stands there.
        word: String,
    },
    /// A component is named that is not there.
    #[error("{name} contains {component:?}, which is not known")]
    Component {
        /// The entry.
        name: String,
        /// The component.
        component: String,
    },
    /// A new substance has no charge of its fully protonated form.
    #[error("{name} is not in the library, so its `charge` must be stated")]
    Charge {
        /// The entry.
        name: String,
    },
    /// Values are given for other steps than the library's substance has.
    #[error(
        "{name} has {expected} dissociation steps in the library, {found} are given; use a name of your own"
    )]
    Steps {
        /// The entry.
        name: String,
        /// Steps in the library.
        expected: usize,
        /// Steps given.
        found: usize,
    },
    /// A formula cannot be read.
    #[error("{name}: {problem}")]
    Formula {
        /// The entry.
        name: String,
        /// What is wrong.
        problem: crate::substance::FormulaError,
    },
}

/// Constants as stored, in any number and order.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct StoredConstants {
    /// Acid families.
    pub substances: Vec<StoredSubstance>,
    /// Inert ions.
    pub ions: Vec<StoredIon>,
    /// Forms.
    pub forms: Vec<StoredForm>,
}

/// An acid family as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
pub struct StoredSubstance {
    /// The name of its neutral form.
    pub substance: String,
    /// Other names.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub synonyms: Vec<String>,
    /// Formula of the neutral form.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub formula: Option<String>,
    /// CAS registry number of the neutral form.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub cas: Option<String>,
    /// Charge of the fully protonated form.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub charge: Option<i8>,
    /// What the fully deprotonated form is called.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub symbol: Option<String>,
    /// Printed names of the states, most protonated first, in place of `symbol`.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub states: Vec<String>,
    /// Ion sizes in nm by state, `-` where none is known.
    #[serde(rename = "ion sizes", default, skip_serializing_if = "Vec::is_empty")]
    pub ion_sizes: Vec<String>,
    /// Hazard words.
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub hazards: Vec<String>,
    /// One entry a step, most acidic first.
    #[serde(rename = "pKa")]
    pub pka: Vec<StoredPk>,
}

/// An inert ion as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredIon {
    pub ion: String,
    pub symbol: String,
    pub charge: i8,
    #[serde(rename = "ion size", default, skip_serializing_if = "Option::is_none")]
    pub ion_size: Option<String>,
}

/// A form as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredForm {
    pub form: String,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub synonyms: Vec<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub formula: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub cas: Option<String>,
    pub contains: BTreeMap<String, u8>,
    #[serde(default, skip_serializing_if = "is_neutral")]
    pub charge: i8,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub hazards: Vec<String>,
}

#[expect(
    clippy::trivially_copy_pass_by_ref,
    reason = "the signature is serde's"
)]
fn is_neutral(charge: &i8) -> bool {
    *charge == 0
}

impl StoredSubstance {
    /// The ligand that the entry describes; `own` marks the user's own.
    ///
    /// # Errors
    /// [`LibraryError`] where a figure, a word or the charge is wrong or missing.
    pub(super) fn ligand(&self, own: bool) -> Result<Ligand, LibraryError> {
        let name = &self.substance;
        let charge = self
            .charge
            .ok_or_else(|| LibraryError::Charge { name: name.clone() })?;
        let steps = self
            .pka
            .iter()
            .map(|stored| stored.step(name, own))
            .collect::<Result<Vec<_>, _>>()?;
        let states = if self.states.len() == steps.len() + 1 {
            self.states.clone()
        } else {
            names::states(self.symbol.as_deref().unwrap_or(name), charge, steps.len())
        };
        Ok(Ligand {
            name: name.clone(),
            charge,
            ion_sizes: self.ion_sizes(states.len())?,
            steps,
            states,
            hazards: hazards(name, &self.hazards)?,
            own,
        })
    }
}

impl StoredSubstance {
    /// Lays the names of states, ion sizes and hazards that are given over a ligand of the library.
    pub(super) fn dress(&self, ligand: &mut Ligand) -> Result<(), LibraryError> {
        let steps = ligand.steps.len();
        if self.states.len() == ligand.states.len() {
            ligand.states.clone_from(&self.states);
        } else if let Some(symbol) = &self.symbol {
            ligand.states = names::states(symbol, ligand.charge, steps);
        }
        if !self.ion_sizes.is_empty() {
            ligand.ion_sizes = self.ion_sizes(steps + 1)?;
        }
        ligand
            .hazards
            .extend(hazards(&self.substance, &self.hazards)?);
        ligand.hazards.sort_unstable();
        ligand.hazards.dedup();
        Ok(())
    }

    /// Ion sizes in nm of so many states.
    fn ion_sizes(&self, states: usize) -> Result<Vec<Option<Decimal>>, LibraryError> {
        (0..states)
            .map(
                |index| match self.ion_sizes.get(index).map(String::as_str) {
                    None | Some("-") => Ok(None),
                    Some(text) => figure(&self.substance, text).map(Some),
                },
            )
            .collect()
    }
}

impl StoredIon {
    /// The ion that the entry describes.
    pub(super) fn ion(&self) -> Result<InertIon, LibraryError> {
        Ok(InertIon {
            name: self.ion.clone(),
            symbol: self.symbol.clone(),
            charge: self.charge,
            ion_size: optional(&self.ion, self.ion_size.as_deref())?,
        })
    }
}

/// The hazards that words name.
pub(super) fn hazards(name: &str, words: &[String]) -> Result<Vec<Hazard>, LibraryError> {
    words
        .iter()
        .map(|word| {
            Hazard::WORDS
                .iter()
                .find(|(known, _)| known == word)
                .map(|(_, hazard)| *hazard)
                .ok_or_else(|| LibraryError::Word {
                    name: name.to_owned(),
                    word: word.clone(),
                })
        })
        .collect()
}
