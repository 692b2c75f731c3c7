//! Indicators, and the systematic error of the end point that each of them gives.

use crate::solution::Unsolvable;
use crate::solution::answer::{EquivalencePoint, IndicatorEndPoint};
use crate::solution::burette::{Burette, Titrated};

/// One indicator.
#[derive(Clone, Copy, Debug)]
struct Indicator {
    name: &'static str,
    /// Transition range in pH.
    range: (f64, f64),
}

/// Transition ranges in pH: common tables of volumetric analysis, e.g. Kolthoff and Rosenblum, Acid-Base Indicators (1937); recalled.
const INDICATORS: [Indicator; 14] = [
    of("thymol blue (acid range)", 1.2, 2.8),
    of("bromophenol blue", 3.0, 4.6),
    of("methyl orange", 3.1, 4.4),
    of("bromocresol green", 3.8, 5.4),
    of("methyl red", 4.4, 6.2),
    of("bromocresol purple", 5.2, 6.8),
    of("bromothymol blue", 6.0, 7.6),
    of("neutral red", 6.8, 8.0),
    of("phenol red", 6.8, 8.2),
    of("cresol red", 7.2, 8.8),
    of("thymol blue (alkaline range)", 8.0, 9.6),
    of("phenolphthalein", 8.2, 9.8),
    of("thymolphthalein", 9.4, 10.6),
    of("alizarin yellow R", 10.1, 12.0),
];

const fn of(name: &'static str, lower: f64, upper: f64) -> Indicator {
    Indicator {
        name,
        range: (lower, upper),
    }
}

/// Largest systematic error in percent at which an indicator that nobody named is told.
const WORTH_TELLING: f64 = 1.0;

/// The indicators at each equivalence point: those that were named, else those that change within 1 % of the volume.
///
/// # Errors
/// [`Unsolvable::Uncertified`].
pub(super) fn end_points(
    titrated: &Titrated,
    equivalence: &[EquivalencePoint],
    named: &[String],
    to: f64,
) -> Result<Vec<IndicatorEndPoint>, Unsolvable> {
    let mut burette = Burette::stated(titrated);
    let mut found = Vec::new();
    for (place, point) in equivalence.iter().enumerate() {
        let rising = point.slope > 0.0;
        for indicator in INDICATORS {
            let wanted = named.iter().any(|name| is_named(name, indicator.name));
            if !named.is_empty() && !wanted {
                continue;
            }
            let (lower, upper) = indicator.range;
            let end = if rising { upper } else { lower };
            let within = (0.0, to);
            let middle = burette.volume_at(0.5 * (lower + upper), within)?;
            let last = burette.volume_at(end, within)?;
            let Some((middle, last)) = middle.zip(last) else {
                continue;
            };
            let error_percent = 100.0 * (1e3 * middle / point.volume_ml - 1.0);
            if wanted || error_percent.abs() <= WORTH_TELLING {
                found.push(IndicatorEndPoint {
                    indicator: indicator.name.to_owned(),
                    range: indicator.range,
                    equivalence_point: place,
                    volumes_ml: (1e3 * last, 1e3 * middle),
                    error_percent,
                });
            }
        }
    }
    Ok(found)
}

fn is_named(asked: &str, known: &str) -> bool {
    let asked = asked.trim().to_lowercase();
    let known = known.to_lowercase();
    !asked.is_empty() && (known == asked || known.starts_with(&format!("{asked} (")))
}

/// Names that were asked for and are in no table.
pub(super) fn unknown(named: &[String]) -> Vec<String> {
    named
        .iter()
        .filter(|name| !INDICATORS.iter().any(|known| is_named(name, known.name)))
        .cloned()
        .collect()
}
