//! A chemical formula: element counts, charge, molar mass.

use crate::quantity::{Dimension, MolarMass};
use crate::substance::element;
use std::collections::BTreeMap;

/// Largest count of an atom, and deepest nesting, that a formula may have.
const LARGEST_COUNT: u32 = 10_000;

/// A formula with its element counts.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Formula {
    text: String,
    atoms: BTreeMap<&'static str, u32>,
}

/// Why a text is no formula.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum FormulaError {
    /// It is empty.
    #[error("no formula")]
    Empty,
    /// A symbol is no element with a standard atomic weight.
    #[error("{symbol:?} is no element with a standard atomic weight")]
    UnknownElement {
        /// The symbol.
        symbol: String,
    },
    /// A bracket is not closed or not opened.
    #[error("brackets do not match")]
    Bracket,
    /// Something in it is not part of a formula.
    #[error("{found:?} is not part of a formula")]
    Character {
        /// The character.
        found: char,
    },
    /// A count is beyond any substance.
    #[error("a count is beyond {LARGEST_COUNT}")]
    Count,
}

impl Formula {
    /// Reads a formula with brackets and hydrate parts: `Na2HPO4·12H2O`, `Ca(OH)2`; subscripts may be Unicode.
    ///
    /// # Errors
    /// [`FormulaError`] says what is wrong.
    pub fn parse(text: &str) -> Result<Self, FormulaError> {
        let plain = super::names::folded_formula(text);
        if plain.is_empty() {
            return Err(FormulaError::Empty);
        }
        let mut atoms = BTreeMap::new();
        for part in plain.split('.') {
            let (factor, rest) = leading_count(part)?;
            add_part(rest, factor, &mut atoms)?;
        }
        Ok(Self {
            text: text.trim().to_owned(),
            atoms,
        })
    }

    /// The formula as written.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// Element counts.
    pub fn atoms(&self) -> &BTreeMap<&'static str, u32> {
        &self.atoms
    }

    /// Molar mass from the CIAAW 2021 abridged standard atomic weights.
    pub fn molar_mass(&self) -> MolarMass {
        MolarMass::from_base(self.sum(|weight, count| weight.value * count))
    }

    /// Standard uncertainty of the molar mass in g/mol.
    ///
    /// The stated uncertainty of each atomic weight is taken as the half width of a rectangular distribution, as in EURACHEM/CITAC QUAM,
    /// example A1 (recalled); atoms of one element are fully correlated, elements are not.
    pub fn molar_mass_uncertainty(&self) -> f64 {
        let variance = self.sum(|weight, count| {
            let half_width = weight.uncertainty * count;
            half_width * half_width / 3.0
        });
        variance.sqrt()
    }

    fn sum(&self, term: impl Fn(&element::AtomicWeight, f64) -> f64) -> f64 {
        self.atoms
            .iter()
            .filter_map(|(symbol, count)| Some(term(element::weight(symbol)?, f64::from(*count))))
            .sum()
    }
}

fn leading_count(part: &str) -> Result<(u32, &str), FormulaError> {
    let digits = part.len() - part.trim_start_matches(|c: char| c.is_ascii_digit()).len();
    let (count, rest) = part.split_at(digits);
    if rest.is_empty() {
        return Err(FormulaError::Empty);
    }
    Ok((if digits == 0 { 1 } else { read_count(count)? }, rest))
}

fn read_count(digits: &str) -> Result<u32, FormulaError> {
    match digits.parse::<u32>() {
        Ok(count) if count <= LARGEST_COUNT => Ok(count),
        _ => Err(FormulaError::Count),
    }
}

/// Adds the atoms of one part, `factor` times.
fn add_part(
    part: &str,
    factor: u32,
    atoms: &mut BTreeMap<&'static str, u32>,
) -> Result<(), FormulaError> {
    let mut levels: Vec<BTreeMap<&'static str, u32>> = vec![BTreeMap::new()];
    let mut rest = part.chars().peekable();
    while let Some(c) = rest.next() {
        match c {
            '(' | '[' => levels.push(BTreeMap::new()),
            ')' | ']' => {
                let count = count_at(&mut rest)?;
                let inner = levels.pop().ok_or(FormulaError::Bracket)?;
                let outer = levels.last_mut().ok_or(FormulaError::Bracket)?;
                merge(outer, &inner, count)?;
            }
            c if c.is_ascii_uppercase() => {
                let mut symbol = c.to_string();
                while let Some(next) = rest.next_if(char::is_ascii_lowercase) {
                    symbol.push(next);
                }
                let count = count_at(&mut rest)?;
                let weight =
                    element::weight(&symbol).ok_or(FormulaError::UnknownElement { symbol })?;
                let level = levels.last_mut().ok_or(FormulaError::Bracket)?;
                merge(level, &BTreeMap::from([(weight.symbol, 1)]), count)?;
            }
            found => return Err(FormulaError::Character { found }),
        }
    }
    match levels.as_slice() {
        [only] => merge(atoms, only, factor),
        _ => Err(FormulaError::Bracket),
    }
}

fn count_at(rest: &mut std::iter::Peekable<std::str::Chars<'_>>) -> Result<u32, FormulaError> {
    let mut digits = String::new();
    while let Some(next) = rest.next_if(char::is_ascii_digit) {
        digits.push(next);
    }
    if digits.is_empty() {
        Ok(1)
    } else {
        read_count(&digits)
    }
}

fn merge(
    into: &mut BTreeMap<&'static str, u32>,
    from: &BTreeMap<&'static str, u32>,
    factor: u32,
) -> Result<(), FormulaError> {
    for (symbol, count) in from {
        let total = into.entry(symbol).or_insert(0);
        *total = count
            .checked_mul(factor)
            .and_then(|more| total.checked_add(more))
            .filter(|sum| *sum <= LARGEST_COUNT)
            .ok_or(FormulaError::Count)?;
    }
    Ok(())
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Molar masses computed from the CIAAW 2021 abridged weights; tolerance 0.001 g/mol, rounding of the sum.
    const MOLAR_MASSES: [(&str, f64); 54] = [
        ("KHC8H4O4", 204.222),
        ("C6H8O7", 192.123),
        ("C6H8O7.H2O", 210.138),
        ("Na3C6H5O7.2H2O", 294.099),
        ("Na2HPO4", 141.958),
        ("Na2HPO4.2H2O", 177.988),
        ("Na2HPO4.7H2O", 268.063),
        ("Na2HPO4.12H2O", 358.138),
        ("NaH2PO4.H2O", 137.991),
        ("NaH2PO4.2H2O", 156.006),
        ("KH2PO4", 136.084),
        ("NaC2H3O2.3H2O", 136.079),
        ("NaC2H3O2", 82.034),
        ("C2H4O2", 60.052),
        ("HCl", 36.458),
        ("H2SO4", 98.072),
        ("HNO3", 63.012),
        ("HClO4", 100.454),
        ("H3PO4", 97.994),
        ("CH2O2", 46.025),
        ("NaOH", 39.997),
        ("KOH", 56.105),
        ("Na2CO3", 105.988),
        ("Na2CO3.10H2O", 286.138),
        ("NaHCO3", 84.006),
        ("K2CO3", 138.204),
        ("KHCO3", 100.114),
        ("Na2B4O7.10H2O", 381.363),
        ("H3BO3", 61.831),
        ("KH3C4O8.2H2O", 254.188),
        ("KHC4H4O6", 188.176),
        ("KH2C6H5O7", 230.213),
        ("Ca(OH)2", 74.092),
        ("H2C2O4.2H2O", 126.064),
        ("H2C2O4", 90.034),
        ("K2HPO4", 174.174),
        ("Na3PO4.12H2O", 380.120),
        ("C4H11NO3", 121.136),
        ("C4H12NO3Cl", 157.594),
        ("C2H5NO2", 75.067),
        ("C8H18N2O4S", 238.302),
        ("C6H13NO4S", 195.233),
        ("C7H15NO4S", 209.260),
        ("NH4Cl", 53.489),
        ("(NH4)2SO4", 132.134),
        ("C7H6O2", 122.123),
        ("H3NSO3", 97.088),
        ("KH(IO3)2", 389.900),
        ("NaCl", 58.440),
        ("KCl", 74.548),
        ("C4H6O4", 118.088),
        ("C4H6O6", 150.086),
        ("Na2C10H14N2O8.2H2O", 372.238),
        ("H2O", 18.015),
    ];

    #[test]
    fn molar_masses_follow_from_the_weights() {
        for (formula, expected) in MOLAR_MASSES {
            let found = Formula::parse(formula).unwrap().molar_mass().base();
            assert!((found - expected).abs() <= 0.001, "{formula}: {found}");
        }
    }

    #[test]
    fn wrong_formulas_say_what_is_wrong() {
        assert_eq!(
            Formula::parse("NaXx"),
            Err(FormulaError::UnknownElement {
                symbol: "Xx".to_owned()
            })
        );
        assert_eq!(Formula::parse("Ca(OH2"), Err(FormulaError::Bracket));
        assert_eq!(Formula::parse("H2O)"), Err(FormulaError::Bracket));
        assert_eq!(Formula::parse(""), Err(FormulaError::Empty));
        assert_eq!(Formula::parse("H99999999999"), Err(FormulaError::Count));
    }
}
