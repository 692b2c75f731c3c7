//! What was found: the answer to a statement, in types, with nothing rounded.

pub use crate::solution::outcome::{
    Addition, AdjustmentOutcome, CurvePoint, EquivalencePoint, Explanation, Fit, Fitted,
    IndicatorEndPoint, MixingOutcome, Overshoot, PreparationOutcome, Suggestion, TitrationOutcome,
};

use crate::equilibrium::Certificate;
use crate::problem::{ActivityChoice, Composition, InputId, ShortcutName};
use crate::substance::{Constant, Form, InertIon, Ligand};
use std::sync::Arc;

/// The whole answer to one statement.
#[derive(Clone, Debug)]
pub struct Answer {
    /// Model and water at the temperature of the block.
    pub model: ModelFacts,
    /// The solution that the task ends in: the solution itself, the buffer as made, the adjusted solution, the
    /// mixture, or the sample before the first addition of a titration.
    pub state: State,
    /// What the task asked for besides.
    pub outcome: Outcome,
    /// Shares of the species over a range of pH; `None` where no component has more than one dissociation step or polynuclear species.
    pub distribution: Option<Distribution>,
    /// Uncertainty budget of the pH (of the headline quantity where the task has another).
    pub budget: Option<Budget>,
    /// Monte Carlo simulation, if asked for.
    pub simulation: Option<Simulation>,
    /// The shortcuts that bear on this solution: those used and those that fail.
    pub shortcuts: Vec<ShortcutResult>,
    /// Whether the recorded hand value stands.
    pub hand_value: Option<HandVerdict>,
    /// Comparison with a reading.
    pub comparison: Option<Comparison>,
    /// Everything that is needed to compute it again without a library.
    pub constants: ConstantsUsed,
    /// Stated assumptions.
    pub assumptions: Vec<Assumption>,
    /// Cautions.
    pub cautions: Vec<Caution>,
    /// The liquid that results, for use by another block.
    pub liquid: Composition,
}

/// Model and water at the temperature of the block.
#[derive(Clone, Debug)]
pub struct ModelFacts {
    /// The model that was used; never [`ActivityChoice::Best`].
    pub activity: ActivityChoice,
    /// Why this one, where `best` was asked for.
    pub choice: Option<String>,
    /// Debye-Hueckel A on the lg scale in (kg/mol)^½.
    pub debye_hueckel_a: f64,
    /// Debye-Hueckel B in (kg/mol)^½ per nanometre.
    pub debye_hueckel_b: f64,
    /// pKw on the molality scale at zero ionic strength.
    pub pkw: f64,
    /// Temperature in degrees Celsius.
    pub temperature_c: f64,
    /// Density of water in kg/L, used for molality from amount concentration.
    pub density: f64,
    /// Relative permittivity of water.
    pub permittivity: f64,
}

/// The equilibrium state of one solution.
#[derive(Clone, Debug)]
pub struct State {
    /// pH = -lg a(H+).
    pub ph: f64,
    /// p\[H\] = -lg (m(H+) / (mol/kg)).
    pub p_hydrogen: f64,
    /// Ionic strength in mol/kg.
    pub ionic_strength: f64,
    /// Every species: H+ and OH- first, then by component.
    pub species: Vec<SpeciesState>,
    /// Degree of dissociation at each step of each ligand.
    pub dissociation: Vec<Dissociation>,
    /// Analytical concentration of each component.
    pub totals: Vec<ComponentTotal>,
    /// Buffer capacity in mol/L per unit of pH.
    pub buffer_capacity: f64,
    /// The proof that the numbers solve the equations.
    pub certificate: Certificate,
}

/// One species.
#[derive(Clone, Debug)]
pub struct SpeciesState {
    /// Name as printed, in Unicode: `H₂PO₄⁻`.
    pub name: String,
    /// The component (ligand or inert ion) it belongs to, or `None` for H+ and OH-.
    pub component: Option<String>,
    /// Formula units of the component in it (more than 1 for polynuclear species).
    pub nuclearity: u8,
    /// Protons above the fully deprotonated form.
    pub protons: i8,
    /// Charge in elementary charges.
    pub charge: i8,
    /// Molality in mol/kg.
    pub molality: f64,
    /// Amount concentration in mol/L.
    pub concentration: f64,
    /// Share of its component, 0 to 1; `None` for H+, OH- and where the component has one species.
    pub fraction: Option<f64>,
    /// Activity coefficient on the molality scale.
    pub activity_coefficient: f64,
}

/// Degree of dissociation at one step.
#[derive(Clone, Debug)]
pub struct Dissociation {
    /// The ligand.
    pub ligand: String,
    /// The step, counted from 1, most acidic first.
    pub step: usize,
    /// Share of the ligand that has lost at least that many protons, 0 to 1.
    pub degree: f64,
}

/// Analytical concentration of one component.
#[derive(Clone, Debug)]
pub struct ComponentTotal {
    /// The component.
    pub component: String,
    /// Molality in mol/kg.
    pub molality: f64,
    /// Amount concentration in mol/L.
    pub concentration: f64,
}

/// Shares of species and buffer capacity over a range of pH, at the ionic strength of the state.
#[derive(Clone, Debug, Default)]
pub struct Distribution {
    /// The pH of each point, increasing.
    pub ph: Vec<f64>,
    /// One curve for each protonation state of each ligand, most protonated first.
    pub curves: Vec<DistributionCurve>,
    /// Buffer capacity in mol/L per unit of pH at each point; empty where it was not computed.
    pub buffer_capacity: Vec<f64>,
}

/// The share of one species of its component over pH.
#[derive(Clone, Debug)]
pub struct DistributionCurve {
    /// The ligand.
    pub component: String,
    /// The species, named as in [`SpeciesState::name`].
    pub species: String,
    /// Share of the component at each point, 0 to 1.
    pub fractions: Vec<f64>,
}

/// What a task asks for besides the state of the solution.
#[derive(Clone, Debug)]
pub enum Outcome {
    /// Nothing more.
    Speciation,
    /// The instruction list and what it leads to.
    Preparation(Box<PreparationOutcome>),
    /// Additions and overshoot.
    Adjustment(Box<AdjustmentOutcome>),
    /// The dilution series, if any.
    Mixing(MixingOutcome),
    /// Curve, equivalence points, fit.
    Titration(Box<TitrationOutcome>),
}

/// An uncertainty budget.
#[derive(Clone, Debug)]
pub struct Budget {
    /// The lines, largest share first.
    pub lines: Vec<BudgetLine>,
    /// Combined standard uncertainty in pH.
    pub standard: f64,
    /// Effective degrees of freedom, where any were given.
    pub effective_degrees_of_freedom: Option<f64>,
    /// Coverage factor.
    pub k: f64,
    /// Expanded uncertainty in pH.
    pub expanded: f64,
}

/// One line of a budget.
#[derive(Clone, Debug)]
pub struct BudgetLine {
    /// What it is, for people.
    pub what: String,
    /// The input, or `None` for constants and the model.
    pub input: Option<InputId>,
    /// Value as written.
    pub value: String,
    /// Standard uncertainty in the unit of the value.
    pub standard: f64,
    /// Unit.
    pub unit: String,
    /// Sensitivity coefficient in pH per unit.
    pub sensitivity: f64,
    /// Share of the combined variance, 0 to 1.
    pub share: f64,
    /// Degrees of freedom, where given.
    pub degrees_of_freedom: Option<f64>,
    /// Where the uncertainty comes from: stated, tolerance, replicates, constant's source, model.
    pub origin: String,
}

/// A Monte Carlo simulation.
#[derive(Clone, Debug)]
pub struct Simulation {
    /// Number of draws.
    pub draws: u32,
    /// Seed.
    pub seed: u64,
    /// Mean pH.
    pub mean: f64,
    /// Standard deviation.
    pub standard: f64,
    /// Shortest or probabilistically symmetric 95 % coverage interval.
    pub interval: (f64, f64),
}

/// A shortcut and what it costs.
#[derive(Clone, Debug)]
pub struct ShortcutResult {
    /// Which.
    pub shortcut: ShortcutName,
    /// The pH it gives.
    pub ph: f64,
    /// Its shift from the full result.
    pub shift: f64,
    /// The limit in pH.
    pub limit: f64,
    /// The condition attached to it and whether it holds, in words with its figure.
    pub condition: String,
}

impl ShortcutResult {
    /// Whether the shift is inside the limit.
    pub fn within_limit(&self) -> bool {
        self.shift.abs() <= self.limit
    }
}

/// Whether a recorded hand value stands.
#[derive(Clone, Debug)]
pub struct HandVerdict {
    /// The value as written.
    pub recorded: String,
    /// The shortcut that was named.
    pub by: ShortcutName,
    /// What that shortcut really gives here, if it applies.
    pub shortcut_gives: Option<f64>,
    /// Shift of the recorded value from the full result.
    pub shift: f64,
    /// The limit in pH.
    pub limit: f64,
    /// Whether it stands.
    pub stands: bool,
    /// Why, in a sentence.
    pub reason: String,
}

/// A reading against the computed value.
#[derive(Clone, Debug)]
pub struct Comparison {
    /// The reading as written.
    pub reading: String,
    /// Reading less computed value, in pH.
    pub difference: f64,
    /// Expanded uncertainty (k = 2) of the difference.
    pub expanded: f64,
    /// Whether they agree within it.
    pub agrees: bool,
    /// Whether the reading is inside its acceptance limit, with the limit as written.
    pub acceptance: Option<(bool, String)>,
    /// Which input would have to be wrong by how much.
    pub explanations: Vec<Explanation>,
    /// Remarks on temperature and calibration.
    pub remarks: Vec<String>,
}

/// Everything that is needed to compute an answer again without a library.
#[derive(Clone, Debug, Default)]
pub struct ConstantsUsed {
    /// The user's own pKw, where one was stated.
    pub water: Option<Constant>,
    /// The ligands with their constants.
    pub ligands: Vec<Arc<Ligand>>,
    /// The inert ions.
    pub ions: Vec<Arc<InertIon>>,
    /// The forms that were weighed, pipetted or dissolved.
    pub forms: Vec<Arc<Form>>,
    /// The pK of each step at the temperature of the block: ligand, step from 1, pK.
    pub pk_at_temperature: Vec<(String, usize, f64)>,
    /// Further constants that entered, each a sentence part with its source: CO₂ solubility, polyborates.
    pub further: Vec<String>,
}

/// A stated assumption and what it costs.
#[derive(Clone, Debug)]
pub struct Assumption {
    /// The assumption, in a sentence.
    pub statement: String,
    /// pH if it is dropped or replaced by what is named, where that was computed.
    pub alternative: Option<(String, f64)>,
    /// Shift in pH from the result to that alternative.
    pub cost: Option<f64>,
}

/// A caution.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Caution {
    /// Its name, for `explain`: `recalled-constant`, `beyond-model-range`, ...
    pub name: &'static str,
    /// The caution in a sentence, with its figures.
    pub sentence: String,
}
