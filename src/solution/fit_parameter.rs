//! What a fit may determine, and what of sample and titrant it moves for that.

use crate::problem::{
    Composition, Content, ContentAmount, Corrections, FitParameter, Ingredient, Input, InputId,
    Strength, Titration, Trace,
};
use crate::quantity::{Decimal, Measured, Unit};
use crate::solution::Unsolvable;
use crate::solution::assembly::Assembly;
use crate::solution::burette::Titrated;
use crate::solution::conclusion::Bench;
use crate::solution::fit::{Lever, Parameter};
use crate::substance::Catalogue;
use std::sync::Arc;

/// What a wanted quantity moves.
///
/// # Errors
/// [`Unsolvable::Fit`] where sample and titrant have no such thing.
pub(super) fn parameter(
    bench: &Bench<'_>,
    task: &Titration,
    titrated: &Titrated,
    wanted: &FitParameter,
) -> Result<Parameter, Unsolvable> {
    let plain = |quantity: &str, unit, lever, start, step| Parameter {
        quantity: quantity.to_owned(),
        unit,
        lever,
        start,
        step,
    };
    match wanted {
        FitParameter::SampleConcentration(name) => {
            factor(bench, titrated, &task.sample, Some(name), "sample")
        }
        FitParameter::TitrantConcentration(name) => {
            let name = Some(name.as_str()).filter(|name| !name.is_empty());
            factor(bench, titrated, &task.titrant, name, "titrant")
        }
        FitParameter::Pk { ligand, step } => {
            let row = titrated
                .assembly
                .pks
                .iter()
                .position(|row| row.ligand.name == *ligand && row.step + 1 == *step);
            let row = row.ok_or_else(|| absent(&format!("pKa {step} of {ligand}")))?;
            let start = titrated
                .assembly
                .pks
                .get(row)
                .map_or(0.0, |pk| pk.found.value);
            let quantity = format!("pKa {step} of {ligand}");
            Ok(plain(&quantity, "", Lever::Pk { row }, start, 1e-4))
        }
        FitParameter::CarbonateInTitrant => {
            let index = titrated
                .assembly
                .variable(&carbonate_id())
                .ok_or_else(|| absent("carbonate in titrant"))?;
            let lever = Lever::Value { index };
            Ok(plain("carbonate in titrant", "mol/L", lever, 1e-4, 1e-7))
        }
        FitParameter::ElectrodeOffset => {
            Ok(plain("electrode offset", "pH", Lever::Offset, 0.0, 1e-3))
        }
        FitParameter::ElectrodeSlope => {
            Ok(plain("electrode slope", "%", Lever::Slope, 100.0, 1e-2))
        }
    }
}

fn absent(what: &str) -> Unsolvable {
    Unsolvable::Fit {
        reason: format!("{what} is nothing that sample and titrant have"),
    }
}

/// The amount of a substance of a liquid as a factor on what was stated; told as its amount concentration in that liquid.
fn factor(
    bench: &Bench<'_>,
    titrated: &Titrated,
    liquid: &Composition,
    name: Option<&str>,
    place: &str,
) -> Result<Parameter, Unsolvable> {
    let content = content_of(liquid, name).ok_or_else(|| absent(name.unwrap_or(place)))?;
    let what = format!("{} in {place}", content.form.name);
    let id = amount_id(content);
    let alone = bench.assemble(liquid)?;
    let (Some(index), Some(own)) = (titrated.assembly.variable(id), alone.variable(id)) else {
        return Err(absent(&what));
    };
    let variable = titrated.assembly.recipe.variables.get(index.place());
    let stated = variable.map_or(0.0, |variable| variable.value.to_f64());
    Ok(Parameter {
        unit: "mol/L",
        lever: Lever::Factor {
            index,
            stated,
            at_one: brought(&alone, content, own.place()),
        },
        start: 1.0,
        step: 1e-5,
        quantity: what,
    })
}

/// Amount concentration in mol/L of a content in its liquid: linear in its amount, so derivative times value.
fn brought(assembly: &Assembly, content: &Content, place: usize) -> f64 {
    let worked = assembly.recipe.tape.evaluate(&assembly.stated());
    let Some((component, count)) = content.form.contains.first() else {
        return 0.0;
    };
    let node = assembly
        .parts
        .iter()
        .find(|part| part.component.name() == component.name())
        .and_then(|part| part.concentration);
    let Some(node) = node else { return 0.0 };
    let gradient = assembly.recipe.tape.gradient(&worked, &[(node, 1.0)]);
    let value = assembly.recipe.variables.get(place);
    let value = value.map_or(0.0, |variable| variable.value.to_f64());
    gradient.get(place).copied().unwrap_or(0.0) * value / f64::from(*count)
}

fn content_of<'a>(liquid: &'a Composition, name: Option<&str>) -> Option<&'a Content> {
    liquid
        .ingredients
        .iter()
        .find_map(|ingredient| match ingredient {
            Ingredient::Substance(content) => {
                let fits = name.is_none_or(|name| content.form.name == name);
                fits.then_some(content.as_ref())
            }
            Ingredient::Solution(portion) => content_of(&portion.composition, name),
            Ingredient::Water(_) => None,
        })
}

fn amount_id(content: &Content) -> &InputId {
    match &content.amount {
        ContentAmount::Concentration(input) => &input.id,
        ContentAmount::Molality(input) => &input.id,
        ContentAmount::MassConcentration(input) => &input.id,
        ContentAmount::Mass(input) => &input.id,
        ContentAmount::Amount(input) => &input.id,
        ContentAmount::Stock { strength, .. } => match strength {
            Strength::Concentration(input) => &input.id,
            Strength::MassConcentration(input) => &input.id,
            Strength::MassFraction { fraction, .. } => &fraction.id,
        },
    }
}

/// The identity of carbonate supposed in the titrant.
fn carbonate_id() -> InputId {
    InputId::new("titrant").within("carbonate")
}

/// The titrant with a little carbon dioxide in it, where carbonate is to be determined: what it takes up from the air.
///
/// # Errors
/// [`Unsolvable::Library`].
pub(super) fn with_carbonate(
    titrant: &Composition,
    wanted: &[FitParameter],
) -> Result<Composition, Unsolvable> {
    let mut titrant = titrant.clone();
    if !wanted.contains(&FitParameter::CarbonateInTitrant) {
        return Ok(titrant);
    }
    let form = Catalogue::embedded()?.find("carbon dioxide").ok();
    let little = Measured::new(Decimal::new(false, 1, -4), Unit::MolePerLitre);
    if let Some((form, little)) = form.zip(little) {
        titrant
            .ingredients
            .push(Ingredient::Substance(Box::new(Content {
                id: carbonate_id(),
                form: Arc::clone(form),
                amount: ContentAmount::Concentration(Input::new(carbonate_id(), little)),
                corrections: Corrections::default(),
                trace: Trace::default(),
            })));
    }
    Ok(titrant)
}
