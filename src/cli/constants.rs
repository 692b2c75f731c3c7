//! `ionfolio constants`.

use crate::cli::ExitStatus;
use crate::cli::arguments::{ConstantsArguments, ConstantsCommand};
use crate::cli::terminal::Terminal;
use crate::procedure::{Desk, LibraryLine, list, show};
use crate::text::nearest;
use std::path::Path;

pub(super) fn run(arguments: &ConstantsArguments, terminal: &mut Terminal) -> ExitStatus {
    let desk = match Desk::at(Path::new(".")) {
        Ok(desk) => desk,
        Err(error) => {
            terminal.say(&error.to_string());
            return ExitStatus::WrongInput;
        }
    };
    match &arguments.command {
        ConstantsCommand::List { containing } => {
            let lines = list(&desk, containing);
            if lines.is_empty() {
                terminal.say(&format!("nothing in the library contains {containing:?}"));
                return ExitStatus::WrongInput;
            }
            table(&lines, terminal);
            ExitStatus::AllWell
        }
        ConstantsCommand::Show { substance } => match show(&desk, substance) {
            Ok(lines) => {
                for line in lines {
                    terminal.out(&line);
                }
                ExitStatus::AllWell
            }
            Err(error) => {
                let near = nearest(substance, error.names.iter().map(String::as_str));
                let help = if near.is_empty() {
                    String::new()
                } else {
                    format!("; did you mean {}?", near.join(", "))
                };
                terminal.say(&format!("{error}{help}"));
                ExitStatus::WrongInput
            }
        },
    }
}

/// As many columns as the terminal has room for, the name first.
fn table(lines: &[LibraryLine], terminal: &mut Terminal) {
    let rows: Vec<[&str; 5]> = lines
        .iter()
        .map(|line| {
            [
                line.name.as_str(),
                &line.pk,
                &line.formula,
                &line.basis,
                &line.cas,
            ]
        })
        .collect();
    let heads = ["substance", "pK", "formula", "basis", "CAS"];
    let widths: Vec<usize> = (0..heads.len())
        .map(|column| {
            let cells = rows
                .iter()
                .filter_map(|row| row.get(column))
                .map(|cell| cell.chars().count());
            cells
                .chain(heads.get(column).map(|head| head.len()))
                .max()
                .unwrap_or(0)
        })
        .collect();
    let mut room = terminal.width;
    let shown: Vec<usize> = (0..heads.len())
        .take_while(|column| {
            let need = widths.get(*column).copied().unwrap_or(0) + 2;
            let fits = *column == 0 || need <= room;
            room = room.saturating_sub(need);
            fits
        })
        .collect();
    for row in std::iter::once(&heads).chain(&rows) {
        let cells: Vec<String> = shown
            .iter()
            .filter_map(|column| {
                Some(format!(
                    "{:width$}",
                    row.get(*column)?,
                    width = widths.get(*column)?
                ))
            })
            .collect();
        terminal.out(cells.join("  ").trim_end());
    }
}
