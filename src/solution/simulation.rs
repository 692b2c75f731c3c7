//! Seeded Monte Carlo propagation of distributions.
//!
//! Source: JCGM 101:2008, 7 and 7.7 (probabilistically symmetric coverage interval); recalled. Generator: ChaCha with 8 rounds; normal deviates by
//! the Box-Muller transformation over the program's own logarithm and cosine, so that one seed gives the same bytes everywhere.

use crate::equilibrium::elementary::{cos, ln};
use crate::equilibrium::{Solver, Totals};
use crate::quantity::Spread;
use crate::solution::Unsolvable;
use crate::solution::answer::Simulation;
use crate::solution::budget;
use crate::solution::solved::Solved;
use crate::solution::tableau::Tableau;
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{RngCore, SeedableRng};
use std::collections::BTreeMap;

/// Draws pH from the distributions of all inputs, constants and the model.
pub(super) fn run(solved: &Solved<'_>, draws: u32, seed: u64) -> Result<Simulation, Unsolvable> {
    let mut generator = Generator(ChaCha8Rng::seed_from_u64(seed));
    let contributions = budget::contributions(solved)?;
    // Temperature and model are added as shifts of the pH: they act through many quantities at once.
    let shift: f64 = contributions
        .iter()
        .filter(|c| c.input.is_none() && c.what == "activity model" || c.what == "temperature")
        .map(|c| c.sensitivity * c.standard * c.sensitivity * c.standard)
        .sum::<f64>()
        .sqrt();
    let mut tableau = solved.tableau.clone();
    let mut values = Vec::with_capacity(usize::try_from(draws).unwrap_or(0));
    for _ in 0..draws {
        let changes: BTreeMap<_, f64> = solved
            .doses
            .inputs
            .iter()
            .filter(|(_, facts)| facts.standard > 0.0)
            .map(|(id, facts)| (id, facts.standard * generator.deviate(facts.spread)))
            .collect();
        draw_constants(solved, &mut tableau, &mut generator);
        let mut totals = Totals::none(&tableau.system);
        for dose in &solved.doses.list {
            let factor: f64 = dose
                .effects
                .iter()
                .filter_map(|effect| Some(effect.factor(*changes.get(&effect.id)?)))
                .product();
            tableau.add(&mut totals, &dose.form, dose.molality * factor.max(0.0));
        }
        let (ph, _) = Solver::new(&tableau.system)
            .ph(&totals, Some(solved.solution.start()))
            .map_err(Unsolvable::Unsolved)?;
        values.push(ph + shift * generator.normal());
    }
    Ok(summary(values, draws, seed))
}

/// Draws the constants that have a published uncertainty and sets the stability constants that follow.
fn draw_constants(solved: &Solved<'_>, tableau: &mut Tableau, generator: &mut Generator) {
    for place in &solved.tableau.ligands {
        let drawn: Vec<f64> = place
            .ligand
            .steps
            .iter()
            .zip(&place.pk)
            .map(|(step, pk)| match step.preferred.uncertainty {
                Some(uncertainty) => pk + uncertainty.to_f64() * generator.normal(),
                None => *pk,
            })
            .collect();
        for (state, species) in place.species.iter().enumerate() {
            tableau
                .system
                .set_lg_beta(*species, drawn.iter().skip(state).sum());
        }
    }
}

fn summary(mut values: Vec<f64>, draws: u32, seed: u64) -> Simulation {
    values.sort_by(f64::total_cmp);
    let count = f64::from(draws);
    let mean = values.iter().sum::<f64>() / count;
    let variance = values
        .iter()
        .map(|value| (value - mean) * (value - mean))
        .sum::<f64>()
        / (count - 1.0);
    // The ends of the central 95 %: 2.5 % of the draws lie below and above.
    let tail = usize::try_from(u64::from(draws) * 25 / 1000).unwrap_or(0);
    let low = values.get(tail).copied().unwrap_or(mean);
    let high = values
        .get(values.len().saturating_sub(tail + 1))
        .copied()
        .unwrap_or(mean);
    Simulation {
        draws,
        seed,
        mean,
        standard: variance.sqrt(),
        interval: (low, high),
    }
}

struct Generator(ChaCha8Rng);

impl Generator {
    /// A uniform deviate in (0, 1), of 53 bits.
    fn uniform(&mut self) -> f64 {
        let bits = self.0.next_u64() >> 11;
        let [high, low] = [bits >> 32, bits & 0xffff_ffff]
            .map(|half| f64::from(u32::try_from(half).unwrap_or(0)));
        (high * 4_294_967_296.0 + low + 0.5) / 9_007_199_254_740_992.0
    }

    /// A standard normal deviate.
    fn normal(&mut self) -> f64 {
        let (radius, angle) = (self.uniform(), self.uniform());
        (-2.0 * ln(radius)).sqrt() * cos(std::f64::consts::TAU * angle)
    }

    /// A deviate of unit standard deviation from the distribution that a statement means.
    fn deviate(&mut self, spread: Option<Spread>) -> f64 {
        match spread {
            Some(Spread::Rectangular) => (2.0 * self.uniform() - 1.0) * 3.0_f64.sqrt(),
            Some(Spread::Triangular) => (self.uniform() + self.uniform() - 1.0) * 6.0_f64.sqrt(),
            _ => self.normal(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn deviates_have_unit_variance() {
        let mut generator = Generator(ChaCha8Rng::seed_from_u64(3));
        for spread in [None, Some(Spread::Rectangular), Some(Spread::Triangular)] {
            let values: Vec<f64> = (0..40_000).map(|_| generator.deviate(spread)).collect();
            let mean = values.iter().sum::<f64>() / 40_000.0;
            let variance = values.iter().map(|v| (v - mean) * (v - mean)).sum::<f64>() / 40_000.0;
            // Four standard errors: 0.005 of the mean, at most 0.0071 of the variance, at 40,000 draws.
            assert!(
                mean.abs() < 0.02 && (variance - 1.0).abs() < 0.03,
                "{spread:?} {mean} {variance}"
            );
        }
    }

    #[test]
    fn one_seed_gives_the_same_bits() {
        let mut generator = Generator(ChaCha8Rng::seed_from_u64(1));
        let first = generator.normal();
        let mut again = Generator(ChaCha8Rng::seed_from_u64(1));
        assert_eq!(first.to_bits(), again.normal().to_bits());
    }
}
