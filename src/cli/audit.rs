//! `ionfolio audit`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{AuditArguments, ReportFormat};
use crate::cli::terminal::Terminal;
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{AuditFilter, AuditFormat, audit, audit_report, signer_name};

pub(super) fn run(
    arguments: &AuditArguments,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    let filter = match filter(arguments) {
        Ok(filter) => filter,
        Err(message) => {
            terminal.say(&message);
            return ExitStatus::WrongInput;
        }
    };
    let mut status = ExitStatus::AllWell;
    let mut audits = Vec::new();
    for path in &arguments.paths {
        if !path.exists() {
            terminal.say(&format!(
                "{}: there is no such file or folder",
                path.display()
            ));
            status = status.and(ExitStatus::CannotReadOrWrite);
            continue;
        }
        match audit(path, arguments.keeper.as_deref(), &filter, surroundings) {
            Ok(audit) => {
                if audit.asks() {
                    status = status.and(ExitStatus::Finding);
                }
                audits.push(audit);
            }
            Err(error) => {
                terminal.say(&format!("{}: {error}", path.display()));
                status = status.and(ExitStatus::CannotReadOrWrite);
            }
        }
    }
    if audits.is_empty() {
        return status;
    }
    let format = match arguments.format {
        ReportFormat::Markdown => AuditFormat::Markdown,
        ReportFormat::Html => AuditFormat::Html,
        ReportFormat::Csv => AuditFormat::Csv,
        ReportFormat::Json => AuditFormat::Json,
    };
    terminal.out_bytes(audit_report(&audits, format).as_bytes());
    status
}

/// What the report is narrowed to, or why that cannot be.
fn filter(arguments: &AuditArguments) -> Result<AuditFilter, String> {
    let signer = arguments.signer.as_deref().map(signer_name).transpose();
    let filter = AuditFilter {
        signer: signer.map_err(|error| error.to_string())?,
        substance: arguments.substance.clone(),
        label: arguments.label.clone(),
        ..AuditFilter::default()
    };
    filter
        .between(arguments.since.as_deref(), arguments.until.as_deref())
        .map_err(|error| error.to_string())
}
