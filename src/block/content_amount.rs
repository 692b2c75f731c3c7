//! How much of a substance there is, in whichever unit.

use crate::block::amount::{Accepted, Written, unit_of};
use crate::block::piece::Piece;
use crate::block::reader::Reader;
use crate::problem::{ContentAmount, InputId};
use crate::quantity::{Amount, Dimension, Mass, MassConcentration, Molality, Unit};
use crate::substance::Form;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::Scalar;

const CONCENTRATION: Accepted = Accepted {
    name: "a concentration",
    units: &[
        Unit::MolePerLitre,
        Unit::MillimolePerLitre,
        Unit::MicromolePerLitre,
        Unit::NanomolePerLitre,
        Unit::MolePerKilogram,
        Unit::MillimolePerKilogram,
        Unit::GramPerLitre,
        Unit::MilligramPerLitre,
    ],
};

const ANY_AMOUNT: Accepted = Accepted {
    name: "an amount or concentration",
    units: &[
        Unit::MolePerLitre,
        Unit::MillimolePerLitre,
        Unit::MicromolePerLitre,
        Unit::NanomolePerLitre,
        Unit::MolePerKilogram,
        Unit::MillimolePerKilogram,
        Unit::GramPerLitre,
        Unit::MilligramPerLitre,
        Unit::Gram,
        Unit::Milligram,
        Unit::Kilogram,
        Unit::Microgram,
        Unit::Mole,
        Unit::Millimole,
        Unit::Micromole,
    ],
};

/// An amount or concentration in the final solution, in whichever unit; `form` is `None` where the substance is not known, so that
/// the amount is checked all the same.
pub(super) fn any_amount<'s>(
    reader: &mut Reader<'_>,
    form: Option<&Form>,
    piece: impl Into<Piece<'s>>,
    item: &InputId,
) -> Option<ContentAmount> {
    typed(reader, form, piece.into(), item, ANY_AMOUNT)
}

fn typed(
    reader: &mut Reader<'_>,
    form: Option<&Form>,
    piece: Piece<'_>,
    item: &InputId,
    accepted: Accepted,
) -> Option<ContentAmount> {
    let written = Written::read(piece, accepted, &mut reader.diagnostics)?;
    let unit = written.unit;
    let by_mass = Mass::UNITS.contains(&unit) || MassConcentration::UNITS.contains(&unit);
    if let Some(form) = form
        && by_mass
    {
        weighable(reader, form, piece.span())?;
    }
    let id = |key| item.within(key);
    if let Some(mass) = written.measured::<Mass>() {
        let input = reader.checked(id("mass"), piece, mass)?;
        Some(ContentAmount::Mass(input))
    } else if let Some(amount) = written.measured::<Amount>() {
        let input = reader.checked(id("amount"), piece, amount)?;
        Some(ContentAmount::Amount(input))
    } else if let Some(molality) = written.measured::<Molality>() {
        let input = reader.checked(id("concentration"), piece, molality)?;
        Some(ContentAmount::Molality(input))
    } else if let Some(concentration) = written.measured::<MassConcentration>() {
        let input = reader.checked(id("concentration"), piece, concentration)?;
        Some(ContentAmount::MassConcentration(input))
    } else {
        let input = reader.checked(id("concentration"), piece, written.measured()?)?;
        Some(ContentAmount::Concentration(input))
    }
}

/// A mass needs a molar mass, hence a formula.
pub(super) fn weighable(reader: &mut Reader<'_>, form: &Form, span: Span) -> Option<()> {
    if form.formula.is_some() {
        return Some(());
    }
    reader.diagnostics.push(
        Diagnostic::error(
            Rule::WrongUnit,
            span,
            format!(
                "{} has no formula here, so a mass of it says no amount",
                form.name
            ),
        )
        .expecting("mol/L, mmol/L, mol/kg, mol, mmol; or `formula: ...` with the own constants"),
    );
    None
}

/// A concentration in the final solution; a strength in percent needs to know how much was taken.
pub(super) fn concentration(
    reader: &mut Reader<'_>,
    form: Option<&Form>,
    scalar: &Scalar,
    id: &InputId,
) -> Option<ContentAmount> {
    if let Some(Unit::PercentByMass | Unit::Percent) = unit_of(scalar) {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::AmountNeeded,
                scalar.span(),
                "the strength of a stock does not say how much of it was taken",
            )
            .expecting("`volume: ...` or `mass: ...` beside it"),
        );
        return None;
    }
    typed(reader, form, scalar.into(), id, CONCENTRATION)
}
