//! The case that a hand calculation sees: one acid family at one concentration, with activity coefficients of 1.

use crate::equilibrium::elementary::{exp10, log10};
use crate::solution::assembly::{Assembly, Solved};
use crate::substance::Component;

/// What the one acid family of a solution is there as, by stoichiometry.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Nature {
    /// Fully protonated.
    Acid,
    /// Fully deprotonated.
    Base,
    /// With a whole number of protons between; the step (from 0) that takes the next proton off.
    Ampholyte {
        /// Step by which it acts as an acid.
        acid_step: usize,
    },
    /// Two neighbouring forms; the step (from 0) between them.
    Buffer {
        /// The step.
        step: usize,
        /// Amount of the base by amount of the acid.
        ratio: f64,
    },
    /// With strong acid or base beyond what it takes up.
    Excess,
}

/// One acid family as a hand calculation sees it.
#[derive(Clone, Debug)]
pub(super) struct HandCase {
    /// Its name.
    pub(super) ligand: String,
    /// pK of its steps at the temperature, most acidic first.
    pub(super) pks: Vec<f64>,
    /// Analytical concentration in mol/L.
    pub(super) concentration: f64,
    /// pKw.
    pub(super) pkw: f64,
    /// What it is there as.
    pub(super) nature: Nature,
}

/// How near to a whole number of protons a form counts as that form alone.
const WHOLE: f64 = 1e-9;

impl HandCase {
    /// The case, where there is exactly one acid family, not held by the air.
    pub(super) fn of(assembly: &Assembly, solved: &Solved) -> Option<Self> {
        let mut ligands = assembly.parts.iter().filter_map(|part| {
            let Component::Ligand(ligand) = &part.component else {
                return None;
            };
            let concentration = solved.worked.at(part.concentration?).to_f64();
            (concentration > 0.0 && !part.held).then_some((ligand, concentration))
        });
        let (ligand, concentration) = ligands.next()?;
        if ligands.next().is_some() || assembly.parts.iter().any(|part| part.held) {
            return None;
        }
        let pks: Vec<f64> = assembly
            .pks
            .iter()
            .filter(|pk| pk.ligand.name == ligand.name)
            .map(|pk| pk.found.value)
            .collect();
        let protons = solved.worked.at(assembly.recipe.protons).to_f64() / concentration;
        Some(Self {
            ligand: ligand.name.clone(),
            nature: nature(protons, pks.len()),
            pks,
            concentration,
            pkw: assembly.system.water().pkw,
        })
    }

    /// pK of a step counted from 0, dimensionless.
    pub(super) fn pk(&self, step: usize) -> Option<f64> {
        self.pks.get(step).copied()
    }

    /// The constant of the first step, acid or base, and how to make a pH of its x in mol/L; `None` for other natures.
    pub(super) fn first_constant(&self) -> Option<f64> {
        match self.nature {
            Nature::Acid => Some(exp10(-self.pk(0)?)),
            Nature::Base => Some(exp10(self.pks.last()? - self.pkw)),
            Nature::Ampholyte { .. } | Nature::Buffer { .. } | Nature::Excess => None,
        }
    }

    /// pH of x mol/L of H⁺ from an acid, or of OH⁻ from a base; dimensionless.
    fn ph_of(&self, x: f64) -> Option<f64> {
        let lg = (x > 0.0).then(|| log10(x))?;
        Some(if self.nature == Nature::Base {
            self.pkw + lg
        } else {
            -lg
        })
    }

    /// pH by the first step only, its quadratic solved; dimensionless.
    pub(super) fn first_step(&self) -> Option<f64> {
        let k = self.first_constant()?;
        // 2 K C/(K + √(K² + 4 K C)): the root without cancellation.
        let product = k * self.concentration;
        self.ph_of(2.0 * product / (k + (k * k + 4.0 * product).sqrt()))
    }

    /// pH with x neglected against C; dimensionless.
    pub(super) fn x_neglected(&self) -> Option<f64> {
        self.ph_of((self.first_constant()? * self.concentration).sqrt())
    }

    /// pH by successive approximation of x = √(K (C - x)), stopped when the last of `decimals` kept moves by at most one (common practice), and
    /// the number of rounds; `None` where it does not settle.
    pub(super) fn successive(&self, decimals: i32) -> Option<(f64, u32)> {
        let k = self.first_constant()?;
        let unit = exp10(-f64::from(decimals));
        let kept = |ph: f64| (ph / unit).round() * unit;
        let mut ph = kept(self.x_neglected()?);
        let mut x = (k * self.concentration).sqrt();
        for round in 1..=100 {
            if x >= self.concentration {
                return None;
            }
            x = (k * (self.concentration - x)).sqrt();
            let next = kept(self.ph_of(x)?);
            if (next - ph).abs() < 1.5 * unit {
                return Some((next, round));
            }
            ph = next;
        }
        None
    }

    /// pH after Henderson and Hasselbalch; dimensionless.
    pub(super) fn henderson_hasselbalch(&self) -> Option<f64> {
        match self.nature {
            Nature::Buffer { step, ratio } => Some(self.pk(step)? + log10(ratio)),
            Nature::Acid | Nature::Base | Nature::Ampholyte { .. } | Nature::Excess => None,
        }
    }

    /// pH of an ampholyte as the mean of its two pK; dimensionless.
    pub(super) fn ampholyte(&self) -> Option<f64> {
        match self.nature {
            Nature::Ampholyte { acid_step } => {
                Some(0.5 * (self.pk(acid_step.checked_sub(1)?)? + self.pk(acid_step)?))
            }
            Nature::Acid | Nature::Base | Nature::Buffer { .. } | Nature::Excess => None,
        }
    }
}

fn nature(protons: f64, steps: usize) -> Nature {
    let most = f64::from(u32::try_from(steps).unwrap_or(u32::MAX));
    let nearest = protons.round();
    let whole = (protons - nearest).abs() < WHOLE;
    if protons < -WHOLE || protons > most + WHOLE {
        return Nature::Excess;
    }
    // A state with h protons is left by step n - h, counted from 0.
    let step_leaving = |held: f64| {
        (0..steps).find(|step| {
            let kept = f64::from(u32::try_from(steps - step).unwrap_or(0));
            (kept - held).abs() < 0.5
        })
    };
    if whole && nearest >= most {
        return Nature::Acid;
    }
    if whole && nearest <= 0.0 {
        return Nature::Base;
    }
    if whole {
        return step_leaving(nearest)
            .map_or(Nature::Excess, |acid_step| Nature::Ampholyte { acid_step });
    }
    let above = protons.floor() + 1.0;
    let ratio = (above - protons) / (protons - protons.floor());
    step_leaving(above).map_or(Nature::Excess, |step| Nature::Buffer { step, ratio })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn malonic() -> HandCase {
        HandCase {
            ligand: "malonic acid".to_owned(),
            pks: vec![2.847, 5.696],
            concentration: 0.0350,
            pkw: 13.995,
            nature: Nature::Acid,
        }
    }

    #[test]
    fn malonic_acid_by_pocket_calculator() {
        // K = 1.4223e-3, C = 0.0350: x = 6.380e-3 by the quadratic, 7.056e-3 with x neglected; worked by hand, half a unit of the third decimal.
        assert!((malonic().first_step().unwrap() - 2.195).abs() < 0.0006);
        assert!((malonic().x_neglected().unwrap() - 2.151).abs() < 0.0006);
    }

    #[test]
    fn hand_methods_agree_with_the_exact_quadratic_on_own_cases() {
        // Own cases: pK and C in mol/L. x² + K x - K C = 0 is solved here in its plain form, whose cancellation costs less than 1e-9 in these cases.
        // Successive approximation stops when the second decimal moves by at most one, so it may be off by two of them.
        for (pk, concentration) in [(4.21, 0.045), (3.13, 0.02), (4.76, 0.1), (2.85, 0.035)] {
            let case = HandCase {
                pks: vec![pk, pk + 3.5],
                concentration,
                ..malonic()
            };
            let k = exp10(-pk);
            let x = 0.5 * ((k * k + 4.0 * k * concentration).sqrt() - k);
            assert!((case.first_step().unwrap() + log10(x)).abs() < 1e-9, "{pk}");
            let (ph, _) = case.successive(2).unwrap();
            assert!((ph + log10(x)).abs() <= 0.02, "{pk}: {ph}");
        }
    }

    #[test]
    fn natures_follow_from_the_protons() {
        assert_eq!(nature(3.0, 3), Nature::Acid);
        assert_eq!(nature(0.0, 3), Nature::Base);
        assert_eq!(nature(2.0, 3), Nature::Ampholyte { acid_step: 1 });
        assert_eq!(nature(1.0, 3), Nature::Ampholyte { acid_step: 2 });
        assert_eq!(nature(-0.1, 3), Nature::Excess);
        let Nature::Buffer { step, ratio } = nature(1.25, 3) else {
            panic!("a buffer was expected");
        };
        assert_eq!(step, 1);
        assert!((ratio - 3.0).abs() < 1e-12);
    }
}
