//! The shortcuts of hand calculation, each computed here and held against the full result.
//!
//! They are what a pocket calculator gives: thermodynamic constants at the temperature, amount concentrations, no activity coefficients.

use crate::equilibrium::elementary::{exp10, log10};
use crate::equilibrium::{ActivityModel, Solver, Total};
use crate::problem::{HandValue, ShortcutName};
use crate::quantity::{Decimal, Dimension, RoundingRule};
use crate::solution::Unsolvable;
use crate::solution::answer::{HandVerdict, ShortcutResult};
use crate::solution::solved::Solved;
use crate::solution::tableau::Variation;

/// Largest shift in pH that is accepted where no limit is stated.
const LIMIT: f64 = 0.02;

/// Significant figures that successive approximation keeps (common practice).
const KEPT_FIGURES: u8 = 3;

/// Every shortcut that applies to a solved liquid.
pub(super) fn all(solved: &Solved<'_>) -> Result<Vec<ShortcutResult>, Unsolvable> {
    let full = solved.solution.ph();
    let mut found = Vec::new();
    let mut add = |shortcut, ph: f64, condition: String| {
        if ph.is_finite() {
            found.push(ShortcutResult {
                shortcut,
                ph,
                shift: ph - full,
                limit: LIMIT,
                condition,
            });
        }
    };
    if let Some(sole) = Sole::of(solved) {
        if let Some(weak) = sole.weak() {
            for (shortcut, ph, condition) in weak.shortcuts() {
                add(shortcut, ph, condition);
            }
            if sole.steps > 1 {
                let one = Variation {
                    all_steps: false,
                    ..solved.variation
                };
                if !weak.base {
                    add(
                        ShortcutName::NextStepNeglected,
                        solved.ph_with(one)?,
                        weak.next_step_condition(sole.pk),
                    );
                }
            }
        }
        if let Some((ph, condition)) = sole.henderson_hasselbalch() {
            add(ShortcutName::HendersonHasselbalch, ph, condition);
        }
        if let Some((ph, condition)) = sole.ampholyte() {
            add(ShortcutName::Ampholyte, ph, condition);
        }
    }
    let (ph, share) = without_water(solved)?;
    add(
        ShortcutName::WaterNeglected,
        ph,
        format!("water's own ions are {:.2e} of the balance", share),
    );
    if solved.variation.model != ActivityModel::Ideal {
        add(
            ShortcutName::UnitActivityCoefficients,
            solved.ph_with_model(ActivityModel::Ideal)?,
            format!(
                "ionic strength {:.4} mol/kg",
                solved.solution.ionic_strength()
            ),
        );
    }
    Ok(found)
}

/// Whether a recorded hand value stands: its distance from the full result against the limit.
pub(super) fn verdict(hand: &HandValue, shortcuts: &[ShortcutResult], full: f64) -> HandVerdict {
    let recorded = hand.ph.value().base();
    let limit = hand
        .limit
        .as_ref()
        .map_or(LIMIT, |limit| limit.value().base());
    let shift = recorded - full;
    let same = shortcuts.iter().find(|result| result.shortcut == hand.by);
    // Half a unit of the last recorded digit is the rounding of the value itself.
    let places = hand.ph.measured.decimal.decimal_places();
    let rounding = 0.5 * Decimal::new(false, 1, -i32::try_from(places).unwrap_or(0)).to_f64();
    let stands = shift.abs() <= limit + 1e-9;
    let reason = match same {
        None => format!(
            "the shortcut \"{}\" does not apply to this solution",
            hand.by.name()
        ),
        Some(result) if (result.ph - recorded).abs() > rounding + 0.001 => {
            format!(
                "the shortcut gives {:.3} here, so the recorded value is not what it gives",
                result.ph
            )
        }
        Some(result) if stands => format!(
            "the shortcut costs {:+.3} here, within the limit",
            result.shift
        ),
        Some(result) => format!(
            "the shortcut costs {:+.3} here: {}",
            result.shift, result.condition
        ),
    };
    HandVerdict {
        recorded: hand.ph.measured.to_string(),
        by: hand.by,
        shortcut_gives: same.map(|result| result.ph),
        shift,
        limit,
        stands,
        reason,
    }
}

/// A solution of one acid family, with or without strong acid or base.
struct Sole<'s> {
    pk: &'s [f64],
    steps: usize,
    /// Analytical concentration in mol/L.
    concentration: f64,
    /// Mean protons of the ligand by stoichiometry: what strong acids and bases leave it.
    protons: f64,
    pkw: f64,
}

impl<'s> Sole<'s> {
    fn of(solved: &'s Solved<'_>) -> Option<Self> {
        let mut ligands = solved
            .tableau
            .ligands
            .iter()
            .filter(|place| solved.totals.of(place.component).to_f64() > 0.0);
        let place = ligands.next()?;
        if ligands.next().is_some() {
            return None;
        }
        let total = solved.totals.of(place.component);
        Some(Self {
            pk: &place.pk,
            steps: place.pk.len(),
            concentration: total.to_f64() * solved.tableau.density,
            protons: (solved.totals.protons() / total).to_f64(),
            pkw: solved.tableau.system.water().pkw,
        })
    }

    fn top(&self) -> f64 {
        u32::try_from(self.steps).map_or(f64::NAN, f64::from)
    }

    /// A weak acid or a weak base alone: all of the ligand fully protonated, or fully deprotonated.
    fn weak(&self) -> Option<Weak> {
        let acid = (self.protons - self.top()).abs() < 1e-9;
        let base = self.protons.abs() < 1e-9;
        if acid == base {
            return None;
        }
        let pk = if acid {
            *self.pk.first()?
        } else {
            self.pkw - *self.pk.last()?
        };
        Some(Weak {
            base,
            k: exp10(-pk),
            concentration: self.concentration,
            pkw: self.pkw,
        })
    }

    /// pH = pK + lg(base/acid) for two neighbouring forms.
    fn henderson_hasselbalch(&self) -> Option<(f64, String)> {
        let upper = self.protons.ceil();
        let (acid, base) = (self.protons - (upper - 1.0), upper - self.protons);
        if upper < 1.0 || upper > self.top() || acid < 1e-9 || base < 1e-9 {
            return None;
        }
        let ratio = base / acid;
        let pk = self.pk_losing(upper)?;
        Some((
            pk + log10(ratio),
            format!(
                "base to acid {ratio:.3} (textbook range 0.1 to 10), analytical concentration {:.3e} mol/L",
                self.concentration
            ),
        ))
    }

    /// pH = (pK before + pK after)/2 for a form that can lose and take a proton.
    fn ampholyte(&self) -> Option<(f64, String)> {
        let protons = self.protons.round();
        if (self.protons - protons).abs() > 1e-9 || protons < 1.0 || protons >= self.top() {
            return None;
        }
        let lower = self.pk_losing(protons + 1.0)?;
        let upper = self.pk_losing(protons)?;
        let ratio = self.concentration / exp10(-lower);
        Some((
            0.5 * (lower + upper),
            format!("C/K is {ratio:.3e} (textbook: much larger than 1)"),
        ))
    }

    /// pK of the step in which a form with that many protons loses one.
    fn pk_losing(&self, protons: f64) -> Option<f64> {
        let place = self.pk.iter().enumerate().find(|(index, _)| {
            let left = u32::try_from(self.steps - index).map_or(f64::NAN, f64::from);
            (left - protons).abs() < 0.5
        });
        place.map(|(_, pk)| *pk)
    }
}

/// A weak acid (or base) of one constant, x being the hydrogen (or hydroxide) ions it gives.
struct Weak {
    base: bool,
    k: f64,
    concentration: f64,
    pkw: f64,
}

impl Weak {
    fn shortcuts(&self) -> Vec<(ShortcutName, f64, String)> {
        let exact = self.quadratic();
        let percent = 100.0 * exact / self.concentration;
        vec![
            (
                ShortcutName::FirstStepOnly,
                self.ph(exact),
                format!("x is {percent:.1} % of C"),
            ),
            (
                ShortcutName::XNeglected,
                self.ph((self.k * self.concentration).sqrt()),
                format!("x is {percent:.1} % of C (textbook limit 5 %)"),
            ),
            {
                let (x, rounds) = self.successive();
                (
                    ShortcutName::SuccessiveApproximation,
                    self.ph(x),
                    format!(
                        "{rounds} rounds with {KEPT_FIGURES} figures until the last moved by at most one"
                    ),
                )
            },
        ]
    }

    fn ph(&self, x: f64) -> f64 {
        if self.base {
            self.pkw + log10(x)
        } else {
            -log10(x)
        }
    }

    /// The positive root of x² = K (C - x), in the form that does not cancel.
    fn quadratic(&self) -> f64 {
        let (k, c) = (self.k, self.concentration);
        2.0 * c / (1.0 + (1.0 + 4.0 * c / k).sqrt())
    }

    /// x = √(K (C - x)), each round kept to three figures, until the last kept figure moves by at most one (common practice).
    fn successive(&self) -> (f64, u32) {
        let keep = |x: f64| RoundingRule::HalfEven.to_figures(x, KEPT_FIGURES);
        let mut x = keep((self.k * self.concentration).sqrt());
        for round in 1..=100 {
            let left = (self.concentration - x.to_f64()).max(0.0);
            let next = keep((self.k * left).sqrt());
            let unit = Decimal::new(false, 1, x.exponent().max(next.exponent())).to_f64();
            let settled = (next.to_f64() - x.to_f64()).abs() <= unit * 1.000_001;
            x = next;
            if settled {
                return (x.to_f64(), round);
            }
        }
        // It swings without end where x is not small against C.
        (f64::NAN, 100)
    }

    fn next_step_condition(&self, pk: &[f64]) -> String {
        let distance = match pk {
            [first, second, ..] => second - first,
            _ => f64::NAN,
        };
        format!("the next pK is {distance:.2} higher (textbook: at least 3)")
    }
}

/// pH without the smaller of water's own ions, and their share of the balance's terms.
fn without_water(solved: &Solved<'_>) -> Result<(f64, f64), Unsolvable> {
    let (proton, _) = solved.solution.proton();
    let (hydroxide, _) = solved.solution.hydroxide();
    let acidic = proton >= hydroxide;
    let mut solver = Solver::new(&solved.tableau.system);
    let mut left_out = if acidic { hydroxide } else { proton };
    let mut ph = solved.solution.ph();
    for _ in 0..50 {
        let mut totals = solved.totals.clone();
        // Leaving an ion out of the balance is the same as putting as much of it into the total.
        totals.add_protons(Total::from_f64(if acidic { -left_out } else { left_out }));
        let found = solver
            .solve(&totals, Some(solved.solution.start()))
            .map_err(Unsolvable::Unsolved)?;
        let next = if acidic {
            found.hydroxide().0
        } else {
            found.proton().0
        };
        let moved = (found.ph() - ph).abs();
        ph = found.ph();
        if moved < 1e-12 {
            break;
        }
        // Half steps: near neutrality the two ions are of one size and whole steps would swing.
        left_out = 0.5 * (left_out + next);
    }
    let larger = proton.max(hydroxide);
    Ok((ph, left_out / larger.max(f64::MIN_POSITIVE)))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn weak(k: f64, concentration: f64) -> Weak {
        Weak {
            base: false,
            k,
            concentration,
            pkw: 14.0,
        }
    }

    #[test]
    fn quadratic_satisfies_its_equation() {
        for (k, c) in [(1.8e-5, 0.1), (1e-2, 1e-3), (1e-9, 1e-2)] {
            let x = weak(k, c).quadratic();
            assert!((x * x - k * (c - x)).abs() <= 1e-12 * k * c, "{k} {c}");
        }
    }

    #[test]
    fn successive_approximation_ends_at_the_quadratic() {
        // Own cases; the stop at one unit of the third figure leaves x within two such units, 0.009 in pH at most.
        for (k, c) in [(1.8e-5, 0.1), (7.1e-3, 0.05), (6.2e-5, 0.045)] {
            let weak = weak(k, c);
            let (x, _) = weak.successive();
            assert!(
                (weak.ph(x) - weak.ph(weak.quadratic())).abs() <= 0.009,
                "{k} {c}"
            );
        }
    }
}
