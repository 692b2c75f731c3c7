//! Why a statement has no answer.

use crate::equilibrium::{OutOfRange, TableauError, Unsolved};
use crate::problem::InputId;
use crate::substance::LibraryError;

/// Why a statement has no answer; an answer without a valid certificate does not exist.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum Unsolvable {
    /// The numerics found no certified solution.
    #[error("no certified solution: {0}")]
    Uncertified(Unsolved),
    /// The temperature is outside the range of the formulations of water.
    #[error("{0}")]
    Temperature(OutOfRange),
    /// The tableau cannot be computed with.
    #[error("{0}")]
    Tableau(TableauError),
    /// The embedded library could not be read.
    #[error("{0}")]
    Library(LibraryError),
    /// Ions given alone leave a charge.
    #[error(
        "the ions given leave a charge of {charge:e} mol/L; add the missing counter-ion, or state salts"
    )]
    ChargeLeft {
        /// Charge left in mol/L of elementary charges.
        charge: f64,
        /// An ion that was given alone.
        input: InputId,
    },
    /// A mass or amount was given, and no volume.
    #[error("{input} needs the final volume; state `volume`")]
    NoVolume {
        /// The ingredient.
        input: InputId,
    },
    /// A mass was given of a substance without a formula.
    #[error("{input} is a mass of {substance}, which has no formula and so no molar mass")]
    NoMolarMass {
        /// The ingredient.
        input: InputId,
        /// The substance.
        substance: String,
    },
    /// A portion needs a density.
    #[error("{input} needs a density to be turned into an amount")]
    NoDensity {
        /// The ingredient.
        input: InputId,
    },
    /// A value must be positive, or at least not negative.
    #[error("{input} is {value}; it must be above zero")]
    NotPositive {
        /// The input.
        input: InputId,
        /// Its value as written.
        value: String,
    },
    /// The model lacks coefficients.
    #[error("the model `{model}` lacks coefficients here: {missing}")]
    ModelLacksCoefficients {
        /// The model.
        model: &'static str,
        /// What is missing.
        missing: String,
    },
    /// Above 1 mol/kg with a model that is not made for it.
    #[error(
        "the ionic strength is {ionic_strength:.3} mol/kg, beyond what the model `{model}` is made for (1 mol/kg); state `accept: model \
         outside its range` to get its pH all the same"
    )]
    BeyondModel {
        /// The model.
        model: &'static str,
        /// Ionic strength in mol/kg.
        ionic_strength: f64,
    },
    /// The target cannot be reached.
    #[error("pH {target} cannot be reached with these; pH {lowest:.2} to {highest:.2} can")]
    Unreachable {
        /// The target pH as written.
        target: String,
        /// Lowest pH within reach.
        lowest: f64,
        /// Highest pH within reach.
        highest: f64,
        /// The input that states the target.
        input: InputId,
    },
    /// The ionic strength that was asked for is below what the buffer itself has.
    #[error(
        "an ionic strength of {target} cannot be reached: the buffer alone has {lowest:.4} mol/kg"
    )]
    IonicStrengthUnreachable {
        /// The target as written.
        target: String,
        /// Ionic strength of the buffer alone in mol/kg.
        lowest: f64,
        /// The input that states the target.
        input: InputId,
    },
    /// The sources cannot make the buffer.
    #[error("{reason}")]
    Sources {
        /// Why, in words.
        reason: String,
        /// The source or target it is about.
        input: InputId,
    },
    /// Too few draws were asked for.
    #[error("a simulation of {draws} draws tells nothing; ask for at least 1000")]
    Simulation {
        /// Number of draws.
        draws: u32,
    },
    /// The readings cannot determine what was asked.
    #[error("the readings cannot be fitted: {reason}")]
    Fit {
        /// Why, in words.
        reason: String,
    },
}

impl Unsolvable {
    /// The input that it is about, where it is about one.
    pub fn input(&self) -> Option<&InputId> {
        match self {
            Self::ChargeLeft { input, .. }
            | Self::NoVolume { input }
            | Self::NoMolarMass { input, .. }
            | Self::NoDensity { input }
            | Self::NotPositive { input, .. }
            | Self::Unreachable { input, .. }
            | Self::IonicStrengthUnreachable { input, .. }
            | Self::Sources { input, .. } => Some(input),
            Self::Uncertified(_)
            | Self::Temperature(_)
            | Self::Tableau(_)
            | Self::Library(_)
            | Self::ModelLacksCoefficients { .. }
            | Self::BeyondModel { .. }
            | Self::Simulation { .. }
            | Self::Fit { .. } => None,
        }
    }
}

impl From<Unsolved> for Unsolvable {
    fn from(error: Unsolved) -> Self {
        Self::Uncertified(error)
    }
}

impl From<OutOfRange> for Unsolvable {
    fn from(error: OutOfRange) -> Self {
        Self::Temperature(error)
    }
}

impl From<TableauError> for Unsolvable {
    fn from(error: TableauError) -> Self {
        Self::Tableau(error)
    }
}

impl From<LibraryError> for Unsolvable {
    fn from(error: LibraryError) -> Self {
        Self::Library(error)
    }
}
