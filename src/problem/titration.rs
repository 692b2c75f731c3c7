//! A sample, a titrant, and readings where there are any.

use crate::problem::{Composition, Input};
use crate::quantity::Volume;

/// A titration, computed or measured.
#[derive(Clone, Debug, PartialEq)]
pub struct Titration {
    /// The sample; it has a volume.
    pub sample: Composition,
    /// The titrant.
    pub titrant: Composition,
    /// Volume of titrant at the end of the curve.
    pub to: Input<Volume>,
    /// Number of points, or as many as the curve needs.
    pub points: Option<u32>,
    /// Names of indicators to look at; empty for all of the library.
    pub indicators: Vec<String>,
    /// What was measured, if anything was.
    pub readings: Option<Readings>,
}

/// Measured points of a titration, from an attachment.
#[derive(Clone, Debug, PartialEq)]
pub struct Readings {
    /// The attachment's path, relative to the page.
    pub path: String,
    /// The points in the order of the file.
    pub points: Vec<ReadingsPoint>,
    /// What the second column is.
    pub signal: Signal,
    /// What to determine.
    pub fit: Vec<FitParameter>,
}

/// One measured point.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct ReadingsPoint {
    /// Line of the file, counted from 1.
    pub line: usize,
    /// Volume of titrant in millilitres.
    pub volume_ml: f64,
    /// pH, or cell voltage in millivolts.
    pub signal: f64,
}

/// What the second column of the readings is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Signal {
    /// pH as the meter showed it.
    Ph,
    /// Cell voltage in millivolts, with the electrode's calibration.
    Millivolt {
        /// Voltage at pH 7 in millivolts.
        at_ph_7: f64,
        /// Slope in percent of the Nernst slope.
        slope_percent: f64,
    },
}

/// One quantity to be determined from readings.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum FitParameter {
    /// Analytical concentration of a substance in the sample.
    SampleConcentration(String),
    /// Concentration of the titrant.
    TitrantConcentration(String),
    /// A stepwise pK of a ligand: name and step, counted from 1.
    Pk {
        /// The ligand's name.
        ligand: String,
        /// The step.
        step: usize,
    },
    /// Carbonate in the titrant.
    CarbonateInTitrant,
    /// Offset of the electrode in pH.
    ElectrodeOffset,
    /// Slope of the electrode in percent of the Nernst slope.
    ElectrodeSlope,
}
