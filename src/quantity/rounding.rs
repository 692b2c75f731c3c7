//! Rounding of the reported figure, once, by the rule that the notebook declares.

use crate::quantity::Decimal;

/// What happens to a digit exactly half way.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RoundingRule {
    /// To the even neighbour (ASTM E29; ISO 80000-1, rule A; recalled).
    HalfEven,
    /// Away from zero (common practice of the pharmacopoeias).
    HalfUp,
}

impl RoundingRule {
    /// The word that a notebook uses for the rule.
    pub fn name(self) -> &'static str {
        match self {
            Self::HalfEven => "half-even",
            Self::HalfUp => "half-up",
        }
    }

    /// Rounds a decimal to a number of decimal places; a decimal with fewer keeps its value and gains zeros.
    ///
    /// A result of zero has no sign.
    pub fn decimal_to_places(self, value: Decimal, places: u8) -> Decimal {
        let target = -i32::from(places);
        let drop = target - value.exponent();
        if drop <= 0 {
            let zeros = u32::try_from(-drop).unwrap_or(0);
            return match 10_u128
                .checked_pow(zeros)
                .and_then(|p| value.digits().checked_mul(p))
            {
                Some(digits) => Decimal::new(value.is_negative() && digits != 0, digits, target),
                None => value,
            };
        }
        let digits = self.drop_digits(value.digits(), u32::try_from(drop).unwrap_or(u32::MAX));
        Decimal::new(value.is_negative() && digits != 0, digits, target)
    }

    /// Rounds a finite number, taken as its shortest decimal, to a number of decimal places.
    pub fn to_places(self, value: f64, places: u8) -> String {
        if !value.is_finite() {
            return value.to_string();
        }
        self.decimal_to_places(Decimal::shortest(value), places)
            .to_string()
    }

    /// Rounds a finite number, taken as its shortest decimal, to a number of significant figures.
    pub fn to_figures(self, value: f64, figures: u8) -> Decimal {
        let written = Decimal::shortest(value);
        if written.is_zero() {
            return Decimal::new(false, 0, 0);
        }
        let wanted = u32::from(figures.max(1));
        let have = written.significant_figures();
        if have <= wanted {
            let zeros = wanted - have;
            let digits = written.digits() * 10_u128.pow(zeros.min(20));
            let exponent = written.exponent() - i32::try_from(zeros.min(20)).unwrap_or(0);
            return Decimal::new(written.is_negative(), digits, exponent);
        }
        let drop = have - wanted;
        let digits = self.drop_digits(written.digits(), drop);
        let exponent = written.exponent() + i32::try_from(drop).unwrap_or(0);
        if digits >= 10_u128.pow(wanted) {
            // 9.99 became 10.0: the last zero is one figure too many.
            return Decimal::new(written.is_negative(), digits / 10, exponent + 1);
        }
        Decimal::new(written.is_negative(), digits, exponent)
    }

    fn drop_digits(self, digits: u128, count: u32) -> u128 {
        let Some(unit) = 10_u128.checked_pow(count) else {
            return 0;
        };
        let (kept, rest) = (digits / unit, digits % unit);
        let half = unit / 2;
        let up = rest > half
            || rest == half
                && match self {
                    Self::HalfUp => true,
                    Self::HalfEven => kept % 2 == 1,
                };
        kept + u128::from(up)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Every row: value, places, half-even, half-up. The rules are those of ASTM E29 and ISO 80000-1 (recalled); rows ours, by hand.
    const ROWS: [(&str, u8, &str, &str); 10] = [
        ("7.125", 2, "7.12", "7.13"),
        ("7.135", 2, "7.14", "7.14"),
        ("7.1251", 2, "7.13", "7.13"),
        ("7.1249", 2, "7.12", "7.12"),
        ("-0.125", 2, "-0.12", "-0.13"),
        ("0.005", 2, "0.00", "0.01"),
        ("-0.004", 2, "0.00", "0.00"),
        ("2.5", 0, "2", "3"),
        ("7.2", 2, "7.20", "7.20"),
        ("9.995", 2, "10.00", "10.00"),
    ];

    #[test]
    fn halves_go_where_the_rule_says() {
        for (value, places, even, up) in ROWS {
            let value = Decimal::parse(value).unwrap();
            let rounded = RoundingRule::HalfEven.decimal_to_places(value, places);
            assert_eq!(rounded.to_string(), even, "{value}");
            let rounded = RoundingRule::HalfUp.decimal_to_places(value, places);
            assert_eq!(rounded.to_string(), up, "{value}");
        }
    }

    #[test]
    fn figures_are_counted() {
        for (value, figures, expected) in [
            (0.028_114, 4, "0.02811"),
            (9.996, 3, "10.0"),
            (0.1, 3, "0.100"),
            (123_456.0, 3, "1.23e5"),
        ] {
            let rounded = RoundingRule::HalfEven.to_figures(value, figures);
            assert_eq!(rounded.to_string(), expected);
        }
    }
}
