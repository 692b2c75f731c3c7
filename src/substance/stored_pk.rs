//! The stored form of one constant.

use crate::quantity::Decimal;
use crate::substance::{
    Basis, Constant, EquationForm, Kind, LibraryError, PkEquation, Step, ThermalData,
};
use serde::{Deserialize, Serialize};

/// One value of a step as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredPk {
    pub value: String,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub uncertainty: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub kind: Option<String>,
    #[serde(
        rename = "ionic strength",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub ionic_strength: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub medium: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub temperature: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub enthalpy: Option<String>,
    #[serde(
        rename = "heat capacity",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub heat_capacity: Option<String>,
    #[serde(
        rename = "thermal source",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub thermal_source: Option<String>,
    #[serde(
        rename = "thermal basis",
        default,
        skip_serializing_if = "Option::is_none"
    )]
    pub thermal_basis: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub equation: Option<StoredEquation>,
    pub source: String,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub locator: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub basis: Option<String>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub note: Option<String>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub others: Vec<Self>,
}

/// An equation pK(T) as stored.
#[derive(Clone, Debug, Default, PartialEq, Eq, Deserialize, Serialize)]
#[serde(deny_unknown_fields)]
#[expect(
    missing_docs,
    reason = "the fields are the keys of the block language, whose table documents them"
)]
pub struct StoredEquation {
    pub form: String,
    pub coefficients: Vec<String>,
    pub from: String,
    pub to: String,
    pub source: String,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub basis: Option<String>,
}

impl StoredPk {
    /// The step that the entry describes.
    pub(super) fn step(&self, name: &str, own: bool) -> Result<Step, LibraryError> {
        Ok(Step {
            preferred: self.constant(name, own)?,
            others: self
                .others
                .iter()
                .map(|other| other.constant(name, own))
                .collect::<Result<_, _>>()?,
        })
    }

    /// The constant that the entry describes, without its second opinions; `own` marks the user's own.
    pub(super) fn constant(&self, name: &str, own: bool) -> Result<Constant, LibraryError> {
        let temperature_c = match &self.temperature {
            Some(text) => figure(name, text.trim_end_matches("°C").trim())?,
            None => Decimal::whole(25),
        };
        Ok(Constant {
            pk: figure(name, &self.value)?,
            uncertainty: optional(name, self.uncertainty.as_deref())?,
            kind: self.kind(name, own)?,
            temperature_c,
            thermal: self.thermal(name, own)?,
            equation: self
                .equation
                .as_ref()
                .map(|e| e.equation(name, own))
                .transpose()?,
            source: self.source.clone(),
            locator: self.locator.clone(),
            basis: basis(name, self.basis.as_deref(), own)?,
            note: self.note.clone(),
        })
    }

    /// The files of the library leave out `thermodynamic`; what a user leaves out was not said.
    fn kind(&self, name: &str, own: bool) -> Result<Kind, LibraryError> {
        match (self.kind.as_deref(), &self.ionic_strength) {
            (None, None) if own => Ok(Kind::Unstated),
            (None | Some("thermodynamic"), None) => Ok(Kind::Thermodynamic),
            (None | Some("thermodynamic"), Some(text)) if figure(name, text)?.is_zero() => {
                Ok(Kind::Thermodynamic)
            }
            (None | Some("conditional"), Some(text)) => Ok(Kind::Conditional {
                ionic_strength: figure(name, text)?,
                medium: self.medium.clone(),
            }),
            (Some("unstated"), _) => Ok(Kind::Unstated),
            (Some(word), _) => Err(LibraryError::Word {
                name: name.to_owned(),
                word: word.to_owned(),
            }),
        }
    }

    fn thermal(&self, name: &str, own: bool) -> Result<Option<ThermalData>, LibraryError> {
        let Some(enthalpy) = &self.enthalpy else {
            return Ok(None);
        };
        Ok(Some(ThermalData {
            enthalpy: figure(name, enthalpy)?,
            heat_capacity: optional(name, self.heat_capacity.as_deref())?,
            source: self
                .thermal_source
                .clone()
                .unwrap_or_else(|| self.source.clone()),
            basis: basis(
                name,
                self.thermal_basis.as_deref().or(self.basis.as_deref()),
                own,
            )?,
        }))
    }
}

impl StoredEquation {
    fn equation(&self, name: &str, own: bool) -> Result<PkEquation, LibraryError> {
        let known = EquationForm::FORMS
            .iter()
            .find(|(text, _, count)| *text == self.form && *count == self.coefficients.len());
        let Some((_, form, _)) = known else {
            return Err(LibraryError::Word {
                name: name.to_owned(),
                word: self.form.clone(),
            });
        };
        Ok(PkEquation {
            form: *form,
            coefficients: self
                .coefficients
                .iter()
                .map(|text| figure(name, text))
                .collect::<Result<_, _>>()?,
            from_c: figure(name, &self.from)?,
            to_c: figure(name, &self.to)?,
            source: self.source.clone(),
            basis: basis(name, self.basis.as_deref(), own)?,
        })
    }
}

/// A figure as a decimal.
pub(super) fn figure(name: &str, text: &str) -> Result<Decimal, LibraryError> {
    Decimal::parse(text).map_err(|_error| LibraryError::Figure {
        name: name.to_owned(),
        text: text.to_owned(),
    })
}

/// A figure that may be absent.
pub(super) fn optional(name: &str, text: Option<&str>) -> Result<Option<Decimal>, LibraryError> {
    text.map(|text| figure(name, text)).transpose()
}

fn basis(name: &str, word: Option<&str>, own: bool) -> Result<Basis, LibraryError> {
    match word {
        None if own => Ok(Basis::Stated),
        None => Ok(Basis::Recalled),
        Some(word) => Basis::from_word(word).ok_or_else(|| LibraryError::Word {
            name: name.to_owned(),
            word: word.to_owned(),
        }),
    }
}
