//! What is possible for each quantity, so that a slip of a unit is found where it was typed.

use crate::quantity::{
    Amount, AmountConcentration, Density, Dimension, Mass, MassConcentration, MassFraction,
    Measured, Molality, Number, Pressure, Temperature, Unit, Volume,
};
use crate::text::{Diagnostic, Rule, Span};

/// A dimension with the range that a page may state, in words and in base units.
pub(super) trait Ranged: Dimension {
    /// The smallest value in base units of the dimension.
    const LEAST: f64;
    /// Whether the smallest value itself is refused.
    const ABOVE: bool;
    /// The largest value in base units of the dimension.
    const MOST: f64;
    /// The range as it is told.
    const TOLD: &'static str;
    /// The rule that a value outside breaks.
    const RULE: Rule = Rule::OutOfRange;

    /// Whether a value is inside.
    fn is_possible(self) -> bool {
        let base = self.base();
        let from = if Self::ABOVE {
            base > Self::LEAST
        } else {
            base >= Self::LEAST
        };
        from && base <= Self::MOST
    }
}

macro_rules! ranges {
    ($($dimension:ident above $least:literal to $most:literal, $told:literal;)+) => {$(
        impl Ranged for $dimension {
            const LEAST: f64 = $least;
            const ABOVE: bool = true;
            const MOST: f64 = $most;
            const TOLD: &'static str = $told;
        }
    )+};
}

ranges! {
    Mass above 0.0 to 1e8, "more than nothing, up to 100 t";
    Volume above 0.0 to 1e6, "more than nothing, up to 1000 m³";
    Amount above 0.0 to 1e7, "more than nothing, up to 10000 kmol";
    AmountConcentration above 0.0 to 60.0, "more than nothing, up to 60 mol/L (water itself has 55)";
    Molality above 0.0 to 100.0, "more than nothing, up to 100 mol/kg";
    MassConcentration above 0.0 to 2500.0, "more than nothing, up to 2500 g/L";
    Pressure above 0.0 to 1e6, "more than nothing, up to 1 MPa";
    Density above 0.5 to 5.0, "above 0.5 g/mL, up to 5 g/mL";
}

impl Ranged for MassFraction {
    const LEAST: f64 = 0.0;
    const ABOVE: bool = false;
    // An assay may be found above 100 % within its uncertainty.
    const MOST: f64 = 1.1;
    const TOLD: &'static str = "from 0 % to 110 %";
}

impl Ranged for Temperature {
    const LEAST: f64 = 273.15;
    const ABOVE: bool = false;
    const MOST: f64 = 373.15;
    const TOLD: &'static str = "from 0 °C to 100 °C";
    const RULE: Rule = Rule::BadTemperature;
}

/// A number of a page is a pH, or a titre or limit, which lie inside the same range.
impl Ranged for Number {
    const LEAST: f64 = -2.0;
    const ABOVE: bool = false;
    const MOST: f64 = 16.0;
    const TOLD: &'static str = "from -2 to 16";
}

/// What is to be said of a value that is not possible.
pub(super) fn outside<D: Ranged>(span: Span, measured: Measured<D>) -> Diagnostic {
    let found = Diagnostic::error(
        D::RULE,
        span,
        format!("`{measured}` is not possible for {}", D::NAME),
    )
    .expecting(format!("{}, {}", D::NAME, D::TOLD));
    let number = measured.decimal.to_f64();
    if measured.unit == Unit::Kelvin && (0.0..=100.0).contains(&number) {
        return found.helped(format!("did you mean `{} °C`?", measured.decimal));
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ends_belong_to_the_range_where_they_can_be_meant() {
        assert!(Temperature::from_base(273.15).is_possible());
        assert!(Temperature::from_base(373.15).is_possible());
        assert!(!Temperature::from_base(25.0).is_possible());
        assert!(!Volume::from_base(0.0).is_possible());
        assert!(MassFraction::from_base(0.0).is_possible());
        assert!(Number::from_base(-0.3).is_possible());
    }
}
