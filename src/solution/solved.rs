//! One liquid, solved: the state that every task ends in, and the same with one thing changed.

use crate::equilibrium::{ActivityModel, Certified, Solver, Total, Totals};
use crate::problem::{Acceptance, ActivityChoice, Composition, Conditions};
use crate::solution::Unsolvable;
use crate::solution::answer::{ConstantsUsed, ModelFacts};
use crate::solution::dose::{Dose, Doses};
use crate::solution::tableau::{self, Tableau, Variation, stated};

/// Ionic strength in mol/kg above which a pH by an ion-size model needs to be accepted in so many words.
const LARGEST_IONIC_STRENGTH: f64 = 1.0;

/// A liquid with its solution.
#[derive(Clone, Debug)]
pub(super) struct Solved<'s> {
    pub(super) conditions: &'s Conditions,
    pub(super) doses: Doses,
    pub(super) variation: Variation,
    pub(super) tableau: Tableau,
    pub(super) totals: Totals,
    pub(super) solution: Certified,
}

impl<'s> Solved<'s> {
    /// Solves a liquid under its conditions.
    pub(super) fn of(
        composition: &Composition,
        conditions: &'s Conditions,
    ) -> Result<Self, Unsolvable> {
        let variation = stated(conditions)?;
        let water = tableau::water(conditions, variation.temperature)?;
        let doses = Doses::of(composition, water.density / 1000.0)?;
        Self::from_doses(doses, conditions, variation)
    }

    /// Solves doses under varied conditions.
    pub(super) fn from_doses(
        doses: Doses,
        conditions: &'s Conditions,
        variation: Variation,
    ) -> Result<Self, Unsolvable> {
        let tableau = Tableau::of(&[&doses], conditions, variation)?;
        let totals = tableau.totals(&[(&doses, Total::from_f64(1.0))]);
        let solution = Solver::new(&tableau.system)
            .solve(&totals, None)
            .map_err(Unsolvable::Unsolved)?;
        let solved = Self {
            conditions,
            doses,
            variation,
            tableau,
            totals,
            solution,
        };
        solved.in_range()?;
        Ok(solved)
    }

    /// pH of the same doses under varied conditions.
    pub(super) fn ph_with(&self, variation: Variation) -> Result<f64, Unsolvable> {
        let tableau = Tableau::of(&[&self.doses], self.conditions, variation)?;
        let totals = tableau.totals(&[(&self.doses, Total::from_f64(1.0))]);
        let mut solver = Solver::new(&tableau.system);
        let (ph, _) = solver
            .ph(&totals, Some(self.solution.start()))
            .or_else(|_again| solver.ph(&totals, None))
            .map_err(Unsolvable::Unsolved)?;
        Ok(ph)
    }

    /// pH with another activity model.
    pub(super) fn ph_with_model(&self, model: ActivityModel) -> Result<f64, Unsolvable> {
        self.ph_with(Variation {
            model,
            ..self.variation
        })
    }

    /// Whether every ion present is monovalent (to one part in a thousand of the ionic strength).
    pub(super) fn monovalent(&self) -> bool {
        let state = super::state::of(&self.tableau, &self.totals, &self.solution);
        let multivalent: f64 = state
            .species
            .iter()
            .filter(|species| species.charge.abs() > 1)
            .map(|species| {
                0.5 * f64::from(species.charge) * f64::from(species.charge) * species.molality
            })
            .sum();
        multivalent <= 1e-3 * self.solution.ionic_strength()
    }

    /// pH change for a change of ln of one dose, dimensionless: its molality times the sensitivity to it.
    pub(super) fn ph_by_ln_dose(&self, dose: &Dose, by_component: &[f64], by_protons: f64) -> f64 {
        let components: f64 = dose
            .form
            .contains
            .iter()
            .filter_map(|(component, count)| {
                let index = self.tableau.component(component)?;
                Some(by_component.get(index.place())? * f64::from(*count))
            })
            .sum();
        dose.molality.to_f64() * (components + by_protons * f64::from(dose.form.protons()))
    }

    fn in_range(&self) -> Result<(), Unsolvable> {
        let ionic_strength = self.solution.ionic_strength();
        let accepted = self
            .conditions
            .accepted
            .contains(&Acceptance::ModelOutsideItsRange);
        let bounded = !matches!(self.variation.model, ActivityModel::Ideal);
        if bounded && ionic_strength > LARGEST_IONIC_STRENGTH && !accepted {
            return Err(Unsolvable::ModelRange {
                model: self.conditions.activity.value.name(),
                ionic_strength,
            });
        }
        Ok(())
    }

    /// Model and water, as the answer states them.
    pub(super) fn model_facts(&self) -> ModelFacts {
        let water = self.tableau.system.water();
        let asked = self.conditions.activity.value;
        let (activity, choice) = match asked {
            ActivityChoice::Best => (
                ActivityChoice::Davies,
                Some(
                    "davies: the most specific model for which nothing is missing; specific interaction coefficients are not complete for these \
                     ions"
                        .to_owned(),
                ),
            ),
            other => (other, None),
        };
        ModelFacts {
            activity,
            choice,
            debye_hueckel_a: water.debye_hueckel_a,
            debye_hueckel_b: water.debye_hueckel_b,
            pkw: water.pkw,
            temperature_c: self.variation.temperature - 273.15,
            density: self.tableau.density,
            permittivity: water.permittivity,
        }
    }

    /// Everything that is needed to compute it again.
    pub(super) fn constants(&self) -> ConstantsUsed {
        let pk_at_temperature = self
            .tableau
            .ligands
            .iter()
            .flat_map(|place| {
                (1..)
                    .zip(&place.pk)
                    .map(|(step, pk)| (place.ligand.name.clone(), step, *pk))
            })
            .collect();
        ConstantsUsed {
            water: self.conditions.pkw.clone(),
            ligands: self
                .tableau
                .ligands
                .iter()
                .map(|place| place.ligand.clone())
                .collect(),
            ions: self
                .tableau
                .ions
                .iter()
                .map(|place| place.ion.clone())
                .collect(),
            forms: self.tableau.forms.clone(),
            pk_at_temperature,
        }
    }
}
