//! Statements for tests: a solution from names and figures.

use crate::problem::{
    ActivityChoice, Air, Annotations, Composition, Conditions, Content, ContentAmount, Corrections,
    Ingredient, Input, InputId, Label, MadeUp, Origin, Problem, Reporting, Source, SourceKind,
    Speciation, Stated, Statement, Strength, Trace, UncertaintyMode,
};
use crate::quantity::{Decimal, Dimension, Measured, RoundingRule, Spread, Uncertainty, Unit};
use crate::substance::{Catalogue, Form};
use std::collections::BTreeSet;
use std::sync::Arc;

pub(super) fn decimal(text: &str) -> Decimal {
    Decimal::parse(text).unwrap()
}

/// An input without uncertainty.
pub(super) fn input<D: Dimension>(id: &str, text: &str, unit: Unit) -> Input<D> {
    Input::new(
        InputId::new(id),
        Measured::new(decimal(text), unit).unwrap(),
    )
}

/// An input with a standard uncertainty.
pub(super) fn uncertain<D: Dimension>(id: &str, text: &str, u: &str, unit: Unit) -> Input<D> {
    let measured = Measured::new(decimal(text), unit)
        .unwrap()
        .with(Uncertainty {
            stated: decimal(u),
            relative: false,
            spread: Spread::Standard,
            degrees_of_freedom: None,
        });
    Input::new(InputId::new(id), measured)
}

pub(super) fn form(name: &str) -> Arc<Form> {
    Arc::clone(Catalogue::embedded().unwrap().find(name).unwrap())
}

pub(super) fn content(name: &str, amount: ContentAmount) -> Ingredient {
    Ingredient::Substance(Box::new(Content {
        id: InputId::new(name),
        form: form(name),
        amount,
        corrections: Corrections::default(),
        trace: Trace::default(),
    }))
}

/// A composition of substances with their molalities.
pub(super) fn molal(contents: &[(&str, &str)]) -> Composition {
    composed(contents, |id, figure| {
        ContentAmount::Molality(input(id, figure, Unit::MolePerKilogram))
    })
}

/// A composition of substances with their amount concentrations.
pub(super) fn molar(contents: &[(&str, &str)]) -> Composition {
    composed(contents, |id, figure| {
        ContentAmount::Concentration(input(id, figure, Unit::MolePerLitre))
    })
}

fn composed(
    contents: &[(&str, &str)],
    amount: impl Fn(&str, &str) -> ContentAmount,
) -> Composition {
    Composition {
        made_up: MadeUp::Unstated,
        ingredients: contents
            .iter()
            .map(|(name, figure)| content(name, amount(name, figure)))
            .collect(),
    }
}

/// A statement at a temperature in degrees Celsius, with Davies' equation, closed to air.
pub(super) fn statement(problem: Problem, celsius: &str) -> Statement {
    Statement {
        label: Label::new("specimen").unwrap(),
        conditions: Conditions {
            temperature: stated(input("temperature", celsius, Unit::Celsius)),
            activity: stated(ActivityChoice::Davies),
            air: stated(Air::Closed),
            uncertainty: stated(UncertaintyMode::Budget),
            accepted: BTreeSet::new(),
            pkw: None,
            carbonate: Catalogue::embedded()
                .unwrap()
                .ligand("carbonic acid")
                .cloned(),
        },
        problem,
        hand_value: None,
        measured: None,
        reporting: Reporting {
            ph_decimals: 2,
            significant_figures: 4,
            rounding: RoundingRule::HalfEven,
        },
        annotations: Annotations::default(),
    }
}

pub(super) fn stated<T>(value: T) -> Stated<T> {
    Stated {
        value,
        origin: Origin::Block,
    }
}

/// A speciation of a composition.
pub(super) fn speciation(composition: Composition, celsius: &str) -> Statement {
    statement(Problem::Speciation(Speciation { composition }), celsius)
}

/// A phosphate buffer with uncertain mass, volume and purity.
pub(super) fn buffer_with_uncertainty() -> Composition {
    Composition {
        made_up: MadeUp::To(uncertain("volume", "1.000", "0.002", Unit::Litre)),
        ingredients: vec![
            content(
                "sodium dihydrogen phosphate dihydrate",
                ContentAmount::Mass(uncertain("acid mass", "3.9003", "0.05", Unit::Gram)),
            ),
            content(
                "disodium hydrogen phosphate",
                ContentAmount::Mass(uncertain("base mass", "3.549", "0.05", Unit::Gram)),
            ),
        ],
    }
}

/// A solid to be weighed.
pub(super) fn solid(name: &str) -> Source {
    Source {
        id: InputId::new("from").within(name),
        kind: SourceKind::Solid {
            form: form(name),
            corrections: Corrections::default(),
        },
        trace: Trace::default(),
    }
}

/// A stock to be pipetted, in mol/L.
pub(super) fn stock(name: &str, concentration: &str) -> Source {
    let id = InputId::new("from").within(name);
    Source {
        kind: SourceKind::Stock {
            form: form(name),
            strength: Strength::Concentration(input(
                &format!("from / {name} / concentration"),
                concentration,
                Unit::MolePerLitre,
            )),
            corrections: Corrections::default(),
        },
        id,
        trace: Trace::default(),
    }
}
