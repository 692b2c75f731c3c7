//! Stated assumptions, each with what it costs in pH.

use crate::problem::{Air, Composition, Ingredient, MadeUp, Origin};
use crate::solution::Unsolvable;
use crate::solution::answer::Assumption;
use crate::solution::assembly::{Assembly, Solved};
use crate::solution::conclusion::Bench;
use crate::solution::dissociation::Route;

/// pH of the same liquid under other surroundings, each computed in full.
#[derive(Clone, Debug)]
pub(super) struct Surroundings {
    /// pH of the result.
    pub(super) ph: f64,
    /// Name of the second model and its pH.
    pub(super) second_model: (&'static str, f64),
    /// Change of pH with temperature in 1/K.
    pub(super) ph_per_kelvin: f64,
    /// pH in equilibrium with air of 420 ppm CO₂, or closed where the block says open.
    pub(super) other_air: Option<f64>,
}

/// Mole fraction of CO₂ in outdoor air that an open beaker is compared with.
///
/// Common practice; about the annual mean of the early 2020s.
const OUTDOOR_AIR: f64 = 420e-6;

/// Volume that a mole of solute takes from the water of a litre, in L/mol; common practice, 0.02 to 0.04 for common salts.
const SOLUTE_VOLUME: f64 = 0.03;

/// Contraction or expansion on mixing that additive volumes are tested with.
const VOLUME_CHANGE: f64 = 0.005;

impl Surroundings {
    /// Computes them.
    ///
    /// # Errors
    /// [`Unsolvable`] where one of them has no certified solution.
    pub(super) fn of(
        bench: &Bench<'_>,
        assembly: &Assembly,
        solved: &Solved,
    ) -> Result<Self, Unsolvable> {
        let setting = &assembly.setting;
        let (name, model) = bench.chosen.second;
        let second = assembly.under(&setting.with_model(model))?.stated_ph()?;
        let other_air = match setting.carbon_dioxide {
            None => Some(OUTDOOR_AIR),
            Some(_) => None,
        };
        Ok(Self {
            ph: solved.certified.ph(),
            second_model: (name, second),
            ph_per_kelvin: ph_per_kelvin(assembly)?,
            other_air: assembly
                .under(&setting.with_carbon_dioxide(other_air))?
                .stated_ph()
                .ok(),
        })
    }
}

/// Change of pH with temperature in 1/K, by a central difference over 1 K, one-sided at the ends of the range of liquid water.
pub(super) fn ph_per_kelvin(assembly: &Assembly) -> Result<f64, Unsolvable> {
    let setting = &assembly.setting;
    let lower = (setting.temperature - 0.5).max(273.15);
    let upper = (setting.temperature + 0.5).min(373.15);
    let ph_at = |temperature: f64| assembly.under(&setting.at(temperature))?.stated_ph();
    Ok((ph_at(upper)? - ph_at(lower)?) / (upper - lower))
}

/// The assumptions of a result.
///
/// # Errors
/// [`Unsolvable`] where an alternative has no certified solution.
pub(super) fn list(
    bench: &Bench<'_>,
    assembly: &Assembly,
    surroundings: &Surroundings,
    liquid: &Composition,
) -> Result<Vec<Assumption>, Unsolvable> {
    let cost = |statement: String, alternative: &str, ph: Option<f64>| Assumption {
        statement,
        alternative: ph.map(|ph| (alternative.to_owned(), ph)),
        cost: ph.map(|ph| ph - surroundings.ph),
    };
    let mut list = vec![
        temperature(bench, surroundings, &cost),
        model(bench, surroundings, &cost),
        air(bench, surroundings, &cost),
    ];
    list.extend(molality(assembly, &cost));
    let open = matches!(
        bench.statement.conditions.air.value,
        Air::CarbonDioxideFraction(_)
    );
    if let Some(pressure) = assembly.setting.carbon_dioxide.filter(|_| open) {
        let lower = assembly.setting.with_carbon_dioxide(Some(pressure * 0.97));
        list.push(cost(
                "The mole fraction of CO₂ is taken at one standard atmosphere, without the water vapour's share."
                    .to_owned(),
                "at a pressure lower by 3 %",
                assembly.under(&lower)?.stated_ph().ok(),
            ));
    }
    list.extend(constants_temperature(assembly, &cost));
    list.extend(conditional(assembly, &cost));
    if has_sum(liquid) {
        let mut values = assembly.stated();
        if let Some(density) = values.first_mut() {
            *density = *density * (1.0 - VOLUME_CHANGE);
        }
        list.push(cost(
            "Volumes of the portions are additive.".to_owned(),
            "the mixture 0.5 % smaller",
            assembly
                .solve(&values)
                .ok()
                .map(|solved| solved.certified.ph()),
        ));
    }
    list.push(Assumption {
        statement: "Ion pairs are not counted: the constants were extrapolated without them."
            .to_owned(),
        alternative: None,
        cost: None,
    });
    Ok(list)
}

type Cost<'a> = dyn Fn(String, &str, Option<f64>) -> Assumption + 'a;

fn origin(origin: Origin) -> &'static str {
    match origin {
        Origin::Block => "stated",
        Origin::Notebook => "assumed: the notebook's setting",
        Origin::Program => "assumed: the program's default",
    }
}

fn temperature(bench: &Bench<'_>, surroundings: &Surroundings, cost: &Cost<'_>) -> Assumption {
    let stated = &bench.statement.conditions.temperature;
    cost(
        format!(
            "The temperature is {} ({}).",
            stated.value.measured,
            origin(stated.origin)
        ),
        "1 K warmer",
        Some(surroundings.ph + surroundings.ph_per_kelvin),
    )
}

fn model(bench: &Bench<'_>, surroundings: &Surroundings, cost: &Cost<'_>) -> Assumption {
    let (name, ph) = surroundings.second_model;
    cost(
        format!(
            "Activity coefficients follow the model {} ({}).",
            bench.chosen.choice.name(),
            origin(bench.statement.conditions.activity.origin)
        ),
        name,
        Some(ph),
    )
}

fn air(bench: &Bench<'_>, surroundings: &Surroundings, cost: &Cost<'_>) -> Assumption {
    let air = &bench.statement.conditions.air;
    let (statement, alternative) = match &air.value {
        Air::Closed => (
            "The solution is closed to the air".to_owned(),
            "in equilibrium with air of 420 ppm CO₂",
        ),
        Air::CarbonDioxide(pressure) => (
            format!(
                "The solution is in equilibrium with CO₂ at {}",
                pressure.measured
            ),
            "closed to the air",
        ),
        Air::CarbonDioxideFraction(fraction) => (
            format!(
                "The solution is in equilibrium with air of {} CO₂",
                fraction.measured
            ),
            "closed to the air",
        ),
    };
    cost(
        format!("{statement} ({}).", origin(air.origin)),
        alternative,
        surroundings.other_air,
    )
}

/// Molality is amount concentration divided by the density of water; tested with water displaced by the solutes.
fn molality(assembly: &Assembly, cost: &Cost<'_>) -> Option<Assumption> {
    let mut values = assembly.stated();
    let worked = assembly.recipe.tape.evaluate(&values);
    let solutes: f64 = assembly
        .parts
        .iter()
        .filter_map(|part| Some(worked.at(part.concentration?).to_f64()))
        .sum();
    let displaced = SOLUTE_VOLUME * solutes;
    if !(displaced > 0.0 && displaced < 0.5) {
        return None;
    }
    if let Some(density) = values.first_mut() {
        *density = *density * (1.0 - displaced);
    }
    let ph = assembly
        .solve(&values)
        .ok()
        .map(|solved| solved.certified.ph());
    Some(cost(
        format!(
            "Molality is amount concentration divided by the density of water, {:.5} kg/L.",
            assembly.density
        ),
        &format!("water displaced by the solutes, {:.2} %", 100.0 * displaced),
        ph,
    ))
}

/// What it would cost to leave the constants as they are at their own temperature.
fn constants_temperature(assembly: &Assembly, cost: &Cost<'_>) -> Option<Assumption> {
    let moved = |route: Route| !matches!(route, Route::OwnTemperature | Route::Unchanged);
    if !assembly.pks.iter().any(|pk| moved(pk.found.route)) {
        return None;
    }
    let own = assembly.with_pks(|pk| {
        let stated = pk.ligand.steps.get(pk.step);
        let stated = stated.map_or(pk.found.value, |step| step.preferred.pk.to_f64());
        stated + pk.found.to_zero_ionic_strength
    });
    Some(cost(
        "The constants are brought to the temperature by their published equation, or by enthalpy and heat capacity."
            .to_owned(),
        "constants as at their own temperature",
        assembly.ph_in(&own).ok(),
    ))
}

/// What it would cost to use conditional constants as they stand.
fn conditional(assembly: &Assembly, cost: &Cost<'_>) -> Option<Assumption> {
    let converted = |change: f64| change.abs() > 0.0;
    let names: Vec<String> = assembly
        .pks
        .iter()
        .filter(|pk| converted(pk.found.to_zero_ionic_strength))
        .map(|pk| format!("pK{} of {}", pk.step + 1, pk.ligand.name))
        .collect();
    if names.is_empty() {
        return None;
    }
    let as_stated = assembly.with_pks(|pk| pk.found.value - pk.found.to_zero_ionic_strength);
    Some(cost(
        format!(
            "Conditional constants, taken as quotients of concentrations, are brought to zero ionic strength with the block's model: {}.",
            names.join(", ")
        ),
        "taken as thermodynamic constants",
        assembly.ph_in(&as_stated).ok(),
    ))
}

fn has_sum(composition: &Composition) -> bool {
    matches!(composition.made_up, MadeUp::SumOfPortions)
        || composition.ingredients.iter().any(|ingredient| {
            matches!(ingredient, Ingredient::Solution(portion) if has_sum(&portion.composition))
        })
}
