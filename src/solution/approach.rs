//! What a buffer is made from, and how its target pH is approached.

use crate::equilibrium::Total;
use crate::problem::{Composition, Input, MadeUp, Preparation, Readability, Source};
use crate::quantity::{Decimal, Dimension, Volume};
use crate::solution::Unsolvable;
use crate::solution::answer::Assumption;
use crate::solution::assembly::Assembly;
use crate::solution::source::{Measure, ingredient, taken_id};
use crate::solution::tape::VariableIndex;
use crate::substance::Component;

/// One thing to be measured out.
pub(super) struct Item {
    pub(super) source: Source,
    pub(super) measure: Measure,
    /// Smallest step of the instrument, in g or mL.
    pub(super) step: Decimal,
    /// What is taken, on the tape.
    pub(super) variable: VariableIndex,
    /// Amount of the buffering family in mol that one base unit (g, L) brings.
    pub(super) family: f64,
}

/// Mass in g per litre beyond which nothing is dissolved any more.
pub(super) const MOST_DISSOLVED: f64 = 600.0;

/// How the target pH is approached.
pub(super) enum Way {
    /// One source: nothing to choose.
    Alone { amount: f64 },
    /// Two forms of the family, the share of the first between 0 and 1.
    TwoForms { amounts: [f64; 2] },
    /// One source of the family at its full amount, and a titrant up to `most`.
    Titrant {
        amount: f64,
        titrant_first: bool,
        most: f64,
    },
}

impl Way {
    /// The way for `amount` mol of the family in `volume` L.
    pub(super) fn of(items: &[Item], salted: bool, amount: f64, volume: f64) -> Self {
        let sources = items.len() - usize::from(salted && !items.is_empty());
        let family = |place: usize| items.get(place).map_or(0.0, |item| item.family);
        let most = |place: usize| match items.get(place).map(|item| item.measure) {
            Some(Measure::Pipetted) => volume,
            Some(Measure::Weighed) | None => MOST_DISSOLVED * volume,
        };
        match (sources, family(0) > 0.0, family(1) > 0.0) {
            (1, ..) => Self::Alone {
                amount: amount / family(0),
            },
            (_, true, true) => Self::TwoForms {
                amounts: [amount / family(0), amount / family(1)],
            },
            (_, true, false) => Self::Titrant {
                amount: amount / family(0),
                titrant_first: false,
                most: most(1),
            },
            (_, false, _) => Self::Titrant {
                amount: amount / family(1),
                titrant_first: true,
                most: most(0),
            },
        }
    }

    /// What is taken of each item, in base units, at a place on the way, with so much salt in g.
    pub(super) fn taken(&self, x: f64, salt: f64, salted: bool) -> Vec<f64> {
        let mut taken = match self {
            Self::Alone { amount } => vec![*amount],
            Self::TwoForms {
                amounts: [first, second],
            } => vec![x * first, (1.0 - x) * second],
            Self::Titrant {
                amount,
                titrant_first: true,
                ..
            } => vec![x, *amount],
            Self::Titrant { amount, .. } => vec![*amount, x],
        };
        if salted {
            taken.push(salt);
        }
        taken
    }
}

/// The composition with figures in g or mL for each source; where steps are given, each figure is uncertain by its step.
///
/// # Errors
/// As [`ingredient`].
pub(super) fn composed(
    task: &Preparation,
    sources: &[Source],
    figures: &[Decimal],
    steps: Option<&[Decimal]>,
) -> Result<Composition, Unsolvable> {
    let none = Decimal::whole(0);
    let ingredients = sources
        .iter()
        .zip(figures)
        .enumerate()
        .map(|(place, (source, figure))| {
            let step = steps.and_then(|steps| steps.get(place)).copied();
            ingredient(source, *figure, step.unwrap_or(none))
        })
        .collect::<Result<_, _>>()?;
    let volume = &task.target.volume;
    let flask = task
        .readability
        .flask
        .as_ref()
        .filter(|flask| (flask.value().base() / volume.value().base() - 1.0).abs() < 1e-9);
    Ok(Composition {
        made_up: MadeUp::To(flask.unwrap_or(volume).clone()),
        ingredients,
    })
}

/// The sources with what they bring of the buffering family.
///
/// # Errors
/// [`Unsolvable::Sources`] where none of them buffers.
pub(super) fn items(
    task: &Preparation,
    assembly: &Assembly,
    sources: Vec<Source>,
) -> Result<Vec<Item>, Unsolvable> {
    let lost = |source: &Source| Unsolvable::Sources {
        reason: "the source does not enter the composition".to_owned(),
        input: source.id.clone(),
    };
    let variables: Vec<VariableIndex> = sources
        .iter()
        .map(|source| {
            let variable = assembly.variable(&taken_id(source));
            variable.ok_or_else(|| lost(source))
        })
        .collect::<Result<_, _>>()?;
    let brought: Vec<Vec<(String, f64)>> = variables
        .iter()
        .map(|variable| ligands_of(assembly, &variables, *variable))
        .collect();
    let families = families(&brought);
    let volume = task.target.volume.value().base();
    let mut items = Vec::new();
    for ((source, variable), brought) in sources.into_iter().zip(variables).zip(&brought) {
        let measure = Measure::of(&source);
        let stated = match measure {
            Measure::Weighed => task
                .readability
                .balance
                .as_ref()
                .and_then(|b| b.measured.exact()),
            Measure::Pipetted => task
                .readability
                .pipette
                .as_ref()
                .and_then(|pipette| Some(pipette.measured.exact()?.scaled(3))),
        };
        let family: f64 = brought
            .iter()
            .filter(|(name, _)| families.contains(name))
            .map(|(_, concentration)| concentration * volume)
            .sum();
        items.push(Item {
            step: stated.unwrap_or(measure.default_step()),
            source,
            measure,
            variable,
            family,
        });
    }
    if items.iter().all(|item| item.family <= 0.0) {
        return Err(Unsolvable::Sources {
            reason: "none of the sources is a buffer".to_owned(),
            input: task.target.ph.id.clone(),
        });
    }
    Ok(items)
}

/// Concentration of each ligand, in mol/L, that one base unit of one source brings.
fn ligands_of(
    assembly: &Assembly,
    all: &[VariableIndex],
    one: VariableIndex,
) -> Vec<(String, f64)> {
    let mut values = assembly.stated();
    for variable in all {
        if let Some(place) = values.get_mut(variable.place()) {
            *place = Total::from_f64(if *variable == one { 1.0 } else { 0.0 });
        }
    }
    let worked = assembly.recipe.tape.evaluate(&values);
    assembly
        .parts
        .iter()
        .filter(|part| matches!(part.component, Component::Ligand(_)))
        .filter_map(|part| {
            let concentration = worked.at(part.concentration?).to_f64();
            (concentration > 0.0).then(|| (part.component.name().to_owned(), concentration))
        })
        .collect()
}

/// The acid families that buffer: those that the first two sources share; else all but those of strong acids.
fn families(brought: &[Vec<(String, f64)>]) -> Vec<String> {
    const STRONG: [&str; 1] = ["sulfuric acid"];
    let names = |place: usize| -> Vec<String> {
        let brought = brought.get(place).map(Vec::as_slice).unwrap_or_default();
        brought.iter().map(|(name, _)| name.clone()).collect()
    };
    let (first, second) = (names(0), names(1));
    let shared: Vec<String> = first
        .iter()
        .filter(|name| second.contains(name))
        .cloned()
        .collect();
    if !shared.is_empty() {
        return shared;
    }
    first
        .into_iter()
        .chain(second)
        .filter(|name| !STRONG.contains(&name.as_str()))
        .collect()
}

/// Refuses stocks that alone take more than the final volume.
///
/// # Errors
/// [`Unsolvable::Sources`].
pub(super) fn volumes_fit(
    items: &[Item],
    taken: &[f64],
    volume: &Input<Volume>,
) -> Result<(), Unsolvable> {
    let pipetted: f64 = items
        .iter()
        .zip(taken)
        .filter(|(item, _)| item.measure == Measure::Pipetted)
        .map(|(_, litres)| litres)
        .sum();
    if pipetted <= volume.value().base() {
        return Ok(());
    }
    Err(Unsolvable::Sources {
        reason: format!(
            "the stocks alone take {pipetted:.3} L, more than the final volume of {}; use stronger stocks or a lower concentration",
            volume.measured
        ),
        input: volume.id.clone(),
    })
}

/// What is assumed of instruments that were not told.
pub(super) fn readings(items: &[Item], readability: &Readability) -> Vec<Assumption> {
    let has = |measure: Measure| items.iter().any(|item| item.measure == measure);
    let assumed = |statement: &str| Assumption {
        statement: statement.to_owned(),
        alternative: None,
        cost: None,
    };
    let mut list = Vec::new();
    if readability.balance.is_none() && has(Measure::Weighed) {
        list.push(assumed(
            "The balance reads to 0.1 mg (assumed: common practice).",
        ));
    }
    if readability.pipette.is_none() && has(Measure::Pipetted) {
        list.push(assumed(
            "Pipette or burette read to 0.01 mL (assumed: common practice).",
        ));
    }
    list
}
