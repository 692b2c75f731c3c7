//! A liquid as it was put together: substances, portions of other solutions, water.

use crate::problem::{Input, InputId};
use crate::quantity::{
    Amount, AmountConcentration, Density, Mass, MassConcentration, MassFraction, Molality, Number,
    Volume,
};
use crate::substance::Form;
use std::fmt;
use std::sync::Arc;

/// What a liquid was made of.
#[derive(Clone, Debug, PartialEq)]
pub struct Composition {
    /// How the final volume is known.
    pub made_up: MadeUp,
    /// What went in, in the order in which it was stated.
    pub ingredients: Vec<Ingredient>,
}

impl Composition {
    /// Pure water, of no stated volume.
    pub fn water() -> Self {
        Self {
            made_up: MadeUp::Unstated,
            ingredients: Vec::new(),
        }
    }

    /// The same liquid as another block sees it: every input carries the block's name in front.
    ///
    /// What that block took from a third one keeps the third one's name, with the page where that is another, so that a
    /// quantity that enters by two ways is known as one.
    #[must_use]
    pub fn seen_from(&self, reference: &SolutionReference) -> Self {
        let name = reference.to_string();
        let mut seen = self.clone();
        seen.each_id(&mut |id| *id = id.seen_from(&name));
        if let Some(page) = &reference.page {
            seen.each_portion(&mut |portion| portion.take_to_page(page));
        }
        seen
    }

    /// Every identity but those that come from other blocks.
    fn each_id(&mut self, change: &mut impl FnMut(&mut InputId)) {
        if let MadeUp::To(volume) = &mut self.made_up {
            change(&mut volume.id);
        }
        for ingredient in &mut self.ingredients {
            match ingredient {
                Ingredient::Substance(content) => content.each_id(change),
                Ingredient::Solution(portion) => {
                    change(&mut portion.volume.id);
                    if portion.reference.is_none() {
                        Arc::make_mut(&mut portion.composition).each_id(change);
                    }
                }
                Ingredient::Water(volume) => change(&mut volume.id),
            }
        }
    }

    /// Every portion that comes from another block, but not what lies in it.
    fn each_portion(&mut self, change: &mut impl FnMut(&mut SolutionPortion)) {
        for ingredient in &mut self.ingredients {
            if let Ingredient::Solution(portion) = ingredient {
                if portion.reference.is_some() {
                    change(portion);
                } else {
                    Arc::make_mut(&mut portion.composition).each_portion(change);
                }
            }
        }
    }
}

impl SolutionPortion {
    /// Names the page of a block that was named without one.
    fn take_to_page(&mut self, page: &str) {
        if let Some(reference) = &mut self.reference
            && reference.page.is_none()
        {
            reference.page = Some(page.to_owned());
        }
        let inside = Arc::make_mut(&mut self.composition);
        inside.each_id(&mut |id| *id = id.on_page(page));
        inside.each_portion(&mut |portion| portion.take_to_page(page));
    }
}

impl Content {
    fn each_id(&mut self, change: &mut impl FnMut(&mut InputId)) {
        change(&mut self.id);
        match &mut self.amount {
            ContentAmount::Concentration(input) => change(&mut input.id),
            ContentAmount::Molality(input) => change(&mut input.id),
            ContentAmount::MassConcentration(input) => change(&mut input.id),
            ContentAmount::Mass(input) => change(&mut input.id),
            ContentAmount::Amount(input) => change(&mut input.id),
            ContentAmount::Stock { taken, strength } => {
                match taken {
                    Taken::Volume(input) => change(&mut input.id),
                    Taken::Mass(input) => change(&mut input.id),
                }
                match strength {
                    Strength::Concentration(input) => change(&mut input.id),
                    Strength::MassConcentration(input) => change(&mut input.id),
                    Strength::MassFraction { fraction, density } => {
                        change(&mut fraction.id);
                        if let Some(density) = density {
                            change(&mut density.id);
                        }
                    }
                }
            }
        }
        let Corrections {
            purity,
            water,
            factor,
        } = &mut self.corrections;
        for input in [purity, water].into_iter().flatten() {
            change(&mut input.id);
        }
        if let Some(input) = factor {
            change(&mut input.id);
        }
    }
}

/// How the final volume of a liquid is known.
#[derive(Clone, Debug, PartialEq)]
pub enum MadeUp {
    /// Filled up with water to a stated volume at the temperature of the block.
    To(Input<Volume>),
    /// The volumes of the portions, added; that volumes are additive is a stated assumption.
    SumOfPortions,
    /// Only concentrations were stated; no volume is needed.
    Unstated,
}

/// One thing that went into a liquid.
#[derive(Clone, Debug, PartialEq)]
pub enum Ingredient {
    /// A substance, as a concentration in the final solution, a mass, an amount or a volume of a stock.
    Substance(Box<Content>),
    /// A volume of a solution that another block, or a portion's own contents, describes.
    Solution(SolutionPortion),
    /// A volume of water; only where volumes are added.
    Water(Input<Volume>),
}

/// A portion of a solution with a composition of its own.
#[derive(Clone, Debug, PartialEq)]
pub struct SolutionPortion {
    /// How much was taken.
    pub volume: Input<Volume>,
    /// The block that describes it, or `None` where the portion lists its own contents.
    pub reference: Option<SolutionReference>,
    /// What it is made of; inputs of another block carry that block's name in their identity.
    pub composition: Arc<Composition>,
}

/// The name of another block's solution.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct SolutionReference {
    /// The page, relative to the notebook, or `None` for the same page.
    pub page: Option<String>,
    /// The block's label.
    pub label: String,
}

impl fmt::Display for SolutionReference {
    /// `label`, or `page.md#label`.
    fn fmt(&self, formatter: &mut fmt::Formatter<'_>) -> fmt::Result {
        match &self.page {
            Some(page) => write!(formatter, "{page}#{}", self.label),
            None => formatter.write_str(&self.label),
        }
    }
}

/// One substance and how much of it went in.
#[derive(Clone, Debug, PartialEq)]
pub struct Content {
    /// The path of this item; its quantities lie below it.
    pub id: InputId,
    /// What was taken.
    pub form: Arc<Form>,
    /// How much.
    pub amount: ContentAmount,
    /// What a certificate or a standardisation says of it.
    pub corrections: Corrections,
    /// Where it came from.
    pub trace: Trace,
}

/// How much of a substance went in.
#[derive(Clone, Debug, PartialEq)]
pub enum ContentAmount {
    /// Analytical concentration in the final solution.
    Concentration(Input<AmountConcentration>),
    /// Molality in the final solution.
    Molality(Input<Molality>),
    /// Mass concentration in the final solution.
    MassConcentration(Input<MassConcentration>),
    /// Mass weighed in.
    Mass(Input<Mass>),
    /// Amount of substance put in.
    Amount(Input<Amount>),
    /// A measured portion of a stock of stated strength.
    Stock {
        /// How much of the stock was taken.
        taken: Taken,
        /// Its strength.
        strength: Strength,
    },
}

/// A measured portion of a liquid.
#[derive(Clone, Debug, PartialEq)]
pub enum Taken {
    /// By volume.
    Volume(Input<Volume>),
    /// By mass; needs the density of the stock unless its strength is a mass fraction or a molality.
    Mass(Input<Mass>),
}

/// The strength of a stock.
#[derive(Clone, Debug, PartialEq)]
pub enum Strength {
    /// Amount concentration.
    Concentration(Input<AmountConcentration>),
    /// Mass concentration.
    MassConcentration(Input<MassConcentration>),
    /// Mass fraction; the density is needed where the portion was taken by volume.
    MassFraction {
        /// Mass of the substance by mass of the stock.
        fraction: Input<MassFraction>,
        /// Density of the stock.
        density: Option<Input<Density>>,
    },
}

/// What a certificate or a standardisation says of a substance.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Corrections {
    /// Assay or purity: mass of the substance by mass of the portion.
    pub purity: Option<Input<MassFraction>>,
    /// Moisture or loss on drying: mass of water by mass of the portion, taken off before the purity.
    pub water: Option<Input<MassFraction>>,
    /// Titre: true strength by nominal strength.
    pub factor: Option<Input<Number>>,
}

/// Where a substance came from; it goes into the record as written.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Trace {
    /// Lot or batch.
    pub lot: Option<String>,
    /// Expiry, as written.
    pub expiry: Option<String>,
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::quantity::{Decimal, Measured, Unit};

    fn litres(key: &str) -> Input<Volume> {
        let measured = Measured::new(Decimal::whole(1), Unit::Litre).unwrap();
        Input::new(InputId::new(key), measured)
    }

    fn reference(page: Option<&str>, label: &str) -> SolutionReference {
        SolutionReference {
            page: page.map(str::to_owned),
            label: label.to_owned(),
        }
    }

    /// A liquid with water and a portion of another block's.
    fn using(of: &SolutionReference, composition: &Composition) -> Composition {
        Composition {
            made_up: MadeUp::SumOfPortions,
            ingredients: vec![Ingredient::Solution(SolutionPortion {
                volume: litres("portion"),
                reference: Some(of.clone()),
                composition: Arc::new(composition.seen_from(of)),
            })],
        }
    }

    fn inside(composition: &Composition) -> &SolutionPortion {
        match composition.ingredients.as_slice() {
            [Ingredient::Solution(portion)] => portion,
            other => panic!("{other:?}"),
        }
    }

    fn water_id(composition: &Composition) -> &str {
        match composition.ingredients.as_slice() {
            [Ingredient::Water(volume)] => volume.id.as_str(),
            other => panic!("{other:?}"),
        }
    }

    #[test]
    fn a_block_of_another_page_keeps_its_page_however_far_it_travels() {
        let stock = Composition {
            made_up: MadeUp::SumOfPortions,
            ingredients: vec![Ingredient::Water(litres("water"))],
        };
        let near = reference(None, "stock");
        let far = reference(Some("stocks.md"), "stock");
        let buffer = using(&near, &stock);
        assert_eq!(water_id(&inside(&buffer).composition), "stock : water");
        // The same stock by way of a block of its page, and directly: one quantity, one name.
        let by_way = using(&reference(Some("stocks.md"), "buffer"), &buffer);
        let direct = using(&far, &stock);
        let deep = inside(&inside(&by_way).composition);
        assert_eq!(deep.volume.id.as_str(), "stocks.md#buffer : portion");
        assert_eq!(deep.reference, Some(far));
        assert_eq!(water_id(&deep.composition), "stocks.md#stock : water");
        assert_eq!(
            water_id(&inside(&direct).composition),
            water_id(&deep.composition)
        );
        // On one page nothing is named by page.
        let same_page = using(&reference(None, "buffer"), &buffer);
        let deep = inside(&inside(&same_page).composition);
        assert_eq!(water_id(&deep.composition), "stock : water");
    }
}
