//! Tolerances of volumetric glassware, by name: `class A 25 mL pipette`.
//!
//! The figures are limits of standards, not calibrations: a vessel with its own certificate has its own uncertainty. Where standards
//! differ and the name says none, the widest limit is taken.

use crate::quantity::{Decimal, Measured, Spread, Uncertainty, Unit, Volume};
use Class::{A, B};
use Vessel::{Burette, GraduatedCylinder, MeasuringPipette, OneMarkPipette, VolumetricFlask};

/// A kind of vessel.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Vessel {
    /// A flask with one mark.
    VolumetricFlask,
    /// A pipette that delivers one volume: bulb, transfer, one-mark pipette.
    OneMarkPipette,
    /// A pipette with a scale.
    MeasuringPipette,
    /// A measuring cylinder.
    GraduatedCylinder,
    /// A burette.
    Burette,
}

/// An accuracy class.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Class {
    /// Class A; AS, for quick delivery, has the same limits (common practice).
    A,
    /// Class B.
    B,
}

/// The limit that a standard sets for one vessel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Glassware {
    /// The kind of vessel.
    pub vessel: Vessel,
    /// Nominal volume in mL.
    pub nominal: &'static str,
    /// Class.
    pub class: Class,
    /// Tolerance in mL, to either side.
    pub limit: &'static str,
    /// The standard.
    pub standard: &'static str,
    /// Whether a text that states the figure was opened; otherwise it is recalled.
    pub read: bool,
}

/// Why a text names no vessel of the table.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum GlasswareError {
    /// No kind of vessel is named.
    #[error(
        "no vessel is named; a flask, pipette, graduated pipette, cylinder or burette is expected"
    )]
    NoVessel,
    /// No class is named, and none is guessed.
    #[error("the class is missing; write `class A` or `class B`")]
    NoClass,
    /// No nominal volume is named.
    #[error("the nominal volume is missing")]
    NoVolume,
    /// The table has the vessel in other sizes or classes only.
    #[error("no limit is known for this vessel; known in that class: {known}")]
    NotInTable {
        /// Nominal volumes in mL that the table has for the vessel and class.
        known: String,
    },
}

impl Glassware {
    /// The vessel that a text names: kind, class, nominal volume, and the standard if one is to be followed, in any order.
    ///
    /// # Errors
    /// [`GlasswareError`] says which part is missing, or which sizes are known.
    pub fn named(text: &str) -> Result<&'static Self, GlasswareError> {
        let text = text.to_lowercase();
        let vessel = vessel(&text).ok_or(GlasswareError::NoVessel)?;
        let class = class(&text).ok_or(GlasswareError::NoClass)?;
        let volume = volume(&text).ok_or(GlasswareError::NoVolume)?;
        let of_class = || {
            TABLE
                .iter()
                .filter(move |row| row.vessel == vessel && row.class == class)
        };
        let of_size = || of_class().filter(move |row| row.holds(volume));
        let by_standard = of_size().find(|row| text.contains(&row.standard.to_lowercase()));
        by_standard
            .or_else(|| {
                of_size().max_by(|one, other| {
                    one.size()
                        .total_cmp(&other.size())
                        .then(one.read.cmp(&other.read))
                })
            })
            .ok_or_else(|| {
                let mut known: Vec<&str> = of_class().map(|row| row.nominal).collect();
                known.dedup();
                GlasswareError::NotInTable {
                    known: known.join(", "),
                }
            })
    }

    /// The tolerance as an uncertainty: half width of a triangular distribution, in mL.
    pub fn uncertainty(&self) -> Option<Uncertainty> {
        Some(Uncertainty {
            stated: Decimal::parse(self.limit).ok()?,
            relative: false,
            spread: Spread::Triangular,
            degrees_of_freedom: None,
        })
    }

    /// The nominal volume with the tolerance: `25 ± 0.030 mL (tolerance)`.
    pub fn measured(&self) -> Option<Measured<Volume>> {
        let nominal = Decimal::parse(self.nominal).ok()?;
        Some(Measured::new(nominal, Unit::Millilitre)?.with(self.uncertainty()?))
    }

    fn holds(&self, litres: f64) -> bool {
        let nominal = Decimal::parse(self.nominal).map(|nominal| nominal.scaled(-3).to_f64());
        nominal.is_ok_and(|nominal| nominal.total_cmp(&litres).is_eq())
    }

    /// The limit in mL.
    fn size(&self) -> f64 {
        Decimal::parse(self.limit).map_or(0.0, Decimal::to_f64)
    }
}

/// The kind of vessel that a lower-case text names.
fn vessel(text: &str) -> Option<Vessel> {
    let has = |words: &[&str]| words.iter().any(|word| text.contains(word));
    if has(&["flask"]) {
        Some(VolumetricFlask)
    } else if has(&["cylinder"]) {
        Some(GraduatedCylinder)
    } else if has(&["burette", "buret"]) {
        Some(Burette)
    } else if !has(&["pipette", "pipet"]) || has(&["piston", "air displacement"]) {
        None
    } else if has(&["measuring", "graduated", "mohr", "serological"]) {
        Some(MeasuringPipette)
    } else {
        Some(OneMarkPipette)
    }
}

/// The class that a lower-case text names.
fn class(text: &str) -> Option<Class> {
    let mut words = text.split(|c: char| !c.is_alphanumeric());
    words.find(|word| *word == "class")?;
    match words.find(|word| !word.is_empty())? {
        "a" | "as" => Some(A),
        "b" => Some(B),
        _ => None,
    }
}

/// The nominal volume in L that a lower-case text names, written apart from or together with its unit.
fn volume(text: &str) -> Option<f64> {
    let words: Vec<&str> = text
        .split([' ', ',', '(', ')'])
        .filter(|word| !word.is_empty())
        .collect();
    let apart = words.windows(2).filter_map(|pair| match pair {
        [number, unit] => litres(number, unit),
        _ => None,
    });
    let together = words.iter().filter_map(|word| {
        let unit = word.trim_start_matches(|c: char| c.is_ascii_digit() || c == '.');
        litres(word.strip_suffix(unit)?, unit)
    });
    apart.chain(together).next()
}

fn litres(number: &str, unit: &str) -> Option<f64> {
    let number = Decimal::parse(number).ok()?;
    let unit = Unit::parse(unit).ok()?;
    let volume = Measured::<Volume>::new(number, unit)?;
    volume.exact().map(Decimal::to_f64)
}

const fn of(
    vessel: Vessel,
    nominal: &'static str,
    class: Class,
    limit: &'static str,
    standard: &'static str,
    read: bool,
) -> Glassware {
    Glassware {
        vessel,
        nominal,
        class,
        limit,
        standard,
        read,
    }
}

/// Vessel, nominal volume in mL, class, limit in mL, standard, whether a text that states it was opened.
///
/// The pipettes under E694 stand there in the text that was opened; their usual standard is E969 (recalled).
#[rustfmt::skip]
const TABLE: [Glassware; 55] = [
    of(OneMarkPipette, "1", A, "0.006", "ASTM E694", true),
    of(OneMarkPipette, "5", A, "0.01", "ASTM E694", true),
    of(OneMarkPipette, "10", A, "0.02", "ASTM E694", true),
    of(OneMarkPipette, "25", A, "0.03", "ASTM E694", true),
    of(OneMarkPipette, "50", A, "0.05", "ASTM E694", true),
    of(OneMarkPipette, "100", A, "0.08", "ASTM E694", true),
    of(OneMarkPipette, "1", B, "0.012", "ASTM E694", true),
    of(OneMarkPipette, "10", B, "0.04", "ASTM E694", true),
    of(OneMarkPipette, "25", B, "0.06", "ASTM E694", true),
    of(GraduatedCylinder, "10", A, "0.08", "ASTM E694", true),
    of(GraduatedCylinder, "25", A, "0.14", "ASTM E694", true),
    of(GraduatedCylinder, "50", A, "0.20", "ASTM E694", true),
    of(GraduatedCylinder, "100", A, "0.35", "ASTM E694", true),
    of(GraduatedCylinder, "250", A, "0.65", "ASTM E694", true),
    of(GraduatedCylinder, "500", A, "1.10", "ASTM E694", true),
    of(GraduatedCylinder, "1000", A, "2.00", "ASTM E694", true),
    of(MeasuringPipette, "2", A, "0.010", "USP <31>", true),
    of(MeasuringPipette, "5", A, "0.020", "USP <31>", true),
    of(MeasuringPipette, "10", A, "0.030", "USP <31>", true),
    of(VolumetricFlask, "1", A, "0.025", "ISO 1042:1998", false),
    of(VolumetricFlask, "2", A, "0.025", "ISO 1042:1998", false),
    of(VolumetricFlask, "5", A, "0.025", "ISO 1042:1998", false),
    of(VolumetricFlask, "10", A, "0.025", "ISO 1042:1998", false),
    of(VolumetricFlask, "20", A, "0.040", "ISO 1042:1998", false),
    of(VolumetricFlask, "25", A, "0.040", "ISO 1042:1998", false),
    of(VolumetricFlask, "50", A, "0.060", "ISO 1042:1998", false),
    of(VolumetricFlask, "100", A, "0.100", "ISO 1042:1998", false),
    of(VolumetricFlask, "200", A, "0.150", "ISO 1042:1998", false),
    of(VolumetricFlask, "250", A, "0.150", "ISO 1042:1998", false),
    of(VolumetricFlask, "500", A, "0.250", "ISO 1042:1998", false),
    of(VolumetricFlask, "1000", A, "0.400", "ISO 1042:1998", false),
    of(VolumetricFlask, "2000", A, "0.600", "ISO 1042:1998", false),
    of(VolumetricFlask, "10", A, "0.02", "ASTM E288", false),
    of(VolumetricFlask, "25", A, "0.03", "ASTM E288", false),
    of(VolumetricFlask, "50", A, "0.05", "ASTM E288", false),
    of(VolumetricFlask, "100", A, "0.08", "ASTM E288", false),
    of(VolumetricFlask, "250", A, "0.12", "ASTM E288", false),
    of(VolumetricFlask, "500", A, "0.20", "ASTM E288", false),
    of(VolumetricFlask, "1000", A, "0.30", "ASTM E288", false),
    of(OneMarkPipette, "0.5", A, "0.005", "ISO 648:2008", false),
    of(OneMarkPipette, "1", A, "0.008", "ISO 648:2008", false),
    of(OneMarkPipette, "2", A, "0.010", "ISO 648:2008", false),
    of(OneMarkPipette, "5", A, "0.015", "ISO 648:2008", false),
    of(OneMarkPipette, "10", A, "0.020", "ISO 648:2008", false),
    of(OneMarkPipette, "20", A, "0.030", "ISO 648:2008", false),
    of(OneMarkPipette, "25", A, "0.030", "ISO 648:2008", false),
    of(OneMarkPipette, "50", A, "0.050", "ISO 648:2008", false),
    of(OneMarkPipette, "100", A, "0.080", "ISO 648:2008", false),
    of(Burette, "10", A, "0.02", "ISO 385", false),
    of(Burette, "25", A, "0.03", "ISO 385", false),
    of(Burette, "50", A, "0.05", "ISO 385", false),
    of(Burette, "100", A, "0.10", "ISO 385", false),
    of(Burette, "10", A, "0.02", "ASTM E287", false),
    of(Burette, "25", A, "0.03", "ASTM E287", false),
    of(Burette, "50", A, "0.05", "ASTM E287", false),
];

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_vessel_is_found_by_its_name() {
        for (text, limit, standard) in [
            ("class A 25 mL pipette", "0.03", "ASTM E694"),
            ("10 mL bulb pipette, class B", "0.04", "ASTM E694"),
            (
                "25 mL volumetric flask (class A, ASTM E288)",
                "0.03",
                "ASTM E288",
            ),
            ("250mL flask class A", "0.150", "ISO 1042:1998"),
            ("1 L volumetric flask class AS", "0.400", "ISO 1042:1998"),
            ("burette 50 mL class A, ISO 385", "0.05", "ISO 385"),
            ("class A 5 mL graduated pipette", "0.020", "USP <31>"),
            ("measuring cylinder class A 100 mL", "0.35", "ASTM E694"),
        ] {
            let found = Glassware::named(text).unwrap();
            let value = |figure: &str| Decimal::parse(figure).unwrap().to_f64();
            assert_eq!(
                value(found.limit).to_bits(),
                value(limit).to_bits(),
                "{text}"
            );
            assert_eq!(found.standard, standard, "{text}");
        }
    }

    #[test]
    fn what_is_missing_is_said() {
        assert_eq!(
            Glassware::named("class A 25 mL beaker"),
            Err(GlasswareError::NoVessel)
        );
        assert_eq!(
            Glassware::named("class A 1 mL piston pipette"),
            Err(GlasswareError::NoVessel)
        );
        assert_eq!(
            Glassware::named("25 mL pipette"),
            Err(GlasswareError::NoClass)
        );
        assert_eq!(
            Glassware::named("class A pipette"),
            Err(GlasswareError::NoVolume)
        );
        assert_eq!(
            Glassware::named("class B 25 mL burette"),
            Err(GlasswareError::NotInTable {
                known: String::new()
            })
        );
    }

    #[test]
    fn every_row_is_a_volume_with_a_tolerance() {
        for row in &TABLE {
            let measured = row.measured().unwrap();
            // Triangular: limit over the root of six, in L.
            let expected = row.size() / 1000.0 / 6.0_f64.sqrt();
            assert!(
                (measured.standard_uncertainty() / expected - 1.0).abs() < 1e-12,
                "{row:?}"
            );
        }
    }
}
