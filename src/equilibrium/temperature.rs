//! pK at temperature.

use crate::equilibrium::elementary::{LN_10, ln};

/// Gas constant in J/(mol K), CODATA 2018, exact; recalled.
const GAS_CONSTANT: f64 = 8.314_462_618;

/// pK at a temperature from its value at another, dimensionless.
///
/// `t` and `t0` in K, `enthalpy` of dissociation at `t0` in J/mol, `heat_capacity` change in J/(mol K), taken as constant.
///
/// Source: integrated van 't Hoff equation; e.g. Goldberg, Kishore and Lennen (2002), J. Phys. Chem. Ref. Data 31, 231, eqs. (8) to (10);
/// recalled.
pub fn pk_at(t: f64, pk0: f64, t0: f64, enthalpy: f64, heat_capacity: f64) -> f64 {
    let per_decade = GAS_CONSTANT * LN_10;
    pk0 + enthalpy / per_decade * (1.0 / t - 1.0 / t0)
        - heat_capacity / per_decade * (t0 / t - 1.0 + ln(t / t0))
}

/// pK from a published equation in temperature, dimensionless: the sum of its coefficients times `1, 1/T, ln T, T, T², 1/T²`, `t` in K.
pub fn pk_from_terms(t: f64, coefficients: [f64; 6]) -> f64 {
    let [constant, inverse, logarithm, linear, square, inverse_square] = coefficients;
    constant
        + inverse / t
        + logarithm * ln(t)
        + linear * t
        + square * t * t
        + inverse_square / (t * t)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn value_at_its_own_temperature_is_kept() {
        let same = pk_at(298.15, 8.071, 298.15, 47_450.0, -73.0);
        assert!((same - 8.071).abs() < 1e-15);
    }

    #[test]
    fn equations_give_their_printed_value() {
        // Manov, DeLollis and Acree (1944), boric acid: 9.2348 at 25 °C, read; half a unit of the last digit.
        let boric = pk_from_terms(298.15, [-3.305, 2237.94, 0.0, 0.016_883, 0.0, 0.0]);
        assert!((boric - 9.2348).abs() <= 0.000_05, "{boric}");
    }
}
