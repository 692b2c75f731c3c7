//! The table of units that a page may use.

use crate::quantity::{Decimal, refused_unit};
use std::fmt;

/// A unit.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
#[expect(
    missing_docs,
    reason = "each variant is named as its unit is spoken; the table gives its symbol"
)]
pub enum Unit {
    One,
    Percent,
    PercentByMass,
    PartsPerMillion,
    Kilogram,
    Gram,
    Milligram,
    Microgram,
    Litre,
    Millilitre,
    Microlitre,
    Mole,
    Millimole,
    Micromole,
    MolePerLitre,
    MillimolePerLitre,
    MicromolePerLitre,
    NanomolePerLitre,
    MolePerKilogram,
    MillimolePerKilogram,
    GramPerLitre,
    MilligramPerLitre,
    GramPerMillilitre,
    KilogramPerLitre,
    Celsius,
    Kelvin,
    Atmosphere,
    Bar,
    Millibar,
    Kilopascal,
    Pascal,
    Millivolt,
    GramPerMole,
}

/// Why a text is no unit.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum UnitError {
    /// It is in no table.
    #[error("{found:?} is no unit that is known here")]
    Unknown {
        /// What stood there.
        found: String,
    },
    /// It is known and refused.
    #[error("{found} is not accepted: {reason}")]
    Refused {
        /// What stood there.
        found: String,
        /// Why.
        reason: &'static str,
    },
}

/// How a value in a unit becomes one in the base unit of its dimension.
#[derive(Clone, Copy, Debug)]
enum Scale {
    PowerOfTen(i32),
    Factor(f64),
    CelsiusOffset,
}

struct Entry {
    unit: Unit,
    symbol: &'static str,
    /// Other spellings, in the normalised form of [`normalised`].
    others: &'static [&'static str],
    scale: Scale,
}

const fn entry(
    unit: Unit,
    symbol: &'static str,
    others: &'static [&'static str],
    power: i32,
) -> Entry {
    Entry {
        unit,
        symbol,
        others,
        scale: Scale::PowerOfTen(power),
    }
}

/// Base units: 1, g, L, mol, mol/L, mol/kg, g/L, g/mL, K, Pa, mV, g/mol.
const TABLE: [Entry; 33] = [
    entry(Unit::One, "", &["1"], 0),
    entry(Unit::Percent, "%", &["percent"], -2),
    entry(
        Unit::PercentByMass,
        "% w/w",
        &[
            "%w/w",
            "%(w/w)",
            "% (w/w)",
            "% m/m",
            "g/100 g",
            "wt%",
            "% by mass",
        ],
        -2,
    ),
    entry(Unit::PartsPerMillion, "ppm", &[], -6),
    entry(Unit::Kilogram, "kg", &[], 3),
    entry(Unit::Gram, "g", &["gram"], 0),
    entry(Unit::Milligram, "mg", &[], -3),
    entry(Unit::Microgram, "µg", &["ug", "mcg"], -6),
    entry(Unit::Litre, "L", &["l", "litre", "liter", "dm3"], 0),
    entry(Unit::Millilitre, "mL", &["ml", "cm3", "cc"], -3),
    entry(Unit::Microlitre, "µL", &["ul", "µl", "uL", "mm3"], -6),
    entry(Unit::Mole, "mol", &["mole"], 0),
    entry(Unit::Millimole, "mmol", &[], -3),
    entry(Unit::Micromole, "µmol", &["umol"], -6),
    entry(
        Unit::MolePerLitre,
        "mol/L",
        &["M", "mol/l", "mol/dm3", "mol L-1", "mol l-1"],
        0,
    ),
    entry(
        Unit::MillimolePerLitre,
        "mmol/L",
        &["mM", "mmol/l", "mmol L-1", "mmol l-1"],
        -3,
    ),
    entry(
        Unit::MicromolePerLitre,
        "µmol/L",
        &[
            "uM",
            "µM",
            "umol/L",
            "umol/l",
            "µmol/l",
            "µmol L-1",
            "umol L-1",
            "µmol l-1",
        ],
        -6,
    ),
    entry(
        Unit::NanomolePerLitre,
        "nmol/L",
        &["nM", "nmol/l", "nmol L-1", "nmol l-1"],
        -9,
    ),
    entry(Unit::MolePerKilogram, "mol/kg", &["mol kg-1"], 0),
    entry(Unit::MillimolePerKilogram, "mmol/kg", &["mmol kg-1"], -3),
    entry(
        Unit::GramPerLitre,
        "g/L",
        &["g/l", "g L-1", "g l-1", "g/dm3", "mg/mL", "mg/ml"],
        0,
    ),
    entry(
        Unit::MilligramPerLitre,
        "mg/L",
        &[
            "mg/l", "mg L-1", "mg l-1", "mg/dm3", "ug/mL", "µg/mL", "µg/ml", "ug/ml",
        ],
        -3,
    ),
    entry(
        Unit::GramPerMillilitre,
        "g/mL",
        &["g/ml", "g/cm3", "g mL-1", "g ml-1", "g cm-3"],
        0,
    ),
    entry(Unit::KilogramPerLitre, "kg/L", &["kg/l", "kg/dm3"], 0),
    Entry {
        unit: Unit::Celsius,
        symbol: "°C",
        others: &["degC", "deg C", "° C", "C"],
        scale: Scale::CelsiusOffset,
    },
    entry(Unit::Kelvin, "K", &[], 0),
    Entry {
        unit: Unit::Atmosphere,
        symbol: "atm",
        others: &[],
        scale: Scale::Factor(101_325.0),
    },
    entry(Unit::Bar, "bar", &[], 5),
    entry(Unit::Millibar, "mbar", &["hPa"], 2),
    entry(Unit::Kilopascal, "kPa", &[], 3),
    entry(Unit::Pascal, "Pa", &[], 0),
    entry(Unit::Millivolt, "mV", &[], 0),
    entry(Unit::GramPerMole, "g/mol", &["g mol-1"], 0),
];

impl Unit {
    /// Reads a unit in any of its spellings; micro, degree and multiplication signs in their several forms are taken.
    ///
    /// # Errors
    /// [`UnitError::Refused`] for a normality and its like, with the reason; [`UnitError::Unknown`] for anything else.
    pub fn parse(text: &str) -> Result<Self, UnitError> {
        let wanted = normalised(text.trim());
        let known = TABLE
            .iter()
            .find(|entry| entry.symbol == wanted || entry.others.contains(&wanted.as_str()));
        if let Some(entry) = known {
            return Ok(entry.unit);
        }
        match refused_unit::reason(&wanted) {
            Some(reason) => Err(UnitError::Refused {
                found: text.trim().to_owned(),
                reason,
            }),
            None => Err(UnitError::Unknown {
                found: text.trim().to_owned(),
            }),
        }
    }

    /// The symbol it is printed with.
    pub fn symbol(self) -> &'static str {
        self.entry().map_or("", |entry| entry.symbol)
    }

    /// Every symbol, for suggestions.
    pub fn symbols() -> impl Iterator<Item = &'static str> {
        TABLE.iter().map(|entry| entry.symbol)
    }

    /// A value written in this unit, as a number of base units of its dimension.
    pub fn to_base(self, written: Decimal) -> f64 {
        match self.scale() {
            Scale::PowerOfTen(power) => written.scaled(power).to_f64(),
            Scale::Factor(factor) => written.to_f64() * factor,
            Scale::CelsiusOffset => written.to_f64() + 273.15,
        }
    }

    /// A difference of values in this unit, as a number of base units: no offset for temperatures.
    pub fn difference_to_base(self, written: Decimal) -> f64 {
        match self.scale() {
            Scale::CelsiusOffset => written.to_f64(),
            Scale::PowerOfTen(_) | Scale::Factor(_) => self.to_base(written),
        }
    }

    /// A number of base units, as a value in this unit.
    pub fn from_base(self, base: f64) -> f64 {
        match self.scale() {
            Scale::PowerOfTen(power) if power < 0 => base * Decimal::new(false, 1, -power).to_f64(),
            Scale::PowerOfTen(power) => base / Decimal::new(false, 1, power).to_f64(),
            Scale::Factor(factor) => base / factor,
            Scale::CelsiusOffset => base - 273.15,
        }
    }

    /// The exact decimal in base units, where the conversion is a power of ten.
    pub fn exact_in_base(self, written: Decimal) -> Option<Decimal> {
        match self.scale() {
            Scale::PowerOfTen(power) => Some(written.scaled(power)),
            Scale::Factor(_) | Scale::CelsiusOffset => None,
        }
    }

    fn entry(self) -> Option<&'static Entry> {
        TABLE.iter().find(|entry| entry.unit == self)
    }

    fn scale(self) -> Scale {
        self.entry()
            .map_or(Scale::PowerOfTen(0), |entry| entry.scale)
    }
}

impl fmt::Display for Unit {
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        formatter.write_str(self.symbol())
    }
}

/// One spelling for the several Unicode forms of micro, degree, minus, middle dot, slash and superscripts; none for blanks around a slash.
fn normalised(text: &str) -> String {
    let text = text
        .replace(['μ'], "µ")
        .replace("℃", "°C")
        .replace(['º', '˚'], "°")
        .replace(['·', '⋅', '\u{a0}', '\u{202f}'], " ")
        .replace(['⁻', '−'], "-")
        .replace('¹', "1")
        .replace('³', "3")
        .replace("^-", "-")
        .replace(['∕', '⁄'], "/");
    let mut words = text.split_whitespace();
    let mut joined = words.next().unwrap_or_default().to_owned();
    for word in words {
        if !joined.ends_with('/') && !word.starts_with('/') {
            joined.push(' ');
        }
        joined.push_str(word);
    }
    joined
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn table_has_each_unit_and_spelling_once() {
        let mut spellings: Vec<&str> = TABLE
            .iter()
            .flat_map(|entry| std::iter::once(entry.symbol).chain(entry.others.iter().copied()))
            .collect();
        let count = spellings.len();
        spellings.sort_unstable();
        spellings.dedup();
        assert_eq!(spellings.len(), count);
    }

    #[test]
    fn spellings_are_taken() {
        for (text, unit) in [
            ("mol/L", Unit::MolePerLitre),
            ("mol·L⁻¹", Unit::MolePerLitre),
            ("mM", Unit::MillimolePerLitre),
            ("mol / L", Unit::MolePerLitre),
            ("µmol  L^-1", Unit::MicromolePerLitre),
            ("μL", Unit::Microlitre),
            ("µL", Unit::Microlitre),
            ("uL", Unit::Microlitre),
            ("℃", Unit::Celsius),
            ("degC", Unit::Celsius),
            ("% w/w", Unit::PercentByMass),
        ] {
            assert_eq!(Unit::parse(text), Ok(unit), "{text}");
        }
    }

    #[test]
    fn normality_is_refused_with_the_reason() {
        for text in ["N", "eq/L", "g / 100 mL", "°dH", "% w/v"] {
            assert!(
                matches!(Unit::parse(text), Err(UnitError::Refused { .. })),
                "{text}"
            );
        }
        assert!(matches!(
            Unit::parse("moles"),
            Err(UnitError::Unknown { .. })
        ));
    }

    #[test]
    fn there_and_back() {
        let value = Decimal::parse("25.0").unwrap();
        for entry in &TABLE {
            let back = entry.unit.from_base(entry.unit.to_base(value));
            // Two roundings of 25 and of 298.15.
            assert!((back - 25.0).abs() < 1e-12, "{}", entry.symbol);
        }
    }
}
