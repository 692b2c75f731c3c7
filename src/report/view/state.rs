//! The equilibrium state of a solution as templates see it.

use crate::solution::answer::{SpeciesState, State};
use serde::Serialize;

/// The state of one solution.
#[derive(Debug, Serialize)]
pub(in crate::report) struct StateView {
    /// pH = -lg a(H+).
    ph: f64,
    /// p\[H\] = -lg of the molality of H+ in mol/kg.
    p_hydrogen: f64,
    /// Ionic strength in mol/kg.
    ionic_strength: f64,
    /// Buffer capacity in mol/L per unit of pH.
    buffer_capacity: f64,
    /// Every species.
    species: Vec<SpeciesView>,
    /// Degree of dissociation at each step.
    dissociation: Vec<DissociationView>,
    /// Analytical concentrations.
    totals: Vec<TotalView>,
    /// The tests that the numbers passed.
    certificate: CertificateView,
}

/// One species.
#[derive(Debug, Serialize)]
struct SpeciesView {
    name: String,
    component: Option<String>,
    charge: i8,
    /// In mol/kg.
    molality: f64,
    /// In mol/L.
    concentration: f64,
    /// Share of its component, 0 to 1.
    share: Option<f64>,
    activity_coefficient: f64,
}

/// Degree of dissociation at one step.
#[derive(Debug, Serialize)]
struct DissociationView {
    ligand: String,
    /// From 1.
    step: usize,
    /// 0 to 1.
    degree: f64,
}

/// Analytical concentration of one component.
#[derive(Debug, Serialize)]
struct TotalView {
    component: String,
    /// In mol/kg.
    molality: f64,
    /// In mol/L.
    concentration: f64,
}

/// What was tested.
#[derive(Debug, Serialize)]
struct CertificateView {
    /// Residual of the charge balance in mol/kg.
    charge_balance: f64,
    /// The same, relative to the sum of its terms.
    relative_charge_balance: f64,
    /// Largest relative residual of a mass balance.
    mass_balance: f64,
    /// Relative difference of the ionic strength from the one computed with.
    ionic_strength: f64,
    /// Width in pH over which the balance changes sign.
    ph_bracket: f64,
}

impl StateView {
    pub(in crate::report) fn of(state: &State) -> Self {
        let certificate = &state.certificate;
        Self {
            ph: state.ph,
            p_hydrogen: state.p_hydrogen,
            ionic_strength: state.ionic_strength,
            buffer_capacity: state.buffer_capacity,
            species: state.species.iter().map(SpeciesView::of).collect(),
            dissociation: state
                .dissociation
                .iter()
                .map(|dissociation| DissociationView {
                    ligand: dissociation.ligand.clone(),
                    step: dissociation.step,
                    degree: dissociation.degree,
                })
                .collect(),
            totals: state
                .totals
                .iter()
                .map(|total| TotalView {
                    component: total.component.clone(),
                    molality: total.molality,
                    concentration: total.concentration,
                })
                .collect(),
            certificate: CertificateView {
                charge_balance: certificate.charge_balance,
                relative_charge_balance: certificate.relative_charge_balance,
                mass_balance: certificate.mass_balance,
                ionic_strength: certificate.ionic_strength,
                ph_bracket: certificate.ph_bracket,
            },
        }
    }
}

impl SpeciesView {
    fn of(species: &SpeciesState) -> Self {
        Self {
            name: species.name.clone(),
            component: species.component.clone(),
            charge: species.charge,
            molality: species.molality,
            concentration: species.concentration,
            share: species.fraction,
            activity_coefficient: species.activity_coefficient,
        }
    }
}
