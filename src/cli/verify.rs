//! `ionfolio verify`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{Format, VerifyArguments};
use crate::cli::terminal::Terminal;
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{Recomputed, VerifiedPage, VerifiedResult, pages, verify_page};
use serde_json::{Value, json};
use std::path::Path;

pub(super) fn run(
    arguments: &VerifyArguments,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    let mut status = ExitStatus::AllWell;
    let mut objects = Vec::new();
    for path in &arguments.paths {
        let list = match pages(path) {
            Ok(list) => list,
            Err(error) => {
                terminal.say(&format!("{}: {error}", path.display()));
                status = status.and(ExitStatus::CannotReadOrWrite);
                continue;
            }
        };
        for page in list {
            match verify_page(&page, surroundings) {
                Ok(verified) => {
                    for result in &verified.results {
                        status = status.and(tell(&verified, result, arguments.format, terminal));
                        objects.push(object(&verified, result));
                    }
                }
                Err(error) => {
                    terminal.say(&format!("{}: {error}", page.display()));
                    status = status.and(ExitStatus::CannotReadOrWrite);
                }
            }
        }
    }
    if arguments.format == Format::Json {
        terminal.out(&Value::Array(objects).to_string());
    }
    status
}

/// After sealing a page whose results were sealed before: whether they verify. A signer that is on no roster is no failure here.
pub(super) fn sealed(
    path: &Path,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    match verify_page(path, surroundings) {
        Ok(verified) => {
            let mut status = ExitStatus::AllWell;
            for result in verified.results.iter().filter(|result| !result.draft) {
                tell(&verified, result, Format::Text, terminal);
                if result.failed() {
                    status = ExitStatus::Finding;
                }
            }
            status
        }
        Err(error) => {
            terminal.say(&format!("{}: {error}", path.display()));
            ExitStatus::CannotReadOrWrite
        }
    }
}

fn tell(
    page: &VerifiedPage,
    result: &VerifiedResult,
    format: Format,
    terminal: &mut Terminal,
) -> ExitStatus {
    let quiet = format == Format::Json;
    let at = format!("{}#{}", page.name, result.label);
    let finding = result.failed() || !result.unlisted.is_empty() || !result.findings.is_empty();
    if quiet {
        return if finding {
            ExitStatus::Finding
        } else {
            ExitStatus::AllWell
        };
    }
    if result.draft {
        terminal.out(&format!("{at}: draft, not sealed"));
        return ExitStatus::AllWell;
    }
    let word = if result.failed() {
        "DOES NOT VERIFY"
    } else {
        "sealed, verifies"
    };
    let mark = result
        .mark
        .map(|mark| format!(", {mark}"))
        .unwrap_or_default();
    let figure = result
        .statement
        .as_ref()
        .map(|statement| format!(": {}", statement.result))
        .unwrap_or_default();
    terminal.out(&format!("{at}{figure} ({word}{mark})"));
    for act in &result.acts {
        let act = act.act();
        terminal.out(&format!(
            "  {} by {} ({}), {}",
            act.meaning,
            act.name,
            act.signer,
            act.time.to_rfc3339()
        ));
    }
    match &result.recomputed {
        Recomputed::Not => {}
        Recomputed::Same => terminal.out("  computed again: every byte of the answer is the same"),
        Recomputed::SameFigure { cause } => terminal.out(&format!(
            "  computed again: the same figure; the text differs, since {cause}"
        )),
        Recomputed::Different {
            recorded,
            now,
            cause,
        } => {
            terminal.out(&format!(
                "  computed again: {now}, recorded {recorded}; {cause}"
            ));
        }
        Recomputed::Failed { reason } => terminal.out(&format!("  not computed again: {reason}")),
    }
    for finding in &result.findings {
        terminal.out(&format!(
            "  [{}] {}: {}; {}",
            finding.name(),
            finding.place,
            finding.sentence(),
            finding.remedy()
        ));
    }
    for signer in &result.unlisted {
        terminal.out(&format!("  [signer-not-on-roster] {signer} is on no roster: nothing was altered, but whose signature it is rests on trust"));
    }
    if finding {
        ExitStatus::Finding
    } else {
        ExitStatus::AllWell
    }
}

fn object(page: &VerifiedPage, result: &VerifiedResult) -> Value {
    let findings: Vec<Value> = result
        .findings
        .iter()
        .map(|finding| {
            json!({
                "name": finding.name(),
                "severity": finding.severity().to_string(),
                "place": finding.place.to_string(),
                "sentence": finding.sentence(),
                "remedy": finding.remedy(),
            })
        })
        .collect();
    let acts: Vec<Value> = result
        .acts
        .iter()
        .map(|act| {
            let act = act.act();
            json!({
                "meaning": act.meaning.to_string(),
                "signer": act.signer.to_string(),
                "name": act.name.to_string(),
                "time": act.time.to_rfc3339(),
                "number": act.number,
            })
        })
        .collect();
    json!({
        "page": page.name,
        "label": result.label,
        "draft": result.draft,
        "mark": result.mark,
        "verifies": !result.failed() && !result.draft,
        "result": result.statement.as_ref().map(|statement| statement.result.to_string()),
        "acts": acts,
        "recomputed": match &result.recomputed {
            Recomputed::Not => "not computed",
            Recomputed::Same => "same",
            Recomputed::SameFigure { .. } => "same figure",
            Recomputed::Different { .. } => "different",
            Recomputed::Failed { .. } => "failed",
        },
        "unlisted_signers": result.unlisted,
        "findings": findings,
    })
}
