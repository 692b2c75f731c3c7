//! Numbers with units and uncertainty, as a laboratory writes them.
//!
//! A value keeps the digits it was written with ([`Decimal`]), its unit ([`Unit`]) and its uncertainty ([`Uncertainty`]); its dimension is a
//! type. This module knows nothing of chemistry and reads no sentences: the grammar of an amount belongs to `block`.

mod decimal;
mod dimension;
mod glassware;
mod refused_unit;
mod rounding;
mod uncertain;
mod unit;

pub use decimal::{Decimal, DecimalError};
pub use dimension::{
    Amount, AmountConcentration, Density, Dimension, Mass, MassConcentration, MassFraction,
    Molality, MolarMass, Number, Pressure, Temperature, Volume,
};
pub use glassware::{Class, Glassware, GlasswareError, Vessel};
pub use rounding::RoundingRule;
pub use uncertain::{Measured, Spread, Uncertainty};
pub use unit::{Unit, UnitError};
