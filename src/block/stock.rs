//! A stock: its strength, and a measured portion of it.

use crate::block::amount::{Accepted, Written, unit_of};
use crate::block::content_amount::weighable;
use crate::block::piece::Piece;
use crate::block::reader::Reader;
use crate::problem::{ContentAmount, Input, InputId, Strength, Taken};
use crate::quantity::{AmountConcentration, Density, Dimension, MassFraction, Unit};
use crate::substance::Form;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::Scalar;

const STRENGTH: Accepted = Accepted {
    name: "the strength of a stock",
    units: &[
        Unit::MolePerLitre,
        Unit::MillimolePerLitre,
        Unit::MicromolePerLitre,
        Unit::NanomolePerLitre,
        Unit::GramPerLitre,
        Unit::MilligramPerLitre,
        Unit::PercentByMass,
        Unit::Percent,
    ],
};

/// The strength of a stock, in whichever unit; `85 % w/w, 1.685 g/mL` states the density with it.
pub(super) fn strength(
    reader: &mut Reader<'_>,
    form: Option<&Form>,
    scalar: &Scalar,
    density: Option<&Scalar>,
    item: &InputId,
) -> Option<Strength> {
    let (piece, beside) = density_beside(scalar.into());
    let density = match (density, beside) {
        (Some(key), Some(_)) => {
            reader.error(
                Rule::ConflictingKeys,
                key.span(),
                "the density is stated twice",
            );
            return None;
        }
        (Some(key), None) => Some(Piece::from(key)),
        (None, beside) => beside,
    };
    let density: Option<Option<Input<Density>>> =
        density.map(|piece| reader.input(item.within("density"), piece));
    let written = Written::read(piece, STRENGTH, &mut reader.diagnostics)?;
    let density = match density {
        Some(density) => Some(density?),
        None => None,
    };
    if let Some(form) = form
        && !AmountConcentration::UNITS.contains(&written.unit)
    {
        weighable(reader, form, scalar.span())?;
    }
    let id = item.within("concentration");
    if let Some(fraction) = written.measured::<MassFraction>() {
        let fraction = reader.checked(id, piece, fraction)?;
        let share = fraction.value().base();
        if share <= 0.0 || share > 1.0 {
            reader.diagnostics.push(
                Diagnostic::error(Rule::OutOfRange, piece.span(), "no strength of a stock")
                    .expecting("above 0 %, up to 100 %"),
            );
            return None;
        }
        Some(Strength::MassFraction { fraction, density })
    } else if let Some(concentration) = written.measured() {
        let input = reader.checked(id, piece, concentration)?;
        Some(Strength::MassConcentration(input))
    } else {
        let input = reader.checked(id, piece, written.measured()?)?;
        Some(Strength::Concentration(input))
    }
}

/// The strength, and the density that may stand after it.
fn density_beside(piece: Piece<'_>) -> (Piece<'_>, Option<Piece<'_>>) {
    let text = piece.text();
    for (at, _) in text.match_indices(',') {
        let after = piece.part(at + 1, text.len());
        if unit_of(after).is_some_and(|unit| Density::UNITS.contains(&unit)) {
            return (piece.part(0, at), Some(after));
        }
    }
    (piece, None)
}

/// A portion of a stock. Taken by volume, a mass fraction needs the density; taken by mass, only a mass fraction tells the amount.
pub(super) fn portion(
    reader: &mut Reader<'_>,
    taken: Taken,
    strength: Strength,
    span: Span,
) -> Option<ContentAmount> {
    match (&taken, &strength) {
        (Taken::Volume(_), Strength::MassFraction { density: None, .. }) => {
            density_needed(reader, span);
            None
        }
        (Taken::Mass(_), Strength::Concentration(_) | Strength::MassConcentration(_)) => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::DensityNeeded,
                    span,
                    "a mass of a solution has an amount only by its mass fraction",
                )
                .expecting("`concentration: ... % w/w`, or a `volume` in place of the mass"),
            );
            None
        }
        _ => Some(ContentAmount::Stock { taken, strength }),
    }
}

/// Reports that a strength in percent stands without its density.
pub(super) fn density_needed(reader: &mut Reader<'_>, span: Span) {
    reader.diagnostics.push(
        Diagnostic::error(
            Rule::DensityNeeded,
            span,
            "a volume of a stock given in % w/w has an amount only with its density",
        )
        .expecting("`density: 1.685 g/mL`"),
    );
}
