//! One substance of a liquid: how much of it, and what its certificate says.

use crate::block::content_amount::{concentration, weighable};
use crate::block::reader::Reader;
use crate::block::{certificate, origin, replicates, stock};
use crate::problem::{Content, ContentAmount, Corrections, InputId, Taken};
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

/// One substance with how much of it, and what its certificate says.
pub(super) fn read(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    name: &Scalar,
    id: &InputId,
) -> Option<Content> {
    let form = origin::substance(reader, name);
    let id = form
        .as_ref()
        .map_or_else(|| id.clone(), |form| id.renamed(&form.name));
    let corrections = certificate::corrections(reader, keys, &id);
    let trace = certificate::trace(reader, keys);
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
                return replicates::read(reader, form, node, id);
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
        certificate::idle_corrections(reader, corrections, weighed);
    }
}

#[cfg(test)]
mod tests {
    use crate::block::trial::{one_fault, problem};
    use crate::problem::{ContentAmount, Ingredient, Problem, Strength, Taken};
    use crate::quantity::Dimension;
    use crate::text::Rule;

    fn content(item: &str) -> crate::problem::Content {
        let keys = format!("volume: 1.000 L\ncontents:\n  - {{{item}}}\n");
        match problem("speciation", &keys) {
            Problem::Speciation(task) => match task.composition.ingredients.as_slice() {
                [Ingredient::Substance(content)] => (**content).clone(),
                other => panic!("{other:?}"),
            },
            other => panic!("{other:?}"),
        }
    }

    #[test]
    fn a_weighed_salt_keeps_what_its_certificate_says() {
        let content = content(
            "substance: sodium dihydrogen phosphate dihydrate, mass: 3.9003 g, purity: 99.5 ± 0.2 % (k=2), water: 0.1 %, lot: K-2291, expiry: 2027-03",
        );
        assert!(matches!(content.amount, ContentAmount::Mass(_)));
        let purity = content.corrections.purity.unwrap();
        assert_eq!(purity.measured.decimal.significant_figures(), 3);
        assert_eq!(content.trace.lot.as_deref(), Some("K-2291"));
        assert_eq!(content.trace.expiry.as_deref(), Some("2027-03"));
    }

    #[test]
    fn a_stock_has_a_strength_and_a_portion() {
        let litres = content(
            "substance: hydrochloric acid, volume: 10.00 ± 0.02 mL (tolerance), concentration: 0.1000 ± 0.0002 mol/L (k=2), factor: 1.0023",
        );
        assert!(matches!(
            litres.amount,
            ContentAmount::Stock {
                taken: Taken::Volume(_),
                strength: Strength::Concentration(_)
            }
        ));
        for item in [
            "substance: phosphoric acid, volume: 5 mL, concentration: 85 % w/w, density: 1.685 g/mL",
            "substance: phosphoric acid, volume: 5 mL, concentration: '85 % w/w, 1.685 g/mL'",
        ] {
            let ContentAmount::Stock {
                strength: Strength::MassFraction { fraction, density },
                ..
            } = content(item).amount
            else {
                panic!("{item}")
            };
            assert!((fraction.value().base() - 0.85).abs() < 1e-15);
            assert!((density.unwrap().value().base() - 1.685).abs() < 1e-15);
        }
        let weighed = content("substance: phosphoric acid, mass: 5 g, concentration: 85 % w/w");
        assert!(matches!(
            weighed.amount,
            ContentAmount::Stock {
                taken: Taken::Mass(_),
                ..
            }
        ));
    }

    #[test]
    fn replicates_give_mean_and_standard_deviation_of_the_mean() {
        // 19.21, 19.22 and 19.26: mean 19.23, s = 0.0264575, over √3 0.0152753; by hand.
        let content =
            content("substance: citric acid monohydrate, replicates: [19.21 g, 19.22 g, 19.26 g]");
        let ContentAmount::Mass(input) = content.amount else {
            panic!()
        };
        assert!((input.value().base() - 19.23).abs() < 1e-12);
        assert!((input.measured.standard_uncertainty() - 0.015_275_3).abs() < 5e-5);
        assert_eq!(input.measured.degrees_of_freedom(), Some(2.0));
        assert_eq!(input.replicates.len(), 3);
    }

    /// An item, the rule that it breaks, the place and what is said to help.
    const FAULTS: [(&str, Rule, &str, &str); 18] = [
        ("substance: NaCl", Rule::AmountNeeded, "NaCl", "`mass`"),
        ("mass: 1 g", Rule::MissingKey, "mass", "`substance: ...`"),
        (
            "substance: NaCl, mas: 1 g, mass: 2 g",
            Rule::UnknownKey,
            "mas",
            "`mass`",
        ),
        (
            "substance: NaCl, mass: 1 g, amount: 1 mol",
            Rule::TooManyAmounts,
            "NaCl",
            "one of",
        ),
        (
            "substance: HCl, volume: 1 mL",
            Rule::AmountNeeded,
            "1 mL",
            "concentration",
        ),
        (
            "substance: HCl, concentration: 37 % w/w",
            Rule::AmountNeeded,
            "37 % w/w",
            "volume",
        ),
        (
            "substance: HCl, volume: 1 mL, concentration: 37 % w/w",
            Rule::DensityNeeded,
            "37 % w/w",
            "density",
        ),
        (
            "substance: HCl, mass: 1 g, concentration: 1 mol/L",
            Rule::DensityNeeded,
            "1 mol/L",
            "% w/w",
        ),
        (
            "substance: HCl, volume: 1 mL, concentration: 137 % w/w",
            Rule::OutOfRange,
            "137 % w/w",
            "110",
        ),
        (
            "substance: NaCl, mass: 1 g, density: 2 g/mL",
            Rule::ConflictingKeys,
            "2 g/mL",
            "",
        ),
        (
            "substance: NaCl, mass: 1 g, factor: 1.01",
            Rule::ConflictingKeys,
            "1.01",
            "",
        ),
        (
            "substance: NaCl, concentration: 1 mol/L, purity: 99 %",
            Rule::ConflictingKeys,
            "99 %",
            "",
        ),
        (
            "substance: NaCl, mass: 1 g, purity: 99 %, assay: 98 %",
            Rule::ConflictingKeys,
            "98 %",
            "",
        ),
        (
            "substance: NaCl, mass: 1 g, water: 100 %",
            Rule::OutOfRange,
            "100 %",
            "below",
        ),
        (
            "substance: HCl, concentration: 1 mol/L, factor: -1",
            Rule::OutOfRange,
            "-1",
            "above 0",
        ),
        (
            "substance: NaCl, mass: 1 g, replicates: [1 g, 2 g]",
            Rule::ConflictingKeys,
            "[1 g, 2 g]",
            "",
        ),
        (
            "substance: NaCl, replicates: [1 g]",
            Rule::EmptyList,
            "[1 g]",
            "[19.21 g, 19.22 g]",
        ),
        (
            "substance: NaCl, replicates: [1 g, 2 mg]",
            Rule::EmptyList,
            "[1 g, 2 mg]",
            "",
        ),
    ];

    #[test]
    fn faults_of_an_item_stand_where_they_are() {
        for (item, rule, place, help) in FAULTS {
            let keys = format!("volume: 1 L\ncontents:\n  - {{{item}}}\n");
            one_fault("speciation", &keys, rule, place, help);
        }
    }
}
