//! Numbers as a laboratory reads them: rounded once, by the notebook's rule, with real minus signs and powers of ten.

use crate::problem::Reporting;
use crate::quantity::{Decimal, RoundingRule};

/// Largest power of ten of the leading digit that is still written in plain notation, up and down.
const PLAIN: std::ops::RangeInclusive<i32> = -4..=5;

/// How the figures of one result are given.
#[derive(Clone, Copy, Debug)]
pub(super) struct Figures {
    reporting: Reporting,
}

impl Figures {
    pub(super) fn new(reporting: Reporting) -> Self {
        Self { reporting }
    }

    /// Significant figures of concentrations, masses and volumes, as declared.
    pub(super) fn significant(self) -> u8 {
        self.reporting.significant_figures.clamp(1, 15)
    }

    /// A pH, to the declared decimal places.
    pub(super) fn ph(self, value: f64) -> String {
        self.places(value, self.reporting.ph_decimals)
    }

    /// A shift of pH, with its sign, to one place more than the pH itself, so that small costs stay visible.
    pub(super) fn shift(self, value: f64) -> String {
        let places = self.reporting.ph_decimals.saturating_add(1);
        let text = self.places(value, places);
        let positive = text.chars().any(|c| ('1'..='9').contains(&c)) && !text.starts_with('−');
        if positive { format!("+{text}") } else { text }
    }

    /// An expanded uncertainty of a pH: rounded up, never down, to the decimal places of the pH itself, so that both end
    /// in the same place (common practice). An uncertainty below a tenth of that place keeps one place more instead of growing tenfold.
    pub(super) fn uncertainty(self, value: f64) -> String {
        let places = self.reporting.ph_decimals;
        let wanted = 4;
        // Four figures first: 0.030000000001 is 0.03, not 0.04.
        let short = self.reporting.rounding.to_figures(value, wanted);
        let up = rounded_up(short, places);
        let tenfold = short.to_f64() * 10.0 < up.to_f64();
        pretty(if tenfold {
            rounded_up(short, places.saturating_add(1))
        } else {
            up
        })
    }

    /// A number to a fixed number of decimal places.
    pub(super) fn places(self, value: f64, places: u8) -> String {
        minus(&self.reporting.rounding.to_places(value, places))
    }

    /// The same as an exact decimal, for working that is added up by hand.
    pub(super) fn decimal(self, value: f64, places: u8) -> Decimal {
        self.reporting
            .rounding
            .decimal_to_places(Decimal::shortest(value), places)
    }

    /// The same as a decimal, to a number of significant figures.
    pub(super) fn to_figures(self, value: f64, figures: u8) -> Decimal {
        self.reporting.rounding.to_figures(value, figures)
    }

    /// A number to a number of significant figures, in powers of ten where plain notation would be long or would hide figures.
    pub(super) fn figures(self, value: f64, figures: u8) -> String {
        if !value.is_finite() {
            return value.to_string();
        }
        pretty(self.reporting.rounding.to_figures(value, figures))
    }

    /// A share of 1 as a percentage: one decimal place, or one figure where that would show nothing.
    pub(super) fn percent(self, share: f64) -> String {
        let percent = share * 100.0;
        let text = if percent.abs() >= 0.1 || percent == 0.0 {
            self.places(percent, 1)
        } else {
            self.figures(percent, 1)
        };
        format!("{text} %")
    }

    /// A value and its standard error: the error to two figures, the value to the same place.
    pub(super) fn with_error(self, value: f64, error: f64) -> (String, String) {
        let short = self.reporting.rounding.to_figures(error, 2);
        let places = u8::try_from(short.decimal_places()).unwrap_or(15).min(15);
        if error.is_finite() && error > 0.0 && short.exponent() <= 0 {
            (self.places(value, places), self.places(error, places))
        } else {
            (
                self.figures(value, self.significant()),
                self.figures(error, 2),
            )
        }
    }
}

/// Every digit of a number, as the shortest decimal that reads back as the same number.
pub(super) fn unrounded(value: f64) -> String {
    if value.is_finite() {
        let shortest = Decimal::shortest(value);
        // 500 is shortest as 5e2; a number with every digit may show its zeros.
        let zeros = u32::try_from(shortest.exponent()).unwrap_or(0);
        let whole = 10_u128
            .checked_pow(zeros)
            .and_then(|power| shortest.digits().checked_mul(power))
            .filter(|digits| zeros > 0 && *digits < 1_000_000);
        pretty(whole.map_or(shortest, |digits| {
            Decimal::new(shortest.is_negative(), digits, 0)
        }))
    } else {
        value.to_string()
    }
}

/// A number of at most ten figures without the zeros at its end: what 0.1 + 0.2 is meant to be.
pub(super) fn short(value: f64) -> String {
    let rounded = RoundingRule::HalfEven.to_figures(value, 10).to_f64();
    unrounded(rounded)
}

/// A decimal in plain notation, or with a power of ten in superscripts.
pub(super) fn pretty(decimal: Decimal) -> String {
    if decimal.is_zero() {
        return minus(&decimal.to_string());
    }
    let digits = decimal.digits().to_string();
    let count = i32::try_from(digits.len()).unwrap_or(i32::MAX);
    let leading = decimal.exponent().saturating_add(count - 1);
    if PLAIN.contains(&leading) && decimal.exponent() <= 0 {
        return minus(&plain(decimal));
    }
    let sign = if decimal.is_negative() { "−" } else { "" };
    let mut characters = digits.chars();
    let first = characters.next().unwrap_or('0');
    let rest: String = characters.collect();
    let point = if rest.is_empty() { "" } else { "." };
    format!(
        "{sign}{first}{point}{rest} × 10{}",
        superscript(&leading.to_string())
    )
}

/// A decimal with no positive exponent, without power of ten.
pub(super) fn plain(decimal: Decimal) -> String {
    let places = usize::try_from(decimal.decimal_places()).unwrap_or(0);
    let sign = if decimal.is_negative() { "-" } else { "" };
    let digits = format!("{:0>width$}", decimal.digits(), width = places + 1);
    let whole = digits.chars().count() - places;
    let point = if places == 0 { "" } else { "." };
    let integer: String = digits.chars().take(whole).collect();
    let fraction: String = digits.chars().skip(whole).collect();
    format!("{sign}{integer}{point}{fraction}")
}

/// Digits and signs as superscripts: `-6` is `⁻⁶`.
pub(super) fn superscript(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            '0' => '⁰',
            '1' => '¹',
            '2' => '²',
            '3' => '³',
            '4' => '⁴',
            '5' => '⁵',
            '6' => '⁶',
            '7' => '⁷',
            '8' => '⁸',
            '9' => '⁹',
            '-' | '−' => '⁻',
            '+' => '⁺',
            other => other,
        })
        .collect()
}

/// A number as subscript, for `pK₁`.
pub(super) fn subscript(number: usize) -> String {
    number
        .to_string()
        .chars()
        .filter_map(|c| c.to_digit(10))
        .filter_map(|digit| char::from_u32(0x2080 + digit))
        .collect()
}

fn minus(text: &str) -> String {
    text.replace('-', "−")
}

/// The smallest decimal with so many places that is not below a positive one.
fn rounded_up(value: Decimal, places: u8) -> Decimal {
    let target = -i32::from(places);
    let drop = u32::try_from(target - value.exponent()).unwrap_or(0);
    if drop == 0 {
        let zeros = u32::try_from(value.exponent() - target).unwrap_or(0);
        let digits = 10_u128
            .checked_pow(zeros)
            .and_then(|power| value.digits().checked_mul(power));
        return digits.map_or(value, |digits| Decimal::new(false, digits, target));
    }
    let digits = match 10_u128.checked_pow(drop) {
        Some(unit) => value.digits().div_ceil(unit),
        None => u128::from(!value.is_zero()),
    };
    Decimal::new(false, digits, target)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn figures() -> Figures {
        Figures::new(Reporting {
            ph_decimals: 2,
            significant_figures: 4,
            rounding: RoundingRule::HalfEven,
        })
    }

    #[test]
    fn an_uncertainty_is_never_rounded_down() {
        for (value, expected) in [
            (0.021, "0.03"),
            (0.03, "0.03"),
            (0.030_000_000_001, "0.03"),
            (0.0301, "0.04"),
            (0.0042, "0.01"),
            (0.0004, "0.001"),
            (0.25, "0.25"),
            (1.0, "1.00"),
        ] {
            assert_eq!(figures().uncertainty(value), expected, "{value}");
        }
    }

    #[test]
    fn small_and_large_numbers_have_powers_of_ten() {
        for (value, expected) in [
            (0.028_114, "0.02811"),
            (2.8e-6, "2.800 × 10⁻⁶"),
            (-1.74e-12, "−1.740 × 10⁻¹²"),
            (0.000_123_4, "0.0001234"),
            (123_456.0, "1.235 × 10⁵"),
            (1.0, "1.000"),
        ] {
            assert_eq!(figures().figures(value, 4), expected);
        }
        assert_eq!(figures().figures(0.0, 4), "0");
    }

    #[test]
    fn shares_stay_visible() {
        for (share, expected) in [
            (0.803, "80.3 %"),
            (0.0001, "0.01 %"),
            (8.1e-9, "8 × 10⁻⁷ %"),
            (0.0, "0.0 %"),
        ] {
            assert_eq!(figures().percent(share), expected);
        }
    }

    #[test]
    fn whole_numbers_keep_their_zeros() {
        for (value, expected) in [
            (500.0, "500"),
            (4.0, "4"),
            (0.1 + 0.2, "0.3"),
            (-20.0, "−20"),
        ] {
            assert_eq!(short(value), expected);
        }
        assert_eq!(unrounded(1e7), "1 × 10⁷");
    }

    #[test]
    fn a_shift_shows_its_sign() {
        assert_eq!(figures().shift(0.0471), "+0.047");
        assert_eq!(figures().shift(-0.0471), "−0.047");
        assert_eq!(figures().shift(-0.000_01), "0.000");
    }

    #[test]
    fn a_fitted_value_ends_where_its_error_ends() {
        let (value, error) = figures().with_error(0.031_982_4, 0.000_021_3);
        assert_eq!((value.as_str(), error.as_str()), ("0.031982", "0.000021"));
    }
}
