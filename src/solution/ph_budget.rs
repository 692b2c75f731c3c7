//! The uncertainty budget of a pH, from exact derivatives.

use crate::problem::ActivityChoice;
use crate::solution::answer::Budget;
use crate::solution::assembly::{Assembly, Solved};
use crate::solution::assumption::Surroundings;
use crate::solution::budget::Contribution;
use crate::solution::conclusion::Bench;
use crate::solution::recipe::Distribution;
use crate::solution::simulation::Added;

/// The coverage factor of every expanded uncertainty.
const COVERAGE_FACTOR: f64 = 2.0;

/// The budget of the pH of a solved assembly.
pub(super) fn of(
    bench: &Bench<'_>,
    assembly: &Assembly,
    solved: &Solved,
    surroundings: &Surroundings,
) -> Budget {
    Budget::of(
        &contributions(bench, assembly, solved, surroundings),
        COVERAGE_FACTOR,
    )
}

/// Inputs, molar masses, constants, temperature and model, each with its uncertainty; quantities without one are left out.
pub(super) fn contributions(
    bench: &Bench<'_>,
    assembly: &Assembly,
    solved: &Solved,
    surroundings: &Surroundings,
) -> Vec<Contribution> {
    let (gradient, sensitivities) = assembly.gradient(solved);
    let mut lines: Vec<Contribution> = assembly
        .recipe
        .variables
        .iter()
        .zip(&gradient)
        .filter(|(variable, _)| variable.standard > 0.0)
        .map(|(variable, by)| Contribution {
            what: variable.what.clone(),
            input: variable.input.clone(),
            value: variable.written.clone(),
            standard: variable.standard / variable.base_per_unit,
            unit: variable.unit.clone(),
            sensitivity: by * variable.base_per_unit,
            degrees_of_freedom: variable.degrees_of_freedom,
            origin: variable.origin.to_owned(),
        })
        .collect();
    for pk in &assembly.pks {
        let standard = Assembly::pk_standard(pk);
        if standard > 0.0 {
            lines.push(Contribution {
                what: format!("pK{} of {}", pk.step + 1, pk.ligand.name),
                input: None,
                value: format!("{:.4}", pk.found.value),
                standard,
                unit: String::new(),
                sensitivity: Assembly::by_pk(pk, &sensitivities),
                degrees_of_freedom: None,
                origin: "the constant's source, taken as standard".to_owned(),
            });
        }
    }
    let temperature = &bench.statement.conditions.temperature.value;
    let standard = temperature.measured.standard_uncertainty();
    if standard > 0.0 {
        lines.push(Contribution {
            what: temperature.id.to_string(),
            input: Some(temperature.id.clone()),
            value: temperature.measured.to_string(),
            standard,
            unit: "K".to_owned(),
            sensitivity: surroundings.ph_per_kelvin,
            degrees_of_freedom: temperature.measured.degrees_of_freedom(),
            origin: "stated".to_owned(),
        });
    }
    lines.extend(model_lines(bench, solved, surroundings));
    lines
}

/// What a simulation adds to the pH of each draw: temperature and model, which no input of the recipe carries.
pub(super) fn added(bench: &Bench<'_>, solved: &Solved, surroundings: &Surroundings) -> Vec<Added> {
    let temperature = &bench.statement.conditions.temperature.value.measured;
    let mut added = vec![Added {
        standard: temperature.standard_uncertainty() * surroundings.ph_per_kelvin,
        distribution: Distribution::Normal,
    }];
    added.extend(
        model_lines(bench, solved, surroundings)
            .into_iter()
            .map(|line| Added {
                standard: line.standard,
                distribution: if line.origin == MODEL {
                    Distribution::Normal
                } else {
                    Distribution::Rectangular
                },
            }),
    );
    added.retain(|added| added.standard.abs() > 0.0);
    added
}

/// Where the model's own error comes from, in a budget.
const MODEL: &str = "model";

/// Standard uncertainty in pH of the models against the primary pH standards at I up to 0.1 mol/kg: at 25 °C, and over 0 to 50 °C.
///
/// Source: our own comparison with the primary standards of Buck et al. (2002), Pure Appl. Chem. 74, 2169.
const MODEL_AT_25: f64 = 0.008;
const MODEL_0_TO_50: f64 = 0.010;

/// Beyond 50 °C: twice that, by judgement; the standards there are few.
const MODEL_BEYOND: f64 = 0.020;

/// Ionic strength in mol/kg up to which those figures hold.
const MODEL_RANGE: f64 = 0.1;

/// The model's own error, and above 0.1 mol/kg the difference between two models, as half width of a rectangular distribution.
fn model_lines(
    bench: &Bench<'_>,
    solved: &Solved,
    surroundings: &Surroundings,
) -> Vec<Contribution> {
    let celsius = bench.setting.temperature - 273.15;
    let standard = if (celsius - 25.0).abs() <= 1.0 {
        MODEL_AT_25
    } else if (0.0..=50.0).contains(&celsius) {
        MODEL_0_TO_50
    } else {
        MODEL_BEYOND
    };
    let line = |what: String, value: String, standard: f64, origin: &str| Contribution {
        what,
        input: None,
        value,
        standard,
        unit: String::new(),
        sensitivity: 1.0,
        degrees_of_freedom: None,
        origin: origin.to_owned(),
    };
    let mut lines = vec![line(
        "activity model and constants against the primary pH standards".to_owned(),
        bench.chosen.choice.name().to_owned(),
        standard,
        MODEL,
    )];
    let (second, ph) = &surroundings.second_model;
    let difference = (ph - solved.certified.ph()).abs();
    let ideal = bench.chosen.choice == ActivityChoice::Ideal;
    if (solved.certified.ionic_strength() > MODEL_RANGE || ideal) && difference > 0.0 {
        lines.push(line(
            format!(
                "difference between the models {} and {second}",
                bench.chosen.choice.name()
            ),
            format!("{difference:.4}"),
            difference / 3.0_f64.sqrt(),
            "model, half width of a rectangular distribution",
        ));
    }
    lines
}

#[cfg(test)]
mod tests {
    use crate::problem::{Air, Composition, ContentAmount, MadeUp};
    use crate::quantity::Unit;
    use crate::solution::solve;
    use crate::solution::specimen::{content, input, speciation, stated, uncertain};

    fn weighed(mass: &str, volume: &str) -> Composition {
        Composition {
            made_up: MadeUp::To(uncertain("volume", volume, "0.001", Unit::Litre)),
            ingredients: vec![
                content(
                    "sodium dihydrogen phosphate dihydrate",
                    ContentAmount::Mass(uncertain("mass", mass, "0.01", Unit::Gram)),
                ),
                content(
                    "disodium hydrogen phosphate",
                    ContentAmount::Concentration(input("base", "0.030", Unit::MolePerLitre)),
                ),
            ],
        }
    }

    #[test]
    fn sensitivities_are_the_derivatives() {
        let answer = solve(&speciation(weighed("3.9003", "1.000"), "25")).unwrap();
        let of = |what: &str| {
            let budget = answer.budget.as_ref().unwrap();
            let line = budget.lines.iter().find(|line| line.what == what);
            line.unwrap().sensitivity
        };
        let ph = |mass: &str, volume: &str| {
            let answer = solve(&speciation(weighed(mass, volume), "25"));
            answer.unwrap().state.ph
        };
        // Richardson's extrapolation of central differences with steps h and 2 h; error of the order of h⁴.
        let richardson = |one: f64, two: f64| (4.0 * one - two) / 3.0;
        let by_mass = richardson(
            (ph("3.9103", "1.000") - ph("3.8903", "1.000")) / 0.02,
            (ph("3.9203", "1.000") - ph("3.8803", "1.000")) / 0.04,
        );
        assert!((by_mass / of("mass") - 1.0).abs() < 1e-6, "{by_mass}");
        let by_volume = richardson(
            (ph("3.9003", "1.001") - ph("3.9003", "0.999")) / 0.002,
            (ph("3.9003", "1.002") - ph("3.9003", "0.998")) / 0.004,
        );
        assert!((by_volume / of("volume") - 1.0).abs() < 1e-6, "{by_volume}");
    }

    #[test]
    fn sensitivities_hold_with_air_and_polyborates() {
        // Central differences of 0.1 % of the value; their own error is of the order of 1e-6 relative here.
        let cases: [(&[(&str, &str)], Air); 2] = [
            (
                &[("sodium hydrogen carbonate", "0.0200")],
                Air::CarbonDioxide(input("air", "0.05", Unit::Atmosphere)),
            ),
            (
                &[("borax", "0.0500"), ("boric acid", "0.1000")],
                Air::Closed,
            ),
        ];
        for (contents, air) in cases {
            let answer = |scale: f64| {
                let figures: Vec<String> = contents
                    .iter()
                    .map(|(_, figure)| (figure.parse::<f64>().unwrap() * scale).to_string())
                    .collect();
                let ingredients = contents
                    .iter()
                    .zip(&figures)
                    .map(|((name, _), figure)| {
                        let amount = uncertain(name, figure, "0.0001", Unit::MolePerLitre);
                        content(name, ContentAmount::Concentration(amount))
                    })
                    .collect();
                let mut statement = speciation(
                    Composition {
                        made_up: MadeUp::Unstated,
                        ingredients,
                    },
                    "25",
                );
                statement.conditions.air = stated(air.clone());
                solve(&statement).unwrap()
            };
            let by_scale: f64 = answer(1.0)
                .budget
                .unwrap()
                .lines
                .iter()
                .filter_map(|line| {
                    let (_, figure) = contents.iter().find(|(name, _)| line.what == *name)?;
                    Some(line.sensitivity * figure.parse::<f64>().unwrap())
                })
                .sum();
            let difference = (answer(1.001).state.ph - answer(0.999).state.ph) / 0.002;
            assert!(
                (by_scale / difference - 1.0).abs() < 1e-4,
                "{by_scale} {difference}"
            );
        }
    }
}
