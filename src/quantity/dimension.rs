//! Dimensions as types: only what has a physical meaning can be multiplied or divided.

use crate::quantity::Unit;
use std::ops::{Div, Mul};

/// A physical dimension with its base unit.
pub trait Dimension: Copy {
    /// What it is called in a message.
    const NAME: &'static str;
    /// The units in which it may be stated, the usual one first.
    const UNITS: &'static [Unit];
    /// A value from a number of base units.
    fn from_base(base: f64) -> Self;
    /// The number of base units.
    fn base(self) -> f64;
}

macro_rules! dimensions {
    ($($(#[$meta:meta])* $name:ident, $spoken:literal, [$($unit:ident),+];)+) => {$(
        $(#[$meta])*
        #[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
        pub struct $name(f64);

        impl Dimension for $name {
            const NAME: &'static str = $spoken;
            const UNITS: &'static [Unit] = &[$(Unit::$unit),+];
            fn from_base(base: f64) -> Self {
                Self(base)
            }
            fn base(self) -> f64 {
                self.0
            }
        }
    )+};
}

dimensions! {
    /// A mass; base unit g.
    Mass, "a mass", [Gram, Milligram, Kilogram, Microgram];
    /// A volume; base unit L.
    Volume, "a volume", [Millilitre, Litre, Microlitre];
    /// An amount of substance; base unit mol.
    Amount, "an amount of substance", [Mole, Millimole, Micromole];
    /// An amount concentration; base unit mol/L.
    AmountConcentration, "an amount concentration",
        [MolePerLitre, MillimolePerLitre, MicromolePerLitre, NanomolePerLitre];
    /// A molality; base unit mol/kg of water.
    Molality, "a molality", [MolePerKilogram, MillimolePerKilogram];
    /// A mass concentration; base unit g/L.
    MassConcentration, "a mass concentration", [GramPerLitre, MilligramPerLitre];
    /// A mass fraction; base unit 1.
    MassFraction, "a mass fraction", [PercentByMass, Percent];
    /// A thermodynamic temperature; base unit K.
    Temperature, "a temperature", [Celsius, Kelvin];
    /// A pressure; base unit Pa.
    Pressure, "a pressure", [Atmosphere, Kilopascal, Bar, Millibar, Pascal];
    /// A mass density; base unit g/mL, the same as kg/L.
    Density, "a density", [GramPerMillilitre, KilogramPerLitre];
    /// A molar mass; base unit g/mol.
    MolarMass, "a molar mass", [GramPerMole];
    /// A number of dimension one, such as a pH, a titre or a fraction in ppm; base unit 1.
    Number, "a number without unit", [One, PartsPerMillion];
}

impl Temperature {
    /// The temperature in degrees Celsius.
    pub fn celsius(self) -> f64 {
        self.0 - 273.15
    }
}

impl Div<MolarMass> for Mass {
    type Output = Amount;
    fn div(self, molar_mass: MolarMass) -> Amount {
        Amount(self.0 / molar_mass.0)
    }
}

impl Mul<MolarMass> for Amount {
    type Output = Mass;
    fn mul(self, molar_mass: MolarMass) -> Mass {
        Mass(self.0 * molar_mass.0)
    }
}

impl Div<Volume> for Amount {
    type Output = AmountConcentration;
    fn div(self, volume: Volume) -> AmountConcentration {
        AmountConcentration(self.0 / volume.0)
    }
}

impl Mul<Volume> for AmountConcentration {
    type Output = Amount;
    fn mul(self, volume: Volume) -> Amount {
        Amount(self.0 * volume.0)
    }
}

impl Mul<Volume> for Density {
    type Output = Mass;
    /// Mass in g: g/mL times L is kg.
    fn mul(self, volume: Volume) -> Mass {
        Mass(self.0 * volume.0 * 1000.0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_mass_in_a_flask_is_a_concentration() {
        // 5.8443 g of sodium chloride, 58.443 g/mol, in 2 L: 0.05 mol/L by hand.
        let amount = Mass::from_base(5.8443) / MolarMass::from_base(58.443);
        let concentration = amount / Volume::from_base(2.0);
        assert!((concentration.base() - 0.05).abs() < 1e-15);
        let mass = Density::from_base(1.685) * Volume::from_base(0.001);
        assert!((mass.base() - 1.685).abs() < 1e-12);
    }
}
