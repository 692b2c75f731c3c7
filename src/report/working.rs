//! The balances term by term, so that a reviewer with a pocket calculator can follow.
//!
//! Every sum is formed from the figures as printed, so a calculator gives exactly what stands there. What the printed figures leave over
//! comes from their rounding; beside it stands the residual of the unrounded figures.

use crate::problem::Reporting;
use crate::quantity::Decimal;
use crate::report::figures::{self, Figures};
use crate::solution::answer::{Answer, SpeciesState, State};
use serde::Serialize;

/// The working of one answer.
#[derive(Debug, Serialize)]
pub(super) struct Working {
    /// Σ of the positive charges against Σ of the negative.
    pub(super) charge: ChargeBalance,
    /// One balance for each component with more than one species.
    pub(super) mass: Vec<MassBalance>,
    /// pH from the molality of H⁺.
    proton: ProtonCheck,
    /// pK from the activities at each step.
    pub(super) steps: Vec<StepCheck>,
}

/// One species in a balance.
#[derive(Debug, Serialize)]
pub(super) struct Term {
    name: String,
    /// How often it counts: its charge number without sign, or its units of the component.
    count: u32,
    /// In mol/L, as printed.
    concentration: String,
    /// `count` times the printed concentration, exactly.
    pub(super) product: String,
}

/// The charge balance in mol/L of charge.
#[derive(Debug, Serialize)]
pub(super) struct ChargeBalance {
    pub(super) positive: Vec<Term>,
    pub(super) negative: Vec<Term>,
    pub(super) positive_sum: String,
    pub(super) negative_sum: String,
    /// Positive less negative, of the printed figures.
    pub(super) left_over: String,
    /// The most that rounding of the printed figures can leave over.
    pub(super) rounding: String,
}

/// The mass balance of one component in mol/L.
#[derive(Debug, Serialize)]
pub(super) struct MassBalance {
    component: String,
    pub(super) terms: Vec<Term>,
    pub(super) sum: String,
    /// Analytical concentration, as printed.
    pub(super) total: String,
    /// Sum less total, of the printed figures.
    pub(super) left_over: String,
    pub(super) rounding: String,
}

/// a(H⁺) from its molality.
#[derive(Debug, Serialize)]
struct ProtonCheck {
    /// In mol/kg.
    molality: f64,
    activity_coefficient: f64,
    activity: f64,
}

/// The mass action of one step: pK − pH is lg of the ratio of activities.
#[derive(Debug, Serialize)]
pub(super) struct StepCheck {
    ligand: String,
    /// From 1.
    step: usize,
    acid: String,
    base: String,
    /// a(acid)/a(base).
    pub(super) ratio: f64,
    pub(super) pk: f64,
    /// pK − pH.
    pub(super) difference: f64,
}

impl Working {
    pub(super) fn of(reporting: Reporting, answer: &Answer) -> Self {
        let figures = Figures::new(reporting);
        let state = &answer.state;
        let count = figures.significant().saturating_add(1).max(5);
        let proton = state.species.iter().find(|species| is_proton(species));
        let (molality, activity_coefficient) = proton.map_or((0.0, 1.0), |species| {
            (species.molality, species.activity_coefficient)
        });
        Self {
            charge: charge_balance(figures, count, state),
            mass: mass_balances(figures, count, state),
            proton: ProtonCheck {
                molality,
                activity_coefficient,
                activity: molality * activity_coefficient,
            },
            steps: step_checks(answer),
        }
    }
}

fn is_proton(species: &SpeciesState) -> bool {
    species.component.is_none() && species.charge == 1
}

fn charge_balance(figures: Figures, count: u8, state: &State) -> ChargeBalance {
    let side = |sign: i8| -> Vec<&SpeciesState> {
        state
            .species
            .iter()
            .filter(|species| species.charge.signum() == sign && species.concentration > 0.0)
            .collect()
    };
    let (positive, negative) = (side(1), side(-1));
    let largest = charge(&positive).max(charge(&negative));
    let places = places_for(figures, largest, count);
    let number = |species: &SpeciesState| u32::from(species.charge.unsigned_abs());
    let (positive, positive_sum) = terms(figures, places, &positive, number);
    let (negative, negative_sum) = terms(figures, places, &negative, number);
    let counted: u32 = positive
        .iter()
        .chain(&negative)
        .map(|term| term.count)
        .sum();
    ChargeBalance {
        left_over: printed(difference(positive_sum, negative_sum)),
        rounding: printed(half_units(counted, places)),
        positive_sum: printed(positive_sum),
        negative_sum: printed(negative_sum),
        positive,
        negative,
    }
}

fn charge(side: &[&SpeciesState]) -> f64 {
    side.iter()
        .map(|species| f64::from(species.charge.unsigned_abs()) * species.concentration)
        .sum()
}

fn mass_balances(figures: Figures, count: u8, state: &State) -> Vec<MassBalance> {
    let mut balances = Vec::new();
    for total in &state.totals {
        let species: Vec<&SpeciesState> = state
            .species
            .iter()
            .filter(|species| species.component.as_deref() == Some(total.component.as_str()))
            .filter(|species| species.concentration > 0.0)
            .collect();
        if species.len() < 2 {
            continue;
        }
        let places = places_for(figures, total.concentration, count);
        let (terms, sum) = terms(figures, places, &species, |species| {
            u32::from(species.nuclearity)
        });
        let stated = figures.decimal(total.concentration, places);
        let counted: u32 = terms.iter().map(|term| term.count).sum();
        balances.push(MassBalance {
            component: total.component.clone(),
            sum: printed(sum),
            total: printed(stated),
            left_over: printed(difference(sum, stated)),
            rounding: printed(half_units(counted.saturating_add(1), places)),
            terms,
        });
    }
    balances
}

/// The terms of one side with their sum, exact in the printed figures.
fn terms(
    figures: Figures,
    places: u8,
    species: &[&SpeciesState],
    number: impl Fn(&SpeciesState) -> u32,
) -> (Vec<Term>, Decimal) {
    let mut sum = Decimal::new(false, 0, -i32::from(places));
    let mut terms = Vec::new();
    for one in species {
        let count = number(one);
        let rounded = figures.decimal(one.concentration, places);
        let digits = rounded.digits().saturating_mul(u128::from(count));
        let product = Decimal::new(false, digits, rounded.exponent());
        sum = Decimal::new(
            false,
            sum.digits().saturating_add(product.digits()),
            sum.exponent(),
        );
        terms.push(Term {
            name: one.name.clone(),
            count,
            concentration: if rounded.is_zero() {
                figures.figures(one.concentration, 2)
            } else {
                printed(rounded)
            },
            product: printed(product),
        });
    }
    (terms, sum)
}

fn step_checks(answer: &Answer) -> Vec<StepCheck> {
    let mut checks = Vec::new();
    for (ligand, step, pk) in &answer.constants.pk_at_temperature {
        let of_ligand = |species: &&SpeciesState| {
            species.component.as_deref() == Some(ligand.as_str()) && species.nuclearity == 1
        };
        let states: Vec<&SpeciesState> = answer.state.species.iter().filter(of_ligand).collect();
        let most = states.iter().map(|species| species.protons).max();
        let Some(lost) = i8::try_from(*step).ok().zip(most) else {
            continue;
        };
        let acid_protons = lost.1.saturating_sub(lost.0).saturating_add(1);
        let with = |protons: i8| states.iter().find(|species| species.protons == protons);
        let (Some(acid), Some(base)) = (with(acid_protons), with(acid_protons.saturating_sub(1)))
        else {
            continue;
        };
        let activity = |species: &SpeciesState| species.molality * species.activity_coefficient;
        let ratio = activity(acid) / activity(base);
        if ratio.is_normal() {
            checks.push(StepCheck {
                ligand: ligand.clone(),
                step: *step,
                acid: acid.name.clone(),
                base: base.name.clone(),
                ratio,
                pk: *pk,
                difference: pk - answer.state.ph,
            });
        }
    }
    checks
}

/// Decimal places that give a number so many figures.
fn places_for(figures: Figures, value: f64, count: u8) -> u8 {
    if value <= 0.0 || !value.is_finite() {
        return 3;
    }
    let rounded = figures.to_figures(value, count);
    u8::try_from(rounded.decimal_places()).unwrap_or(30).min(30)
}

/// The difference of two decimals with the same exponent.
fn difference(a: Decimal, b: Decimal) -> Decimal {
    let digits = a.digits().abs_diff(b.digits());
    Decimal::new(a.digits() < b.digits(), digits, a.exponent())
}

/// So many halves of the last place, rounded up to a whole one.
fn half_units(count: u32, places: u8) -> Decimal {
    Decimal::new(false, u128::from(count.div_ceil(2)), -i32::from(places))
}

/// All places, without power of ten: figures that are added up stand under each other.
fn printed(decimal: Decimal) -> String {
    figures::plain(decimal).replace('-', "−")
}
