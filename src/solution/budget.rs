//! The uncertainty budget of a pH, from exact derivatives.

use crate::problem::InputId;
use crate::solution::answer::{Budget, BudgetLine};
use crate::solution::assembly::{Assembly, Solved};
use crate::solution::assumption::Surroundings;
use crate::solution::conclusion::Bench;
use crate::solution::recipe::Distribution;
use crate::solution::simulation::Added;

/// One quantity that a result depends on, with its uncertainty.
#[derive(Clone, Debug)]
pub struct Contribution {
    /// What it is, for people.
    pub what: String,
    /// The input, where it is one.
    pub input: Option<InputId>,
    /// Its value as written.
    pub value: String,
    /// Standard uncertainty in `unit`.
    pub standard: f64,
    /// Unit.
    pub unit: String,
    /// Sensitivity coefficient: change of the result per `unit`.
    pub sensitivity: f64,
    /// Degrees of freedom, where given.
    pub degrees_of_freedom: Option<f64>,
    /// Where the uncertainty comes from.
    pub origin: String,
}

impl Budget {
    /// The budget of independent contributions, with coverage factor `k`; standard and expanded uncertainty in the unit of the result.
    ///
    /// Source: JCGM 100:2008, 5.1.2 and, for the effective degrees of freedom, G.4.1 (Welch-Satterthwaite); recalled.
    pub fn of(contributions: &[Contribution], k: f64) -> Self {
        let part = |line: &Contribution| line.standard * line.sensitivity;
        let variance: f64 = contributions
            .iter()
            .map(|line| part(line) * part(line))
            .sum();
        let fourth: f64 = contributions
            .iter()
            .filter_map(|line| {
                let square = part(line) * part(line);
                Some(square * square / line.degrees_of_freedom?)
            })
            .sum();
        let share = |line: &Contribution| {
            if variance > 0.0 {
                part(line) * part(line) / variance
            } else {
                0.0
            }
        };
        let mut lines: Vec<BudgetLine> = contributions
            .iter()
            .map(|line| BudgetLine {
                what: line.what.clone(),
                input: line.input.clone(),
                value: line.value.clone(),
                standard: line.standard,
                unit: line.unit.clone(),
                sensitivity: line.sensitivity,
                share: share(line),
                degrees_of_freedom: line.degrees_of_freedom,
                origin: line.origin.clone(),
            })
            .collect();
        lines.sort_by(|a, b| b.share.total_cmp(&a.share));
        let standard = variance.sqrt();
        Self {
            lines,
            standard,
            effective_degrees_of_freedom: (fourth > 0.0).then(|| variance * variance / fourth),
            k,
            expanded: k * standard,
        }
    }
}

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
    let ideal = bench.chosen.choice == crate::problem::ActivityChoice::Ideal;
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
    use super::*;
    use crate::problem::ContentAmount;
    use crate::problem::{Composition, MadeUp};
    use crate::quantity::Unit;
    use crate::solution::solve;
    use crate::solution::specimen::{content, input, speciation, uncertain};

    fn line(value: f64, standard: f64, sensitivity: f64, dof: Option<f64>) -> Contribution {
        Contribution {
            what: String::new(),
            input: None,
            value: value.to_string(),
            standard,
            unit: String::new(),
            sensitivity,
            degrees_of_freedom: dof,
            origin: String::new(),
        }
    }

    #[test]
    fn end_gauge_of_the_guide() {
        // JCGM 100:2008, annex H.1: u = 32 nm within 0.5, effective degrees of freedom 16 within 1 (printed figures are rounded; read and
        // recalled). ls = 50 000 623 nm; thermal terms enter through ls.
        let length = 50_000_623.0;
        let third = 3.0_f64.sqrt();
        let budget = Budget::of(
            &[
                line(length, 25.0, 1.0, Some(18.0)),
                line(215.0, 5.8, 1.0, Some(24.0)),
                line(0.0, 3.9, 1.0, Some(5.0)),
                line(0.0, 6.7, 1.0, Some(8.0)),
                line(0.0, 1.0e-6 / third, 0.1 * length, Some(50.0)),
                line(0.0, 0.05 / third, -11.5e-6 * length, Some(2.0)),
            ],
            2.92,
        );
        assert!((budget.standard - 32.0).abs() <= 0.5, "{}", budget.standard);
        let dof = budget.effective_degrees_of_freedom.unwrap();
        assert!((dof - 16.0).abs() <= 1.0, "{dof}");
        assert!((budget.expanded - 93.0).abs() <= 1.5, "{}", budget.expanded);
    }

    /// Relative contributions of a product: value times relative uncertainty.
    fn product(value: f64, parts: &[(f64, f64)]) -> Budget {
        let lines: Vec<Contribution> = parts
            .iter()
            .map(|(figure, standard)| line(*figure, *standard, value / figure, None))
            .collect();
        Budget::of(&lines, 2.0)
    }

    #[test]
    fn examples_of_analytical_chemistry() {
        // EURACHEM/CITAC QUAM, examples A1 to A3; unrounded figures, each with the tolerance of its rounding; read.
        let (r3, r6) = (3.0_f64.sqrt(), 6.0_f64.sqrt());
        let root = |parts: &[f64]| parts.iter().map(|u| u * u).sum::<f64>().sqrt();
        let flask = root(&[0.1 / r6, 0.02, 0.084 / r3]);
        let a1 = product(
            1002.7,
            &[(0.9999, 0.0001 / r3), (100.28, 0.05), (100.0, flask)],
        );
        assert!((a1.standard - 0.835_199).abs() <= 0.0005, "{}", a1.standard);
        let weighing = root(&[0.000_15 / r3, 0.000_15 / r3]);
        let burette = root(&[0.03 / r6, 0.006]);
        let a2 = product(
            0.102_136_159_706,
            &[
                (1.0, 0.0005),
                (0.3888, weighing),
                (1.0, 0.0005 / r3),
                (204.2212, 0.0038),
                (18.64, burette),
            ],
        );
        assert!(
            (a2.standard - 0.000_100_500_722).abs() <= 1e-7,
            "{}",
            a2.standard
        );
        let a3 = product(
            0.101_39,
            &[
                (1.0, 0.001),
                (0.3888, weighing),
                (1.0, 0.0005 / r3),
                (14.89, root(&[0.03 / r6, 0.0126 / r3])),
                (18.64, root(&[0.03 / r6, 0.015_96 / r3])),
                (204.2212, 0.0038),
                (15.0, root(&[0.02 / r6, 0.0126 / r3])),
            ],
        );
        assert!((a3.standard - 0.000_184_3).abs() <= 5e-7, "{}", a3.standard);
    }

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
}
