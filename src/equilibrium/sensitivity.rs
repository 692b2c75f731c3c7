//! Derivatives of pH by the implicit function theorem, from the same moments as the solution.

use crate::equilibrium::System;
use crate::equilibrium::elementary::LN_10;
use crate::equilibrium::evaluation::Evaluation;

/// Derivatives of pH with respect to everything that it depends on, the ionic strength following along.
#[derive(Clone, Debug, PartialEq)]
pub struct Sensitivities {
    /// By the total of each component, in kg/mol, protons held.
    pub by_component: Vec<f64>,
    /// By the proton total, in kg/mol.
    pub by_protons: f64,
    /// By lg of the stability constant of each species, dimensionless.
    pub by_lg_beta: Vec<f64>,
    /// By pKw, dimensionless.
    pub by_pkw: f64,
    /// By ln of the Debye-Hueckel coefficient A, dimensionless.
    pub by_ln_a: f64,
    /// Buffer capacity in mol/kg per unit of pH: strong base added with an inert monovalent counter-ion, by change of pH.
    pub buffer_capacity: f64,
}

/// The change of pH that a change of the proton balance and of the ionic strength, both at fixed pH and ionic strength, brings about.
#[derive(Clone, Copy, Debug)]
struct Jacobian {
    balance_by_x: f64,
    balance_by_i: f64,
    ionic_by_x: f64,
    ionic_by_i: f64,
}

impl Jacobian {
    /// Change of pH for a change of the balance and of the ionic strength in mol/kg.
    fn ph(self, balance: f64, ionic: f64) -> f64 {
        let rest = 1.0 - self.ionic_by_i;
        let determinant = self.balance_by_x * rest + self.balance_by_i * self.ionic_by_x;
        (balance * rest + self.balance_by_i * ionic) / determinant / LN_10
    }
}

/// The sensitivities at an evaluation that solves `system`.
pub(super) fn of(system: &System, evaluation: &Evaluation) -> Sensitivities {
    let jacobian = Jacobian {
        balance_by_x: evaluation.positive.by_x - evaluation.negative.by_x,
        balance_by_i: evaluation.positive.by_i - evaluation.negative.by_i,
        ionic_by_x: evaluation.ionic_strength.by_x,
        ionic_by_i: evaluation.ionic_strength.by_i,
    };
    let none = |_: usize| 0.0;
    let by_component = (0..system.components.len())
        .map(|k| {
            let (balance, ionic) = evaluation.response(system, none, Some(k));
            jacobian.ph(balance, ionic)
        })
        .collect();
    let by_lg_beta = (0..system.rows.len())
        .map(|row| {
            let (balance, ionic) =
                evaluation.response(system, |s| if s == row { LN_10 } else { 0.0 }, None);
            jacobian.ph(balance, ionic)
        })
        .collect();
    let hydroxide = evaluation.hydroxide * LN_10;
    let screening = |s: usize| -evaluation.gamma.get(s).map_or(0.0, |gamma| gamma.value);
    let (mut balance, mut ionic) = evaluation.response(system, screening, None);
    let proton = -evaluation.proton * evaluation.proton_gamma.value;
    let base = -evaluation.hydroxide * evaluation.hydroxide_gamma.value;
    balance += proton - base;
    ionic += 0.5 * (proton + base);
    Sensitivities {
        by_component,
        by_protons: jacobian.ph(-1.0, 0.0),
        by_lg_beta,
        by_pkw: jacobian.ph(hydroxide, -0.5 * hydroxide),
        by_ln_a: jacobian.ph(balance, ionic),
        buffer_capacity: 1.0 / jacobian.ph(1.0, 0.5),
    }
}
