//! The grammar of an amount: `0.0200 ± 0.0001 mol/L (k=2)`.
//!
//! ```text
//! amount = number [unit] [ sign number [unit | "%"] "(" words ")" ]
//! sign   = "±" | "+/-" | "+-"
//! words  = kind ["," "dof=" number]
//! kind   = "k=" number | "standard" | "tolerance" | "rectangular"
//! ```
//!
//! The unit stands after the value, after the figure that follows the sign, or after both; `%` after that figure is a share of the value.

use crate::block::figure;
use crate::block::piece::{Piece, trimmed};
use crate::block::spread;
use crate::quantity::{Decimal, Dimension, Measured, Uncertainty, Unit, UnitError};
use crate::text::{Diagnostic, Rule, Span};

/// What may stand at a place.
#[derive(Clone, Copy, Debug)]
pub(super) struct Accepted {
    /// What it is called in a message, with its article.
    pub(super) name: &'static str,
    /// The units in which it may be stated.
    pub(super) units: &'static [Unit],
}

impl Accepted {
    /// What a dimension accepts; a plain number has no unit.
    pub(super) fn of<D: Dimension>() -> Self {
        let units = if D::UNITS.contains(&Unit::One) {
            &[Unit::One]
        } else {
            D::UNITS
        };
        Self {
            name: D::NAME,
            units,
        }
    }

    fn is_plain(self) -> bool {
        self.units == [Unit::One]
    }

    fn symbols(self) -> impl Iterator<Item = &'static str> {
        self.units.iter().map(|unit| unit.symbol())
    }

    /// `a volume in mL, L, µL`.
    fn listed(self) -> String {
        if self.is_plain() {
            return self.name.to_owned();
        }
        format!(
            "{} in {}",
            self.name,
            self.symbols().collect::<Vec<_>>().join(", ")
        )
    }
}

/// Reads an amount of one dimension; everything wrong with it is reported.
pub(super) fn read<'s, D: Dimension>(
    piece: impl Into<Piece<'s>>,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Measured<D>> {
    Written::read(piece.into(), Accepted::of::<D>(), diagnostics)?.measured()
}

/// The unit of an amount, whatever its dimension; nothing is reported.
pub(super) fn unit_of<'s>(piece: impl Into<Piece<'s>>) -> Option<Unit> {
    let piece = piece.into();
    let parts = Parts::of(piece, &mut Vec::new())?;
    Unit::parse(parts.unit.of(piece.text())?).ok()
}

/// An amount whose dimension its unit tells.
#[derive(Clone, Copy, Debug)]
pub(super) struct Written {
    number: Decimal,
    uncertainty: Option<Uncertainty>,
    /// The unit, one of the accepted ones.
    pub(super) unit: Unit,
}

impl Written {
    /// Reads an amount in one of the accepted units.
    pub(super) fn read(
        piece: Piece<'_>,
        accepted: Accepted,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<Self> {
        let parts = Parts::of(piece, diagnostics)?;
        let unit = unit(piece, parts.unit, accepted, diagnostics);
        let uncertainty = match parts.spread {
            Some(stated) => {
                let found = stated.read(piece, parts.unit, accepted, diagnostics);
                Some(found?)
            }
            None => None,
        };
        Some(Self {
            number: parts.number,
            uncertainty,
            unit: unit?,
        })
    }

    /// The amount in a dimension; `None` if the unit is of another.
    pub(super) fn measured<D: Dimension>(self) -> Option<Measured<D>> {
        let measured = Measured::new(self.number, self.unit)?;
        Some(match self.uncertainty {
            Some(uncertainty) => measured.with(uncertainty),
            None => measured,
        })
    }
}

/// An amount taken apart; spans are those of the piece's text.
struct Parts<'s> {
    number: Decimal,
    /// The unit, empty where there is none.
    unit: Span,
    spread: Option<spread::Stated<'s>>,
}

impl<'s> Parts<'s> {
    fn of(piece: Piece<'s>, diagnostics: &mut Vec<Diagnostic>) -> Option<Self> {
        let text = piece.text();
        let (body, words) = spread::split_words(text);
        let sign = spread::sign(body);
        let value_end = sign.map_or(body.len(), Span::start);
        let (number, length) = figure::leading(piece, 0, value_end, diagnostics)?;
        let mut unit = trimmed(text, length, value_end);
        let mut stated = None;
        if let Some(sign) = sign {
            let found = spread::Stated::of(piece, sign, body.len(), words, diagnostics)?;
            if unit.is_empty() && !found.unit.is_empty() {
                unit = found.unit;
            }
            stated = Some(found);
        } else if let Some(words) = words {
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadUncertainty,
                    piece.place(Span::new(body.len(), text.len())),
                    format!("`({words})` says how to take an uncertainty, but none is stated"),
                )
                .helped("write `value ± uncertainty unit (k=2)`"),
            );
            return None;
        }
        Some(Self {
            number,
            unit,
            spread: stated,
        })
    }
}

/// The unit that stands at a place of the piece.
fn unit(
    piece: Piece<'_>,
    part: Span,
    accepted: Accepted,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Unit> {
    let text = part.of(piece.text()).unwrap_or_default();
    if text.is_empty() || (accepted.is_plain() && text == "%") {
        if accepted.is_plain() {
            return Some(Unit::One);
        }
        diagnostics.push(
            Diagnostic::error(
                Rule::MissingUnit,
                piece.span(),
                format!("{} without a unit; a unit is never guessed", accepted.name),
            )
            .expecting(accepted.listed()),
        );
        return None;
    }
    let span = piece.place(part);
    let diagnostic = match Unit::parse(text) {
        Ok(unit) if accepted.units.contains(&unit) => return Some(unit),
        Ok(unit) if accepted.is_plain() => Diagnostic::error(
            Rule::UnexpectedUnit,
            span,
            format!("`{unit}` after a number that has no unit"),
        ),
        Ok(unit) => Diagnostic::error(
            Rule::WrongUnit,
            span,
            format!("`{unit}` is not a unit of {}", spoken(accepted.name)),
        ),
        Err(UnitError::Refused { found, reason }) => Diagnostic::error(
            Rule::RefusedUnit,
            span,
            format!("`{found}` is not accepted: {reason}"),
        ),
        Err(UnitError::Unknown { found }) => Diagnostic::error(
            Rule::UnknownUnit,
            span,
            format!("`{found}` is not a unit that is known here"),
        )
        .did_you_mean(&found, accepted.symbols()),
    };
    diagnostics.push(diagnostic.expecting(accepted.listed()));
    None
}

/// The name without its article.
fn spoken(name: &'static str) -> &'static str {
    name.strip_prefix("a ")
        .or_else(|| name.strip_prefix("an "))
        .unwrap_or(name)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{
        AmountConcentration, MassFraction, Number, Pressure, Temperature, Volume,
    };
    use crate::yaml::{Limits, read as tree};

    /// The rule, the place and what is said to help.
    type Fault = (Rule, String, Option<String>);

    fn with<D: Dimension>(value: &str) -> Result<Measured<D>, Vec<Fault>> {
        let text = format!("a: {value}");
        let mut found = Vec::new();
        let root = tree(&text, Limits::BLOCK, &mut found).unwrap();
        let mut keys = root.as_mapping(&mut found).unwrap().keys();
        let scalar = keys.text("a", &mut found).unwrap();
        let measured = read::<D>(scalar, &mut found);
        measured.ok_or_else(|| {
            found
                .iter()
                .map(|fault| {
                    (
                        fault.rule(),
                        fault.span().of(&text).unwrap_or_default().to_owned(),
                        fault.help().or(fault.expected()).map(str::to_owned),
                    )
                })
                .collect()
        })
    }

    #[test]
    fn spellings_of_one_amount_are_one_amount() {
        let plain = with::<Volume>("10.00 ± 0.02 mL (tolerance)").unwrap();
        for text in [
            "10.00 mL ± 0.02 mL (tolerance)",
            "10.00 mL ± 0.02 (tolerance)",
            "10.00 +/- 0.02 mL (tolerance)",
            "10.00+/-0.02 ml (tolerance)",
            "'10.00 ± 0.02 mL (tolerance)'",
        ] {
            assert_eq!(with::<Volume>(text), Ok(plain), "{text}");
        }
        let micro = with::<AmountConcentration>("5 µM").unwrap();
        assert!((micro.value().base() - 5e-6).abs() < 1e-20);
        for text in ["298.15 K", "25 °C", "25 ℃", "25°C", "25 degC"] {
            let kelvin = with::<Temperature>(text).unwrap().value().base();
            assert!((kelvin - 298.15).abs() < 1e-12, "{text}");
        }
    }

    #[test]
    fn a_share_of_the_value_is_told_from_points_of_a_percentage() {
        let share = with::<AmountConcentration>("0.1 mol/L ± 0.5 % (k=2)").unwrap();
        assert!((share.standard_uncertainty() - 0.000_25).abs() < 1e-18);
        let points = with::<MassFraction>("99.5 ± 0.2 % (k=2)").unwrap();
        assert!((points.standard_uncertainty() - 0.001).abs() < 1e-15);
        let titre = with::<Number>("1.0023 ± 0.1 % (k=2, dof=9)").unwrap();
        assert!((titre.standard_uncertainty() - 1.0023 * 0.0005).abs() < 1e-15);
        assert_eq!(titre.degrees_of_freedom(), Some(9.0));
        let unclear = with::<MassFraction>("37 % ± 1 % (k=2)").unwrap_err();
        assert_eq!(unclear[0].0, Rule::BadUncertainty);
        assert!(unclear[0].2.as_deref().unwrap().contains("37 ± 1 %"));
    }

    /// Checks the first fault: its rule, its place and a part of what is said to help.
    fn refused<D: Dimension>(value: &str, rule: Rule, place: &str, help: &str) {
        let Err(found) = with::<D>(value) else {
            panic!("{value} was read");
        };
        assert_eq!((found[0].0, found[0].1.as_str()), (rule, place), "{value}");
        assert!(found[0].2.as_deref().unwrap().contains(help), "{found:?}");
    }

    #[test]
    fn faults_stand_where_they_were_typed_and_say_what_to_write() {
        let volumes = "a volume in mL, L, µL";
        refused::<Volume>("0,5 L", Rule::DecimalComma, "0,5", "write `0.5`");
        refused::<Volume>("5", Rule::MissingUnit, "5", volumes);
        refused::<Volume>("5 g", Rule::WrongUnit, "g", volumes);
        refused::<Volume>("5 mll", Rule::UnknownUnit, "mll", "did you mean `mL`?");
        refused::<Volume>("x mL", Rule::BadNumber, "x mL", "a number, then a unit");
        refused::<Number>("7 ppm", Rule::UnexpectedUnit, "ppm", "without unit");
        refused::<Pressure>("1 psi", Rule::UnknownUnit, "psi", "a pressure in");
    }

    #[test]
    fn faults_of_an_uncertainty() {
        let rule = Rule::BadUncertainty;
        refused::<Volume>("5 ± 0.1 mL", rule, "± 0.1 mL", "(k=2)");
        refused::<Volume>("5 ± 0,1 mL (k=2)", Rule::DecimalComma, "0,1", "write `0.1`");
        refused::<Volume>("5 mL (k=2)", rule, "(k=2)", "value ± uncertainty");
        refused::<Volume>("5 mL ± 1 L (k=2)", rule, "L", "one unit");
        refused::<Volume>("5 ± 1 mL (sd)", rule, "sd", "(standard)");
        refused::<Volume>("5 ± 1 mL (k=0)", rule, "k=0", "(standard)");
        refused::<Volume>("5 ± 1 mL (dof=3)", rule, "dof=3", "(standard)");
        refused::<Volume>("5 ± 1 mL (k=2, standard)", rule, "k=2, standard", "(k=2)");
        refused::<Temperature>("25 °C ± 1 % (k=2)", rule, "± 1 %", "°C");
    }

    #[test]
    fn a_normality_is_refused_with_its_reason() {
        for text in ["0.1 N", "0.1 eq/L", "100 meq/L"] {
            let found = with::<AmountConcentration>(text).unwrap_err();
            assert_eq!(found[0].0, Rule::RefusedUnit, "{text}");
        }
    }
}
