//! One dissociation constant with everything that must be known to use it.

use crate::quantity::Decimal;

/// Whether a value was checked against its source when it was entered.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Basis {
    /// A text that states the value was opened.
    Read,
    /// It was not; every result carries the caution until the laboratory adopts the value.
    Recalled,
    /// Stated by the user, in the block or in the laboratory's own file.
    Stated,
}

impl Basis {
    /// The word that is printed.
    pub fn word(self) -> &'static str {
        match self {
            Self::Read => "read",
            Self::Recalled => "recalled",
            Self::Stated => "stated",
        }
    }

    /// The basis that a word names.
    pub fn from_word(word: &str) -> Option<Self> {
        [Self::Read, Self::Recalled, Self::Stated]
            .into_iter()
            .find(|basis| basis.word() == word)
    }
}

/// What kind of constant it is; kinds are never mixed silently.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Kind {
    /// At zero ionic strength.
    Thermodynamic,
    /// At a stated ionic strength in a stated medium.
    Conditional {
        /// Ionic strength in mol/kg.
        ionic_strength: Decimal,
        /// Medium, where stated.
        medium: Option<String>,
    },
    /// The source does not say.
    Unstated,
}

impl Kind {
    /// The word that is printed.
    pub fn word(&self) -> &'static str {
        match self {
            Self::Thermodynamic => "thermodynamic",
            Self::Conditional { .. } => "conditional",
            Self::Unstated => "unstated",
        }
    }
}

/// Enthalpy and heat capacity of a dissociation step.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ThermalData {
    /// Enthalpy of dissociation in kJ/mol.
    pub enthalpy: Decimal,
    /// Change of heat capacity in J/(mol K).
    pub heat_capacity: Option<Decimal>,
    /// Where both come from.
    pub source: String,
    /// Whether that was opened.
    pub basis: Basis,
}

/// The algebraic form of a published equation pK(T), T in kelvin.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EquationForm {
    /// pK = a/T + b + c ln T.
    InverseConstantLogarithm,
    /// pK = a/T + b + c T.
    InverseConstantLinear,
    /// pK = -(a + b/T + c ln T + d T)/ln 10.
    NaturalLogarithm,
    /// pK = -(a + b T + c/T + d lg T + e/T²).
    CommonLogarithm,
    /// pK = -(a + b ln T + c T² + d T + e/T).
    Clegg,
}

impl EquationForm {
    /// Every form with the text that a file uses for it and its number of coefficients.
    pub const FORMS: [(&'static str, Self, usize); 5] = [
        ("a/T + b + c ln T", Self::InverseConstantLogarithm, 3),
        ("a/T + b + c T", Self::InverseConstantLinear, 3),
        ("-(a + b/T + c ln T + d T)/ln 10", Self::NaturalLogarithm, 4),
        ("-(a + b T + c/T + d lg T + e/T²)", Self::CommonLogarithm, 5),
        ("-(a + b ln T + c T² + d T + e/T)", Self::Clegg, 5),
    ];

    /// The text that a file uses for this form.
    pub fn text(self) -> &'static str {
        Self::FORMS
            .iter()
            .find(|(_, form, _)| *form == self)
            .map_or("", |(text, ..)| text)
    }
}

/// A published equation pK(T).
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct PkEquation {
    /// Its algebraic form.
    pub form: EquationForm,
    /// Its coefficients, as many as the form has.
    pub coefficients: Vec<Decimal>,
    /// Lower end of its range in degrees Celsius.
    pub from_c: Decimal,
    /// Upper end of its range in degrees Celsius.
    pub to_c: Decimal,
    /// Where it was published.
    pub source: String,
    /// Whether that was opened.
    pub basis: Basis,
}

/// One value of one dissociation step.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Constant {
    /// pK as printed.
    pub pk: Decimal,
    /// Uncertainty as printed; taken as a standard uncertainty, which the result says.
    pub uncertainty: Option<Decimal>,
    /// Kind.
    pub kind: Kind,
    /// Temperature in degrees Celsius.
    pub temperature_c: Decimal,
    /// Enthalpy and heat capacity.
    pub thermal: Option<ThermalData>,
    /// Published equation in temperature.
    pub equation: Option<PkEquation>,
    /// Author, journal, year.
    pub source: String,
    /// Place in the source.
    pub locator: Option<String>,
    /// Whether the source was opened.
    pub basis: Basis,
    /// Remark.
    pub note: Option<String>,
}

/// One dissociation step: the value that is used, and second opinions.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Step {
    /// The value that is used.
    pub preferred: Constant,
    /// Other published values, for comparison only.
    pub others: Vec<Constant>,
}

impl Step {
    /// The largest distance in pK of another value at the same temperature and of the same kind; `None` where there is none.
    pub fn spread(&self) -> Option<f64> {
        self.others
            .iter()
            .filter(|other| {
                other.kind == self.preferred.kind
                    && other
                        .temperature_c
                        .to_f64()
                        .total_cmp(&self.preferred.temperature_c.to_f64())
                        .is_eq()
            })
            .map(|other| (other.pk.to_f64() - self.preferred.pk.to_f64()).abs())
            .max_by(f64::total_cmp)
    }
}
