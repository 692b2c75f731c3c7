//! Ions given alone must leave no charge: a solution has none, and nobody adds a silent partner.

use crate::block::reader::Reader;
use crate::problem::{Content, ContentAmount, Corrections, Ingredient, Input, Strength, Taken};
use crate::quantity::{Dimension, RoundingRule, Volume};
use crate::text::{Diagnostic, Rule, Span};

/// Share of all equivalents that may be left over: the rounding of a few sums.
const ROUNDING: f64 = 1e-9;

/// Checks the ions among the ingredients, whose places are `spans`; `volume` is that of the whole, where stated.
pub(super) fn check(
    reader: &mut Reader<'_>,
    ingredients: &[Ingredient],
    spans: &[Span],
    volume: Option<&Input<Volume>>,
) {
    for unit in ["mol/L", "mol/kg"] {
        let mut left = 0.0;
        let mut all = 0.0;
        let mut places = Vec::new();
        for (ingredient, span) in ingredients.iter().zip(spans) {
            let Ingredient::Substance(content) = ingredient else {
                continue;
            };
            let by_kilogram = matches!(content.amount, ContentAmount::Molality(_));
            if content.form.charge == 0 || by_kilogram != (unit == "mol/kg") {
                continue;
            }
            let Some(concentration) = concentration(content, volume) else {
                return;
            };
            let equivalents = f64::from(content.form.charge) * concentration;
            left += equivalents;
            all += equivalents.abs();
            places.push(*span);
        }
        if left.abs() > ROUNDING * all {
            report(reader, &places, left, unit);
        }
    }
}

fn report(reader: &mut Reader<'_>, places: &[Span], left: f64, unit: &str) {
    let Some((first, others)) = places.split_first() else {
        return;
    };
    let size = RoundingRule::HalfEven.to_figures(left.abs(), 4);
    let (sign, partner, kind) = if left > 0.0 {
        ("positive", "chloride ion", "anion")
    } else {
        ("negative", "sodium ion", "cation")
    };
    let mut found = Diagnostic::error(
        Rule::UnbalancedIon,
        *first,
        format!("the ions given alone leave {size} {unit} of {sign} charge"),
    )
    .expecting(format!(
        "`{partner}: {size} {unit}` or whichever {kind} is there, or the salt in place of the ion"
    ));
    for other in others {
        found = found.and(*other, "");
    }
    reader.diagnostics.push(found);
}

/// Amount by volume of the whole in mol/L, or the molality in mol/kg; `None` where a volume or a formula is missing, which is
/// reported elsewhere.
fn concentration(content: &Content, volume: Option<&Input<Volume>>) -> Option<f64> {
    let molar_mass = || {
        let formula = content.form.formula.as_ref()?;
        Some(formula.molar_mass().base())
    };
    let litres = || volume.map(|volume| volume.value().base());
    let nominal = match &content.amount {
        ContentAmount::Concentration(input) => input.value().base(),
        ContentAmount::Molality(input) => input.value().base(),
        ContentAmount::MassConcentration(input) => input.value().base() / molar_mass()?,
        ContentAmount::Amount(input) => input.value().base() / litres()?,
        ContentAmount::Mass(input) => input.value().base() / molar_mass()? / litres()?,
        ContentAmount::Stock { taken, strength } => {
            let amount = match (taken, strength) {
                (Taken::Volume(taken), Strength::Concentration(strength)) => {
                    taken.value().base() * strength.value().base()
                }
                (Taken::Volume(taken), Strength::MassConcentration(strength)) => {
                    taken.value().base() * strength.value().base() / molar_mass()?
                }
                (Taken::Volume(taken), Strength::MassFraction { fraction, density }) => {
                    let mass = density.as_ref()?.value() * taken.value();
                    mass.base() * fraction.value().base() / molar_mass()?
                }
                (Taken::Mass(taken), Strength::MassFraction { fraction, .. }) => {
                    taken.value().base() * fraction.value().base() / molar_mass()?
                }
                (Taken::Mass(_), _) => return None,
            };
            amount / litres()?
        }
    };
    Some(nominal * corrected(&content.corrections))
}

/// Purity, dry share and titre together; dimensionless, 1 where none is stated.
fn corrected(corrections: &Corrections) -> f64 {
    let purity = corrections.purity.as_ref();
    let water = corrections.water.as_ref();
    let factor = corrections.factor.as_ref();
    purity.map_or(1.0, |input| input.value().base())
        * water.map_or(1.0, |input| 1.0 - input.value().base())
        * factor.map_or(1.0, |input| input.value().base())
}

#[cfg(test)]
mod tests {
    use crate::block::trial::{one_fault, problem};
    use crate::text::Rule;

    #[test]
    fn ions_that_leave_no_charge_are_taken() {
        for contents in [
            "{sodium ion: 0.10 mol/L, calcium ion: 0.05 mol/L, chloride ion: 0.20 mol/L}",
            "{sodium ion: 0.1 mol/kg, chloride ion: 0.1 mol/kg}",
            "{sodium ion: 0.05 mol, chloride ion: 0.1 mol/L}",
        ] {
            let keys = format!("volume: 0.5 L\ncontents: {contents}\n");
            drop(problem("speciation", &keys));
        }
    }

    #[test]
    fn a_charge_that_is_left_is_told_with_its_size_and_a_partner() {
        for (contents, place, help) in [
            (
                "{sodium ion: 0.1 mol/L}",
                "sodium ion",
                "`chloride ion: 0.1000 mol/L`",
            ),
            (
                "{chloride ion: 20 mmol/L, NaCl: 1 mol/L}",
                "chloride ion",
                "`sodium ion: 0.02000 mol/L`",
            ),
            (
                "{sodium ion: 0.05 mol, chloride ion: 0.05 mol/L}",
                "sodium ion",
                "`chloride ion: 0.05000 mol/L`",
            ),
            (
                "{sodium ion: 0.1 mol/kg, NaCl: 1 mol/L}",
                "sodium ion",
                "0.1000 mol/kg",
            ),
        ] {
            let keys = format!("volume: 0.5 L\ncontents: {contents}\n");
            one_fault("speciation", &keys, Rule::UnbalancedIon, place, help);
        }
    }
}
