//! Scales and ticks.

use crate::quantity::{Decimal, RoundingRule};

/// A stretch of an axis in data.
#[derive(Clone, Copy, Debug)]
pub(super) struct Range {
    pub(super) low: f64,
    pub(super) high: f64,
}

/// A tick with its label.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Tick {
    pub(super) value: f64,
    pub(super) label: String,
}

/// Most ticks tried on an axis.
const MOST_TICKS: i64 = 60;

impl Range {
    /// The range of finite values, or `None` where there is none.
    pub(super) fn of(values: impl Iterator<Item = f64>) -> Option<Self> {
        values
            .filter(|value| value.is_finite())
            .fold(None, |range: Option<Self>, value| {
                Some(match range {
                    None => Self {
                        low: value,
                        high: value,
                    },
                    Some(range) => Self {
                        low: range.low.min(value),
                        high: range.high.max(value),
                    },
                })
            })
    }

    /// The same range extended to whole steps of its ticks; a range of no width gets one.
    pub(super) fn to_ticks(self, most: u32) -> Self {
        let wide = if self.high > self.low {
            self
        } else {
            let half = self.low.abs().max(1.0) * 0.5;
            Self {
                low: self.low - half,
                high: self.high + half,
            }
        };
        let (multiple, exponent) = wide.step(most);
        let step = Decimal::new(false, multiple, exponent).to_f64();
        let below = whole(wide.low / step, -1e-9, false);
        let above = whole(wide.high / step, 1e-9, true);
        Self {
            low: decimal(below, multiple, exponent).to_f64(),
            high: decimal(above, multiple, exponent).to_f64(),
        }
    }

    /// Ticks at multiples of 1, 2 or 5 times a power of ten.
    pub(super) fn ticks(self, most: u32) -> Vec<Tick> {
        let (multiple, exponent) = self.step(most);
        let step = Decimal::new(false, multiple, exponent).to_f64();
        let first = whole(self.low / step, -1e-9, true);
        let last = whole(self.high / step, 1e-9, false).min(first.saturating_add(MOST_TICKS));
        (first..=last)
            .map(|index| {
                let value = decimal(index, multiple, exponent);
                Tick {
                    value: value.to_f64(),
                    label: label(value, exponent),
                }
            })
            .collect()
    }

    /// Where a value lies, 0 at the low end and 1 at the high end.
    pub(super) fn share(self, value: f64) -> f64 {
        if self.high > self.low {
            ((value - self.low) / (self.high - self.low)).clamp(0.0, 1.0)
        } else {
            0.5
        }
    }

    pub(super) fn contains(self, value: f64) -> bool {
        value >= self.low && value <= self.high
    }

    /// The smallest step of the form 1, 2, 5 times a power of ten that needs at most so many intervals.
    fn step(self, most: u32) -> (u128, i32) {
        let width = self.high - self.low;
        for exponent in -15..15 {
            for multiple in [1, 2, 5] {
                let step = Decimal::new(false, multiple, exponent).to_f64();
                if width <= step * f64::from(most) * (1.0 + 1e-9) {
                    return (multiple, exponent);
                }
            }
        }
        (1, 15)
    }
}

/// The whole number at or above (or at or below) a ratio, where a ratio within the slack of a whole number is that number.
fn whole(ratio: f64, slack: f64, up: bool) -> i64 {
    let edge = if up {
        (ratio - slack.abs()).ceil()
    } else {
        (ratio + slack.abs()).floor()
    };
    RoundingRule::HalfEven
        .to_places(edge, 0)
        .parse()
        .unwrap_or(0)
}

fn decimal(index: i64, multiple: u128, exponent: i32) -> Decimal {
    let digits = u128::from(index.unsigned_abs()) * multiple;
    Decimal::new(index < 0, digits, exponent)
}

fn label(value: Decimal, exponent: i32) -> String {
    let places = u8::try_from(-exponent).unwrap_or(0);
    let text =
        crate::report::figures::plain(RoundingRule::HalfEven.decimal_to_places(value, places));
    text.replace('-', "−")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ticks_are_round_numbers_inside_the_range() {
        let labels = |low, high, most| -> Vec<String> {
            Range { low, high }
                .ticks(most)
                .into_iter()
                .map(|tick| tick.label)
                .collect()
        };
        assert_eq!(
            labels(0.0, 1.0, 5),
            ["0.0", "0.2", "0.4", "0.6", "0.8", "1.0"]
        );
        assert_eq!(
            labels(-0.03, 0.021, 6),
            ["−0.03", "−0.02", "−0.01", "0.00", "0.01", "0.02"]
        );
        assert_eq!(labels(0.0, 25.0, 6), ["0", "5", "10", "15", "20", "25"]);
    }

    #[test]
    fn a_range_ends_on_ticks() {
        let range = Range {
            low: 1.93,
            high: 12.2,
        }
        .to_ticks(7);
        assert_eq!((range.low, range.high), (0.0, 14.0));
        let flat = Range {
            low: 7.0,
            high: 7.0,
        }
        .to_ticks(5);
        assert!(flat.low < 7.0 && flat.high > 7.0);
    }
}
