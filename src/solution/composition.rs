//! A stated composition to a liquid on the tape: masses by purity, moisture and molar mass; stocks; portions of other solutions.

use crate::equilibrium::Total;
use crate::problem::{
    Composition, Content, ContentAmount, Corrections, Ingredient, Input, InputId, MadeUp, Strength,
    Taken,
};
use crate::quantity::Dimension;
use crate::solution::Unsolvable;
use crate::solution::recipe::{Liquid, Writer};
use crate::solution::tape::Node;
use crate::substance::Form;
use std::sync::Arc;

/// What one ingredient brings.
enum Brought {
    /// A concentration in the final solution, in mol/L.
    Concentration(Arc<Form>, Node),
    /// An amount in mol.
    Amount(Arc<Form>, Node, InputId),
    /// A volume of a liquid in L.
    Portion(Liquid, Node),
}

impl Writer {
    /// The liquid that a composition describes.
    ///
    /// # Errors
    /// [`Unsolvable`] where a volume, a density or a molar mass is missing, or a value is not positive.
    pub(super) fn liquid(&mut self, composition: &Composition) -> Result<Liquid, Unsolvable> {
        let mut brought = Vec::new();
        let mut volumes = Vec::new();
        for ingredient in &composition.ingredients {
            match ingredient {
                Ingredient::Substance(content) => {
                    brought.push(self.content(content, &mut volumes)?);
                }
                Ingredient::Solution(portion) => {
                    let volume = self.input(&portion.volume);
                    volumes.push(volume);
                    let inner = self.liquid(&portion.composition)?;
                    brought.push(Brought::Portion(inner, volume));
                }
                Ingredient::Water(volume) => volumes.push(self.input(volume)),
            }
        }
        let volume = match &composition.made_up {
            MadeUp::To(volume) => {
                positive(volume)?;
                Some(self.input(volume))
            }
            MadeUp::SumOfPortions => Some(self.tape.sum(&volumes)),
            MadeUp::Unstated => None,
        };
        self.gather(brought, volume)
    }

    fn gather(
        &mut self,
        brought: Vec<Brought>,
        volume: Option<Node>,
    ) -> Result<Liquid, Unsolvable> {
        let mut contents = Vec::new();
        for part in brought {
            match part {
                Brought::Concentration(form, node) => contents.push((form, node)),
                Brought::Amount(form, amount, input) => {
                    let total = volume.ok_or(Unsolvable::NoVolume { input })?;
                    contents.push((form, self.tape.divide(amount, total)));
                }
                Brought::Portion(liquid, portion) => {
                    let total = volume.unwrap_or(portion);
                    contents.extend(self.pour(&[(&liquid, portion)], total).contents);
                }
            }
        }
        Ok(Liquid { volume, contents })
    }

    fn content(
        &mut self,
        content: &Content,
        volumes: &mut Vec<Node>,
    ) -> Result<Brought, Unsolvable> {
        let form = &content.form;
        let corrections = &content.corrections;
        match &content.amount {
            ContentAmount::Concentration(input) => {
                not_negative(input)?;
                let node = self.input(input);
                let node = self.with_factor(node, corrections);
                Ok(Brought::Concentration(Arc::clone(form), node))
            }
            ContentAmount::Molality(input) => {
                not_negative(input)?;
                let molality = self.input(input);
                let density = self.density;
                let node = self.tape.multiply(molality, density);
                Ok(Brought::Concentration(Arc::clone(form), node))
            }
            ContentAmount::MassConcentration(input) => {
                not_negative(input)?;
                let mass = self.input(input);
                let pure = self.pure(mass, corrections);
                let molar_mass = self.molar_mass_of(form, &content.id)?;
                let node = self.tape.divide(pure, molar_mass);
                Ok(Brought::Concentration(Arc::clone(form), node))
            }
            ContentAmount::Mass(input) => {
                not_negative(input)?;
                let mass = self.input(input);
                let pure = self.pure(mass, corrections);
                let molar_mass = self.molar_mass_of(form, &content.id)?;
                let node = self.tape.divide(pure, molar_mass);
                Ok(Brought::Amount(Arc::clone(form), node, content.id.clone()))
            }
            ContentAmount::Amount(input) => {
                not_negative(input)?;
                let node = self.input(input);
                Ok(Brought::Amount(Arc::clone(form), node, content.id.clone()))
            }
            ContentAmount::Stock { taken, strength } => {
                let taken_node = match taken {
                    Taken::Volume(volume) => {
                        not_negative(volume)?;
                        let node = self.input(volume);
                        volumes.push(node);
                        TakenNode::Volume(node)
                    }
                    Taken::Mass(mass) => {
                        not_negative(mass)?;
                        TakenNode::Mass(self.input(mass))
                    }
                };
                let amount = self.stock(form, strength, corrections, taken_node, &content.id)?;
                Ok(Brought::Amount(
                    Arc::clone(form),
                    amount,
                    content.id.clone(),
                ))
            }
        }
    }

    /// Amount in mol that a portion of a stock brings.
    ///
    /// # Errors
    /// [`Unsolvable::NoDensity`] and [`Unsolvable::NoMolarMass`].
    pub(super) fn stock(
        &mut self,
        form: &Arc<Form>,
        strength: &Strength,
        corrections: &Corrections,
        taken: TakenNode,
        id: &InputId,
    ) -> Result<Node, Unsolvable> {
        let no_density = || Unsolvable::NoDensity { input: id.clone() };
        let amount = match (strength, taken) {
            (Strength::Concentration(concentration), TakenNode::Volume(volume)) => {
                not_negative(concentration)?;
                let concentration = self.input(concentration);
                self.tape.multiply(concentration, volume)
            }
            (Strength::MassConcentration(concentration), TakenNode::Volume(volume)) => {
                not_negative(concentration)?;
                let concentration = self.input(concentration);
                let mass = self.tape.multiply(concentration, volume);
                let molar_mass = self.molar_mass_of(form, id)?;
                self.tape.divide(mass, molar_mass)
            }
            (Strength::MassFraction { fraction, density }, taken) => {
                not_negative(fraction)?;
                let mass = match taken {
                    TakenNode::Mass(mass) => mass,
                    TakenNode::Volume(volume) => {
                        let density = density.as_ref().ok_or_else(no_density)?;
                        positive(density)?;
                        let density = self.input(density);
                        let kilograms = self.tape.multiply(density, volume);
                        let thousand = self.tape.constant(Total::from_f64(1000.0));
                        self.tape.multiply(kilograms, thousand)
                    }
                };
                let fraction = self.input(fraction);
                let pure = self.tape.multiply(mass, fraction);
                let molar_mass = self.molar_mass_of(form, id)?;
                self.tape.divide(pure, molar_mass)
            }
            (Strength::Concentration(_) | Strength::MassConcentration(_), TakenNode::Mass(_)) => {
                return Err(no_density());
            }
        };
        Ok(self.with_factor(amount, corrections))
    }

    /// Mass of the substance in a mass as weighed: moisture off first, then purity.
    pub(super) fn pure(&mut self, mass: Node, corrections: &Corrections) -> Node {
        let mut pure = mass;
        if let Some(water) = &corrections.water {
            let water = self.input(water);
            let one = self.tape.constant(Total::from_f64(1.0));
            let off = self.tape.times(water, -1);
            let dry = self.tape.add(one, off);
            pure = self.tape.multiply(pure, dry);
        }
        if let Some(purity) = &corrections.purity {
            let purity = self.input(purity);
            pure = self.tape.multiply(pure, purity);
        }
        self.with_factor(pure, corrections)
    }

    /// The molar mass of a form, which must have one.
    ///
    /// # Errors
    /// [`Unsolvable::NoMolarMass`].
    pub(super) fn molar_mass_of(&mut self, form: &Form, id: &InputId) -> Result<Node, Unsolvable> {
        self.molar_mass(form)
            .ok_or_else(|| Unsolvable::NoMolarMass {
                input: id.clone(),
                substance: form.name.clone(),
            })
    }

    fn with_factor(&mut self, node: Node, corrections: &Corrections) -> Node {
        match &corrections.factor {
            Some(factor) => {
                let factor = self.input(factor);
                self.tape.multiply(node, factor)
            }
            None => node,
        }
    }
}

/// A portion of a stock on the tape: L or g.
#[derive(Clone, Copy, Debug)]
pub(super) enum TakenNode {
    /// By volume in L.
    Volume(Node),
    /// By mass in g.
    Mass(Node),
}

fn positive<D: Dimension>(input: &Input<D>) -> Result<(), Unsolvable> {
    if input.value().base() > 0.0 {
        Ok(())
    } else {
        Err(wrong(input))
    }
}

fn not_negative<D: Dimension>(input: &Input<D>) -> Result<(), Unsolvable> {
    if input.value().base() >= 0.0 {
        Ok(())
    } else {
        Err(wrong(input))
    }
}

fn wrong<D: Dimension>(input: &Input<D>) -> Unsolvable {
    Unsolvable::NotPositive {
        input: input.id.clone(),
        value: input.measured.to_string(),
    }
}
