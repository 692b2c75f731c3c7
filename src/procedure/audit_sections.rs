//! An audit as headings and tables, the same for paper and screen.

use crate::procedure::audit::{Audit, AuditConstant, AuditResult};

/// A heading with sentences and at most one table.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Section {
    pub(super) heading: &'static str,
    pub(super) sentences: Vec<String>,
    pub(super) columns: &'static [&'static str],
    pub(super) rows: Vec<Vec<String>>,
}

/// What the report is, and is not.
const LIMITS: [&str; 4] = [
    "Times are the signers' claims, unless a later act of somebody else bounds them.",
    "Acts that were removed from the end of every register are found only if somebody later saw them: hold this report against an earlier copy.",
    "That a constant is printed with its source does not say that the value was compared with it.",
    "The report evidences what was altered. It does not prevent alteration, and it does not make a laboratory compliant.",
];

/// The sections of a report, in their order.
pub(super) fn sections(audit: &Audit) -> Vec<Section> {
    vec![
        summary(audit),
        findings(audit),
        results(audit),
        never_reviewed(audit),
        amendments(audit),
        trail(audit),
        constants(audit),
        signers(audit),
        Section {
            heading: "What this report cannot tell",
            sentences: LIMITS.map(str::to_owned).to_vec(),
            columns: &[],
            rows: Vec::new(),
        },
    ]
}

fn summary(audit: &Audit) -> Section {
    let count = |state| audit.results.iter().filter(|r| r.state == state).count();
    let sealed: Vec<&AuditResult> = audit
        .results
        .iter()
        .filter(|r| r.state != "draft")
        .collect();
    let failing = sealed.iter().filter(|r| r.verifies == Some(false)).count();
    let row = |name: &str, value: String| vec![name.to_owned(), value];
    let scope = if audit.scope.is_empty() {
        "the whole notebook".to_owned()
    } else {
        audit.scope.clone()
    };
    let keeper = audit
        .keeper
        .clone()
        .unwrap_or_else(|| "no fingerprint given: the roster is trusted as found".to_owned());
    let verdict = match (audit.failed(), audit.filters.is_empty()) {
        (true, _) => "Something does not verify; see what was found.",
        (false, true) => "Everything that was signed verifies.",
        (false, false) => "Everything reported here that was signed verifies.",
    };
    let mut sentences = vec![verdict.to_owned()];
    sentences.extend(narrowed(audit));
    let filters = if audit.filters.is_empty() {
        "nothing left out".to_owned()
    } else {
        audit.filters.join("; ")
    };
    Section {
        heading: "Summary",
        sentences,
        columns: &["", "found"],
        rows: vec![
            row("notebook", audit.notebook.clone().unwrap_or_default()),
            row("reported on", scope),
            row("narrowed to", filters),
            row("examined", audit.time.clone()),
            row("by", audit.program.clone()),
            row("keeper of the roster", keeper),
            row("pages", audit.pages.to_string()),
            row("results in force", count("sealed").to_string()),
            row("superseded", count("superseded").to_string()),
            row("withdrawn", count("withdrawn").to_string()),
            row("drafts, not signed", count("draft").to_string()),
            row("signed results that do not verify", failing.to_string()),
        ],
    }
}

/// What a narrowed report leaves out, so that nobody takes it for the whole.
pub(super) fn narrowed(audit: &Audit) -> Option<String> {
    if audit.filters.is_empty() {
        return None;
    }
    let left = &audit.left_out;
    let worst = if left.failing {
        ", and some do not verify"
    } else {
        ""
    };
    Some(format!(
        "The report is narrowed to {}. Results left out: {}; findings of them that ask for something: {}{worst}.",
        audit.filters.join(", "),
        left.results,
        left.findings
    ))
}

fn findings(audit: &Audit) -> Section {
    let mut rows: Vec<(u8, Vec<String>)> = audit
        .findings
        .iter()
        .map(|finding| {
            let weight = match finding.severity.as_str() {
                "failure" => 0,
                "warning" => 1,
                _ => 2,
            };
            let cells = [
                &finding.severity,
                &finding.name,
                &finding.place,
                &finding.sentence,
                &finding.remedy,
            ];
            (weight, cells.map(Clone::clone).to_vec())
        })
        .collect();
    rows.sort_by_key(|(weight, _)| *weight);
    let mut rows: Vec<Vec<String>> = rows.into_iter().map(|(_, row)| row).collect();
    for unread in &audit.unread {
        let cells = [
            "warning",
            "not-read",
            unread,
            "was not examined",
            "look at it",
        ];
        rows.push(cells.map(str::to_owned).to_vec());
    }
    Section {
        heading: "What was found",
        sentences: none_where_empty(&rows, "Nothing was found."),
        columns: &["weight", "name", "place", "what", "remedy"],
        rows,
    }
}

fn results(audit: &Audit) -> Section {
    let rows = audit.results.iter().map(|result| {
        let verifies = match result.verifies {
            None => "",
            Some(true) => "yes",
            Some(false) => "NO",
        };
        vec![
            result.place.clone(),
            result.state.to_owned(),
            result.result.clone().unwrap_or_default(),
            result.performed.clone().unwrap_or_default(),
            result.reviewed.join("; "),
            verifies.to_owned(),
            result.recomputed.to_owned(),
            result
                .uses
                .iter()
                .chain(&result.attachments)
                .cloned()
                .collect::<Vec<_>>()
                .join("; "),
        ]
    });
    let rows: Vec<Vec<String>> = rows.collect();
    Section {
        heading: "Results",
        sentences: none_where_empty(&rows, "There is no result."),
        columns: &[
            "place",
            "state",
            "result",
            "performed",
            "reviewed or approved",
            "verifies",
            "computed again",
            "made from",
        ],
        rows,
    }
}

fn never_reviewed(audit: &Audit) -> Section {
    let open = |result: &&AuditResult| result.state == "sealed" && result.reviewed.is_empty();
    let rows: Vec<Vec<String>> = audit
        .results
        .iter()
        .filter(open)
        .map(|result| {
            vec![
                result.place.clone(),
                result.performed.clone().unwrap_or_default(),
            ]
        })
        .collect();
    Section {
        heading: "Never reviewed",
        sentences: none_where_empty(
            &rows,
            "Every result in force that is reported on was reviewed or approved.",
        ),
        columns: &["place", "performed"],
        rows,
    }
}

fn amendments(audit: &Audit) -> Section {
    let rows = audit.results.iter().filter_map(|result| {
        Some(vec![
            result.place.clone(),
            result.supersedes.clone()?,
            result.reason.clone().unwrap_or_default(),
            result.performed.clone().unwrap_or_default(),
        ])
    });
    let rows: Vec<Vec<String>> = rows.collect();
    Section {
        heading: "Amendments",
        sentences: none_where_empty(&rows, "Nothing that is reported on was amended."),
        columns: &["place", "takes the place of", "reason", "performed"],
        rows,
    }
}

fn trail(audit: &Audit) -> Section {
    let rows = audit.acts.iter().map(|act| {
        vec![
            act.time.clone(),
            format!("{} ({})", act.name, act.signer),
            act.number.to_string(),
            act.meaning.clone(),
            act.place.clone().unwrap_or_default(),
            act.result.clone().unwrap_or_default(),
            act.note.clone().unwrap_or_default(),
        ]
    });
    let rows: Vec<Vec<String>> = rows.collect();
    Section {
        heading: "Acts in the order of their times",
        sentences: none_where_empty(&rows, "Nobody signed anything."),
        columns: &["time", "who", "number", "what", "place", "result", "note"],
        rows,
    }
}

fn constants(audit: &Audit) -> Section {
    let recalled = |constant: &&AuditConstant| constant.basis == "recalled";
    let from_memory = audit.constants.iter().filter(recalled).count();
    let rows = audit.constants.iter().map(|constant| {
        vec![
            constant.constant.clone(),
            constant.value.clone(),
            constant.conditions.clone(),
            constant.source.clone(),
            constant.basis.clone(),
            constant.used_in.join("; "),
        ]
    });
    let rows: Vec<Vec<String>> = rows.collect();
    let mut sentences = none_where_empty(&rows, "No sealed result carries a constant.");
    if from_memory > 0 {
        sentences.push(format!(
            "{from_memory} of them {} recalled: entered from memory and not compared with the source.",
            if from_memory == 1 { "is" } else { "are" }
        ));
    }
    Section {
        heading: "Constants in use",
        sentences,
        columns: &[
            "constant",
            "value",
            "conditions",
            "source",
            "basis",
            "used in",
        ],
        rows,
    }
}

fn signers(audit: &Audit) -> Section {
    let rows = audit.signers.iter().map(|signer| {
        let keys = if signer.keys.is_empty() {
            "on no roster".to_owned()
        } else {
            signer.keys.join("; ")
        };
        vec![signer.signer.clone(), keys, signer.acts.to_string()]
    });
    let rows: Vec<Vec<String>> = rows.collect();
    Section {
        heading: "Signers",
        sentences: none_where_empty(&rows, "There is no signer."),
        columns: &["signer", "keys", "acts"],
        rows,
    }
}

fn none_where_empty(rows: &[Vec<String>], sentence: &str) -> Vec<String> {
    if rows.is_empty() {
        vec![sentence.to_owned()]
    } else {
        Vec::new()
    }
}
