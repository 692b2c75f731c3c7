//! What was put together, as molalities, each with its derivatives to the inputs that it follows from.

use crate::equilibrium::Total;
use crate::problem::{
    Composition, Content, ContentAmount, Ingredient, Input, InputId, MadeUp, SolutionPortion,
    Strength, Taken,
};
use crate::quantity::{Decimal, Dimension, Measured, Spread, Unit, Volume};
use crate::solution::Unsolvable;
use crate::substance::Form;
use std::collections::BTreeMap;
use std::sync::Arc;

/// One substance in the liquid.
#[derive(Clone, Debug)]
pub(super) struct Dose {
    /// What it is.
    pub(super) form: Arc<Form>,
    /// Its molality in mol/kg of water.
    pub(super) molality: Total,
    /// The inputs it depends on.
    pub(super) effects: Vec<Effect>,
}

/// How a dose depends on one input.
#[derive(Clone, Debug)]
pub(super) struct Effect {
    /// The input.
    pub(super) id: InputId,
    /// d ln(dose) / d(input), by base unit of the input.
    pub(super) relative: f64,
    /// Whether the dose goes with the reciprocal of the input.
    pub(super) inverse: bool,
}

impl Effect {
    /// The factor by which the dose changes when the input changes by `change` base units; exact, dimensionless.
    pub(super) fn factor(&self, change: f64) -> f64 {
        if self.inverse {
            1.0 / (1.0 - self.relative * change)
        } else {
            1.0 + self.relative * change
        }
    }
}

/// What is known of one input.
#[derive(Clone, Debug)]
pub(super) struct InputFacts {
    /// As written.
    pub(super) written: String,
    /// The value in base units.
    pub(super) value: f64,
    /// Standard uncertainty in base units.
    pub(super) standard: f64,
    /// The unit it is written in.
    pub(super) unit: Unit,
    /// Degrees of freedom, where given.
    pub(super) degrees_of_freedom: Option<f64>,
    /// What the stated uncertainty is.
    pub(super) spread: Option<Spread>,
}

/// All doses of a liquid, and the facts of their inputs.
#[derive(Clone, Debug, Default)]
pub(super) struct Doses {
    pub(super) list: Vec<Dose>,
    pub(super) inputs: BTreeMap<InputId, InputFacts>,
    /// Final volume in L, where there is one.
    pub(super) volume: Option<f64>,
}

impl Doses {
    /// The doses of a liquid; `density` is that of water in kg/L, by which amount concentrations become molalities.
    pub(super) fn of(composition: &Composition, density: f64) -> Result<Self, Unsolvable> {
        let mut doses = Self::default();
        let concentrations = doses.concentrations(composition, density)?;
        let density = total(Decimal::shortest(density));
        doses.list = concentrations
            .into_iter()
            .map(|dose| Dose {
                molality: dose.molality / density,
                ..dose
            })
            .collect();
        Ok(doses)
    }

    /// Adds what another set of doses knows of its inputs.
    pub(super) fn knows(&mut self, other: &Self) {
        self.inputs.extend(
            other
                .inputs
                .iter()
                .map(|(id, facts)| (id.clone(), facts.clone())),
        );
    }

    /// Doses as amount concentrations in mol/L of the liquid; sets its volume.
    fn concentrations(
        &mut self,
        composition: &Composition,
        density: f64,
    ) -> Result<Vec<Dose>, Unsolvable> {
        let volume = self.final_volume(composition)?;
        self.volume = volume.as_ref().map(|volume| volume.litres.to_f64());
        let mut doses = Vec::new();
        for ingredient in &composition.ingredients {
            match ingredient {
                Ingredient::Substance(content) => {
                    doses.push(self.content(content, volume.as_ref(), density)?)
                }
                Ingredient::Solution(portion) => {
                    let volume = volume.as_ref().ok_or(Unsolvable::NoVolume)?;
                    doses.extend(self.portion(portion, volume, density)?);
                }
                Ingredient::Water(volume) => self.note(volume),
            }
        }
        self.volume = volume.as_ref().map(|volume| volume.litres.to_f64());
        Ok(doses)
    }

    fn final_volume(
        &mut self,
        composition: &Composition,
    ) -> Result<Option<FinalVolume>, Unsolvable> {
        let inputs: Vec<&Input<Volume>> = match &composition.made_up {
            MadeUp::Unstated => return Ok(None),
            MadeUp::To(volume) => vec![volume],
            MadeUp::SumOfPortions => composition
                .ingredients
                .iter()
                .filter_map(|ingredient| match ingredient {
                    Ingredient::Solution(portion) => Some(&portion.volume),
                    Ingredient::Water(volume) => Some(volume),
                    Ingredient::Substance(content) => match &content.amount {
                        ContentAmount::Stock {
                            taken: Taken::Volume(volume),
                            ..
                        } => Some(volume),
                        _ => None,
                    },
                })
                .collect(),
        };
        let mut litres = Total::ZERO;
        for volume in &inputs {
            litres = litres + exact(&volume.measured);
        }
        if litres.to_f64() <= 0.0 {
            return Err(Unsolvable::NoVolume);
        }
        let reciprocal = 1.0 / litres.to_f64();
        let effects = inputs
            .iter()
            .map(|volume| {
                self.note(volume);
                Effect {
                    id: volume.id.clone(),
                    relative: -reciprocal,
                    inverse: true,
                }
            })
            .collect();
        Ok(Some(FinalVolume { litres, effects }))
    }

    /// A portion of another solution: its concentrations times the volume taken, by the final volume.
    fn portion(
        &mut self,
        portion: &SolutionPortion,
        volume: &FinalVolume,
        density: f64,
    ) -> Result<Vec<Dose>, Unsolvable> {
        self.note(&portion.volume);
        let taken = exact(&portion.volume.measured);
        let inside = self.concentrations(&portion.composition, density)?;
        Ok(inside
            .into_iter()
            .map(|dose| {
                let mut effects = dose.effects;
                // A portion that lists its own contents is made up to its own volume, which it is then poured in whole: no dependence is left.
                effects.push(Effect {
                    id: portion.volume.id.clone(),
                    relative: 1.0 / taken.to_f64(),
                    inverse: false,
                });
                effects.extend(volume.effects.iter().cloned());
                Dose {
                    form: dose.form,
                    molality: dose.molality * taken / volume.litres,
                    effects: merged(effects),
                }
            })
            .collect())
    }

    /// One substance as an amount concentration in the final liquid.
    fn content(
        &mut self,
        content: &Content,
        volume: Option<&FinalVolume>,
        density: f64,
    ) -> Result<Dose, Unsolvable> {
        let mut dose = Dose {
            form: Arc::clone(&content.form),
            molality: Total::from_f64(1.0),
            effects: Vec::new(),
        };
        match &content.amount {
            ContentAmount::Concentration(input) => self.multiply(&mut dose, input),
            ContentAmount::Molality(input) => {
                self.multiply(&mut dose, input);
                dose.molality = dose.molality * total(Decimal::shortest(density));
            }
            ContentAmount::MassConcentration(input) => {
                self.multiply(&mut dose, input);
                self.by_molar_mass(&mut dose)?;
            }
            ContentAmount::Mass(input) => {
                self.multiply(&mut dose, input);
                self.by_molar_mass(&mut dose)?;
                divide(&mut dose, volume.ok_or(Unsolvable::NoVolume)?);
            }
            ContentAmount::Amount(input) => {
                self.multiply(&mut dose, input);
                divide(&mut dose, volume.ok_or(Unsolvable::NoVolume)?);
            }
            ContentAmount::Stock { taken, strength } => {
                self.stock(&mut dose, taken, strength)?;
                divide(&mut dose, volume.ok_or(Unsolvable::NoVolume)?);
            }
        }
        self.corrected(&mut dose, content);
        dose.effects = merged(std::mem::take(&mut dose.effects));
        Ok(dose)
    }

    fn stock(
        &mut self,
        dose: &mut Dose,
        taken: &Taken,
        strength: &Strength,
    ) -> Result<(), Unsolvable> {
        match taken {
            Taken::Volume(volume) => self.multiply(dose, volume),
            Taken::Mass(mass) => self.multiply(dose, mass),
        }
        match strength {
            Strength::Concentration(input) => self.multiply(dose, input),
            Strength::MassConcentration(input) => {
                self.multiply(dose, input);
                self.by_molar_mass(dose)?;
            }
            Strength::MassFraction { fraction, density } => {
                self.multiply(dose, fraction);
                if let (Taken::Volume(_), Some(density)) = (taken, density) {
                    self.multiply(dose, density);
                    // g/mL times L is kg.
                    dose.molality = dose.molality * 1000.0;
                }
                self.by_molar_mass(dose)?;
            }
        }
        Ok(())
    }

    /// Purity, moisture, titre.
    fn corrected(&mut self, dose: &mut Dose, content: &Content) {
        if let Some(purity) = &content.corrections.purity {
            self.multiply(dose, purity);
        }
        if let Some(factor) = &content.corrections.factor {
            self.multiply(dose, factor);
        }
        if let Some(water) = &content.corrections.water {
            self.note(water);
            let dry = Total::from_f64(1.0) - exact(&water.measured);
            dose.molality = dose.molality * dry;
            dose.effects.push(Effect {
                id: water.id.clone(),
                relative: -1.0 / dry.to_f64(),
                inverse: false,
            });
        }
    }

    fn multiply<D: Dimension>(&mut self, dose: &mut Dose, input: &Input<D>) {
        self.note(input);
        let value = exact(&input.measured);
        dose.molality = dose.molality * value;
        if !value.is_zero() {
            dose.effects.push(Effect {
                id: input.id.clone(),
                relative: 1.0 / value.to_f64(),
                inverse: false,
            });
        }
    }

    fn by_molar_mass(&mut self, dose: &mut Dose) -> Result<(), Unsolvable> {
        let formula = dose
            .form
            .formula
            .as_ref()
            .ok_or_else(|| Unsolvable::NoMolarMass {
                substance: dose.form.name.clone(),
            })?;
        let mass = formula.molar_mass().base();
        let id = InputId::new("molar mass").within(&dose.form.name);
        self.inputs.insert(
            id.clone(),
            InputFacts {
                written: format!("{mass:.3} g/mol"),
                value: mass,
                standard: formula.molar_mass_uncertainty(),
                unit: Unit::GramPerMole,
                degrees_of_freedom: None,
                spread: Some(Spread::Standard),
            },
        );
        dose.molality = dose.molality / Total::from_f64(mass);
        dose.effects.push(Effect {
            id,
            relative: -1.0 / mass,
            inverse: true,
        });
        Ok(())
    }

    /// Remembers an input.
    pub(super) fn note<D: Dimension>(&mut self, input: &Input<D>) {
        let measured = &input.measured;
        self.inputs.insert(
            input.id.clone(),
            InputFacts {
                written: measured.to_string(),
                value: measured.value().base(),
                standard: measured.standard_uncertainty(),
                unit: measured.unit,
                degrees_of_freedom: measured.degrees_of_freedom(),
                spread: measured.uncertainty.map(|uncertainty| uncertainty.spread),
            },
        );
    }
}

/// The volume that a liquid ends with.
struct FinalVolume {
    litres: Total,
    effects: Vec<Effect>,
}

fn divide(dose: &mut Dose, volume: &FinalVolume) {
    dose.molality = dose.molality / volume.litres;
    dose.effects.extend(volume.effects.iter().cloned());
}

/// One effect for each input: a value that enters as itself and as its reciprocal cancels out.
fn merged(effects: Vec<Effect>) -> Vec<Effect> {
    let mut merged: Vec<Effect> = Vec::new();
    for effect in effects {
        match merged.iter_mut().find(|known| known.id == effect.id) {
            Some(known) => known.relative += effect.relative,
            None => merged.push(effect),
        }
    }
    merged.retain(|effect| effect.relative != 0.0);
    merged
}

/// The value in base units with all its digits.
fn exact<D: Dimension>(measured: &Measured<D>) -> Total {
    match measured.exact() {
        Some(decimal) => total(decimal),
        None => Total::from_f64(measured.value().base()),
    }
}

pub(super) fn total(decimal: Decimal) -> Total {
    Total::from_decimal(decimal.is_negative(), decimal.digits(), decimal.exponent())
}
