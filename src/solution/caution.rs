//! Cautions: what a reader of the result has to know before using it.

use crate::problem::{ActivityChoice, Composition, Content, ContentAmount, Ingredient, Strength};
use crate::quantity::Dimension;
use crate::solution::answer::{Caution, State};
use crate::solution::assembly::{Assembly, CARBONIC_ACID, PkRow};
use crate::solution::assumption::Surroundings;
use crate::solution::conclusion::Bench;
use crate::solution::dissociation::Route;
use crate::substance::{Basis, Constant, Hazard, Kind};
use std::collections::BTreeSet;

/// One kind of caution, for `explain`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct CautionEntry {
    /// Its name.
    pub name: &'static str,
    /// What it means.
    pub meaning: &'static str,
    /// What to do about it.
    pub remedy: &'static str,
}

const fn entry(name: &'static str, meaning: &'static str, remedy: &'static str) -> CautionEntry {
    CautionEntry {
        name,
        meaning,
        remedy,
    }
}

/// Every caution that a result may carry.
pub const CAUTIONS: &[CautionEntry] = &[
    entry(
        "beyond-model-range",
        "The ionic strength is beyond what the activity model is good for: above 0.1 mol/kg with multivalent ions, above 0.5 otherwise.",
        "Take the difference to the second model as the size of the doubt; measure, or dilute.",
    ),
    entry(
        "conventional-ph-undefined",
        "Conventional pH is defined up to an ionic strength of 0.1 mol/kg; above it, a meter and a calculation may differ by the convention alone.",
        "Compare with readings only under the same convention; p[H] is given beside pH.",
    ),
    entry(
        "recalled-constant",
        "A constant was entered without its source being opened.",
        "Check the value against its source and adopt it.",
    ),
    entry(
        "constant-temperature",
        "A constant is used away from its temperature and nothing is known of its change.",
        "State an enthalpy or a value at this temperature.",
    ),
    entry(
        "conditional-constant",
        "A constant was determined at a stated ionic strength, not extrapolated to zero; it holds at that ionic strength.",
        "State a thermodynamic constant, or work near the constant's own ionic strength.",
    ),
    entry(
        "unstated-constant-kind",
        "The source of a constant does not say whether it was extrapolated to zero ionic strength.",
        "Look for a value whose conditions are known.",
    ),
    entry(
        "safety",
        "A substance can hurt; the usual caution is repeated.",
        "Follow the safety data sheet, local rules and qualified staff.",
    ),
    entry(
        "gas-on-acidifying",
        "At the pH of the result a gas is set free.",
        "Do not make it so, or only in a fume hood by qualified staff.",
    ),
    entry(
        "possible-precipitate",
        "Ions that form sparingly soluble salts or complexes meet; neither is computed.",
        "Check solubility; expect a lower pH than computed where a metal takes up the base.",
    ),
];

/// Ionic strengths in mol/kg above which a caution is due: with multivalent ions, and otherwise.
const RANGE_MULTIVALENT: f64 = 0.1;
const RANGE_UNIVALENT: f64 = 0.5;

/// Share of the ionic strength from which multivalent ions count.
const MULTIVALENT_SHARE: f64 = 0.01;

/// The cautions of a result.
pub(super) fn list(
    bench: &Bench<'_>,
    assembly: &Assembly,
    state: &State,
    surroundings: &Surroundings,
    liquid: &Composition,
) -> Vec<Caution> {
    let mut cautions = Vec::new();
    cautions.extend(model_range(bench, state, surroundings));
    if state.ionic_strength > 0.1 {
        cautions.push(Caution {
            name: "conventional-ph-undefined",
            sentence: format!(
                "Conventional pH is not defined above an ionic strength of 0.1 mol/kg; here it is {:.3} mol/kg, so pH is −lg a(H⁺) by the model.",
                state.ionic_strength
            ),
        });
    }
    cautions.extend(constants(bench, assembly, state));
    cautions.extend(hazards(liquid));
    cautions.extend(gases(assembly, state));
    cautions.extend(precipitates(assembly, state));
    cautions
}

fn model_range(bench: &Bench<'_>, state: &State, surroundings: &Surroundings) -> Option<Caution> {
    let multivalent: f64 = state
        .species
        .iter()
        .filter(|species| species.charge.abs() > 1)
        .map(|species| {
            0.5 * species.molality * f64::from(species.charge) * f64::from(species.charge)
        })
        .sum();
    let is_multivalent = multivalent > MULTIVALENT_SHARE * state.ionic_strength;
    let limit = if is_multivalent {
        RANGE_MULTIVALENT
    } else {
        RANGE_UNIVALENT
    };
    if state.ionic_strength <= limit {
        return None;
    }
    let (second, ph) = surroundings.second_model;
    let kind = if is_multivalent {
        "with multivalent ions"
    } else {
        "with univalent ions"
    };
    let model = match bench.chosen.choice {
        ActivityChoice::Ideal => "activity coefficients of 1",
        choice => choice.name(),
    };
    Some(Caution {
        name: "beyond-model-range",
        sentence: format!(
            "Ionic strength {:.3} mol/kg {kind} is beyond {limit} mol/kg, the range of the model ({model}); the model {second} gives pH {ph:.3}, {:+.3}.",
            state.ionic_strength,
            ph - state.ph
        ),
    })
}

fn constants(bench: &Bench<'_>, assembly: &Assembly, state: &State) -> Vec<Caution> {
    let stated = |pk: &PkRow| {
        pk.ligand
            .steps
            .get(pk.step)
            .map(|step| step.preferred.clone())
    };
    let names = |wanted: &dyn Fn(&PkRow, &Constant) -> bool| -> Option<String> {
        let names: Vec<String> = assembly
            .pks
            .iter()
            .filter(|pk| stated(pk).is_some_and(|constant| wanted(pk, &constant)))
            .map(|pk| format!("pK{} of {}", pk.step + 1, pk.ligand.name))
            .collect();
        (!names.is_empty()).then(|| names.join(", "))
    };
    let mut cautions = Vec::new();
    let recalled = names(&|_, constant| constant.basis == Basis::Recalled);
    cautions.extend(recalled.map(|names| Caution {
        name: "recalled-constant",
        sentence: format!("Recalled, not checked against the source: {names}."),
    }));
    let moved = names(&|pk, constant| {
        constant.basis != Basis::Recalled
            && matches!(pk.found.route, Route::Enthalpy | Route::Equation)
            && recalled_change(constant, pk.found.route)
    });
    cautions.extend(moved.map(|names| Caution {
        name: "recalled-constant",
        sentence: format!(
            "Change with temperature recalled, not checked against its source: {names}."
        ),
    }));
    let unmoved = names(&|pk, _| pk.found.route == Route::Unchanged);
    cautions.extend(unmoved.map(|names| Caution {
        name: "constant-temperature",
        sentence: format!(
            "Used away from its own temperature, without enthalpy or equation: {names}."
        ),
    }));
    let extrapolated = names(&|pk, _| pk.found.route == Route::EquationBeyondRange);
    cautions.extend(extrapolated.map(|names| Caution {
        name: "constant-temperature",
        sentence: format!("Its equation is used beyond its range of temperature: {names}."),
    }));
    let unstated = names(&|_, constant| constant.kind == Kind::Unstated);
    cautions.extend(unstated.map(|names| Caution {
        name: "unstated-constant-kind",
        sentence: format!("The source does not state the ionic strength: {names}."),
    }));
    let conditional = names(&|_, constant| matches!(constant.kind, Kind::Conditional { .. }));
    cautions.extend(conditional.map(|names| conditional_caution(assembly, state, &names)));
    cautions.extend(own_pkw(bench));
    cautions
}

fn recalled_change(constant: &Constant, route: Route) -> bool {
    match route {
        Route::Equation => constant
            .equation
            .as_ref()
            .is_some_and(|equation| equation.basis == Basis::Recalled),
        _ => constant
            .thermal
            .as_ref()
            .is_some_and(|thermal| thermal.basis == Basis::Recalled),
    }
}

fn conditional_caution(assembly: &Assembly, state: &State, names: &str) -> Caution {
    let own: Vec<String> = assembly
        .pks
        .iter()
        .filter_map(|pk| match &pk.ligand.steps.get(pk.step)?.preferred.kind {
            Kind::Conditional { ionic_strength, .. } => Some(ionic_strength.to_string()),
            Kind::Thermodynamic | Kind::Unstated => None,
        })
        .collect::<BTreeSet<String>>()
        .into_iter()
        .collect();
    Caution {
        name: "conditional-constant",
        sentence: format!(
            "Determined at an ionic strength of {} mol/L, here {:.4} mol/kg; brought over with the block's model: {names}.",
            own.join(", "),
            state.ionic_strength
        ),
    }
}

fn own_pkw(bench: &Bench<'_>) -> Option<Caution> {
    let constant = bench.statement.conditions.pkw.as_ref()?;
    let (_, route) = super::dissociation::at_temperature(constant, bench.setting.temperature);
    (route == Route::Unchanged).then(|| Caution {
        name: "constant-temperature",
        sentence: format!(
            "The stated pKw is for {} °C and is used at {:.2} °C.",
            constant.temperature_c,
            bench.setting.temperature - 273.15
        ),
    })
}

/// Amount concentration in mol/L from which acids and bases are called concentrated.
const CONCENTRATED: f64 = 0.5;

fn hazards(liquid: &Composition) -> Vec<Caution> {
    let mut found = BTreeSet::new();
    collect_hazards(liquid, &mut found);
    found
        .into_iter()
        .map(|hazard| Caution {
            name: "safety",
            sentence: format!(
                "{} The safety data sheet, local rules and qualified staff decide.",
                hazard.sentence()
            ),
        })
        .collect()
}

fn collect_hazards(liquid: &Composition, found: &mut BTreeSet<Hazard>) {
    for ingredient in &liquid.ingredients {
        match ingredient {
            Ingredient::Substance(content) => {
                let concentrated = is_concentrated(content);
                found.extend(content.form.all_hazards().into_iter().filter(|hazard| {
                    concentrated || !matches!(hazard, Hazard::StrongAcid | Hazard::StrongBase)
                }));
            }
            Ingredient::Solution(portion) => collect_hazards(&portion.composition, found),
            Ingredient::Water(_) => {}
        }
    }
}

fn is_concentrated(content: &Content) -> bool {
    match &content.amount {
        ContentAmount::Mass(_) => true,
        ContentAmount::Stock { strength, .. } => strong_stock(strength),
        ContentAmount::Concentration(input) => input.value().base() >= CONCENTRATED,
        ContentAmount::Molality(input) => input.value().base() >= CONCENTRATED,
        ContentAmount::MassConcentration(_) | ContentAmount::Amount(_) => false,
    }
}

/// Whether a stock of acid or base is concentrated.
pub(super) fn strong_stock(strength: &Strength) -> bool {
    match strength {
        Strength::Concentration(input) => input.value().base() >= CONCENTRATED,
        Strength::MassConcentration(_) => false,
        Strength::MassFraction { .. } => true,
    }
}

/// Gases: a ligand that releases one, at a pH below the pK of its neutral form plus one, where more than a tenth is in that form.
fn gases(assembly: &Assembly, state: &State) -> Vec<Caution> {
    let mut cautions = Vec::new();
    for part in &assembly.parts {
        let crate::substance::Component::Ligand(ligand) = &part.component else {
            continue;
        };
        if part.held || part.concentration.is_none() {
            continue;
        }
        let neutral = (0..ligand.steps.len()).find(|step| ligand.state_charge(*step) == 0);
        let pk = assembly
            .pks
            .iter()
            .find(|pk| pk.ligand.name == ligand.name && Some(pk.step) == neutral);
        let Some(pk) = pk.filter(|pk| state.ph < pk.found.value + 1.0) else {
            continue;
        };
        for gas in ligand
            .hazards
            .iter()
            .filter_map(|hazard| hazard.released_gas())
        {
            let kind = if gas.toxic {
                "toxic"
            } else {
                "suffocating in closed rooms, bursting closed vessels"
            };
            cautions.push(Caution {
                name: "gas-on-acidifying",
                sentence: format!(
                    "At pH {:.2} {} sets free {} ({kind}); its pK is {:.2}. Only with qualified staff, in a fume hood.",
                    state.ph, ligand.name, gas.name, pk.found.value
                ),
            });
        }
    }
    cautions
}

/// Metals whose salts with [`SPARING`] ligands are sparingly soluble, or whose complexes with them are strong; common practice.
const METALS: [&str; 3] = ["calcium ion", "magnesium ion", "barium ion"];
const SPARING: [&str; 10] = [
    "phosphoric acid",
    CARBONIC_ACID,
    "citric acid",
    "EDTA",
    "oxalic acid",
    "hydrogen sulfate",
    "sulfuric acid",
    "hydrofluoric acid",
    "pyrophosphoric acid",
    "NTA",
];

fn precipitates(assembly: &Assembly, state: &State) -> Option<Caution> {
    let present = |names: &[&str]| -> Vec<String> {
        state
            .totals
            .iter()
            .filter(|total| total.concentration > 1e-6)
            .map(|total| total.component.clone())
            .filter(|name| names.iter().any(|known| name.eq_ignore_ascii_case(known)))
            .collect()
    };
    let (metals, ligands) = (present(&METALS), present(&SPARING));
    if metals.is_empty() || ligands.is_empty() || assembly.parts.is_empty() {
        return None;
    }
    Some(Caution {
        name: "possible-precipitate",
        sentence: format!(
            "{} with {}: sparingly soluble salts and complexes are possible and are not computed.",
            metals.join(", "),
            ligands.join(", ")
        ),
    })
}
