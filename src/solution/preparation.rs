//! A buffer to be made: how much of each source, the pH after rounding to what the instruments can do, and the pH at the temperature of use.

use crate::equilibrium::Total;
use crate::problem::{BufferChoice, Corrections, Preparation, Source, SourceKind, Taken, Trace};
use crate::quantity::{Decimal, Dimension};
use crate::solution::Unsolvable;
use crate::solution::answer::{Addition, Answer, Outcome, PreparationOutcome, Suggestion};
use crate::solution::approach::{
    Item, MOST_DISSOLVED, Way, composed, items, readings, volumes_fit,
};
use crate::solution::assembly::Assembly;
use crate::solution::assumption::ph_per_kelvin;
use crate::solution::buffer_suggestion;
use crate::solution::conclusion::{Bench, Finding};
use crate::solution::search::{bracket, root};
use crate::solution::source::{name, to_steps};
use std::sync::Arc;

/// The answer to a preparation.
///
/// # Errors
/// [`Unsolvable`], among others where the target is out of reach, with the range that is within reach.
pub(super) fn prepared(bench: &Bench<'_>, task: &Preparation) -> Result<Answer, Unsolvable> {
    let (sources, suggestions) = match &task.buffer {
        BufferChoice::From(sources) => (sources.clone(), Vec::new()),
        BufferChoice::Suggest { avoid } => buffer_suggestion::chosen(bench, task, avoid)?,
    };
    let making = Making::of(bench, task, sources)?;
    let exact = making.solve()?;
    making.conclude(&exact, suggestions)
}

/// A preparation at work: its tableau at the temperature of use, with the amounts taken as variables.
struct Making<'a> {
    bench: &'a Bench<'a>,
    task: &'a Preparation,
    items: Vec<Item>,
    /// Whether the last item is the inert salt.
    salted: bool,
    assembly: Assembly,
    /// Volume in L.
    volume: f64,
    /// Density of water in kg/L at the temperature of preparation.
    density: f64,
}

impl<'a> Making<'a> {
    fn of(
        bench: &'a Bench<'a>,
        task: &'a Preparation,
        mut sources: Vec<Source>,
    ) -> Result<Self, Unsolvable> {
        let count = sources.len();
        if !(1..=2).contains(&count) {
            return Err(Unsolvable::Sources {
                reason: format!(
                    "{count} sources leave the amounts open; name two: two forms of a buffer, or one and a titrant"
                ),
                input: task.target.ph.id.clone(),
            });
        }
        if let Some(target) = &task.target.ionic_strength {
            sources.push(Source {
                id: target.value.id.within("salt"),
                kind: SourceKind::Solid {
                    form: Arc::clone(&target.salt),
                    corrections: Corrections::default(),
                },
                trace: Trace::default(),
            });
        }
        let one = vec![Decimal::whole(1); sources.len()];
        let composition = composed(task, &sources, &one, None)?;
        let bench_assembly = bench.assemble(&composition)?;
        let density = bench_assembly.density;
        let use_temperature = task.target.temperature_of_use.as_ref();
        let kelvin = use_temperature.map_or(bench.setting.temperature, |t| t.value().base());
        let assembly = bench_assembly.under(&bench.setting.at(kelvin))?;
        let items = items(task, &assembly, sources)?;
        Ok(Self {
            salted: task.target.ionic_strength.is_some(),
            volume: task.target.volume.value().base(),
            bench,
            task,
            items,
            assembly,
            density,
        })
    }

    fn values(&self, taken: &[f64]) -> Vec<Total> {
        let mut values = self.assembly.recipe.stated(self.density);
        for (item, amount) in self.items.iter().zip(taken) {
            if let Some(place) = values.get_mut(item.variable.place()) {
                *place = Total::from_f64(*amount);
            }
        }
        values
    }

    fn ph(&self, taken: &[f64]) -> Result<f64, Unsolvable> {
        Ok(self.assembly.solve(&self.values(taken))?.certified.ph())
    }

    /// What is to be taken, in base units, exactly.
    fn solve(&self) -> Result<Vec<f64>, Unsolvable> {
        let Some(target) = self
            .task
            .target
            .ionic_strength
            .as_ref()
            .filter(|_| self.salted)
        else {
            return self.at_target_ph(0.0);
        };
        let wanted = target.value.value().base() / self.density;
        let beyond = |salt: f64| {
            let taken = self.at_target_ph(salt)?;
            let solved = self.assembly.solve(&self.values(&taken))?;
            Ok(solved.certified.ionic_strength() - wanted)
        };
        let most = MOST_DISSOLVED * self.volume;
        let alone = beyond(0.0)?;
        if alone > 0.0 {
            return Err(Unsolvable::IonicStrengthUnreachable {
                target: target.value.measured.to_string(),
                lowest: alone + wanted,
                input: target.value.id.clone(),
            });
        }
        match bracket(1e-3 * most, most, beyond)? {
            Ok((ends, at_ends)) => self.at_target_ph(root(ends, at_ends, beyond)?),
            Err((_, at_most)) => Err(Unsolvable::Sources {
                reason: format!(
                    "the salt brings the ionic strength to {:.3} mol/kg at most",
                    at_most + wanted
                ),
                input: target.value.id.clone(),
            }),
        }
    }

    /// What is to be taken for the pH with so much salt, in g.
    fn at_target_ph(&self, salt: f64) -> Result<Vec<f64>, Unsolvable> {
        let target = &self.task.target.ph;
        let wanted = target.value().base();
        let amount = self.task.target.concentration.value().base() * self.volume;
        let way = Way::of(&self.items, self.salted, amount, self.volume);
        let off = |x: f64| Ok(self.ph(&way.taken(x, salt, self.salted))? - wanted);
        let unreachable = |(first, last): (f64, f64)| Unsolvable::Unreachable {
            target: target.measured.to_string(),
            lowest: first.min(last) + wanted,
            highest: first.max(last) + wanted,
            input: target.id.clone(),
        };
        let (ends, at_ends) = match &way {
            Way::Alone { .. } => {
                let only = off(0.0)?;
                return if only.abs() <= 5e-4 {
                    Ok(way.taken(0.0, salt, self.salted))
                } else {
                    Err(unreachable((only, only)))
                };
            }
            Way::TwoForms { .. } => {
                let at_ends = (off(0.0)?, off(1.0)?);
                if at_ends.0.signum() * at_ends.1.signum() > 0.0 {
                    return Err(unreachable(at_ends));
                }
                ((0.0, 1.0), at_ends)
            }
            Way::Titrant { most, .. } => bracket(1e-4 * most, *most, off)?.map_err(unreachable)?,
        };
        Ok(way.taken(root(ends, at_ends, off)?, salt, self.salted))
    }

    fn conclude(&self, exact: &[f64], suggestions: Vec<Suggestion>) -> Result<Answer, Unsolvable> {
        let rule = self.bench.statement.reporting.rounding;
        let figures: Vec<Decimal> = self
            .items
            .iter()
            .zip(exact)
            .map(|(item, amount)| to_steps(amount / item.measure.base_per_unit(), item.step, rule))
            .collect();
        let rounded: Vec<f64> = self.in_base(&figures);
        volumes_fit(&self.items, &rounded, &self.task.target.volume)?;
        let sources: Vec<Source> = self.items.iter().map(|item| item.source.clone()).collect();
        let steps: Vec<Decimal> = self.items.iter().map(|item| item.step).collect();
        let as_rounded = composed(self.task, &sources, &figures, Some(&steps))?;
        let at_preparation = self.bench.assemble(&as_rounded)?.stated_ph()?;
        let weighed = self.weighed(&figures);
        let ph_as_weighed = match &weighed {
            Some(figures) => Some(self.ph(&self.in_base(figures))?),
            None => None,
        };
        let liquid = match &weighed {
            Some(figures) => composed(self.task, &sources, figures, Some(&steps))?,
            None => as_rounded,
        };
        let assembly = self.bench.assemble(&liquid)?;
        let use_setting = self.assembly.setting.clone();
        let outcome = PreparationOutcome {
            additions: self.additions(exact, &figures, &rounded)?,
            volume: self.volume,
            ph_at_preparation: at_preparation,
            ph_at_use: self.ph(&rounded)?,
            temperature_of_use_c: use_setting.temperature - 273.15,
            target_ph: self.task.target.ph.value().base(),
            ph_per_kelvin: ph_per_kelvin(&assembly.under(&use_setting)?)?,
            ph_as_weighed,
            suggestions,
        };
        self.bench.conclude(Finding {
            assembly,
            outcome: Outcome::Preparation(Box::new(outcome)),
            liquid,
            assumptions: readings(&self.items, &self.task.readability),
        })
    }

    fn in_base(&self, figures: &[Decimal]) -> Vec<f64> {
        self.items
            .iter()
            .zip(figures)
            .map(|(item, figure)| figure.to_f64() * item.measure.base_per_unit())
            .collect()
    }

    fn additions(
        &self,
        exact: &[f64],
        figures: &[Decimal],
        rounded: &[f64],
    ) -> Result<Vec<Addition>, Unsolvable> {
        let ph = self.ph(rounded)?;
        let mut additions = Vec::new();
        for (place, (item, (amount, figure))) in
            self.items.iter().zip(exact.iter().zip(figures)).enumerate()
        {
            let mut more = rounded.to_vec();
            if let Some(amount) = more.get_mut(place) {
                *amount *= 1.01;
            }
            additions.push(Addition {
                substance: name(&item.source),
                amount: amount / item.measure.base_per_unit(),
                rounded: figure.to_f64(),
                decimals: u8::try_from(figure.decimal_places()).unwrap_or(0),
                unit: item.measure.unit(),
                ph_per_percent: self.ph(&more)? - ph,
            });
        }
        Ok(additions)
    }

    /// The figures of what was really taken, where anything was told; sources not told are as instructed.
    fn weighed(&self, figures: &[Decimal]) -> Option<Vec<Decimal>> {
        if self.task.weighed.is_empty() {
            return None;
        }
        let mut figures = figures.to_vec();
        for weighed in &self.task.weighed {
            let exact = match &weighed.taken {
                Taken::Mass(mass) => mass.measured.exact(),
                Taken::Volume(volume) => volume.measured.exact().map(|litres| litres.scaled(3)),
            };
            if let Some((place, exact)) = figures.get_mut(weighed.source).zip(exact) {
                *place = exact;
            }
        }
        Some(figures)
    }
}

#[cfg(test)]
mod tests {
    use crate::problem::{
        BufferChoice, IonicStrengthTarget, Preparation, PreparationTarget, Problem, Readability,
        Source,
    };
    use crate::quantity::Unit;
    use crate::solution::answer::{Outcome, PreparationOutcome};
    use crate::solution::specimen::{form, input, solid, statement, stock};
    use crate::solution::{Unsolvable, solve};

    fn phosphates() -> Vec<Source> {
        vec![
            solid("sodium dihydrogen phosphate monohydrate"),
            solid("disodium hydrogen phosphate"),
        ]
    }

    fn task(ph: &str, sources: Vec<Source>) -> Preparation {
        Preparation {
            target: PreparationTarget {
                ph: input("target / pH", ph, Unit::One),
                volume: input("target / volume", "2.000", Unit::Litre),
                concentration: input("target / concentration", "50.0", Unit::MillimolePerLitre),
                ionic_strength: None,
                temperature_of_use: None,
            },
            buffer: BufferChoice::From(sources),
            readability: Readability::default(),
            weighed: Vec::new(),
        }
    }

    fn outcome(task: Preparation) -> Result<(PreparationOutcome, f64), Unsolvable> {
        let answer = solve(&statement(Problem::Preparation(Box::new(task)), "25"))?;
        let ionic_strength = answer.state.ionic_strength;
        let Outcome::Preparation(outcome) = answer.outcome else {
            panic!("a preparation was asked for");
        };
        Ok((*outcome, ionic_strength))
    }

    #[test]
    fn two_forms_give_the_target_and_the_total() {
        let (found, _) = outcome(task("7.20", phosphates())).unwrap();
        // 0.1 mg of about 7 g moves the pH by far less than 0.0005.
        assert!(
            (found.ph_at_use - 7.20).abs() < 0.0005,
            "{}",
            found.ph_at_use
        );
        // 137.99 and 141.957 g/mol (CIAAW 2021 abridged): the amounts add up to 0.1 mol; 0.1 mg is about 1e-6 mol of each.
        let amount = found.additions[0].rounded / 137.99 + found.additions[1].rounded / 141.957;
        assert!((amount - 0.1).abs() < 3e-6, "{amount}");
    }

    #[test]
    fn salt_brings_the_ionic_strength_and_the_cold_is_reckoned_with() {
        let mut cold = task(
            "7.40",
            vec![solid("tris"), stock("hydrochloric acid", "1.000")],
        );
        cold.target.ionic_strength = Some(IonicStrengthTarget {
            value: input("target / ionic strength", "0.150", Unit::MolePerLitre),
            salt: form("sodium chloride"),
        });
        cold.target.temperature_of_use = Some(input("target / temperature", "4", Unit::Celsius));
        let (found, ionic_strength) = outcome(cold).unwrap();
        assert!(
            (found.ph_at_use - 7.40).abs() < 0.001,
            "{}",
            found.ph_at_use
        );
        // 0.150 mol/L by the density of water at 25 °C, 0.99705 kg/L; the difference between 4 and 25 °C is below 0.0005.
        assert!(
            (ionic_strength - 0.150 / 0.997_05).abs() < 0.0005,
            "{ionic_strength}"
        );
        // Tris loses about 0.028 per kelvin: between 4 and 25 °C some 0.6.
        assert!(
            (found.ph_at_preparation - 6.82).abs() < 0.06,
            "{}",
            found.ph_at_preparation
        );
        assert_eq!(found.additions.len(), 3);
    }

    #[test]
    fn out_of_reach_says_what_is_within() {
        let Err(Unsolvable::Unreachable {
            lowest, highest, ..
        }) = outcome(task("3.0", phosphates()))
        else {
            panic!("pH 3 is out of reach of these forms");
        };
        assert!(lowest > 4.0 && lowest < 5.0 && highest > 8.5 && highest < 9.5);
    }

    #[test]
    fn a_buffer_is_suggested_and_made() {
        let mut open = task("7.0", Vec::new());
        open.buffer = BufferChoice::Suggest {
            avoid: vec!["phosphoric".to_owned()],
        };
        let (found, _) = outcome(open).unwrap();
        assert!((found.ph_at_use - 7.0).abs() < 0.005, "{}", found.ph_at_use);
        assert!(!found.suggestions.is_empty());
        assert!(
            found
                .suggestions
                .iter()
                .all(|one| one.ligand != "phosphoric acid")
        );
    }
}
