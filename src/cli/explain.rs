//! `ionfolio explain`.

use crate::cli::ExitStatus;
use crate::cli::arguments::ExplainArguments;
use crate::cli::terminal::Terminal;
use crate::procedure::explain;

pub(super) fn run(arguments: &ExplainArguments, terminal: &mut Terminal) -> ExitStatus {
    match explain(&arguments.name) {
        Ok(found) => {
            for line in textwrap::wrap(
                &format!("{}: {}", found.name, found.sentence),
                terminal.width,
            ) {
                terminal.out(&line);
            }
            for line in textwrap::wrap(&format!("Remedy: {}", found.remedy), terminal.width) {
                terminal.out(&line);
            }
            ExitStatus::AllWell
        }
        Err(near) => {
            let help = if near.is_empty() {
                String::new()
            } else {
                format!("; did you mean {}?", near.join(", "))
            };
            terminal.say(&format!(
                "there is no rule, finding or caution {:?}{help}",
                arguments.name
            ));
            ExitStatus::WrongInput
        }
    }
}
