//! `ionfolio countersign` and `ionfolio amend`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{AmendArguments, As, CountersignArguments};
use crate::cli::terminal::Terminal;
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{
    CountersignRequest, Judgement, KeyChoice, Recomputed, amend_page, countersign_page,
    signer_name, verify_page,
};
use std::io::{BufRead, IsTerminal};
use std::path::Path;

pub(super) fn run(
    arguments: &CountersignArguments,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    let signer = match arguments.signer.as_deref().map(signer_name).transpose() {
        Ok(signer) => signer,
        Err(error) => {
            terminal.say(&error.to_string());
            return ExitStatus::WrongInput;
        }
    };
    let request = CountersignRequest {
        label: arguments.label.clone(),
        key: KeyChoice {
            signer,
            file: arguments.key.clone(),
        },
        judgement: match arguments.meaning {
            As::Reviewed => Judgement::Reviewed,
            As::Approved => Judgement::Approved,
            As::Rejected => Judgement::Rejected,
            As::Withdrawn => Judgement::Withdrawn,
        },
        note: arguments.note.clone(),
    };
    let mut status = ExitStatus::AllWell;
    for path in &arguments.pages {
        if !show(path, arguments.label.as_deref(), surroundings, terminal) {
            status = status.and(ExitStatus::Finding);
            continue;
        }
        if !arguments.yes && !agreed(terminal) {
            terminal.say("nothing was signed");
            status = status.and(ExitStatus::Finding);
            continue;
        }
        match countersign_page(path, &request, surroundings) {
            Ok(labels) => {
                for label in labels {
                    terminal.say(&format!(
                        "{}: {label}: signed as {}",
                        path.display(),
                        request.judgement.word()
                    ));
                }
            }
            Err(error) => {
                terminal.say(&format!("{}: {error}", path.display()));
                status = status.and(ExitStatus::Finding);
            }
        }
    }
    status
}

/// Shows what is signed: recorded and recomputed figures side by side. False if something does not verify.
fn show(
    path: &Path,
    label: Option<&str>,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> bool {
    let verified = match verify_page(path, surroundings) {
        Ok(verified) => verified,
        Err(error) => {
            terminal.say(&format!("{}: {error}", path.display()));
            return false;
        }
    };
    let mut sound = true;
    for result in verified
        .results
        .iter()
        .filter(|result| !result.draft && label.is_none_or(|label| label == result.label))
    {
        let recorded = result
            .statement()
            .map(|statement| statement.result.to_string())
            .unwrap_or_default();
        let now = match &result.recomputed {
            Recomputed::Same => format!("{recorded}, every byte the same"),
            Recomputed::SameFigure { cause } => {
                format!("{recorded}; the text differs, since {cause}")
            }
            Recomputed::Different { now, .. } => now.clone(),
            Recomputed::Failed { reason } => format!("not computed: {reason}"),
            Recomputed::Not => "not computed".to_owned(),
        };
        terminal.say(&format!("{}#{}", verified.name, result.label));
        terminal.say(&format!("  recorded    {recorded}"));
        terminal.say(&format!("  recomputed  {now}"));
        if result.failed() {
            terminal.say("  does not verify; see `ionfolio verify`");
            sound = false;
        }
    }
    sound
}

/// Whether the person at the terminal agrees; where nobody can be asked, nobody did.
fn agreed(terminal: &Terminal) -> bool {
    if !std::io::stdin().is_terminal() {
        terminal.say("nobody can be asked here; `--yes` signs without asking");
        return false;
    }
    terminal.say("Sign this? Type yes:");
    let mut line = String::new();
    std::io::stdin().lock().read_line(&mut line).is_ok() && line.trim() == "yes"
}

pub(super) fn amend(arguments: &AmendArguments, terminal: &mut Terminal) -> ExitStatus {
    match amend_page(&arguments.page, &arguments.label, &arguments.reason) {
        Ok(()) => {
            terminal.say(&format!(
                "{}: {}: the sealed result is kept and marked as superseded. Correct the block, then compute and seal it.",
                arguments.page.display(),
                arguments.label
            ));
            ExitStatus::AllWell
        }
        Err(error) => {
            terminal.say(&format!("{}: {error}", arguments.page.display()));
            ExitStatus::WrongInput
        }
    }
}
