//! Statements and answers for the tests of rendering: the states are solved, everything around them is invented.

use crate::problem::{ActivityChoice, Composition, InputId, ShortcutName, Statement};
use crate::report::solved::{self, Phosphate, statement};
use crate::solution::answer::{
    Addition, AdjustmentOutcome, Answer, Assumption, Budget, BudgetLine, Caution, Comparison,
    ConstantsUsed, EquivalencePoint, Explanation, Fit, Fitted, HandVerdict, IndicatorEndPoint,
    MixingOutcome, ModelFacts, Outcome, Overshoot, PreparationOutcome, ShortcutResult, Simulation,
    TitrationOutcome,
};

/// Phosphoric acid half way to its second step, with everything that a speciation can carry.
pub(super) fn speciation() -> (Statement, Answer) {
    let text = "label: rb-118\ntask: speciation\ncontents:\n  sodium dihydrogen phosphate: 20 mmol/L\n  disodium hydrogen phosphate: 30 mmol/L\n\
                method: SOP-114 rev 3\nequipment: [balance B-04, pH meter M-2]\nnotes: first of two\n";
    let mut answer = answer(&Phosphate::new(0.050, 0.080), Outcome::Speciation);
    answer.budget = Some(budget());
    answer.simulation = Some(Simulation {
        draws: 100_000,
        seed: 118,
        mean: 7.0012,
        standard: 0.0121,
        interval: (6.977, 7.025),
    });
    answer.shortcuts = vec![ShortcutResult {
        shortcut: ShortcutName::HendersonHasselbalch,
        ph: 7.3741,
        shift: 0.41,
        limit: 0.02,
        condition:
            "thermodynamic pK with concentrations; holds only where activity coefficients are 1"
                .to_owned(),
    }];
    answer.hand_value = Some(HandVerdict {
        recorded: "7.37".to_owned(),
        by: ShortcutName::HendersonHasselbalch,
        shortcut_gives: Some(7.3741),
        shift: 0.41,
        limit: 0.02,
        stands: false,
        reason: "Activity coefficients are not 1 at this ionic strength.".to_owned(),
    });
    answer.comparison = Some(Comparison {
        reading: "7.02 ± 0.02 (k=2)".to_owned(),
        difference: 0.012,
        expanded: 0.031,
        agrees: true,
        acceptance: Some((true, "7.00 ± 0.05".to_owned())),
        explanations: vec![Explanation {
            input: InputId::new("contents").within("sodium dihydrogen phosphate"),
            stated: "20 mmol/L".to_owned(),
            needed: Some(19.3),
            relative_change: Some(-0.035),
        }],
        remarks: vec!["Read at 24.6 °C, 0.4 K below the block's temperature.".to_owned()],
    });
    (statement(text), answer)
}

/// A buffer made of two stocks.
pub(super) fn preparation() -> (Statement, Answer) {
    let text = "label: mp-7\ntask: preparation\ntarget:\n  pH: 7.00\n  volume: 2.000 L\n  concentration: 50.0 mmol/L\nfrom:\n  \
                - substance: sodium dihydrogen phosphate\n    lot: K-2291\n    expiry: 2027-03\n  - disodium hydrogen phosphate\n";
    let additions = vec![
        addition(
            "sodium dihydrogen phosphate",
            4.799_321_7,
            4.7993,
            4,
            "g",
            -0.0034,
        ),
        addition(
            "disodium hydrogen phosphate",
            8.517_9,
            8.5179,
            4,
            "g",
            0.0036,
        ),
    ];
    let made = PreparationOutcome {
        additions,
        volume: 2.0,
        ph_at_preparation: 7.000_04,
        ph_at_use: 7.064,
        temperature_of_use_c: 4.0,
        target_ph: 7.06,
        ph_per_kelvin: -0.0028,
        ph_as_weighed: Some(7.0653),
        suggestions: Vec::new(),
    };
    let answer = answer(
        &Phosphate::new(0.050, 0.080),
        Outcome::Preparation(Box::new(made)),
    );
    (statement(text), answer)
}

/// An addition of acid to a buffer.
pub(super) fn adjustment() -> (Statement, Answer) {
    let text = "label: ad-1\ntask: adjustment\nstart:\n  volume: 500 mL\n  contents:\n    disodium hydrogen phosphate: 50 mmol/L\nwith:\n  \
                substance: hydrochloric acid\n  concentration: 1.000 mol/L\ntarget:\n  pH: 7.00\n";
    let adjusted = AdjustmentOutcome {
        additions: vec![addition(
            "hydrochloric acid",
            10.2163,
            10.22,
            2,
            "mL",
            -0.021,
        )],
        ph_before: 9.02,
        ph_after: 7.0003,
        ml_per_hundredth: 0.1143,
        drops_per_hundredth: 2.29,
        steps: vec![(5.0, 7.61), (9.0, 7.12)],
        overshoot: vec![Overshoot {
            what: "one drop too much".to_owned(),
            ph: 6.9959,
            remedy: "0.05 mL of 1.000 mol/L sodium hydroxide".to_owned(),
        }],
        explanations: Vec::new(),
    };
    let mut answer = answer(
        &Phosphate::new(0.050, 0.080),
        Outcome::Adjustment(Box::new(adjusted)),
    );
    answer.budget = Some(budget());
    (statement(text), answer)
}

/// A mixture and its dilutions.
pub(super) fn mixing() -> (Statement, Answer) {
    let text = "label: mix-2\ntask: mixing\nportions:\n  - volume: 100.0 mL\n    contents:\n      phosphoric acid: 0.100 mol/L\n  \
                - volume: 400.0 mL\n    contents: water\n";
    let series = [0.005, 0.0005].map(|total| Phosphate::new(total, 1.6 * total).state());
    let mixed = MixingOutcome {
        volume: 0.5,
        series: series.to_vec(),
    };
    (
        statement(text),
        answer(&Phosphate::new(0.050, 0.080), Outcome::Mixing(mixed)),
    )
}

/// A titration of phosphoric acid with readings and their fit.
pub(super) fn titration() -> (Statement, Answer) {
    let text = "label: run-17\ntask: titration\nsample:\n  volume: 25.00 mL\n  contents:\n    phosphoric acid: 0.0320 mol/L\ntitrant:\n  \
                contents:\n    sodium hydroxide: 0.1000 mol/L\nto: 20.00 mL\nreadings: readings/run-17.csv\nfit: [phosphoric acid]\n";
    let points = solved::curve(25.0, 0.0320, 0.1000, 200);
    let at = |volume: f64| {
        points
            .iter()
            .min_by(|a, b| {
                (a.volume_ml - volume)
                    .abs()
                    .total_cmp(&(b.volume_ml - volume).abs())
            })
            .copied()
            .unwrap()
    };
    let equivalence = |what: &str, volume: f64| EquivalencePoint {
        what: what.to_owned(),
        volume_ml: volume,
        ph: at(volume).ph,
        slope: at(volume).slope,
        steepest_ml: Some(volume - 0.01),
    };
    let outcome = TitrationOutcome {
        unknown_indicators: Vec::new(),
        equivalence_points: vec![
            equivalence("first proton of phosphoric acid", 8.0),
            equivalence("second proton of phosphoric acid", 16.0),
        ],
        indicators: vec![IndicatorEndPoint {
            indicator: "methyl red".to_owned(),
            range: (4.4, 6.2),
            equivalence_point: 0,
            volumes_ml: (8.4, 8.1),
            error_percent: 1.21,
        }],
        fit: Some(fit()),
        points,
    };
    let mut answer = answer(
        &Phosphate::new(0.0320, 0.0),
        Outcome::Titration(Box::new(outcome)),
    );
    answer.distribution = None;
    (statement(text), answer)
}

fn fit() -> Fit {
    let one = |quantity: &str, value, unit, standard_error| Fitted {
        quantity: quantity.to_owned(),
        value,
        unit,
        standard_error,
    };
    Fit {
        fitted: vec![
            one("phosphoric acid", 0.031_982_4, "mol/L", 0.000_021_3),
            one("pK 2 of phosphoric acid", 7.2012, "", 0.0031),
        ],
        correlation: vec![vec![1.0, -0.31], vec![-0.31, 1.0]],
        residuals: vec![0.004, -0.006, 0.002, 0.011, -0.003],
        residual_standard_deviation: 0.0063,
        degrees_of_freedom: 3,
        runs_probability: 0.42,
        outliers: vec![4],
        end_points: vec![("first derivative".to_owned(), 7.98)],
        warnings: vec!["Five readings are few.".to_owned()],
    }
}

/// An answer round a solved state.
fn answer(solution: &Phosphate, outcome: Outcome) -> Answer {
    Answer {
        model: ModelFacts {
            activity: ActivityChoice::Davies,
            choice: None,
            debye_hueckel_a: 0.5092,
            debye_hueckel_b: 3.283,
            pkw: 13.995,
            temperature_c: 25.0,
            density: solved::DENSITY,
            permittivity: 78.41,
        },
        outcome,
        distribution: Some(solution.distribution()),
        budget: None,
        simulation: None,
        shortcuts: Vec::new(),
        hand_value: None,
        comparison: None,
        constants: ConstantsUsed {
            ligands: vec![solution.ligand.clone()],
            pk_at_temperature: solution.pk_at_temperature(),
            ..ConstantsUsed::default()
        },
        assumptions: vec![Assumption {
            statement: "closed to the air".to_owned(),
            alternative: Some(("carbon dioxide of 420 ppm".to_owned(), 6.9803)),
            cost: Some(-0.0009),
        }],
        cautions: vec![Caution {
            name: "beyond-model-range",
            sentence: "Ionic strength 0.11 mol/kg with multivalent ions: Davies may be off by some hundredths."
                .to_owned(),
        }],
        liquid: Composition::water(),
        state: solution.state(),
    }
}

fn budget() -> Budget {
    Budget {
        lines: vec![BudgetLine {
            what: "sodium dihydrogen phosphate".to_owned(),
            input: Some(InputId::new("contents")),
            value: "20 mmol/L ± 0.2 mmol/L (k=2)".to_owned(),
            standard: 0.1,
            unit: "mmol/L".to_owned(),
            sensitivity: -0.0213,
            share: 0.031,
            degrees_of_freedom: None,
            origin: "stated".to_owned(),
        }],
        standard: 0.0121,
        effective_degrees_of_freedom: None,
        k: 2.0,
        expanded: 0.0242,
    }
}

fn addition(
    substance: &str,
    amount: f64,
    rounded: f64,
    decimals: u8,
    unit: &'static str,
    ph_per_percent: f64,
) -> Addition {
    Addition {
        substance: substance.to_owned(),
        amount,
        rounded,
        decimals,
        unit,
        ph_per_percent,
    }
}
