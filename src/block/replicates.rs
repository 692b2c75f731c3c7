//! Replicates: the mean, with the standard deviation of the mean.

use crate::block::content_amount::any_amount;
use crate::block::reader::Reader;
use crate::problem::{ContentAmount, Input, InputId};
use crate::quantity::{AmountConcentration, Dimension, Measured};
use crate::substance::Form;
use crate::text::{Diagnostic, Rule};
use crate::yaml::Node;

/// `replicates: [19.21 g, 19.22 g]`: the mean, with the standard deviation of the mean.
pub(super) fn read(
    reader: &mut Reader<'_>,
    form: Option<&Form>,
    node: &Node,
    id: &InputId,
) -> Option<ContentAmount> {
    let items = node.as_list(&mut reader.diagnostics)?;
    let read: Vec<Option<ContentAmount>> = items
        .iter()
        .map(|item| {
            let scalar = item.as_text(&mut reader.diagnostics)?;
            any_amount(reader, form, scalar, id)
        })
        .collect();
    let readings: Vec<ContentAmount> = read.into_iter().collect::<Option<_>>()?;
    let mean = match readings.first() {
        Some(ContentAmount::Mass(first)) => mean(first, &readings, |reading| match reading {
            ContentAmount::Mass(input) => Some(input.measured),
            _ => None,
        })
        .map(ContentAmount::Mass),
        Some(ContentAmount::Amount(first)) => mean(first, &readings, |reading| match reading {
            ContentAmount::Amount(input) => Some(input.measured),
            _ => None,
        })
        .map(ContentAmount::Amount),
        Some(ContentAmount::Concentration(first)) => {
            mean::<AmountConcentration>(first, &readings, |reading| match reading {
                ContentAmount::Concentration(input) => Some(input.measured),
                _ => None,
            })
            .map(ContentAmount::Concentration)
        }
        _ => None,
    };
    if mean.is_none() {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::EmptyList,
                node.span,
                "replicates are at least two readings in one unit of g, mol or mol/L",
            )
            .expecting("`replicates: [19.21 g, 19.22 g]`"),
        );
    }
    if let Some(input) = mean.as_ref().and_then(input_of) {
        reader.input_place(&input, node.span);
    }
    mean
}

fn input_of(amount: &ContentAmount) -> Option<InputId> {
    match amount {
        ContentAmount::Mass(input) => Some(input.id.clone()),
        ContentAmount::Amount(input) => Some(input.id.clone()),
        ContentAmount::Concentration(input) => Some(input.id.clone()),
        _ => None,
    }
}

fn mean<D: Dimension>(
    first: &Input<D>,
    readings: &[ContentAmount],
    of: impl Fn(&ContentAmount) -> Option<Measured<D>>,
) -> Option<Input<D>> {
    let readings: Vec<Measured<D>> = readings.iter().map(of).collect::<Option<_>>()?;
    Some(Input {
        id: first.id.clone(),
        measured: Measured::mean(&readings)?,
        replicates: readings,
    })
}
