//! Sources of a preparation or an adjustment as ingredients: what is weighed or pipetted of them is an input like any other.

use crate::problem::{
    Content, ContentAmount, Corrections, Ingredient, Input, InputId, Source, SourceKind, Taken,
};
use crate::quantity::{
    Decimal, Dimension, Mass, Measured, RoundingRule, Spread, Uncertainty, Unit, Volume,
};
use crate::solution::Unsolvable;
use crate::solution::assembly::Assembly;
use crate::solution::tape::VariableIndex;
use crate::substance::Form;
use std::sync::Arc;

/// How one source is measured out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Measure {
    /// On a balance, in g.
    Weighed,
    /// With a pipette or burette, in mL.
    Pipetted,
}

impl Measure {
    /// How a source is measured out.
    pub(super) fn of(source: &Source) -> Self {
        match &source.kind {
            SourceKind::Solid { .. } => Self::Weighed,
            SourceKind::Stock { .. } | SourceKind::Solution(_) => Self::Pipetted,
        }
    }

    /// The unit it is told in.
    pub(super) fn unit(self) -> &'static str {
        match self {
            Self::Weighed => "g",
            Self::Pipetted => "mL",
        }
    }

    /// Base units (g, L) in one of its units.
    pub(super) fn base_per_unit(self) -> f64 {
        match self {
            Self::Weighed => 1.0,
            Self::Pipetted => 1e-3,
        }
    }

    /// The smallest step where none was stated, in its unit: 0.1 mg and 0.01 mL, common practice.
    pub(super) fn default_step(self) -> Decimal {
        match self {
            Self::Weighed => Decimal::new(false, 1, -4),
            Self::Pipetted => Decimal::new(false, 1, -2),
        }
    }
}

/// The identity of the quantity that is taken of a source.
pub(super) fn taken_id(source: &Source) -> InputId {
    match Measure::of(source) {
        Measure::Weighed => source.id.within("mass to take"),
        Measure::Pipetted => source.id.within("volume to take"),
    }
}

/// A source as an ingredient, with a figure in g or mL that was or will be taken, and the step it is read to as a rectangular half width.
///
/// # Errors
/// [`Unsolvable::Sources`] where the figure cannot be written in its unit, which does not happen.
pub(super) fn ingredient(
    source: &Source,
    figure: Decimal,
    step: Decimal,
) -> Result<Ingredient, Unsolvable> {
    let id = taken_id(source);
    let none = || Unsolvable::Sources {
        reason: "the amount cannot be written".to_owned(),
        input: source.id.clone(),
    };
    let content = |form: &Arc<Form>, amount: ContentAmount, corrections: &Corrections| {
        Ingredient::Substance(Box::new(Content {
            id: source.id.clone(),
            form: Arc::clone(form),
            amount,
            corrections: corrections.clone(),
            trace: source.trace.clone(),
        }))
    };
    Ok(match &source.kind {
        SourceKind::Solid { form, corrections } => {
            let mass = amount::<Mass>(id, figure, step, Unit::Gram).ok_or_else(none)?;
            content(form, ContentAmount::Mass(mass), corrections)
        }
        SourceKind::Stock {
            form,
            strength,
            corrections,
        } => {
            let volume = amount::<Volume>(id, figure, step, Unit::Millilitre).ok_or_else(none)?;
            let stock = ContentAmount::Stock {
                taken: Taken::Volume(volume),
                strength: strength.clone(),
            };
            content(form, stock, corrections)
        }
        SourceKind::Solution(portion) => {
            let volume = amount::<Volume>(id, figure, step, Unit::Millilitre).ok_or_else(none)?;
            Ingredient::Solution(crate::problem::SolutionPortion {
                volume,
                ..portion.clone()
            })
        }
    })
}

fn amount<D: Dimension>(
    id: InputId,
    figure: Decimal,
    step: Decimal,
    unit: Unit,
) -> Option<Input<D>> {
    let measured = Measured::new(figure, unit)?;
    let measured = if step.is_zero() {
        measured
    } else {
        measured.with(Uncertainty {
            stated: step,
            relative: false,
            spread: Spread::Rectangular,
            degrees_of_freedom: None,
        })
    };
    Some(Input::new(id, measured))
}

/// What the source is called.
pub(super) fn name(source: &Source) -> String {
    match &source.kind {
        SourceKind::Solid { form, .. } | SourceKind::Stock { form, .. } => form.name.clone(),
        SourceKind::Solution(portion) => portion
            .reference
            .as_ref()
            .map_or("the solution".to_owned(), |reference| {
                reference.label.clone()
            }),
    }
}

/// A figure rounded to whole steps of an instrument, half to even, in the unit of the step.
pub(super) fn to_steps(value: f64, step: Decimal, rule: RoundingRule) -> Decimal {
    let size = step.to_f64();
    if size <= 0.0 || !value.is_finite() {
        return Decimal::shortest(value);
    }
    let count = rule.decimal_to_places(Decimal::shortest(value / size), 0);
    Decimal::new(
        count.is_negative(),
        count.digits().saturating_mul(step.digits()),
        step.exponent(),
    )
}

impl Assembly {
    /// The variable of an input, by its identity.
    pub(super) fn variable(&self, id: &InputId) -> Option<VariableIndex> {
        let place = self
            .recipe
            .variables
            .iter()
            .position(|variable| variable.input.as_ref() == Some(id))?;
        Some(self.recipe.tape.index_of(place))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn steps_are_those_of_the_instrument() {
        let step = |text: &str| Decimal::parse(text).unwrap();
        for (value, size, expected) in [
            (3.900_34, "0.0001", "3.9003"),
            (3.900_36, "0.0005", "3.9005"),
            (12.347, "0.02", "12.34"),
        ] {
            let rounded = to_steps(value, step(size), RoundingRule::HalfEven);
            assert_eq!(rounded.to_string(), expected);
        }
    }
}
