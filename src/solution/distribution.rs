//! Shares of the species over pH, at the ionic strength of the solution.

use crate::equilibrium::Solver;
use crate::solution::answer::{Distribution, DistributionCurve};
use crate::solution::assembly::{Assembly, Solved};
use crate::substance::Component;

/// Points for each unit of pH.
const POINTS_PER_UNIT: u32 = 20;

/// The distribution of every ligand that has more than one step, pH 0 to 14; `None` where there is none.
pub(super) fn of(assembly: &Assembly, solved: &Solved) -> Option<Distribution> {
    let several = |part: usize| match assembly.parts.get(part).map(|part| &part.component) {
        Some(Component::Ligand(ligand)) => ligand.steps.len() > 1,
        _ => false,
    };
    let shown: Vec<_> = assembly
        .species
        .iter()
        .filter(|row| row.nuclearity == 1 && several(row.part))
        .filter(|row| assembly.parts.get(row.part).is_some_and(|part| !part.held))
        .collect();
    if shown.is_empty() {
        return None;
    }
    let totals = assembly.totals(&solved.worked);
    let mut solver = Solver::new(&assembly.system);
    let ph: Vec<f64> = (0..=14 * POINTS_PER_UNIT)
        .map(|point| f64::from(point) / f64::from(POINTS_PER_UNIT))
        .collect();
    let mut curves: Vec<DistributionCurve> = shown
        .iter()
        .map(|row| DistributionCurve {
            component: assembly
                .parts
                .get(row.part)
                .map_or_else(String::new, |part| part.component.name().to_owned()),
            species: row.name.clone(),
            fractions: Vec::with_capacity(ph.len()),
        })
        .collect();
    for value in &ph {
        let molality = solver.species_at(&totals, *value, solved.certified.ionic_strength())?;
        for (row, curve) in shown.iter().zip(&mut curves) {
            let of_part: f64 = assembly
                .species
                .iter()
                .filter(|other| other.part == row.part)
                .filter_map(|other| {
                    Some(molality.get(other.index.place())? * f64::from(other.nuclearity))
                })
                .sum();
            let own = molality.get(row.index.place()).copied().unwrap_or(0.0);
            curve
                .fractions
                .push(if of_part > 0.0 { own / of_part } else { 0.0 });
        }
    }
    Some(Distribution {
        ph,
        curves,
        buffer_capacity: Vec::new(),
    })
}
