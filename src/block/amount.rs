//! The grammar of an amount: `0.0200 ± 0.0001 mol/L (k=2)`.
//!
//! ```text
//! amount      = number [spread] [unit] [percent-spread] [ "(" words ")" ]
//! spread      = ("±" | "+/-") number
//! words       = ("k=" number | "standard" | "tolerance" | "rectangular") ["," "dof=" number]
//! ```

use crate::quantity::{
    Decimal, DecimalError, Dimension, Measured, Spread, Uncertainty, Unit, UnitError,
};
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::Scalar;

/// Reads an amount of one dimension; everything wrong with it is reported.
pub(super) fn read<D: Dimension>(
    scalar: &Scalar,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Measured<D>> {
    let parts = Parts::of(scalar, diagnostics)?;
    let unit = parts.unit::<D>(scalar, diagnostics)?;
    let Some(measured) = Measured::new(parts.number, unit) else {
        diagnostics.push(wrong_unit::<D>(scalar.part(parts.unit_span), unit));
        return None;
    };
    Some(match parts.uncertainty {
        Some(uncertainty) => measured.with(uncertainty),
        None => measured,
    })
}

/// Reads an amount that is a part of a longer value; faults are reported at the whole value.
pub(super) fn read_text<D: Dimension>(
    text: &str,
    whole: &Scalar,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Measured<D>> {
    let mut inside = Vec::new();
    let mut node = crate::yaml::read(
        &format!("- {}", text.trim()),
        crate::yaml::Limits::BLOCK,
        &mut inside,
    )?;
    let measured = match &mut node.value {
        crate::yaml::Value::List(items) => items
            .first()?
            .as_text(&mut inside)
            .and_then(|scalar| read::<D>(scalar, &mut inside)),
        _ => None,
    };
    for fault in inside {
        let mut placed = Diagnostic::error(fault.rule(), whole.span(), fault.message());
        if let Some(expected) = fault.expected() {
            placed = placed.expecting(expected);
        }
        diagnostics.push(placed);
    }
    measured
}

/// The unit of an amount, whatever its dimension; nothing is reported.
pub(super) fn unit_of(scalar: &Scalar) -> Option<Unit> {
    let mut unheard = Vec::new();
    let parts = Parts::of(scalar, &mut unheard)?;
    let unit = scalar
        .text()
        .get(parts.unit_span.start()..parts.unit_span.end())?;
    Unit::parse(unit).ok()
}

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

/// An amount taken apart.
struct Parts {
    number: Decimal,
    uncertainty: Option<Uncertainty>,
    unit_span: Span,
}

impl Parts {
    fn of(scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<Self> {
        let text = scalar.text();
        let (body, words) = split_words(text);
        let (before, after) = split_sign(body);
        let number_end = number_length(before);
        let number = match Decimal::parse(before.get(..number_end)?) {
            Ok(number) => number,
            Err(error) => {
                let span = scalar.part(Span::new(0, number_end.max(1).min(text.len())));
                diagnostics.push(bad_number(span, before.get(..number_end)?, &error));
                return None;
            }
        };
        let mut unit_span = trimmed(text, number_end, before.len());
        let mut uncertainty = None;
        if let Some((start, after)) = after {
            let length = number_length(after);
            let stated = match Decimal::parse(after.get(..length)?) {
                Ok(stated) => stated,
                Err(error) => {
                    let span = scalar.part(Span::new(start, start + after.len()));
                    diagnostics.push(bad_number(span, after.get(..length)?, &error));
                    return None;
                }
            };
            let tail = trimmed(text, start + length, start + after.len());
            let tail_text = tail.of(text).unwrap_or_default();
            let relative = unit_span.start() < unit_span.end() && tail_text == "%";
            if !relative {
                if unit_span.start() < unit_span.end()
                    && tail.start() < tail.end()
                    && unit_span.of(text) != tail.of(text)
                {
                    diagnostics.push(
                        Diagnostic::error(
                            Rule::BadUncertainty,
                            scalar.part(tail),
                            "the uncertainty has another unit than the value",
                        )
                        .helped("write both in one unit: `0.0200 ± 0.0001 mol/L (k=2)`"),
                    );
                    return None;
                }
                if tail.start() < tail.end() {
                    unit_span = tail;
                }
            }
            let place = scalar.part(Span::new(start, start + after.len()));
            let (spread, degrees_of_freedom) = spread(words, place, diagnostics)?;
            if stated.is_negative() {
                diagnostics.push(Diagnostic::error(
                    Rule::BadUncertainty,
                    place,
                    "an uncertainty is not negative",
                ));
                return None;
            }
            uncertainty = Some(Uncertainty {
                stated,
                relative,
                spread,
                degrees_of_freedom,
            });
        } else if let Some(words) = words {
            let span = scalar.part(Span::new(body.len(), text.len()));
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadUncertainty,
                    span,
                    format!("`({words})` says how to take an uncertainty, but none is stated"),
                )
                .helped("write `value ± uncertainty unit (k=2)`"),
            );
            return None;
        }
        Some(Self {
            number,
            uncertainty,
            unit_span,
        })
    }

    fn unit<D: Dimension>(
        &self,
        scalar: &Scalar,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<Unit> {
        let text = self.unit_span.of(scalar.text()).unwrap_or_default();
        if text.is_empty() {
            if D::UNITS.contains(&Unit::One) {
                return Some(Unit::One);
            }
            diagnostics.push(
                Diagnostic::error(
                    Rule::MissingUnit,
                    scalar.span(),
                    format!("{} without a unit; a unit is never guessed", D::NAME),
                )
                .expecting(listed::<D>()),
            );
            return None;
        }
        let span = scalar.part(self.unit_span);
        match Unit::parse(text) {
            Ok(unit) => Some(unit),
            Err(UnitError::Refused { found, reason }) => {
                diagnostics.push(
                    Diagnostic::error(
                        Rule::RefusedUnit,
                        span,
                        format!("`{found}` is not accepted: {reason}"),
                    )
                    .expecting(listed::<D>()),
                );
                None
            }
            Err(UnitError::Unknown { found }) => {
                let symbols = D::UNITS.iter().map(|unit| unit.symbol());
                diagnostics.push(
                    Diagnostic::error(
                        Rule::UnknownUnit,
                        span,
                        format!("`{found}` is not a unit that is known here"),
                    )
                    .expecting(listed::<D>())
                    .did_you_mean(&found, symbols),
                );
                None
            }
        }
    }
}

/// The words in brackets at the end, if they speak of an uncertainty.
fn split_words(text: &str) -> (&str, Option<&str>) {
    let whole = text.trim_end();
    let inside = whole
        .strip_suffix(')')
        .and_then(|rest| rest.rsplit_once('('));
    match inside {
        Some((body, words)) if !words.contains('/') => (body, Some(words.trim())),
        _ => (whole, None),
    }
}

/// What stands before and after the sign ±, with the offset of the latter.
fn split_sign(body: &str) -> (&str, Option<(usize, &str)>) {
    for sign in ["±", "+/-", "+-"] {
        if let Some((before, after)) = body.split_once(sign) {
            let skipped = after.len() - after.trim_start().len();
            return (
                before,
                Some((before.len() + sign.len() + skipped, after.trim_start())),
            );
        }
    }
    (body, None)
}

/// A span without the blanks at its ends.
fn trimmed(text: &str, start: usize, end: usize) -> Span {
    let part = text.get(start..end).unwrap_or_default();
    let left = part.len() - part.trim_start().len();
    let right = part.trim_end().len();
    Span::new(start + left.min(right), start + right)
}

/// Bytes of the number at the front of a text, grouping and decimal commas included so that they can be reported.
fn number_length(text: &str) -> usize {
    let mut end = 0;
    let mut rest = text.char_indices().peekable();
    while let Some((at, c)) = rest.next() {
        let next = text.get(at + c.len_utf8()..).unwrap_or_default();
        let belongs = match c {
            '0'..='9' | '.' | ',' | '\'' | '_' => true,
            '+' | '-' | '−' | '–' => at == 0,
            'e' | 'E' => {
                end > 0
                    && next
                        .trim_start_matches(['+', '-', '−'])
                        .starts_with(|d: char| d.is_ascii_digit())
            }
            c if c.is_whitespace() => {
                next.starts_with(|d: char| d.is_ascii_digit()) || power_length(next).is_some()
            }
            '×' | 'x' | '·' | '*' => power_length(text.get(at..).unwrap_or_default()).is_some(),
            _ => false,
        };
        if !belongs {
            break;
        }
        end = at + c.len_utf8();
        if let Some(length) = power_length(text.get(at..).unwrap_or_default()) {
            return at + length;
        }
        if matches!(c, 'e' | 'E') {
            while let Some((at, d)) =
                rest.next_if(|(_, d)| d.is_ascii_digit() || matches!(d, '+' | '-' | '−'))
            {
                end = at + d.len_utf8();
            }
        }
    }
    end
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

fn spread(
    words: Option<&str>,
    place: Span,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<(Spread, Option<Decimal>)> {
    const HELP: &str = "add `(k=2)`, `(standard)`, `(tolerance)` or `(rectangular)` at the end";
    let Some(words) = words else {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadUncertainty,
                place,
                "a bare ± does not say what kind of uncertainty it is",
            )
            .helped(HELP),
        );
        return None;
    };
    let mut spread = None;
    let mut degrees_of_freedom = None;
    for word in words.split(',').map(str::trim) {
        let figure = |prefix: &str| {
            let rest = word.strip_prefix(prefix)?.trim_start();
            Decimal::parse(rest.strip_prefix('=')?)
                .ok()
                .filter(|figure| !figure.is_negative() && !figure.is_zero())
        };
        match word {
            "standard" => spread = Some(Spread::Standard),
            "tolerance" | "triangular" => spread = Some(Spread::Triangular),
            "rectangular" => spread = Some(Spread::Rectangular),
            _ => {
                if let Some(k) = figure("k") {
                    spread = Some(Spread::Expanded { k });
                } else if let Some(figure) = figure("dof") {
                    degrees_of_freedom = Some(figure);
                } else {
                    diagnostics.push(
                        Diagnostic::error(
                            Rule::BadUncertainty,
                            place,
                            format!("`{word}` is no kind of uncertainty"),
                        )
                        .helped(HELP),
                    );
                    return None;
                }
            }
        }
    }
    match spread {
        Some(spread) => Some((spread, degrees_of_freedom)),
        None => {
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadUncertainty,
                    place,
                    "the kind of uncertainty is missing",
                )
                .helped(HELP),
            );
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

fn wrong_unit<D: Dimension>(span: Span, unit: Unit) -> Diagnostic {
    if D::UNITS == [Unit::One, Unit::PartsPerMillion] {
        return Diagnostic::error(
            Rule::UnexpectedUnit,
            span,
            format!("`{unit}` after a number that has no unit"),
        );
    }
    Diagnostic::error(
        Rule::WrongUnit,
        span,
        format!("`{unit}` is not a unit of {}", spoken::<D>()),
    )
    .expecting(listed::<D>())
}

fn spoken<D: Dimension>() -> &'static str {
    D::NAME
        .strip_prefix("a ")
        .or_else(|| D::NAME.strip_prefix("an "))
        .unwrap_or(D::NAME)
}

fn listed<D: Dimension>() -> String {
    let symbols: Vec<&str> = D::UNITS
        .iter()
        .map(|unit| unit.symbol())
        .filter(|symbol| !symbol.is_empty())
        .collect();
    if symbols.is_empty() {
        return D::NAME.to_owned();
    }
    format!("{} in {}", D::NAME, symbols.join(", "))
}
