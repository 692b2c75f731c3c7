//! What a certificate or a label says of a substance: purity, moisture, titre, lot, expiry.

use crate::block::reader::Reader;
use crate::problem::{Corrections, InputId, Trace};
use crate::quantity::{Dimension, MassFraction, Number};
use crate::text::{Diagnostic, Rule};
use crate::yaml::Keys;

/// Purity or assay, moisture, titre.
pub(super) fn corrections(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    id: &InputId,
) -> Corrections {
    let purity = reader.amount::<MassFraction>(keys, "purity", id);
    let assay = reader.amount::<MassFraction>(keys, "assay", id);
    let water = reader.amount::<MassFraction>(keys, "water", id);
    let factor = reader.amount::<Number>(keys, "factor", id);
    let purity = match (purity, assay) {
        (Some(_), Some(assay)) => {
            let span = reader.place(&assay.id);
            reader.error(
                Rule::ConflictingKeys,
                span,
                "`assay` and `purity` mean the same; state one",
            );
            None
        }
        (purity, assay) => purity.or(assay),
    };
    let mut within = |input: Option<&InputId>, inside: bool, expected: &str| {
        if let Some(id) = input.filter(|_| !inside) {
            let span = reader.place(id);
            reader.diagnostics.push(
                Diagnostic::error(Rule::OutOfRange, span, "not possible here").expecting(expected),
            );
        }
    };
    within(
        purity.as_ref().map(|input| &input.id),
        purity
            .as_ref()
            .is_none_or(|input| input.value().base() > 0.0),
        "a purity above 0 %",
    );
    within(
        water.as_ref().map(|input| &input.id),
        water
            .as_ref()
            .is_none_or(|input| input.value().base() < 1.0),
        "a water content below 100 %",
    );
    within(
        factor.as_ref().map(|input| &input.id),
        factor
            .as_ref()
            .is_none_or(|input| input.value().base() > 0.0),
        "a titre above 0, such as 1.0023",
    );
    Corrections {
        purity,
        water,
        factor,
    }
}

/// Lot and expiry, as written.
pub(super) fn trace(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Trace {
    let mut text = |key| {
        keys.text(key, &mut reader.diagnostics)
            .map(|scalar| scalar.text().to_owned())
    };
    Trace {
        lot: text("lot"),
        expiry: text("expiry"),
    }
}

/// Reports a titre of a solid, and a purity of anything but a solid that is weighed.
pub(super) fn idle_corrections(reader: &mut Reader<'_>, corrections: &Corrections, weighed: bool) {
    let (idle, message) = if weighed {
        (
            [corrections.factor.as_ref().map(|input| &input.id), None],
            "a titre belongs to the concentration of a solution; for a solid state `purity`",
        )
    } else {
        (
            [&corrections.purity, &corrections.water].map(|input| input.as_ref().map(|i| &i.id)),
            "purity and water correct a mass that was weighed; a concentration takes a `factor`",
        )
    };
    for id in idle.into_iter().flatten() {
        let span = reader.place(id);
        reader.error(Rule::ConflictingKeys, span, message);
    }
}
