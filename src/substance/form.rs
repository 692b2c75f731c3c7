//! What one weighs, pipettes or dissolves.

use crate::substance::{Formula, Hazard, InertIon, Ligand};
use std::sync::Arc;

/// A component of a substance.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Component {
    /// An acid family, in its fully deprotonated form.
    Ligand(Arc<Ligand>),
    /// An ion that takes no proton.
    Ion(Arc<InertIon>),
}

impl Component {
    /// Its name.
    pub fn name(&self) -> &str {
        match self {
            Self::Ligand(ligand) => &ligand.name,
            Self::Ion(ion) => &ion.name,
        }
    }

    /// Its charge in elementary charges; a ligand's is that of its fully deprotonated form.
    pub fn charge(&self) -> i8 {
        match self {
            Self::Ligand(ligand) => ligand.deprotonated_charge(),
            Self::Ion(ion) => ion.charge,
        }
    }
}

/// A substance as it is weighed, pipetted or dissolved: a neutral acid, a base, a salt, a hydrate, or an ion alone.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Form {
    /// Its name.
    pub name: String,
    /// Other names.
    pub synonyms: Vec<String>,
    /// Its formula, from which the molar mass follows; an own substance may have none.
    pub formula: Option<Formula>,
    /// CAS registry number.
    pub cas: Option<String>,
    /// Components and how many of each are in one formula unit.
    pub contains: Vec<(Component, u8)>,
    /// Charge in elementary charges: 0 but for an ion given alone.
    pub charge: i8,
    /// Cautions.
    pub hazards: Vec<Hazard>,
}

impl Form {
    /// Protons above the components, from the balance of charges; negative for a base such as sodium hydroxide.
    pub fn protons(&self) -> i32 {
        let components: i32 = self
            .contains
            .iter()
            .map(|(component, count)| i32::from(component.charge()) * i32::from(*count))
            .sum();
        i32::from(self.charge) - components
    }

    /// The symbol of an ion given alone, such as `HPO₄²⁻`: the name of the one state that it is.
    pub(super) fn ion_symbol(&self) -> Option<&str> {
        let [(component, 1)] = self.contains.as_slice() else {
            return None;
        };
        if self.charge == 0 {
            return None;
        }
        match component {
            Component::Ion(ion) => Some(&ion.symbol),
            Component::Ligand(ligand) => {
                let protons = usize::try_from(self.protons()).ok()?;
                let state = ligand.steps.len().checked_sub(protons)?;
                ligand.states.get(state).map(String::as_str)
            }
        }
    }

    /// The ligands in it.
    pub fn ligands(&self) -> impl Iterator<Item = &Arc<Ligand>> {
        self.contains
            .iter()
            .filter_map(|(component, _)| match component {
                Component::Ligand(ligand) => Some(ligand),
                Component::Ion(_) => None,
            })
    }

    /// Cautions of the substance and of its ligands, each once; a salt has not all of those of its acid or base.
    pub fn all_hazards(&self) -> Vec<Hazard> {
        let mut hazards = self.hazards.clone();
        for ligand in self.ligands() {
            let parent = ligand.name == self.name;
            let carried = ligand.hazards.iter().copied();
            hazards.extend(carried.filter(|hazard| parent || hazard.clings_to_salts()));
        }
        hazards.sort_unstable();
        hazards.dedup();
        hazards
    }
}
