//! The tableau: components, species, stability constants, and the totals that are put into it.

use crate::equilibrium::elementary::LN_10;
use crate::equilibrium::{ActivityModel, Total, Water};
use std::ops::Range;

/// Largest number of components that polynuclear species may couple.
pub(super) const MOST_COUPLED: usize = 8;

/// Ion size in nm that is taken where none is given.
const ASSUMED_ION_SIZE: f64 = 0.4;

/// One species as it is put into a tableau.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Species {
    charge: i8,
    protons: i8,
    lg_beta: f64,
    ion_size: f64,
    salting: f64,
}

impl Species {
    /// A species of a charge, with protons above its components, and lg of its stability constant from free components and protons at zero
    /// ionic strength.
    pub fn new(charge: i8, protons: i8, lg_beta: f64) -> Self {
        Self {
            charge,
            protons,
            lg_beta,
            ion_size: ASSUMED_ION_SIZE,
            salting: 0.0,
        }
    }

    /// The same species with an ion size in nm for the Debye-Hueckel equation.
    #[must_use]
    pub fn with_ion_size(mut self, ion_size: f64) -> Self {
        self.ion_size = ion_size;
        self
    }

    /// The same species with a salting coefficient in kg/mol: lg γ gains that times the ionic strength.
    #[must_use]
    pub fn with_salting(mut self, salting: f64) -> Self {
        self.salting = salting;
        self
    }
}

/// A component of a system.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct ComponentIndex(pub(super) usize);

/// A species of a system.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord)]
pub struct SpeciesIndex(pub(super) usize);

impl ComponentIndex {
    /// Its place among the components, from 0.
    pub fn place(self) -> usize {
        self.0
    }
}

impl SpeciesIndex {
    /// Its place among the species, from 0.
    pub fn place(self) -> usize {
        self.0
    }
}

/// What can be wrong with a tableau.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum TableauError {
    /// A figure is not finite.
    NotFinite,
    /// A component has no species of its own.
    EmptyComponent,
    /// A polynuclear species names a component of another system, or one at fixed activity.
    WrongComponent,
    /// Polynuclear species couple more components than are computed with.
    TooManyCoupled,
}

impl std::fmt::Display for TableauError {
    fn fmt(&self, formatter: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        formatter.write_str(match self {
            Self::NotFinite => "a figure of the tableau is not finite",
            Self::EmptyComponent => "a component has no species",
            Self::WrongComponent => "a polynuclear species names a component it cannot have",
            Self::TooManyCoupled => "polynuclear species couple too many components",
        })
    }
}

impl std::error::Error for TableauError {}

/// A species as it is computed with.
#[derive(Clone, Copy, Debug)]
pub(super) struct Row {
    pub(super) z2: f64,
    pub(super) protons: f64,
    pub(super) ln_beta: f64,
    pub(super) ion_size: f64,
    /// Salting coefficient on the ln scale.
    pub(super) salting: f64,
}

/// A component: its own (mononuclear) species, and how its total is given.
#[derive(Clone, Debug)]
pub(super) struct ComponentRow {
    pub(super) own: Range<usize>,
    /// Proton number and ln activity of the species that is held, if one is.
    pub(super) held: Option<(f64, f64)>,
    /// Place among the coupled components, if polynuclear species have it.
    pub(super) coupled: Option<usize>,
}

/// A species of several formula units.
#[derive(Clone, Debug)]
pub(super) struct Polynuclear {
    pub(super) row: usize,
    /// Coupled place and number of units.
    pub(super) units: Vec<(usize, f64)>,
}

/// A tableau with its activity model and its water.
#[derive(Clone, Debug)]
pub struct System {
    pub(super) water: Water,
    pub(super) model: ActivityModel,
    pub(super) rows: Vec<Row>,
    pub(super) components: Vec<ComponentRow>,
    pub(super) polynuclear: Vec<Polynuclear>,
    pub(super) coupled: Vec<usize>,
    pub(super) proton_size: f64,
    pub(super) hydroxide_size: f64,
}

/// Builds a [`System`].
#[derive(Clone, Debug)]
pub struct SystemBuilder {
    system: System,
    polynuclear: Vec<(Species, Vec<(ComponentIndex, u8)>)>,
}

impl System {
    /// Ion sizes of H+ and OH- in nm: Kielland (1937), J. Am. Chem. Soc. 59, 1675; recalled.
    const PROTON_SIZE: f64 = 0.9;
    const HYDROXIDE_SIZE: f64 = 0.35;

    /// Starts a tableau.
    pub fn builder(water: Water, model: ActivityModel) -> SystemBuilder {
        SystemBuilder {
            system: Self {
                water,
                model,
                rows: Vec::new(),
                components: Vec::new(),
                polynuclear: Vec::new(),
                coupled: Vec::new(),
                proton_size: Self::PROTON_SIZE,
                hydroxide_size: Self::HYDROXIDE_SIZE,
            },
            polynuclear: Vec::new(),
        }
    }

    /// The species of a component, in the order in which they were given.
    pub fn species_of(
        &self,
        component: ComponentIndex,
    ) -> impl Iterator<Item = SpeciesIndex> + use<> {
        self.components
            .get(component.0)
            .map_or(0..0, |row| row.own.clone())
            .map(SpeciesIndex)
    }

    /// The polynuclear species, in the order in which they were given.
    pub fn polynuclear_species(&self) -> impl Iterator<Item = SpeciesIndex> {
        self.polynuclear
            .iter()
            .map(|species| SpeciesIndex(species.row))
    }

    /// Number of species, H+ and OH- not counted.
    pub fn species_count(&self) -> usize {
        self.rows.len()
    }

    /// Number of components.
    pub fn component_count(&self) -> usize {
        self.components.len()
    }

    /// The water it is computed with.
    pub fn water(&self) -> &Water {
        &self.water
    }

    /// lg of the stability constant of a species at zero ionic strength, dimensionless.
    pub fn lg_beta(&self, species: SpeciesIndex) -> f64 {
        self.rows
            .get(species.0)
            .map_or(0.0, |row| row.ln_beta / LN_10)
    }

    /// Sets lg of the stability constant of a species at zero ionic strength; for draws around a value.
    pub fn set_lg_beta(&mut self, species: SpeciesIndex, lg_beta: f64) {
        if let Some(row) = self.rows.get_mut(species.0) {
            row.ln_beta = lg_beta * LN_10;
        }
    }

    /// Sets the water, for draws around its constants.
    pub fn set_water(&mut self, water: Water) {
        self.water = water;
    }

    /// The same system with another activity model.
    #[must_use]
    pub fn with_model(&self, model: ActivityModel) -> Self {
        Self {
            model,
            ..self.clone()
        }
    }
}

impl SystemBuilder {
    /// An acid family: its mononuclear species, each counted from the fully deprotonated form.
    pub fn ligand(&mut self, species: &[Species]) -> ComponentIndex {
        let first = self.system.rows.len();
        self.system.rows.extend(species.iter().map(row));
        self.system.components.push(ComponentRow {
            own: first..self.system.rows.len(),
            held: None,
            coupled: None,
        });
        ComponentIndex(self.system.components.len() - 1)
    }

    /// An ion that takes no proton, of an ion size in nm.
    pub fn inert(&mut self, charge: i8, ion_size: Option<f64>) -> ComponentIndex {
        self.ligand(&[
            Species::new(charge, 0, 0.0).with_ion_size(ion_size.unwrap_or(ASSUMED_ION_SIZE))
        ])
    }

    /// Holds the activity of the species of a component that has `protons` protons, at `lg_activity`; the component's total is then found.
    pub fn hold(&mut self, component: ComponentIndex, protons: i8, lg_activity: f64) {
        if let Some(row) = self.system.components.get_mut(component.0) {
            row.held = Some((f64::from(protons), lg_activity * LN_10));
        }
    }

    /// A species of several formula units, or of several components.
    pub fn polynuclear(
        &mut self,
        species: Species,
        units: &[(ComponentIndex, u8)],
    ) -> SpeciesIndex {
        self.polynuclear.push((species, units.to_vec()));
        SpeciesIndex(usize::MAX)
    }

    /// The finished tableau.
    ///
    /// # Errors
    /// [`TableauError`] where it cannot be computed with.
    pub fn build(self) -> Result<System, TableauError> {
        let mut system = self.system;
        for (species, units) in self.polynuclear {
            let mut coupled_units = Vec::new();
            for (ComponentIndex(index), count) in units {
                let next = system.coupled.len();
                let component = system
                    .components
                    .get_mut(index)
                    .filter(|component| component.held.is_none())
                    .ok_or(TableauError::WrongComponent)?;
                let place = *component.coupled.get_or_insert(next);
                if place == next {
                    system.coupled.push(index);
                }
                coupled_units.push((place, f64::from(count)));
            }
            system.polynuclear.push(Polynuclear {
                row: system.rows.len(),
                units: coupled_units,
            });
            system.rows.push(row(&species));
        }
        if system.coupled.len() > MOST_COUPLED {
            return Err(TableauError::TooManyCoupled);
        }
        if system
            .components
            .iter()
            .any(|component| component.own.is_empty())
        {
            return Err(TableauError::EmptyComponent);
        }
        let finite = |row: &Row| {
            row.ln_beta.is_finite() && row.ion_size.is_finite() && row.salting.is_finite()
        };
        if !system.rows.iter().all(finite) {
            return Err(TableauError::NotFinite);
        }
        Ok(system)
    }
}

fn row(species: &Species) -> Row {
    let z = f64::from(species.charge);
    Row {
        z2: z * z,
        protons: f64::from(species.protons),
        ln_beta: species.lg_beta * LN_10,
        ion_size: species.ion_size,
        salting: species.salting * LN_10,
    }
}

/// How much of each component, and of protons above the components, there is: mol/kg of water.
///
/// The proton total is what electroneutral substances bring: 3 for H3PO4, -1 for NaOH.
#[derive(Clone, Debug, PartialEq)]
pub struct Totals {
    pub(super) components: Vec<Total>,
    pub(super) protons: Total,
}

impl Totals {
    /// Nothing of anything: pure water.
    pub fn none(system: &System) -> Self {
        Self {
            components: vec![Total::ZERO; system.component_count()],
            protons: Total::ZERO,
        }
    }

    /// Sets the total of a component in mol/kg.
    pub fn set(&mut self, component: ComponentIndex, total: Total) {
        if let Some(place) = self.components.get_mut(component.0) {
            *place = total;
        }
    }

    /// Adds to the total of a component, in mol/kg.
    pub fn add(&mut self, component: ComponentIndex, total: Total) {
        if let Some(place) = self.components.get_mut(component.0) {
            *place = *place + total;
        }
    }

    /// Sets the proton total in mol/kg.
    pub fn set_protons(&mut self, total: Total) {
        self.protons = total;
    }

    /// Adds to the proton total, in mol/kg.
    pub fn add_protons(&mut self, total: Total) {
        self.protons = self.protons + total;
    }

    /// The total of a component in mol/kg.
    pub fn of(&self, component: ComponentIndex) -> Total {
        self.components
            .get(component.0)
            .copied()
            .unwrap_or_default()
    }

    /// The proton total in mol/kg.
    pub fn protons(&self) -> Total {
        self.protons
    }
}
