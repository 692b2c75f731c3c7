//! One solution as stated, mixtures, and serial dilution.

use crate::problem::{Composition, DilutionSeries, Mixing};
use crate::quantity::Dimension;
use crate::solution::Unsolvable;
use crate::solution::answer::{Answer, MixingOutcome, Outcome, State};
use crate::solution::assembly::Assembly;
use crate::solution::conclusion::{Bench, Finding};
use crate::solution::recipe::Writer;
use crate::solution::speciation::state;

/// The state of a solution as stated.
///
/// # Errors
/// [`Unsolvable`].
pub(super) fn solution(bench: &Bench<'_>, composition: &Composition) -> Result<Answer, Unsolvable> {
    let assembly = bench.assemble(composition)?;
    bench.conclude(Finding {
        assembly,
        outcome: Outcome::Speciation,
        liquid: composition.clone(),
        assumptions: Vec::new(),
    })
}

/// The state of a mixture, and of each step of a dilution series.
///
/// # Errors
/// [`Unsolvable`].
pub(super) fn mixture(bench: &Bench<'_>, task: &Mixing) -> Result<Answer, Unsolvable> {
    let assembly = bench.assemble(&task.mixture)?;
    let solved = assembly.solve(&assembly.stated())?;
    let volume = assembly.recipe.volume_of(&solved.worked).unwrap_or(0.0);
    let series = match &task.series {
        Some(series) => dilutions(bench, &task.mixture, series)?,
        None => Vec::new(),
    };
    bench.conclude(Finding {
        assembly,
        outcome: Outcome::Mixing(MixingOutcome { volume, series }),
        liquid: task.mixture.clone(),
        assumptions: Vec::new(),
    })
}

fn dilutions(
    bench: &Bench<'_>,
    mixture: &Composition,
    series: &DilutionSeries,
) -> Result<Vec<State>, Unsolvable> {
    for input in [&series.taken, &series.made_up_to] {
        if input.value().base() <= 0.0 {
            return Err(Unsolvable::NotPositive {
                input: input.id.clone(),
                value: input.measured.to_string(),
            });
        }
    }
    let mut states = Vec::new();
    let mut writer = Writer::new();
    let mut liquid = writer.liquid(mixture)?;
    for _ in 0..series.steps {
        let taken = writer.input(&series.taken);
        let total = writer.input(&series.made_up_to);
        liquid = writer.pour(&[(&liquid, taken)], total);
        let assembly = Assembly::new(&writer.clone().finish(&liquid).into(), &bench.setting)?;
        states.push(state(&assembly, &assembly.solve(&assembly.stated())?));
    }
    Ok(states)
}
