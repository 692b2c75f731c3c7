//! Arguments, exit status, terminal: the thin end.
//!
//! [`run`] reads the command line, has the work done by [`procedure`](crate::procedure), and tells what happened: results on standard output,
//! everything else on standard error.

mod arguments;
mod audit;
mod check;
mod compute;
mod constants;
mod countersign;
mod diagnostics;
mod entry;
mod exit_status;
mod explain;
mod seal;
mod signer;
mod terminal;
mod verified_json;
mod verify;

use crate::cli::arguments::{Arguments, Command};
use crate::cli::terminal::Terminal;
use crate::procedure::surroundings::{Program, Surroundings, System};
use clap::Parser;
pub use exit_status::ExitStatus;
use std::ffi::OsString;

/// Runs the program.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitStatus {
    let mut terminal = Terminal::new();
    let parsed = match Arguments::try_parse_from(arguments) {
        Ok(parsed) => parsed,
        Err(error) => {
            // Help and version are asked for; everything else is a wrong command line.
            let asked = !error.use_stderr();
            let printed = error.print().is_ok();
            return if asked && printed {
                ExitStatus::AllWell
            } else {
                ExitStatus::WrongInput
            };
        }
    };
    let program = Program::running();
    let system = System;
    let surroundings = Surroundings {
        clock: &system,
        entropy: &system,
        keys: &system,
        program: &program,
    };
    let status = match parsed.command {
        Command::Compute(arguments) => compute::run(&arguments, &mut terminal),
        Command::Check(arguments) => check::run(&arguments, &mut terminal),
        Command::Seal(arguments) => seal::run(&arguments, &surroundings, &mut terminal),
        Command::Countersign(arguments) => {
            countersign::run(&arguments, &surroundings, &mut terminal)
        }
        Command::Amend(arguments) => countersign::amend(&arguments, &mut terminal),
        Command::Verify(arguments) => verify::run(&arguments, &surroundings, &mut terminal),
        Command::Audit(arguments) => audit::run(&arguments, &surroundings, &mut terminal),
        Command::Constants(arguments) => constants::run(&arguments, &mut terminal),
        Command::Entry(arguments) => entry::run(&arguments, &mut terminal),
        Command::Signer(arguments) => signer::run(&arguments, &surroundings, &mut terminal),
        Command::Explain(arguments) => explain::run(&arguments, &mut terminal),
    };
    terminal.finish(status)
}
