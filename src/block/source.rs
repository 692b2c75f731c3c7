//! What a buffer is made from and what is added: solids, stocks, other blocks' solutions.

use crate::block::outline::reference;
use crate::block::reader::Reader;
use crate::block::{certificate, origin, stock};
use crate::problem::{
    Corrections, Input, InputId, SolutionPortion, Source, SourceKind, Strength, Trace,
};
use crate::quantity::{Decimal, Measured, Unit, Volume};
use crate::substance::Form;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{Keys, Node, Value};

/// A source as a name alone, or with its keys.
pub(super) fn read(reader: &mut Reader<'_>, node: &Node, id: &InputId) -> Option<Source> {
    match &node.value {
        Value::Text(scalar) => {
            let form = origin::substance(reader, scalar)?;
            solid(reader, &form, scalar.span())?;
            Some(Source {
                id: id.renamed(&form.name),
                kind: SourceKind::Solid {
                    form,
                    corrections: Corrections::default(),
                },
                trace: Trace::default(),
            })
        }
        Value::Mapping(mapping) => {
            let mut keys = mapping.keys();
            let found = keyed(reader, &mut keys, id);
            keys.finish(&mut reader.diagnostics);
            found
        }
        _ => node.refuse(
            "a substance, or a mapping with `substance`",
            &mut reader.diagnostics,
        ),
    }
}

fn keyed(reader: &mut Reader<'_>, keys: &mut Keys<'_>, id: &InputId) -> Option<Source> {
    if let Some(scalar) = keys.text("solution", &mut reader.diagnostics) {
        let composition = origin::solution(reader, scalar)?;
        let volume = Measured::<Volume>::new(Decimal::whole(1), Unit::Litre)?;
        return Some(Source {
            id: id.renamed(scalar.text()),
            kind: SourceKind::Solution(SolutionPortion {
                volume: Input::new(id.within("volume"), volume),
                reference: Some(reference(scalar.text())),
                composition,
            }),
            trace: Trace::default(),
        });
    }
    let name = keys.required_text("substance", &mut reader.diagnostics);
    let form = name.and_then(|name| origin::substance(reader, name));
    let id = form
        .as_ref()
        .map_or_else(|| id.clone(), |form| id.renamed(&form.name));
    let corrections = certificate::corrections(reader, keys, &id);
    let trace = certificate::trace(reader, keys);
    let density = keys.text("density", &mut reader.diagnostics);
    let concentration = keys.text("concentration", &mut reader.diagnostics);
    certificate::idle_corrections(reader, &corrections, concentration.is_none());
    let kind = if let Some(scalar) = concentration {
        let strength = stock::strength(reader, form.as_deref(), scalar, density, &id)?;
        if matches!(&strength, Strength::MassFraction { density: None, .. }) {
            stock::density_needed(reader, scalar.span());
            return None;
        }
        SourceKind::Stock {
            form: form?,
            strength,
            corrections,
        }
    } else {
        if let Some(density) = density {
            reader.error(
                Rule::ConflictingKeys,
                density.span(),
                "a density has no bearing on a solid; state the `concentration` of the stock",
            );
        }
        let form = form?;
        solid(reader, &form, keys.whole().heading())?;
        SourceKind::Solid { form, corrections }
    };
    Some(Source { id, kind, trace })
}

/// A solid is weighed, which needs its formula.
fn solid(reader: &mut Reader<'_>, form: &Form, span: Span) -> Option<()> {
    if form.formula.is_some() {
        return Some(());
    }
    reader.diagnostics.push(
        Diagnostic::error(
            Rule::NotASolid,
            span,
            format!("{} has no formula here and cannot be weighed", form.name),
        )
        .expecting("`formula: ...` with the own constants, or the `concentration` of a stock"),
    );
    None
}
