//! A tableau while it is put together from components.

use crate::equilibrium::{
    ActivityModel, ComponentIndex, Species, System, SystemBuilder, Water, elementary,
};
use crate::quantity::Decimal;
use crate::solution::Unsolvable;
use crate::solution::assembly::{CARBONIC_ACID, Part, PkRow};
use crate::solution::carbon_dioxide;
use crate::solution::dissociation::{FoundPk, pk_of};
use crate::solution::tape::Node;
use crate::substance::{Catalogue, Component, Ligand};
use std::sync::Arc;

/// A species before the tableau gives it a place.
pub(super) struct SpeciesDraft {
    pub(super) name: String,
    pub(super) protons: i8,
    pub(super) charge: i8,
}

/// A tableau while it is put together.
pub(super) struct Draft {
    pub(super) builder: SystemBuilder,
    pub(super) parts: Vec<Part>,
    pub(super) species: Vec<Vec<SpeciesDraft>>,
    pub(super) pks: Vec<PkRow>,
    water: Water,
    model: ActivityModel,
}

impl Draft {
    /// An empty tableau.
    pub(super) fn new(water: Water, model: ActivityModel) -> Self {
        Self {
            builder: System::builder(water, model),
            parts: Vec::new(),
            species: Vec::new(),
            pks: Vec::new(),
            water,
            model,
        }
    }

    /// Puts a component in, with its concentration where the recipe has one.
    pub(super) fn put(&mut self, component: &Component, concentration: Option<Node>) {
        let (index, drafts) = match component {
            Component::Ligand(ligand) => self.ligand(ligand),
            Component::Ion(ion) => {
                let size = ion.ion_size.map(Decimal::to_f64);
                let draft = SpeciesDraft {
                    name: ion.symbol.clone(),
                    protons: 0,
                    charge: ion.charge,
                };
                (self.builder.inert(ion.charge, size), vec![draft])
            }
        };
        self.parts.push(Part {
            component: component.clone(),
            index,
            concentration,
            held: false,
        });
        self.species.push(drafts);
    }

    fn ligand(&mut self, ligand: &Arc<Ligand>) -> (ComponentIndex, Vec<SpeciesDraft>) {
        let found: Vec<FoundPk> = ligand
            .steps
            .iter()
            .enumerate()
            .map(|(step, entry)| pk_of(ligand, step, &entry.preferred, &self.water, self.model))
            .collect();
        let mut species = Vec::new();
        let mut drafts = Vec::new();
        for state in 0..=ligand.steps.len() {
            let lg_beta: f64 = found.iter().skip(state).map(|pk| pk.value).sum();
            let charge = ligand.state_charge(state);
            let protons = i8::try_from(ligand.state_protons(state)).unwrap_or(i8::MAX);
            let mut row = Species::new(charge, protons, lg_beta);
            if let Some(size) = ligand.ion_sizes.get(state).copied().flatten() {
                row = row.with_ion_size(size.to_f64());
            }
            species.push(row);
            drafts.push(SpeciesDraft {
                name: ligand.states.get(state).cloned().unwrap_or_default(),
                protons,
                charge,
            });
        }
        for (step, found) in found.into_iter().enumerate() {
            self.pks.push(PkRow {
                ligand: Arc::clone(ligand),
                step,
                found,
                effects: Vec::new(),
            });
        }
        (self.builder.ligand(&species), drafts)
    }

    /// Holds CO₂(aq) at the activity that a pressure in atm gives.
    ///
    /// # Errors
    /// [`Unsolvable::Library`].
    pub(super) fn hold_carbon_dioxide(
        &mut self,
        pressure: f64,
        stated: Option<&Arc<Ligand>>,
    ) -> Result<(), Unsolvable> {
        let is_carbonic = |part: &Part| part.component.name() == CARBONIC_ACID;
        if !self.parts.iter().any(is_carbonic) {
            let ligand = match stated {
                Some(ligand) => Some(ligand),
                None => Catalogue::embedded()?.ligand(CARBONIC_ACID),
            };
            if let Some(ligand) = ligand {
                self.put(&Component::Ligand(Arc::clone(ligand)), None);
            }
        }
        let lg_activity =
            carbon_dioxide::lg_henry(self.water.temperature) + elementary::log10(pressure);
        if let Some(part) = self.parts.iter_mut().find(|part| is_carbonic(part)) {
            part.held = true;
            self.builder.hold(part.index, 2, lg_activity);
        }
        Ok(())
    }
}
