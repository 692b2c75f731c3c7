//! The one pH and ionic strength at which protons balance.
//!
//! At fixed activity coefficients the proton balance rises strictly with ln a(H+), whatever the tableau, so a bracket is always valid. Newton's
//! method runs on ln(P/N), P and N the sums of the positive and negative terms; first in ln a(H+) alone inside a bracket, then in ln a(H+) and
//! ionic strength together. Where that does not settle, ionic strength is bracketed too and nothing can cycle.

use crate::equilibrium::certificate::{self, Certified};
use crate::equilibrium::elementary::{LN_10, ln};
use crate::equilibrium::evaluation::Evaluation;
use crate::equilibrium::{System, Totals};

/// Lowest and highest x = ln a(H+) that are searched: pH 25 to -8.
const LOWEST_X: f64 = -25.0 * LN_10;
const HIGHEST_X: f64 = 8.0 * LN_10;

/// Steps of the coupled Newton iteration before the safeguard takes over.
const MOST_COUPLED_STEPS: usize = 30;

/// Evaluations of a bracketed search; bisection alone needs about 60.
const MOST_BRACKETED: usize = 200;

/// Newton's method is quadratic: after a step of this relative size the next would be below rounding.
const LAST_STEP: f64 = 1e-8;

/// A solution near which the next search may start.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Start {
    /// x = ln a(H+).
    pub(super) x: f64,
    /// Ionic strength in mol/kg.
    pub(super) ionic_strength: f64,
}

/// Why there is no solution.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Unsolved {
    /// A total of a component is negative or not finite.
    WrongTotal {
        /// The component's place, from 0.
        component: usize,
    },
    /// The proton balance does not change its sign between pH -8 and 25.
    NoRoot,
    /// The iteration did not settle.
    NotSettled,
    /// The mass balances of polynuclear species were not solved.
    MassBalance,
    /// The solution found does not pass its certificate.
    NotCertified {
        /// Residual of the charge balance, relative to its terms.
        charge_balance: f64,
        /// Largest residual of a mass balance, relative to its total.
        mass_balance: f64,
        /// Residual of the ionic strength, relative.
        ionic_strength: f64,
    },
}

impl std::fmt::Display for Unsolved {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Self::WrongTotal { component } => write!(
                formatter,
                "the total of component {component} is negative or not finite"
            ),
            Self::NoRoot => write!(formatter, "no pH between -8 and 25 balances the charges"),
            Self::NotSettled => write!(
                formatter,
                "the iteration on pH and ionic strength did not settle"
            ),
            Self::MassBalance => write!(
                formatter,
                "the mass balances of polynuclear species were not solved"
            ),
            Self::NotCertified {
                charge_balance,
                mass_balance,
                ionic_strength,
            } => write!(
                formatter,
                "the solution does not pass its certificate (charge balance {charge_balance:e}, mass balance {mass_balance:e}, ionic \
                 strength {ionic_strength:e})"
            ),
        }
    }
}

impl std::error::Error for Unsolved {}

/// Solves one system again and again; its room is reused, so that a search allocates nothing.
#[derive(Clone, Debug)]
pub struct Solver<'system> {
    system: &'system System,
    evaluation: Evaluation,
}

impl<'system> Solver<'system> {
    /// A solver for a system.
    pub fn new(system: &'system System) -> Self {
        Self {
            system,
            evaluation: Evaluation::new(system),
        }
    }

    /// The certified solution for totals in mol/kg.
    ///
    /// # Errors
    /// [`Unsolved`] says which condition failed; without a valid certificate there is no solution.
    pub fn solve(&mut self, totals: &Totals, start: Option<Start>) -> Result<Certified, Unsolved> {
        let found = self.search(totals, start)?;
        let certificate = certificate::certify(self.system, totals, found, &mut self.evaluation)?;
        Ok(Certified::new(found, certificate, self.evaluation.clone()))
    }

    /// pH and ionic strength only, certified all the same; allocates nothing where no polynuclear species are present.
    ///
    /// # Errors
    /// As [`Solver::solve`].
    pub fn ph(&mut self, totals: &Totals, start: Option<Start>) -> Result<(f64, Start), Unsolved> {
        let found = self.search(totals, start)?;
        certificate::certify(self.system, totals, found, &mut self.evaluation)?;
        Ok((-found.x / LN_10, found))
    }

    /// Molality of each species in mol/kg at a given pH and ionic strength in mol/kg, for totals of components; protons need not balance.
    pub fn species_at(&mut self, totals: &Totals, ph: f64, ionic_strength: f64) -> Option<&[f64]> {
        self.evaluation
            .at(self.system, totals, -ph * LN_10, ionic_strength)
            .then_some(self.evaluation.molality.as_slice())
    }

    /// Proton balance in mol/kg at a given pH, with the ionic strength in mol/kg that goes with it: what must be added of strong acid (positive)
    /// or base (negative) beyond the totals to reach that pH, the counter-ion of that addition not reckoned with.
    ///
    /// # Errors
    /// [`Unsolved::NotSettled`] or [`Unsolved::MassBalance`].
    pub fn imbalance(&mut self, totals: &Totals, ph: f64) -> Result<(f64, f64), Unsolved> {
        let x = -ph * LN_10;
        let mut ionic = 0.1;
        for _ in 0..MOST_BRACKETED {
            self.evaluate(totals, x, ionic)?;
            let found = self.evaluation.ionic_strength;
            let step = (found.value - ionic) / (1.0 - found.by_i).max(0.1);
            let next = (ionic + step).max(ionic / 10.0);
            if (next - ionic).abs() <= 1e-13 * next {
                return Ok((self.evaluation.balance(), next));
            }
            ionic = next;
        }
        Err(Unsolved::NotSettled)
    }

    fn search(&mut self, totals: &Totals, start: Option<Start>) -> Result<Start, Unsolved> {
        for (component, total) in totals.components.iter().enumerate() {
            let total = total.to_f64();
            if !(total >= 0.0 && total.is_finite()) {
                return Err(Unsolved::WrongTotal { component });
            }
        }
        let start = match start {
            Some(start) => start,
            None => self.cold_start(totals)?,
        };
        match self.coupled_newton(totals, start)? {
            Some(found) => Ok(found),
            None => self.bracketed(totals),
        }
    }

    fn evaluate(&mut self, totals: &Totals, x: f64, ionic_strength: f64) -> Result<(), Unsolved> {
        if self.evaluation.at(self.system, totals, x, ionic_strength) {
            Ok(())
        } else {
            Err(Unsolved::MassBalance)
        }
    }

    /// A pH good to about 0.1 at a rough ionic strength.
    fn cold_start(&mut self, totals: &Totals) -> Result<Start, Unsolved> {
        self.evaluate(totals, -7.0 * LN_10, 0.01)?;
        let ionic = self.evaluation.ionic_strength.value.clamp(1e-7, 2.0);
        let x = self.root_at(totals, -7.0 * LN_10, ionic, 0.3)?;
        Ok(Start {
            x,
            ionic_strength: self.evaluation.ionic_strength.value.clamp(1e-9, 4.0),
        })
    }

    /// ln(P/N) and its partial derivatives at the last evaluation.
    fn logarithm(&self) -> (f64, f64, f64) {
        let (p, n) = (&self.evaluation.positive, &self.evaluation.negative);
        (
            ln(p.value / n.value),
            p.by_x / p.value - n.by_x / n.value,
            p.by_i / p.value - n.by_i / n.value,
        )
    }

    /// The root in x at fixed ionic strength, to `tolerance` in x.
    fn root_at(
        &mut self,
        totals: &Totals,
        start: f64,
        ionic_strength: f64,
        tolerance: f64,
    ) -> Result<f64, Unsolved> {
        let (mut low, mut high) = (LOWEST_X, HIGHEST_X);
        let mut tested = (false, false);
        let mut x = start.clamp(low, high);
        for _ in 0..MOST_BRACKETED {
            self.evaluate(totals, x, ionic_strength)?;
            let (value, slope, _) = self.logarithm();
            if value == 0.0 {
                return Ok(x);
            }
            if value > 0.0 {
                high = x;
                tested.1 = true;
            } else {
                low = x;
                tested.0 = true;
            }
            let newton = x - value / slope;
            let step = newton - x;
            let inside = newton > low && newton < high;
            if inside && step.abs() <= tolerance {
                return Ok(newton);
            }
            if high - low <= tolerance.min(1e-13) * x.abs().max(1.0) {
                return if tested == (true, true) {
                    Ok(x)
                } else {
                    Err(Unsolved::NoRoot)
                };
            }
            x = if inside { newton } else { 0.5 * (low + high) };
        }
        Err(Unsolved::NotSettled)
    }

    /// Newton in x and ionic strength together; `None` where it does not settle.
    fn coupled_newton(&mut self, totals: &Totals, start: Start) -> Result<Option<Start>, Unsolved> {
        let Start {
            mut x,
            mut ionic_strength,
        } = start;
        for _ in 0..MOST_COUPLED_STEPS {
            if !(LOWEST_X..=HIGHEST_X).contains(&x) || !ionic_strength.is_finite() {
                return Ok(None);
            }
            self.evaluate(totals, x, ionic_strength)?;
            let (value, by_x, by_i) = self.logarithm();
            let found = self.evaluation.ionic_strength;
            let rest = ionic_strength - found.value;
            let (down_x, down_i) = (-found.by_x, 1.0 - found.by_i);
            let determinant = by_x * down_i - by_i * down_x;
            let step_x = -(value * down_i - rest * by_i) / determinant;
            let step_i = -(by_x * rest - down_x * value) / determinant;
            if !(step_x.is_finite() && step_i.is_finite()) {
                return Ok(None);
            }
            let small = step_x.abs() <= LAST_STEP && step_i.abs() <= LAST_STEP * ionic_strength;
            x += step_x.clamp(-6.0, 6.0);
            ionic_strength = (ionic_strength + step_i)
                .clamp(ionic_strength / 10.0, ionic_strength * 10.0 + 0.01);
            if small {
                return Ok(Some(Start { x, ionic_strength }));
            }
        }
        Ok(None)
    }

    /// Ionic strength bracketed outside, x bracketed inside.
    fn bracketed(&mut self, totals: &Totals) -> Result<Start, Unsolved> {
        let mut x = -7.0 * LN_10;
        let (mut low, mut high) = (0.0, 1.0);
        // The excess of the species' ionic strength over the assumed one is positive at zero; find where it is negative.
        for _ in 0..MOST_BRACKETED {
            x = self.root_at(totals, x, high, 1e-13)?;
            self.evaluate(totals, x, high)?;
            if self.evaluation.ionic_strength.value <= high {
                break;
            }
            low = high;
            high *= 2.0;
        }
        for _ in 0..MOST_BRACKETED {
            let middle = if low > 0.0 && high / low > 4.0 {
                (low * high).sqrt()
            } else {
                0.5 * (low + high)
            };
            x = self.root_at(totals, x, middle, 1e-13)?;
            self.evaluate(totals, x, middle)?;
            if self.evaluation.ionic_strength.value > middle {
                low = middle;
            } else {
                high = middle;
            }
            if high - low <= 1e-15 * high || high < 1e-12 {
                let start = Start {
                    x,
                    ionic_strength: 0.5 * (low + high),
                };
                return Ok(self.coupled_newton(totals, start)?.unwrap_or(start));
            }
        }
        Err(Unsolved::NotSettled)
    }
}
