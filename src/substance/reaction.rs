//! Equilibria besides dissociation: gases that dissolve, and species of several units.

use crate::quantity::Unit;
use crate::substance::{Constant, Formula, LibraryError, StoredPk};
use serde::{Deserialize, Serialize};

/// A gas over a solution, with Henry's constant.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct GasSolubility {
    /// The gas.
    pub gas: String,
    /// Its formula.
    pub formula: Formula,
    /// The ligand whose neutral form it is when dissolved.
    pub ligand: String,
    /// The unit of pressure that the constant is for.
    pub pressure_unit: Unit,
    /// `pK = -lg K`, K in mol per kg of water and unit of pressure; the enthalpy is that of dissolution.
    pub constant: Constant,
}

/// A species of several units of one ligand.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Polynuclear {
    /// Its name as printed.
    pub species: String,
    /// The ligand.
    pub ligand: String,
    /// How many neutral units it is made of.
    pub units: u8,
    /// How many hydroxide ions they take up.
    pub hydroxide: u8,
    /// `pK = -lg K` of `units` neutral units + `hydroxide` OH⁻ = species + water.
    pub constant: Constant,
}

impl Polynuclear {
    /// Its charge in elementary charges.
    pub fn charge(&self) -> i8 {
        i8::try_from(self.hydroxide).map_or(i8::MIN, |charge| -charge)
    }

    /// Protons above `units` fully deprotonated ligands, each neutral unit holding `of_neutral`; negative below them.
    pub fn protons(&self, of_neutral: u8) -> i32 {
        i32::from(self.units) * i32::from(of_neutral) - i32::from(self.hydroxide)
    }

    /// lg of the overall stability constant from fully deprotonated ligands and protons, dimensionless.
    ///
    /// `pk` of the formation reaction, `lg_beta_neutral` of the neutral unit from the fully deprotonated ligand, and `pkw`, all at one
    /// temperature: `lg beta = units · lg beta(neutral) - hydroxide · pKw - pK`, from adding the reactions.
    pub fn lg_beta(&self, pk: f64, lg_beta_neutral: f64, pkw: f64) -> f64 {
        f64::from(self.units) * lg_beta_neutral - f64::from(self.hydroxide) * pkw - pk
    }
}

/// A gas as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
pub(super) struct StoredGas {
    gas: String,
    formula: String,
    #[serde(rename = "dissolves as")]
    dissolves_as: String,
    #[serde(rename = "pressure unit")]
    pressure_unit: String,
    solubility: StoredPk,
}

/// A polynuclear species as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
pub(super) struct StoredPolynuclear {
    species: String,
    ligand: String,
    units: u8,
    hydroxide: u8,
    formation: StoredPk,
}

impl StoredGas {
    /// The gas that the entry describes.
    pub(super) fn gas(&self) -> Result<GasSolubility, LibraryError> {
        let name = &self.gas;
        Ok(GasSolubility {
            gas: name.clone(),
            formula: Formula::parse(&self.formula).map_err(|problem| LibraryError::Formula {
                name: name.clone(),
                problem,
            })?,
            ligand: self.dissolves_as.clone(),
            pressure_unit: Unit::parse(&self.pressure_unit).map_err(|_error| {
                LibraryError::Word {
                    name: name.clone(),
                    word: self.pressure_unit.clone(),
                }
            })?,
            constant: self.solubility.constant(name, false)?,
        })
    }
}

impl StoredPolynuclear {
    /// The species that the entry describes.
    pub(super) fn polynuclear(&self) -> Result<Polynuclear, LibraryError> {
        Ok(Polynuclear {
            species: self.species.clone(),
            ligand: self.ligand.clone(),
            units: self.units,
            hydroxide: self.hydroxide,
            constant: self.formation.constant(&self.species, false)?,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::Dimension;
    use crate::quantity::Pressure;
    use crate::substance::{Catalogue, EquationForm};

    /// lg K from the equation of a constant at 25 °C, by its printed form.
    fn lg_at_25(constant: &Constant) -> f64 {
        let equation = constant.equation.as_ref().unwrap();
        let c: Vec<f64> = equation.coefficients.iter().map(|c| c.to_f64()).collect();
        let t = 298.15_f64;
        // ln and lg of 298.15, by calculator, since this module may not call a platform's logarithm.
        let (ln, lg) = (5.697_596_715_57, 2.474_434_813_68);
        match equation.form {
            EquationForm::CommonLogarithm => {
                c[0] + c[1] * t + c[2] / t + c[3] * lg + c[4] / (t * t)
            }
            EquationForm::NaturalLogarithm => {
                (c[0] + c[1] / t + c[2] * ln + c[3] * t) / std::f64::consts::LN_10
            }
            _ => f64::NAN,
        }
    }

    #[test]
    fn equations_give_the_value_at_25_degrees() {
        let library = Catalogue::embedded().unwrap();
        let gases = library.gases().map(|gas| (&gas.gas, &gas.constant));
        let species = library
            .polynuclear("boric acid")
            .map(|s| (&s.species, &s.constant));
        for (name, constant) in gases.chain(species) {
            if constant.equation.is_some() {
                let found = -lg_at_25(constant);
                // Half a unit of the last printed digit.
                assert!(
                    (found - constant.pk.to_f64()).abs() <= 0.000_5,
                    "{name}: {found}"
                );
            }
        }
    }

    #[test]
    fn gases_and_species_belong_to_ligands() {
        let library = Catalogue::embedded().unwrap();
        assert_eq!(library.gases().count(), 3);
        for gas in library.gases() {
            assert!(library.ligand(&gas.ligand).is_some(), "{}", gas.gas);
            assert!(Pressure::UNITS.contains(&gas.pressure_unit), "{}", gas.gas);
            assert!(library.find(&gas.gas).is_ok(), "{}", gas.gas);
        }
        assert_eq!(library.polynuclear("boric acid").count(), 2);
    }

    #[test]
    fn polyborates_follow_from_the_reactions() {
        let library = Catalogue::embedded().unwrap();
        let trimer = library
            .polynuclear("boric acid")
            .find(|s| s.units == 3)
            .unwrap();
        assert_eq!((trimer.charge(), trimer.protons(1)), (-1, 2));
        // By hand: 3 B(OH)₃ + OH⁻, lg K 6.821, so from 3 B(OH)₄⁻ + 2 H⁺: 3 · 9.235 - 13.995 + 6.821 = 20.531.
        assert!((trimer.lg_beta(-6.821, 9.235, 13.995) - 20.531).abs() < 1e-12);
    }
}
