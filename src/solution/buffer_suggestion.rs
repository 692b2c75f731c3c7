//! Buffers of the library, ranked for a target.

use crate::equilibrium::Water;
use crate::equilibrium::elementary::{LN_10, exp10};
use crate::problem::{Corrections, Input, Preparation, Source, SourceKind, Strength, Trace};
use crate::quantity::{Decimal, Dimension, Measured, Unit};
use crate::solution::Unsolvable;
use crate::solution::answer::Suggestion;
use crate::solution::conclusion::Bench;
use crate::solution::dissociation::{Route, at_temperature, pk_of};
use crate::substance::{Basis, Catalogue, Form, Hazard, Ligand};
use std::sync::Arc;

/// How far the pK of a suggested buffer may be from the target; common practice.
const WIDEST: f64 = 1.0;

/// How many are suggested.
const MOST_SUGGESTIONS: usize = 6;

struct Candidate {
    ligand: Arc<Ligand>,
    form: Arc<Form>,
    suggestion: Suggestion,
    rank: f64,
}

/// The best buffer as sources (its neutral form and a strong titrant of 1 mol/L), and the list of suggestions.
///
/// # Errors
/// [`Unsolvable::Sources`] where the library has none.
pub(super) fn chosen(
    bench: &Bench<'_>,
    task: &Preparation,
    avoid: &[String],
) -> Result<(Vec<Source>, Vec<Suggestion>), Unsolvable> {
    let none = || Unsolvable::Sources {
        reason: format!(
            "no buffer of the library has a pK within {WIDEST} of pH {}",
            task.target.ph.measured
        ),
        input: task.target.ph.id.clone(),
    };
    let library = Catalogue::embedded()?;
    let mut candidates = candidates(bench, task, library, avoid)?;
    candidates.sort_by(|a, b| a.rank.total_cmp(&b.rank));
    candidates.truncate(MOST_SUGGESTIONS);
    let best = candidates.first().ok_or_else(none)?;
    let titrant = titrant(library, task, best).ok_or_else(none)?;
    let sources = vec![
        Source {
            id: task.target.ph.id.within(&best.form.name),
            kind: SourceKind::Solid {
                form: Arc::clone(&best.form),
                corrections: Corrections::default(),
            },
            trace: Trace::default(),
        },
        titrant,
    ];
    let suggestions = candidates
        .into_iter()
        .map(|candidate| candidate.suggestion)
        .collect();
    Ok((sources, suggestions))
}

fn candidates(
    bench: &Bench<'_>,
    task: &Preparation,
    library: &Catalogue,
    avoid: &[String],
) -> Result<Vec<Candidate>, Unsolvable> {
    let target = task.target.ph.value().base();
    let use_temperature = task.target.temperature_of_use.as_ref();
    let kelvin = use_temperature.map_or(bench.setting.temperature, |t| t.value().base());
    let water = Water::at(kelvin)?;
    let mut candidates = Vec::new();
    for ligand in library.ligands() {
        let Some(form) = library.find(&ligand.name).ok().filter(|form| {
            form.formula.is_some() && usable(form, ligand) && !avoided(form, ligand, avoid)
        }) else {
            continue;
        };
        for (step, entry) in ligand.steps.iter().enumerate() {
            let constant = &entry.preferred;
            let found = pk_of(ligand, step, constant, &water, bench.chosen.model);
            // The same step at the ionic strength of the buffer: lg γ of both forms about 0.1 mol/kg.
            let lg_gamma = |state: usize| {
                bench
                    .chosen
                    .model
                    .lg_gamma(&water, ligand.state_charge(state), None, 0.1)
            };
            let effective = found.value + lg_gamma(step + 1) - lg_gamma(step);
            let away = (effective - target).abs();
            if away > WIDEST {
                continue;
            }
            let slope =
                at_temperature(constant, kelvin + 0.5).0 - at_temperature(constant, kelvin - 0.5).0;
            candidates.push(candidate(
                task,
                (ligand, form, step),
                (found.value, effective - target),
                slope,
                found.route != Route::Unchanged || constant.thermal.is_some(),
            ));
        }
    }
    Ok(candidates)
}

fn candidate(
    task: &Preparation,
    (ligand, form, step): (&Arc<Ligand>, &Arc<Form>, usize),
    (pk, away): (f64, f64),
    slope: f64,
    slope_known: bool,
) -> Candidate {
    let concentration = task.target.concentration.value().base();
    let ratio = exp10(away);
    let buffer_capacity = LN_10 * concentration * ratio / ((1.0 + ratio) * (1.0 + ratio));
    let recalled = ligand
        .steps
        .get(step)
        .is_none_or(|step| step.preferred.basis == Basis::Recalled);
    let mut remarks = vec![format!("pK {:.2} from the target at I = 0.1", away.abs())];
    if slope.abs() > 0.015 {
        remarks.push("changes much with temperature".to_owned());
    }
    if !slope_known {
        remarks.push("change with temperature not known".to_owned());
    }
    if recalled {
        remarks.push("constant recalled, not checked".to_owned());
    }
    Candidate {
        ligand: Arc::clone(ligand),
        form: Arc::clone(form),
        rank: away.abs()
            + 20.0 * slope.abs()
            + if recalled { 0.2 } else { 0.0 }
            + if slope_known { 0.0 } else { 0.2 },
        suggestion: Suggestion {
            ligand: ligand.name.clone(),
            step: step + 1,
            pk,
            buffer_capacity,
            ph_per_kelvin: slope,
            remark: remarks.join("; "),
        },
    }
}

/// Buffers that nobody should be advised to take without asking: volatile or harmful ones.
fn usable(form: &Form, ligand: &Ligand) -> bool {
    const UNFIT: [Hazard; 15] = [
        Hazard::HydrofluoricAcid,
        Hazard::Cyanide,
        Hazard::Sulfide,
        Hazard::Azide,
        Hazard::Hypochlorite,
        Hazard::Sulfite,
        Hazard::Carbonate,
        Hazard::Nitrite,
        Hazard::Chromate,
        Hazard::Peroxide,
        Hazard::Arsenic,
        Hazard::Phenol,
        Hazard::Ammonia,
        Hazard::Amine,
        Hazard::Borate,
    ];
    let hazards = form.all_hazards();
    !ligand.steps.is_empty() && !hazards.iter().any(|hazard| UNFIT.contains(hazard))
}

fn avoided(form: &Form, ligand: &Ligand, avoid: &[String]) -> bool {
    avoid.iter().any(|word| {
        let word = word.trim().to_lowercase();
        let named = |name: &str| name.to_lowercase().contains(&word);
        !word.is_empty()
            && (named(&form.name)
                || named(&ligand.name)
                || form.synonyms.iter().any(|synonym| named(synonym))
                || ligand.states.iter().any(|state| named(state)))
    })
}

/// Hydrochloric acid where the neutral form must take up protons, sodium hydroxide where it must give them off, 1 mol/L.
fn titrant(library: &Catalogue, task: &Preparation, best: &Candidate) -> Option<Source> {
    let neutral_protons = best.form.protons();
    let after =
        i32::try_from(best.ligand.steps.len()).ok()? - i32::try_from(best.suggestion.step).ok()?;
    let name = if after >= neutral_protons {
        "hydrochloric acid"
    } else {
        "sodium hydroxide"
    };
    let id = task.target.ph.id.within(name);
    let strength = Measured::new(Decimal::new(false, 1000, -3), Unit::MolePerLitre)?;
    Some(Source {
        kind: SourceKind::Stock {
            form: Arc::clone(library.find(name).ok()?),
            strength: Strength::Concentration(Input::new(id.within("concentration"), strength)),
            corrections: Corrections::default(),
        },
        id,
        trace: Trace::default(),
    })
}
