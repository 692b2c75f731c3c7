//! What an audit tells of an examined notebook.

use crate::block;
use crate::procedure::audit::{
    Audit, AuditAct, AuditConstant, AuditFinding, AuditResult, AuditSigner, LeftOut,
};
use crate::procedure::audit_filter::Sieve;
use crate::procedure::examination::Examined;
use crate::procedure::page_work::embedded;
use crate::procedure::recomputation::Recomputed;
use crate::procedure::verify::{VerifiedPage, VerifiedResult};
use crate::record::{Digest, Entry, Finding, Meaning, Register, Severity, SignedAct};
use crate::substance::StoredPk;
use std::collections::{BTreeMap, BTreeSet};

/// A result and its page.
type Placed<'e> = (&'e VerifiedPage, &'e VerifiedResult);

/// The audit of an examined notebook, narrowed to a folder or page of it and by a filter. Program and filters are for the caller to name.
pub(super) fn contents(
    examined: &Examined,
    scope: String,
    keeper: Option<&str>,
    sieve: &Sieve<'_>,
) -> Audit {
    let pages: Vec<&VerifiedPage> = examined
        .pages
        .iter()
        .filter(|page| is_within(&page.name, &scope))
        .collect();
    let placed = pages
        .iter()
        .flat_map(|page| page.results.iter().map(move |result| (*page, result)));
    let (kept, left): (Vec<Placed<'_>>, Vec<Placed<'_>>) =
        placed.partition(|(_, result)| sieve.keeps(result));
    let (findings, left_out) = findings(examined, &scope, &kept, &left);
    let unread = examined
        .unread
        .iter()
        .map(|(path, error)| format!("{}: {error}", path.display()))
        .chain(
            examined
                .links
                .iter()
                .map(|path| format!("{}: a symbolic link, not followed", path.display())),
        );
    Audit {
        title: examined.notebook.title.clone(),
        notebook: examined.notebook.identity.clone(),
        time: examined
            .now
            .to_rfc3339_opts(chrono::SecondsFormat::Secs, false),
        program: String::new(),
        filters: Vec::new(),
        left_out,
        keeper: keeper.map(str::to_owned),
        pages: pages.len(),
        results: kept
            .iter()
            .map(|(page, result)| result_of(page, result))
            .collect(),
        findings,
        acts: acts(&examined.registers, &scope, sieve, &kept),
        signers: signers(examined),
        constants: constants(kept.iter().copied()),
        unread: unread.collect(),
        scope,
    }
}

/// Whether a file of the notebook is reported on; what is no page belongs to every report.
fn is_within(file: &str, scope: &str) -> bool {
    let below = file.strip_prefix(scope);
    scope.is_empty() || below.is_some_and(|rest| rest.is_empty() || rest.starts_with('/'))
}

fn place_of(page: &VerifiedPage, result: &VerifiedResult) -> String {
    format!("{}#{}", page.name, result.label)
}

fn result_of(page: &VerifiedPage, result: &VerifiedResult) -> AuditResult {
    let statement = result.statement();
    let who = |signed: &SignedAct| {
        let act = signed.act();
        format!("{} ({}), {}", act.name, act.signer, act.time.to_rfc3339())
    };
    let of = |meanings: &[Meaning]| -> Vec<String> {
        let acts = result.acts().iter();
        acts.filter(|signed| meanings.contains(&signed.act().meaning))
            .map(who)
            .collect()
    };
    let supersession = statement.and_then(|statement| statement.supersedes.as_ref());
    AuditResult {
        place: place_of(page, result),
        state: match (result.draft, result.mark) {
            (true, _) => "draft",
            (false, Some(mark)) => mark,
            (false, None) => "sealed",
        },
        verifies: (!result.draft).then(|| !result.failed()),
        result: statement.map(|statement| statement.result.to_string()),
        performed: of(&[Meaning::Performed]).into_iter().next(),
        reviewed: of(&[Meaning::Reviewed, Meaning::Approved]),
        recomputed: result.recomputed.word(),
        supersedes: supersession.map(|supersession| supersession.replaced.name.to_string()),
        reason: supersession.map(|supersession| supersession.reason.to_string()),
        uses: statement.map_or_else(Vec::new, |statement| {
            let uses = statement.uses.iter();
            uses.map(|used| used.name.to_string()).collect()
        }),
        attachments: statement.map_or_else(Vec::new, |statement| {
            let files = statement.attachments.iter();
            files.map(|file| file.name.to_string()).collect()
        }),
        program: statement.map(|statement| statement.program.name.to_string()),
    }
}

/// What is found: of the results that are kept, by computing again, of signers without enrolment, and of the notebook; and how much is found
/// of the results that are left out. What is found at a place of no result is never left out.
fn findings(
    examined: &Examined,
    scope: &str,
    kept: &[Placed<'_>],
    left: &[Placed<'_>],
) -> (Vec<AuditFinding>, LeftOut) {
    let mut found = of_results(kept);
    found.extend(examined.unlisted.iter().map(|signer| unlisted(signer)));
    let places = |placed: &[Placed<'_>]| -> BTreeSet<String> {
        let places = placed.iter().map(|(page, result)| place_of(page, result));
        places.collect()
    };
    let (shown, hidden) = (places(kept), places(left));
    let is_hidden = |finding: &Finding| {
        let place = &finding.place;
        let label = place.label.as_ref();
        let place = label.map(|label| format!("{}#{label}", place.file));
        place.is_some_and(|place| hidden.contains(&place) && !shown.contains(&place))
    };
    let of_notebook = examined
        .findings
        .iter()
        .filter(|finding| finding.place.label.is_none() || is_within(&finding.place.file, scope));
    let (out, rest): (Vec<&Finding>, Vec<&Finding>) =
        of_notebook.partition(|finding| is_hidden(finding));
    found.extend(rest.into_iter().map(AuditFinding::of));
    let mut not_told = of_results(left);
    not_told.extend(out.into_iter().map(AuditFinding::of));
    let note = Severity::Note.to_string();
    let failure = Severity::Failure.to_string();
    let left_out = LeftOut {
        results: left.len(),
        findings: not_told.iter().filter(|told| told.severity != note).count(),
        failing: not_told.iter().any(|told| told.severity == failure),
    };
    (found, left_out)
}

fn of_results(placed: &[Placed<'_>]) -> Vec<AuditFinding> {
    let mut found = Vec::new();
    for (page, result) in placed {
        found.extend(result.findings.iter().map(AuditFinding::of));
        found.extend(differing(&place_of(page, result), &result.recomputed));
    }
    found
}

fn unlisted(signer: &str) -> AuditFinding {
    AuditFinding {
        name: "signer-not-on-roster".to_owned(),
        severity: "warning".to_owned(),
        place: format!("registers/{signer}.md"),
        sentence: format!(
            "{signer} is on no roster: nothing was altered, but whose signature it is rests on trust"
        ),
        remedy: "have the keeper put the public key on the roster".to_owned(),
    }
}

fn differing(place: &str, recomputed: &Recomputed) -> Option<AuditFinding> {
    let (sentence, severity) = match recomputed {
        Recomputed::Not | Recomputed::Same => return None,
        Recomputed::SameFigure { cause } => (
            format!("computed again, the figures are the same and the text is not: {cause}"),
            "note",
        ),
        Recomputed::Different {
            recorded,
            now,
            cause,
        } => (
            format!("computed again: {now}, recorded {recorded}; {cause}"),
            "failure",
        ),
        Recomputed::Failed { reason } => (format!("not computed again: {reason}"), "failure"),
    };
    Some(AuditFinding {
        name: "recomputed-differently".to_owned(),
        severity: severity.to_owned(),
        place: place.to_owned(),
        sentence,
        remedy: "find the cause; where the recorded figure is wrong, amend the result".to_owned(),
    })
}

fn acts(
    registers: &[Register],
    scope: &str,
    sieve: &Sieve<'_>,
    kept: &[Placed<'_>],
) -> Vec<AuditAct> {
    let records = kept.iter().filter_map(|(_, result)| result.record.as_ref());
    let records: BTreeSet<Digest> = records.map(|record| record.digest).collect();
    let mut entries: Vec<&Entry> = registers
        .iter()
        .flat_map(Register::entries)
        .filter(|entry| sieve.keeps_act(entry, &records))
        .collect();
    entries.sort_by_key(|entry| (entry.act.act().time, entry.act.act().number));
    let told = entries.into_iter().map(|entry| {
        let act = entry.act.act();
        let statement = entry.statement();
        AuditAct {
            time: act.time.to_rfc3339(),
            signer: act.signer.to_string(),
            name: act.name.to_string(),
            meaning: act.meaning.to_string(),
            place: statement
                .as_ref()
                .map(|statement| format!("{}#{}", statement.page, statement.label)),
            result: statement.map(|statement| statement.result.to_string()),
            number: act.number,
            note: act.note.as_ref().map(ToString::to_string),
        }
    });
    told.filter(|act| {
        let page = act
            .place
            .as_deref()
            .and_then(|place| place.split('#').next());
        page.is_none_or(|page| is_within(page, scope))
    })
    .collect()
}

fn signers(examined: &Examined) -> Vec<AuditSigner> {
    let mut names: BTreeSet<String> = examined
        .roster
        .enrolments()
        .map(|entry| entry.signer.to_string())
        .collect();
    let registers = &examined.registers;
    names.extend(
        registers
            .iter()
            .map(|register| register.signer().to_string()),
    );
    let of = |signer: String| AuditSigner {
        keys: examined
            .roster
            .enrolments()
            .filter(|entry| entry.signer.as_str() == signer)
            .map(|entry| {
                let from = entry
                    .valid_after
                    .map(|time| format!(", from {}", time.to_rfc3339()));
                let to = entry
                    .valid_before
                    .map(|time| format!(", retired {}", time.to_rfc3339()));
                let (from, to) = (from.unwrap_or_default(), to.unwrap_or_default());
                format!("{}{from}{to}", entry.key.fingerprint())
            })
            .collect(),
        acts: registers
            .iter()
            .filter(|register| register.signer().as_str() == signer)
            .map(|register| register.entries().len())
            .sum(),
        signer,
    };
    names.into_iter().map(of).collect()
}

fn constants<'e>(placed: impl Iterator<Item = Placed<'e>>) -> Vec<AuditConstant> {
    let mut found: BTreeMap<AuditConstant, BTreeSet<String>> = BTreeMap::new();
    for (page, result) in placed {
        let stored = embedded(&result.answer)
            .and_then(|text| block::constants(text, &mut Vec::new()))
            .unwrap_or_default();
        for substance in &stored.substances {
            for (step, pk) in (1..).zip(&substance.pka) {
                let constant = constant(&substance.substance, step, pk);
                found
                    .entry(constant)
                    .or_default()
                    .insert(place_of(page, result));
            }
        }
    }
    found
        .into_iter()
        .map(|(constant, used_in)| AuditConstant {
            used_in: used_in.into_iter().collect(),
            ..constant
        })
        .collect()
}

fn constant(substance: &str, step: usize, pk: &StoredPk) -> AuditConstant {
    let uncertainty = pk.uncertainty.as_ref().map(|u| format!(" ± {u}"));
    let locator = pk.locator.as_ref().map(|locator| format!(", {locator}"));
    let conditions: Vec<&str> = [&pk.temperature, &pk.kind, &pk.ionic_strength, &pk.medium]
        .into_iter()
        .flatten()
        .map(String::as_str)
        .collect();
    AuditConstant {
        constant: format!("{substance}, pK {step}"),
        value: format!("{}{}", pk.value, uncertainty.unwrap_or_default()),
        conditions: conditions.join(", "),
        source: format!("{}{}", pk.source, locator.unwrap_or_default()),
        basis: pk.basis.clone().unwrap_or_else(|| "stated".to_owned()),
        used_in: Vec::new(),
    }
}
