//! A value with its uncertainty, as stated.

use crate::quantity::{Decimal, Dimension, Number, RoundingRule, Temperature, Unit};
use std::fmt;
use std::marker::PhantomData;

/// What the figure after ± means.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Spread {
    /// An expanded uncertainty with its coverage factor; divided by k.
    Expanded {
        /// Coverage factor.
        k: Decimal,
    },
    /// A standard uncertainty.
    Standard,
    /// Half width of a triangular distribution, for volumetric glassware; divided by √6.
    ///
    /// Source: EURACHEM/CITAC Guide CG 4, Quantifying Uncertainty in Analytical Measurement, 3rd ed. (2012), example A1; recalled.
    Triangular,
    /// Half width of a rectangular distribution; divided by √3.
    ///
    /// Source: JCGM 100:2008, 4.3.7; recalled.
    Rectangular,
    /// Standard deviation of the mean of replicates.
    Replicates,
}

/// An uncertainty as stated.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Uncertainty {
    /// The figure after ±.
    pub stated: Decimal,
    /// Whether the figure is a percentage of the value.
    pub relative: bool,
    /// What it means.
    pub spread: Spread,
    /// Degrees of freedom, where given.
    pub degrees_of_freedom: Option<Decimal>,
}

impl Uncertainty {
    /// The divisor that makes a standard uncertainty of the stated figure; dimensionless number.
    pub fn divisor(&self) -> f64 {
        match self.spread {
            Spread::Expanded { k } => k.to_f64(),
            Spread::Standard | Spread::Replicates => 1.0,
            Spread::Triangular => 6.0_f64.sqrt(),
            Spread::Rectangular => 3.0_f64.sqrt(),
        }
    }

    /// The word in brackets: `k=2`, `tolerance`, ...
    fn word(&self) -> String {
        let word = match self.spread {
            Spread::Expanded { k } => format!("k={k}"),
            Spread::Standard => "standard".to_owned(),
            Spread::Triangular => "tolerance".to_owned(),
            Spread::Rectangular => "rectangular".to_owned(),
            Spread::Replicates => "standard deviation of the mean".to_owned(),
        };
        match self.degrees_of_freedom {
            Some(dof) => format!("{word}, dof={dof}"),
            None => word,
        }
    }
}

/// A value of one dimension as it was written: digits, unit, uncertainty.
#[derive(Clone, Copy, Debug, PartialEq)]
#[expect(
    clippy::partial_pub_fields,
    reason = "the marker carries the dimension and nothing to read"
)]
pub struct Measured<D> {
    /// The digits.
    pub decimal: Decimal,
    /// The unit.
    pub unit: Unit,
    /// The uncertainty, if stated.
    pub uncertainty: Option<Uncertainty>,
    dimension: PhantomData<D>,
}

impl<D: Dimension> Measured<D> {
    /// A value without uncertainty, or `None` where the unit is not one of the dimension's.
    pub fn new(decimal: Decimal, unit: Unit) -> Option<Self> {
        D::UNITS.contains(&unit).then_some(Self {
            decimal,
            unit,
            uncertainty: None,
            dimension: PhantomData,
        })
    }

    /// The same value with an uncertainty.
    #[must_use]
    pub fn with(mut self, uncertainty: Uncertainty) -> Self {
        self.uncertainty = Some(uncertainty);
        self
    }

    /// The value in its dimension.
    pub fn value(&self) -> D {
        D::from_base(self.unit.to_base(self.decimal))
    }

    /// The exact decimal in base units, where the unit is a power of ten of the base unit.
    pub fn exact(&self) -> Option<Decimal> {
        self.unit.exact_in_base(self.decimal)
    }

    /// Standard uncertainty as a number of base units, 0 where none was stated.
    pub fn standard_uncertainty(&self) -> f64 {
        self.uncertainty.map_or(0.0, |uncertainty| {
            let half = if uncertainty.relative {
                uncertainty.stated.to_f64() / 100.0 * self.value().base().abs()
            } else {
                self.unit.difference_to_base(uncertainty.stated)
            };
            half / uncertainty.divisor()
        })
    }

    /// Degrees of freedom of the uncertainty, a dimensionless number, where given.
    pub fn degrees_of_freedom(&self) -> Option<f64> {
        self.uncertainty?.degrees_of_freedom.map(Decimal::to_f64)
    }
}

impl<D: Dimension> Measured<D> {
    /// The mean of at least two readings in one unit, with the standard deviation of the mean and its degrees of freedom; else `None`.
    ///
    /// The mean keeps two decimals more than the readings. Source: JCGM 100:2008, 4.2; recalled.
    pub fn mean(readings: &[Self]) -> Option<Self> {
        let first = readings.first()?;
        if readings.len() < 2 || readings.iter().any(|reading| reading.unit != first.unit) {
            return None;
        }
        let degrees_of_freedom = u32::try_from(readings.len() - 1).ok()?;
        let count = f64::from(degrees_of_freedom) + 1.0;
        let values: Vec<f64> = readings
            .iter()
            .map(|reading| reading.decimal.to_f64())
            .collect();
        let mean = values.iter().sum::<f64>() / count;
        let squares: f64 = values
            .iter()
            .map(|value| (value - mean) * (value - mean))
            .sum();
        let deviation = (squares / f64::from(degrees_of_freedom) / count).sqrt();
        let places = readings
            .iter()
            .map(|reading| reading.decimal.decimal_places())
            .max()?
            + 2;
        let places = u8::try_from(places).ok()?;
        let rule = RoundingRule::HalfEven;
        Some(Self {
            decimal: rule.decimal_to_places(Decimal::shortest(mean), places),
            unit: first.unit,
            uncertainty: Some(Uncertainty {
                stated: rule.to_figures(deviation, 3),
                relative: false,
                spread: Spread::Replicates,
                degrees_of_freedom: Some(Decimal::whole(degrees_of_freedom)),
            }),
            dimension: PhantomData,
        })
    }
}

impl Measured<Temperature> {
    /// A temperature in degrees Celsius, without uncertainty.
    pub fn celsius(decimal: Decimal) -> Self {
        Self {
            decimal,
            unit: Unit::Celsius,
            uncertainty: None,
            dimension: PhantomData,
        }
    }
}

impl Measured<Number> {
    /// A number without unit or uncertainty.
    pub fn number(decimal: Decimal) -> Self {
        Self {
            decimal,
            unit: Unit::One,
            uncertainty: None,
            dimension: PhantomData,
        }
    }
}

impl<D> fmt::Display for Measured<D> {
    /// As one would write it in a page: `0.0200 ± 0.0001 mol/L (k=2)`.
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(formatter, "{}", self.decimal)?;
        let symbol = self.unit.symbol();
        let space = if symbol.is_empty() { "" } else { " " };
        match self.uncertainty {
            None => write!(formatter, "{space}{symbol}"),
            Some(uncertainty) if uncertainty.relative => write!(
                formatter,
                "{space}{symbol} ± {} % ({})",
                uncertainty.stated,
                uncertainty.word()
            ),
            Some(uncertainty) => write!(
                formatter,
                " ± {}{space}{symbol} ({})",
                uncertainty.stated,
                uncertainty.word()
            ),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{MassFraction, Volume};

    fn decimal(text: &str) -> Decimal {
        Decimal::parse(text).unwrap()
    }

    #[test]
    fn tolerance_of_a_flask_is_triangular() {
        // EURACHEM/CITAC QUAM A1: 100 mL flask, ±0.1 mL, gives 0.04 mL (recalled).
        let flask = Measured::<Volume>::new(decimal("100"), Unit::Millilitre)
            .unwrap()
            .with(Uncertainty {
                stated: decimal("0.1"),
                relative: false,
                spread: Spread::Triangular,
                degrees_of_freedom: None,
            });
        assert!((flask.standard_uncertainty() - 0.04e-3).abs() < 0.001e-3);
        assert_eq!(flask.to_string(), "100 ± 0.1 mL (tolerance)");
    }

    #[test]
    fn relative_uncertainty_is_of_the_value() {
        let purity = Measured::<MassFraction>::new(decimal("50"), Unit::Percent)
            .unwrap()
            .with(Uncertainty {
                stated: decimal("2"),
                relative: true,
                spread: Spread::Expanded { k: decimal("2") },
                degrees_of_freedom: None,
            });
        assert!((purity.standard_uncertainty() - 0.005).abs() < 1e-15);
        assert_eq!(purity.to_string(), "50 % ± 2 % (k=2)");
    }

    #[test]
    fn a_unit_of_another_dimension_is_no_value() {
        assert!(Measured::<Volume>::new(decimal("1"), Unit::Gram).is_none());
    }
}
