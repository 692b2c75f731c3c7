//! One substance of a liquid: how much of it, and what its certificate says.

use crate::block::amount::{Accepted, Piece, Written, unit_of};
use crate::block::reader::Reader;
use crate::block::{contents, stock};
use crate::problem::{Content, ContentAmount, Corrections, Input, InputId, Taken, Trace};
use crate::quantity::{
    Amount, AmountConcentration, Dimension, Mass, MassConcentration, MassFraction, Measured,
    Molality, Number, Unit,
};
use crate::substance::Form;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{Keys, Node, Scalar};

/// The keys of an item beside `substance`.
pub(super) const KEYS: [&str; 13] = [
    "mass",
    "volume",
    "amount",
    "concentration",
    "density",
    "lot",
    "expiry",
    "assay",
    "purity",
    "water",
    "factor",
    "replicates",
    "solution",
];

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

/// One substance with how much of it, and what its certificate says.
pub(super) fn read(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    name: &Scalar,
    id: &InputId,
) -> Option<Content> {
    let form = contents::substance(reader, name);
    let id = form
        .as_ref()
        .map_or_else(|| id.clone(), |form| id.renamed(&form.name));
    let corrections = corrections(reader, keys, &id);
    let trace = trace(reader, keys);
    let stated = Stated::take(reader, keys);
    let amount = stated.amount(reader, form.as_deref(), &id, name.span());
    let (form, amount) = (form?, amount?);
    stated.idle(reader, &amount, &corrections);
    Some(Content {
        id,
        form,
        amount,
        corrections,
        trace,
    })
}

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

/// What an item says of its amount.
struct Stated<'m> {
    mass: Option<&'m Scalar>,
    volume: Option<&'m Scalar>,
    amount: Option<&'m Scalar>,
    concentration: Option<&'m Scalar>,
    density: Option<&'m Scalar>,
    replicates: Option<&'m Node>,
}

impl<'m> Stated<'m> {
    fn take(reader: &mut Reader<'_>, keys: &mut Keys<'m>) -> Self {
        let mut text = |key| keys.text(key, &mut reader.diagnostics);
        Self {
            mass: text("mass"),
            volume: text("volume"),
            amount: text("amount"),
            concentration: text("concentration"),
            density: text("density"),
            replicates: keys.take("replicates"),
        }
    }

    fn amount(
        &self,
        reader: &mut Reader<'_>,
        form: Option<&Form>,
        id: &InputId,
        name: Span,
    ) -> Option<ContentAmount> {
        if let Some(node) = self.replicates {
            let single = [self.mass, self.volume, self.amount, self.concentration];
            if single.iter().all(Option::is_none) {
                return replicated(reader, form, node, id);
            }
            reader.error(
                Rule::ConflictingKeys,
                node.span,
                "`replicates` stands in place of a single value, not beside it",
            );
            return None;
        }
        match (self.mass, self.volume, self.amount, self.concentration) {
            (None, None, Some(scalar), None) => {
                let input = reader.input(id.within("amount"), scalar)?;
                Some(ContentAmount::Amount(input))
            }
            (Some(scalar), None, None, None) => {
                let input = reader.input(id.within("mass"), scalar)?;
                weighable(reader, form?, scalar.span())?;
                Some(ContentAmount::Mass(input))
            }
            (None, None, None, Some(scalar)) => concentration(reader, form, scalar, id),
            (None, Some(taken), None, Some(strength)) => {
                let taken = reader.input(id.within("volume"), taken).map(Taken::Volume);
                self.stock(reader, form, taken, strength, id)
            }
            (Some(taken), None, None, Some(strength)) => {
                let taken = reader.input(id.within("mass"), taken).map(Taken::Mass);
                self.stock(reader, form, taken, strength, id)
            }
            _ => self.unclear(reader, name),
        }
    }

    fn stock(
        &self,
        reader: &mut Reader<'_>,
        form: Option<&Form>,
        taken: Option<Taken>,
        strength: &Scalar,
        id: &InputId,
    ) -> Option<ContentAmount> {
        let found = stock::strength(reader, form, strength, self.density, id);
        stock::portion(reader, taken?, found?, strength.span())
    }

    fn unclear(&self, reader: &mut Reader<'_>, name: Span) -> Option<ContentAmount> {
        let diagnostic = match (self.mass, self.volume, self.amount) {
            (None, None, None) => {
                Diagnostic::error(Rule::AmountNeeded, name, "how much of it is not stated")
                    .expecting(
                        "`mass`, `amount`, `concentration`, or `volume` with `concentration`",
                    )
            }
            (None, Some(volume), None) => Diagnostic::error(
                Rule::AmountNeeded,
                volume.span(),
                "a volume alone does not say how much of the substance is in it",
            )
            .expecting("`concentration: ...` beside it"),
            _ => Diagnostic::error(
                Rule::TooManyAmounts,
                name,
                "how much of it is stated in more than one way",
            )
            .expecting("one of `mass`, `amount`, `concentration`, or a portion of a stock"),
        };
        reader.diagnostics.push(diagnostic);
        None
    }

    /// Reports what was stated and has no bearing on the amount.
    fn idle(&self, reader: &mut Reader<'_>, amount: &ContentAmount, corrections: &Corrections) {
        let stock = matches!(amount, ContentAmount::Stock { .. });
        if let Some(density) = self.density.filter(|_| !stock) {
            reader.error(
                Rule::ConflictingKeys,
                density.span(),
                "a density has no bearing here: no portion of a stock is stated",
            );
        }
        let weighed = matches!(amount, ContentAmount::Mass(_));
        idle_corrections(reader, corrections, weighed);
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

/// A concentration in the final solution; a strength in percent needs to know how much was taken.
fn concentration(
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

/// `replicates: [19.21 g, 19.22 g]`: the mean, with the standard deviation of the mean.
fn replicated(
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
