//! What the tasks find besides the state of a solution.

use crate::problem::InputId;
use crate::solution::answer::State;

/// One thing to weigh or measure out.
#[derive(Clone, Debug)]
pub struct Addition {
    /// What is taken, by its name.
    pub substance: String,
    /// How much, unrounded, in `unit`.
    pub amount: f64,
    /// How much after rounding to what balance or pipette can do.
    pub rounded: f64,
    /// Decimal places of the rounded figure.
    pub decimals: u8,
    /// Unit: `g` or `mL`.
    pub unit: &'static str,
    /// Shift of the pH for 1 % more of it.
    pub ph_per_percent: f64,
}

/// A buffer as it is to be made.
#[derive(Clone, Debug)]
pub struct PreparationOutcome {
    /// Additions in the order of work.
    pub additions: Vec<Addition>,
    /// The final volume in litres.
    pub volume: f64,
    /// pH at the temperature of preparation after rounding.
    pub ph_at_preparation: f64,
    /// pH at the temperature of use after rounding.
    pub ph_at_use: f64,
    /// Temperature of use in degrees Celsius.
    pub temperature_of_use_c: f64,
    /// pH that was asked for at the temperature of use.
    pub target_ph: f64,
    /// Change of pH with temperature in 1/K near the temperature of use.
    pub ph_per_kelvin: f64,
    /// pH expected from what was really weighed, at the temperature of use.
    pub ph_as_weighed: Option<f64>,
    /// Buffers suggested, best first, where the choice was asked for.
    pub suggestions: Vec<Suggestion>,
}

/// One buffer of the library, ranked for a target.
#[derive(Clone, Debug)]
pub struct Suggestion {
    /// The family.
    pub ligand: String,
    /// The step that buffers, from 1.
    pub step: usize,
    /// pK of that step at the temperature of use.
    pub pk: f64,
    /// Buffer capacity at the target in mol/L per pH.
    pub buffer_capacity: f64,
    /// Change of pH with temperature in 1/K.
    pub ph_per_kelvin: f64,
    /// What speaks for or against it, in words.
    pub remark: String,
}

/// What an adjustment needs.
#[derive(Clone, Debug)]
pub struct AdjustmentOutcome {
    /// The additions.
    pub additions: Vec<Addition>,
    /// pH before.
    pub ph_before: f64,
    /// pH after.
    pub ph_after: f64,
    /// Volume of titrant in mL per 0.01 pH at the end point.
    pub ml_per_hundredth: f64,
    /// Drops per 0.01 pH at the end point.
    pub drops_per_hundredth: f64,
    /// Steps with a stop before the target: cumulative amount in the unit of the addition, and pH.
    pub steps: Vec<(f64, f64)>,
    /// What an overshoot by one drop and by 0.1 pH means, and the way back.
    pub overshoot: Vec<Overshoot>,
    /// How a measured pH at the start that disagrees with the composition can be explained.
    pub explanations: Vec<Explanation>,
}

/// An overshoot and the way back.
#[derive(Clone, Debug)]
pub struct Overshoot {
    /// What went wrong, in words.
    pub what: String,
    /// The pH it leads to.
    pub ph: f64,
    /// How to come back, in words.
    pub remedy: String,
}

/// One input that, wrong by so much, would explain a difference.
#[derive(Clone, Debug)]
pub struct Explanation {
    /// The input.
    pub input: InputId,
    /// Its stated value, as written.
    pub stated: String,
    /// The value it would have to have, in the unit it was written in; `None` if no value explains it.
    pub needed: Option<f64>,
    /// Relative change, 0.01 for 1 %.
    pub relative_change: Option<f64>,
}

/// What mixing gives besides the mixture's state.
#[derive(Clone, Debug)]
pub struct MixingOutcome {
    /// Final volume in litres.
    pub volume: f64,
    /// State after each step of a serial dilution.
    pub series: Vec<State>,
}

/// A titration, computed and, where there are readings, fitted.
#[derive(Clone, Debug)]
pub struct TitrationOutcome {
    /// The curve.
    pub points: Vec<CurvePoint>,
    /// Equivalence points by stoichiometry.
    pub equivalence_points: Vec<EquivalencePoint>,
    /// Indicators that change in a steep part.
    pub indicators: Vec<IndicatorEndPoint>,
    /// Indicators that were asked for and are in no table.
    pub unknown_indicators: Vec<String>,
    /// The fit to readings.
    pub fit: Option<Fit>,
}

/// One point of a curve.
#[derive(Clone, Copy, Debug)]
pub struct CurvePoint {
    /// Volume of titrant in mL.
    pub volume_ml: f64,
    /// pH.
    pub ph: f64,
    /// Slope in pH per mL.
    pub slope: f64,
}

/// One equivalence point.
#[derive(Clone, Debug)]
pub struct EquivalencePoint {
    /// What is complete there, in words.
    pub what: String,
    /// Volume of titrant in mL by stoichiometry.
    pub volume_ml: f64,
    /// pH there.
    pub ph: f64,
    /// Slope there in pH per mL.
    pub slope: f64,
    /// Volume in mL of the nearest steepest point of the computed curve, if there is one.
    pub steepest_ml: Option<f64>,
}

/// An indicator at an equivalence point.
#[derive(Clone, Debug)]
pub struct IndicatorEndPoint {
    /// The indicator.
    pub indicator: String,
    /// Transition range in pH.
    pub range: (f64, f64),
    /// Index of the equivalence point.
    pub equivalence_point: usize,
    /// Volume in mL at the end and middle of the range.
    pub volumes_ml: (f64, f64),
    /// Systematic error in percent of the equivalence volume at the middle of the range.
    pub error_percent: f64,
}

/// A fit to readings.
#[derive(Clone, Debug)]
pub struct Fit {
    /// What was determined.
    pub fitted: Vec<Fitted>,
    /// Correlation matrix, in the order of `fitted`.
    pub correlation: Vec<Vec<f64>>,
    /// Residuals in pH, one for each reading.
    pub residuals: Vec<f64>,
    /// Residual standard deviation in pH.
    pub residual_standard_deviation: f64,
    /// Degrees of freedom.
    pub degrees_of_freedom: usize,
    /// Probability of so few or so many runs of signs in the residuals by chance.
    pub runs_probability: f64,
    /// Lines of the file whose residual exceeds three standard deviations.
    pub outliers: Vec<usize>,
    /// End points by first and second derivative and by Gran's method: name and volume in mL.
    pub end_points: Vec<(String, f64)>,
    /// Warnings: parameters that the readings cannot decide, lack of fit.
    pub warnings: Vec<String>,
}

/// One fitted quantity.
#[derive(Clone, Debug)]
pub struct Fitted {
    /// What it is.
    pub quantity: String,
    /// Value in `unit`.
    pub value: f64,
    /// Unit; empty for dimensionless quantities.
    pub unit: &'static str,
    /// Standard error in the same unit.
    pub standard_error: f64,
}
