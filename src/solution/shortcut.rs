//! The shortcuts of hand calculation, each with its pH, its shift and the condition that textbooks attach to it.

use crate::equilibrium::elementary::exp10;
use crate::equilibrium::{ActivityModel, Solver, System, Total};
use crate::problem::{HandValue, ShortcutName};
use crate::quantity::Dimension;
use crate::solution::answer::{HandVerdict, ShortcutResult};
use crate::solution::assembly::{Assembly, Solved};
use crate::solution::conclusion::Bench;
use crate::solution::hand::{HandCase, Nature};
use crate::solution::hand_verdict::verdict;

/// The limit in pH where none is stated.
const LIMIT: f64 = 0.02;

/// Decimals of pH kept by a hand calculation where none were written.
const DECIMALS: u32 = 2;

/// The shortcuts that bear on a solution, and the verdict on a recorded hand value.
pub(super) fn tested(
    bench: &Bench<'_>,
    assembly: &Assembly,
    solved: &Solved,
) -> (Vec<ShortcutResult>, Option<HandVerdict>) {
    let hand = bench.statement.hand_value.as_ref();
    let trial = Trial {
        assembly,
        solved,
        case: HandCase::of(assembly, solved),
        decimals: hand.map_or(DECIMALS, |hand| hand.ph.measured.decimal.decimal_places()),
        limit: hand.map_or(LIMIT, limit),
    };
    let named = hand.map(|hand| hand.by);
    let results = ShortcutName::NAMES
        .iter()
        .filter_map(|(_, name)| Some((*name, trial.of(*name)?)))
        .filter(|(name, result)| {
            named == Some(*name) || !result.within_limit() || trial.usual(*name)
        })
        .map(|(_, result)| result)
        .collect();
    (results, hand.map(|hand| verdict(&trial, hand)))
}

fn limit(hand: &HandValue) -> f64 {
    hand.limit
        .as_ref()
        .map_or(LIMIT, |limit| limit.value().base())
}

/// A solution on which shortcuts are tried.
pub(super) struct Trial<'a> {
    assembly: &'a Assembly,
    solved: &'a Solved,
    case: Option<HandCase>,
    pub(super) decimals: u32,
    pub(super) limit: f64,
}

impl Trial<'_> {
    /// pH of the full result, dimensionless.
    pub(super) fn ph(&self) -> f64 {
        self.solved.certified.ph()
    }

    /// Whether a shortcut is the one that one would take here.
    fn usual(&self, name: ShortcutName) -> bool {
        let Some(case) = &self.case else {
            return name == ShortcutName::UnitActivityCoefficients;
        };
        match name {
            ShortcutName::FirstStepOnly => case.pks.len() > 1,
            ShortcutName::UnitActivityCoefficients
            | ShortcutName::XNeglected
            | ShortcutName::HendersonHasselbalch
            | ShortcutName::Ampholyte => true,
            ShortcutName::SuccessiveApproximation
            | ShortcutName::WaterNeglected
            | ShortcutName::NextStepNeglected => false,
        }
    }

    /// What a shortcut gives, where it applies.
    pub(super) fn of(&self, name: ShortcutName) -> Option<ShortcutResult> {
        let (ph, condition) = match name {
            ShortcutName::FirstStepOnly => self.first_step()?,
            ShortcutName::XNeglected => self.x_neglected()?,
            ShortcutName::SuccessiveApproximation => self.successive()?,
            ShortcutName::HendersonHasselbalch => self.henderson_hasselbalch()?,
            ShortcutName::Ampholyte => self.ampholyte()?,
            ShortcutName::WaterNeglected => self.water_neglected()?,
            ShortcutName::UnitActivityCoefficients => self.unit_activity_coefficients()?,
            ShortcutName::NextStepNeglected => self.next_step_neglected()?,
        };
        Some(ShortcutResult {
            shortcut: name,
            ph,
            shift: ph - self.ph(),
            limit: self.limit,
            condition,
        })
    }

    fn first_step(&self) -> Option<(f64, String)> {
        let case = self.case.as_ref()?;
        let ph = case.first_step()?;
        let apart = if case.nature == Nature::Acid {
            case.pk(1).zip(case.pk(0)).map(|(b, a)| b - a)
        } else {
            let mut last = case.pks.iter().rev();
            last.next().zip(last.next()).map(|(b, a)| b - a)
        };
        let condition = apart.map_or(
            "one step only: nothing is left out but water".to_owned(),
            |apart| {
                format!(
                    "the next pK at least 3 away: {} (it is {apart:.2} away)",
                    holds(apart >= 3.0)
                )
            },
        );
        Some((ph, condition))
    }

    fn x_neglected(&self) -> Option<(f64, String)> {
        let case = self.case.as_ref()?;
        let ph = case.x_neglected()?;
        let by_first = case.first_step()?;
        let x = if case.nature == Nature::Base {
            exp10(by_first - case.pkw)
        } else {
            exp10(-by_first)
        };
        let share = 100.0 * x / case.concentration;
        let condition = format!(
            "x below 5 % of C: {} (x is {share:.1} % of C)",
            holds(share < 5.0)
        );
        Some((ph, condition))
    }

    fn successive(&self) -> Option<(f64, String)> {
        let case = self.case.as_ref()?;
        let decimals = i32::try_from(self.decimals).ok()?;
        let (ph, rounds) = case.successive(decimals)?;
        let condition = format!(
            "the last of {decimals} kept decimals moves by at most one (common practice): holds after {rounds} rounds"
        );
        Some((ph, condition))
    }

    fn henderson_hasselbalch(&self) -> Option<(f64, String)> {
        let case = self.case.as_ref()?;
        let ph = case.henderson_hasselbalch()?;
        let Nature::Buffer { ratio, .. } = case.nature else {
            return None;
        };
        let smaller = case.concentration * ratio.min(1.0) / (1.0 + ratio);
        let most = self
            .solved
            .certified
            .proton()
            .0
            .max(self.solved.certified.hydroxide().0);
        let times = smaller / most;
        let condition = format!(
            "ratio of base to acid within 0.1 to 10 and both at least 100 times [H⁺] and [OH⁻]: {} (ratio {ratio:.3}, {times:.0} times)",
            holds((0.1..=10.0).contains(&ratio) && times >= 100.0)
        );
        Some((ph, condition))
    }

    fn ampholyte(&self) -> Option<(f64, String)> {
        let case = self.case.as_ref()?;
        let ph = case.ampholyte()?;
        let Nature::Ampholyte { acid_step } = case.nature else {
            return None;
        };
        let lower = case.pk(acid_step.checked_sub(1)?)?;
        let over_first = case.concentration * exp10(lower);
        let over_water = case.concentration * exp10(case.pkw - case.pk(acid_step)?);
        let condition = format!(
            "C at least 20 times K of the lower step, and C K of the upper at least 20 times Kw: {} ({over_first:.1} and {over_water:.3e} times)",
            holds(over_first >= 20.0 && over_water >= 20.0)
        );
        Some((ph, condition))
    }

    /// The proton balance without the rarer of water's ions: it is given back to the balance until nothing changes.
    fn water_neglected(&self) -> Option<(f64, String)> {
        let assembly = self.assembly;
        let mut totals = assembly.totals(&self.solved.worked);
        let stated = totals.protons();
        let acid = self.solved.certified.proton().0 > self.solved.certified.hydroxide().0;
        let mut solver = Solver::new(&assembly.system);
        let mut certified = self.solved.certified.clone();
        for _ in 0..100 {
            let left_out = if acid {
                -certified.hydroxide().0
            } else {
                certified.proton().0
            };
            totals.set_protons(stated + Total::from_f64(left_out));
            let next = solver.solve(&totals, Some(certified.start())).ok()?;
            let moved = (next.ph() - certified.ph()).abs();
            certified = next;
            if moved < 1e-9 {
                let ph = certified.ph();
                let condition = format!(
                    "pH below 6 or above 8: {} (pH {:.2})",
                    holds((self.ph() - 0.5 * assembly.system.water().pkw).abs() > 1.0),
                    self.ph()
                );
                return Some((ph, condition));
            }
        }
        None
    }

    fn unit_activity_coefficients(&self) -> Option<(f64, String)> {
        if self.assembly.setting.model == ActivityModel::Ideal {
            return None;
        }
        let setting = self.assembly.setting.with_model(ActivityModel::Ideal);
        let ph = self.assembly.under(&setting).ok()?.stated_ph().ok()?;
        let ionic = self.solved.certified.ionic_strength();
        let condition = format!(
            "ionic strength below 0.001 mol/kg: {} ({ionic:.4} mol/kg)",
            holds(ionic < 0.001)
        );
        Some((ph, condition))
    }

    /// The full equilibrium, but only with the forms on both sides of the step at work.
    fn next_step_neglected(&self) -> Option<(f64, String)> {
        let case = self.case.as_ref()?;
        let steps = case.pks.len();
        let kept = match case.nature {
            Nature::Acid => 0..=1,
            Nature::Base => steps.checked_sub(1)?..=steps,
            Nature::Buffer { step, .. } => step..=step + 1,
            Nature::Ampholyte { .. } | Nature::Excess => return None,
        };
        let next = match case.nature {
            Nature::Acid => case.pk(1)?,
            Nature::Base => case.pk(steps.checked_sub(2)?)?,
            Nature::Buffer { step, .. } => nearest(&case.pks, step)?,
            Nature::Ampholyte { .. } | Nature::Excess => return None,
        };
        let system = self.without(&case.ligand, |state| !kept.contains(&state));
        let ph = self.assembly.ph_in(&system).ok()?;
        let away = (next - self.ph()).abs();
        let condition = format!(
            "the next pK at least 2 away from the pH: {} ({away:.2} away)",
            holds(away >= 2.0)
        );
        Some((ph, condition))
    }

    /// The tableau without some states of a ligand: their stability is made vanishing.
    fn without(&self, ligand: &str, left_out: impl Fn(usize) -> bool) -> System {
        const VANISHING: f64 = -250.0;
        let mut system = self.assembly.system.clone();
        let own = self.assembly.species.iter().filter(|row| {
            self.assembly
                .parts
                .get(row.part)
                .is_some_and(|part| part.component.name() == ligand)
        });
        for (state, row) in own.enumerate() {
            if left_out(state) {
                system.set_lg_beta(row.index, VANISHING);
            }
        }
        system
    }
}

/// The pK nearest to that of a step.
fn nearest(pks: &[f64], step: usize) -> Option<f64> {
    let own = pks.get(step)?;
    pks.iter()
        .enumerate()
        .filter(|(other, _)| *other != step)
        .map(|(_, pk)| *pk)
        .min_by(|a, b| (a - own).abs().total_cmp(&(b - own).abs()))
}

fn holds(condition: bool) -> &'static str {
    if condition { "holds" } else { "fails" }
}

#[cfg(test)]
mod tests {
    use crate::problem::HandValue;
    use crate::problem::ShortcutName;
    use crate::quantity::Unit;
    use crate::solution::answer::{Answer, ShortcutResult};
    use crate::solution::solve;
    use crate::solution::specimen::{input, molar, speciation};

    fn with_hand(contents: &[(&str, &str)], ph: &str, by: ShortcutName) -> Answer {
        let mut statement = speciation(molar(contents), "25");
        statement.hand_value = Some(HandValue {
            ph: input("hand value", ph, Unit::One),
            by,
            limit: None,
        });
        solve(&statement).unwrap()
    }

    fn of(answer: &Answer, name: ShortcutName) -> &ShortcutResult {
        let found = answer
            .shortcuts
            .iter()
            .find(|result| result.shortcut == name);
        found.unwrap()
    }

    #[test]
    fn x_neglected_fails_for_malonic_acid() {
        let answer = with_hand(
            &[("malonic acid", "0.0350")],
            "2.15",
            ShortcutName::XNeglected,
        );
        let result = of(&answer, ShortcutName::XNeglected);
        assert!(!result.within_limit());
        assert!(result.condition.contains("fails"), "{}", result.condition);
        let verdict = answer.hand_value.unwrap();
        assert!(
            !verdict.stands && verdict.reason.contains("limit"),
            "{}",
            verdict.reason
        );
    }

    #[test]
    fn each_nature_has_its_shortcut() {
        let buffer = [("acetic acid", "0.05"), ("sodium acetate", "0.05")];
        let answer = with_hand(&buffer, "4.76", ShortcutName::HendersonHasselbalch);
        let result = of(&answer, ShortcutName::HendersonHasselbalch);
        assert!((result.ph - 4.756).abs() < 0.002, "{}", result.ph);
        let ampholyte = [("sodium hydrogen carbonate", "0.05")];
        let answer = with_hand(&ampholyte, "8.34", ShortcutName::Ampholyte);
        let result = of(&answer, ShortcutName::Ampholyte);
        assert!((result.ph - 8.34).abs() < 0.005, "{}", result.ph);
        let base = [("ammonia", "0.1")];
        let answer = with_hand(&base, "11.12", ShortcutName::XNeglected);
        assert!(answer.hand_value.unwrap().stands);
    }

    #[test]
    fn water_and_next_step_matter_where_they_should() {
        let answer = with_hand(
            &[("hydrochloric acid", "1e-7")],
            "7.00",
            ShortcutName::WaterNeglected,
        );
        assert!(!of(&answer, ShortcutName::WaterNeglected).within_limit());
        let answer = with_hand(
            &[("succinic acid", "0.0450")],
            "2.78",
            ShortcutName::NextStepNeglected,
        );
        let next = of(&answer, ShortcutName::NextStepNeglected);
        assert!(
            next.shift.abs() < 0.01 && next.shift.abs() > 1e-6,
            "{}",
            next.shift
        );
    }
}
