//! What a buffer is made from and what is added: solids, stocks, other blocks' solutions.

use crate::block::contents;
use crate::block::reader::Reader;
use crate::problem::{Input, InputId, SolutionPortion, Source, SourceKind, Trace};
use crate::quantity::{Decimal, Density, Measured, Unit, Volume};
use crate::text::Rule;
use crate::yaml::{Keys, Node, Value};

/// A source as a name alone, or with its keys.
pub(super) fn read(reader: &mut Reader<'_>, node: &Node, id: &InputId) -> Option<Source> {
    match &node.value {
        Value::Text(scalar) => {
            let form = contents::substance(reader, scalar)?;
            if form.formula.is_none() {
                reader.error(
                    Rule::NotASolid,
                    scalar.span(),
                    format!("{} has no formula here and cannot be weighed", form.name),
                );
                return None;
            }
            Some(Source {
                id: id.renamed(&form.name),
                kind: SourceKind::Solid {
                    form,
                    corrections: crate::problem::Corrections::default(),
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
        let composition = contents::solution(reader, scalar)?;
        let volume = Measured::<Volume>::new(Decimal::whole(1), Unit::Litre)?;
        return Some(Source {
            id: id.renamed(scalar.text()),
            kind: SourceKind::Solution(SolutionPortion {
                volume: Input::new(id.within("volume"), volume),
                reference: Some(super::outline::reference(scalar.text())),
                composition,
            }),
            trace: Trace::default(),
        });
    }
    let name = keys.required_text("substance", &mut reader.diagnostics);
    let form = name.and_then(|name| contents::substance(reader, name));
    let id = form
        .as_ref()
        .map_or_else(|| id.clone(), |form| id.renamed(&form.name));
    let corrections = contents::corrections(reader, keys, &id);
    let trace = contents::trace(reader, keys);
    let density = reader.amount::<Density>(keys, "density", &id);
    let strength = keys.text("concentration", &mut reader.diagnostics);
    let form = form?;
    let kind = match strength {
        Some(scalar) => SourceKind::Stock {
            strength: contents::strength(reader, &form, scalar, density, &id)?,
            form,
            corrections,
        },
        None if form.formula.is_none() => {
            reader.error(
                Rule::NotASolid,
                keys.whole().heading(),
                format!("{} has no formula here and cannot be weighed", form.name),
            );
            return None;
        }
        None => SourceKind::Solid { form, corrections },
    };
    Some(Source { id, kind, trace })
}
