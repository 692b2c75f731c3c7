//! The solver against solutions of the same equations to more than 40 digits.
//!
//! The reference shares nothing with the solver but the inputs: it takes all mass balances, the charge balance (charges counted one by one, not
//! protons) and the definition of ionic strength as one system, and solves it by Newton's method in 60 digits until the last step is below 1e-25,
//! so that the next would be below 1e-45. It starts from the solver's answer; as the solution is unique (charges within ±3), a wrong start can
//! only lead away from the answer, never confirm it.
//!
//! A few hundred problems run with the tests. 100,000 problems, in some minutes on one core:
//! `IONFOLIO_REFERENCE_PROBLEMS=100000 cargo test --test properties high_precision -- --nocapture`
#![expect(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    clippy::disallowed_methods,
    clippy::print_stderr,
    clippy::too_many_lines,
    reason = "a test may stop where it cannot go on; the number of its problems comes from outside, and it tells the largest error found"
)]

use crate::arbitrary_solution::{Component, Draw, Ion, Polynuclear, Solution};
use dashu_float::FBig;
use dashu_float::round::mode::HalfEven;
use ionfolio::equilibrium::{ActivityModel, Certified, Solver, SpeciesIndex, Water};

/// A binary number of [`BITS`] bits.
type Big = FBig<HalfEven, 2>;

/// About 60 decimal digits.
const BITS: usize = 200;

/// Problems where none are asked for.
const PROBLEMS: u32 = 400;

/// Largest difference in pH: the design's figure.
const LARGEST: f64 = 1e-12;

#[test]
fn random_problems_agree_with_high_precision() {
    let wanted = std::env::var("IONFOLIO_REFERENCE_PROBLEMS")
        .ok()
        .and_then(|number| number.parse().ok())
        .unwrap_or(PROBLEMS);
    let mut draw = Draw::from_seed(20_260_714);
    let mut worst = 0.0_f64;
    let mut failures = Vec::new();
    for number in 0..wanted {
        let model = [
            ActivityModel::Davies,
            ActivityModel::Guentelberg,
            ActivityModel::Davies,
            ActivityModel::Ideal,
        ][usize::try_from(number % 4).unwrap()];
        let solution = if number % 5 == 4 {
            draw.polynuclear_solution(model)
        } else {
            draw.solution(model)
        };
        match difference(&solution) {
            Ok(difference) if difference <= LARGEST => worst = worst.max(difference),
            Ok(difference) => failures.push(format!("{number}: pH off by {difference:e}")),
            Err(reason) => failures.push(format!("{number}: {reason}")),
        }
    }
    eprintln!("{wanted} problems, largest difference in pH {worst:e}");
    assert!(
        failures.is_empty(),
        "{} of {wanted} failed:\n{}",
        failures.len(),
        failures.join("\n")
    );
}

#[test]
fn nearly_degenerate_problems_agree_with_high_precision() {
    let water = Water::at(298.15).unwrap();
    let solution = |name: &'static str, components: Vec<Component>| {
        let solution = Solution {
            water,
            model: ActivityModel::Davies,
            components,
            polynuclear: Vec::new(),
        };
        (name, solution)
    };
    let phosphoric = [2.148, 7.198, 12.35];
    let sodium = |amount: f64, factor: f64| Component::inert(1, vec![(amount, factor)]);
    let chloride = |amount: f64| Component::inert(-1, vec![(amount, 1.0)]);
    let mut cases = vec![
        solution("1e-12 mol/kg", vec![Component::acid(0, &[4.756], 1e-12)]),
        solution(
            "equal pKs",
            vec![Component::acid(0, &[7.0; 3], 0.01), sodium(0.01, 1.5)],
        ),
        solution("pK below 0", vec![Component::acid(0, &[-2.0, -1.0], 0.3)]),
        solution(
            "pK above 14",
            vec![Component::acid(0, &[14.5, 15.0], 0.3), sodium(0.3, 1.0)],
        ),
        solution(
            "eight steps",
            vec![
                Component::acid(3, &[-1.0, 1.0, 3.0, 5.0, 7.0], 0.02),
                Component::acid(0, &[9.0, 11.0, 13.0], 0.02),
                sodium(0.02, 2.0),
            ],
        ),
        solution("strong acid, 5 mol/kg", vec![chloride(5.0)]),
        solution("strong base, 5 mol/kg", vec![sodium(5.0, 1.0)]),
        solution(
            "weak acid, 5 mol/kg",
            vec![Component::acid(0, &phosphoric, 5.0)],
        ),
        solution(
            "5 mol/kg beside 1e-12",
            vec![
                Component::acid(0, &phosphoric, 5.0),
                Component::acid(0, &[6.35, 10.33], 1e-12),
                sodium(5.0, 1.0),
            ],
        ),
    ];
    for equivalents in [1.0, 2.0, 3.0] {
        for amount in [1e-6, 1e-3, 1.0] {
            let phosphate = Component::acid(0, &phosphoric, amount);
            cases.push(solution(
                "equivalence point",
                vec![phosphate, sodium(amount, equivalents)],
            ));
        }
    }
    for celsius in 0..=100 {
        let water = Water::at(273.15 + f64::from(celsius)).unwrap();
        let (name, solution) = solution("pure water", Vec::new());
        cases.push((name, Solution { water, ..solution }));
    }
    for (name, solution) in cases {
        let difference = difference(&solution).unwrap();
        assert!(difference <= LARGEST, "{name}: pH off by {difference:e}");
    }
}

#[test]
fn polyborates_agree_with_high_precision() {
    // Lg K of Baes and Mesmer (1976), recalled; any figures would do.
    for total in [1e-6, 0.01, 0.5, 5.0] {
        for share in [0.1, 0.5, 1.0] {
            let polynuclear = [(2, 1, -1, -9.306), (3, 2, -1, -7.306), (4, 2, -2, -15.032)]
                .map(|(units, protons, charge, lg_k)| Polynuclear {
                    ion: Ion {
                        charge,
                        protons,
                        lg_beta: f64::from(units) * 9.235 + lg_k,
                    },
                    units: vec![(0, units)],
                })
                .to_vec();
            let solution = Solution {
                water: Water::at(298.15).unwrap(),
                model: ActivityModel::Davies,
                components: vec![
                    Component::acid(0, &[9.235], total),
                    Component::inert(1, vec![(total, share)]),
                ],
                polynuclear,
            };
            let difference = difference(&solution).unwrap();
            assert!(
                difference <= LARGEST,
                "{total} {share}: pH off by {difference:e}"
            );
        }
    }
}

/// Size of the difference in pH between the solver and the reference.
fn difference(solution: &Solution) -> Result<f64, String> {
    let problem = solution.problem();
    let certified = Solver::new(&problem.system)
        .solve(&problem.totals, None)
        .map_err(|error| error.to_string())?;
    let places: Vec<SpeciesIndex> = problem
        .components
        .iter()
        .flat_map(|component| problem.system.species_of(*component))
        .collect();
    let mut reference = Reference::new(solution);
    reference.start(solution, &certified, &places);
    reference.settle()?;
    let ph = -(&reference.ln_proton / big(10.0).ln());
    Ok((ph - big(certified.ph())).to_f64().value().abs())
}

/// A species of the reference, H+ and OH- included.
struct Row {
    beta: Big,
    charge: i32,
    /// Exponents of H+ and of each component that is present.
    exponents: Vec<i32>,
}

/// All equations at once; unknowns are ln a(H+), ln of each free component, and ionic strength.
struct Reference {
    rows: Vec<Row>,
    totals: Vec<Big>,
    model: ActivityModel,
    a: Big,
    ln_proton: Big,
    /// Activities of H+ and of the free components.
    activities: Vec<Big>,
    ionic_strength: Big,
    /// Place among the unknowns of each component, if its total is not zero.
    present: Vec<Option<usize>>,
}

fn big(value: f64) -> Big {
    Big::try_from(value).unwrap().with_precision(BITS).value()
}

fn power(base: &Big, exponent: i32) -> Big {
    let size = (0..exponent.abs()).fold(big(1.0), |product, _| product * base);
    if exponent < 0 { big(1.0) / size } else { size }
}

impl Reference {
    fn new(solution: &Solution) -> Self {
        let ten = big(10.0).ln();
        let beta = |lg: f64| (big(lg) * &ten).exp();
        let mut totals = Vec::new();
        let mut present = Vec::new();
        for component in &solution.components {
            let sum = component
                .portions
                .iter()
                .fold(big(0.0), |sum, (amount, factor)| {
                    sum + big(*amount) * big(*factor)
                });
            present.push((sum > big(0.0)).then(|| {
                totals.push(sum);
                totals.len()
            }));
        }
        let order = totals.len() + 1;
        let mut rows = Vec::new();
        let mut push = |beta: Big, charge: i32, protons: i32, units: &[(usize, i32)]| {
            let mut exponents = vec![0; order];
            exponents[0] = protons;
            for &(component, count) in units {
                // A species of a component that is absent is absent.
                let Some(place) = present[component] else {
                    return;
                };
                exponents[place] += count;
            }
            rows.push(Row {
                beta,
                charge,
                exponents,
            });
        };
        push(big(1.0), 1, 1, &[]);
        push(beta(-solution.water.pkw), -1, -1, &[]);
        for (place, component) in solution.components.iter().enumerate() {
            for ion in &component.ions {
                push(
                    beta(ion.lg_beta),
                    ion.charge.into(),
                    ion.protons.into(),
                    &[(place, 1)],
                );
            }
        }
        for species in &solution.polynuclear {
            let ion = species.ion;
            let units: Vec<_> = species.units.iter().map(|&(k, n)| (k, n.into())).collect();
            push(
                beta(ion.lg_beta),
                ion.charge.into(),
                ion.protons.into(),
                &units,
            );
        }
        Self {
            rows,
            totals,
            model: solution.model,
            a: big(solution.water.debye_hueckel_a) * ten,
            ln_proton: big(0.0),
            activities: vec![big(1.0); order],
            ionic_strength: big(0.0),
            present,
        }
    }

    /// Takes over the solver's answer, to its last digit but one, as the first guess.
    fn start(&mut self, solution: &Solution, certified: &Certified, places: &[SpeciesIndex]) {
        self.ln_proton = -big(certified.ph()) * big(10.0).ln();
        self.activities[0] = self.ln_proton.exp();
        self.ionic_strength = big(certified.ionic_strength());
        let mut places = places.iter();
        for (component, present) in solution.components.iter().zip(&self.present) {
            let (ion, place) = component
                .ions
                .iter()
                .zip(places.by_ref().take(component.ions.len()))
                .max_by(|a, b| {
                    certified
                        .molality(*a.1)
                        .total_cmp(&certified.molality(*b.1))
                })
                .unwrap();
            if let Some(unknown) = present {
                let activity =
                    big(certified.molality(*place)) * big(certified.activity_coefficient(*place));
                let ln_ten = big(10.0).ln();
                self.activities[*unknown] = activity
                    / (big(ion.lg_beta) * ln_ten).exp()
                    / power(&self.activities[0], ion.protons.into());
            }
        }
    }

    /// ln γ for z² = 1 and its slope.
    fn screening(&self) -> (Big, Big) {
        let i = &self.ionic_strength;
        let root = root_of(i);
        let d = big(1.0) + &root;
        let (mut value, mut slope) = (&root / &d, big(0.5) / (&root * &d * &d));
        match self.model {
            ActivityModel::Ideal => return (big(0.0), big(0.0)),
            ActivityModel::Davies => {
                value -= big(3.0) / big(10.0) * i;
                slope -= big(3.0) / big(10.0);
            }
            ActivityModel::Guentelberg => {}
            other => unreachable!("{other:?} is not drawn"),
        }
        (-value * &self.a, -slope * &self.a)
    }

    /// Newton's method until the last step is below 1e-25.
    fn settle(&mut self) -> Result<(), String> {
        for _ in 0..20 {
            let mut step = self.step()?;
            let last = step.pop().unwrap_or_else(|| big(0.0));
            let mut largest = (&last / &self.ionic_strength).to_f64().value().abs();
            self.ionic_strength += last;
            self.ln_proton += &step[0];
            for (activity, step) in self.activities.iter_mut().zip(&step) {
                *activity *= step.exp();
                largest = largest.max(step.to_f64().value().abs());
            }
            if largest < 1e-25 {
                return Ok(());
            }
        }
        Err("the reference did not settle".to_owned())
    }

    fn step(&self) -> Result<Vec<Big>, String> {
        let order = self.activities.len();
        let (screening, slope) = self.screening();
        let inverse = (-screening).exp();
        // Row 0: charge; rows 1..: mass balances; last row: ionic strength. Last column: what is missing.
        let mut matrix = vec![vec![big(0.0); order + 2]; order + 1];
        let mut left = vec![big(0.0); order + 1];
        for row in &self.rows {
            let z2 = row.charge * row.charge;
            let mut molality = &row.beta * power(&inverse, z2);
            for (activity, exponent) in self.activities.iter().zip(&row.exponents) {
                molality *= power(activity, *exponent);
            }
            let by_ionic = -big(f64::from(z2)) * &slope * &molality;
            let mut put = |equation: usize, weight: f64| {
                if weight == 0.0 {
                    return;
                }
                let weighted = big(weight) * &molality;
                left[equation] += &weighted;
                let present = row
                    .exponents
                    .iter()
                    .enumerate()
                    .filter(|(_, exponent)| **exponent != 0);
                for (unknown, exponent) in present {
                    matrix[equation][unknown] += &weighted * big(f64::from(*exponent));
                }
                matrix[equation][order] += big(weight) * &by_ionic;
            };
            put(0, f64::from(row.charge));
            for (equation, exponent) in row.exponents.iter().enumerate().skip(1) {
                put(equation, f64::from(*exponent));
            }
            put(order, 0.5 * f64::from(z2));
        }
        for (equation, total) in self.totals.iter().enumerate() {
            left[equation + 1] -= total;
        }
        left[order] -= &self.ionic_strength;
        matrix[order][order] -= big(1.0);
        for (row, left) in matrix.iter_mut().zip(left) {
            row[order + 1] = -left;
        }
        solve(matrix).ok_or_else(|| "singular equations".to_owned())
    }
}

/// Square root by Newton's method from the double's, to all bits.
fn root_of(square: &Big) -> Big {
    let mut root = big(square.to_f64().value().sqrt());
    for _ in 0..3 {
        root = (&root + square / &root) / big(2.0);
    }
    root
}

/// Gaussian elimination with scaled rows and partial pivoting; the last column is the right-hand side.
fn solve(mut matrix: Vec<Vec<Big>>) -> Option<Vec<Big>> {
    let order = matrix.len();
    let size = |value: &Big| value.to_f64().value().abs();
    for row in &mut matrix {
        let scale = row[..order].iter().map(size).fold(0.0, f64::max);
        for entry in row.iter_mut() {
            *entry = &*entry / big(scale);
        }
    }
    for column in 0..order {
        let pivot = (column..order)
            .max_by(|a, b| size(&matrix[*a][column]).total_cmp(&size(&matrix[*b][column])))?;
        matrix.swap(column, pivot);
        if matrix[column][column] == big(0.0) {
            return None;
        }
        let (above, below) = matrix.split_at_mut(column + 1);
        for row in below {
            if row[column] == big(0.0) {
                continue;
            }
            let factor = &row[column] / &above[column][column];
            for (entry, pivot) in row.iter_mut().zip(&above[column]).skip(column) {
                *entry = &*entry - &factor * pivot;
            }
        }
    }
    let mut answer = vec![big(0.0); order];
    for row in (0..order).rev() {
        let known = (row + 1..order).fold(big(0.0), |sum, column| {
            sum + &matrix[row][column] * &answer[column]
        });
        answer[row] = (&matrix[row][order] - known) / &matrix[row][row];
    }
    Some(answer)
}
