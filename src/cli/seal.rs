//! `ionfolio seal`.

use crate::cli::ExitStatus;
use crate::cli::arguments::SealArguments;
use crate::cli::compute::status_of;
use crate::cli::terminal::Terminal;
use crate::cli::{diagnostics, verify};
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{
    HandError, KeyChoice, SealError, SealRequest, Sealed, SignerError, has_key, make_key,
    seal_page, signer_name,
};
use std::path::Path;

pub(super) fn run(
    arguments: &SealArguments,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    let request = match request(arguments, surroundings, terminal) {
        Ok(request) => request,
        Err(error) => {
            terminal.say(&error.to_string());
            return ExitStatus::CannotReadOrWrite;
        }
    };
    let mut status = ExitStatus::AllWell;
    let mut unlisted = None;
    for path in &arguments.pages {
        match seal_page(path, &request, surroundings) {
            Ok(sealed) => {
                status = status.and(told(path, &sealed, surroundings, terminal));
                unlisted = sealed.signer.filter(|_| !sealed.on_roster).or(unlisted);
            }
            Err(error) => {
                terminal.say(&format!("{}: {error}", path.display()));
                status = status.and(failed(&error));
            }
        }
    }
    if let Some(signer) = unlisted {
        terminal.say(&format!(
            "{signer} is not on a roster yet: the signature shows that nothing was altered, but not whose it is. `ionfolio signer enrol` puts \
             the public key on the notebook's roster."
        ));
    }
    status
}

/// Who signs; makes the key of a new signer.
fn request(
    arguments: &SealArguments,
    surroundings: &Surroundings<'_>,
    terminal: &Terminal,
) -> Result<SealRequest, SignerError> {
    let name = arguments.new_signer.as_ref().or(arguments.signer.as_ref());
    let signer = name.map(|name| signer_name(name)).transpose()?;
    if let (Some(printed), Some(signer)) = (&arguments.new_signer, &signer)
        && !has_key(surroundings, signer)
    {
        let made = make_key(surroundings, signer, None)?;
        terminal.say(&format!(
            "A signing key was made for {printed} ({signer}): {}",
            made.fingerprint
        ));
        terminal.say(&format!(
            "  private key: {}, {}",
            made.path.display(),
            made.permissions
        ));
        terminal.say(
            "  It never enters the notebook. Keep a copy in a safe place; nobody can make it again.",
        );
    }
    Ok(SealRequest {
        label: arguments.label.clone(),
        key: KeyChoice {
            signer,
            file: arguments.key.clone(),
        },
        printed: arguments.new_signer.clone(),
    })
}

fn told(
    path: &Path,
    sealed: &Sealed,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    let name = path.display().to_string();
    diagnostics::tell(terminal, &name, sealed.page.text(), &sealed.faults);
    if sealed.faults.iter().any(crate::text::Diagnostic::is_error) {
        terminal.say(&format!(
            "{name}: nothing was sealed; correct the errors first"
        ));
        return ExitStatus::WrongInput;
    }
    if sealed.blocks.is_empty() {
        terminal.say(&format!("{name}: no equilibrium block"));
    }
    for block in sealed.blocks.iter().filter(|block| block.now) {
        terminal.say(&format!(
            "{name}: {}: {} (sealed)",
            block.label, block.headline
        ));
    }
    if let (Some(signer), Some(register)) = (&sealed.signer, &sealed.register) {
        terminal.say(&format!(
            "Signed by {signer}; register: {}",
            register.display()
        ));
    }
    if sealed.blocks.iter().any(|block| !block.now) {
        return verify::sealed(path, surroundings, terminal);
    }
    ExitStatus::AllWell
}

fn failed(error: &SealError) -> ExitStatus {
    match error {
        SealError::Compute(error) => status_of(error),
        SealError::Records(_)
        | SealError::NoSuchLabel { .. }
        | SealError::SourceNotSealed { .. }
        | SealError::SourceChanged { .. }
        | SealError::Name { .. } => ExitStatus::WrongInput,
        SealError::Record { .. }
        | SealError::Hand(HandError::NotOnRoster { .. } | HandError::Name { .. }) => {
            ExitStatus::Finding
        }
        SealError::Signer(_)
        | SealError::Lock(_)
        | SealError::Missing(_)
        | SealError::Hand(HandError::Register { .. }) => ExitStatus::CannotReadOrWrite,
    }
}
