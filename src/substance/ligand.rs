//! Components: acid families in their fully deprotonated form, and ions that take no proton.

use crate::quantity::Decimal;
use crate::substance::{Hazard, Step};

/// An acid family: its fully deprotonated form is the component, its protonation states are the species.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Ligand {
    /// The name of its neutral form, which names the family.
    pub name: String,
    /// Charge of the form from which steps count, the most protonated one, in elementary charges.
    pub charge: i8,
    /// Dissociation steps, most acidic first.
    pub steps: Vec<Step>,
    /// Names of the protonation states as printed, most protonated first; one more than there are steps.
    pub states: Vec<String>,
    /// Ion sizes in nm for the Debye-Hueckel equation, in the order of `states`; missing ones are assumed.
    pub ion_sizes: Vec<Option<Decimal>>,
    /// Cautions that its states bring with them.
    pub hazards: Vec<Hazard>,
    /// Whether the values are the user's own.
    pub own: bool,
}

impl Ligand {
    /// Charge of the fully deprotonated form in elementary charges.
    pub fn deprotonated_charge(&self) -> i8 {
        let steps = i8::try_from(self.steps.len()).unwrap_or(i8::MAX);
        self.charge.saturating_sub(steps)
    }

    /// Charge of the state with the given index (0 is the most protonated), in elementary charges.
    pub fn state_charge(&self, state: usize) -> i8 {
        let lost = i8::try_from(state).unwrap_or(i8::MAX);
        self.charge.saturating_sub(lost)
    }

    /// Protons of the state above the fully deprotonated form.
    pub fn state_protons(&self, state: usize) -> usize {
        self.steps.len().saturating_sub(state)
    }
}

/// An ion that takes no proton in water.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct InertIon {
    /// Its name: `sodium ion`.
    pub name: String,
    /// Its symbol as printed: `Na⁺`.
    pub symbol: String,
    /// Charge in elementary charges.
    pub charge: i8,
    /// Ion size in nm for the Debye-Hueckel equation.
    pub ion_size: Option<Decimal>,
}
