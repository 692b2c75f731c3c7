//! Water at 0.1 MPa: density, static permittivity, ionisation constant, Debye-Hueckel coefficients.

use crate::equilibrium::elementary::{LN_10, exp, log10, pow};

/// Lowest temperature in K for which a solution is computed: 0 °C.
const LOWEST: f64 = 273.15;

/// Highest temperature in K for which a solution is computed: 100 °C.
const HIGHEST: f64 = 373.15;

/// Properties of liquid water at one temperature.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Water {
    /// Temperature in K.
    pub temperature: f64,
    /// Density in kg/m³.
    pub density: f64,
    /// Relative static permittivity, dimensionless.
    pub permittivity: f64,
    /// pKw on the molality scale at zero ionic strength, dimensionless.
    pub pkw: f64,
    /// Debye-Hueckel A on the lg scale in (kg/mol)^½.
    pub debye_hueckel_a: f64,
    /// Debye-Hueckel B in (kg/mol)^½ per nm.
    pub debye_hueckel_b: f64,
}

/// A temperature outside 0 to 100 °C.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct OutOfRange {
    /// The temperature in K.
    pub temperature: f64,
}

impl std::fmt::Display for OutOfRange {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(
            formatter,
            "{} K is outside 0 °C to 100 °C",
            self.temperature
        )
    }
}

impl std::error::Error for OutOfRange {}

impl Water {
    /// Water at a temperature in K.
    ///
    /// # Errors
    /// [`OutOfRange`] below 273.15 K, above 373.15 K, and for anything that is not a number.
    pub fn at(temperature: f64) -> Result<Self, OutOfRange> {
        if !(LOWEST..=HIGHEST).contains(&temperature) {
            return Err(OutOfRange { temperature });
        }
        let density = density(temperature);
        let permittivity = permittivity(temperature, density);
        let (debye_hueckel_a, debye_hueckel_b) = debye_hueckel(temperature, density, permittivity);
        Ok(Self {
            temperature,
            density,
            permittivity,
            pkw: pkw(temperature, density / 1000.0),
            debye_hueckel_a,
            debye_hueckel_b,
        })
    }

    /// The same water with another pKw on the molality scale, dimensionless.
    #[must_use]
    pub fn with_pkw(mut self, pkw: f64) -> Self {
        self.pkw = pkw;
        self
    }
}

/// Density of liquid water at 0.1 MPa in kg/m³; `t` in K, 253.15 to 383.15 K.
///
/// Source: IAPWS SR6-08 (2011), Supplementary Release on Properties of Liquid Water at 0.1 MPa, eq. (1); coefficients recalled, and verified
/// against check values that were read.
fn density(t: f64) -> f64 {
    const GAS_CONSTANT: f64 = 0.461_518_05;
    const REFERENCE: f64 = 10.0;
    const A5: f64 = 1.937_631_57e-2;
    const A: [(f64, f64); 5] = [
        (6.744_584_46e3, 4.0),
        (-2.225_216_04e5, 5.0),
        (1.002_312_47e8, 7.0),
        (-1.635_521_18e9, 8.0),
        (8.322_996_58e9, 9.0),
    ];
    const B: [(f64, f64); 6] = [
        (5.785_452_92e-3, 1.0),
        (-1.531_956_65e-2, 2.0),
        (3.113_378_59e-2, 3.0),
        (-4.235_462_41e-2, 4.0),
        (3.387_135_07e-2, 5.0),
        (-1.199_467_61e-2, 6.0),
    ];
    let alpha = REFERENCE / (593.0 - t);
    let beta = REFERENCE / (t - 232.0);
    let sum = |terms: &[(f64, f64)], base: f64| -> f64 {
        terms.iter().map(|(c, n)| c * pow(base, *n)).sum()
    };
    let volume = GAS_CONSTANT * REFERENCE / (1000.0 * 0.1) * (A5 + sum(&A, alpha) + sum(&B, beta));
    1.0 / volume
}

/// Relative static permittivity of water, dimensionless; `t` in K, `rho` in kg/m³.
///
/// Source: IAPWS R8-97 (1997), Release on the Static Dielectric Constant of Ordinary Water Substance, eqs. (1) to (4); coefficients recalled,
/// and verified against check values that were read.
fn permittivity(t: f64, rho: f64) -> f64 {
    const BOLTZMANN: f64 = 1.380_658e-23;
    const AVOGADRO: f64 = 6.022_136_7e23;
    const POLARISABILITY: f64 = 1.636e-40;
    const VACUUM: f64 = 8.854_187_817e-12;
    const DIPOLE_SQUARED: f64 = 6.138e-30 * 6.138e-30;
    const MOLAR_MASS: f64 = 0.018_015_268;
    const LAST: f64 = 0.001_960_965_044_26;
    const N: [(f64, f64, f64); 11] = [
        (0.978_224_486_826, 1.0, 0.25),
        (-0.957_771_379_375, 1.0, 1.0),
        (0.237_511_794_148, 1.0, 2.5),
        (0.714_692_244_396, 2.0, 1.5),
        (-0.298_217_036_956, 3.0, 1.5),
        (-0.108_863_472_196, 3.0, 2.5),
        (0.094_932_748_826_4, 4.0, 2.0),
        (-0.009_804_698_165_09, 5.0, 2.0),
        (1.651_676_349_70e-5, 6.0, 5.0),
        (9.373_597_957_72e-5, 7.0, 0.5),
        (-1.231_792_187_20e-10, 10.0, 10.0),
    ];
    let delta = rho / 322.0;
    let tau = 647.096 / t;
    let series: f64 = N
        .iter()
        .map(|(n, i, j)| n * pow(delta, *i) * pow(tau, *j))
        .sum();
    let correlation = 1.0 + series + LAST * delta * pow(t / 228.0 - 1.0, -1.2);
    let number = AVOGADRO * rho / MOLAR_MASS;
    let a = number * DIPOLE_SQUARED * correlation / (VACUUM * BOLTZMANN * t);
    let b = number * POLARISABILITY / (3.0 * VACUUM);
    let root = 9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b;
    (1.0 + a + 5.0 * b + root.sqrt()) / (4.0 - 4.0 * b)
}

/// pKw on the molality scale, dimensionless; `t` in K, `rho` in g/cm³.
///
/// Source: IAPWS R11-24 (2024), Revised Release on the Ionization Constant of H2O, eqs. (3) to (6); read.
fn pkw(t: f64, rho: f64) -> f64 {
    const COORDINATION: f64 = 6.0;
    const MOLAR_MASS: f64 = 18.015_268;
    const IDEAL_GAS: [f64; 4] = [0.614_15, 48_251.33, -67_707.93, 10_102_100.0];
    const ALPHA: [f64; 3] = [-0.702_132, 8_681.05, -24_145.1];
    const BETA: [f64; 3] = [0.813_876, -51.4471, -0.469_920];
    let [g0, g1, g2, g3] = IDEAL_GAS;
    let gas = g0 + g1 / t + g2 / (t * t) + g3 / (t * t * t);
    let [a0, a1, a2] = ALPHA;
    let [b0, b1, b2] = BETA;
    let z = rho * exp(a0 + a1 / t + a2 / (t * t) * pow(rho, 2.0 / 3.0));
    let association = log10(1.0 + z) - z / (z + 1.0) * rho * (b0 + b1 / t + b2 * rho);
    -2.0 * COORDINATION * association + gas + 2.0 * log10(MOLAR_MASS / 1000.0)
}

/// A on the lg scale in (kg/mol)^½, and B in (kg/mol)^½ per nm.
///
/// Source: definition from Debye and Hueckel (1923), Phys. Z. 24, 185, with CODATA 2018 constants; recalled.
fn debye_hueckel(t: f64, density: f64, permittivity: f64) -> (f64, f64) {
    const CHARGE: f64 = 1.602_176_634e-19;
    const BOLTZMANN: f64 = 1.380_649e-23;
    const AVOGADRO: f64 = 6.022_140_76e23;
    const VACUUM: f64 = 8.854_187_812_8e-12;
    const NANOMETRE: f64 = 1e-9;
    let energy = VACUUM * permittivity * BOLTZMANN * t;
    let square = CHARGE * CHARGE;
    let a = square * CHARGE * (2.0 * AVOGADRO * density).sqrt()
        / (8.0 * std::f64::consts::PI * energy * energy.sqrt() * LN_10);
    let b = (2.0 * AVOGADRO * square * density / energy).sqrt() * NANOMETRE;
    (a, b)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn density_reproduces_the_release() {
        // IAPWS SR6-08 (2011), check values, read; tolerance half a unit of the last printed digit.
        for (t, rho) in [
            (260.0, 997.068_360),
            (298.15, 997.047_013),
            (375.0, 957.009_710),
        ] {
            assert!(
                (density(t) - rho).abs() <= 0.000_000_5,
                "{t}: {}",
                density(t)
            );
        }
    }

    #[test]
    fn permittivity_reproduces_the_release() {
        // IAPWS R8-97 (1997), check values, read; tolerance half a unit of the last printed digit.
        for (t, rho, epsilon) in [
            (298.15, 999.242_866, 78.590_725_0),
            (873.15, 26.056_955_8, 1.126_209_70),
        ] {
            assert!(
                (permittivity(t, rho) - epsilon).abs() <= 0.000_000_05,
                "{t}"
            );
        }
    }

    #[test]
    fn ionisation_constant_reproduces_the_release() {
        // IAPWS R11-24 (2024), check value read: 300 K and 1 g/cm³ give 13.906672; half a unit of the last digit.
        assert!((pkw(300.0, 1.0) - 13.906_672).abs() <= 0.000_000_5);
    }

    #[test]
    fn table_of_water_is_reproduced() {
        // IAPWS-95 density, R8-97 permittivity and R11-24 pKw, evaluated outside this program with general-purpose property libraries.
        // Tolerances: agreement of those libraries; the density here is SR6-08's, within 0.01 kg/m³ of IAPWS-95.
        for (celsius, rho, eps, pkw, a, b) in TABLE {
            let water = Water::at(celsius + 273.15).unwrap();
            assert!(
                (water.density - rho).abs() <= 0.01,
                "density at {celsius}: {}",
                water.density
            );
            assert!(
                (water.permittivity - eps).abs() <= 0.005,
                "permittivity at {celsius}"
            );
            assert!(
                (water.pkw - pkw).abs() <= 0.0005,
                "pKw at {celsius}: {}",
                water.pkw
            );
            assert!(
                (water.debye_hueckel_a - a).abs() <= 0.000_05,
                "A at {celsius}: {}",
                water.debye_hueckel_a
            );
            assert!(
                (water.debye_hueckel_b - b).abs() <= 0.000_05,
                "B at {celsius}: {}",
                water.debye_hueckel_b
            );
        }
    }

    const TABLE: [(f64, f64, f64, f64, f64, f64); 21] = [
        (0.0, 999.8424, 87.9034, 14.9465, 0.49043, 3.24524),
        (5.0, 999.9660, 85.9155, 14.7341, 0.49395, 3.25314),
        (10.0, 999.7018, 83.9745, 14.5336, 0.49763, 3.26091),
        (15.0, 999.1020, 82.0775, 14.3440, 0.50149, 3.26865),
        (20.0, 998.2065, 80.2226, 14.1645, 0.50553, 3.27644),
        (25.0, 997.0470, 78.4084, 13.9944, 0.50978, 3.28431),
        (30.0, 995.6489, 76.6340, 13.8330, 0.51422, 3.29229),
        (35.0, 994.0327, 74.8983, 13.6798, 0.51888, 3.30041),
        (40.0, 992.2158, 73.2006, 13.5343, 0.52375, 3.30868),
        (45.0, 990.2123, 71.5401, 13.3961, 0.52882, 3.31710),
        (50.0, 988.0345, 69.9160, 13.2646, 0.53411, 3.32568),
        (55.0, 985.6925, 68.3277, 13.1396, 0.53962, 3.33442),
        (60.0, 983.1952, 66.7745, 13.0206, 0.54533, 3.34333),
        (65.0, 980.5502, 65.2555, 12.9074, 0.55127, 3.35240),
        (70.0, 977.7640, 63.7703, 12.7997, 0.55742, 3.36164),
        (75.0, 974.8423, 62.3180, 12.6971, 0.56379, 3.37103),
        (80.0, 971.7898, 60.8979, 12.5995, 0.57038, 3.38057),
        (85.0, 968.6108, 59.5095, 12.5065, 0.57719, 3.39027),
        (90.0, 965.3090, 58.1519, 12.4181, 0.58422, 3.40011),
        (95.0, 961.8873, 56.8245, 12.3339, 0.59148, 3.41010),
        (100.0, 958.3491, 55.5267, 12.2538, 0.59897, 3.42022),
    ];

    #[test]
    fn outside_the_range_is_refused() {
        for t in [273.0, 373.2, f64::NAN] {
            assert!(Water::at(t).is_err());
        }
    }
}
