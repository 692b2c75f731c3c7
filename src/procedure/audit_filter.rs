//! What a report is narrowed to: whose work, which substance, which label, which days.

use crate::procedure::Desk;
use crate::procedure::page_work::embedded;
use crate::procedure::verify::VerifiedResult;
use crate::record::{Act, Digest, Entry, SignedAct, SignerName};
use chrono::NaiveDate;
use std::collections::BTreeSet;

/// What to report on; a field without value narrows nothing. What is of no result (roster, registers) is always reported.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct AuditFilter {
    /// Results with an act of this signer, and the acts.
    pub signer: Option<SignerName>,
    /// Results that name this substance in question or answer, by any of its names in the library. Words are compared, so that more may be shown
    /// than is meant.
    pub substance: Option<String>,
    /// Results of this label.
    pub label: Option<String>,
    /// Results with an act on this day or later, by the act's own offset.
    pub since: Option<NaiveDate>,
    /// Results with an act on this day or earlier, by the act's own offset.
    pub until: Option<NaiveDate>,
}

/// Why there is no filter.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum AuditFilterError {
    /// It is no day of the calendar.
    #[error("{text:?} is no day; write it as 2026-11-03")]
    Day {
        /// The text.
        text: String,
    },
    /// No day lies between the two.
    #[error("nothing lies between {since} and {until}; the first is later")]
    NoDay {
        /// The first.
        since: NaiveDate,
        /// The last.
        until: NaiveDate,
    },
}

impl AuditFilter {
    /// The filter with the days between which an act must lie, as year, month and day: `2026-11-03`.
    ///
    /// # Errors
    /// [`AuditFilterError`].
    pub fn between(
        self,
        since: Option<&str>,
        until: Option<&str>,
    ) -> Result<Self, AuditFilterError> {
        let day = |text: &str| {
            NaiveDate::parse_from_str(text, "%Y-%m-%d").map_err(|_error| AuditFilterError::Day {
                text: text.to_owned(),
            })
        };
        let since = since.map(day).transpose()?;
        let until = until.map(day).transpose()?;
        match (since, until) {
            (Some(since), Some(until)) if until < since => {
                Err(AuditFilterError::NoDay { since, until })
            }
            _ => Ok(Self {
                since,
                until,
                ..self
            }),
        }
    }

    /// Whether nothing is left out.
    pub fn is_open(&self) -> bool {
        *self == Self::default()
    }

    /// What the report is narrowed to, in words.
    pub fn words(&self) -> Vec<String> {
        let day = |name: &str, day: Option<NaiveDate>| day.map(|day| format!("{name} {day}"));
        let signer = self.signer.as_ref().map(|name| format!("signer {name}"));
        let substance = self.substance.as_ref();
        let label = self.label.as_ref().map(|label| format!("label {label}"));
        [
            signer,
            substance.map(|name| format!("substance {name}")),
            label,
            day("since", self.since),
            day("until", self.until),
        ]
        .into_iter()
        .flatten()
        .collect()
    }

    /// The filter with the names of its substance looked up.
    pub(super) fn at(&self, desk: &Desk) -> Sieve<'_> {
        let spellings = self.substance.as_deref().map(|query| {
            let mut names = BTreeSet::from([query.to_lowercase()]);
            if let Ok(form) = desk.catalogue.find(query) {
                names.insert(form.name.to_lowercase());
                names.extend(form.synonyms.iter().map(|name| name.to_lowercase()));
            }
            if let Some(ligand) = desk.catalogue.ligand(query) {
                names.insert(ligand.name.to_lowercase());
            }
            names
        });
        Sieve {
            filter: self,
            spellings,
        }
    }
}

/// A filter at work.
#[derive(Debug)]
pub(super) struct Sieve<'f> {
    filter: &'f AuditFilter,
    spellings: Option<BTreeSet<String>>,
}

impl Sieve<'_> {
    /// Whether a result is reported on. One act must fit signer and days together; a draft has none.
    pub(super) fn keeps(&self, result: &VerifiedResult) -> bool {
        let label = self.filter.label.as_ref();
        let of_acts = self.filter.signer.is_some()
            || self.filter.since.is_some()
            || self.filter.until.is_some();
        let mut acts = result.acts().iter().map(SignedAct::act);
        label.is_none_or(|label| *label == result.label)
            && (!of_acts || acts.any(|act| self.fits(act)))
            && self.names(result)
    }

    /// Whether an act of a register is reported on; `records` are those of the results that are.
    pub(super) fn keeps_act(&self, entry: &Entry, records: &BTreeSet<Digest>) -> bool {
        let act = entry.act.act();
        let statement = entry.statement();
        let label = self.filter.label.as_deref();
        let labelled = label.is_none_or(|label| {
            statement.is_some_and(|statement| statement.label.as_str() == label)
        });
        labelled && self.fits(act) && (self.spellings.is_none() || records.contains(&act.record))
    }

    fn fits(&self, act: &Act) -> bool {
        let day = act.time.date_naive();
        let filter = self.filter;
        filter
            .signer
            .as_ref()
            .is_none_or(|name| *name == act.signer)
            && filter.since.is_none_or(|since| since <= day)
            && filter.until.is_none_or(|until| day <= until)
    }

    fn names(&self, result: &VerifiedResult) -> bool {
        let Some(spellings) = &self.spellings else {
            return true;
        };
        // The constants cite papers, whose titles may name other substances; only their names of substances count.
        let (answer, constants) = match embedded(&result.answer) {
            Some(text) => (result.answer.replace(text, ""), text),
            None => (result.answer.clone(), ""),
        };
        let substances = constants
            .lines()
            .filter_map(|line| line.trim_start_matches("- ").strip_prefix("substance:"));
        let question = result.question.as_deref().unwrap_or_default();
        [question, &answer]
            .into_iter()
            .chain(substances)
            .any(|text| {
                spellings
                    .iter()
                    .any(|name| stands_in(name, &text.to_lowercase()))
            })
    }
}

/// Whether a name stands in a text as words of its own; both in lower case.
fn stands_in(name: &str, text: &str) -> bool {
    let part = |c: Option<char>| c.is_some_and(|c| c.is_alphanumeric() || c == '-');
    !name.is_empty()
        && text.match_indices(name).any(|(at, found)| {
            let before = text.get(..at).and_then(|text| text.chars().next_back());
            let after = text
                .get(at + found.len()..)
                .and_then(|text| text.chars().next());
            !part(before) && !part(after)
        })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory};
    use crate::procedure::{Audit, audit};

    const OTHER: &str =
        "\n```equilibrium\nlabel: base\ntask: speciation\ncontents:\n  ammonia: 0.100 mol/L\n```\n";

    fn laboratory() -> Laboratory {
        let laboratory = Laboratory::with(&format!("{ACETIC}{OTHER}"));
        laboratory.seal().unwrap();
        laboratory
    }

    fn narrowed(laboratory: &Laboratory, filter: &AuditFilter) -> Audit {
        let notebook = laboratory.path("notebook");
        audit(&notebook, None, filter, &laboratory.surroundings()).unwrap()
    }

    fn places(audit: &Audit) -> (Vec<&str>, usize) {
        let results = audit.results.iter().map(|result| result.place.as_str());
        (results.collect(), audit.acts.len())
    }

    #[test]
    fn each_filter_narrows_results_and_acts() {
        let laboratory = laboratory();
        let (acid, base) = ("rinse.md#acid", "rinse.md#base");
        let open = AuditFilter::default();
        let signer = |name| Some(SignerName::new(name).unwrap());
        let substance = |name: &str| AuditFilter {
            substance: Some(name.to_owned()),
            ..AuditFilter::default()
        };
        let label = AuditFilter {
            label: Some("base".to_owned()),
            ..open.clone()
        };
        let by = |name| AuditFilter {
            signer: signer(name),
            ..AuditFilter::default()
        };
        let days = |since, until| open.clone().between(Some(since), Some(until)).unwrap();
        for (filter, expected) in [
            (open.clone(), vec![acid, base]),
            (label, vec![base]),
            (substance("Acetic acid"), vec![acid]),
            (substance("NH3"), vec![base]),
            (substance("citric acid"), vec![]),
            (by("bench.analyst"), vec![acid, base]),
            (by("somebody"), vec![]),
            (days("2026-11-03", "2026-11-03"), vec![acid, base]),
            (days("2026-11-04", "2026-11-05"), vec![]),
            (days("2026-11-01", "2026-11-02"), vec![]),
        ] {
            let audit = narrowed(&laboratory, &filter);
            assert_eq!(
                places(&audit),
                (expected.clone(), expected.len()),
                "{filter:?}"
            );
            assert_eq!(audit.filters.is_empty(), filter.is_open());
        }
    }

    #[test]
    fn a_failure_that_is_left_out_is_counted_and_still_fails() {
        let laboratory = laboratory();
        laboratory.change("notebook/rinse.md", "ammonia: 0.100", "ammonia: 0.200");
        let filter = AuditFilter {
            label: Some("acid".to_owned()),
            ..AuditFilter::default()
        };
        let audit = narrowed(&laboratory, &filter);
        let of_base = |place: &str| place.contains("#base");
        assert!(audit.findings.iter().all(|found| !of_base(&found.place)));
        assert!(audit.left_out.findings > 0 && audit.left_out.failing);
        assert!(!audit.failed() && audit.asks());
    }

    #[test]
    fn what_is_of_no_result_is_in_every_report() {
        let laboratory = laboratory();
        laboratory.write("notebook/rinse.md", "# Rinse\n");
        let filter = AuditFilter {
            label: Some("acid".to_owned()),
            ..AuditFilter::default()
        };
        let audit = narrowed(&laboratory, &filter);
        let missing = audit
            .findings
            .iter()
            .filter(|found| found.name == "act-missing-from-page");
        assert_eq!(missing.count(), 2);
        assert!(audit.failed());
    }

    #[test]
    fn days_are_days_in_their_order() {
        let between = |since, until| AuditFilter::default().between(Some(since), Some(until));
        assert!(matches!(
            between("2026-02-30", "2026-03-01"),
            Err(AuditFilterError::Day { .. })
        ));
        assert!(matches!(
            between("2026-03-02", "2026-03-01"),
            Err(AuditFilterError::NoDay { .. })
        ));
        assert!(between("2026-03-01", "2026-03-01").is_ok());
    }

    #[test]
    fn a_name_is_found_as_words_of_its_own() {
        assert!(stands_in("acetic acid", "  acetic acid: 0.1 mol/l"));
        assert!(!stands_in("acetic acid", "trichloroacetic acid: 0.1"));
        assert!(!stands_in("tris", "bis-tris: 0.1"));
        assert!(!stands_in("", "text"));
    }
}
