//! Temperature, activity model, air and the treatment of uncertainty.

use crate::problem::Input;
use crate::quantity::{Number, Pressure, Temperature};
use crate::substance::{Constant, Ligand};
use std::collections::BTreeSet;
use std::sync::Arc;

/// A value with where it was stated.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Stated<T> {
    /// The value.
    pub value: T,
    /// Who stated it.
    pub origin: Origin,
}

/// Who stated a value; anything but the block is listed among the assumptions.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// The block itself.
    Block,
    /// The notebook's settings.
    Notebook,
    /// The program's default.
    Program,
}

/// The conditions under which a block is computed.
#[derive(Clone, Debug, PartialEq)]
pub struct Conditions {
    /// Temperature of the solution.
    pub temperature: Stated<Input<Temperature>>,
    /// Activity model.
    pub activity: Stated<ActivityChoice>,
    /// What the solution exchanges with the air.
    pub air: Stated<Air>,
    /// How uncertainty is worked out.
    pub uncertainty: Stated<UncertaintyMode>,
    /// What the analyst accepts in so many words.
    pub accepted: BTreeSet<Acceptance>,
    /// The acid family of dissolved carbon dioxide, where the air holds it.
    pub carbonate: Option<Arc<Ligand>>,
    /// The user's own pKw at zero ionic strength, in place of the formulation.
    pub pkw: Option<Constant>,
}

/// The activity models a block may name.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum ActivityChoice {
    /// All activity coefficients 1.
    Ideal,
    /// Extended Debye-Hueckel equation with an ion size for each ion.
    DebyeHueckel,
    /// Guentelberg's equation.
    Guentelberg,
    /// Davies' equation with 0.3 I.
    Davies,
    /// The Bates-Guggenheim convention.
    BatesGuggenheim,
    /// Specific ion interaction theory.
    Sit,
    /// Pitzer's equations.
    Pitzer,
    /// The most specific model whose coefficients cover the main ions.
    Best,
}

impl ActivityChoice {
    /// Every model with the word that a block uses for it.
    pub const NAMES: [(&'static str, Self); 8] = [
        ("ideal", Self::Ideal),
        ("debye-hueckel", Self::DebyeHueckel),
        ("guentelberg", Self::Guentelberg),
        ("davies", Self::Davies),
        ("bates-guggenheim", Self::BatesGuggenheim),
        ("sit", Self::Sit),
        ("pitzer", Self::Pitzer),
        ("best", Self::Best),
    ];

    /// The word that a block uses for this model.
    pub fn name(self) -> &'static str {
        Self::NAMES
            .iter()
            .find(|(_, model)| *model == self)
            .map_or("", |(name, _)| name)
    }
}

/// What a solution exchanges with the air.
#[derive(Clone, Debug, PartialEq)]
pub enum Air {
    /// Nothing.
    Closed,
    /// Carbon dioxide at a stated partial pressure, as written.
    CarbonDioxide(Input<Pressure>),
    /// Carbon dioxide at a stated mole fraction of dry air at one standard atmosphere (ppm).
    CarbonDioxideFraction(Input<Number>),
}

/// How uncertainty is worked out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum UncertaintyMode {
    /// A budget from exact sensitivities.
    Budget,
    /// The budget, and a seeded Monte Carlo simulation beside it.
    Simulation {
        /// Number of draws.
        draws: u32,
        /// Seed of the random generator.
        seed: u64,
    },
    /// None.
    None,
}

/// What an analyst may accept in so many words (`accept:`).
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Acceptance {
    /// `model outside its range`.
    ModelOutsideItsRange,
}

impl Acceptance {
    /// Every acceptance with the words that a block uses for it.
    pub const NAMES: [(&'static str, Self); 1] =
        [("model outside its range", Self::ModelOutsideItsRange)];
}
