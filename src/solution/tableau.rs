//! From doses to a system that can be solved: components, species, constants at temperature.

use crate::equilibrium::elementary::LN_10;
use crate::equilibrium::{
    ActivityModel, ComponentIndex, Species, SpeciesIndex, System, SystemBuilder, Total, Totals,
    Water, pk_at, pk_from_terms,
};
use crate::problem::{ActivityChoice, Air, Conditions};
use crate::quantity::{Decimal, Dimension};
use crate::solution::Unsolvable;
use crate::solution::dose::Doses;
use crate::solution::gas;
use crate::substance::{Component, Constant, EquationForm, Form, InertIon, Ligand, PkEquation};
use std::sync::Arc;

/// A ligand in the system.
#[derive(Clone, Debug)]
pub(super) struct LigandPlace {
    pub(super) ligand: Arc<Ligand>,
    pub(super) component: ComponentIndex,
    /// pK of each step at the temperature, most acidic first.
    pub(super) pk: Vec<f64>,
    /// Species in the order of the ligand's states.
    pub(super) species: Vec<SpeciesIndex>,
}

/// An inert ion in the system.
#[derive(Clone, Debug)]
pub(super) struct IonPlace {
    pub(super) ion: Arc<InertIon>,
    pub(super) component: ComponentIndex,
    pub(super) species: SpeciesIndex,
}

/// A system with the substances that its components are.
#[derive(Clone, Debug)]
pub(super) struct Tableau {
    pub(super) system: System,
    pub(super) ligands: Vec<LigandPlace>,
    pub(super) ions: Vec<IonPlace>,
    pub(super) forms: Vec<Arc<Form>>,
    /// Density of water in kg/L.
    pub(super) density: f64,
}

/// What is varied from the stated conditions, to see what an assumption costs.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Variation {
    /// Temperature in K.
    pub(super) temperature: f64,
    /// Activity model.
    pub(super) model: ActivityModel,
    /// Whether dissociation steps beyond the first of each ligand are kept.
    pub(super) all_steps: bool,
}

/// Water at the temperature of the conditions, with the user's own pKw if there is one.
pub(super) fn water(conditions: &Conditions, temperature: f64) -> Result<Water, Unsolvable> {
    let water = Water::at(temperature).map_err(|_out| Unsolvable::Temperature)?;
    Ok(match &conditions.pkw {
        Some(constant) => water.with_pkw(constant.pk.to_f64()),
        None => water,
    })
}

/// The model that a name means for the solver.
pub(super) fn model(choice: ActivityChoice) -> Result<ActivityModel, Unsolvable> {
    match choice {
        ActivityChoice::Ideal => Ok(ActivityModel::Ideal),
        ActivityChoice::DebyeHueckel => Ok(ActivityModel::DebyeHueckel),
        ActivityChoice::Guentelberg => Ok(ActivityModel::Guentelberg),
        ActivityChoice::Davies | ActivityChoice::Best => Ok(ActivityModel::Davies),
        ActivityChoice::BatesGuggenheim => Ok(ActivityModel::BatesGuggenheim),
        ActivityChoice::Sit | ActivityChoice::Pitzer => Err(Unsolvable::NoCoefficients {
            model: choice.name(),
        }),
    }
}

impl Tableau {
    /// The system for all the liquids given, under varied conditions.
    pub(super) fn of(
        liquids: &[&Doses],
        conditions: &Conditions,
        variation: Variation,
    ) -> Result<Self, Unsolvable> {
        let water = water(conditions, variation.temperature)?;
        let mut tableau = Parts {
            builder: System::builder(water, variation.model),
            variation,
            ligands: Vec::new(),
            ions: Vec::new(),
            forms: Vec::new(),
        };
        for dose in liquids.iter().flat_map(|doses| &doses.list) {
            tableau.take(&dose.form);
        }
        if let Some(carbonate) = conditions
            .carbonate
            .as_ref()
            .filter(|_| conditions.air.value != Air::Closed)
        {
            let component = tableau.ligand(carbonate);
            let protons = i8::try_from(carbonate.steps.len()).unwrap_or(i8::MAX);
            let pressure = gas::partial_pressure(&conditions.air.value, variation.temperature);
            let lg_activity = gas::lg_henry_carbon_dioxide(variation.temperature)
                + crate::equilibrium::elementary::log10(pressure);
            tableau.builder.hold(component, protons, lg_activity);
        }
        let Parts {
            builder,
            mut ligands,
            mut ions,
            forms,
            ..
        } = tableau;
        let system = builder.build().map_err(Unsolvable::Tableau)?;
        for place in &mut ligands {
            place.species = system.species_of(place.component).collect();
        }
        for place in &mut ions {
            if let Some(species) = system.species_of(place.component).next() {
                place.species = species;
            }
        }
        Ok(Self {
            density: water.density / 1000.0,
            system,
            ligands,
            ions,
            forms,
        })
    }

    /// Totals of liquids, each times a factor (its share of the mixture).
    pub(super) fn totals(&self, liquids: &[(&Doses, Total)]) -> Totals {
        let mut totals = Totals::none(&self.system);
        for (doses, share) in liquids {
            for dose in &doses.list {
                self.add(&mut totals, &dose.form, dose.molality * *share);
            }
        }
        totals
    }

    /// Adds a molality of a form to totals.
    pub(super) fn add(&self, totals: &mut Totals, form: &Form, molality: Total) {
        for (component, count) in &form.contains {
            if let Some(index) = self.component(component) {
                totals.add(index, molality * f64::from(*count));
            }
        }
        totals.add_protons(molality * f64::from(form.protons()));
    }

    /// Where a component is.
    pub(super) fn component(&self, component: &Component) -> Option<ComponentIndex> {
        match component {
            Component::Ligand(ligand) => self
                .ligands
                .iter()
                .find(|place| place.ligand.name == ligand.name)
                .map(|place| place.component),
            Component::Ion(ion) => self
                .ions
                .iter()
                .find(|place| place.ion.name == ion.name)
                .map(|place| place.component),
        }
    }
}

struct Parts {
    builder: SystemBuilder,
    variation: Variation,
    ligands: Vec<LigandPlace>,
    ions: Vec<IonPlace>,
    forms: Vec<Arc<Form>>,
}

impl Parts {
    fn take(&mut self, form: &Arc<Form>) {
        if !self.forms.iter().any(|known| known.name == form.name) {
            self.forms.push(Arc::clone(form));
        }
        for (component, _) in &form.contains {
            match component {
                Component::Ligand(ligand) => {
                    self.ligand(ligand);
                }
                Component::Ion(ion) => self.ion(ion),
            }
        }
    }

    fn ligand(&mut self, ligand: &Arc<Ligand>) -> ComponentIndex {
        if let Some(place) = self
            .ligands
            .iter()
            .find(|place| place.ligand.name == ligand.name)
        {
            return place.component;
        }
        let pk: Vec<f64> = ligand
            .steps
            .iter()
            .map(|step| pk_of(&step.preferred, self.variation.temperature))
            .collect();
        let species = states(ligand, &pk, self.variation.all_steps);
        let component = self.builder.ligand(&species);
        self.ligands.push(LigandPlace {
            ligand: Arc::clone(ligand),
            component,
            pk,
            species: Vec::new(),
        });
        component
    }

    fn ion(&mut self, ion: &Arc<InertIon>) {
        if self.ions.iter().any(|place| place.ion.name == ion.name) {
            return;
        }
        let component = self
            .builder
            .inert(ion.charge, ion.ion_size.map(Decimal::to_f64));
        self.ions.push(IonPlace {
            ion: Arc::clone(ion),
            component,
            species: SpeciesIndex::default(),
        });
    }
}

/// The protonation states as species, most protonated first.
fn states(ligand: &Ligand, pk: &[f64], all_steps: bool) -> Vec<Species> {
    let steps = pk.len();
    (0..=steps)
        .filter(|state| all_steps || *state <= 1)
        .map(|state| {
            let lg_beta: f64 = pk.iter().skip(state).sum();
            let protons = i8::try_from(ligand.state_protons(state)).unwrap_or(i8::MAX);
            let species = Species::new(ligand.state_charge(state), protons, lg_beta);
            match ligand.ion_sizes.get(state).copied().flatten() {
                Some(size) => species.with_ion_size(size.to_f64()),
                None => species,
            }
        })
        .collect()
}

/// pK of a constant at a temperature in K, dimensionless: by its published equation within the equation's range, else by enthalpy and heat
/// capacity, else as it is.
pub(super) fn pk_of(constant: &Constant, temperature: f64) -> f64 {
    if let Some(equation) = constant
        .equation
        .as_ref()
        .filter(|equation| covers(equation, temperature))
    {
        return pk_from_terms(temperature, terms(equation));
    }
    let own = constant.temperature_c.to_f64() + 273.15;
    match &constant.thermal {
        Some(thermal) => pk_at(
            temperature,
            constant.pk.to_f64(),
            own,
            thermal.enthalpy.to_f64() * 1000.0,
            thermal.heat_capacity.map_or(0.0, Decimal::to_f64),
        ),
        None => constant.pk.to_f64(),
    }
}

/// Whether an equation is valid at a temperature in K.
pub(super) fn covers(equation: &PkEquation, temperature: f64) -> bool {
    let celsius = temperature - 273.15;
    celsius >= equation.from_c.to_f64() - 1e-9 && celsius <= equation.to_c.to_f64() + 1e-9
}

/// The coefficients of `1, 1/T, ln T, T, T², 1/T²` that an equation's printed coefficients mean.
fn terms(equation: &PkEquation) -> [f64; 6] {
    let printed: Vec<f64> = equation
        .coefficients
        .iter()
        .map(|coefficient| coefficient.to_f64())
        .collect();
    let at = |index: usize| printed.get(index).copied().unwrap_or(0.0);
    match equation.form {
        EquationForm::InverseConstantLogarithm => [at(1), at(0), at(2), 0.0, 0.0, 0.0],
        EquationForm::InverseConstantLinear => [at(1), at(0), 0.0, at(2), 0.0, 0.0],
        EquationForm::NaturalLogarithm => [
            -at(0) / LN_10,
            -at(1) / LN_10,
            -at(2) / LN_10,
            -at(3) / LN_10,
            0.0,
            0.0,
        ],
        EquationForm::CommonLogarithm => [-at(0), -at(2), -at(3) / LN_10, -at(1), 0.0, -at(4)],
        EquationForm::Clegg => [-at(0), -at(4), -at(1), -at(3), -at(2), 0.0],
    }
}

/// The conditions as stated.
pub(super) fn stated(conditions: &Conditions) -> Result<Variation, Unsolvable> {
    Ok(Variation {
        temperature: conditions.temperature.value.value().base(),
        model: model(conditions.activity.value)?,
        all_steps: true,
    })
}
