//! `ionfolio compute`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{ComputeArguments, Format};
use crate::cli::diagnostics;
use crate::cli::terminal::Terminal;
use crate::procedure::{
    ComputeError, Computed, ComputedBlock, Desk, Mode, Standing, compute_page, compute_text,
};
use serde_json::Value;
use std::io::Read;
use std::path::Path;

/// Largest page from standard input in bytes.
const LARGEST: u64 = 8 * 1024 * 1024;

/// Whether a page has errors.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Outcome {
    Sound,
    Faulty,
}

pub(super) fn run(arguments: &ComputeArguments, terminal: &mut Terminal) -> ExitStatus {
    let mode = if arguments.dry_run {
        Mode::DryRun
    } else {
        Mode::Write
    };
    let mut status = ExitStatus::AllWell;
    let mut results = Vec::new();
    for path in &arguments.pages {
        let computed = if path.as_os_str() == "-" {
            from_input(arguments, terminal)
        } else {
            compute_page(path, mode)
        };
        match computed {
            Ok(computed) => status = status.and(told(&computed, arguments, terminal, &mut results)),
            Err(error) => {
                terminal.say(&format!("{}: {error}", path.display()));
                status = status.and(status_of(&error));
            }
        }
    }
    if arguments.format == Format::Json {
        terminal.out(&Value::Array(results).to_string());
    }
    status
}

/// A page from standard input; it is printed with its results.
fn from_input(
    arguments: &ComputeArguments,
    terminal: &mut Terminal,
) -> Result<Computed, ComputeError> {
    let mut bytes = Vec::new();
    std::io::stdin()
        .take(LARGEST + 1)
        .read_to_end(&mut bytes)
        .map_err(|error| ComputeError::File(error.into()))?;
    if u64::try_from(bytes.len()).is_ok_and(|size| size > LARGEST) {
        return Err(ComputeError::TooLarge { limit: LARGEST });
    }
    let desk = Desk::at(Path::new("."))?;
    let computed = compute_text(&desk, "standard-input.md", bytes, Mode::DryRun)?;
    if arguments.format != Format::Json {
        terminal.out_bytes(&computed.bytes);
    }
    Ok(computed)
}

fn told(
    computed: &Computed,
    arguments: &ComputeArguments,
    terminal: &mut Terminal,
    results: &mut Vec<Value>,
) -> ExitStatus {
    let mut status = ExitStatus::AllWell;
    if tell_faults(computed, arguments.format, terminal, &mut Vec::new()) == Outcome::Faulty {
        status = ExitStatus::WrongInput;
    } else if computed.blocks.is_empty() {
        terminal.say(&format!("{}: no equilibrium block", computed.name));
    }
    for block in &computed.blocks {
        results.extend(block.json.clone());
        if arguments.format != Format::Json {
            terminal.say(&line(computed, block, arguments.dry_run));
        }
        if block.standing == Standing::SealedOtherwise {
            status = status.and(ExitStatus::Finding);
        }
        if let Some(outside) = &block.outside_limit {
            terminal.say(&format!("{}: {}: {outside}", computed.name, block.label));
            status = status.and(ExitStatus::Finding);
        }
    }
    status
}

/// `rinse/2026-11-03.md:24: rb-118: pH 7.20 ... (draft written)`.
fn line(computed: &Computed, block: &ComputedBlock, dry_run: bool) -> String {
    let place = block
        .line
        .map(|line| format!(":{line}"))
        .unwrap_or_default();
    let standing = match block.standing {
        Standing::None => "no result",
        Standing::Drafted if dry_run || !computed.written => "not written",
        Standing::Drafted => "draft written",
        Standing::Unchanged => "draft unchanged",
        Standing::Sealed => "sealed, left alone",
        Standing::SealedOtherwise => {
            "sealed, left alone; its block was changed since: restore it, or use `ionfolio amend`"
        }
    };
    let headline = block.headline.as_deref().unwrap_or("not computed");
    format!(
        "{}{place}: {}: {headline} ({standing})",
        computed.name, block.label
    )
}

/// Tells what is wrong with a page.
pub(super) fn tell_faults(
    computed: &Computed,
    format: Format,
    terminal: &mut Terminal,
    objects: &mut Vec<Value>,
) -> Outcome {
    let text = computed.page.text();
    match format {
        Format::Text => diagnostics::tell(terminal, &computed.name, text, &computed.faults),
        Format::Short => {
            for fault in &computed.faults {
                terminal.say_line(&diagnostics::short(&computed.name, text, fault));
            }
        }
        Format::Json => objects.extend(
            computed
                .faults
                .iter()
                .map(|fault| diagnostics::object(&computed.name, text, fault)),
        ),
    }
    let errors = computed
        .faults
        .iter()
        .filter(|fault| fault.is_error())
        .count();
    if errors == 0 {
        return Outcome::Sound;
    }
    if format == Format::Text {
        let plural = if errors == 1 { "error" } else { "errors" };
        terminal.say(&format!(
            "{}: {errors} {plural}; `ionfolio explain NAME` tells more of the name in brackets",
            computed.name
        ));
    }
    Outcome::Faulty
}

/// The exit status of a page that could not be worked on.
pub(super) fn status_of(error: &ComputeError) -> ExitStatus {
    match error {
        ComputeError::File(_)
        | ComputeError::Replace(_)
        | ComputeError::Lock(_)
        | ComputeError::TooLarge { .. } => ExitStatus::CannotReadOrWrite,
        ComputeError::Page(_) | ComputeError::Desk(_) | ComputeError::Placing { .. } => {
            ExitStatus::WrongInput
        }
    }
}
