//! Random solutions for the laws of the solver: acids of many steps, neutralised at random, exact equivalence included.
#![expect(
    clippy::unwrap_used,
    clippy::indexing_slicing,
    clippy::disallowed_methods,
    reason = "a test may stop where it cannot go on, and its draws need no fixed bytes"
)]

use ionfolio::equilibrium::{ActivityModel, ComponentIndex, Species, System, Total, Totals, Water};
use rand_chacha::ChaCha8Rng;
use rand_chacha::rand_core::{RngCore, SeedableRng};

/// A species: charge, protons and lg of its stability constant from its free components.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Ion {
    pub(crate) charge: i8,
    pub(crate) protons: i8,
    pub(crate) lg_beta: f64,
}

/// A component with its own species; its total in mol/kg is the exact sum of products of its portions.
#[derive(Clone, Debug)]
pub(crate) struct Component {
    pub(crate) ions: Vec<Ion>,
    pub(crate) portions: Vec<(f64, f64)>,
}

/// A species of several units.
#[derive(Clone, Debug)]
pub(crate) struct Polynuclear {
    pub(crate) ion: Ion,
    pub(crate) units: Vec<(usize, u8)>,
}

/// A problem in plain figures, from which the solver's and any other form is made.
#[derive(Clone, Debug)]
pub(crate) struct Solution {
    pub(crate) water: Water,
    pub(crate) model: ActivityModel,
    pub(crate) components: Vec<Component>,
    pub(crate) polynuclear: Vec<Polynuclear>,
}

/// The solver's form of a problem.
pub(crate) struct Problem {
    pub(crate) system: System,
    pub(crate) totals: Totals,
    pub(crate) components: Vec<ComponentIndex>,
}

impl Component {
    /// An acid by the pK of its steps, most acidic first, and the charge of its fully protonated form.
    pub(crate) fn acid(top: i8, pks: &[f64], total: f64) -> Self {
        let steps = i8::try_from(pks.len()).unwrap();
        let mut ions = vec![Ion {
            charge: top - steps,
            protons: 0,
            lg_beta: 0.0,
        }];
        let mut lg_beta = 0.0;
        for (protons, pk) in (1..).zip(pks.iter().rev()) {
            lg_beta += pk;
            ions.push(Ion {
                charge: top - steps + protons,
                protons,
                lg_beta,
            });
        }
        Self {
            ions,
            portions: vec![(total, 1.0)],
        }
    }

    /// An ion that takes no proton.
    pub(crate) fn inert(charge: i8, portions: Vec<(f64, f64)>) -> Self {
        Self {
            ions: vec![Ion {
                charge,
                protons: 0,
                lg_beta: 0.0,
            }],
            portions,
        }
    }
}

impl Solution {
    /// The solver's form; protons follow from electroneutrality of what was put in.
    pub(crate) fn problem(&self) -> Problem {
        let mut builder = System::builder(self.water, self.model);
        let species = |ion: &Ion| Species::new(ion.charge, ion.protons, ion.lg_beta);
        let components: Vec<_> = self
            .components
            .iter()
            .map(|component| {
                builder.ligand(&component.ions.iter().map(species).collect::<Vec<_>>())
            })
            .collect();
        for polynuclear in &self.polynuclear {
            let units: Vec<_> = polynuclear
                .units
                .iter()
                .map(|&(component, count)| (components[component], count))
                .collect();
            builder.polynuclear(species(&polynuclear.ion), &units);
        }
        let system = builder.build().unwrap();
        let mut totals = Totals::none(&system);
        for (component, index) in self.components.iter().zip(&components) {
            for &(amount, factor) in &component.portions {
                let portion = Total::from_f64(amount) * factor;
                totals.add(*index, portion);
                totals.add_protons(portion * -f64::from(component.ions[0].charge));
            }
        }
        Problem {
            system,
            totals,
            components,
        }
    }
}

/// Seeded draws.
pub(crate) struct Draw(ChaCha8Rng);

impl Draw {
    pub(crate) fn from_seed(seed: u64) -> Self {
        Self(ChaCha8Rng::seed_from_u64(seed))
    }

    pub(crate) fn unit(&mut self) -> f64 {
        f64::from(self.0.next_u32()) / f64::from(u32::MAX)
    }

    pub(crate) fn between(&mut self, low: f64, high: f64) -> f64 {
        low + (high - low) * self.unit()
    }

    pub(crate) fn below(&mut self, count: u32) -> u32 {
        self.0.next_u32() % count
    }

    fn concentration(&mut self) -> f64 {
        10_f64.powf(self.between(-12.0, 0.7))
    }

    /// 1 to 8 acids of 1 to 6 protons, 1e-12 to 5 mol/kg, pK -2 to 15, 0 to 100 °C; then a cation and an anion that neutralise.
    pub(crate) fn solution(&mut self, model: ActivityModel) -> Solution {
        let water = Water::at(273.15 + self.between(0.0, 100.0)).unwrap();
        let mut components = Vec::new();
        let mut base = vec![(0.0, 1.0)];
        let mut acid = vec![(0.0, 1.0)];
        for _ in 0..=self.below(8) {
            let steps = 1 + i8::try_from(self.below(6)).unwrap();
            // Charges within ±3, where the solution with Davies' equation is proven to be unique.
            let top = (steps - 3).max(0) + i8::try_from(self.below(2)).unwrap();
            let mut pks: Vec<f64> = (0..steps).map(|_| self.between(-2.0, 15.0)).collect();
            pks.sort_by(f64::total_cmp);
            let amount = self.concentration();
            components.push(Component::acid(top, &pks, amount));
            match self.below(3) {
                // Neutralised exactly by some whole number of steps.
                0 => base.push((amount, f64::from(self.below(4)))),
                1 => base.push((self.concentration(), 1.0)),
                _ => acid.push((self.concentration(), 1.0)),
            }
        }
        components.push(Component::inert(1, base));
        components.push(Component::inert(-1, acid));
        Solution {
            water,
            model,
            components,
            polynuclear: Vec::new(),
        }
    }

    /// The same with dimers, pairs with the cation, and mixed species of two acids.
    pub(crate) fn polynuclear_solution(&mut self, model: ActivityModel) -> Solution {
        let mut solution = self.solution(model);
        let acids = solution.components.len() - 2;
        solution.components.drain(3.min(acids)..acids);
        let acids = solution.components.len() - 2;
        for _ in 0..=self.below(3) {
            let first = usize::try_from(self.below(u32::try_from(acids).unwrap())).unwrap();
            // The partner: the same acid again, the next one, or the cation.
            let second = (first + usize::try_from(self.below(3)).unwrap()).min(acids);
            let pick = |draw: &mut Self, component: usize| {
                let ions = &solution.components[component].ions;
                ions[usize::try_from(draw.below(u32::try_from(ions.len()).unwrap())).unwrap()]
            };
            let (a, b) = (pick(self, first), pick(self, second));
            let charge = a.charge + b.charge;
            if charge.abs() > 3 {
                continue;
            }
            let units = if first == second {
                vec![(first, 2)]
            } else {
                vec![(first, 1), (second, 1)]
            };
            let lg_beta = a.lg_beta + b.lg_beta + self.between(-2.0, 4.0);
            let protons = a.protons + b.protons;
            solution.polynuclear.push(Polynuclear {
                ion: Ion {
                    charge,
                    protons,
                    lg_beta,
                },
                units,
            });
        }
        solution
    }
}
