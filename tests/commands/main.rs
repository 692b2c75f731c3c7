//! Console sessions: what the README and the examples show, wrong input, files written.
//!
//! Each test works in a copy of the example notebook with keys of its own; nothing is written into the checkout.
#![expect(
    clippy::unwrap_used,
    clippy::disallowed_methods,
    reason = "a test may stop where it cannot go on, and writes the files it needs"
)]

mod laboratory;

use laboratory::{Laboratory, Said};
use std::fs;

const PAGE: &str = "rinse/2026-11-03-citric-rinse.md";

#[test]
fn a_page_in_a_signed_page_out() {
    let laboratory = Laboratory::new();
    let first = laboratory.run(&["seal", PAGE, "--new-signer", "Bench Analyst"]);
    assert_eq!(first.status, 0, "{}", first.errors);
    for words in [
        "A signing key was made for Bench Analyst (bench.analyst)",
        "0600",
        "rinse-cr-0311: pH 2.26",
        "not on a roster yet",
    ] {
        assert!(first.errors.contains(words), "{words} in\n{}", first.errors);
    }
    let sealed = laboratory.read(PAGE);
    let second = laboratory.run(&["seal", PAGE, "--new-signer", "Bench Analyst"]);
    assert_eq!(second.status, 0, "{}", second.errors);
    assert!(
        second.output.contains("sealed, verifies"),
        "{}",
        second.output
    );
    assert!(
        second
            .output
            .contains("every byte of the answer is the same"),
        "{}",
        second.output
    );
    assert_eq!(
        laboratory.read(PAGE),
        sealed,
        "a second run changes nothing"
    );
}

#[test]
fn the_private_key_is_for_its_owner_only() {
    use std::os::unix::fs::PermissionsExt;
    let laboratory = Laboratory::new();
    laboratory.run(&["signer", "new", "Bench Analyst"]);
    let key = laboratory.keys().join("bench.analyst");
    assert_eq!(
        fs::metadata(&key).unwrap().permissions().mode() & 0o777,
        0o600
    );
    fs::set_permissions(&key, fs::Permissions::from_mode(0o644)).unwrap();
    let refused = laboratory.run(&["seal", PAGE, "--signer", "bench.analyst"]);
    assert_eq!(refused.status, 3);
    let said = refused
        .errors
        .split_whitespace()
        .collect::<Vec<_>>()
        .join(" ");
    assert!(said.contains("may be read by others"), "{said}");
}

#[test]
fn every_example_page_computes_and_a_second_run_changes_nothing() {
    let laboratory = Laboratory::new();
    let pages = laboratory.pages();
    assert!(pages.len() >= 8, "{pages:?}");
    for page in &pages {
        let before = laboratory.read(page);
        let first = laboratory.run(&["compute", page]);
        assert!(first.status <= 1, "{page}: {}", first.errors);
        let with_drafts = laboratory.read(page);
        let second = laboratory.run(&["compute", page]);
        assert_eq!(second.status, first.status);
        assert_eq!(laboratory.read(page), with_drafts, "{page}");
        assert!(with_drafts.len() > before.len(), "{page} has no result");
    }
}

#[test]
fn removing_the_results_gives_back_the_page() {
    let laboratory = Laboratory::new();
    for page in laboratory.pages() {
        let before = laboratory.read(&page);
        laboratory.run(&["compute", &page]);
        let after = laboratory.read(&page);
        let parsed = ionfolio::page::Page::read(after.into_bytes()).unwrap();
        assert_eq!(parsed.without_results(), before.into_bytes(), "{page}");
    }
}

#[test]
fn a_dry_run_writes_nothing_and_json_is_one_array() {
    let laboratory = Laboratory::new();
    let before = laboratory.read(PAGE);
    let told = laboratory.run(&["compute", PAGE, "--dry-run", "--format", "json"]);
    assert_eq!(laboratory.read(PAGE), before);
    let results: serde_json::Value = serde_json::from_str(&told.output).unwrap();
    let result = results.get(0).unwrap();
    for key in [
        "page",
        "label",
        "model",
        "task",
        "pH",
        "p_hydrogen",
        "ionic_strength_mol_per_kg",
        "species",
        "buffer_capacity_mol_per_L",
        "uncertainty",
        "shortcuts",
        "constants",
        "assumptions",
        "cautions",
        "certificate",
    ] {
        assert!(result.get(key).is_some(), "{key} in {result}");
    }
}

#[test]
fn standard_input_goes_to_standard_output() {
    let laboratory = Laboratory::new();
    let page = "# P\n\n```equilibrium\nlabel: a\ntask: speciation\ncontents:\n  acetic acid: 0.100 mol/L\n```\n";
    let told = laboratory.run_with(&["compute", "-"], page);
    assert_eq!(told.status, 0, "{}", told.errors);
    assert!(told.output.starts_with(page.trim_end()), "{}", told.output);
    assert!(
        told.output.contains("<!-- ionfolio result a -->"),
        "{}",
        told.output
    );
}

#[test]
fn every_error_of_a_page_is_told_at_once_with_its_place() {
    let laboratory = Laboratory::new();
    laboratory.write(
        "wrong.md",
        "# Wrong\r\n\r\n```equilibrium\r\nlabel: Bad Label\r\ntask: speciation\r\ntemprature: 25 °C\r\ncontents:\r\n  malonc acid: 0,0350 \
         mol/L\r\n  acetic acid: 0.1 N\r\n```\r\n",
    );
    let told = laboratory.run(&["check", "wrong.md"]);
    assert_eq!(told.status, 2);
    for words in [
        "wrong.md:4:8",
        "label: bad-label",
        "temprature",
        "did you mean `temperature`",
        "did you mean `malonic acid`",
        "write `0.0350`",
        "normality",
        "^",
    ] {
        assert!(told.errors.contains(words), "{words} in\n{}", told.errors);
    }
    let short = laboratory.run(&["check", "--format", "short", "wrong.md"]);
    assert!(
        short
            .errors
            .lines()
            .all(|line| line.starts_with("wrong.md:")),
        "{}",
        short.errors
    );
}

#[test]
fn unlucky_input_is_named_and_loses_nothing() {
    let laboratory = Laboratory::new();
    fs::write(laboratory.path("latin.md"), b"caf\xe9\n").unwrap();
    laboratory.write("plain.md", "# No block here\n");
    laboratory.write(
        "bomb.md",
        &format!("```equilibrium\nlabel: {}\n```\n", "[".repeat(50_000)),
    );
    for (arguments, status, words) in [
        (["check", "latin.md"], 2, "UTF-8"),
        (["check", "rinse"], 3, "directory"),
        (["check", "none.md"], 3, "no such file"),
        (["compute", "plain.md"], 0, "no equilibrium block"),
        (["check", "bomb.md"], 2, "bomb.md:"),
    ] {
        let told = laboratory.run(&arguments);
        assert_eq!(told.status, status, "{arguments:?}: {}", told.errors);
        assert!(
            told.errors.contains(words),
            "{arguments:?}: {}",
            told.errors
        );
    }
    let large = fs::File::create(laboratory.path("large.md")).unwrap();
    large.set_len(1 << 30).unwrap();
    let told = laboratory.run(&["compute", "large.md"]);
    assert_eq!(told.status, 3);
    assert!(told.errors.contains("1073741824 bytes"), "{}", told.errors);
}

#[test]
fn a_read_only_page_is_left_alone() {
    let laboratory = Laboratory::new();
    let path = laboratory.path(PAGE);
    let mut permissions = fs::metadata(&path).unwrap().permissions();
    permissions.set_readonly(true);
    fs::set_permissions(&path, permissions).unwrap();
    let before = laboratory.read(PAGE);
    let told = laboratory.run(&["compute", PAGE]);
    assert_eq!(told.status, 3);
    assert!(told.errors.contains("read-only"), "{}", told.errors);
    assert_eq!(laboratory.read(PAGE), before);
}

#[test]
fn one_changed_byte_of_a_sealed_page_is_found() {
    let laboratory = Laboratory::new();
    laboratory.run(&["seal", PAGE, "--new-signer", "Bench Analyst"]);
    let sealed = laboratory.read(PAGE);
    for (from, to, finding) in [
        ("mass: 19.21", "mass: 19.31", "question-changed"),
        ("**pH 2.26", "**pH 2.27", "answer-changed"),
        ("result: pH 2.26", "result: pH 2.27", "record-changed"),
    ] {
        assert!(sealed.contains(from), "{from}");
        laboratory.write(PAGE, &sealed.replacen(from, to, 1));
        let Said { status, output, .. } = laboratory.run(&["verify", PAGE]);
        assert_eq!(status, 1, "{from}");
        assert!(output.contains(finding), "{finding} in\n{output}");
        assert!(output.contains("DOES NOT VERIFY"), "{output}");
    }
}

#[test]
fn entry_writes_a_page_once() {
    let laboratory = Laboratory::new();
    let listed = laboratory.run(&["entry"]);
    assert!(listed.output.lines().count() >= 5, "{}", listed.output);
    let written = laboratory.run(&["entry", "new.md", "--from", "solution-preparation"]);
    assert_eq!(written.status, 0, "{}", written.errors);
    let again = laboratory.run(&["entry", "new.md", "--from", "blank"]);
    assert_eq!(again.status, 3);
}

#[test]
fn the_library_is_listed_and_shown() {
    let laboratory = Laboratory::new();
    let listed = laboratory.run(&["constants", "list"]);
    assert!(listed.output.lines().count() > 60);
    let shown = laboratory.run(&["constants", "show", "7664-38-2"]);
    for words in ["phosphoric acid", "pK 2.148", "recalled", "spread"] {
        assert!(shown.output.contains(words), "{words} in\n{}", shown.output);
    }
    let wrong = laboratory.run(&["constants", "show", "phosforic acid"]);
    assert_eq!(wrong.status, 2);
    assert!(wrong.errors.contains("phosphoric acid"), "{}", wrong.errors);
}

#[test]
fn help_teaches_and_a_wrong_command_is_status_two() {
    let laboratory = Laboratory::new();
    let help = laboratory.run(&["--help"]);
    assert_eq!(help.status, 0);
    assert!(
        help.output.contains("Where to begin") && help.output.contains("Exit status"),
        "{}",
        help.output
    );
    assert_eq!(laboratory.run(&["frobnicate"]).status, 2);
    assert_eq!(laboratory.run(&["explain", "decimal-comma"]).status, 0);
    assert_eq!(laboratory.run(&["explain", "decimal-coma"]).status, 2);
}
