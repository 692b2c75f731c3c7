//! Numerics of chemical equilibrium: tableau in, certified answer out.
//!
//! A [`System`] is a tableau with its model and its water: components (acid families in their fully deprotonated form, inert ions), and species
//! with their stability constants at zero ionic strength. [`Totals`] say how much of each component and of protons there is. A [`Solver`]
//! finds the one pH at which protons balance, and hands out a [`Certified`] solution only with a valid [`Certificate`]. This module knows no
//! substances, no units but its own (mol/kg of water, elementary charges, kelvin), reads nothing and allocates nothing in its inner loop.
//!
//! ```
//! use ionfolio::equilibrium::{ActivityModel, Solver, Species, System, Total, Totals, Water};
//!
//! let water = Water::at(298.15)?;
//! let mut builder = System::builder(water, ActivityModel::Davies);
//! // Acetic acid: HL with lg beta 4.756, and L-.
//! let acetate = builder.ligand(&[Species::new(0, 1, 4.756), Species::new(-1, 0, 0.0)]);
//! let system = builder.build()?;
//! let mut totals = Totals::none(&system);
//! totals.set(acetate, Total::from_f64(0.1));
//! totals.set_protons(Total::from_f64(0.1));
//! let solution = Solver::new(&system).solve(&totals, None)?;
//! assert!((solution.ph() - 2.88).abs() < 0.01);
//! # Ok::<(), Box<dyn std::error::Error>>(())
//! ```

mod activity;
mod certificate;
pub mod elementary;
mod evaluation;
mod factor;
mod root;
mod sensitivity;
mod tableau;
mod temperature;
mod total;
mod water;

pub use activity::ActivityModel;
pub use certificate::{Certificate, Certified};
pub use root::{Solver, Start, Unsolved};
pub use sensitivity::Sensitivities;
pub use tableau::{
    ComponentIndex, Species, SpeciesIndex, System, SystemBuilder, TableauError, Totals,
};
pub use temperature::{pk_at, pk_from_terms};
pub use total::Total;
pub use water::{OutOfRange, Water};
