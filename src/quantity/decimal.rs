//! A decimal as written: its digits, its exponent, and so its significant figures.

use std::fmt;

/// Largest number of digits that is kept.
const MOST_DIGITS: usize = 34;

/// Largest power of ten, up or down, that a written number may carry.
const LARGEST_EXPONENT: i32 = 300;

/// A finite decimal number with the digits it was written with: `0.050` has two significant figures and keeps them.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Decimal {
    negative: bool,
    digits: u128,
    exponent: i32,
}

/// Why a text is no decimal number.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum DecimalError {
    /// There is nothing.
    #[error("no number")]
    Empty,
    /// A comma stands where a point was meant; the corrected text is given.
    #[error("a decimal comma; write {corrected}")]
    DecimalComma {
        /// The same number with a point.
        corrected: String,
    },
    /// A comma that may be a decimal comma or may group thousands.
    #[error("a comma that can be read two ways; write {as_decimal} or {as_thousands}")]
    AmbiguousComma {
        /// The number if the comma was a decimal comma.
        as_decimal: String,
        /// The number if the comma grouped thousands.
        as_thousands: String,
    },
    /// Digits are grouped by spaces, commas or apostrophes.
    #[error("digits are grouped; write them without separators")]
    Grouped,
    /// Something in it is not part of a number.
    #[error("{found:?} is not part of a number")]
    NotANumber {
        /// The first character that does not belong.
        found: char,
    },
    /// It has more digits than any measurement.
    #[error("more than {MOST_DIGITS} digits")]
    TooManyDigits,
    /// Its exponent is beyond what is computed with.
    #[error("the exponent is beyond ±{LARGEST_EXPONENT}")]
    Exponent,
}

impl Decimal {
    /// A decimal from its parts: `±digits × 10^exponent`.
    pub fn new(negative: bool, digits: u128, exponent: i32) -> Self {
        Self {
            negative,
            digits,
            exponent,
        }
    }

    /// A whole number.
    pub fn whole(value: u32) -> Self {
        Self::new(false, u128::from(value), 0)
    }

    /// Reads a number as a laboratory writes it: `0.0500`, `-3`, `1.0e-7`, `2.5 × 10⁻³`, `2.5x10^-3`.
    ///
    /// # Errors
    /// [`DecimalError`] says what is wrong; a decimal comma is reported with the corrected text.
    pub fn parse(text: &str) -> Result<Self, DecimalError> {
        let text = with_ascii_signs(text.trim());
        if text.is_empty() {
            return Err(DecimalError::Empty);
        }
        let (mantissa, exponent) = split_exponent(&text)?;
        let (negative, mantissa) = match mantissa.strip_prefix('-') {
            Some(rest) => (true, rest),
            None => (false, mantissa.strip_prefix('+').unwrap_or(mantissa)),
        };
        let (digits, shift) = read_mantissa(mantissa, &text)?;
        let exponent = exponent - shift;
        if exponent.abs() > LARGEST_EXPONENT {
            return Err(DecimalError::Exponent);
        }
        Ok(Self::new(negative, digits, exponent))
    }

    /// The shortest decimal that reads back as this finite number; zero for anything that is not finite.
    pub fn shortest(value: f64) -> Self {
        let text = format!("{value:e}");
        let parts = text.split_once('e').and_then(|(mantissa, power)| {
            let power: i32 = power.parse().ok()?;
            let size = mantissa.trim_start_matches('-');
            let (digits, shift) = read_mantissa(size, size).ok()?;
            Some(Self::new(
                size.len() < mantissa.len(),
                digits,
                power - shift,
            ))
        });
        parts.unwrap_or(Self::new(false, 0, 0))
    }

    /// The nearest floating-point number, correctly rounded; dimensionless like the digits themselves.
    pub fn to_f64(self) -> f64 {
        let sign = if self.negative { "-" } else { "" };
        format!("{sign}{}e{}", self.digits, self.exponent)
            .parse()
            .unwrap_or(f64::NAN)
    }

    /// Whether there is a minus sign.
    pub fn is_negative(self) -> bool {
        self.negative
    }

    /// The digits as a whole number.
    pub fn digits(self) -> u128 {
        self.digits
    }

    /// The power of ten that the digits are multiplied by.
    pub fn exponent(self) -> i32 {
        self.exponent
    }

    /// Whether the value is zero.
    pub fn is_zero(self) -> bool {
        self.digits == 0
    }

    /// The same digits times a power of ten.
    #[must_use]
    pub fn scaled(self, power_of_ten: i32) -> Self {
        Self::new(
            self.negative,
            self.digits,
            self.exponent.saturating_add(power_of_ten),
        )
    }

    /// Significant figures as written; for zero, the number of decimal places, at least one.
    pub fn significant_figures(self) -> u32 {
        if self.digits == 0 {
            return self.decimal_places().max(1);
        }
        self.digits.ilog10() + 1
    }

    /// Digits after the decimal point.
    pub fn decimal_places(self) -> u32 {
        u32::try_from(-self.exponent).unwrap_or(0)
    }
}

impl fmt::Display for Decimal {
    /// Plain notation where that keeps the figures and is short, else `1.20e-7`; either form reads back as the same decimal.
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        let sign = if self.negative { "-" } else { "" };
        let digits = self.digits.to_string();
        let places = usize::try_from(-i64::from(self.exponent)).unwrap_or(0);
        if self.exponent > 0 || places > digits.len() + 5 {
            let (first, rest) = digits.split_at(1);
            let point = if rest.is_empty() { "" } else { "." };
            let power = i64::from(self.exponent) + i64::try_from(rest.len()).unwrap_or(0);
            return write!(formatter, "{sign}{first}{point}{rest}e{power}");
        }
        if places == 0 {
            return write!(formatter, "{sign}{digits}");
        }
        let padded = format!("{digits:0>width$}", width = places + 1);
        let (whole, fraction) = padded.split_at(padded.len() - places);
        write!(formatter, "{sign}{whole}.{fraction}")
    }
}

/// Unicode minus signs as ASCII; superscripts are left, since they may stand in an exponent only.
fn with_ascii_signs(text: &str) -> String {
    text.replace(['−', '–', '‐', '﹣', '－'], "-")
}

/// Splits `2.5×10^-3`, `2.5 × 10⁻³` or `2.5e-3` into mantissa and exponent.
fn split_exponent(text: &str) -> Result<(&str, i32), DecimalError> {
    let times = ['x', 'X', '×', '✕', '·', '⋅', '*'];
    if let (Some(sign), Some((mantissa, power))) = (
        text.chars().find(|c| times.contains(c)),
        text.split_once(times),
    ) {
        return Ok((mantissa.trim_end(), power_of_ten(power.trim_start(), sign)?));
    }
    match text.split_once(['e', 'E']) {
        Some((mantissa, power)) => Ok((mantissa, exponent_of(power)?)),
        None => Ok((text, 0)),
    }
}

/// The exponent of `10^-3`, `10⁻³` or `10-3`. Without sign, caret or superscript `103` may be one number, and is refused.
///
/// `sign` is the multiplication sign before it, which does not belong where nothing follows.
fn power_of_ten(text: &str, sign: char) -> Result<i32, DecimalError> {
    let found = |text: &str| DecimalError::NotANumber {
        found: text.chars().next().unwrap_or(sign),
    };
    let power = text.strip_prefix("10").ok_or_else(|| found(text))?;
    let plain: String = power.chars().map(plain_from_superscript).collect();
    if let Some(written) = plain.strip_prefix('^') {
        exponent_of(written)
    } else if plain != power || plain.starts_with(['-', '+']) {
        exponent_of(&plain)
    } else {
        Err(found(power))
    }
}

fn exponent_of(text: &str) -> Result<i32, DecimalError> {
    let text = text.trim();
    let size = text.strip_prefix(['-', '+']).unwrap_or(text);
    if let Some(found) = size.chars().find(|c| !c.is_ascii_digit()) {
        return Err(DecimalError::NotANumber { found });
    }
    if size.is_empty() {
        return Err(DecimalError::NotANumber { found: 'e' });
    }
    match text.parse::<i32>() {
        Ok(exponent) if exponent.abs() <= LARGEST_EXPONENT => Ok(exponent),
        _ => Err(DecimalError::Exponent),
    }
}

fn plain_from_superscript(c: char) -> char {
    match c {
        '⁻' => '-',
        '⁺' => '+',
        '⁰' => '0',
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁴' => '4',
        '⁵' => '5',
        '⁶' => '6',
        '⁷' => '7',
        '⁸' => '8',
        '⁹' => '9',
        other => other,
    }
}

/// The digits of `12.30` as 1230 with a shift of 2.
fn read_mantissa(mantissa: &str, whole_text: &str) -> Result<(u128, i32), DecimalError> {
    let mut digits: u128 = 0;
    let mut count = 0usize;
    let mut shift = None;
    for c in mantissa.chars() {
        match c {
            '0'..='9' => {
                count += 1;
                let leading = digits == 0 && c == '0';
                if !leading && digits.to_string().len() >= MOST_DIGITS {
                    return Err(DecimalError::TooManyDigits);
                }
                digits = digits * 10 + u128::from(c.to_digit(10).unwrap_or(0));
                shift = shift.map(|places: i32| places + 1);
            }
            '.' if shift.is_none() => shift = Some(0),
            ',' => return Err(comma(mantissa, whole_text)),
            ' ' | '\'' | '_' | '\u{a0}' | '\u{202f}' => return Err(DecimalError::Grouped),
            found => return Err(DecimalError::NotANumber { found }),
        }
    }
    if count == 0 {
        return Err(DecimalError::Empty);
    }
    Ok((digits, shift.unwrap_or(0)))
}

/// One comma and no point is a decimal comma, unless three digits after it could be a group; anything else is grouping.
fn comma(mantissa: &str, whole_text: &str) -> DecimalError {
    let Some((before, after)) = mantissa.split_once(',') else {
        return DecimalError::Grouped;
    };
    if after.contains([',', '.']) || before.contains('.') {
        return DecimalError::Grouped;
    }
    let as_decimal = whole_text.replacen(',', ".", 1);
    let group = after.len() == 3 && !before.starts_with('0') && (1..=3).contains(&before.len());
    if group {
        DecimalError::AmbiguousComma {
            as_decimal,
            as_thousands: whole_text.replacen(',', "", 1),
        }
    } else {
        DecimalError::DecimalComma {
            corrected: as_decimal,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_are_kept() {
        for (text, figures, places) in [
            ("0.050", 2, 3),
            ("0.0350", 3, 4),
            ("1.000", 4, 3),
            ("200", 3, 0),
            ("1.0e-7", 2, 8),
        ] {
            let decimal = Decimal::parse(text).unwrap();
            assert_eq!(decimal.significant_figures(), figures, "{text}");
            assert_eq!(decimal.decimal_places(), places, "{text}");
            assert_eq!(Decimal::parse(&decimal.to_string()), Ok(decimal), "{text}");
        }
    }

    #[test]
    fn forms_of_the_same_number_agree() {
        for text in [
            "0.0025",
            "2.5e-3",
            "2.5E-3",
            "2.5 × 10⁻³",
            "2.5x10^-3",
            "2.5·10-3",
        ] {
            assert_eq!(
                Decimal::parse(text).map(Decimal::to_f64),
                Ok(0.0025),
                "{text}"
            );
        }
        assert_eq!(Decimal::parse("−0.5").map(Decimal::to_f64), Ok(-0.5));
    }

    #[test]
    fn wrong_numbers_say_what_is_wrong() {
        assert_eq!(
            Decimal::parse("0,05"),
            Err(DecimalError::DecimalComma {
                corrected: "0.05".to_owned()
            })
        );
        assert_eq!(
            Decimal::parse("1,000"),
            Err(DecimalError::AmbiguousComma {
                as_decimal: "1.000".to_owned(),
                as_thousands: "1000".to_owned()
            })
        );
        assert_eq!(Decimal::parse("1,000,000"), Err(DecimalError::Grouped));
        assert_eq!(Decimal::parse("1 000"), Err(DecimalError::Grouped));
        assert_eq!(
            Decimal::parse("1.2.3"),
            Err(DecimalError::NotANumber { found: '.' })
        );
        assert_eq!(Decimal::parse("."), Err(DecimalError::Empty));
        assert_eq!(Decimal::parse("1e400"), Err(DecimalError::Exponent));
        assert_eq!(
            Decimal::parse(&"9".repeat(35)),
            Err(DecimalError::TooManyDigits)
        );
    }

    #[test]
    fn a_power_that_can_be_read_two_ways_is_no_power() {
        for text in ["10²", "2.5x103", "2.5×10", "2.5e", "2.5e1.5", "1·5", "⁻5"] {
            assert!(
                matches!(Decimal::parse(text), Err(DecimalError::NotANumber { .. })),
                "{text}"
            );
        }
    }

    #[test]
    fn the_character_that_is_named_was_written() {
        for text in ["x", "2.5*", "1·", "2.5×10"] {
            let Err(DecimalError::NotANumber { found }) = Decimal::parse(text) else {
                panic!("{text} was read");
            };
            assert!(text.contains(found), "{text}: {found}");
        }
    }

    #[test]
    fn shortest_reads_back() {
        for value in [0.1, -2.5e-9, 6.865, 1e22, f64::MIN_POSITIVE, 5e-324] {
            assert_eq!(Decimal::shortest(value).to_f64().to_bits(), value.to_bits());
        }
    }
}
