//! Propagation of distributions by a seeded Monte Carlo simulation (JCGM 101), the same bytes for one seed on every platform.
//!
//! The generator is `ChaCha` with 12 rounds, its key the seed in little-endian bytes followed by zeros. Normal deviates come from pairs of
//! uniform ones by the Box-Muller transform (1958, Ann. Math. Stat. 29, 610; recalled); uniform ones are the upper 53 bits of a draw.

use crate::equilibrium::elementary::{cos, ln};
use crate::equilibrium::{Solver, System, Total, Totals};
use crate::quantity::Decimal;
use crate::solution::Unsolvable;
use crate::solution::answer::Simulation;
use crate::solution::assembly::{Assembly, Solved};
use crate::solution::recipe::Distribution;
use crate::solution::tape::Worked;
use rand_chacha::ChaCha12Rng;
use rand_chacha::rand_core::{RngCore, SeedableRng};

/// Uncertainties that do not come from the recipe: each adds to the pH itself.
#[derive(Clone, Copy, Debug)]
pub(super) struct Added {
    /// Standard uncertainty in pH.
    pub(super) standard: f64,
    /// What it is drawn from.
    pub(super) distribution: Distribution,
}

/// Random deviates.
#[derive(Debug)]
pub(super) struct Deviates {
    generator: ChaCha12Rng,
}

impl Deviates {
    /// From a seed.
    pub(super) fn of(seed: u64) -> Self {
        let mut key = [0_u8; 32];
        for (place, byte) in key.iter_mut().zip(seed.to_le_bytes()) {
            *place = byte;
        }
        Self {
            generator: ChaCha12Rng::from_seed(key),
        }
    }

    /// Uniform in (0, 1]; dimensionless.
    fn uniform(&mut self) -> f64 {
        let bits = self.generator.next_u64() >> 11;
        let high = u32::try_from(bits >> 32).unwrap_or(0);
        let low = u32::try_from(bits & 0xffff_ffff).unwrap_or(0);
        (f64::from(high) * 4_294_967_296.0 + f64::from(low) + 1.0) / 9_007_199_254_740_992.0
    }

    /// Standard normal; dimensionless.
    fn normal(&mut self) -> f64 {
        let radius = (-2.0 * ln(self.uniform())).sqrt();
        radius * cos(2.0 * std::f64::consts::PI * self.uniform())
    }

    /// A deviate of mean 0 whose standard uncertainty as stated is 1; dimensionless.
    pub(super) fn standard(&mut self, distribution: Distribution) -> f64 {
        match distribution {
            Distribution::Normal => self.normal(),
            Distribution::Rectangular => (2.0 * self.uniform() - 1.0) * 3.0_f64.sqrt(),
            Distribution::Triangular => (self.uniform() - self.uniform()) * 6.0_f64.sqrt(),
            Distribution::Student(degrees) => {
                let normal = self.normal();
                normal / self.chi_squared_by(degrees).sqrt()
            }
        }
    }

    /// Chi-squared of so many degrees of freedom, divided by them; beyond 100 it is 1 to within what a budget can see.
    ///
    /// A sum of squares of normal deviates; a fraction of a degree counts by chance, which keeps the mean.
    fn chi_squared_by(&mut self, degrees: f64) -> f64 {
        if degrees > 100.0 {
            return 1.0;
        }
        let wanted = degrees.max(1.0);
        let mut left = wanted;
        let mut sum = 0.0;
        while left >= 1.0 || (left > 1e-9 && self.uniform() <= left) {
            let normal = self.normal();
            sum += normal * normal;
            left -= 1.0;
        }
        (sum / wanted).max(f64::MIN_POSITIVE)
    }
}

/// Draws every uncertain input and constant, solves each draw, and tells mean, standard deviation and the probabilistically symmetric 95 %
/// coverage interval.
///
/// # Errors
/// [`Unsolvable`] where a draw has no certified solution.
pub(super) fn simulate(
    assembly: &Assembly,
    solved: &Solved,
    added: &[Added],
    draws: u32,
    seed: u64,
) -> Result<Simulation, Unsolvable> {
    let mut deviates = Deviates::of(seed);
    let stated: Vec<f64> = assembly
        .stated()
        .iter()
        .map(|value| value.to_f64())
        .collect();
    let pk_standards: Vec<f64> = assembly.pks.iter().map(Assembly::pk_standard).collect();
    let drawn_constants = pk_standards.iter().any(|standard| *standard > 0.0);
    let mut system = assembly.system.clone();
    let fixed = assembly.system.clone();
    let mut warm = Solver::new(&fixed);
    let mut draw = Draw::of(assembly, stated);
    let start = Some(solved.certified.start());
    let mut values = Vec::with_capacity(usize::try_from(draws).unwrap_or(0));
    for _ in 0..draws {
        draw.inputs(assembly, &mut deviates);
        let ph = if drawn_constants {
            Draw::constants(assembly, &pk_standards, &mut deviates, &mut system);
            Solver::new(&system).ph(&draw.totals, start)?.0
        } else {
            warm.ph(&draw.totals, start)?.0
        };
        let shift: f64 = added
            .iter()
            .map(|added| added.standard * deviates.standard(added.distribution))
            .sum();
        values.push(ph + shift);
    }
    summary(values, draws, seed).ok_or(Unsolvable::Simulation { draws })
}

/// The room of one draw.
struct Draw {
    stated: Vec<f64>,
    values: Vec<f64>,
    worked: Worked<f64>,
    totals: Totals,
}

impl Draw {
    fn of(assembly: &Assembly, stated: Vec<f64>) -> Self {
        Self {
            values: stated.clone(),
            stated,
            worked: Worked::default(),
            totals: Totals::none(&assembly.system),
        }
    }

    fn inputs(&mut self, assembly: &Assembly, deviates: &mut Deviates) {
        let recipe = &assembly.recipe;
        let entries = self
            .values
            .iter_mut()
            .zip(&self.stated)
            .zip(&recipe.variables);
        for ((value, stated), variable) in entries {
            *value = *stated;
            if variable.standard > 0.0 {
                *value += variable.standard * deviates.standard(variable.distribution);
            }
        }
        recipe.tape.draw(&self.values, &mut self.worked);
        for part in &assembly.parts {
            if let Some(node) = part.concentration {
                // A draw below zero is taken as zero.
                let total = (self.worked.at(node) / assembly.density).max(0.0);
                self.totals.set(part.index, Total::from_f64(total));
            }
        }
        let protons = self.worked.at(recipe.protons) / assembly.density;
        self.totals.set_protons(Total::from_f64(protons));
    }

    fn constants(
        assembly: &Assembly,
        standards: &[f64],
        deviates: &mut Deviates,
        system: &mut System,
    ) {
        for pk in &assembly.pks {
            for (species, _) in &pk.effects {
                system.set_lg_beta(*species, assembly.system.lg_beta(*species));
            }
        }
        for (pk, standard) in assembly.pks.iter().zip(standards) {
            if *standard > 0.0 {
                let shift = standard * deviates.standard(Distribution::Normal);
                for (species, count) in &pk.effects {
                    system.set_lg_beta(*species, system.lg_beta(*species) + count * shift);
                }
            }
        }
    }
}

fn summary(mut values: Vec<f64>, draws: u32, seed: u64) -> Option<Simulation> {
    if draws < 2 {
        return None;
    }
    let count = f64::from(draws);
    let mean = values.iter().sum::<f64>() / count;
    let squares: f64 = values
        .iter()
        .map(|value| (value - mean) * (value - mean))
        .sum();
    values.sort_by(f64::total_cmp);
    // JCGM 101, 7.7: q is the whole number nearest to 0.95 M, and the lower end is the r-th value with r = (M - q)/2.
    let tail = usize::try_from(u64::from(draws) / 40).unwrap_or(0);
    let lower = values.get(tail).copied()?;
    let upper = values.iter().rev().nth(tail).copied()?;
    Some(Simulation {
        draws,
        seed,
        mean,
        standard: (squares / (count - 1.0)).sqrt(),
        interval: (lower, upper),
    })
}

impl Assembly {
    /// Standard uncertainty of a pK as its source states it, 0 where it states none; dimensionless.
    pub(super) fn pk_standard(pk: &crate::solution::assembly::PkRow) -> f64 {
        pk.ligand
            .steps
            .get(pk.step)
            .and_then(|step| step.preferred.uncertainty)
            .map_or(0.0, Decimal::to_f64)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::problem::UncertaintyMode;
    use crate::solution::solve;
    use crate::solution::specimen::{buffer_with_uncertainty, speciation, stated};

    #[test]
    fn sums_of_the_supplement() {
        // JCGM 101:2008, 9.2.2 and 9.2.3, recalled: four standard normal quantities, 95 % at ±3.92; four rectangular ones of unit variance, ±3.88.
        // Tolerance 0.06: sampling error of a 97.5 % quantile of 1e5 draws with standard deviation 2 is about 0.017, three and a half times that.
        for (distribution, half_width) in [
            (Distribution::Normal, 3.92),
            (Distribution::Rectangular, 3.88),
        ] {
            let mut deviates = Deviates::of(7);
            let values = (0..100_000)
                .map(|_| (0..4).map(|_| deviates.standard(distribution)).sum())
                .collect();
            let found = summary(values, 100_000, 7).unwrap();
            assert!((found.standard - 2.0).abs() < 0.02, "{found:?}");
            assert!((found.interval.1 - half_width).abs() < 0.06, "{found:?}");
            assert!((found.interval.0 + half_width).abs() < 0.06, "{found:?}");
        }
    }

    #[test]
    fn budget_and_simulation_agree() {
        // Nearly linear in all inputs; 2 %: four times the sampling error 1/√(2 × 20 000) of a standard deviation.
        let mut statement = speciation(buffer_with_uncertainty(), "25");
        statement.conditions.uncertainty = stated(UncertaintyMode::Simulation {
            draws: 20_000,
            seed: 1,
        });
        let answer = solve(&statement).unwrap();
        let (budget, simulation) = (answer.budget.unwrap(), answer.simulation.unwrap());
        let ratio = simulation.standard / budget.standard;
        assert!((ratio - 1.0).abs() < 0.02, "{ratio}");
        assert!((simulation.mean - answer.state.ph).abs() < 0.001);
        let again = solve(&statement).unwrap().simulation.unwrap();
        assert_eq!(again.mean.to_bits(), simulation.mean.to_bits());
    }
}
