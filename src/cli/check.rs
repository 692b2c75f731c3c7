//! `ionfolio check`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{CheckArguments, Format};
use crate::cli::compute::{Outcome, status_of, tell_faults};
use crate::cli::terminal::Terminal;
use crate::procedure::{Mode, compute_page};
use serde_json::Value;

pub(super) fn run(arguments: &CheckArguments, terminal: &mut Terminal) -> ExitStatus {
    let mut status = ExitStatus::AllWell;
    let mut objects = Vec::new();
    for path in &arguments.pages {
        match compute_page(path, Mode::Check) {
            Ok(computed) => {
                let outcome = tell_faults(&computed, arguments.format, terminal, &mut objects);
                if outcome == Outcome::Sound && arguments.format != Format::Json {
                    let count = computed.blocks.len();
                    terminal.say(&match count {
                        0 => format!("{}: no equilibrium block", path.display()),
                        1 => format!("{}: 1 block, nothing wrong", path.display()),
                        count => format!("{}: {count} blocks, nothing wrong", path.display()),
                    });
                }
                if outcome == Outcome::Faulty {
                    status = status.and(ExitStatus::WrongInput);
                }
            }
            Err(error) => {
                terminal.say(&format!("{}: {error}", path.display()));
                status = status.and(status_of(&error));
            }
        }
    }
    if arguments.format == Format::Json {
        terminal.out(&Value::Array(objects).to_string());
    }
    status
}
