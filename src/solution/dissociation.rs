//! The pK of a step at the temperature of the block and at zero ionic strength, with how it was got there.

use crate::equilibrium::{ActivityModel, Water, elementary::LN_10, pk_at, pk_from_terms};
use crate::quantity::Decimal;
use crate::substance::{Constant, EquationForm, Kind, Ligand, PkEquation};

/// How the pK of a step came to the temperature of the block.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Route {
    /// It was determined at this temperature.
    OwnTemperature,
    /// By a published equation inside its range.
    Equation,
    /// By a published equation beyond its range.
    EquationBeyondRange,
    /// By enthalpy, with or without heat capacity.
    Enthalpy,
    /// Not at all: nothing is known of its change with temperature.
    Unchanged,
}

/// The pK of one step as it is computed with.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct FoundPk {
    /// pK at the temperature of the block and zero ionic strength.
    pub(super) value: f64,
    /// How it came to the temperature.
    pub(super) route: Route,
    /// What was added to bring a conditional constant to zero ionic strength.
    pub(super) to_zero_ionic_strength: f64,
}

/// The pK of step `step` (from 0) of a ligand, in `water` under `model`.
pub(super) fn pk_of(
    ligand: &Ligand,
    step: usize,
    constant: &Constant,
    water: &Water,
    model: ActivityModel,
) -> FoundPk {
    let (at_temperature, route) = at_temperature(constant, water.temperature);
    let to_zero_ionic_strength = match &constant.kind {
        Kind::Conditional { ionic_strength, .. } => {
            extrapolation(ligand, step, ionic_strength.to_f64(), water, model)
        }
        Kind::Thermodynamic | Kind::Unstated => 0.0,
    };
    FoundPk {
        value: at_temperature + to_zero_ionic_strength,
        route,
        to_zero_ionic_strength,
    }
}

/// pK of a constant at a temperature in K, dimensionless, by its equation, its enthalpy, or unchanged.
///
/// An equation is shifted so that it passes through the constant's own value; the shift is at most the rounding of either.
pub(super) fn at_temperature(constant: &Constant, temperature: f64) -> (f64, Route) {
    let own = constant.temperature_c.to_f64() + 273.15;
    let pk = constant.pk.to_f64();
    if (temperature - own).abs() < 1e-9 {
        return (pk, Route::OwnTemperature);
    }
    let by_enthalpy = constant.thermal.as_ref().map(|thermal| {
        let heat_capacity = thermal.heat_capacity.map_or(0.0, Decimal::to_f64);
        let enthalpy = 1000.0 * thermal.enthalpy.to_f64();
        pk_at(temperature, pk, own, enthalpy, heat_capacity)
    });
    let Some(equation) = &constant.equation else {
        return by_enthalpy.map_or((pk, Route::Unchanged), |pk| (pk, Route::Enthalpy));
    };
    let shifted = evaluate(equation, temperature) + pk - evaluate(equation, own);
    let celsius = temperature - 273.15;
    let inside =
        (equation.from_c.to_f64() - 1e-9..=equation.to_c.to_f64() + 1e-9).contains(&celsius);
    match by_enthalpy {
        _ if inside => (shifted, Route::Equation),
        Some(pk) => (pk, Route::Enthalpy),
        None => (shifted, Route::EquationBeyondRange),
    }
}

/// What the model adds to a conditional pK to bring it to zero ionic strength: `-lg(γ(H⁺) γ(A)/γ(HA))` there.
///
/// The constant is taken as a quotient of concentrations. At its own ionic strength the model takes the same amount off again.
fn extrapolation(
    ligand: &Ligand,
    step: usize,
    ionic_strength: f64,
    water: &Water,
    model: ActivityModel,
) -> f64 {
    let size = |state: usize| ligand.ion_sizes.get(state).copied().flatten();
    let lg_gamma = |state: usize| {
        let charge = ligand.state_charge(state);
        model.lg_gamma(
            water,
            charge,
            size(state).map(Decimal::to_f64),
            ionic_strength,
        )
    };
    let proton = model.lg_gamma(water, 1, Some(0.9), ionic_strength);
    lg_gamma(step) - lg_gamma(step + 1) - proton
}

fn evaluate(equation: &PkEquation, t: f64) -> f64 {
    let c = |index: usize| {
        equation
            .coefficients
            .get(index)
            .map_or(0.0, |coefficient| coefficient.to_f64())
    };
    let terms = match equation.form {
        EquationForm::InverseConstantLogarithm => [c(1), c(0), c(2), 0.0, 0.0, 0.0],
        EquationForm::InverseConstantLinear => [c(1), c(0), 0.0, c(2), 0.0, 0.0],
        EquationForm::NaturalLogarithm => {
            let over = |value: f64| -value / LN_10;
            [over(c(0)), over(c(1)), over(c(2)), over(c(3)), 0.0, 0.0]
        }
        EquationForm::CommonLogarithm => [-c(0), -c(2), -c(3) / LN_10, -c(1), 0.0, -c(4)],
        EquationForm::Clegg => [-c(0), -c(4), -c(1), -c(3), -c(2), 0.0],
    };
    pk_from_terms(t, terms)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::substance::Catalogue;

    #[test]
    fn equations_of_the_library_give_their_own_value() {
        // Each equation against the pK printed beside it; 0.005 for the rounding of recalled coefficients.
        let mut seen = 0;
        for ligand in Catalogue::embedded().unwrap().ligands() {
            for step in &ligand.steps {
                let constant = &step.preferred;
                let Some(equation) = &constant.equation else {
                    continue;
                };
                let own = constant.temperature_c.to_f64() + 273.15;
                let difference = evaluate(equation, own) - constant.pk.to_f64();
                assert!(difference.abs() < 0.005, "{}: {difference}", ligand.name);
                seen += 1;
            }
        }
        assert!(seen > 3);
    }
}
