//! `ionfolio verify`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{Format, VerifyArguments};
use crate::cli::terminal::Terminal;
use crate::cli::verified_json::object;
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{
    AuditFinding, Examined, Recomputed, VerifiedPage, VerifiedResult, examine, is_notebook, pages,
    verify_page,
};
use serde_json::{Value, json};
use std::path::Path;

/// What is told, and how.
struct Telling<'t> {
    format: Format,
    terminal: &'t mut Terminal,
    objects: Vec<Value>,
    status: ExitStatus,
}

pub(super) fn run(
    arguments: &VerifyArguments,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    let mut telling = Telling {
        format: arguments.format,
        terminal,
        objects: Vec::new(),
        status: ExitStatus::AllWell,
    };
    for path in &arguments.paths {
        if is_notebook(path) || (path.is_dir() && arguments.keeper.is_some()) {
            match examine(path, arguments.keeper.as_deref(), surroundings) {
                Ok(examined) => telling.notebook(&examined),
                Err(error) => telling.unread(path, &error),
            }
            continue;
        }
        match pages(path) {
            Ok(list) => {
                for page in list {
                    match verify_page(&page, surroundings) {
                        Ok(verified) => telling.page(&verified),
                        Err(error) => telling.unread(&page, &error),
                    }
                }
            }
            Err(error) => telling.unread(path, &error),
        }
    }
    let Telling {
        objects, status, ..
    } = telling;
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
                text(&verified.name, result, terminal);
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

impl Telling<'_> {
    fn unread(&mut self, path: &Path, error: &dyn std::error::Error) {
        self.terminal.say(&format!("{}: {error}", path.display()));
        self.status = self.status.and(ExitStatus::CannotReadOrWrite);
    }

    fn page(&mut self, page: &VerifiedPage) {
        for result in &page.results {
            match self.format {
                Format::Text => text(&page.name, result, self.terminal),
                Format::Short => short(&page.name, result, self.terminal),
                Format::Json => self.objects.push(object(&page.name, result)),
            }
            if result.asks() {
                self.status = self.status.and(ExitStatus::Finding);
            }
        }
    }

    fn notebook(&mut self, examined: &Examined) {
        for page in &examined.pages {
            self.page(page);
        }
        for (path, error) in &examined.unread {
            self.unread(path, error);
        }
        for link in &examined.links {
            self.terminal.say(&format!(
                "{}: a symbolic link, not followed",
                link.display()
            ));
        }
        for finding in &examined.findings {
            match self.format {
                Format::Text => self.terminal.out(&format!(
                    "[{}] {}: {}; {}",
                    finding.name(),
                    finding.place,
                    finding.sentence(),
                    finding.remedy()
                )),
                Format::Short => self.terminal.out(&format!(
                    "{}: {} [{}]: {}",
                    finding.place,
                    finding.severity(),
                    finding.name(),
                    finding.sentence()
                )),
                Format::Json => self.objects.push(json!(AuditFinding::of(finding))),
            }
        }
        if examined.asks() {
            self.status = self.status.and(ExitStatus::Finding);
        }
    }
}

/// One line for each result and finding.
fn short(page: &str, result: &VerifiedResult, terminal: &mut Terminal) {
    let at = format!("{page}#{}", result.label);
    terminal.out(&format!("{at}: {}", verdict(result)));
    for finding in &result.findings {
        terminal.out(&format!(
            "{}: {} [{}]: {}",
            finding.place,
            finding.severity(),
            finding.name(),
            finding.sentence()
        ));
    }
}

fn verdict(result: &VerifiedResult) -> String {
    let word = match (result.draft, result.failed()) {
        (true, _) => return "draft, not sealed".to_owned(),
        (false, true) => "DOES NOT VERIFY",
        (false, false) => "sealed, verifies",
    };
    let mark = result.mark.map(|mark| format!(", {mark}"));
    format!("{word}{}", mark.unwrap_or_default())
}

fn text(page: &str, result: &VerifiedResult, terminal: &mut Terminal) {
    let at = format!("{page}#{}", result.label);
    if result.draft {
        terminal.out(&format!("{at}: {}", verdict(result)));
        return;
    }
    let figure = result
        .statement()
        .map(|statement| format!(": {}", statement.result))
        .unwrap_or_default();
    terminal.out(&format!("{at}{figure} ({})", verdict(result)));
    for signed in result.acts() {
        let act = signed.act();
        terminal.out(&format!(
            "  {} by {} ({}), {}",
            act.meaning,
            act.name,
            act.signer,
            act.time.to_rfc3339()
        ));
    }
    if let Some(line) = recomputed(&result.recomputed) {
        terminal.out(&format!("  {line}"));
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
}

fn recomputed(recomputed: &Recomputed) -> Option<String> {
    Some(match recomputed {
        Recomputed::Not => return None,
        Recomputed::Same => "computed again: every byte of the answer is the same".to_owned(),
        Recomputed::SameFigure { cause } => {
            format!("computed again: the same figures; the text differs, since {cause}")
        }
        Recomputed::Different {
            recorded,
            now,
            cause,
        } => format!("computed again: {now}, recorded {recorded}; {cause}"),
        Recomputed::Failed { reason } => format!("not computed again: {reason}"),
    })
}
