//! The roster itself: lines that give nobody a right, shared keys, and whether a keeper signed it as it is.

use super::act::Meaning;
use super::declaration::Declaration;
use super::digest::Digest;
use super::fault::Fault;
use super::finding::{Finding, Part, Place};
use super::register::{Entry, Register};
use super::roster::Roster;

/// The roster, the files that a keeper signs with it, and what is known of the keeper from outside.
#[derive(Clone, Copy, Debug)]
pub struct Keeping<'a> {
    /// The roster.
    pub roster: &'a Roster,
    /// Path and bytes of each file that a keeper's declaration must name as it is: roster and people.
    pub files: &'a [(&'a str, &'a [u8])],
    /// Every register.
    pub registers: &'a [Register],
    /// The keeper's key, as `SHA256:...`, learnt from outside.
    pub keeper: Option<&'a str>,
}

/// Examines the roster.
///
/// With a fingerprint, the last act `roster` signed by that very key must name every file as it is; neither the name of
/// the signer nor the roster's word counts, since whoever rewrites the roster writes both.
#[must_use]
pub fn examine_roster(keeping: &Keeping<'_>) -> Vec<Finding> {
    let finding = |part, fault| Finding {
        place: Place {
            file: "roster".to_owned(),
            label: None,
            part,
        },
        fault,
    };
    let mut findings: Vec<Finding> = keeping
        .roster
        .unread_lines()
        .map(|line| finding(Part::Line(line), Fault::RosterLineUnread))
        .collect();
    for (first, second) in keeping.roster.shared_keys() {
        let (first, second) = (first.signer.clone(), second.signer.clone());
        findings.push(finding(Part::Whole, Fault::SharedKey { first, second }));
    }
    match keeping.keeper {
        None => findings.push(finding(Part::Whole, Fault::RosterTrustedAsFound)),
        Some(fingerprint) if !is_kept(keeping, fingerprint) => {
            findings.push(finding(Part::Whole, Fault::RosterNotTheKeepers));
        }
        Some(_) => {}
    }
    findings
}

fn is_kept(keeping: &Keeping<'_>, fingerprint: &str) -> bool {
    let signed = keeping
        .registers
        .iter()
        .flat_map(Register::entries)
        .filter(|entry| is_keepers(entry, fingerprint))
        .max_by_key(|entry| (entry.act.act().time, entry.act.act().number));
    let declaration = signed.and_then(|entry| Declaration::parse(entry.record.as_bytes()).ok());
    declaration.is_some_and(|declaration| {
        keeping
            .files
            .iter()
            .all(|(path, bytes)| declaration.digest_of(path) == Some(Digest::of_lines(bytes)))
    })
}

fn is_keepers(entry: &Entry, fingerprint: &str) -> bool {
    let act = entry.act.act();
    let signature = entry.act.signature();
    act.meaning == Meaning::Roster
        && act.record == Digest::of_lines(entry.record.as_bytes())
        && signature.public_key().is_ok_and(|key| {
            key.fingerprint() == fingerprint
                && signature.verify(act.print().as_bytes(), &key).is_ok()
        })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::record::identity::{NotebookPath, TextLine};
    use crate::record::signature::Signer as _;
    use crate::record::specimen::{Laboratory, key, names, statement};
    use crate::record::statement::Named;

    #[test]
    fn a_rewritten_roster_is_found_with_the_keepers_fingerprint() {
        let mut laboratory = Laboratory::new();
        let bytes = laboratory.roster.print();
        let declaration = Declaration {
            notebook: statement().notebook,
            files: vec![Named::new(
                NotebookPath::new("roster").unwrap(),
                Digest::of_lines(&bytes),
            )],
            says: vec![TextLine::new("enrolled analyst and reviewer").unwrap()],
        };
        laboratory.declare(&declaration, ("reviewer", "2026-01-02T08:00:00Z"));
        let fingerprint = key("reviewer").public_key().fingerprint();
        let rewritten = [&bytes[..], b"# more\n"].concat();
        let found = |bytes: &[u8], keeper| {
            names(&examine_roster(&Keeping {
                roster: &Roster::parse(bytes),
                files: &[("roster", bytes)],
                registers: &laboratory.registers,
                keeper,
            }))
        };
        assert_eq!(found(&bytes, Some(fingerprint.as_str())), [""; 0]);
        assert_eq!(
            found(&rewritten, Some(&fingerprint)),
            ["roster-not-the-keepers"]
        );
        assert_eq!(found(&rewritten, None), ["roster-trusted-as-found"]);
        let others = key("analyst").public_key().fingerprint();
        assert_eq!(found(&bytes, Some(&others)), ["roster-not-the-keepers"]);
    }
}
