//! Temperature, model, air and what was put in, as templates see them.

use crate::problem::{
    ActivityChoice, Air, BufferChoice, Composition, Content, Ingredient, Origin, Problem, Source,
    SourceKind, Statement, Trace,
};
use crate::solution::answer::Answer;
use serde::Serialize;

/// The conditions of a block.
#[derive(Debug, Serialize)]
pub(in crate::report) struct ConditionsView {
    /// As written: `25 °C`.
    temperature: String,
    /// Where it comes from: `block`, `notebook`, `program`.
    temperature_stated_by: &'static str,
    /// The activity model's word.
    activity: &'static str,
    /// Where it comes from.
    activity_stated_by: &'static str,
    /// The model in words with its equation.
    activity_in_words: &'static str,
    /// Why this model, where the best was asked for.
    choice: Option<String>,
    /// Debye-Hueckel A on the lg scale in (kg/mol)^½.
    debye_hueckel_a: f64,
    /// Debye-Hueckel B in (kg/mol)^½ per nanometre, where the model uses it.
    debye_hueckel_b: Option<f64>,
    /// pKw on the molality scale at zero ionic strength.
    pkw: f64,
    /// Density of water in kg/L.
    density: f64,
    /// Relative permittivity of water.
    permittivity: f64,
    /// Carbon dioxide of the air as written, or none for a closed solution.
    carbon_dioxide: Option<String>,
}

/// A substance with its lot.
#[derive(Debug, Serialize)]
pub(in crate::report) struct LotView {
    substance: String,
    lot: Option<String>,
    expiry: Option<String>,
}

impl ConditionsView {
    pub(super) fn of(statement: &Statement, answer: &Answer) -> Self {
        let conditions = &statement.conditions;
        let temperature = &conditions.temperature.value.measured;
        let model = &answer.model;
        Self {
            temperature: format!("{} {}", temperature.decimal, temperature.unit.symbol())
                .replace('-', "−"),
            temperature_stated_by: origin(conditions.temperature.origin),
            activity: model.activity.name(),
            activity_stated_by: origin(conditions.activity.origin),
            activity_in_words: in_words(model.activity),
            choice: model.choice.clone(),
            debye_hueckel_a: model.debye_hueckel_a,
            debye_hueckel_b: (model.activity == ActivityChoice::DebyeHueckel)
                .then_some(model.debye_hueckel_b),
            pkw: model.pkw,
            density: model.density,
            permittivity: model.permittivity,
            carbon_dioxide: match &conditions.air.value {
                Air::Closed => None,
                Air::CarbonDioxide(pressure) => Some(pressure.measured.to_string()),
                Air::CarbonDioxideFraction(fraction) => Some(fraction.measured.to_string()),
            },
        }
    }
}

/// Every substance that was stated with a lot or an expiry date, in the order of the block; another block's are its own affair.
pub(super) fn lots(statement: &Statement) -> Vec<LotView> {
    let mut lots = Vec::new();
    match &statement.problem {
        Problem::Speciation(asked) => of_composition(&asked.composition, &mut lots),
        Problem::Mixing(asked) => of_composition(&asked.mixture, &mut lots),
        Problem::Titration(asked) => {
            of_composition(&asked.sample, &mut lots);
            of_composition(&asked.titrant, &mut lots);
        }
        Problem::Adjustment(asked) => {
            of_composition(&asked.start, &mut lots);
            of_source(&asked.with, &mut lots);
            if let Some(source) = &asked.back_with {
                of_source(source, &mut lots);
            }
        }
        Problem::Preparation(asked) => {
            if let BufferChoice::From(sources) = &asked.buffer {
                for source in sources {
                    of_source(source, &mut lots);
                }
            }
        }
    }
    lots
}

fn of_composition(composition: &Composition, lots: &mut Vec<LotView>) {
    for ingredient in &composition.ingredients {
        match ingredient {
            Ingredient::Substance(content) => of_content(content, lots),
            Ingredient::Solution(portion) if portion.reference.is_none() => {
                of_composition(&portion.composition, lots);
            }
            Ingredient::Solution(_) | Ingredient::Water(_) => {}
        }
    }
}

fn of_content(content: &Content, lots: &mut Vec<LotView>) {
    push(&content.form.name, &content.trace, lots);
}

fn of_source(source: &Source, lots: &mut Vec<LotView>) {
    match &source.kind {
        SourceKind::Solid { form, .. } | SourceKind::Stock { form, .. } => {
            push(&form.name, &source.trace, lots);
        }
        SourceKind::Solution(portion) => {
            if let Some(reference) = &portion.reference {
                push(&reference.label, &source.trace, lots);
            }
        }
    }
}

fn push(substance: &str, trace: &Trace, lots: &mut Vec<LotView>) {
    if trace.lot.is_some() || trace.expiry.is_some() {
        lots.push(LotView {
            substance: substance.to_owned(),
            lot: trace.lot.clone(),
            expiry: trace.expiry.clone(),
        });
    }
}

fn origin(origin: Origin) -> &'static str {
    match origin {
        Origin::Block => "block",
        Origin::Notebook => "notebook",
        Origin::Program => "program",
    }
}

/// The model in words; the equations are those of `equilibrium::activity`, which names their sources.
fn in_words(model: ActivityChoice) -> &'static str {
    match model {
        ActivityChoice::Ideal => "all activity coefficients taken as 1",
        ActivityChoice::DebyeHueckel => {
            "activity coefficients after the extended Debye-Hückel equation, lg γ = −A z² √I/(1 + B å √I), with an ion size å for each ion"
        }
        ActivityChoice::Guentelberg => {
            "activity coefficients after Güntelberg, lg γ = −A z² √I/(1 + √I)"
        }
        ActivityChoice::Davies => {
            "activity coefficients after Davies, lg γ = −A z² (√I/(1 + √I) − 0.3 I)"
        }
        ActivityChoice::BatesGuggenheim => {
            "activity coefficients by the Bates-Guggenheim convention, lg γ = −A z² √I/(1 + 1.5 √I)"
        }
        ActivityChoice::Sit => "activity coefficients by specific ion interaction theory",
        ActivityChoice::Pitzer => "activity coefficients after Pitzer",
        ActivityChoice::Best => "activity coefficients by the most specific model available",
    }
}
