//! Carbon dioxide of the air, dissolved.

use crate::equilibrium::elementary::{LN_10, exp, ln, pow};
use crate::problem::Air;
use crate::quantity::Dimension;

/// One standard atmosphere in Pa.
const ATMOSPHERE: f64 = 101_325.0;

/// lg of Henry's constant of carbon dioxide in mol/(kg atm); `t` in K, 273 to 363 K.
///
/// Source: Plummer and Busenberg (1982), Geochim. Cosmochim. Acta 46, 1011; recalled.
pub(super) fn lg_henry_carbon_dioxide(t: f64) -> f64 {
    108.3865 + 0.019_850_76 * t - 6919.53 / t - 40.451_54 * ln(t) / LN_10 + 669_365.0 / (t * t)
}

/// Partial pressure of carbon dioxide in atm; a fraction of dry air is taken at one standard atmosphere saturated with water vapour. `t` in K.
pub(super) fn partial_pressure(air: &Air, t: f64) -> f64 {
    match air {
        Air::Closed => 0.0,
        Air::CarbonDioxide(pressure) => pressure.value().base() / ATMOSPHERE,
        Air::CarbonDioxideFraction(fraction) => {
            fraction.value().base() * (1.0 - vapour_pressure(t) / ATMOSPHERE)
        }
    }
}

/// Vapour pressure of water in Pa; `t` in K.
///
/// Source: Wagner and Pruss (1993), J. Phys. Chem. Ref. Data 22, 783, eq. (1); recalled.
fn vapour_pressure(t: f64) -> f64 {
    const CRITICAL_TEMPERATURE: f64 = 647.096;
    const CRITICAL_PRESSURE: f64 = 22.064e6;
    const TERMS: [(f64, f64); 6] = [
        (-7.859_517_83, 1.0),
        (1.844_082_59, 1.5),
        (-11.786_649_7, 3.0),
        (22.680_741_1, 3.5),
        (-15.961_871_9, 4.0),
        (1.801_225_02, 7.5),
    ];
    let theta = 1.0 - t / CRITICAL_TEMPERATURE;
    let sum: f64 = TERMS.iter().map(|(a, n)| a * pow(theta, *n)).sum();
    CRITICAL_PRESSURE * exp(CRITICAL_TEMPERATURE / t * sum)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn henry_constant_at_25_degrees() {
        // Plummer and Busenberg (1982): lg K = -1.468 at 25 °C, recalled; half a unit of the last digit.
        assert!((lg_henry_carbon_dioxide(298.15) + 1.468).abs() <= 0.0005);
    }

    #[test]
    fn water_boils_at_100_degrees() {
        // One standard atmosphere at 373.124 K by the steam tables (recalled); 0.1 %.
        assert!((vapour_pressure(373.124) / ATMOSPHERE - 1.0).abs() < 0.001);
    }
}
