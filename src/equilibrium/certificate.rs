//! The proof that a solution solves its equations; the only place where a certified solution is made.

use crate::equilibrium::elementary::LN_10;
use crate::equilibrium::evaluation::Evaluation;
use crate::equilibrium::sensitivity::{self, Sensitivities};
use crate::equilibrium::{SpeciesIndex, Start, System, Totals, Unsolved, elementary};

/// Width in pH over which the proton balance must change its sign.
const BRACKET: f64 = 1e-11;

/// Largest relative residual of charge and mass balances.
const LARGEST_RESIDUAL: f64 = 1e-9;

/// What was tested of a solution.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Certificate {
    /// Residual of the charge balance in mol/kg.
    pub charge_balance: f64,
    /// The same, relative to the sum of its terms.
    pub relative_charge_balance: f64,
    /// Largest residual of a mass balance, relative to its total.
    pub mass_balance: f64,
    /// Ionic strength of the species less the one computed with, relative.
    pub ionic_strength: f64,
    /// Width in pH of the bracket over which the balance changes its sign.
    pub ph_bracket: f64,
}

/// A solution with its certificate.
#[derive(Clone, Debug)]
pub struct Certified {
    found: Start,
    certificate: Certificate,
    evaluation: Evaluation,
}

/// Tests a solution; leaves `evaluation` at it.
pub(super) fn certify(
    system: &System,
    totals: &Totals,
    found: Start,
    evaluation: &mut Evaluation,
) -> Result<Certificate, Unsolved> {
    let half = 0.5 * BRACKET * LN_10;
    let balance_at = |x: f64, evaluation: &mut Evaluation| {
        evaluation
            .at(system, totals, x, found.ionic_strength)
            .then(|| evaluation.balance())
            .ok_or(Unsolved::MassBalance)
    };
    let below = balance_at(found.x - half, evaluation)?;
    let above = balance_at(found.x + half, evaluation)?;
    let here = balance_at(found.x, evaluation)?;
    let terms = evaluation.positive.value + evaluation.negative.value;
    let ionic = evaluation.ionic_strength.value;
    let certificate = Certificate {
        charge_balance: here,
        relative_charge_balance: (here / terms).abs(),
        mass_balance: mass_balance(system, totals, evaluation),
        ionic_strength: ((ionic - found.ionic_strength) / ionic).abs(),
        ph_bracket: BRACKET,
    };
    let valid = below < 0.0
        && above > 0.0
        && certificate.relative_charge_balance <= LARGEST_RESIDUAL
        && certificate.mass_balance <= LARGEST_RESIDUAL
        && certificate.ionic_strength <= LARGEST_RESIDUAL;
    if valid {
        Ok(certificate)
    } else {
        Err(Unsolved::NotCertified {
            charge_balance: certificate.relative_charge_balance,
            mass_balance: certificate.mass_balance,
            ionic_strength: certificate.ionic_strength,
        })
    }
}

/// Largest relative residual of the mass balances, formed anew from the molalities.
fn mass_balance(system: &System, totals: &Totals, evaluation: &Evaluation) -> f64 {
    let mut largest = 0.0_f64;
    for (k, (component, total)) in system.components.iter().zip(&totals.components).enumerate() {
        let total = total.to_f64();
        if component.held.is_some() || total == 0.0 {
            continue;
        }
        let own: f64 = evaluation
            .molality
            .get(component.own.clone())
            .unwrap_or_default()
            .iter()
            .sum();
        let bound: f64 = system
            .polynuclear
            .iter()
            .flat_map(|species| species.units.iter().map(move |unit| (species.row, *unit)))
            .filter(|(_, (place, _))| system.coupled.get(*place) == Some(&k))
            .map(|(row, (_, count))| count * evaluation.molality.get(row).copied().unwrap_or(0.0))
            .sum();
        largest = largest.max(((own + bound - total) / total).abs());
    }
    largest
}

impl Certified {
    pub(super) fn new(found: Start, certificate: Certificate, evaluation: Evaluation) -> Self {
        Self {
            found,
            certificate,
            evaluation,
        }
    }

    /// pH = -lg a(H+), dimensionless.
    pub fn ph(&self) -> f64 {
        -self.found.x / LN_10
    }

    /// p\[H\] = -lg of the molality of H+ in mol/kg, dimensionless.
    pub fn p_hydrogen(&self) -> f64 {
        -elementary::log10(self.evaluation.proton)
    }

    /// Ionic strength in mol/kg.
    pub fn ionic_strength(&self) -> f64 {
        self.found.ionic_strength
    }

    /// Molality of a species in mol/kg.
    pub fn molality(&self, species: SpeciesIndex) -> f64 {
        self.evaluation
            .molality
            .get(species.0)
            .copied()
            .unwrap_or(0.0)
    }

    /// Activity coefficient of a species on the molality scale, dimensionless.
    pub fn activity_coefficient(&self, species: SpeciesIndex) -> f64 {
        self.evaluation
            .gamma
            .get(species.0)
            .map_or(1.0, |gamma| elementary::exp(gamma.value))
    }

    /// Molality of H+ in mol/kg and its activity coefficient.
    pub fn proton(&self) -> (f64, f64) {
        (
            self.evaluation.proton,
            elementary::exp(self.evaluation.proton_gamma.value),
        )
    }

    /// Molality of OH- in mol/kg and its activity coefficient.
    pub fn hydroxide(&self) -> (f64, f64) {
        (
            self.evaluation.hydroxide,
            elementary::exp(self.evaluation.hydroxide_gamma.value),
        )
    }

    /// What was tested.
    pub fn certificate(&self) -> Certificate {
        self.certificate
    }

    /// From where a search of a solution near this one may start.
    pub fn start(&self) -> Start {
        self.found
    }

    /// Derivatives of pH at this solution of `system`.
    pub fn sensitivities(&self, system: &System) -> Sensitivities {
        sensitivity::of(system, &self.evaluation)
    }
}
