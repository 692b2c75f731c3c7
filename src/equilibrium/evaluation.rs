//! All species, the proton balance and the ionic strength at one pH and one ionic strength, with their derivatives.
//!
//! The proton balance f = \[H] - \[OH] + Σ c m - D is formed relative to the dominant form of each ligand at the current pH: c counts the
//! protons of a species above that form, and `D = T_H - Σ n0 T` is what is left of the proton total, in double-double. So nothing large
//! cancels, and f keeps its relative precision at an equivalence point too.
#![expect(
    clippy::indexing_slicing,
    reason = "all vectors have one entry for each species or component of the same system, sized in `Evaluation::new`"
)]

use crate::equilibrium::activity::{LnGamma, Screening};
use crate::equilibrium::elementary::{LN_10, exp, ln};
use crate::equilibrium::factor::{Factor, Matrix};
use crate::equilibrium::tableau::{ComponentRow, MOST_COUPLED};
use crate::equilibrium::{System, Total, Totals};

/// Step limit of the inner Newton iteration on ln of a free ligand: a factor of 100.
const LARGEST_STEP: f64 = 4.6;

/// Largest number of inner iterations; the largest seen in trials is 21.
const MOST_INNER_STEPS: usize = 100;

/// A quantity with its partial derivatives with respect to x = ln a(H+) and to ionic strength.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Partial {
    pub(super) value: f64,
    pub(super) by_x: f64,
    pub(super) by_i: f64,
}

impl Partial {
    #[inline]
    fn add(&mut self, factor: f64, value: f64, by_x: f64, by_i: f64) {
        self.value += factor * value;
        self.by_x += factor * by_x;
        self.by_i += factor * by_i;
    }
}

/// The state of a system at one pH and one ionic strength.
#[derive(Clone, Debug)]
pub(super) struct Evaluation {
    /// Sum of the terms of the proton balance that are positive.
    pub(super) positive: Partial,
    /// Sum of the sizes of those that are negative.
    pub(super) negative: Partial,
    /// Ionic strength that the species have, in mol/kg.
    pub(super) ionic_strength: Partial,
    /// Molality of each species in mol/kg.
    pub(super) molality: Vec<f64>,
    pub(super) gamma: Vec<LnGamma>,
    pub(super) proton: f64,
    pub(super) hydroxide: f64,
    pub(super) proton_gamma: LnGamma,
    pub(super) hydroxide_gamma: LnGamma,
    /// Protons of the reference form of each component.
    pub(super) reference: Vec<f64>,
    /// Protons of each species above its components' reference forms.
    pub(super) above: Vec<f64>,
    /// ln of the activity of each coupled component's free form.
    free: [f64; MOST_COUPLED],
    factor: Factor,
}

impl Evaluation {
    /// Room for a system.
    pub(super) fn new(system: &System) -> Self {
        let species = system.rows.len();
        Self {
            positive: Partial::default(),
            negative: Partial::default(),
            ionic_strength: Partial::default(),
            molality: vec![0.0; species],
            gamma: vec![LnGamma::default(); species],
            proton: 0.0,
            hydroxide: 0.0,
            proton_gamma: LnGamma::default(),
            hydroxide_gamma: LnGamma::default(),
            reference: vec![0.0; system.components.len()],
            above: vec![0.0; species],
            free: [0.0; MOST_COUPLED],
            factor: Factor::default(),
        }
    }

    /// Evaluates at `x` = ln a(H+) and ionic strength `i` in mol/kg; false if the mass balances of coupled components were not solved.
    pub(super) fn at(&mut self, system: &System, totals: &Totals, x: f64, i: f64) -> bool {
        self.positive = Partial::default();
        self.negative = Partial::default();
        self.ionic_strength = Partial::default();
        let screening = Screening::at(system.model, &system.water, i);
        for (row, gamma) in system.rows.iter().zip(&mut self.gamma) {
            let LnGamma { value, slope } = screening.ln_gamma(row.z2, row.ion_size);
            *gamma = LnGamma {
                value: value + row.salting * i,
                slope: slope + row.salting,
            };
        }
        self.water_ions(system, &screening, x);
        let mut left = totals.protons;
        for (k, component) in system.components.iter().enumerate() {
            if component.coupled.is_some() {
                continue;
            }
            if component.held.is_some() {
                self.held(system, component, k, x);
            } else if component.own.len() == 1 {
                self.single(system, component, k, totals);
            } else {
                self.simple(system, component, k, totals, x);
            }
            left = left - totals.components[k] * self.reference[k];
        }
        let solved = system.coupled.is_empty() || self.coupled(system, totals, x);
        for &k in &system.coupled {
            left = left - totals.components[k] * self.reference[k];
        }
        self.remainder(left);
        solved
    }

    /// H+ and OH-.
    fn water_ions(&mut self, system: &System, screening: &Screening, x: f64) {
        self.proton_gamma = screening.ln_gamma(1.0, system.proton_size);
        self.hydroxide_gamma = screening.ln_gamma(1.0, system.hydroxide_size);
        self.proton = exp(x - self.proton_gamma.value);
        self.hydroxide = exp(-system.water.pkw * LN_10 - x - self.hydroxide_gamma.value);
        let (h, oh) = (self.proton, self.hydroxide);
        let (h_i, oh_i) = (
            -h * self.proton_gamma.slope,
            -oh * self.hydroxide_gamma.slope,
        );
        self.positive.add(1.0, h, h, h_i);
        self.negative.add(1.0, oh, -oh, oh_i);
        self.ionic_strength.add(0.5, h, h, h_i);
        self.ionic_strength.add(0.5, oh, -oh, oh_i);
    }

    /// A component with one species: it has the whole total.
    fn single(&mut self, system: &System, component: &ComponentRow, k: usize, totals: &Totals) {
        let s = component.own.start;
        let m = totals.components[k].to_f64();
        self.reference[k] = system.rows[s].protons;
        self.above[s] = 0.0;
        self.molality[s] = m;
        self.ionic_strength.value += 0.5 * system.rows[s].z2 * m;
    }

    /// A mononuclear ligand in closed form.
    fn simple(
        &mut self,
        system: &System,
        component: &ComponentRow,
        k: usize,
        totals: &Totals,
        x: f64,
    ) {
        let total = totals.components[k].to_f64();
        let range = component.own.clone();
        let dominant = self.weights(system, component, x);
        let top = self.molality[dominant];
        let mut sum = 0.0;
        let mut protons = 0.0;
        let mut slope = 0.0;
        for s in range.clone() {
            let weight = exp(self.molality[s] - top);
            self.molality[s] = weight;
            sum += weight;
            protons += weight * system.rows[s].protons;
            slope += weight * self.gamma[s].slope;
        }
        let (mean_protons, mean_slope) = (protons / sum, slope / sum);
        let reference = system.rows[dominant].protons;
        self.reference[k] = reference;
        let scale = total / sum;
        for s in range {
            let m = self.molality[s] * scale;
            let by_x = m * (system.rows[s].protons - mean_protons);
            let by_i = m * (mean_slope - self.gamma[s].slope);
            self.put(
                system,
                s,
                [m, by_x, by_i],
                system.rows[s].protons - reference,
            );
        }
    }

    /// A component with one species at fixed activity.
    fn held(&mut self, system: &System, component: &ComponentRow, k: usize, x: f64) {
        let (protons, ln_activity) = component.held.unwrap_or_default();
        let held = component
            .own
            .clone()
            .find(|&s| (system.rows[s].protons - protons).abs() < 0.5);
        let held_beta = held.map_or(0.0, |s| system.rows[s].ln_beta);
        self.reference[k] = protons;
        for s in component.own.clone() {
            let row = &system.rows[s];
            let above = row.protons - protons;
            let m = exp(ln_activity + row.ln_beta - held_beta + above * x - self.gamma[s].value);
            let by_i = -m * self.gamma[s].slope;
            self.put(system, s, [m, m * above, by_i], above);
        }
    }

    /// ln of the relative weight of each own species of a component into `molality`; returns the heaviest.
    fn weights(&mut self, system: &System, component: &ComponentRow, x: f64) -> usize {
        let mut dominant = component.own.start;
        for s in component.own.clone() {
            let row = &system.rows[s];
            self.molality[s] = row.ln_beta + row.protons * x - self.gamma[s].value;
            if self.molality[s] > self.molality[dominant] {
                dominant = s;
            }
        }
        dominant
    }

    /// Takes up one species.
    #[inline]
    fn put(&mut self, system: &System, s: usize, [m, by_x, by_i]: [f64; 3], above: f64) {
        self.molality[s] = m;
        self.above[s] = above;
        if above > 0.0 {
            self.positive.add(above, m, by_x, by_i);
        } else if above < 0.0 {
            self.negative.add(-above, m, by_x, by_i);
        }
        self.ionic_strength
            .add(0.5 * system.rows[s].z2, m, by_x, by_i);
    }

    /// What is left of the proton total.
    fn remainder(&mut self, left: Total) {
        let left = left.to_f64();
        if left < 0.0 {
            self.positive.value -= left;
        } else {
            self.negative.value += left;
        }
    }

    /// Components that polynuclear species couple: Newton on ln(Σ ν m) - ln T at this pH.
    fn coupled(&mut self, system: &System, totals: &Totals, x: f64) -> bool {
        for (place, &k) in system.coupled.iter().enumerate() {
            let component = &system.components[k];
            let dominant = self.weights(system, component, x);
            self.reference[k] = system.rows[dominant].protons;
            let top = self.molality[dominant];
            let sum: f64 = component
                .own
                .clone()
                .map(|s| exp(self.molality[s] - top))
                .sum();
            // The upper bound: all of the total in the component's own species.
            self.free[place] = ln(coupled_total(totals, k)) - top - ln(sum);
        }
        for _ in 0..MOST_INNER_STEPS {
            let (sums, matrix) = self.coupled_sums(system, x);
            let Some(factor) = Factor::of(&matrix, system.coupled.len()) else {
                return false;
            };
            let mut step = [0.0; MOST_COUPLED];
            for (place, &k) in system.coupled.iter().enumerate() {
                step[place] = sums[place] * ln(coupled_total(totals, k) / sums[place]);
            }
            factor.solve(&mut step);
            let largest = step
                .iter()
                .fold(0.0_f64, |size, value| size.max(value.abs()));
            let cut = if largest > LARGEST_STEP {
                LARGEST_STEP / largest
            } else {
                1.0
            };
            for (free, step) in self.free.iter_mut().zip(step) {
                *free += cut * step;
            }
            if largest < 1e-13 {
                break;
            }
        }
        let (sums, matrix) = self.coupled_sums(system, x);
        let Some(factor) = Factor::of(&matrix, system.coupled.len()) else {
            return false;
        };
        self.factor = factor;
        self.put_coupled(system);
        system.coupled.iter().enumerate().all(|(place, &k)| {
            let total = coupled_total(totals, k);
            (sums[place] - total).abs() <= 1e-10 * total
        })
    }

    /// Molalities of coupled species from the free components, the sums Σ ν m, and the matrix Σ ν ν m.
    fn coupled_sums(&mut self, system: &System, x: f64) -> ([f64; MOST_COUPLED], Matrix) {
        let mut sums = [0.0; MOST_COUPLED];
        let mut matrix = [[0.0; MOST_COUPLED]; MOST_COUPLED];
        for (place, &k) in system.coupled.iter().enumerate() {
            for s in system.components[k].own.clone() {
                let row = &system.rows[s];
                let m = exp(row.ln_beta + row.protons * x - self.gamma[s].value + self.free[place]);
                self.molality[s] = m;
                sums[place] += m;
                matrix[place][place] += m;
            }
        }
        for species in &system.polynuclear {
            let row = &system.rows[species.row];
            let bound: f64 = species
                .units
                .iter()
                .map(|&(place, count)| count * self.free[place])
                .sum();
            let m = exp(row.ln_beta + row.protons * x - self.gamma[species.row].value + bound);
            self.molality[species.row] = m;
            for &(a, nu_a) in &species.units {
                sums[a] += nu_a * m;
                for &(b, nu_b) in &species.units {
                    matrix[a][b] += nu_a * nu_b * m;
                }
            }
        }
        (sums, matrix)
    }

    /// Takes up the coupled species with their derivatives.
    fn put_coupled(&mut self, system: &System) {
        for &k in &system.coupled {
            for s in system.components[k].own.clone() {
                self.above[s] = system.rows[s].protons - self.reference[k];
            }
        }
        for species in &system.polynuclear {
            let bound: f64 = species
                .units
                .iter()
                .map(|&(place, count)| count * self.reference[system.coupled[place]])
                .sum();
            self.above[species.row] = system.rows[species.row].protons - bound;
        }
        let by_x = self.coupled_response(system, |s| system.rows[s].protons, None);
        let slopes: Vec<f64> = self.gamma.iter().map(|gamma| -gamma.slope).collect();
        let by_i = self.coupled_response(system, |s| slopes[s], None);
        for ((s, dx), (_, di)) in by_x.into_iter().zip(by_i) {
            let (m, above) = (self.molality[s], self.above[s]);
            self.put(system, s, [m, dx, di], above);
        }
    }

    /// Change of the molality of every coupled species when ln of each changes by `explicit` at fixed free components, and the total of the
    /// coupled component `added` by one mol/kg, the other totals staying.
    fn coupled_response(
        &self,
        system: &System,
        explicit: impl Fn(usize) -> f64,
        added: Option<usize>,
    ) -> Vec<(usize, f64)> {
        let mut members: Vec<(usize, Vec<(usize, f64)>)> = Vec::new();
        for (place, &k) in system.coupled.iter().enumerate() {
            members.extend(
                system.components[k]
                    .own
                    .clone()
                    .map(|s| (s, vec![(place, 1.0)])),
            );
        }
        members.extend(system.polynuclear.iter().map(|p| (p.row, p.units.clone())));
        let mut change = [0.0; MOST_COUPLED];
        for (s, units) in &members {
            for &(place, count) in units {
                change[place] -= count * self.molality[*s] * explicit(*s);
            }
        }
        if let Some(place) = added {
            change[place] += 1.0;
        }
        self.factor.solve(&mut change);
        members
            .into_iter()
            .map(|(s, units)| {
                let free: f64 = units
                    .iter()
                    .map(|&(place, count)| count * change[place])
                    .sum();
                (s, self.molality[s] * (explicit(s) + free))
            })
            .collect()
    }

    /// Change of the proton balance and of the ionic strength, at fixed pH and ionic strength, when ln of the molality of each species
    /// changes by `explicit` at fixed free components, and the total of component `added` by one mol/kg.
    pub(super) fn response(
        &self,
        system: &System,
        explicit: impl Fn(usize) -> f64,
        added: Option<usize>,
    ) -> (f64, f64) {
        let (mut balance, mut ionic) = (0.0, 0.0);
        let mut take = |s: usize, change: f64| {
            balance += self.above[s] * change;
            ionic += 0.5 * system.rows[s].z2 * change;
        };
        for (k, component) in system.components.iter().enumerate() {
            if component.coupled.is_some() {
                continue;
            }
            let total: f64 = component.own.clone().map(|s| self.molality[s]).sum();
            let more = if added == Some(k) { 1.0 } else { 0.0 };
            let mean = if total > 0.0 && component.held.is_none() {
                component
                    .own
                    .clone()
                    .map(|s| self.molality[s] * explicit(s))
                    .sum::<f64>()
                    / total
            } else {
                0.0
            };
            for s in component.own.clone() {
                let share = if total > 0.0 {
                    self.molality[s] / total
                } else {
                    0.0
                };
                let grown = if component.held.is_none() {
                    more * share
                } else {
                    0.0
                };
                take(s, self.molality[s] * (explicit(s) - mean) + grown);
            }
        }
        if !system.coupled.is_empty() {
            let place = added.and_then(|k| system.components[k].coupled);
            for (s, change) in self.coupled_response(system, &explicit, place) {
                take(s, change);
            }
        }
        // More of a component brings the reference protons that its total is reckoned with.
        if let Some(k) = added {
            balance += self.reference[k];
        }
        (balance, ionic)
    }

    /// The proton balance in mol/kg.
    pub(super) fn balance(&self) -> f64 {
        self.positive.value - self.negative.value
    }
}

/// The total of a coupled component, kept above zero so that its logarithm stays finite.
fn coupled_total(totals: &Totals, k: usize) -> f64 {
    totals.components[k].to_f64().max(1e-290)
}
