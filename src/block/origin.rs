//! Where a liquid's ingredients come from: the library's substances, and the solutions of other blocks.

use crate::block::SolutionError;
use crate::block::outline::reference;
use crate::block::piece::Piece;
use crate::block::reader::Reader;
use crate::problem::{Composition, InputId, SolutionPortion};
use crate::quantity::Volume;
use crate::substance::Form;
use crate::text::{Diagnostic, Rule};
use crate::yaml::{Keys, Scalar};
use std::sync::Arc;

/// A portion of another block's solution: `solution: stocks/2026-10.md#naoh-01` with its volume.
pub(super) fn portion(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    scalar: &Scalar,
    id: &InputId,
) -> Option<SolutionPortion> {
    let volume = reader.required::<Volume>(keys, "volume", id);
    let composition = solution(reader, scalar);
    Some(SolutionPortion {
        volume: volume?,
        reference: Some(reference(scalar.text())),
        composition: composition?,
    })
}

/// The composition of another block's solution, its inputs under that block's name.
pub(super) fn solution(reader: &mut Reader<'_>, scalar: &Scalar) -> Option<Arc<Composition>> {
    let wanted = reference(scalar.text());
    reader.references.push(wanted.clone());
    match reader.context.solutions.solution(&wanted) {
        Ok(composition) => Some(Arc::new(composition.seen_from(&wanted))),
        Err(error) => {
            let rule = match error {
                SolutionError::Unknown { .. } | SolutionError::Page { .. } => Rule::UnknownSolution,
                SolutionError::Circular => Rule::CircularSolution,
                SolutionError::Faulty => Rule::SolutionNotUsable,
            };
            let mut diagnostic = Diagnostic::error(
                rule,
                scalar.span(),
                format!("`{}` cannot be used: {error}", scalar.text()),
            );
            if let SolutionError::Unknown { labels } = &error {
                diagnostic =
                    diagnostic.did_you_mean(&wanted.label, labels.iter().map(String::as_str));
            }
            reader.diagnostics.push(diagnostic);
            None
        }
    }
}

/// The substance that a name means.
pub(super) fn substance<'s>(
    reader: &mut Reader<'_>,
    name: impl Into<Piece<'s>>,
) -> Option<Arc<Form>> {
    let name = name.into();
    match reader.catalogue.find(name.text()) {
        Ok(form) => Some(Arc::clone(form)),
        Err(error) if error.ambiguous => {
            let several = Diagnostic::error(
                Rule::UnknownSubstance,
                name.span(),
                format!("`{}` is the formula of several substances", name.text()),
            )
            .expecting(format!("one of them by name: {}", error.names.join(", ")));
            reader.diagnostics.push(several);
            None
        }
        Err(error) => {
            let diagnostic = Diagnostic::error(
                Rule::UnknownSubstance,
                name.span(),
                format!("`{}` is not in the library", name.text()),
            )
            .expecting("a name, formula or CAS number of the library, or own `constants`")
            .did_you_mean(name.text(), error.names.iter().map(String::as_str));
            reader.diagnostics.push(diagnostic);
            None
        }
    }
}

#[cfg(test)]
mod tests {
    use crate::block::trial::{faults, statement};
    use crate::problem::{Ingredient, Problem};
    use crate::text::Rule;

    #[test]
    fn solutions_of_other_blocks_flow_in_under_their_names() {
        let statement = statement(
            "label: a\ntask: speciation\nvolume: 1 L\ncontents:\n  - solution: stocks/2026-10.md#naoh-01\n    volume: 10.00 mL\n",
        );
        let Problem::Speciation(task) = statement.problem else {
            panic!()
        };
        let [Ingredient::Solution(portion)] = task.composition.ingredients.as_slice() else {
            panic!()
        };
        let [Ingredient::Substance(content)] = portion.composition.ingredients.as_slice() else {
            panic!()
        };
        assert_eq!(
            content.id.as_str(),
            "stocks/2026-10.md#naoh-01 : contents / 1 sodium hydroxide"
        );
        let keys =
            |name| format!("volume: 1 L\ncontents:\n  - solution: {name}\n    volume: 1 mL\n");
        for (name, rule) in [
            ("naoh-1", Rule::UnknownSolution),
            ("round", Rule::CircularSolution),
            ("wrong", Rule::SolutionNotUsable),
        ] {
            let found = faults("speciation", &keys(name));
            assert_eq!((found[0].0, found[0].1.as_str()), (rule, name));
        }
    }
}
