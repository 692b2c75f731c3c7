//! An audit as Markdown, HTML, CSV or JSON.

use crate::procedure::audit::Audit;
use crate::procedure::audit_sections::{Section, narrowed, sections};
use crate::procedure::countersign::escaped;
use std::fmt::Write;

/// How a report is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum AuditFormat {
    /// Headings and tables.
    Markdown,
    /// One page without scripts, for screen and paper.
    Html,
    /// One row for each result, act and finding.
    Csv,
    /// Everything, one array with one object for each notebook.
    Json,
}

/// The report on one notebook or several.
#[must_use]
pub fn audit_report(audits: &[Audit], format: AuditFormat) -> String {
    match format {
        AuditFormat::Markdown => audits.iter().map(markdown).collect(),
        AuditFormat::Html => html(audits),
        AuditFormat::Csv => csv(audits),
        AuditFormat::Json => serde_json::to_string_pretty(audits).unwrap_or_default() + "\n",
    }
}

fn title(audit: &Audit) -> String {
    let title = audit.title.as_deref().unwrap_or("a notebook without title");
    format!("Audit of {title}")
}

/// A text on one line, with what does not show or turns the reading order made visible.
fn shown(text: &str) -> String {
    let mut shown = String::new();
    for c in text.chars() {
        match c {
            '\n' | '\r' | '\t' => shown.push(' '),
            '\u{200b}'..='\u{200f}'
            | '\u{202a}'..='\u{202e}'
            | '\u{2060}'..='\u{2069}'
            | '\u{feff}' => {
                shown.push_str(&hidden(c));
            }
            c if c.is_control() => shown.push_str(&hidden(c)),
            c => shown.push(c),
        }
    }
    shown
}

fn hidden(c: char) -> String {
    format!("(U+{:04X})", u32::from(c))
}

fn markdown(audit: &Audit) -> String {
    let cell = |text: &str| escaped(&shown(text));
    let mut text = format!("# {}\n", cell(&title(audit)));
    for section in sections(audit) {
        text.push_str("\n## ");
        text.push_str(section.heading);
        text.push('\n');
        for sentence in &section.sentences {
            text.push('\n');
            text.push_str(&cell(sentence));
            text.push('\n');
        }
        if !section.rows.is_empty() {
            text.push('\n');
            text.push_str(&markdown_row(section.columns.iter().map(|name| cell(name))));
            text.push_str(&markdown_row(
                section.columns.iter().map(|_| "---".to_owned()),
            ));
        }
        for row in &section.rows {
            text.push_str(&markdown_row(row.iter().map(|text| cell(text))));
        }
    }
    text
}

fn markdown_row(cells: impl Iterator<Item = String>) -> String {
    format!("| {} |\n", cells.collect::<Vec<_>>().join(" | "))
}

const STYLE: &str = "body{font:15px/1.45 sans-serif;margin:2em auto;max-width:75em;padding:0 1em}\
table{border-collapse:collapse;width:100%;font-size:13px}\
th,td{border:1px solid #999;padding:.25em .5em;text-align:left;vertical-align:top;overflow-wrap:anywhere}\
th{background:#eee}\
@media print{body{margin:0;max-width:none}tr{break-inside:avoid}thead{display:table-header-group}}";

fn html(audits: &[Audit]) -> String {
    let titles: Vec<String> = audits.iter().map(title).collect();
    let mut text = format!(
        "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n<title>{}</title>\n<style>{STYLE}</style>\n</head>\n<body>\n",
        entities(&titles.join("; "))
    );
    for audit in audits {
        text.push_str(&tagged("h1", &title(audit)));
        for section in sections(audit) {
            text.push_str(&html_section(&section));
        }
    }
    text.push_str("</body>\n</html>\n");
    text
}

fn html_section(section: &Section) -> String {
    let mut text = tagged("h2", section.heading);
    for sentence in &section.sentences {
        text.push_str(&tagged("p", sentence));
    }
    if section.rows.is_empty() {
        return text;
    }
    let row = |tag: &str, cells: &mut dyn Iterator<Item = &str>| -> String {
        let cells: String = cells.map(|cell| tagged(tag, cell)).collect();
        format!("<tr>{cells}</tr>\n")
    };
    text.push_str("<table>\n<thead>\n");
    text.push_str(&row("th", &mut section.columns.iter().copied()));
    text.push_str("</thead>\n<tbody>\n");
    for cells in &section.rows {
        text.push_str(&row("td", &mut cells.iter().map(String::as_str)));
    }
    text.push_str("</tbody>\n</table>\n");
    text
}

fn tagged(tag: &str, text: &str) -> String {
    format!("<{tag}>{}</{tag}>\n", entities(text))
}

fn entities(text: &str) -> String {
    shown(text)
        .replace('&', "&amp;")
        .replace('<', "&lt;")
        .replace('>', "&gt;")
        .replace('"', "&quot;")
        .replace('\'', "&#39;")
}

const CSV_COLUMNS: [&str; 8] = [
    "notebook",
    "kind",
    "place",
    "what",
    "who",
    "time",
    "detail",
    "remedy or reason",
];

fn csv(audits: &[Audit]) -> String {
    let mut text = csv_row(&CSV_COLUMNS.map(str::to_owned));
    for audit in audits {
        let notebook = audit.notebook.clone().unwrap_or_default();
        let mut row = |kind: &str, cells: [&str; 6]| {
            let [place, what, who, time, detail, remedy] = cells.map(str::to_owned);
            let kind = kind.to_owned();
            let cells = [
                notebook.clone(),
                kind,
                place,
                what,
                who,
                time,
                detail,
                remedy,
            ];
            text.push_str(&csv_row(&cells));
        };
        for result in &audit.results {
            let verdict = match result.verifies {
                None => "not signed",
                Some(true) => "verifies",
                Some(false) => "does not verify",
            };
            let value = result.result.as_deref().unwrap_or_default();
            let who = result.performed.as_deref().unwrap_or_default();
            let reason = result.reason.as_deref().unwrap_or_default();
            let detail = format!("{value} ({verdict}; computed again: {})", result.recomputed);
            row(
                "result",
                [&result.place, result.state, who, "", &detail, reason],
            );
        }
        for act in &audit.acts {
            let who = format!("{} ({})", act.name, act.signer);
            let place = act.place.as_deref().unwrap_or_default();
            let note = act.note.as_deref().unwrap_or_default();
            let number = format!("act {}", act.number);
            row("act", [place, &act.meaning, &who, &act.time, &number, note]);
        }
        for finding in &audit.findings {
            let (place, name) = (&finding.place, &finding.name);
            let kind = &finding.severity;
            row(
                kind,
                [place, name, "", "", &finding.sentence, &finding.remedy],
            );
        }
        if let Some(sentence) = narrowed(audit) {
            row("note", ["", "narrowed", "", "", &sentence, ""]);
        }
        for unread in &audit.unread {
            row(
                "warning",
                [unread, "not-read", "", "", "was not examined", ""],
            );
        }
    }
    text
}

/// A row after RFC 4180. A cell that a spreadsheet would take for a formula is preceded by an apostrophe.
fn csv_row(cells: &[String; CSV_COLUMNS.len()]) -> String {
    let mut row = String::new();
    for (at, cell) in cells.iter().enumerate() {
        let formula = cell.starts_with(['=', '+', '-', '@']);
        let mark = if formula { "'" } else { "" };
        let comma = if at == 0 { "" } else { "," };
        let cell = shown(cell).replace('"', "\"\"");
        write!(row, "{comma}\"{mark}{cell}\"").unwrap_or_default();
    }
    row + "\r\n"
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::audit::AuditFinding;

    fn audit() -> Audit {
        Audit {
            title: Some("Vessel | Street <b>".to_owned()),
            notebook: Some("5f1c".to_owned()),
            scope: String::new(),
            filters: Vec::new(),
            left_out: crate::procedure::LeftOut::default(),
            time: "2026-11-10T08:00:00+01:00".to_owned(),
            program: "ionfolio 0.1.0".to_owned(),
            keeper: None,
            pages: 1,
            results: Vec::new(),
            findings: vec![AuditFinding {
                name: "answer-changed".to_owned(),
                severity: "failure".to_owned(),
                place: "=1+1 \"a\", b".to_owned(),
                sentence: "changed\u{202e} here\nand there".to_owned(),
                remedy: "restore".to_owned(),
            }],
            acts: Vec::new(),
            signers: Vec::new(),
            constants: Vec::new(),
            unread: Vec::new(),
        }
    }

    #[test]
    fn nothing_that_a_page_holds_becomes_part_of_the_form() {
        let report = |format| audit_report(&[audit()], format);
        let markdown = report(AuditFormat::Markdown);
        assert!(markdown.contains("Vessel \\| Street \\<b\\>"), "{markdown}");
        assert!(
            markdown.contains("changed(U+202E) here and there"),
            "{markdown}"
        );
        let html = report(AuditFormat::Html);
        assert!(
            html.contains("Street &lt;b&gt;") && !html.contains("<b>"),
            "{html}"
        );
        let csv = report(AuditFormat::Csv);
        assert!(csv.contains("\"'=1+1 \"\"a\"\", b\""), "{csv}");
        assert_eq!(csv.lines().count(), 2);
    }

    #[test]
    fn a_failure_is_a_failure_in_every_form() {
        let audit = audit();
        assert!(audit.failed() && audit.asks());
        for format in [
            AuditFormat::Markdown,
            AuditFormat::Html,
            AuditFormat::Csv,
            AuditFormat::Json,
        ] {
            let text = audit_report(std::slice::from_ref(&audit), format);
            assert!(
                text.replace('\\', "").contains("answer-changed"),
                "{format:?}"
            );
        }
    }
}
