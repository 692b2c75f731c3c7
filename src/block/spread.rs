//! What stands after the sign ±, and the words in brackets that say how to take it.

use crate::block::amount::Accepted;
use crate::block::figure;
use crate::block::piece::{Piece, trimmed};
use crate::quantity::{Decimal, Spread, Uncertainty, Unit};
use crate::text::{Diagnostic, Rule, Span};

const HELP: &str = "add `(k=2)`, `(standard)`, `(tolerance)` or `(rectangular)` at the end";

/// An uncertainty as it stands in a piece; spans are those of the piece's text.
#[derive(Clone, Copy, Debug)]
pub(super) struct Stated<'s> {
    figure: Decimal,
    /// From the sign to the unit.
    whole: Span,
    /// What follows the figure, empty where nothing does.
    pub(super) unit: Span,
    words: Option<&'s str>,
    words_at: usize,
}

impl<'s> Stated<'s> {
    /// What stands between the sign and `end`.
    pub(super) fn of(
        piece: Piece<'s>,
        sign: Span,
        end: usize,
        words: Option<&'s str>,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<Self> {
        let text = piece.text();
        let start = trimmed(text, sign.end(), end).start();
        let (figure, length) = figure::leading(piece, start, end, diagnostics)?;
        let whole = trimmed(text, sign.start(), end);
        if figure.is_negative() {
            diagnostics.push(Diagnostic::error(
                Rule::BadUncertainty,
                piece.place(whole),
                "an uncertainty is not negative",
            ));
            return None;
        }
        Some(Self {
            figure,
            whole,
            unit: trimmed(text, start + length, end),
            words,
            words_at: end + 1,
        })
    }

    /// The uncertainty, for a value with its unit at `value_unit`.
    pub(super) fn read(
        self,
        piece: Piece<'_>,
        value_unit: Span,
        accepted: Accepted,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<Uncertainty> {
        let relative = self.relative(piece, value_unit, accepted, diagnostics);
        let kind = self.kind(piece, diagnostics);
        let (spread, degrees_of_freedom) = kind?;
        Some(Uncertainty {
            stated: self.figure,
            relative: relative?,
            spread,
            degrees_of_freedom,
        })
    }

    /// Whether the figure is a share of the value.
    fn relative(
        self,
        piece: Piece<'_>,
        value_unit: Span,
        accepted: Accepted,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<bool> {
        let text = piece.text();
        let own = self.unit.of(text).unwrap_or_default();
        let value = value_unit.of(text).unwrap_or_default();
        let plain = accepted.units == [Unit::One];
        if own == "%" && (plain || (value_unit != self.unit && !value.starts_with('%'))) {
            if accepted.units.contains(&Unit::Celsius) {
                diagnostics.push(
                    Diagnostic::error(
                        Rule::BadUncertainty,
                        piece.place(self.whole),
                        "a share of a temperature depends on its zero",
                    )
                    .helped("write `25.0 ± 0.5 °C (k=2)`"),
                );
                return None;
            }
            return Some(true);
        }
        if own.is_empty() || value_unit == self.unit {
            return Some(false);
        }
        if value.starts_with('%') && own.starts_with('%') {
            let number = text.get(..self.whole.start()).unwrap_or_default();
            let number = number.trim().trim_end_matches(value).trim();
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadUncertainty,
                    piece.place(self.whole),
                    "after a percentage, `%` may mean points or a share of the value",
                )
                .helped(format!(
                    "for points write `{number} ± {} {value}`; a share has to be worked out",
                    self.figure
                )),
            );
            return None;
        }
        if Unit::parse(own) != Unit::parse(value) {
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadUncertainty,
                    piece.place(self.unit),
                    "the uncertainty has another unit than the value",
                )
                .helped("write both in one unit: `0.0200 ± 0.0001 mol/L (k=2)`"),
            );
            return None;
        }
        Some(false)
    }

    /// What the words in brackets say.
    fn kind(
        self,
        piece: Piece<'_>,
        diagnostics: &mut Vec<Diagnostic>,
    ) -> Option<(Spread, Option<Decimal>)> {
        let Some(words) = self.words else {
            diagnostics.push(
                Diagnostic::error(
                    Rule::BadUncertainty,
                    piece.place(self.whole),
                    "a bare ± does not say what kind of uncertainty it is",
                )
                .helped(HELP),
            );
            return None;
        };
        let place = piece.place(Span::new(self.words_at, self.words_at + words.len()));
        let mut fault = |message: String| {
            diagnostics.push(Diagnostic::error(Rule::BadUncertainty, place, message).helped(HELP));
        };
        let mut spread = None;
        let mut degrees_of_freedom = None;
        for word in words.split(',').map(str::trim) {
            if let Some(kind) = kind(word) {
                if spread.replace(kind).is_some() {
                    fault("two kinds of uncertainty are named".to_owned());
                    return None;
                }
            } else if let Some(figure) = setting(word, "dof") {
                degrees_of_freedom = Some(figure);
            } else {
                fault(format!("`{word}` is no kind of uncertainty"));
                return None;
            }
        }
        if spread.is_none() {
            fault("the kind of uncertainty is missing".to_owned());
        }
        Some((spread?, degrees_of_freedom))
    }
}

/// The kind that a word names.
fn kind(word: &str) -> Option<Spread> {
    match word {
        "standard" => Some(Spread::Standard),
        "tolerance" | "triangular" => Some(Spread::Triangular),
        "rectangular" => Some(Spread::Rectangular),
        "standard deviation of the mean" => Some(Spread::Replicates),
        _ => setting(word, "k").map(|k| Spread::Expanded { k }),
    }
}

/// `k=2`: the figure, which is more than zero.
fn setting(word: &str, name: &str) -> Option<Decimal> {
    let figure = word.strip_prefix(name)?.trim_start().strip_prefix('=')?;
    Decimal::parse(figure)
        .ok()
        .filter(|figure| !figure.is_negative() && !figure.is_zero())
}

/// The words in brackets at the end, if they speak of an uncertainty, and what stands before.
pub(super) fn split_words(text: &str) -> (&str, Option<&str>) {
    let whole = text.trim_end();
    let inside = whole
        .strip_suffix(')')
        .and_then(|rest| rest.rsplit_once('('));
    match inside {
        Some((body, words)) if !words.contains('/') => (body, Some(words)),
        _ => (whole, None),
    }
}

/// Where the sign stands.
pub(super) fn sign(body: &str) -> Option<Span> {
    ["±", "+/-", "+-"]
        .iter()
        .find_map(|sign| body.find(sign).map(|at| Span::new(at, at + sign.len())))
}
