//! `explain`: one rule, finding or caution, with its remedy.

use crate::record::{Fault, Severity};
use crate::text::{Rule, nearest};

/// What is said of a name.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Explanation {
    /// The name.
    pub name: &'static str,
    /// What it means.
    pub sentence: &'static str,
    /// What to do.
    pub remedy: &'static str,
}

/// The cautions that an answer may carry: name, meaning, remedy.
const CAUTIONS: [(&str, &str, &str); 11] = [
    (
        "beyond-model-range",
        "The ionic strength is above the range in which the activity model is reliable with these ions.",
        "Compare with the second model's pH beside it; measure where the difference matters.",
    ),
    (
        "conventional-ph",
        "Conventional pH, as meters are calibrated for, is not defined above an ionic strength of 0.1 mol/kg.",
        "Expect a meter to differ by some hundredths to tenths; state the composition with the figure.",
    ),
    (
        "extreme-ph",
        "The pH is outside the range in which a glass electrode confirms it.",
        "Use the composition, or a titration, in place of a reading.",
    ),
    (
        "recalled-constant",
        "A constant was entered from memory and not checked against its source.",
        "Check the value against the named source and state it as your own with that source.",
    ),
    (
        "conditional-constant",
        "A constant is not for zero ionic strength, or its source does not say.",
        "Use a thermodynamic constant where there is one; else take the result as an estimate.",
    ),
    (
        "constant-temperature",
        "A constant is used away from its own temperature, and no enthalpy is known.",
        "State an enthalpy with the constant, or work at the constant's temperature.",
    ),
    (
        "complexes-left-out",
        "Metal ions that bind or precipitate with what is in the solution are not computed.",
        "Leave the metal out or measure.",
    ),
    (
        "polyborates-left-out",
        "Borates in several units form above about 0.02 mol/kg of boron and are not computed.",
        "Dilute, or measure.",
    ),
    (
        "gas",
        "At this pH a gas escapes from the solution.",
        "Work in a fume hood; see the safety data sheet.",
    ),
    (
        "hazard",
        "A usual caution of one of the substances.",
        "The safety data sheet, local rules and qualified staff decide.",
    ),
    (
        "safety-data-sheet",
        "The cautions printed are the usual ones and no substitute.",
        "Read the safety data sheets of the substances before work.",
    ),
];

/// What a name means.
///
/// # Errors
/// The nearest names where there is none.
pub fn explain(name: &str) -> Result<Explanation, Vec<String>> {
    if let Some(rule) = Rule::find(name) {
        return Ok(Explanation {
            name: rule.name(),
            sentence: rule.sentence(),
            remedy: rule.remedy(),
        });
    }
    if let Some((name, sentence, remedy)) = CAUTIONS.iter().find(|(known, ..)| *known == name) {
        return Ok(Explanation {
            name,
            sentence,
            remedy,
        });
    }
    if let Some((name, severity, remedy)) = Fault::ROWS.iter().find(|(known, ..)| *known == name) {
        return Ok(Explanation {
            name,
            sentence: weight(*severity),
            remedy,
        });
    }
    let names = Rule::ALL
        .iter()
        .map(|rule| rule.name())
        .chain(Fault::NAMES.iter().copied())
        .chain(CAUTIONS.iter().map(|(name, ..)| *name));
    Err(nearest(name, names)
        .into_iter()
        .map(str::to_owned)
        .collect())
}

/// What the weight of a finding of `verify` and `audit` says.
fn weight(severity: Severity) -> &'static str {
    match severity {
        Severity::Failure => "A failure found by `verify` or `audit`: the evidence does not stand.",
        Severity::Warning => {
            "A warning of `verify` or `audit`: the evidence stands, but something that is asked is not done, or cannot be told."
        }
        Severity::Note => "A note of `verify` or `audit`: worth knowing, nothing is asked.",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rules_findings_and_cautions_are_explained() {
        for name in ["unclosed-fence", "answer-changed", "recalled-constant"] {
            assert_eq!(explain(name).unwrap().name, name);
        }
        let near = explain("answer-change").unwrap_err();
        assert_eq!(near[0], "answer-changed");
    }
}
