//! The state of a solved solution, with names and amount concentrations.

use crate::equilibrium::{Certified, Totals};
use crate::solution::answer::{ComponentTotal, Dissociation, SpeciesState, State};
use crate::solution::tableau::{LigandPlace, Tableau};

/// The state that a certified solution of a tableau is.
pub(super) fn of(tableau: &Tableau, totals: &Totals, solution: &Certified) -> State {
    let density = tableau.density;
    let mut species = water_ions(solution, density);
    let mut dissociation = Vec::new();
    let mut component_totals = Vec::new();
    for place in &tableau.ligands {
        let molalities: Vec<f64> = place
            .species
            .iter()
            .map(|index| solution.molality(*index))
            .collect();
        let sum: f64 = molalities.iter().sum();
        species.extend(ligand_states(place, solution, &molalities, sum, density));
        dissociation.extend(steps(place, &molalities, sum));
        component_totals.push(ComponentTotal {
            component: place.ligand.name.clone(),
            molality: sum,
            concentration: sum * density,
        });
    }
    for place in &tableau.ions {
        let molality = totals.of(place.component).to_f64();
        species.push(SpeciesState {
            name: place.ion.symbol.clone(),
            component: Some(place.ion.name.clone()),
            nuclearity: 1,
            protons: 0,
            charge: place.ion.charge,
            molality,
            concentration: molality * density,
            fraction: None,
            activity_coefficient: solution.activity_coefficient(place.species),
        });
        component_totals.push(ComponentTotal {
            component: place.ion.name.clone(),
            molality,
            concentration: molality * density,
        });
    }
    State {
        ph: solution.ph(),
        p_hydrogen: solution.p_hydrogen(),
        ionic_strength: solution.ionic_strength(),
        species,
        dissociation,
        totals: component_totals,
        buffer_capacity: solution.sensitivities(&tableau.system).buffer_capacity * density,
        certificate: solution.certificate(),
    }
}

fn water_ions(solution: &Certified, density: f64) -> Vec<SpeciesState> {
    [
        ("H⁺", 1, solution.proton()),
        ("OH⁻", -1, solution.hydroxide()),
    ]
    .into_iter()
    .map(
        |(name, charge, (molality, activity_coefficient))| SpeciesState {
            name: name.to_owned(),
            component: None,
            nuclearity: 1,
            protons: charge,
            charge,
            molality,
            concentration: molality * density,
            fraction: None,
            activity_coefficient,
        },
    )
    .collect()
}

fn ligand_states(
    place: &LigandPlace,
    solution: &Certified,
    molalities: &[f64],
    sum: f64,
    density: f64,
) -> Vec<SpeciesState> {
    let ligand = &place.ligand;
    ligand
        .states
        .iter()
        .zip(&place.species)
        .zip(molalities)
        .enumerate()
        .map(|(state, ((name, index), molality))| SpeciesState {
            name: name.clone(),
            component: Some(ligand.name.clone()),
            nuclearity: 1,
            protons: i8::try_from(ligand.state_protons(state)).unwrap_or(i8::MAX),
            charge: ligand.state_charge(state),
            molality: *molality,
            concentration: molality * density,
            fraction: (sum > 0.0).then(|| molality / sum),
            activity_coefficient: solution.activity_coefficient(*index),
        })
        .collect()
}

/// Share that has lost at least one, two, ... protons.
fn steps(place: &LigandPlace, molalities: &[f64], sum: f64) -> Vec<Dissociation> {
    if sum <= 0.0 {
        return Vec::new();
    }
    (1..molalities.len())
        .map(|step| Dissociation {
            ligand: place.ligand.name.clone(),
            step,
            degree: molalities.iter().skip(step).sum::<f64>() / sum,
        })
        .collect()
}
