//! Every entry template is a page without a fault once its places are filled with the sample values of its head comment, and none before.
#![expect(
    clippy::unwrap_used,
    reason = "files of the package are read; a missing one fails the test"
)]

use ionfolio::block::{Attachments, Context, Defaults, SolutionError, Solutions, outline, read};
use ionfolio::page::Page;
use ionfolio::problem::{Composition, SolutionReference};
use ionfolio::substance::Catalogue;
use std::path::Path;
use std::sync::Arc;

/// What lies beside a page: readings of a titration, invented.
#[derive(Debug)]
struct Beside;

impl Solutions for Beside {
    fn solution(&self, _: &SolutionReference) -> Result<Arc<Composition>, SolutionError> {
        Err(SolutionError::Unknown { labels: Vec::new() })
    }
}

impl Attachments for Beside {
    fn read(&self, _: &str) -> Result<Vec<u8>, String> {
        Ok(b"volume_mL,pH\n0.00,4.01\n5.00,4.80\n10.00,5.41\n15.00,6.00\n20.00,8.90\n25.00,11.70\n".to_vec())
    }
}

/// The templates with their names, in order.
fn templates() -> Vec<(String, String)> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("entry_templates");
    let mut found: Vec<(String, String)> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| {
            let path = entry.unwrap().path();
            let name = path.file_name().unwrap().to_str().unwrap().to_owned();
            (name, std::fs::read_to_string(path).unwrap())
        })
        .collect();
    found.sort();
    found
}

/// The places and sample values of the head comment.
fn samples(template: &str) -> Vec<(String, String)> {
    let head = template.split("-->").next().unwrap();
    head.lines()
        .filter(|line| line.starts_with('«'))
        .map(|line| {
            let (place, value) = line.split_once("»: ").unwrap();
            (format!("{place}»"), value.to_owned())
        })
        .collect()
}

/// What is wrong with the blocks of a page, and how many blocks there are.
fn faults(page: &str) -> (Vec<String>, usize) {
    let page = Page::read(page.as_bytes().to_vec()).unwrap();
    assert_eq!(page.diagnostics(), []);
    let context = Context {
        catalogue: Catalogue::embedded().unwrap(),
        defaults: &Defaults::program(),
        solutions: &Beside,
        attachments: &Beside,
    };
    let mut faults = Vec::new();
    for block in page.blocks() {
        let text = block.content().text();
        assert!(outline(text).label.is_some());
        let found = read(text, &context).diagnostics;
        faults.extend(found.iter().map(|fault| format!("{fault:?}")));
    }
    (faults, page.blocks().len())
}

#[test]
fn a_filled_template_has_no_fault() {
    let templates = templates();
    assert!(templates.len() >= 11);
    for (name, template) in templates {
        let samples = samples(&template);
        assert!(
            samples
                .iter()
                .all(|(place, _)| template.matches(place.as_str()).count() > 1),
            "{name}: a sample without a place"
        );
        let body = template.split_once("-->").unwrap().1;
        let filled = samples
            .iter()
            .fold(body.to_owned(), |text, (place, value)| {
                text.replace(place, value)
            });
        assert!(!filled.contains('«'), "{name}: a place without a sample");
        let (faults, blocks) = faults(&filled);
        assert!(faults.is_empty(), "{name}: {faults:#?}");
        assert!(blocks > 0, "{name}");
    }
}

#[test]
fn an_unfilled_template_is_not_computed() {
    for (name, template) in templates() {
        assert!(!faults(&template).0.is_empty(), "{name}");
    }
}
