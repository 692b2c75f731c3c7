//! Phosphoric acid with sodium hydroxide, solved, and statements read from blocks: what the samples are built on.

pub(super) use self::phosphate::{DENSITY, Phosphate, curve, statement};

#[cfg(test)]
mod phosphate {
    use crate::block::{Attachments, Context, Defaults, SolutionError, Solutions, read};
    use crate::equilibrium::{
        ActivityModel, Certified, ComponentIndex, Solver, Species, System, Total, Totals, Water,
    };
    use crate::problem::{Composition, SolutionReference, Statement};
    use crate::solution::answer::{
        ComponentTotal, CurvePoint, Dissociation, Distribution, DistributionCurve, SpeciesState,
        State,
    };
    use crate::substance::{Catalogue, Ligand};
    use std::sync::Arc;

    /// Density of water at 25 °C in kg/L (IAPWS SR6-08, recalled); only scales the samples.
    pub(in crate::report) const DENSITY: f64 = 0.997_05;

    #[derive(Debug)]
    struct Outside;

    impl Solutions for Outside {
        fn solution(&self, _: &SolutionReference) -> Result<Arc<Composition>, SolutionError> {
            Err(SolutionError::Faulty)
        }
    }

    impl Attachments for Outside {
        fn read(&self, _: &str) -> Result<Vec<u8>, String> {
            Ok(b"volume_mL,pH\n2.0,2.05\n6.0,2.65\n8.0,4.62\n12.0,7.01\n18.0,11.3\n".to_vec())
        }
    }

    /// The statement of a block.
    pub(in crate::report) fn statement(text: &str) -> Statement {
        let context = Context {
            catalogue: Catalogue::embedded().unwrap(),
            defaults: &Defaults::program(),
            solutions: &Outside,
            attachments: &Outside,
        };
        let reading = read(text, &context);
        reading
            .statement
            .unwrap_or_else(|| panic!("{:?}", reading.diagnostics))
    }

    /// Phosphoric acid with sodium hydroxide, in mol/L.
    #[derive(Clone, Debug)]
    pub(in crate::report) struct Phosphate {
        pub(in crate::report) ligand: Arc<Ligand>,
        system: System,
        component: ComponentIndex,
        solution: Certified,
        total: f64,
        sodium: f64,
    }

    impl Phosphate {
        pub(in crate::report) fn new(total: f64, sodium: f64) -> Self {
            let ligand = Catalogue::embedded()
                .unwrap()
                .ligand("phosphoric acid")
                .unwrap()
                .clone();
            let water = Water::at(298.15).unwrap();
            let mut builder = System::builder(water, ActivityModel::Davies);
            let mut lg_beta = 0.0;
            let mut species = vec![Species::new(-3, 0, 0.0)];
            for (protons, step) in (1_i8..).zip(ligand.steps.iter().rev()) {
                lg_beta += step.preferred.pk.to_f64();
                species.push(Species::new(protons - 3, protons, lg_beta));
            }
            let phosphate = builder.ligand(&species);
            let counter = builder.inert(1, None);
            let system = builder.build().unwrap();
            let mut totals = Totals::none(&system);
            totals.set(phosphate, Total::from_f64(total / DENSITY));
            totals.set(counter, Total::from_f64(sodium / DENSITY));
            totals.set_protons(Total::from_f64((3.0 * total - sodium) / DENSITY));
            let solution = Solver::new(&system).solve(&totals, None).unwrap();
            Self {
                ligand,
                system,
                component: phosphate,
                solution,
                total,
                sodium,
            }
        }

        pub(in crate::report) fn ph(&self) -> f64 {
            self.solution.ph()
        }

        pub(in crate::report) fn pk_at_temperature(&self) -> Vec<(String, usize, f64)> {
            (1..)
                .zip(&self.ligand.steps)
                .map(|(number, step)| {
                    let pk = step.preferred.pk.to_f64();
                    (self.ligand.name.clone(), number, pk)
                })
                .collect()
        }

        pub(in crate::report) fn state(&self) -> State {
            let solution = &self.solution;
            State {
                ph: solution.ph(),
                p_hydrogen: solution.p_hydrogen(),
                ionic_strength: solution.ionic_strength(),
                species: self.species(),
                dissociation: vec![Dissociation {
                    ligand: self.ligand.name.clone(),
                    step: 2,
                    degree: 0.6,
                }],
                totals: vec![ComponentTotal {
                    component: self.ligand.name.clone(),
                    molality: self.total / DENSITY,
                    concentration: self.total,
                }],
                buffer_capacity: 0.0271,
                certificate: solution.certificate(),
            }
        }

        fn species(&self) -> Vec<SpeciesState> {
            let solution = &self.solution;
            let water = |name: &str, charge, (molality, gamma): (f64, f64)| SpeciesState {
                name: name.to_owned(),
                component: None,
                nuclearity: 0,
                protons: charge,
                charge,
                molality,
                concentration: molality * DENSITY,
                fraction: None,
                activity_coefficient: gamma,
            };
            let mut species = vec![
                water("H⁺", 1, solution.proton()),
                water("OH⁻", -1, solution.hydroxide()),
            ];
            let states: Vec<_> = self.system.species_of(self.component).collect();
            for (index, (name, place)) in self
                .ligand
                .states
                .iter()
                .zip(states.iter().rev())
                .enumerate()
            {
                let molality = solution.molality(*place);
                species.push(SpeciesState {
                    name: name.clone(),
                    component: Some(self.ligand.name.clone()),
                    nuclearity: 1,
                    protons: 3 - i8::try_from(index).unwrap(),
                    charge: -i8::try_from(index).unwrap(),
                    molality,
                    concentration: molality * DENSITY,
                    fraction: Some(molality * DENSITY / self.total),
                    activity_coefficient: solution.activity_coefficient(*place),
                });
            }
            species.push(SpeciesState {
                component: Some("sodium ion".to_owned()),
                nuclearity: 1,
                protons: 0,
                ..water("Na⁺", 1, (self.sodium / DENSITY, 0.78))
            });
            species
        }

        pub(in crate::report) fn distribution(&self) -> Distribution {
            let ph: Vec<f64> = (0_u8..=140).map(|tenth| f64::from(tenth) / 10.0).collect();
            let mut totals = Totals::none(&self.system);
            totals.set(self.component, Total::from_f64(self.total));
            let mut solver = Solver::new(&self.system);
            let rows: Vec<Vec<f64>> = ph
                .iter()
                .map(|ph| solver.species_at(&totals, *ph, 0.1).unwrap()[..4].to_vec())
                .collect();
            let curve = |index: usize| DistributionCurve {
                component: self.ligand.name.clone(),
                species: self.ligand.states[index].clone(),
                fractions: rows.iter().map(|row| row[3 - index] / self.total).collect(),
            };
            let capacity = |row: &Vec<f64>| {
                let share: Vec<f64> = row.iter().map(|m| m / self.total).collect();
                let mean = share[1] + 2.0 * share[2] + 3.0 * share[3];
                let square = share[1] + 4.0 * share[2] + 9.0 * share[3];
                std::f64::consts::LN_10 * self.total * (square - mean * mean)
            };
            Distribution {
                curves: (0..4).map(curve).collect(),
                buffer_capacity: rows.iter().map(capacity).collect(),
                ph,
            }
        }
    }

    /// The curve of phosphoric acid (mL, mol/L) with sodium hydroxide (mol/L) to 20 mL.
    pub(in crate::report) fn curve(
        volume: f64,
        acid: f64,
        base: f64,
        points: u32,
    ) -> Vec<CurvePoint> {
        let ph = |added: f64| {
            let whole = volume + added;
            Phosphate::new(volume * acid / whole, added * base / whole).ph()
        };
        (0..=points)
            .map(|index| {
                let added = 20.0 * f64::from(index) / f64::from(points);
                CurvePoint {
                    volume_ml: added,
                    ph: ph(added),
                    slope: (ph(added + 0.001) - ph((added - 0.001).max(0.0)))
                        / (added + 0.001 - (added - 0.001).max(0.0)),
                }
            })
            .collect()
    }
}
