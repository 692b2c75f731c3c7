//! The state of one solution, from its certified equilibrium.

use crate::solution::answer::{ComponentTotal, Dissociation, SpeciesState, State};
use crate::solution::assembly::{Assembly, Part, Solved};
use crate::substance::Component;

/// Everything that is told of a solved equilibrium.
pub(super) fn state(assembly: &Assembly, solved: &Solved) -> State {
    let species = species(assembly, solved);
    let sensitivities = solved.certified.sensitivities(&assembly.system);
    State {
        ph: solved.certified.ph(),
        p_hydrogen: solved.certified.p_hydrogen(),
        ionic_strength: solved.certified.ionic_strength(),
        dissociation: dissociation(assembly, &species),
        totals: assembly
            .parts
            .iter()
            .enumerate()
            .map(|(place, part)| total(assembly, solved, place, part))
            .collect(),
        buffer_capacity: sensitivities.buffer_capacity * assembly.density,
        certificate: solved.certified.certificate(),
        species,
    }
}

fn species(assembly: &Assembly, solved: &Solved) -> Vec<SpeciesState> {
    let density = assembly.density;
    let ion = |name: &str, protons: i8, (molality, gamma): (f64, f64)| SpeciesState {
        name: name.to_owned(),
        component: None,
        nuclearity: 1,
        protons,
        charge: protons,
        molality,
        concentration: molality * density,
        fraction: None,
        activity_coefficient: gamma,
    };
    let mut states = vec![
        ion("H⁺", 1, solved.certified.proton()),
        ion("OH⁻", -1, solved.certified.hydroxide()),
    ];
    for row in &assembly.species {
        let molality = solved.certified.molality(row.index);
        let Some(part) = assembly.parts.get(row.part) else {
            continue;
        };
        let whole = sum_of(assembly, solved, row.part);
        let single = matches!(part.component, Component::Ion(_));
        states.push(SpeciesState {
            name: row.name.clone(),
            component: Some(part.component.name().to_owned()),
            nuclearity: row.nuclearity,
            protons: row.protons,
            charge: row.charge,
            molality,
            concentration: molality * density,
            fraction: (!single && whole > 0.0)
                .then(|| molality * f64::from(row.nuclearity) / whole),
            activity_coefficient: solved.certified.activity_coefficient(row.index),
        });
    }
    states
}

/// Molality of a component, all its species together, in mol/kg.
fn sum_of(assembly: &Assembly, solved: &Solved, part: usize) -> f64 {
    assembly
        .species
        .iter()
        .filter(|row| row.part == part)
        .map(|row| f64::from(row.nuclearity) * solved.certified.molality(row.index))
        .sum()
}

fn total(assembly: &Assembly, solved: &Solved, place: usize, part: &Part) -> ComponentTotal {
    let concentration = match part.concentration {
        Some(node) if !part.held => solved.worked.at(node).to_f64(),
        _ => sum_of(assembly, solved, place) * assembly.density,
    };
    ComponentTotal {
        component: part.component.name().to_owned(),
        molality: concentration / assembly.density,
        concentration,
    }
}

/// For each step, the share of the ligand's mononuclear species that have lost at least so many protons.
fn dissociation(assembly: &Assembly, species: &[SpeciesState]) -> Vec<Dissociation> {
    let mut degrees = Vec::new();
    for part in &assembly.parts {
        let Component::Ligand(ligand) = &part.component else {
            continue;
        };
        let own = |state: &&SpeciesState| {
            state.component.as_deref() == Some(ligand.name.as_str()) && state.nuclearity == 1
        };
        let whole: f64 = species.iter().filter(own).map(|state| state.molality).sum();
        if whole <= 0.0 {
            continue;
        }
        for step in 1..=ligand.steps.len() {
            let kept = ligand.state_protons(step);
            let lost: f64 = species
                .iter()
                .filter(own)
                .filter(|state| usize::try_from(state.protons).is_ok_and(|protons| protons <= kept))
                .map(|state| state.molality)
                .sum();
            degrees.push(Dissociation {
                ligand: ligand.name.clone(),
                step,
                degree: lost / whole,
            });
        }
    }
    degrees
}

#[cfg(test)]
mod tests {
    use crate::problem::Air;
    use crate::quantity::Unit;
    use crate::solution::solve;
    use crate::solution::specimen::{input, molal, molar, speciation, stated};
    use crate::substance::Catalogue;

    /// Buck et al. (2002), Pure Appl. Chem. 74, 2169, and Bates (1973), primary standards at 25 °C; recalled. Tolerance 0.012: 0.005 for the
    /// standards' own uncertainty and the rest for the activity convention.
    #[test]
    fn primary_standards_are_met() {
        for (contents, ph) in [
            (
                &[
                    ("potassium dihydrogen phosphate", "0.025"),
                    ("disodium hydrogen phosphate", "0.025"),
                ][..],
                6.865,
            ),
            (&[("potassium hydrogen phthalate", "0.05")][..], 4.005),
            (&[("borax", "0.01")][..], 9.180),
            (
                &[
                    ("sodium hydrogen carbonate", "0.025"),
                    ("sodium carbonate", "0.025"),
                ][..],
                10.012,
            ),
        ] {
            let answer = solve(&speciation(molal(contents), "25")).unwrap();
            assert!((answer.state.ph - ph).abs() <= 0.012, "{}", answer.state.ph);
            assert!(answer.state.certificate.mass_balance < 1e-12);
        }
    }

    #[test]
    fn shares_and_degrees_add_up() {
        // By hand with pK1 2.852 and γ 0.916: x²γ²/(C - x) = K1 at C = 0.03510 mol/kg gives x = 0.00688, 19.6 % of C, and pH 2.2006; 0.001 for the
        // rounding.
        let answer = solve(&speciation(molar(&[("malonic acid", "0.0350")]), "25")).unwrap();
        let shares: f64 = answer
            .state
            .species
            .iter()
            .filter_map(|species| species.fraction)
            .sum();
        assert!((shares - 1.0).abs() < 1e-12);
        let first = &answer.state.dissociation[0];
        assert!((first.degree - 0.196).abs() < 0.001, "{}", first.degree);
        assert!(
            (answer.state.ph - 2.2006).abs() < 0.001,
            "{}",
            answer.state.ph
        );
        assert_eq!(answer.state.species[0].name, "H⁺");
    }

    #[test]
    fn water_in_air_is_acid_by_its_carbon_dioxide() {
        // By hand: [H+]² = K1 KH p = 10^-6.352 × 10^-1.468 × 4.2e-4, so pH 5.60; 0.01 for the rounding of the hand calculation.
        let mut statement = speciation(molar(&[]), "25");
        statement.conditions.air = stated(Air::CarbonDioxideFraction(input(
            "air",
            "420",
            Unit::PartsPerMillion,
        )));
        let answer = solve(&statement).unwrap();
        assert!((answer.state.ph - 5.60).abs() < 0.01, "{}", answer.state.ph);
    }

    #[test]
    fn what_cancels_on_paper_is_neutral() {
        let contents = [
            ("hydrochloric acid", "0.1"),
            ("sodium hydroxide", "0.3"),
            ("nitric acid", "0.2"),
        ];
        let answer = solve(&speciation(molar(&contents), "25")).unwrap();
        let neutral = 0.5 * answer.model.pkw;
        assert!((answer.state.ph - neutral).abs() < 0.15);
        assert!(
            (answer.state.species[0].molality / answer.state.species[1].molality - 1.0).abs()
                < 1e-10
        );
    }

    #[test]
    fn a_charge_left_over_is_an_error() {
        let contents = [("sodium ion", "0.1"), ("chloride ion", "0.09")];
        let error = solve(&speciation(molar(&contents), "25")).unwrap_err();
        assert!(error.input().is_some(), "{error}");
    }

    #[test]
    fn every_form_of_the_library_has_a_certified_answer() {
        let mut failed = Vec::new();
        for form in Catalogue::embedded().unwrap().forms() {
            if form.charge != 0 {
                continue;
            }
            for celsius in ["5", "25", "60"] {
                let contents = [(form.name.as_str(), "0.020")];
                if let Err(error) = solve(&speciation(molar(&contents), celsius)) {
                    failed.push(format!("{} at {celsius} °C: {error}", form.name));
                }
            }
        }
        assert!(failed.is_empty(), "{failed:#?}");
    }

    #[test]
    fn nothing_of_something_changes_nothing() {
        let with = [("acetic acid", "0.1"), ("phosphoric acid", "0")];
        let with = solve(&speciation(molar(&with), "25")).unwrap();
        let without = solve(&speciation(molar(&[("acetic acid", "0.1")]), "25")).unwrap();
        assert_eq!(with.state.ph.to_bits(), without.state.ph.to_bits());
    }
}
