//! The constants library and its look-up.
//!
//! A [`Ligand`] is an acid family in its fully deprotonated form with its dissociation steps; an [`InertIon`] takes no proton; a [`Form`] is
//! what one weighs, pipettes or dissolves, made of both. Every value has its source, its conditions and whether that source was opened when
//! it was entered. Proton counts and molar masses are derived, never typed. This module solves nothing and knows no pages.

mod catalogue;
mod constant;
mod element;
mod form;
mod formula;
mod hazard;
mod ligand;
mod names;
mod reaction;
mod stored;
mod stored_pk;
mod written;

#[cfg(test)]
mod verification;

pub use catalogue::{Catalogue, NotFound};
pub use constant::{Basis, Constant, EquationForm, Kind, PkEquation, Step, ThermalData};
pub use form::{Component, Form};
pub use formula::{Formula, FormulaError};
pub use hazard::{Hazard, ReleasedGas};
pub use ligand::{InertIon, Ligand};
pub use reaction::{GasSolubility, Polynuclear};
pub use stored::{LibraryError, StoredConstants, StoredForm, StoredIon, StoredSubstance};
pub use stored_pk::{StoredEquation, StoredPk};
pub use written::written;
