//! One block, read.

use crate::problem::{Adjustment, Conditions, Input, Mixing, Preparation, Speciation, Titration};
use crate::quantity::{Number, RoundingRule, Temperature};
use std::fmt;

/// One block after reading.
#[derive(Clone, Debug, PartialEq)]
pub struct Statement {
    /// The block's name in its page.
    pub label: Label,
    /// The conditions.
    pub conditions: Conditions,
    /// The task.
    pub problem: Problem,
    /// A value worked by hand.
    pub hand_value: Option<HandValue>,
    /// A reading to be compared.
    pub measured: Option<MeasuredReading>,
    /// How figures are given.
    pub reporting: Reporting,
    /// What is carried along as written.
    pub annotations: Annotations,
}

/// The task of a block.
#[derive(Clone, Debug, PartialEq)]
pub enum Problem {
    /// `speciation`.
    Speciation(Speciation),
    /// `preparation`.
    Preparation(Box<Preparation>),
    /// `adjustment`.
    Adjustment(Box<Adjustment>),
    /// `mixing`.
    Mixing(Mixing),
    /// `titration`.
    Titration(Box<Titration>),
}

impl Problem {
    /// Every task name, in the order of the documentation.
    pub const TASKS: [&'static str; 5] = [
        "speciation",
        "preparation",
        "adjustment",
        "mixing",
        "titration",
    ];

    /// The word that a block uses for this task.
    pub fn task(&self) -> &'static str {
        match self {
            Self::Speciation(_) => "speciation",
            Self::Preparation(_) => "preparation",
            Self::Adjustment(_) => "adjustment",
            Self::Mixing(_) => "mixing",
            Self::Titration(_) => "titration",
        }
    }
}

/// The name of a block: lower-case letters, digits and hyphens, beginning with a letter or digit.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Label(String);

/// Why a text is no label.
#[derive(Clone, Copy, Debug, PartialEq, Eq, thiserror::Error)]
pub enum LabelError {
    /// It is empty.
    #[error("a label has at least one character")]
    Empty,
    /// It is longer than [`Label::LONGEST`] characters.
    #[error("a label has at most {} characters", Label::LONGEST)]
    TooLong,
    /// It has a character that is not allowed, or begins or ends with a hyphen.
    #[error("a label has lower-case letters, digits and single hyphens between them")]
    Character(char),
}

impl Label {
    /// The largest number of characters of a label.
    pub const LONGEST: usize = 64;

    /// Reads a label.
    ///
    /// # Errors
    /// [`LabelError`] where the text is empty, too long, has other characters than lower-case ASCII letters, digits and
    /// hyphens, begins or ends with a hyphen, or has two hyphens in a row (which a Markdown comment cannot hold).
    pub fn new(text: &str) -> Result<Self, LabelError> {
        if text.is_empty() {
            return Err(LabelError::Empty);
        }
        if text.chars().count() > Self::LONGEST {
            return Err(LabelError::TooLong);
        }
        let allowed = |c: char| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-';
        if let Some(wrong) = text.chars().find(|&c| !allowed(c)) {
            return Err(LabelError::Character(wrong));
        }
        if text.starts_with('-') || text.ends_with('-') || text.contains("--") {
            return Err(LabelError::Character('-'));
        }
        Ok(Self(text.to_owned()))
    }

    /// The label's text.
    pub fn as_str(&self) -> &str {
        &self.0
    }
}

impl fmt::Display for Label {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(&self.0)
    }
}

/// A value worked by hand, and how.
#[derive(Clone, Debug, PartialEq)]
pub struct HandValue {
    /// The pH that was found.
    pub ph: Input<Number>,
    /// The shortcut that gave it.
    pub by: ShortcutName,
    /// Largest shift from the full result that is accepted, in pH; 0.02 where not stated.
    pub limit: Option<Input<Number>>,
}

/// The shortcuts of hand calculation (chemistry: section "Shortcuts, tested").
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum ShortcutName {
    /// Only the first dissociation step counts; the quadratic is solved exactly.
    FirstStepOnly,
    /// First step only, and x neglected against the analytical concentration ("5 % rule").
    XNeglected,
    /// First step only, successive approximation until the last kept digit moves by at most one.
    SuccessiveApproximation,
    /// pH = pK + lg(base/acid).
    HendersonHasselbalch,
    /// pH = (pK1 + pK2)/2 for an ampholyte.
    Ampholyte,
    /// Water's own ions left out.
    WaterNeglected,
    /// All activity coefficients 1.
    UnitActivityCoefficients,
    /// The ions of the next dissociation step left out.
    NextStepNeglected,
}

impl ShortcutName {
    /// Every shortcut with the words that a block uses for it.
    pub const NAMES: [(&'static str, Self); 8] = [
        ("first step only", Self::FirstStepOnly),
        ("x neglected", Self::XNeglected),
        ("successive approximation", Self::SuccessiveApproximation),
        ("henderson-hasselbalch", Self::HendersonHasselbalch),
        ("ampholyte", Self::Ampholyte),
        ("water neglected", Self::WaterNeglected),
        ("activity coefficients of 1", Self::UnitActivityCoefficients),
        ("next step neglected", Self::NextStepNeglected),
    ];

    /// The words that a block uses for this shortcut.
    pub fn name(self) -> &'static str {
        Self::NAMES
            .iter()
            .find(|(_, shortcut)| *shortcut == self)
            .map_or("", |(name, _)| name)
    }
}

/// A reading of a pH meter, to be compared with the computed value.
#[derive(Clone, Debug, PartialEq)]
pub struct MeasuredReading {
    /// The pH that was read.
    pub ph: Input<Number>,
    /// Temperature at the reading.
    pub temperature: Option<Input<Temperature>>,
    /// Calibration standards and slope, as written.
    pub calibration: Vec<String>,
    /// Acceptance limit: a nominal value with a half width.
    pub limit: Option<AcceptanceLimit>,
}

/// An acceptance limit: nominal value and half width, in pH.
#[derive(Clone, Debug, PartialEq)]
pub struct AcceptanceLimit {
    /// Nominal pH.
    pub nominal: Number,
    /// Half width in pH; the limits themselves are within.
    pub half_width: Number,
    /// As written.
    pub written: String,
}

/// How figures are given.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Reporting {
    /// Decimal places of pH.
    pub ph_decimals: u8,
    /// Significant figures of concentrations, masses and volumes.
    pub significant_figures: u8,
    /// How the reported figure is rounded.
    pub rounding: RoundingRule,
}

/// What goes into the record as written.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Annotations {
    /// Procedure and revision.
    pub method: Option<String>,
    /// Balances, pipettes and meters by their identity numbers.
    pub equipment: Vec<String>,
    /// Free text.
    pub notes: Option<String>,
}
