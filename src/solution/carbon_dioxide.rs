//! Carbon dioxide of the air: its solubility, and the pressure that a mole fraction of dry air means.

use crate::equilibrium::elementary::LN_10;
use crate::equilibrium::pk_from_terms;
use crate::problem::Air;
use crate::quantity::Dimension;

/// One standard atmosphere in Pa.
const ATMOSPHERE: f64 = 101_325.0;

/// The source of the solubility equation, as printed in a result.
pub(super) const SOURCE: &str = "CO₂ solubility: Plummer and Busenberg, Geochim. Cosmochim. Acta 46, 1011 (1982), 0 to 90 °C; recalled";

/// lg of the Henry constant of CO₂ in mol/(kg atm) at a temperature in K.
///
/// Source: Plummer and Busenberg (1982), Geochim. Cosmochim. Acta 46, 1011, 0 to 90 °C; recalled. -1.4679 at 25 °C.
pub(super) fn lg_henry(temperature: f64) -> f64 {
    pk_from_terms(
        temperature,
        [
            108.3865,
            -6919.53,
            -40.451_54 / LN_10,
            0.019_850_76,
            0.0,
            669_365.0,
        ],
    )
}

/// Partial pressure of CO₂ in atm; `None` where the solution is closed to air.
///
/// A mole fraction is taken at one standard atmosphere, the water vapour's share left out.
pub(super) fn pressure(air: &Air) -> Option<f64> {
    match air {
        Air::Closed => None,
        Air::CarbonDioxide(pressure) => Some(pressure.value().base() / ATMOSPHERE),
        Air::CarbonDioxideFraction(fraction) => Some(fraction.value().base()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn solubility_agrees_with_a_second_source() {
        // Weiss (1974), Mar. Chem. 2, 203, zero salinity, recalled: lg K0 = -1.4689 at 25 °C in mol/(L atm), 0.0013 more per kg; 0.002 for the
        // rounding of printed coefficients.
        assert!((lg_henry(298.15) - (-1.4689 + 0.0013)).abs() < 0.002);
        assert!((lg_henry(298.15) + 1.4679).abs() < 0.0005);
    }
}
