//! The solution that an adjustment starts from, and what its measured pH makes one suppose in it.

use crate::equilibrium::{Solver, Total};
use crate::problem::{
    Adjustment, Composition, Content, ContentAmount, Corrections, Ingredient, Input, InputId, Trace,
};
use crate::quantity::{Decimal, Dimension, Measured, Unit};
use crate::solution::Unsolvable;
use crate::solution::answer::Explanation;
use crate::solution::assembly::Assembly;
use crate::solution::comparison::explanations;
use crate::solution::conclusion::Bench;
use crate::solution::search::{bracket, root};
use crate::solution::tape::VariableIndex;
use crate::substance::Catalogue;
use std::sync::Arc;

/// The solution at the start, with the strong acid or base that its measured pH makes one suppose.
pub(super) struct Start {
    pub(super) composition: Composition,
    /// Volume in L.
    pub(super) volume: f64,
    /// pH as measured, else as computed.
    pub(super) ph: f64,
    /// What would explain a measured pH.
    pub(super) explanations: Vec<Explanation>,
}

impl Start {
    /// The start of an adjustment.
    ///
    /// # Errors
    /// [`Unsolvable`], also where no strong acid or base explains the measured pH.
    pub(super) fn of(bench: &Bench<'_>, task: &Adjustment) -> Result<Self, Unsolvable> {
        let assembly = bench.assemble(&task.start)?;
        let solved = assembly.solve(&assembly.stated())?;
        let no_volume = || Unsolvable::NoVolume {
            input: InputId::new("start"),
        };
        let volume = assembly.recipe.volume_of(&solved.worked);
        let volume = volume
            .filter(|volume| *volume > 0.0)
            .ok_or_else(no_volume)?;
        let computed = solved.certified.ph();
        let Some(measured) = &task.measured_ph else {
            return Ok(Self {
                composition: task.start.clone(),
                volume,
                ph: computed,
                explanations: Vec::new(),
            });
        };
        let target = measured.value().base();
        let composition = supposed(bench, task, target, computed)?;
        Ok(Self {
            composition,
            volume,
            ph: target,
            explanations: explanations(&assembly, &solved, target),
        })
    }
}

/// The start with as much strong acid or base as makes its computed pH the measured one.
fn supposed(
    bench: &Bench<'_>,
    task: &Adjustment,
    target: f64,
    computed: f64,
) -> Result<Composition, Unsolvable> {
    let id = InputId::new("start").within("supposed strong acid or base");
    let name = if target < computed {
        "hydrochloric acid"
    } else {
        "sodium hydroxide"
    };
    let form = Catalogue::embedded()?.find(name);
    let with = |amount: Decimal| -> Option<Composition> {
        let mut composition = task.start.clone();
        let measured = Measured::new(amount, Unit::Mole)?;
        composition
            .ingredients
            .push(Ingredient::Substance(Box::new(Content {
                id: id.clone(),
                form: Arc::clone(form.as_ref().ok()?),
                amount: ContentAmount::Amount(Input::new(id.within("amount"), measured)),
                corrections: Corrections::default(),
                trace: Trace::default(),
            })));
        Some(composition)
    };
    let lost = || Unsolvable::Sources {
        reason: "the measured pH cannot be explained".to_owned(),
        input: id.clone(),
    };
    let draft = with(Decimal::whole(1)).ok_or_else(lost)?;
    let assembly = bench.assemble(&draft)?;
    let index = assembly.variable(&id.within("amount")).ok_or_else(lost)?;
    let off = |amount: f64| Ok(ph_with(&assembly, index, amount)? - target);
    match bracket(1e-9, 10.0, off)? {
        Ok((ends, at_ends)) => {
            let amount = root(ends, at_ends, off)?;
            with(Decimal::shortest(amount)).ok_or_else(lost)
        }
        Err((first, last)) => Err(Unsolvable::Unreachable {
            target: format!("{target} (measured)"),
            lowest: first.min(last) + target,
            highest: first.max(last) + target,
            input: task
                .measured_ph
                .as_ref()
                .map_or(id.clone(), |measured| measured.id.clone()),
        }),
    }
}

/// pH at an amount of one variable in base units, dimensionless.
///
/// # Errors
/// [`Unsolvable::Uncertified`].
pub(super) fn ph_with(
    assembly: &Assembly,
    index: VariableIndex,
    amount: f64,
) -> Result<f64, Unsolvable> {
    let mut values = assembly.stated();
    if let Some(place) = values.get_mut(index.place()) {
        *place = Total::from_f64(amount);
    }
    Ok(assembly
        .ph(&mut Solver::new(&assembly.system), &values, None)?
        .0)
}
