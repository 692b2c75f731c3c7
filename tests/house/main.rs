//! The house rules that a machine can check: import table, file sizes, top level, names, documentation.
#![expect(
    clippy::string_slice,
    reason = "offsets come from `find` in the same text"
)]

use std::collections::{BTreeMap, BTreeSet};
use std::fs;
use std::path::{Path, PathBuf};

/// What each module may import from this crate, and from which outside packages besides `std`; lowest first.
const IMPORT_TABLE: [(&str, &[&str], &[&str]); 14] = [
    ("text", &[], &["strsim", "unicode_width"]),
    ("quantity", &[], &[]),
    ("equilibrium", &[], &["libm"]),
    (
        "record",
        &[],
        &["sha2", "ssh_key", "chrono", "zeroize", "rand_core"],
    ),
    ("page", &["text"], &["pulldown_cmark"]),
    ("yaml", &["text"], &["saphyr_parser"]),
    ("substance", &["quantity"], &["serde_yaml"]),
    ("problem", &["quantity", "substance"], &[]),
    (
        "block",
        &["text", "yaml", "quantity", "substance", "problem"],
        &["csv"],
    ),
    (
        "solution",
        &["quantity", "substance", "equilibrium", "problem"],
        &["rand_chacha", "levenberg_marquardt", "nalgebra"],
    ),
    (
        "report",
        &["quantity", "substance", "problem", "solution"],
        &["minijinja", "serde_json"],
    ),
    (
        "notebook",
        &["text", "yaml", "quantity", "substance"],
        &["tempfile"],
    ),
    (
        "procedure",
        &[
            "text",
            "quantity",
            "equilibrium",
            "record",
            "page",
            "yaml",
            "substance",
            "problem",
            "block",
            "solution",
            "report",
            "notebook",
        ],
        &["chrono", "serde_json", "sha2", "zeroize"],
    ),
    (
        "cli",
        &["procedure", "text"],
        &["clap", "annotate_snippets", "anstream", "serde_json"],
    ),
];

/// Packages that any module but `equilibrium` may use for error types and derives.
const EVERYWHERE: [&str; 2] = ["thiserror", "serde"];

/// Longest file, in lines.
const LONGEST_FILE: usize = 400;

/// Files that may be longer, each with its reason; at most three, none over 600 lines.
const LONGER_FILES: [(&str, &str); 0] = [];

/// Everything that may stand at the top level beside dotfiles.
const TOP_LEVEL: [&str; 8] = [
    "Cargo.lock",
    "Cargo.toml",
    "DEVELOPERS.md",
    "README.md",
    "entry_templates",
    "examples",
    "src",
    "tests",
];

#[test]
fn imports_follow_the_table() {
    let mut wrong = Vec::new();
    for (module, inside, outside) in IMPORT_TABLE {
        for file in rust_files(&source().join(module)) {
            let text = production_part(&read(&file));
            for name in names_after(&text, "crate::") {
                if name != module && !inside.contains(&name.as_str()) {
                    wrong.push(format!("{}: crate::{name}", show(&file)));
                }
            }
            for name in packages(&text) {
                let everywhere = module != "equilibrium" && EVERYWHERE.contains(&name.as_str());
                if !everywhere && !outside.contains(&name.as_str()) {
                    wrong.push(format!("{}: package {name}", show(&file)));
                }
            }
            if text.contains("super::super") {
                wrong.push(format!("{}: super::super", show(&file)));
            }
        }
    }
    assert!(
        wrong.is_empty(),
        "imports against the table:\n{}",
        wrong.join("\n")
    );
}

#[test]
fn source_has_the_rooms_of_the_table_and_no_other() {
    let rooms: BTreeSet<String> = entries(&source())
        .into_iter()
        .filter(|path| path.is_dir())
        .map(|path| name_of(&path))
        .collect();
    let table: BTreeSet<String> = IMPORT_TABLE
        .iter()
        .map(|(module, ..)| (*module).to_owned())
        .collect();
    assert_eq!(rooms, table);
}

#[test]
fn files_stay_short() {
    assert!(LONGER_FILES.len() <= 3, "at most three exceptions");
    let exceptions: BTreeMap<&str, &str> = LONGER_FILES.into_iter().collect();
    let long: Vec<String> = rust_files(&source())
        .into_iter()
        .filter_map(|file| {
            let lines = read(&file).lines().count();
            let limit = if exceptions.contains_key(show(&file).as_str()) {
                600
            } else {
                LONGEST_FILE
            };
            (lines > limit).then(|| format!("{} has {lines} lines", show(&file)))
        })
        .collect();
    assert!(
        long.is_empty(),
        "files over the budget:\n{}",
        long.join("\n")
    );
}

#[test]
fn no_grab_bags() {
    let banned = [
        "utils", "util", "common", "helpers", "misc", "types", "manager", "core",
    ];
    let found: Vec<String> = rust_files(&source())
        .into_iter()
        .filter(|file| {
            file.file_stem()
                .is_some_and(|stem| banned.contains(&stem.to_string_lossy().as_ref()))
        })
        .map(|file| show(&file))
        .collect();
    assert!(found.is_empty(), "a concept without a name: {found:?}");
}

#[test]
fn every_file_says_what_it_is() {
    let silent: Vec<String> = rust_files(&source())
        .into_iter()
        .filter(|file| !read(file).starts_with("//!"))
        .map(|file| show(&file))
        .collect();
    assert!(silent.is_empty(), "no module documentation: {silent:?}");
}

#[test]
fn top_level_is_the_fixed_list() {
    let found: Vec<String> = entries(&root())
        .into_iter()
        .map(|path| name_of(&path))
        .filter(|name| !name.starts_with('.') && name != "target")
        .collect();
    for name in &found {
        assert!(
            TOP_LEVEL.contains(&name.as_str()),
            "{name} at the top level"
        );
    }
    for name in TOP_LEVEL {
        assert!(found.iter().any(|found| found == name), "{name} is missing");
    }
}

#[test]
fn developers_page_names_every_room() {
    let page = read(&root().join("DEVELOPERS.md"));
    for (module, ..) in IMPORT_TABLE {
        assert!(
            page.contains(&format!("| `{module}` |")),
            "DEVELOPERS.md has no row for {module}"
        );
    }
}

#[test]
fn documentation_of_numbers_gives_their_unit() {
    let words = [
        "unit",
        "mol",
        "kg",
        "litre",
        "gram",
        "kelvin",
        "celsius",
        "°c",
        "ph",
        "pk",
        "dimensionless",
        "lg",
        "ratio",
        "fraction",
        "coefficient",
        "charge",
        "second",
        "metre",
        "volt",
        "ml",
        " l",
        " g",
        "percent",
        "1/",
        "pa",
        "probability",
        "natural logarithm",
        "logarithm",
        "number",
        "decimal",
    ];
    let mut bare = Vec::new();
    for file in rust_files(&source()) {
        let text = production_part(&read(&file));
        for (signature, documentation) in public_functions_returning_f64(&text) {
            let low = documentation.to_lowercase();
            if !words.iter().any(|word| low.contains(word)) {
                bare.push(format!("{}: {signature}", show(&file)));
            }
        }
    }
    assert!(
        bare.is_empty(),
        "numbers without a unit in their documentation:\n{}",
        bare.join("\n")
    );
}

/// Public functions whose signature returns a bare `f64`, with the documentation above each.
fn public_functions_returning_f64(text: &str) -> Vec<(String, String)> {
    let mut found = Vec::new();
    let mut documentation = String::new();
    for line in text.lines().map(str::trim) {
        if let Some(comment) = line.strip_prefix("///") {
            documentation.push_str(comment);
            documentation.push('\n');
        } else if line.starts_with("#[") {
        } else {
            let public = line.starts_with("pub fn") || line.starts_with("pub const fn");
            if public && line.contains("-> f64 ") {
                found.push((line.to_owned(), documentation.clone()));
            }
            documentation.clear();
        }
    }
    found
}

/// The text before the unit tests, without comments.
fn production_part(text: &str) -> String {
    let end = text.find("#[cfg(test)]\nmod ").unwrap_or(text.len());
    text[..end].to_owned()
}

/// The identifiers that follow `prefix` outside comments.
fn names_after(text: &str, prefix: &str) -> BTreeSet<String> {
    code_lines(text)
        .flat_map(|line| {
            line.match_indices(prefix)
                .map(|(at, _)| identifier(&line[at + prefix.len()..]))
                .collect::<Vec<_>>()
        })
        .filter(|name| !name.is_empty())
        .collect()
}

/// The packages outside `std` that `use` lines name.
fn packages(text: &str) -> BTreeSet<String> {
    code_lines(text)
        .filter_map(|line| line.trim_start().strip_prefix("use "))
        .map(identifier)
        .filter(|name| {
            !["std", "crate", "super", "self", "core"].contains(&name.as_str())
                && name.chars().next().is_some_and(char::is_lowercase)
        })
        .collect()
}

fn code_lines(text: &str) -> impl Iterator<Item = &str> {
    text.lines()
        .filter(|line| !line.trim_start().starts_with("//"))
}

fn identifier(text: &str) -> String {
    text.chars()
        .take_while(|c| c.is_alphanumeric() || *c == '_')
        .collect()
}

fn rust_files(folder: &Path) -> Vec<PathBuf> {
    let mut files = Vec::new();
    for path in entries(folder) {
        if path.is_dir() {
            files.extend(rust_files(&path));
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            files.push(path);
        }
    }
    files
}

fn entries(folder: &Path) -> Vec<PathBuf> {
    let mut paths: Vec<PathBuf> = fs::read_dir(folder)
        .unwrap_or_else(|error| panic!("{}: {error}", folder.display()))
        .map(|entry| entry.unwrap().path())
        .collect();
    paths.sort();
    paths
}

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn source() -> PathBuf {
    root().join("src")
}

fn read(path: &Path) -> String {
    fs::read_to_string(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

fn show(path: &Path) -> String {
    path.strip_prefix(root())
        .unwrap_or(path)
        .display()
        .to_string()
}

fn name_of(path: &Path) -> String {
    path.file_name()
        .map(|name| name.to_string_lossy().into_owned())
        .unwrap_or_default()
}
