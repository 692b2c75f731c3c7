//! Shares of species and buffer capacity over pH, for a plot: at the ionic strength and activity coefficients of the solution itself.

use crate::equilibrium::{Solver, Total, Totals, elementary};
use crate::solution::answer::{Distribution, DistributionCurve, State};
use crate::solution::assembly::{Assembly, Solved, SpeciesRow};
use crate::substance::Component;

/// Points in tenths of pH, from 0 to 14.
const TENTHS: std::ops::RangeInclusive<u8> = 0..=140;

/// Half the pH difference over which the buffer capacity is taken.
const HALF_STEP: f64 = 0.01;

/// The distribution of the species of every ligand with more than one step; `None` where there is no such ligand.
pub(super) fn over_ph(assembly: &Assembly, solved: &Solved, state: &State) -> Option<Distribution> {
    let rows: Vec<&SpeciesRow> = assembly
        .species
        .iter()
        .filter(|row| has_steps(assembly, row.part))
        .collect();
    if rows.is_empty() {
        return None;
    }
    let totals = totals(assembly, solved);
    let mut solver = Solver::new(&assembly.system);
    let mut distribution = Distribution {
        ph: TENTHS.map(|tenth| f64::from(tenth) / 10.0).collect(),
        curves: rows.iter().map(|row| curve(assembly, row)).collect(),
        buffer_capacity: Vec::new(),
    };
    let held = assembly.parts.iter().any(|part| part.held);
    for ph in distribution.ph.clone() {
        let molality = solver
            .species_at(&totals, ph, state.ionic_strength)?
            .to_vec();
        for (row, curve) in rows.iter().zip(&mut distribution.curves) {
            curve.fractions.push(share(assembly, row, &molality));
        }
        if !held {
            let charge = |solver: &mut Solver<'_>, ph: f64| {
                let molality = solver.species_at(&totals, ph, state.ionic_strength)?;
                Some(charge_at(assembly, solved, molality, ph))
            };
            let above = charge(&mut solver, ph + HALF_STEP)?;
            let below = charge(&mut solver, ph - HALF_STEP)?;
            let capacity = (below - above) / (2.0 * HALF_STEP) * assembly.density;
            distribution.buffer_capacity.push(capacity);
        }
    }
    Some(distribution)
}

fn has_steps(assembly: &Assembly, part: usize) -> bool {
    assembly
        .parts
        .get(part)
        .is_some_and(|part| match &part.component {
            Component::Ligand(ligand) => ligand.steps.len() > 1,
            Component::Ion(_) => false,
        })
}

fn curve(assembly: &Assembly, row: &SpeciesRow) -> DistributionCurve {
    DistributionCurve {
        component: assembly
            .parts
            .get(row.part)
            .map(|part| part.component.name().to_owned())
            .unwrap_or_default(),
        species: row.name.clone(),
        fractions: Vec::new(),
    }
}

/// What the solution holds of each component, as its species add up to, in mol/kg.
fn totals(assembly: &Assembly, solved: &Solved) -> Totals {
    let mut totals = Totals::none(&assembly.system);
    for (place, part) in assembly.parts.iter().enumerate() {
        if !part.held {
            let molality = |row: &SpeciesRow| solved.certified.molality(row.index);
            totals.set(part.index, Total::from_f64(sum(assembly, place, molality)));
        }
    }
    totals
}

fn sum(assembly: &Assembly, part: usize, molality: impl Fn(&SpeciesRow) -> f64) -> f64 {
    assembly
        .species
        .iter()
        .filter(|row| row.part == part)
        .map(|row| f64::from(row.nuclearity) * molality(row))
        .sum()
}

fn at(molality: &[f64], row: &SpeciesRow) -> f64 {
    molality.get(row.index.place()).copied().unwrap_or(0.0)
}

fn share(assembly: &Assembly, row: &SpeciesRow, molality: &[f64]) -> f64 {
    let whole = sum(assembly, row.part, |row| at(molality, row));
    if whole > 0.0 {
        f64::from(row.nuclearity) * at(molality, row) / whole
    } else {
        0.0
    }
}

/// Charge of all species in mol/kg at a pH, the ions of water among them with the activity coefficients of the solution.
fn charge_at(assembly: &Assembly, solved: &Solved, molality: &[f64], ph: f64) -> f64 {
    let away = elementary::exp10(solved.certified.ph() - ph);
    let (proton, _) = solved.certified.proton();
    let (hydroxide, _) = solved.certified.hydroxide();
    let species: f64 = assembly
        .species
        .iter()
        .map(|row| f64::from(row.charge) * at(molality, row))
        .sum();
    species + proton * away - hydroxide / away
}

#[cfg(test)]
mod tests {
    use crate::solution::solve;
    use crate::solution::specimen::{molar, speciation};

    #[test]
    fn curves_meet_the_solution_and_add_up_to_one() {
        let contents = [
            ("sodium dihydrogen phosphate", "0.020"),
            ("disodium hydrogen phosphate", "0.030"),
        ];
        let answer = solve(&speciation(molar(&contents), "25")).unwrap();
        let distribution = answer.distribution.unwrap();
        assert_eq!(distribution.curves.len(), 4);
        for place in 0..distribution.ph.len() {
            let sum: f64 = distribution
                .curves
                .iter()
                .map(|curve| curve.fractions[place])
                .sum();
            assert!((sum - 1.0).abs() < 1e-12, "{sum}");
        }
        // The solution lies between two points; so does the share of each of its species, and its buffer capacity but for the change of
        // ionic strength, which the plot leaves out: 10 %.
        let after = distribution
            .ph
            .iter()
            .position(|ph| *ph > answer.state.ph)
            .unwrap();
        for curve in &distribution.curves {
            let mut species = answer.state.species.iter();
            let found = species.find(|one| one.name == curve.species).unwrap();
            let mut ends = [curve.fractions[after - 1], curve.fractions[after]];
            ends.sort_by(f64::total_cmp);
            let fraction = found.fraction.unwrap();
            assert!(ends[0] <= fraction && fraction <= ends[1], "{}", found.name);
        }
        let ratio = distribution.buffer_capacity[after] / answer.state.buffer_capacity;
        assert!((ratio - 1.0).abs() < 0.1, "{ratio}");
    }

    #[test]
    fn one_step_needs_no_plot() {
        let answer = solve(&speciation(molar(&[("acetic acid", "0.1")]), "25")).unwrap();
        assert!(answer.distribution.is_none());
    }
}
