//! Nonlinear least squares of readings: what is moved, the residuals, and the covariance at the minimum.

use crate::equilibrium::Total;
use crate::solution::Unsolvable;
use crate::solution::burette::{Burette, Titrated};
use crate::solution::tape::VariableIndex;
use levenberg_marquardt::{LeastSquaresProblem, LevenbergMarquardt};
use nalgebra::storage::Owned;
use nalgebra::{DMatrix, DVector, Dyn};

/// What a fit moves.
#[derive(Clone, Debug)]
pub(super) enum Lever {
    /// A variable of the recipe by a factor; at factor 1 it stands for `at_one` in `unit`.
    Factor {
        /// The variable.
        index: VariableIndex,
        /// Its stated value in base units.
        stated: f64,
        /// What is told of it at factor 1.
        at_one: f64,
    },
    /// A variable of the recipe itself, never below zero.
    Value {
        /// The variable.
        index: VariableIndex,
    },
    /// A pK, by its place among the rows of the assembly.
    Pk {
        /// The place.
        row: usize,
    },
    /// An offset of the electrode in pH.
    Offset,
    /// The slope of the electrode in percent.
    Slope,
}

/// One quantity to be determined.
#[derive(Clone, Debug)]
pub(super) struct Parameter {
    /// What it is, for people.
    pub(super) quantity: String,
    /// Its unit.
    pub(super) unit: &'static str,
    /// What is moved.
    pub(super) lever: Lever,
    /// Where the search starts, in the lever's own scale.
    pub(super) start: f64,
    /// Step of a difference in that scale.
    pub(super) step: f64,
}

impl Parameter {
    /// What is told for a value in the lever's scale: the factor that turns one into the other.
    pub(super) fn told(&self) -> f64 {
        match self.lever {
            Lever::Factor { at_one, .. } => at_one,
            Lever::Value { .. } | Lever::Pk { .. } | Lever::Offset | Lever::Slope => 1.0,
        }
    }
}

/// Readings to be fitted: volumes in L and pH as read.
#[derive(Clone, Debug)]
pub(super) struct Series {
    pub(super) volumes: Vec<f64>,
    pub(super) readings: Vec<f64>,
}

/// What a fit found, in the levers' scales.
#[derive(Clone, Debug)]
pub(super) struct Minimum {
    pub(super) values: Vec<f64>,
    pub(super) residuals: Vec<f64>,
    /// Inverse of the normal matrix; times the residual variance it is the covariance.
    pub(super) inverse: DMatrix<f64>,
    /// Whether the search said that it converged.
    pub(super) converged: bool,
}

/// Searches the minimum by the method of Levenberg and Marquardt.
///
/// # Errors
/// [`Unsolvable::Fit`] where the readings do not determine the parameters.
pub(super) fn minimise(
    titrated: &Titrated,
    parameters: &[Parameter],
    series: &Series,
) -> Result<Minimum, Unsolvable> {
    let start = parameters.iter().map(|parameter| parameter.start);
    let problem = Problem {
        titrated,
        parameters,
        series,
        at: DVector::from_iterator(parameters.len(), start),
    };
    let (problem, report) = LevenbergMarquardt::new()
        .with_patience(200)
        .minimize(problem);
    let failed = |reason: &str| Unsolvable::Fit {
        reason: reason.to_owned(),
    };
    let residuals = problem
        .residuals()
        .ok_or_else(|| failed("the model has no solution at some reading"))?;
    let jacobian = problem
        .jacobian()
        .ok_or_else(|| failed("the model has no solution near the minimum"))?;
    let inverse = (jacobian.transpose() * &jacobian)
        .try_inverse()
        .filter(|inverse| inverse.iter().all(|entry| entry.is_finite()))
        .ok_or_else(|| failed("they do not determine everything that is asked; ask for less"))?;
    Ok(Minimum {
        values: problem.at.iter().copied().collect(),
        residuals: residuals.iter().copied().collect(),
        inverse,
        converged: report.termination.was_successful(),
    })
}

struct Problem<'a> {
    titrated: &'a Titrated,
    parameters: &'a [Parameter],
    series: &'a Series,
    at: DVector<f64>,
}

impl Problem<'_> {
    /// Reading less model, for values of the parameters.
    fn off(&self, at: &DVector<f64>) -> Option<DVector<f64>> {
        let assembly = &self.titrated.assembly;
        let mut values = assembly.stated();
        let mut pks: Vec<f64> = assembly.pks.iter().map(|row| row.found.value).collect();
        let (mut offset, mut slope) = (0.0, 100.0);
        for (parameter, value) in self.parameters.iter().zip(at.iter()) {
            match parameter.lever {
                Lever::Factor { index, stated, .. } => {
                    *values.get_mut(index.place())? = Total::from_f64(stated * value);
                }
                Lever::Value { index } => {
                    *values.get_mut(index.place())? = Total::from_f64(value.max(0.0));
                }
                Lever::Pk { row } => *pks.get_mut(row)? = *value,
                Lever::Offset => offset = *value,
                Lever::Slope => slope = *value,
            }
        }
        let place = |row: &crate::solution::assembly::PkRow| {
            let found = assembly
                .pks
                .iter()
                .position(|other| other.ligand.name == row.ligand.name && other.step == row.step);
            found.and_then(|place| pks.get(place)).copied()
        };
        let system = assembly.with_pks(|row| place(row).unwrap_or(row.found.value));
        let mut burette = Burette::over(self.titrated, &system, values);
        let mut off = Vec::with_capacity(self.series.volumes.len());
        for (volume, reading) in self.series.volumes.iter().zip(&self.series.readings) {
            let ph = burette.ph(*volume).ok()?;
            off.push(reading - (7.0 + (ph - 7.0) * slope / 100.0 + offset));
        }
        Some(DVector::from_vec(off))
    }
}

impl LeastSquaresProblem<f64, Dyn, Dyn> for Problem<'_> {
    type ResidualStorage = Owned<f64, Dyn>;
    type JacobianStorage = Owned<f64, Dyn, Dyn>;
    type ParameterStorage = Owned<f64, Dyn>;

    fn set_params(&mut self, at: &DVector<f64>) {
        self.at.copy_from(at);
    }

    fn params(&self) -> DVector<f64> {
        self.at.clone()
    }

    fn residuals(&self) -> Option<DVector<f64>> {
        self.off(&self.at)
    }

    fn jacobian(&self) -> Option<DMatrix<f64>> {
        let mut columns = Vec::new();
        for (place, parameter) in self.parameters.iter().enumerate() {
            let moved = |by: f64| {
                let mut at = self.at.clone();
                let value = at.get_mut(place)?;
                // A value that may not fall below zero is differenced upwards from there.
                if matches!(parameter.lever, Lever::Value { .. }) {
                    *value = value.max(parameter.step);
                }
                *value += by;
                self.off(&at)
            };
            let difference = moved(parameter.step)? - moved(-parameter.step)?;
            columns.push(difference / (2.0 * parameter.step));
        }
        Some(DMatrix::from_columns(&columns))
    }
}
