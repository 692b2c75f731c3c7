//! Activity coefficients of single ions.

use crate::equilibrium::Water;
use crate::equilibrium::elementary::LN_10;

/// An activity model. On top of each of them a species may carry a salting coefficient, and specific interactions may be given.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum ActivityModel {
    /// All activity coefficients 1.
    Ideal,
    /// lg γ = -A z² √I/(1 + B a √I), with an ion size a for each ion.
    ///
    /// Source: Debye and Hueckel (1923), as in Buck et al. (2002), Pure Appl. Chem. 74, 2169; read.
    DebyeHueckel,
    /// lg γ = -A z² √I/(1 + √I).
    ///
    /// Source: Guentelberg (1926), Z. Phys. Chem. 123, 199; recalled.
    Guentelberg,
    /// lg γ = -A z² (√I/(1 + √I) - 0.3 I).
    ///
    /// Source: Davies (1962), Ion Association, London: Butterworths; recalled.
    Davies,
    /// lg γ = -A z² √I/(1 + 1.5 √I), the pH convention's form, here for each ion.
    ///
    /// Source: Bates and Guggenheim (1960), Pure Appl. Chem. 1, 163, as in Buck et al. (2002); read. Also the Debye-Hueckel term of the
    /// specific ion interaction theory.
    BatesGuggenheim,
    /// The Debye-Hueckel term of Pitzer's equations, with Aφ = A ln 10 / 3:
    /// `ln γ = -Aφ z² (√I/(1 + 1.2 √I) + (2/1.2) ln(1 + 1.2 √I))`.
    ///
    /// Source: Pitzer (1973), J. Phys. Chem. 77, 268, eq. (42); recalled. Complete only with interactions.
    PitzerTerm,
}

impl ActivityModel {
    /// lg γ of an ion, dimensionless: charge in elementary charges, ion size in nm (0.4 where none is given), ionic strength in mol/kg.
    pub fn lg_gamma(
        self,
        water: &Water,
        charge: i8,
        ion_size: Option<f64>,
        ionic_strength: f64,
    ) -> f64 {
        let z = f64::from(charge);
        let screening = Screening::at(self, water, ionic_strength);
        screening.ln_gamma(z * z, ion_size.unwrap_or(0.4)).value / LN_10
    }
}

/// ln γ of an ion and its derivative with respect to ionic strength.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct LnGamma {
    /// ln γ, dimensionless.
    pub(super) value: f64,
    /// d ln γ / dI in kg/mol.
    pub(super) slope: f64,
}

/// Smallest ionic strength that is computed with, in mol/kg: it keeps 1/√I finite and is far below that of pure water.
const SMALLEST: f64 = 1e-30;

/// The part of ln γ that depends on z² only, for z² = 1 at one ionic strength; none for the model with ion sizes.
#[derive(Clone, Copy, Debug)]
pub(super) struct Screening {
    root: f64,
    common: LnGamma,
    a: f64,
    b: f64,
    sized: bool,
}

impl Screening {
    /// Screening at an ionic strength in mol/kg.
    #[inline]
    pub(super) fn at(model: ActivityModel, water: &Water, ionic_strength: f64) -> Self {
        let i = ionic_strength.max(SMALLEST);
        let root = i.sqrt();
        let a = water.debye_hueckel_a * LN_10;
        let over = |b: f64| {
            let d = 1.0 + b * root;
            (root / d, 0.5 / (root * d * d))
        };
        let (value, slope) = match model {
            ActivityModel::Ideal | ActivityModel::DebyeHueckel => (0.0, 0.0),
            ActivityModel::Guentelberg => over(1.0),
            ActivityModel::BatesGuggenheim => over(1.5),
            ActivityModel::Davies => {
                let (value, slope) = over(1.0);
                (value - 0.3 * i, slope - 0.3)
            }
            ActivityModel::PitzerTerm => {
                let (value, slope) = over(1.2);
                let logarithm = super::elementary::ln_1p(1.2 * root) * (2.0 / 1.2);
                let derivative = 1.0 / (root * (1.0 + 1.2 * root));
                ((value + logarithm) / 3.0, (slope + derivative) / 3.0)
            }
        };
        Self {
            root,
            common: LnGamma {
                value: -a * value,
                slope: -a * slope,
            },
            a,
            b: water.debye_hueckel_b,
            sized: model == ActivityModel::DebyeHueckel,
        }
    }

    /// ln γ of an ion of squared charge `z2` and ion size in nm.
    #[inline]
    pub(super) fn ln_gamma(&self, z2: f64, ion_size: f64) -> LnGamma {
        if self.sized {
            let d = 1.0 + self.b * ion_size * self.root;
            return LnGamma {
                value: -self.a * z2 * self.root / d,
                slope: -self.a * z2 * 0.5 / (self.root * d * d),
            };
        }
        LnGamma {
            value: z2 * self.common.value,
            slope: z2 * self.common.slope,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const MODELS: [ActivityModel; 6] = [
        ActivityModel::Ideal,
        ActivityModel::DebyeHueckel,
        ActivityModel::Guentelberg,
        ActivityModel::Davies,
        ActivityModel::BatesGuggenheim,
        ActivityModel::PitzerTerm,
    ];

    #[test]
    fn slopes_are_the_derivatives() {
        let water = Water::at(298.15).unwrap();
        for model in MODELS {
            for i in [1e-4, 0.01, 0.5] {
                let step = 1e-6 * i;
                let at = |i: f64| Screening::at(model, &water, i).ln_gamma(4.0, 0.45);
                let difference = (at(i + step).value - at(i - step).value) / (2.0 * step);
                // A central difference with a relative step of 1e-6 is good to about 1e-9.
                assert!(
                    (difference - at(i).slope).abs() <= 1e-7 * difference.abs(),
                    "{model:?} at {i}"
                );
            }
        }
    }

    #[test]
    fn coefficients_of_single_ions_are_those_of_the_table() {
        // Kielland (1937), J. Am. Chem. Soc. 59, 1675, table at 25 °C, recalled: Na+ with 0.4 nm, 0.77 at I = 0.1; SO4(2-) with 0.4 nm, 0.355 at
        // 0.1; H+ with 0.9 nm, 0.86 at 0.05. Tolerance 0.01: his A and B are older.
        let water = Water::at(298.15).unwrap();
        for (z2, size, i, gamma) in [
            (1.0, 0.4, 0.1, 0.77),
            (4.0, 0.4, 0.1, 0.355),
            (1.0, 0.9, 0.05, 0.86),
        ] {
            let found = super::super::elementary::exp(
                Screening::at(ActivityModel::DebyeHueckel, &water, i)
                    .ln_gamma(z2, size)
                    .value,
            );
            assert!((found - gamma).abs() <= 0.01, "{found} for {gamma}");
        }
    }
}
