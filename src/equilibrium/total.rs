//! Totals as double-double numbers, so that what cancels on paper cancels here.
//!
//! The reference level of the proton balance is formed as a difference of totals. In plain doubles 0.1 + 0.2 - 0.3 leaves 6e-17, which at an
//! equivalence point of dilute solutions is a pH error of 1e-9; here it leaves nothing.

use std::ops::{Add, Div, Mul, Neg, Sub};

/// An unevaluated sum of two doubles, about 32 significant digits.
///
/// Source of the sums and products: Dekker, T. J. (1971), Numer. Math. 18, 224; recalled.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Total {
    high: f64,
    low: f64,
}

impl Total {
    /// Zero.
    pub const ZERO: Self = Self {
        high: 0.0,
        low: 0.0,
    };

    /// The double itself.
    pub fn from_f64(value: f64) -> Self {
        Self {
            high: value,
            low: 0.0,
        }
    }

    /// `±digits × 10^exponent`, to about 32 digits.
    pub fn from_decimal(negative: bool, digits: u128, exponent: i32) -> Self {
        const CHUNK: u128 = 1_000_000_000_000_000;
        let mut value = Self::ZERO;
        let mut parts = [0_u128; 3];
        let mut rest = digits;
        for part in &mut parts {
            *part = rest % CHUNK;
            rest /= CHUNK;
        }
        for part in parts.iter().rev() {
            // Each part has at most 15 digits and is exact as a double.
            let part = u64::try_from(*part).unwrap_or(0);
            let [high, low] = [part >> 32, part & 0xffff_ffff]
                .map(|half| f64::from(u32::try_from(half).unwrap_or(0)));
            value = value * Self::from_f64(1e15) + Self::from_f64(high * 4_294_967_296.0 + low);
        }
        let power = power_of_ten(exponent.unsigned_abs());
        let scaled = if exponent < 0 {
            value / power
        } else {
            value * power
        };
        if negative { -scaled } else { scaled }
    }

    /// The nearest double, in the unit of the total.
    pub fn to_f64(self) -> f64 {
        self.high + self.low
    }

    /// Whether it is exactly zero.
    pub fn is_zero(self) -> bool {
        self.high == 0.0 && self.low == 0.0
    }
}

fn power_of_ten(exponent: u32) -> Total {
    let mut result = Total::from_f64(1.0);
    let mut base = Total::from_f64(10.0);
    let mut rest = exponent;
    while rest > 0 {
        if rest % 2 == 1 {
            result = result * base;
        }
        base = base * base;
        rest /= 2;
    }
    result
}

/// Exact sum of two doubles as a double and its error.
#[inline]
fn two_sum(a: f64, b: f64) -> Total {
    let high = a + b;
    let shadow = high - a;
    Total {
        high,
        low: (a - (high - shadow)) + (b - shadow),
    }
}

/// Exact product of two doubles as a double and its error.
#[inline]
fn two_product(a: f64, b: f64) -> Total {
    let high = a * b;
    let (a_high, a_low) = split(a);
    let (b_high, b_low) = split(b);
    Total {
        high,
        low: ((a_high * b_high - high) + a_high * b_low + a_low * b_high) + a_low * b_low,
    }
}

/// A double as two halves of 26 bits whose products are exact.
#[inline]
fn split(a: f64) -> (f64, f64) {
    let shifted = 134_217_729.0 * a;
    let high = shifted - (shifted - a);
    (high, a - high)
}

/// Renormalises a pair whose first part is the larger.
#[inline]
fn quick(high: f64, low: f64) -> Total {
    let sum = high + low;
    Total {
        high: sum,
        low: low - (sum - high),
    }
}

impl Add for Total {
    type Output = Self;
    #[inline]
    fn add(self, other: Self) -> Self {
        let sum = two_sum(self.high, other.high);
        let low = two_sum(self.low, other.low);
        let first = quick(sum.high, sum.low + low.high);
        quick(first.high, first.low + low.low)
    }
}

impl Neg for Total {
    type Output = Self;
    #[inline]
    fn neg(self) -> Self {
        Self {
            high: -self.high,
            low: -self.low,
        }
    }
}

impl Sub for Total {
    type Output = Self;
    #[inline]
    fn sub(self, other: Self) -> Self {
        self + -other
    }
}

impl Mul for Total {
    type Output = Self;
    #[inline]
    fn mul(self, other: Self) -> Self {
        let product = two_product(self.high, other.high);
        quick(
            product.high,
            product.low + (self.high * other.low + self.low * other.high),
        )
    }
}

impl Mul<f64> for Total {
    type Output = Self;
    #[inline]
    fn mul(self, factor: f64) -> Self {
        let product = two_product(self.high, factor);
        quick(product.high, product.low + self.low * factor)
    }
}

impl Div for Total {
    type Output = Self;
    fn div(self, other: Self) -> Self {
        let first = self.high / other.high;
        let rest = self - other * first;
        let second = rest.high / other.high;
        let rest = rest - other * second;
        let third = rest.high / other.high;
        quick(first, second) + Self::from_f64(third)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn decimal(digits: u128, exponent: i32) -> Total {
        Total::from_decimal(false, digits, exponent)
    }

    #[test]
    fn what_cancels_on_paper_cancels_here() {
        let left = decimal(1, -1) + decimal(2, -1) - decimal(3, -1);
        assert!(left.to_f64().abs() < 1e-32, "{left:?}");
        let left = decimal(2500, -5) * decimal(1000, -4) - decimal(25, -4);
        assert!(left.to_f64().abs() < 1e-34, "{left:?}");
    }

    #[test]
    fn a_decimal_is_its_nearest_double_and_more() {
        for (digits, exponent, value) in [
            (35, -4, 0.0035),
            (123_456_789_012_345_678, -20, 0.001_234_567_890_123_456_8),
        ] {
            assert!((decimal(digits, exponent).to_f64() - value).abs() <= f64::EPSILON * value);
        }
        let third = Total::from_f64(1.0) / Total::from_f64(3.0);
        let left = third * 3.0 - Total::from_f64(1.0);
        assert!(left.to_f64().abs() < 1e-31);
    }
}
