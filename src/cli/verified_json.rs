//! What `verify --format json` prints of a result and of a finding.

use crate::procedure::{AuditFinding, VerifiedResult};
use serde_json::{Value, json};

/// Everything that was found of one result.
pub(super) fn object(page: &str, result: &VerifiedResult) -> Value {
    let findings: Vec<Value> = result
        .findings
        .iter()
        .map(AuditFinding::of)
        .map(|finding| json!(finding))
        .collect();
    let acts: Vec<Value> = result
        .acts()
        .iter()
        .map(|signed| {
            let act = signed.act();
            json!({
                "meaning": act.meaning.to_string(),
                "signer": act.signer.to_string(),
                "name": act.name.to_string(),
                "time": act.time.to_rfc3339(),
                "number": act.number,
            })
        })
        .collect();
    json!({
        "page": page,
        "label": result.label,
        "draft": result.draft,
        "mark": result.mark,
        "verifies": !result.failed() && !result.draft,
        "result": result.statement().map(|statement| statement.result.to_string()),
        "acts": acts,
        "recomputed": result.recomputed.word(),
        "unlisted_signers": result.unlisted,
        "findings": findings,
    })
}
