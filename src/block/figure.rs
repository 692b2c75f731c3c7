//! Where a number ends in a text, and what is wrong with it.

use crate::block::piece::Piece;
use crate::quantity::{Decimal, DecimalError};
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::Scalar;

/// Reads a plain number without unit or uncertainty.
pub(super) fn number(scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<Decimal> {
    match Decimal::parse(scalar.text()) {
        Ok(number) => Some(number),
        Err(error) => {
            diagnostics.push(bad_number(scalar.span(), scalar.text(), &error));
            None
        }
    }
}

/// Reads a number that may carry the one unit in which it is kept: `3.6` or `3.6 kJ/mol`.
pub(super) fn number_in(
    scalar: &Scalar,
    unit: &str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Decimal> {
    let text = scalar.text();
    let bare = text.strip_suffix(unit).unwrap_or(text);
    match Decimal::parse(bare) {
        Ok(number) => Some(number),
        Err(error) => {
            let fault = bad_number(scalar.span(), bare, &error);
            diagnostics.push(if unit.is_empty() {
                fault
            } else {
                fault.expecting(format!("a number in {unit}"))
            });
            None
        }
    }
}

/// The number at the front of a piece, and the bytes that it takes there.
pub(super) fn leading(
    piece: Piece<'_>,
    from: usize,
    to: usize,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<(Decimal, usize)> {
    let text = piece.text().get(from..to)?;
    let length = number_length(text);
    let found = text.get(..length)?;
    match Decimal::parse(found) {
        Ok(number) => Some((number, length)),
        Err(error) => {
            let end = if length == 0 { text.len() } else { length };
            let place = piece.place(Span::new(from, from + end));
            diagnostics.push(bad_number(place, found, &error));
            None
        }
    }
}

fn bad_number(span: Span, found: &str, error: &DecimalError) -> Diagnostic {
    match error {
        DecimalError::DecimalComma { corrected } => {
            Diagnostic::error(Rule::DecimalComma, span, "a decimal comma")
                .helped(format!("write `{}`", corrected.trim()))
        }
        DecimalError::Empty => Diagnostic::error(Rule::BadNumber, span, "a number is missing")
            .expecting("a number, then a unit"),
        other => Diagnostic::error(
            Rule::BadNumber,
            span,
            format!("`{}` is no number: {other}", found.trim()),
        ),
    }
}

/// Bytes of the number at the front of a text, grouping and decimal commas included so that they can be reported.
fn number_length(text: &str) -> usize {
    let mut end = 0;
    let mut rest = text.char_indices().peekable();
    while let Some((at, c)) = rest.next() {
        let here = text.get(at..).unwrap_or_default();
        let next = text.get(at + c.len_utf8()..).unwrap_or_default();
        let belongs = match c {
            '0'..='9' | '.' | ',' | '\'' | '_' => true,
            '+' | '-' | '−' | '–' => end == 0,
            'e' | 'E' => end > 0 && begins_exponent(next),
            c if c.is_whitespace() => {
                end == 0
                    || next.starts_with(|d: char| d.is_ascii_digit())
                    || power_length(next).is_some()
            }
            '×' | 'x' | '·' | '*' => power_length(here).is_some(),
            _ => false,
        };
        if !belongs {
            break;
        }
        if let Some(length) = power_length(here) {
            return at + length;
        }
        end = at + c.len_utf8();
        if matches!(c, 'e' | 'E') {
            while let Some((at, d)) =
                rest.next_if(|(_, d)| d.is_ascii_digit() || matches!(d, '+' | '-' | '−'))
            {
                end = at + d.len_utf8();
            }
        }
    }
    if text.get(..end).is_some_and(|front| front.trim().is_empty()) {
        0
    } else {
        end
    }
}

fn begins_exponent(text: &str) -> bool {
    text.strip_prefix(['+', '-', '−'])
        .unwrap_or(text)
        .starts_with(|digit: char| digit.is_ascii_digit())
}

/// Bytes of `× 10⁻³` at the front of a text.
fn power_length(text: &str) -> Option<usize> {
    let after_sign = text.strip_prefix(['×', 'x', '·', '*'])?;
    let after_ten = after_sign.trim_start().strip_prefix("10")?;
    let power = after_ten
        .char_indices()
        .find(|(_, c)| !(c.is_ascii_digit() || "^+-−⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹".contains(*c)))
        .map_or(after_ten.len(), |(at, _)| at);
    (power > 0).then_some(text.len() - after_ten.len() + power)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_number_ends_where_its_unit_begins() {
        for (text, number) in [
            ("25 °C", "25"),
            ("25°C", "25"),
            ("0.0350mol/L", "0.0350"),
            ("1.8e-5 mol/L", "1.8e-5"),
            ("1.8 × 10⁻⁵ mol/L", "1.8 × 10⁻⁵"),
            ("2.5x10^-3 M", "2.5x10^-3"),
            ("-0.5 mV", "-0.5"),
            ("1 000 mL", "1 000"),
            ("0,05 mol/L", "0,05"),
            ("5 eq/L", "5"),
            ("mol/L", ""),
        ] {
            assert_eq!(text.get(..number_length(text)), Some(number), "{text}");
        }
    }
}
