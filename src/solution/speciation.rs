//! `speciation`: the state of one solution, and everything that is said of any solved liquid.

use crate::problem::{Composition, Statement, UncertaintyMode};
use crate::solution::answer::{Answer, Outcome};
use crate::solution::solved::Solved;
use crate::solution::{
    Unsolvable, assumption, budget, caution, comparison, shortcut, simulation, state,
};

/// Works out one solution.
pub(super) fn solve(
    statement: &Statement,
    composition: &Composition,
) -> Result<Answer, Unsolvable> {
    let solved = Solved::of(composition, &statement.conditions)?;
    answer(statement, &solved, Outcome::Speciation, composition.clone())
}

/// The answer for a solved liquid, whatever the task that led to it.
pub(super) fn answer(
    statement: &Statement,
    solved: &Solved<'_>,
    outcome: Outcome,
    liquid: Composition,
) -> Result<Answer, Unsolvable> {
    let state = state::of(&solved.tableau, &solved.totals, &solved.solution);
    let mode = statement.conditions.uncertainty.value;
    let lines = budget::contributions(solved)?;
    let budget = (mode != UncertaintyMode::None).then(|| budget::of(lines));
    let simulation = match mode {
        UncertaintyMode::Simulation { draws, seed } => Some(simulation::run(solved, draws, seed)?),
        UncertaintyMode::Budget | UncertaintyMode::None => None,
    };
    let shortcuts = shortcut::all(solved)?;
    let hand_value = statement
        .hand_value
        .as_ref()
        .map(|hand| shortcut::verdict(hand, &shortcuts, state.ph));
    let standard = budget.as_ref().map_or(0.0, |budget| budget.standard);
    let comparison = statement
        .measured
        .as_ref()
        .map(|reading| comparison::of(reading, solved, state.ph, standard));
    Ok(Answer {
        model: solved.model_facts(),
        outcome,
        distribution: None,
        budget,
        simulation,
        shortcuts,
        hand_value,
        comparison,
        constants: solved.constants(),
        assumptions: assumption::all(solved)?,
        cautions: caution::all(solved, &state)?,
        liquid,
        state,
    })
}
