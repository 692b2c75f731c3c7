//! `ionfolio signer`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{Earlier, SignerArguments, SignerCommand};
use crate::cli::terminal::Terminal;
use crate::procedure::surroundings::Surroundings;
use crate::procedure::{
    EarlierActs, KeeperError, KeyChoice, RosterSigned, enrol, make_key, retire, roster_lines,
    sign_roster, signer_name,
};

pub(super) fn run(
    arguments: &SignerArguments,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    match &arguments.command {
        SignerCommand::New { name, passphrase } => new(name, *passphrase, surroundings, terminal),
        SignerCommand::List { notebook } => match roster_lines(notebook) {
            Ok(lines) => {
                for line in lines {
                    terminal.out(&line);
                }
                ExitStatus::AllWell
            }
            Err(error) => failed(&error.to_string(), terminal),
        },
        SignerCommand::Enrol {
            signer,
            key,
            earlier_acts,
            notebook,
        } => match enrol(notebook, signer, key, said_of(*earlier_acts), surroundings) {
            Ok(path) => {
                terminal.say(&format!("{signer} enrolled on {}", path.display()));
                ExitStatus::AllWell
            }
            Err(error) => failed(&error.to_string(), terminal),
        },
        SignerCommand::SignRoster {
            signer,
            key,
            notebook,
        } => {
            let choice = match signer.as_deref().map(signer_name).transpose() {
                Ok(signer) => KeyChoice {
                    signer,
                    file: key.clone(),
                },
                Err(error) => return failed(&error.to_string(), terminal),
            };
            signed(sign_roster(notebook, &choice, surroundings), terminal)
        }
        SignerCommand::Retire { signer, notebook } => {
            match retire(notebook, signer, surroundings) {
                Ok(path) => {
                    terminal.say(&format!(
                        "{signer} retired on {}; what was signed before stays good",
                        path.display()
                    ));
                    ExitStatus::AllWell
                }
                Err(error) => failed(&error.to_string(), terminal),
            }
        }
    }
}

fn said_of(earlier: Option<Earlier>) -> Option<EarlierActs> {
    earlier.map(|earlier| match earlier {
        Earlier::Count => EarlierActs::Count,
        Earlier::Refuse => EarlierActs::Refuse,
    })
}

fn signed(result: Result<RosterSigned, KeeperError>, terminal: &mut Terminal) -> ExitStatus {
    match result {
        Ok(signed) => {
            terminal.out(&signed.fingerprint);
            terminal.say(
                "The roster is signed as it stands. Hand the fingerprint to verifiers by another way than the notebook; after each change of \
                 roster or people it is signed again.",
            );
            ExitStatus::AllWell
        }
        Err(error) => failed(&error.to_string(), terminal),
    }
}

fn new(
    name: &str,
    passphrase: bool,
    surroundings: &Surroundings<'_>,
    terminal: &mut Terminal,
) -> ExitStatus {
    let typed = passphrase
        .then(|| surroundings.keys.new_passphrase(name))
        .flatten();
    if passphrase && typed.is_none() {
        return failed(
            "no passphrase: the two were not the same, or nobody can be asked here; no key was made",
            terminal,
        );
    }
    let locked = typed.as_ref().map(|text| text.as_str());
    let made = signer_name(name).and_then(|signer| make_key(surroundings, &signer, locked));
    match made {
        Ok(made) => {
            terminal.out(&format!("{} {}", made.signer, made.fingerprint));
            terminal.say(&format!(
                "private key: {}, {}",
                made.path.display(),
                made.permissions
            ));
            terminal.say("The signer is on no roster yet; give the `.pub` file beside it to the keeper of the notebook's roster.");
            ExitStatus::AllWell
        }
        Err(error) => failed(&error.to_string(), terminal),
    }
}

fn failed(message: &str, terminal: &Terminal) -> ExitStatus {
    terminal.say(message);
    ExitStatus::CannotReadOrWrite
}
