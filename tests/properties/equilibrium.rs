//! Laws of the solver over seeded random problems.

use crate::arbitrary_solution::Draw;
use ionfolio::equilibrium::elementary::log10;
use ionfolio::equilibrium::{ActivityModel, Solver, Species, System, Total, Totals, Water};

/// Problems in one run of the tests; every one must be solved and certified.
const PROBLEMS: usize = 20_000;

#[test]
fn every_random_problem_is_solved_and_certified() {
    let mut draw = Draw::from_seed(20_261_103);
    let mut failures = Vec::new();
    for number in 0..PROBLEMS {
        let model = [
            ActivityModel::Davies,
            ActivityModel::Ideal,
            ActivityModel::Guentelberg,
        ][number % 3];
        let problem = draw.solution(model).problem();
        match Solver::new(&problem.system).solve(&problem.totals, None) {
            Ok(solution) => {
                let certificate = solution.certificate();
                assert!(
                    certificate.relative_charge_balance < 1e-9 && certificate.mass_balance < 1e-12
                );
            }
            Err(error) => failures.push(format!("problem {number}: {error}")),
        }
    }
    assert!(
        failures.is_empty(),
        "{} failed:\n{}",
        failures.len(),
        failures.join("\n")
    );
}

#[test]
fn warm_and_cold_starts_agree() {
    let mut draw = Draw::from_seed(7);
    for _ in 0..500 {
        let problem = draw.solution(ActivityModel::Davies).problem();
        let mut solver = Solver::new(&problem.system);
        let cold = solver.solve(&problem.totals, None).unwrap();
        let elsewhere = draw.solution(ActivityModel::Davies).problem();
        let other = Solver::new(&elsewhere.system)
            .solve(&elsewhere.totals, None)
            .unwrap();
        let warm = solver.solve(&problem.totals, Some(other.start())).unwrap();
        // Both lie in a bracket of 1e-11 over which the balance changes its sign; the solution is one.
        assert!(
            (cold.ph() - warm.ph()).abs() < 1e-11,
            "{} {}",
            cold.ph(),
            warm.ph()
        );
    }
}

#[test]
fn sensitivities_are_the_derivatives() {
    let mut draw = Draw::from_seed(99);
    let mut checked = 0;
    for _ in 0..300 {
        let problem = draw.solution(ActivityModel::Davies).problem();
        let counter = problem.components[problem.components.len() - 2];
        let solution = Solver::new(&problem.system)
            .solve(&problem.totals, None)
            .unwrap();
        let sensitivities = solution.sensitivities(&problem.system);
        for (place, acid) in problem.components.iter().enumerate() {
            let amount = problem.totals.of(*acid).to_f64();
            let by_total = richardson(|step| {
                let mut totals = problem.totals.clone();
                totals.add(*acid, Total::from_f64(step * amount));
                Solver::new(&problem.system)
                    .solve(&totals, Some(solution.start()))
                    .unwrap()
                    .ph()
            });
            checked += compare(by_total, sensitivities.by_component[place] * amount);
        }
        for species in problem.system.species_of(problem.components[0]).skip(1) {
            let row = species.place();
            let by_beta = richardson(|step| {
                let mut system = problem.system.clone();
                system.set_lg_beta(species, problem.system.lg_beta(species) + step);
                Solver::new(&system)
                    .solve(&problem.totals, Some(solution.start()))
                    .unwrap()
                    .ph()
            });
            checked += compare(by_beta, sensitivities.by_lg_beta[row]);
        }
        let capacity = richardson(|step| {
            let mut totals = problem.totals.clone();
            let added = Total::from_f64(step * 1e-2 * problem.totals.of(counter).to_f64());
            totals.add(counter, added);
            totals.add_protons(-added);
            Solver::new(&problem.system)
                .solve(&totals, Some(solution.start()))
                .unwrap()
                .ph()
        });
        let expected = 1e-2 * problem.totals.of(counter).to_f64() / sensitivities.buffer_capacity;
        checked += compare(capacity, expected);
    }
    assert!(
        checked > 500,
        "only {checked} derivatives were large enough to compare"
    );
}

/// Derivative at zero by central differences, extrapolated twice.
fn richardson(at: impl Fn(f64) -> f64) -> f64 {
    let central = |step: f64| (at(step) - at(-step)) / (2.0 * step);
    let (a, b, c) = (central(8e-4), central(4e-4), central(2e-4));
    let (ab, bc) = ((4.0 * b - a) / 3.0, (4.0 * c - b) / 3.0);
    (16.0 * bc - ab) / 15.0
}

/// Compares where the derivative is large enough for the difference to have digits: pH is good to 1e-14, the step is 2e-4.
fn compare(difference: f64, exact: f64) -> usize {
    if exact.abs() < 1e-3 || exact.abs() > 5.0 {
        return 0;
    }
    assert!(
        (difference - exact).abs() <= 1e-6 * exact.abs(),
        "difference {difference}, exact {exact}"
    );
    1
}

#[test]
fn order_of_components_does_not_matter() {
    let water = Water::at(298.15).unwrap();
    let phosphate = [
        Species::new(-3, 0, 0.0),
        Species::new(-2, 1, 12.35),
        Species::new(-1, 2, 19.55),
        Species::new(0, 3, 21.698),
    ];
    let acetate = [Species::new(-1, 0, 0.0), Species::new(0, 1, 4.756)];
    let ph = |first_phosphate: bool| {
        let mut builder = System::builder(water, ActivityModel::Davies);
        let (a, b) = if first_phosphate {
            let a = builder.ligand(&phosphate);
            (a, builder.ligand(&acetate))
        } else {
            let b = builder.ligand(&acetate);
            (builder.ligand(&phosphate), b)
        };
        let system = builder.build().unwrap();
        let mut totals = Totals::none(&system);
        totals.set(a, Total::from_f64(0.02));
        totals.set(b, Total::from_f64(0.03));
        totals.set_protons(Total::from_f64(0.09));
        Solver::new(&system).solve(&totals, None).unwrap().ph()
    };
    assert!((ph(true) - ph(false)).abs() < 1e-13);
}

#[test]
fn pure_water_is_neutral_at_each_temperature() {
    for celsius in 0..=100 {
        let water = Water::at(273.15 + f64::from(celsius)).unwrap();
        let system = System::builder(water, ActivityModel::Davies)
            .build()
            .unwrap();
        let solution = Solver::new(&system)
            .solve(&Totals::none(&system), None)
            .unwrap();
        // a(H+) = a(OH-) by symmetry, so pH = pKw/2; rounding of one division.
        assert!((solution.ph() - water.pkw / 2.0).abs() < 1e-14);
    }
}

#[test]
fn an_acid_diluted_without_end_is_water() {
    let water = Water::at(298.15).unwrap();
    let mut builder = System::builder(water, ActivityModel::Davies);
    let chloride = builder.inert(-1, None);
    let system = builder.build().unwrap();
    let mut totals = Totals::none(&system);
    totals.set(chloride, Total::from_f64(1e-12));
    totals.set_protons(Total::from_f64(1e-12));
    let solution = Solver::new(&system).solve(&totals, None).unwrap();
    // A shift of half of 1e-12 in 1e-7 mol/kg: 2.2e-6 in pH.
    assert!(
        (solution.ph() - water.pkw / 2.0 + 2.17e-6).abs() < 0.02e-6,
        "{}",
        solution.ph() - water.pkw / 2.0
    );
}

#[test]
fn polynuclear_species_keep_the_balances() {
    // Boric acid with three polyborates, Baes and Mesmer (1976), recalled: at 1e-4 mol/kg they do not matter, at 0.4 they do.
    let water = Water::at(298.15).unwrap();
    let mut builder = System::builder(water, ActivityModel::Davies);
    let borate = builder.ligand(&[Species::new(-1, 0, 0.0), Species::new(0, 1, 9.235)]);
    let sodium = builder.inert(1, None);
    let plain = builder.clone().build().unwrap();
    for (units, protons, charge, lg_k) in
        [(2, 1, -1, -9.306), (3, 2, -1, -7.306), (4, 2, -2, -15.032)]
    {
        let lg_beta = f64::from(units) * 9.235 + lg_k;
        builder.polynuclear(
            Species::new(charge, protons, lg_beta),
            &[(borate, u8::try_from(units).unwrap())],
        );
    }
    let system = builder.build().unwrap();
    let ph = |system: &System, total: f64| {
        let mut totals = Totals::none(system);
        totals.set(borate, Total::from_f64(total));
        totals.set(sodium, Total::from_f64(total / 2.0));
        totals.set_protons(Total::from_f64(total / 2.0));
        Solver::new(system).solve(&totals, None).unwrap().ph()
    };
    assert!((ph(&system, 1e-4) - ph(&plain, 1e-4)).abs() < 1e-3);
    assert!((ph(&system, 0.4) - ph(&plain, 0.4)).abs() > 0.02);
}

#[test]
fn held_activity_reaches_the_dissolved_gas() {
    // Water under carbon dioxide with a(CO2) = 1.43e-5: pH 5.6 by hand from K1 = 10^-6.352, a(H)² = K1 a(CO2).
    let water = Water::at(298.15).unwrap();
    let mut builder = System::builder(water, ActivityModel::Ideal);
    let carbonate = builder.ligand(&[
        Species::new(-2, 0, 0.0),
        Species::new(-1, 1, 10.329),
        Species::new(0, 2, 16.681),
    ]);
    builder.hold(carbonate, 2, log10(1.43e-5));
    let system = builder.build().unwrap();
    let solution = Solver::new(&system)
        .solve(&Totals::none(&system), None)
        .unwrap();
    let by_hand = 0.5 * (6.352 - log10(1.43e-5));
    // Water's own ions and carbonate shift it by less than 0.001.
    assert!(
        (solution.ph() - by_hand).abs() < 0.001,
        "{} {by_hand}",
        solution.ph()
    );
}
