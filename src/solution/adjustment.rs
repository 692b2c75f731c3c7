//! A solution moved to a pH, or moved by an addition: how much, in which steps, and what an overshoot means.

use crate::equilibrium::Total;
use crate::problem::{
    Adjustment, AdjustmentGoal, Composition, Ingredient, Input, InputId, MadeUp, SolutionPortion,
    Source, Taken,
};
use crate::quantity::{Decimal, Dimension, Measured, Number, RoundingRule, Unit};
use crate::solution::Unsolvable;
use crate::solution::adjustment_start::{Start, ph_with};
use crate::solution::answer::{
    Addition, AdjustmentOutcome, Answer, Assumption, Outcome, Overshoot,
};
use crate::solution::assembly::Assembly;
use crate::solution::conclusion::{Bench, Finding};
use crate::solution::search::{bracket, root};
use crate::solution::source::{Measure, ingredient, name, taken_id, to_steps};
use crate::solution::tape::VariableIndex;
use std::sync::Arc;

/// Volume of one drop in mL where none was stated; common practice.
const DROP: f64 = 0.05;

/// Shares of the whole addition at which one stops and reads.
const STOPS: [f64; 5] = [0.5, 0.8, 0.9, 0.95, 1.0];

/// Largest addition that is looked for, in volumes of the solution, or in kg per litre of it.
const MOST: f64 = 20.0;

/// The answer to an adjustment.
///
/// # Errors
/// [`Unsolvable`], among others where the target is out of reach.
pub(super) fn adjusted(bench: &Bench<'_>, task: &Adjustment) -> Result<Answer, Unsolvable> {
    let start = Start::of(bench, task)?;
    let moving = Moving::of(bench, task, &start, &task.with)?;
    let amount = match &task.goal {
        AdjustmentGoal::Reach(target) => moving.reach(target)?,
        AdjustmentGoal::Add(taken) => match taken {
            Taken::Volume(volume) => volume.value().base(),
            Taken::Mass(mass) => mass.value().base(),
        },
    };
    moving.conclude(amount)
}

/// An adjustment at work: the mixture with the addition as a variable.
struct Moving<'a> {
    bench: &'a Bench<'a>,
    task: &'a Adjustment,
    start: &'a Start,
    source: &'a Source,
    measure: Measure,
    assembly: Assembly,
    index: VariableIndex,
}

impl<'a> Moving<'a> {
    fn of(
        bench: &'a Bench<'a>,
        task: &'a Adjustment,
        start: &'a Start,
        source: &'a Source,
    ) -> Result<Self, Unsolvable> {
        let draft = mixed(task, start, source, Decimal::whole(1))?;
        let assembly = bench.assemble(&draft)?;
        let index = assembly
            .variable(&taken_id(source))
            .ok_or_else(|| Unsolvable::Sources {
                reason: "the addition does not enter the mixture".to_owned(),
                input: source.id.clone(),
            })?;
        Ok(Self {
            measure: Measure::of(source),
            bench,
            task,
            start,
            source,
            assembly,
            index,
        })
    }

    fn ph(&self, amount: f64) -> Result<f64, Unsolvable> {
        ph_with(&self.assembly, self.index, amount)
    }

    fn most(&self) -> f64 {
        match self.measure {
            Measure::Pipetted => MOST * self.start.volume,
            Measure::Weighed => 1000.0 * self.start.volume,
        }
    }

    /// The addition that reaches a pH, in L or g.
    fn reach(&self, target: &Input<Number>) -> Result<f64, Unsolvable> {
        let wanted = target.value().base();
        let off = |amount: f64| Ok(self.ph(amount)? - wanted);
        match bracket(1e-6 * self.most(), self.most(), off)? {
            Ok((ends, at_ends)) => root(ends, at_ends, off),
            Err((first, last)) => Err(Unsolvable::Unreachable {
                target: target.measured.to_string(),
                lowest: first.min(last) + wanted,
                highest: first.max(last) + wanted,
                input: target.id.clone(),
            }),
        }
    }

    fn conclude(&self, amount: f64) -> Result<Answer, Unsolvable> {
        let rule = self.bench.statement.reporting.rounding;
        let per_unit = self.measure.base_per_unit();
        let figure = match &self.task.goal {
            AdjustmentGoal::Add(_) => Decimal::shortest(amount / per_unit),
            AdjustmentGoal::Reach(_) => {
                to_steps(amount / per_unit, self.measure.default_step(), rule)
            }
        };
        let rounded = figure.to_f64() * per_unit;
        let ph_after = self.ph(rounded)?;
        let liquid = mixed(self.task, self.start, self.source, figure)?;
        let slope = self.slope(rounded)?;
        let hundredth = 0.01 / slope.abs();
        let drop = self
            .task
            .drop
            .as_ref()
            .map_or(DROP, |drop| drop.value().base() * 1000.0);
        let outcome = AdjustmentOutcome {
            additions: vec![Addition {
                substance: name(self.source),
                amount: amount / per_unit,
                rounded: figure.to_f64(),
                decimals: u8::try_from(figure.decimal_places()).unwrap_or(0),
                unit: self.measure.unit(),
                ph_per_percent: self.ph(1.01 * rounded)? - ph_after,
            }],
            ph_before: self.start.ph,
            ph_after,
            ml_per_hundredth: hundredth,
            drops_per_hundredth: hundredth / drop,
            steps: self.steps(rounded)?,
            overshoot: self.overshoots(rounded, drop, slope)?,
            explanations: self.start.explanations.clone(),
        };
        self.bench.conclude(Finding {
            assembly: self.bench.assemble(&liquid)?,
            outcome: Outcome::Adjustment(Box::new(outcome)),
            liquid,
            assumptions: self.assumptions(drop),
        })
    }

    fn assumptions(&self, drop: f64) -> Vec<Assumption> {
        let assumed = |statement: String| Assumption {
            statement,
            alternative: None,
            cost: None,
        };
        let mut list = Vec::new();
        if self.task.drop.is_none() && self.measure == Measure::Pipetted {
            list.push(assumed(format!(
                "A drop is {drop} mL (assumed: common practice)."
            )));
        }
        if self.task.measured_ph.is_some() {
            list.push(assumed(
                "The measured pH at the start is taken as true; a strong acid or base beside what was stated makes up for the difference."
                    .to_owned(),
            ));
        }
        list
    }

    /// Change of pH per unit (g, mL) of the addition.
    fn slope(&self, amount: f64) -> Result<f64, Unsolvable> {
        let mut values = self.assembly.stated();
        if let Some(place) = values.get_mut(self.index.place()) {
            *place = Total::from_f64(amount);
        }
        let solved = self.assembly.solve(&values)?;
        let (gradient, _) = self.assembly.gradient(&solved);
        let by = gradient.get(self.index.place()).copied().unwrap_or(0.0);
        Ok(by * self.measure.base_per_unit())
    }

    fn steps(&self, amount: f64) -> Result<Vec<(f64, f64)>, Unsolvable> {
        STOPS
            .iter()
            .map(|share| {
                let so_far = share * amount;
                Ok((so_far / self.measure.base_per_unit(), self.ph(so_far)?))
            })
            .collect()
    }

    /// One drop too much, and 0.1 pH too far.
    fn overshoots(&self, amount: f64, drop: f64, slope: f64) -> Result<Vec<Overshoot>, Unsolvable> {
        let mut list = Vec::new();
        if self.measure == Measure::Pipetted {
            let too_much = amount + 1e-3 * drop;
            list.push(self.overshoot(
                format!("one drop of {drop} mL too much"),
                amount,
                too_much,
            )?);
        }
        let ph = self.ph(amount)?;
        let target = ph + 0.1 * slope.signum();
        let off = |x: f64| Ok(self.ph(amount + x)? - target);
        if let Ok((ends, at_ends)) = bracket(1e-3 * amount.max(1e-9), self.most(), off)? {
            let beyond = amount + root(ends, at_ends, off)?;
            list.push(self.overshoot("0.1 pH too far".to_owned(), amount, beyond)?);
        }
        Ok(list)
    }

    fn overshoot(&self, what: String, amount: f64, beyond: f64) -> Result<Overshoot, Unsolvable> {
        let shown = |value: f64| RoundingRule::HalfEven.to_figures(value, 3).to_string();
        let fresh = 1e3 * self.start.volume * (beyond / amount - 1.0);
        let mut remedy = if amount > 0.0 {
            format!(
                "add {} mL of the solution as it was at the start: the ratio is restored, the volume grows",
                shown(fresh)
            )
        } else {
            "make it anew".to_owned()
        };
        if let Some(back) = &self.task.back_with {
            let back_amount = self.back(back, amount, beyond)?;
            let unit = Measure::of(back).unit();
            remedy = match back_amount {
                Some(back_amount) => format!(
                    "add {} {unit} of {}; or {remedy}",
                    shown(back_amount / Measure::of(back).base_per_unit()),
                    name(back)
                ),
                None => format!("{} does not lead back; {remedy}", name(back)),
            };
        }
        Ok(Overshoot {
            what,
            ph: self.ph(beyond)?,
            remedy,
        })
    }

    /// How much of what undoes an overshoot leads back to the pH aimed at, in L or g.
    fn back(&self, back: &Source, amount: f64, beyond: f64) -> Result<Option<f64>, Unsolvable> {
        let wanted = self.ph(amount)?;
        let figure = Decimal::shortest(beyond / self.measure.base_per_unit());
        let mut draft = mixed(self.task, self.start, self.source, figure)?;
        draft
            .ingredients
            .push(ingredient(back, Decimal::whole(1), Decimal::whole(0))?);
        let assembly = self.bench.assemble(&draft)?;
        let Some(index) = assembly.variable(&taken_id(back)) else {
            return Ok(None);
        };
        let off = |x: f64| Ok(ph_with(&assembly, index, x)? - wanted);
        match bracket(1e-6 * self.most(), self.most(), off)? {
            Ok((ends, at_ends)) => Ok(Some(root(ends, at_ends, off)?)),
            Err(_) => Ok(None),
        }
    }
}

/// The start and a figure in g or mL of the source, poured together, or made up to a volume.
fn mixed(
    task: &Adjustment,
    start: &Start,
    source: &Source,
    figure: Decimal,
) -> Result<Composition, Unsolvable> {
    let added = ingredient(source, figure, Decimal::whole(0))?;
    let made_up = match &task.made_up_to {
        Some(volume) => MadeUp::To(volume.clone()),
        None => MadeUp::SumOfPortions,
    };
    let volume = match &start.composition.made_up {
        MadeUp::To(volume) => volume.clone(),
        MadeUp::SumOfPortions | MadeUp::Unstated => {
            let measured = Measured::new(Decimal::shortest(1e3 * start.volume), Unit::Millilitre);
            let id = InputId::new("start").within("volume");
            Input::new(
                id.clone(),
                measured.ok_or(Unsolvable::NoVolume { input: id })?,
            )
        }
    };
    Ok(Composition {
        made_up,
        ingredients: vec![
            Ingredient::Solution(SolutionPortion {
                volume,
                reference: None,
                composition: Arc::new(start.composition.clone()),
            }),
            added,
        ],
    })
}

#[cfg(test)]
mod tests {
    use crate::problem::{Adjustment, AdjustmentGoal, Composition, MadeUp, Problem};
    use crate::quantity::Unit;
    use crate::solution::answer::{AdjustmentOutcome, Outcome};
    use crate::solution::solve;
    use crate::solution::specimen::{input, molar, statement, stock};

    fn tris_to(ph: &str, measured: Option<&str>) -> (AdjustmentOutcome, f64) {
        let task = Adjustment {
            start: Composition {
                made_up: MadeUp::To(input("start / volume", "500", Unit::Millilitre)),
                ..molar(&[("tris", "0.050")])
            },
            measured_ph: measured.map(|ph| input("start / measured pH", ph, Unit::One)),
            with: stock("hydrochloric acid", "1.000"),
            back_with: None,
            goal: AdjustmentGoal::Reach(input("target / pH", ph, Unit::One)),
            drop: None,
            made_up_to: None,
        };
        let answer = solve(&statement(Problem::Adjustment(Box::new(task)), "25")).unwrap();
        let Outcome::Adjustment(outcome) = answer.outcome else {
            panic!("an adjustment was asked for");
        };
        (*outcome, answer.state.ph)
    }

    #[test]
    fn tris_takes_the_acid_that_its_pk_says() {
        // By hand: pK 8.07, with lg γ about -0.08 at I = 0.04 the ratio at pH 7.40 is 10^(8.15 - 7.40) : 1, 85 % of 25 mmol, 21.2 mL.
        let (found, ph) = tris_to("7.40", None);
        let added = &found.additions[0];
        assert!((added.rounded - 21.2).abs() < 0.2, "{}", added.rounded);
        assert!((ph - found.ph_after).abs() < 1e-9 && (ph - 7.40).abs() < 0.001);
        // 10 µL more or less are a fifth of a drop.
        let drop = found.overshoot[0].ph - found.ph_after;
        assert!(
            (drop / 0.05 * found.ml_per_hundredth + 0.01).abs() < 0.0002,
            "{drop}"
        );
        assert_eq!(found.steps.len(), 5);
    }

    #[test]
    fn a_measured_start_is_taken_as_it_is() {
        let (as_computed, _) = tris_to("7.40", None);
        let (lower, _) = tris_to("7.40", Some("8.31"));
        assert!((lower.ph_before - 8.31).abs() < 1e-9);
        assert!(lower.additions[0].amount < as_computed.additions[0].amount);
        assert!(!lower.explanations.is_empty());
    }
}
