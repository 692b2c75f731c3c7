//! Rounding of the reported figure, once, by the rule that the notebook declares.

use crate::quantity::Decimal;
use std::cmp::Ordering;

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

    /// Rounds a decimal to a whole multiple of a step, such as the division of a scale: 123.454 in steps of 0.005 is 123.455.
    ///
    /// A tie goes to the even multiple or away from zero, by the rule. `None` where the step is not above zero, or where the digits
    /// outgrow what a decimal holds. The result has the decimal places of the step; a result of zero has no sign.
    pub fn decimal_to_multiple(self, value: Decimal, step: Decimal) -> Option<Decimal> {
        if step.is_zero() || step.is_negative() {
            return None;
        }
        let fine = value.exponent().min(step.exponent());
        let whole = |decimal: Decimal| {
            let power = u32::try_from(decimal.exponent().checked_sub(fine)?).ok()?;
            10_u128.checked_pow(power)?.checked_mul(decimal.digits())
        };
        let multiple = self.quotient(whole(value)?, whole(step)?);
        let digits = multiple.checked_mul(step.digits())?;
        Some(Decimal::new(
            value.is_negative() && digits != 0,
            digits,
            step.exponent(),
        ))
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
        self.quotient(digits, unit)
    }

    /// `digits / unit`, rounded to a whole number; `unit` is not zero.
    fn quotient(self, digits: u128, unit: u128) -> u128 {
        let (kept, rest) = (digits / unit, digits % unit);
        let up = match rest.cmp(&(unit - rest)) {
            Ordering::Greater => true,
            Ordering::Less => false,
            Ordering::Equal => self == Self::HalfUp || kept % 2 == 1,
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

    const EVEN: &[RoundingRule] = &[RoundingRule::HalfEven];
    const UP: &[RoundingRule] = &[RoundingRule::HalfUp];
    const BOTH: &[RoundingRule] = &[RoundingRule::HalfEven, RoundingRule::HalfUp];

    /// Published examples: value, step, result, the rules that must give it. Exact: decimal arithmetic.
    const PUBLISHED: [(&str, &str, &str, &[RoundingRule]); 43] = [
        // Rounding types of an Asian industrial data book (relates itself to ISO 31-0, IS 2, JIS Z 8401); read.
        ("123.55", "0.1", "123.6", EVEN),
        ("123.4", "1", "123", UP),
        ("123.5", "1", "124", UP),
        ("123.454", "0.01", "123.45", UP),
        ("123.455", "0.01", "123.46", UP),
        ("123.452", "0.005", "123.450", BOTH),
        ("123.454", "0.005", "123.455", BOTH),
        ("123.458", "0.005", "123.460", BOTH),
        ("123.325", "0.05", "123.30", EVEN), // printed as a tie that goes down
        ("123.326", "0.05", "123.35", BOTH),
        ("123.376", "0.05", "123.40", BOTH),
        // IS 2:1960, rules for rounding off; read.
        ("4.36", "1", "4", EVEN),
        ("2.355", "1", "2", EVEN),
        ("15.205", "0.1", "15.2", EVEN),
        ("9.625", "1", "10", EVEN),
        ("2.651", "0.1", "2.7", EVEN),
        ("0.3552", "0.01", "0.36", EVEN),
        ("12.545001", "0.01", "12.55", EVEN),
        // ISO 80000-1:2009, Annex B; recalled.
        ("12.223", "0.1", "12.2", BOTH),
        ("12.251", "0.1", "12.3", BOTH),
        ("12.275", "0.1", "12.3", BOTH),
        ("12.25", "0.1", "12.2", EVEN),
        ("12.35", "0.1", "12.4", EVEN),
        ("12.25", "0.1", "12.3", UP),
        ("12.35", "0.1", "12.4", UP),
        ("1223.3", "10", "1220", BOTH),
        ("1225.1", "10", "1230", BOTH),
        ("1225.0", "10", "1220", EVEN),
        ("1235.0", "10", "1240", EVEN),
        // arithmetic; recalled.
        ("1.2345", "0.001", "1.234", EVEN),
        // United States Pharmacopeia, General Notices, 7.20 Rounding rules; recalled.
        ("97.96", "0.1", "98.0", UP),
        ("97.92", "0.1", "97.9", UP),
        ("97.95", "0.1", "98.0", UP),
        ("101.55", "0.1", "101.6", UP),
        ("101.46", "0.1", "101.5", UP),
        ("101.45", "0.1", "101.5", UP),
        ("0.025", "0.01", "0.03", UP),
        ("0.015", "0.01", "0.02", UP),
        ("0.027", "0.01", "0.03", UP),
        ("3.5", "1", "4", UP),
        ("3.4", "1", "3", UP),
        ("2.5", "1", "3", UP),
        // arithmetic; ISO 80000-1 and ASTM E29 ask for one stage; recalled.
        ("1.2346", "0.01", "1.23", EVEN),
    ];

    #[test]
    fn published_examples_are_met() {
        for (value, step, expected, rules) in PUBLISHED {
            let decimal = Decimal::parse(value).unwrap();
            let step = Decimal::parse(step).unwrap();
            for rule in rules {
                let rounded = rule.decimal_to_multiple(decimal, step).unwrap();
                assert_eq!(rounded.to_string(), expected, "{value} {rule:?}");
                if let (1, Ok(places)) = (step.digits(), u8::try_from(step.decimal_places())) {
                    assert_eq!(rule.decimal_to_places(decimal, places), rounded, "{value}");
                }
            }
        }
    }

    #[test]
    fn a_step_must_be_above_zero() {
        let one = Decimal::whole(1);
        for step in ["0", "0.00", "-0.1"] {
            let step = Decimal::parse(step).unwrap();
            assert_eq!(RoundingRule::HalfUp.decimal_to_multiple(one, step), None);
        }
    }
}
