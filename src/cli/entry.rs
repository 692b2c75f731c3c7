//! `ionfolio entry`.

use crate::cli::ExitStatus;
use crate::cli::arguments::EntryArguments;
use crate::cli::terminal::Terminal;
use crate::procedure::{EntryError, TEMPLATES, new_page};

pub(super) fn run(arguments: &EntryArguments, terminal: &mut Terminal) -> ExitStatus {
    let (Some(page), Some(template)) = (&arguments.page, &arguments.from) else {
        for (name, purpose, _) in TEMPLATES {
            terminal.out(&format!("{name:<24} {purpose}"));
        }
        if arguments.page.is_some() {
            terminal.say("say which template with `--from`");
            return ExitStatus::WrongInput;
        }
        return ExitStatus::AllWell;
    };
    match new_page(page, template) {
        Ok(()) => {
            terminal.say(&format!(
                "{}: written from {template}; fill the places between « and »",
                page.display()
            ));
            ExitStatus::AllWell
        }
        Err(error) => {
            terminal.say(&format!("{}: {error}", page.display()));
            match error {
                EntryError::Unknown { .. } => ExitStatus::WrongInput,
                EntryError::Replace(_) => ExitStatus::CannotReadOrWrite,
            }
        }
    }
}
