//! What went in, as steps on the tape: every concentration with its derivative to every input.

use crate::equilibrium::Total;
use crate::problem::{Input, InputId};
use crate::quantity::{Decimal, Dimension, Spread, Unit};
use crate::solution::tape::{Node, Tape, VariableIndex, Worked};
use crate::substance::{Component, Form};
use std::sync::Arc;

/// The distribution that a variable is drawn from.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Distribution {
    /// Normal.
    Normal,
    /// Triangular.
    Triangular,
    /// Rectangular.
    Rectangular,
    /// Scaled and shifted t with these degrees of freedom (JCGM 101, 6.4.9).
    Student(f64),
}

/// One stated or derived quantity that the composition depends on.
#[derive(Clone, Debug)]
pub(super) struct Variable {
    /// What it is, for people.
    pub(super) what: String,
    /// The input, where it is one.
    pub(super) input: Option<InputId>,
    /// Its value as written.
    pub(super) written: String,
    /// Its value in base units.
    pub(super) value: Total,
    /// Standard uncertainty in base units.
    pub(super) standard: f64,
    /// Degrees of freedom, where given.
    pub(super) degrees_of_freedom: Option<f64>,
    /// What it is drawn from.
    pub(super) distribution: Distribution,
    /// Base units in one of the units it was written in.
    pub(super) base_per_unit: f64,
    /// The unit it was written in.
    pub(super) unit: String,
    /// Where the uncertainty comes from.
    pub(super) origin: &'static str,
}

/// A component and its analytical concentration.
#[derive(Clone, Debug)]
pub(super) struct RecipeComponent {
    /// The component.
    pub(super) component: Component,
    /// Its analytical concentration in mol/L.
    pub(super) concentration: Node,
}

/// One liquid on the tape: what it contains and, where known, its volume.
#[derive(Clone, Debug)]
pub(super) struct Liquid {
    /// Volume in L, where known.
    pub(super) volume: Option<Node>,
    /// Forms with their amount concentrations in mol/L.
    pub(super) contents: Vec<(Arc<Form>, Node)>,
}

/// The tape with its variables while it is written.
#[derive(Clone, Debug)]
pub(super) struct Writer {
    pub(super) tape: Tape,
    pub(super) variables: Vec<Variable>,
    nodes: Vec<Node>,
    /// Density of water in kg/L; its value is set with the temperature.
    pub(super) density: Node,
}

/// A finished recipe.
#[derive(Clone, Debug)]
pub(super) struct Recipe {
    pub(super) tape: Tape,
    /// The variables; the first is the density of water.
    pub(super) variables: Vec<Variable>,
    /// Components in the order in which they first appear.
    pub(super) components: Vec<RecipeComponent>,
    /// Concentration of protons above the components, in mol/L.
    pub(super) protons: Node,
    /// Charge that ions given alone leave, in mol/L.
    pub(super) charge: Node,
    /// Sum of the absolute charges of ions given alone, in mol/L.
    pub(super) charge_terms: Node,
    /// Density of water in kg/L.
    pub(super) density: Node,
    /// Volume in L, where known.
    pub(super) volume: Option<Node>,
    /// The forms, each once.
    pub(super) forms: Vec<Arc<Form>>,
}

impl Writer {
    /// An empty tape; its first variable is the density of water.
    pub(super) fn new() -> Self {
        let mut tape = Tape::default();
        let (_, density) = tape.variable();
        Self {
            tape,
            variables: vec![Variable {
                what: "density of water".to_owned(),
                input: None,
                written: String::new(),
                value: Total::from_f64(1.0),
                standard: 0.0,
                degrees_of_freedom: None,
                distribution: Distribution::Normal,
                base_per_unit: 1.0,
                unit: "kg/L".to_owned(),
                origin: "formulation",
            }],
            nodes: vec![density],
            density,
        }
    }

    /// The node of an input; the same input twice is the same variable.
    pub(super) fn input<D: Dimension>(&mut self, input: &Input<D>) -> Node {
        let known = self
            .variables
            .iter()
            .position(|variable| variable.input.as_ref() == Some(&input.id));
        if let Some(node) = known.and_then(|place| self.nodes.get(place)) {
            return *node;
        }
        let measured = &input.measured;
        let uncertainty = measured.uncertainty;
        let value = measured
            .exact()
            .map_or_else(|| Total::from_f64(measured.value().base()), exact);
        let dof = measured.degrees_of_freedom();
        let (origin, distribution) = match uncertainty.map(|uncertainty| uncertainty.spread) {
            Some(Spread::Triangular) => ("tolerance", Distribution::Triangular),
            Some(Spread::Rectangular) => ("stated limits", Distribution::Rectangular),
            Some(Spread::Replicates) => ("replicates", student(dof)),
            Some(Spread::Expanded { .. } | Spread::Standard) => ("stated", student(dof)),
            None => ("none stated", Distribution::Normal),
        };
        self.variable(Variable {
            what: input.id.to_string(),
            input: Some(input.id.clone()),
            written: measured.to_string(),
            value,
            standard: measured.standard_uncertainty(),
            degrees_of_freedom: dof,
            distribution,
            base_per_unit: measured.unit.difference_to_base(Decimal::whole(1)),
            unit: measured.unit.symbol().to_owned(),
            origin,
        })
        .1
    }

    /// The molar mass of a form in g/mol, where it has a formula; one variable however often it is used.
    pub(super) fn molar_mass(&mut self, form: &Form) -> Option<Node> {
        let formula = form.formula.as_ref()?;
        let what = format!("molar mass of {}", form.name);
        let known = self
            .variables
            .iter()
            .position(|variable| variable.what == what);
        if let Some(node) = known.and_then(|place| self.nodes.get(place)) {
            return Some(*node);
        }
        let value = formula.molar_mass().base();
        let (_, node) = self.variable(Variable {
            what,
            input: None,
            written: format!("{value:.4} {}", Unit::GramPerMole),
            value: exact(Decimal::shortest(value)),
            standard: formula.molar_mass_uncertainty(),
            degrees_of_freedom: None,
            distribution: Distribution::Normal,
            base_per_unit: 1.0,
            unit: Unit::GramPerMole.symbol().to_owned(),
            origin: "atomic weights, CIAAW 2021",
        });
        Some(node)
    }

    /// A new variable.
    pub(super) fn variable(&mut self, variable: Variable) -> (VariableIndex, Node) {
        let (index, node) = self.tape.variable();
        self.variables.push(variable);
        self.nodes.push(node);
        (index, node)
    }

    /// Liquids poured together and made up to `total` litres.
    pub(super) fn pour(&mut self, portions: &[(&Liquid, Node)], total: Node) -> Liquid {
        let mut contents = Vec::new();
        for (liquid, volume) in portions {
            for (form, concentration) in &liquid.contents {
                let amount = self.tape.multiply(*concentration, *volume);
                contents.push((Arc::clone(form), self.tape.divide(amount, total)));
            }
        }
        Liquid {
            volume: Some(total),
            contents,
        }
    }

    /// Sums the forms of a liquid up to components and protons.
    pub(super) fn finish(mut self, liquid: &Liquid) -> Recipe {
        let mut terms: Vec<(Component, Vec<Node>)> = Vec::new();
        let mut protons = Vec::new();
        let (mut charge, mut charge_terms) = (Vec::new(), Vec::new());
        let mut forms: Vec<Arc<Form>> = Vec::new();
        for (form, concentration) in &liquid.contents {
            for (component, count) in &form.contains {
                let node = self.tape.times(*concentration, i32::from(*count));
                match terms
                    .iter_mut()
                    .find(|(known, _)| known.name() == component.name())
                {
                    Some((_, nodes)) => nodes.push(node),
                    None => terms.push((component.clone(), vec![node])),
                }
            }
            protons.push(self.tape.times(*concentration, form.protons()));
            if form.charge != 0 {
                let signed = i32::from(form.charge);
                charge.push(self.tape.times(*concentration, signed));
                charge_terms.push(self.tape.times(*concentration, signed.abs()));
            }
            if !forms.iter().any(|known| known.name == form.name) {
                forms.push(Arc::clone(form));
            }
        }
        let components = terms
            .into_iter()
            .map(|(component, nodes)| RecipeComponent {
                component,
                concentration: self.tape.sum(&nodes),
            })
            .collect();
        let protons = self.tape.sum(&protons);
        let charge = self.tape.sum(&charge);
        let charge_terms = self.tape.sum(&charge_terms);
        Recipe {
            components,
            protons,
            charge,
            charge_terms,
            density: self.density,
            volume: liquid.volume,
            forms,
            tape: self.tape,
            variables: self.variables,
        }
    }
}

impl Recipe {
    /// The stated values of the variables, with the density of water in kg/L.
    pub(super) fn stated(&self, density: f64) -> Vec<Total> {
        let mut values: Vec<Total> = self
            .variables
            .iter()
            .map(|variable| variable.value)
            .collect();
        if let Some(first) = values.first_mut() {
            *first = Total::from_f64(density);
        }
        values
    }

    /// The final volume in L, where known.
    pub(super) fn volume_of(&self, worked: &Worked<Total>) -> Option<f64> {
        self.volume.map(|node| worked.at(node).to_f64())
    }
}

/// A decimal, exact.
pub(super) fn exact(decimal: Decimal) -> Total {
    Total::from_decimal(decimal.is_negative(), decimal.digits(), decimal.exponent())
}

fn student(degrees_of_freedom: Option<f64>) -> Distribution {
    degrees_of_freedom.map_or(Distribution::Normal, Distribution::Student)
}
