//! What a verification case states, and how it is judged.

use serde::Deserialize;
use std::collections::BTreeMap;

/// A file of cases: one source, or one published series.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(crate) struct CaseFile {
    /// The rows.
    pub(crate) cases: Vec<Case>,
}

/// One line of the verification record.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(crate) struct Case {
    /// What a chemist would call it.
    pub(crate) name: String,
    /// Author, year, table and row.
    pub(crate) source: String,
    /// `read` or `recalled`.
    pub(crate) basis: String,
    /// `pH`, `hydrogen ion`, `hydroxide ion` (mol/kg) or `percent dissociated`.
    pub(crate) quantity: String,
    /// As printed there, figures kept.
    pub(crate) stated: String,
    /// Largest accepted distance, in the unit of the quantity.
    pub(crate) tolerance: String,
    /// Where the tolerance comes from.
    pub(crate) reason: String,
    /// Sets of cases that are judged together.
    #[serde(default)]
    pub(crate) sets: Vec<String>,
    /// The block, in the same language as a page.
    pub(crate) block: String,
}

/// A known miss: a case that lies outside its tolerance, by how much and why.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(crate) struct Miss {
    /// Found less stated, as printed by the test.
    pub(crate) off: String,
    /// Why.
    pub(crate) reason: String,
}

/// Known misses by case file and case name.
pub(crate) type Misses = BTreeMap<String, BTreeMap<String, Miss>>;

/// Half a unit of the last digit that a known miss is written with.
const MISS_STEP: f64 = 0.000_51;

impl Case {
    /// The stated value as a number.
    pub(crate) fn stated_value(&self) -> f64 {
        number(&self.stated)
    }

    /// Judges a found value; a known miss must miss, and by what was written down.
    pub(crate) fn judge(&self, found: f64, miss: Option<&Miss>) -> Result<(), String> {
        let off = found - self.stated_value();
        let inside = off.abs() <= number(&self.tolerance) * (1.0 + 1e-9);
        match (inside, miss) {
            (true, None) => Ok(()),
            (false, None) => Err(self.line(found, "outside")),
            (true, Some(_)) => Err(self.line(
                found,
                "listed as a known miss but inside: strike it from misses.yaml",
            )),
            (false, Some(miss)) if (off - number(&miss.off)).abs() <= MISS_STEP => Ok(()),
            (false, Some(miss)) => Err(self.line(
                found,
                &format!(
                    "a known miss, written down as {} ({})",
                    miss.off, miss.reason
                ),
            )),
        }
    }

    /// The case as a line of a verification record.
    pub(crate) fn line(&self, found: f64, verdict: &str) -> String {
        format!(
            "{name}\n  source     {source} ({basis})\n  quantity   {quantity}\n  stated     {stated}\n  found      {found}\n  \
             off        {off:+.4}\n  tolerance  {tolerance} ({reason})\n  {verdict}",
            name = self.name,
            source = self.source,
            basis = self.basis,
            quantity = self.quantity,
            stated = self.stated,
            off = found - self.stated_value(),
            tolerance = self.tolerance,
            reason = self.reason,
        )
    }
}

/// Reads a number of a case file; a wrong one is a fault of the file and stops the run.
pub(crate) fn number(text: &str) -> f64 {
    text.parse()
        .unwrap_or_else(|_| panic!("{text:?} in a case file is no number"))
}
