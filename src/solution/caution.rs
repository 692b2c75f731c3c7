//! Cautions: what the figures do not cover, and what can hurt.

use crate::equilibrium::ActivityModel;
use crate::problem::{ActivityChoice, Air};
use crate::solution::Unsolvable;
use crate::solution::answer::{Caution, State};
use crate::solution::budget::second_model;
use crate::solution::solved::Solved;
use crate::solution::tableau::covers;
use crate::substance::{Basis, Hazard, Kind};
use std::collections::BTreeSet;

/// Ionic strength in mol/kg above which conventional pH is not defined: Buck et al. (2002), Pure Appl. Chem. 74, 2169; read.
const CONVENTIONAL: f64 = 0.1;

/// All cautions that a solved liquid calls for.
pub(super) fn all(solved: &Solved<'_>, state: &State) -> Result<Vec<Caution>, Unsolvable> {
    let mut cautions = Vec::new();
    range(solved, state, &mut cautions)?;
    constants(solved, &mut cautions);
    left_out(solved, &mut cautions);
    hazards(solved, state, &mut cautions);
    Ok(cautions)
}

fn range(
    solved: &Solved<'_>,
    state: &State,
    cautions: &mut Vec<Caution>,
) -> Result<(), Unsolvable> {
    let ionic = state.ionic_strength;
    let limit = if solved.monovalent() { 0.5 } else { 0.1 };
    let model = solved.variation.model;
    if ionic > limit && model != ActivityModel::Ideal {
        let second = second_model(model);
        let other = solved.ph_with_model(second)?;
        cautions.push(Caution {
            name: "beyond-model-range",
            sentence: format!(
                "Ionic strength {ionic:.3} mol/kg is above {limit} mol/kg, where {} is reliable with these ions; {} gives pH {other:.2}.",
                solved.conditions.activity.value.name(),
                spoken(second),
            ),
        });
    }
    if ionic > CONVENTIONAL {
        cautions.push(Caution {
            name: "conventional-ph",
            sentence: format!("Conventional pH is not defined above an ionic strength of {CONVENTIONAL} mol/kg; here it is {ionic:.3} mol/kg."),
        });
    }
    if state.ph < 1.0 || state.ph > 13.0 {
        cautions.push(Caution {
            name: "extreme-ph",
            sentence: "Below pH 1 and above pH 13 a glass electrode will not confirm the figure."
                .to_owned(),
        });
    }
    Ok(())
}

fn spoken(model: ActivityModel) -> &'static str {
    match model {
        ActivityModel::Davies => ActivityChoice::Davies.name(),
        ActivityModel::DebyeHueckel => ActivityChoice::DebyeHueckel.name(),
        ActivityModel::Guentelberg => ActivityChoice::Guentelberg.name(),
        ActivityModel::BatesGuggenheim => ActivityChoice::BatesGuggenheim.name(),
        ActivityModel::Ideal | ActivityModel::PitzerTerm => ActivityChoice::Ideal.name(),
    }
}

/// Recalled, conditional, and used away from their temperature.
fn constants(solved: &Solved<'_>, cautions: &mut Vec<Caution>) {
    let mut recalled = BTreeSet::new();
    let mut unsuited = BTreeSet::new();
    let mut away = BTreeSet::new();
    let celsius = solved.variation.temperature - 273.15;
    for place in &solved.tableau.ligands {
        let name = &place.ligand.name;
        for step in &place.ligand.steps {
            let constant = &step.preferred;
            let equation = constant
                .equation
                .as_ref()
                .filter(|equation| covers(equation, solved.variation.temperature));
            let moved = (constant.temperature_c.to_f64() - celsius).abs() > 0.5;
            let thermal = moved
                && equation.is_none()
                && constant
                    .thermal
                    .as_ref()
                    .is_some_and(|t| t.basis == Basis::Recalled);
            if constant.basis == Basis::Recalled
                || equation.is_some_and(|e| e.basis == Basis::Recalled)
                || thermal
            {
                recalled.insert(name.as_str());
            }
            if constant.kind != Kind::Thermodynamic
                && !(constant.kind == Kind::Unstated && constant.basis == Basis::Stated)
            {
                unsuited.insert(name.as_str());
            }
            if moved && equation.is_none() && constant.thermal.is_none() {
                away.insert(name.as_str());
            }
        }
    }
    if solved.conditions.air.value != Air::Closed {
        recalled.insert("dissolved carbon dioxide (Henry's constant)");
    }
    let mut say = |name, names: BTreeSet<&str>, sentence: &str| {
        if !names.is_empty() {
            let list: Vec<&str> = names.into_iter().collect();
            cautions.push(Caution {
                name,
                sentence: format!("{sentence}: {}.", list.join(", ")),
            });
        }
    };
    say(
        "recalled-constant",
        recalled,
        "Constants recalled, not checked against their source",
    );
    say(
        "conditional-constant",
        unsuited,
        "Constants that are not for zero ionic strength, or do not say, are used as if they were",
    );
    say(
        "constant-temperature",
        away,
        "Constants used away from their own temperature, without an enthalpy",
    );
}

/// What the model leaves out.
fn left_out(solved: &Solved<'_>, cautions: &mut Vec<Caution>) {
    const METALS: [&str; 4] = [
        "calcium ion",
        "magnesium ion",
        "barium ion",
        "strontium ion",
    ];
    const BINDERS: [&str; 9] = [
        "phosphoric acid",
        "pyrophosphoric acid",
        "carbonic acid",
        "citric acid",
        "EDTA",
        "NTA",
        "oxalic acid",
        "sulfuric acid",
        "hydrofluoric acid",
    ];
    let metals: Vec<&str> = solved
        .tableau
        .ions
        .iter()
        .map(|place| place.ion.name.as_str())
        .filter(|name| METALS.contains(name))
        .collect();
    let binders: Vec<&str> = solved
        .tableau
        .ligands
        .iter()
        .map(|place| place.ligand.name.as_str())
        .filter(|name| BINDERS.contains(name))
        .collect();
    if !metals.is_empty() && !binders.is_empty() {
        cautions.push(Caution {
            name: "complexes-left-out",
            sentence: format!(
                "Complexes and precipitates of {} with {} are not computed; the pH may be far off.",
                metals.join(", "),
                binders.join(", ")
            ),
        });
    }
    let boron = solved
        .tableau
        .ligands
        .iter()
        .find(|place| place.ligand.name == "boric acid");
    if let Some(place) = boron {
        let total = solved.totals.of(place.component).to_f64();
        if total > 0.02 {
            cautions.push(Caution {
                name: "polyborates-left-out",
                sentence: format!("Boron {total:.3} mol/kg: polyborates matter above about 0.02 mol/kg and are not computed."),
            });
        }
    }
}

/// The usual cautions of the substances, and of gas that the pH sets free.
fn hazards(solved: &Solved<'_>, state: &State, cautions: &mut Vec<Caution>) {
    let hazards: BTreeSet<Hazard> = solved
        .tableau
        .forms
        .iter()
        .flat_map(|form| form.all_hazards())
        .collect();
    for hazard in &hazards {
        let weak = matches!(hazard, Hazard::Carbonate | Hazard::Borate);
        if !weak {
            cautions.push(Caution {
                name: "hazard",
                sentence: hazard.sentence().to_owned(),
            });
        }
    }
    for place in &solved.tableau.ligands {
        let Some(gas) = place
            .ligand
            .hazards
            .iter()
            .find_map(|hazard| hazard.released_gas())
        else {
            continue;
        };
        let free = state
            .species
            .iter()
            .find(|species| {
                species.component.as_deref() == Some(&place.ligand.name) && species.charge == 0
            })
            .and_then(|species| species.fraction);
        if let Some(share) = free.filter(|share| *share > 0.01) {
            cautions.push(Caution {
                name: "gas",
                sentence: format!(
                    "At this pH {:.0} % is present as the free acid, from which {} escapes{}.",
                    100.0 * share,
                    gas.name,
                    if gas.toxic {
                        ": toxic, fume hood only"
                    } else {
                        ""
                    }
                ),
            });
        }
    }
    if cautions
        .iter()
        .any(|caution| caution.name == "hazard" || caution.name == "gas")
    {
        cautions.push(Caution {
            name: "safety-data-sheet",
            sentence: "These are the usual cautions; the safety data sheets, local rules and qualified staff decide.".to_owned(),
        });
    }
}
