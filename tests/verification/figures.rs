//! Figures over whole sets of cases: root mean square and share inside a tolerance.

use crate::case::{Case, number};
use crate::laboratory;
use libtest_mimic::{Failed, Trial};
use serde::Deserialize;
use std::fs;
use std::path::Path;

/// A figure that a set of cases must reach together.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
struct Figure {
    /// The set, as the cases name it.
    set: String,
    /// Where the figure comes from.
    reason: String,
    /// Largest root mean square of found less stated.
    rms: Option<String>,
    /// A known miss of the root mean square: the figure reached, and why.
    miss: Option<KnownMiss>,
    /// Smallest share inside a distance: distance, share.
    within: Vec<(String, String)>,
}

/// A root mean square that is known to miss.
#[derive(Clone, Debug, Deserialize)]
#[serde(deny_unknown_fields)]
struct KnownMiss {
    /// What is reached instead.
    rms: String,
    /// Why.
    reason: String,
}

/// One test for each figure of `figures.yaml`.
pub(crate) fn trials(folder: &Path, cases: &[Case]) -> Vec<Trial> {
    let path = folder.join("figures.yaml");
    let text =
        fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    let figures: Vec<Figure> =
        serde_yaml::from_str(&text).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    figures
        .into_iter()
        .map(|figure| {
            let members: Vec<Case> = cases
                .iter()
                .filter(|case| case.sets.contains(&figure.set))
                .cloned()
                .collect();
            Trial::test(format!("figures/{}", figure.set), move || {
                figure.judge(&members)
            })
        })
        .collect()
}

impl Figure {
    fn judge(&self, cases: &[Case]) -> Result<(), Failed> {
        if cases.is_empty() {
            return Err(format!("no case belongs to {}", self.set).into());
        }
        let mut off = Vec::new();
        for case in cases {
            off.push((laboratory::found(case)? - case.stated_value()).abs());
        }
        let count = off.len() as f64;
        let rms = (off.iter().map(|d| d * d).sum::<f64>() / count).sqrt();
        self.judge_rms(rms, count)?;
        for (distance, share) in &self.within {
            let inside = off.iter().filter(|d| **d <= number(distance)).count() as f64 / count;
            if inside < number(share) {
                return Err(format!(
                    "{}: {inside:.3} of {count} cases within {distance}, {share} wanted; {}",
                    self.set, self.reason
                )
                .into());
            }
        }
        Ok(())
    }

    /// A known miss must miss, and by what was written down.
    fn judge_rms(&self, rms: f64, count: f64) -> Result<(), Failed> {
        let Some(limit) = self.rms.as_deref().map(number) else {
            return Ok(());
        };
        let line = format!(
            "{}: rms {rms:.4} over {count} cases, {limit} wanted; {}",
            self.set, self.reason
        );
        match &self.miss {
            None if rms <= limit => Ok(()),
            None => Err(line.into()),
            Some(_) if rms <= limit => {
                Err(format!("{line}; listed as a known miss but reached: strike it").into())
            }
            Some(miss) if (rms - number(&miss.rms)).abs() <= 0.000_051 => Ok(()),
            Some(miss) => Err(format!(
                "{line}; a known miss, written down as {} ({})",
                miss.rms, miss.reason
            )
            .into()),
        }
    }
}
