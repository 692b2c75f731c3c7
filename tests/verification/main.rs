//! The laboratory's verification record: each published value is one test with its own name and line of output.
//!
//! `cargo test --test verification`; a part of it by name, e.g. `cargo test --test verification phthalate`.
#![expect(
    clippy::panic,
    clippy::as_conversions,
    clippy::cast_precision_loss,
    reason = "a wrong case file stops the run, and counts of cases are small"
)]

mod case;
mod figures;
mod laboratory;

use case::{Case, CaseFile, Misses};
use libtest_mimic::{Arguments, Failed, Trial};
use std::fs;
use std::path::PathBuf;
use std::process::ExitCode;
use std::sync::Arc;

fn main() -> ExitCode {
    let arguments = Arguments::from_args();
    let folder = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/verification");
    let misses: Arc<Misses> = Arc::new(read(&folder.join("misses.yaml")));
    let mut trials = Vec::new();
    let mut cases: Vec<Case> = Vec::new();
    let mut known: Vec<(String, String)> = Vec::new();
    for path in case_files(&folder) {
        let file: CaseFile = read(&path);
        let set = stem(&path);
        for case in file.cases {
            known.push((set.clone(), case.name.clone()));
            cases.push(case.clone());
            let misses = Arc::clone(&misses);
            let set = set.clone();
            trials.push(Trial::test(format!("{set}/{}", case.name), move || {
                let found = laboratory::found(&case)?;
                let miss = misses.get(&set).and_then(|file| file.get(&case.name));
                case.judge(found, miss).map_err(Failed::from)
            }));
        }
    }
    trials.extend(figures::trials(&folder, &cases));
    trials.push(Trial::test(
        "misses.yaml names cases that exist",
        move || {
            for (set, file) in misses.iter() {
                for name in file.keys() {
                    if !known.iter().any(|(s, n)| s == set && n == name) {
                        return Err(format!("{set}: {name}").into());
                    }
                }
            }
            Ok(())
        },
    ));
    libtest_mimic::run(&arguments, trials).exit_code()
}

fn case_files(folder: &std::path::Path) -> Vec<PathBuf> {
    let mut files: Vec<PathBuf> = fs::read_dir(folder.join("cases"))
        .unwrap_or_else(|error| panic!("cases: {error}"))
        .map(|entry| {
            entry
                .unwrap_or_else(|error| panic!("cases: {error}"))
                .path()
        })
        .collect();
    files.sort();
    files
}

fn stem(path: &std::path::Path) -> String {
    path.file_stem()
        .map(|stem| stem.to_string_lossy().into_owned())
        .unwrap_or_default()
}

fn read<T: serde::de::DeserializeOwned>(path: &std::path::Path) -> T {
    let text =
        fs::read_to_string(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    serde_yaml::from_str(&text).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}
