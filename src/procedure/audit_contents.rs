//! What an audit tells of an examined notebook.

use crate::block;
use crate::procedure::audit::{
    Audit, AuditAct, AuditConstant, AuditFinding, AuditResult, AuditSigner,
};
use crate::procedure::examination::Examined;
use crate::procedure::page_work::embedded;
use crate::procedure::recomputation::Recomputed;
use crate::procedure::verify::{VerifiedPage, VerifiedResult};
use crate::record::{Entry, Meaning, Register, SignedAct};
use crate::substance::StoredPk;
use std::collections::{BTreeMap, BTreeSet};

/// The audit of an examined notebook, narrowed to a folder or page of it.
pub(super) fn contents(
    examined: &Examined,
    scope: String,
    keeper: Option<&str>,
    program: &str,
) -> Audit {
    let pages: Vec<&VerifiedPage> = examined
        .pages
        .iter()
        .filter(|page| is_within(&page.name, &scope))
        .collect();
    let placed = || {
        pages
            .iter()
            .flat_map(|page| page.results.iter().map(move |result| (*page, result)))
    };
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
        program: program.to_owned(),
        keeper: keeper.map(str::to_owned),
        pages: pages.len(),
        results: placed()
            .map(|(page, result)| result_of(page, result))
            .collect(),
        findings: findings(examined, &scope, placed()),
        acts: acts(&examined.registers, &scope),
        signers: signers(examined),
        constants: constants(placed()),
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

/// What is found: of the results, by computing again, of signers without enrolment, and of the notebook.
fn findings<'e>(
    examined: &Examined,
    scope: &str,
    placed: impl Iterator<Item = (&'e VerifiedPage, &'e VerifiedResult)>,
) -> Vec<AuditFinding> {
    let mut found = Vec::new();
    for (page, result) in placed {
        found.extend(result.findings.iter().map(AuditFinding::of));
        found.extend(differing(&place_of(page, result), &result.recomputed));
    }
    for signer in &examined.unlisted {
        found.push(AuditFinding {
            name: "signer-not-on-roster".to_owned(),
            severity: "warning".to_owned(),
            place: format!("registers/{signer}.md"),
            sentence: format!(
                "{signer} is on no roster: nothing was altered, but whose signature it is rests on trust"
            ),
            remedy: "have the keeper put the public key on the roster".to_owned(),
        });
    }
    let of_notebook = examined
        .findings
        .iter()
        .filter(|finding| finding.place.label.is_none() || is_within(&finding.place.file, scope));
    found.extend(of_notebook.map(AuditFinding::of));
    found
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

fn acts(registers: &[Register], scope: &str) -> Vec<AuditAct> {
    let mut entries: Vec<&Entry> = registers.iter().flat_map(Register::entries).collect();
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

fn constants<'e>(
    placed: impl Iterator<Item = (&'e VerifiedPage, &'e VerifiedResult)>,
) -> Vec<AuditConstant> {
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
