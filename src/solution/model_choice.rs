//! From the activity model that a block names to the one that is computed with.

use crate::equilibrium::ActivityModel;
use crate::problem::{Acceptance, ActivityChoice, Conditions};
use crate::solution::Unsolvable;

/// The model that is computed with, and the one it is compared with.
#[derive(Clone, Debug)]
pub(super) struct ChosenModel {
    /// The choice, never `best`.
    pub(super) choice: ActivityChoice,
    /// The model in the numerics.
    pub(super) model: ActivityModel,
    /// Why this one, where `best` was asked for.
    pub(super) reason: Option<String>,
    /// The second model and its name.
    pub(super) second: (&'static str, ActivityModel),
}

/// Ionic strength in mol/kg above which a pH is given only where the block accepts it.
pub(super) const LARGEST_IONIC_STRENGTH: f64 = 1.0;

/// The model that conditions ask for.
///
/// # Errors
/// [`Unsolvable::ModelLacksCoefficients`] for models of specific interaction, which are used with complete coefficients only.
pub(super) fn choose(conditions: &Conditions) -> Result<ChosenModel, Unsolvable> {
    let choice = conditions.activity.value;
    let davies = ("davies", ActivityModel::Davies);
    let sized = ("debye-hueckel", ActivityModel::DebyeHueckel);
    let (model, second) = match choice {
        ActivityChoice::Ideal => (ActivityModel::Ideal, davies),
        ActivityChoice::DebyeHueckel => (ActivityModel::DebyeHueckel, davies),
        ActivityChoice::Guentelberg => (ActivityModel::Guentelberg, davies),
        ActivityChoice::Davies | ActivityChoice::Best => (ActivityModel::Davies, sized),
        ActivityChoice::BatesGuggenheim => (ActivityModel::BatesGuggenheim, davies),
        ActivityChoice::Sit | ActivityChoice::Pitzer => {
            return Err(Unsolvable::ModelLacksCoefficients {
                model: choice.name(),
                missing: "no interaction coefficients are in the library; use davies, debye-hueckel or bates-guggenheim"
                    .to_owned(),
            });
        }
    };
    let best = choice == ActivityChoice::Best;
    Ok(ChosenModel {
        choice: if best { ActivityChoice::Davies } else { choice },
        model,
        reason: best.then(|| {
            "davies: the library has no complete set of interaction coefficients for these ions"
                .to_owned()
        }),
        second,
    })
}

/// Refuses a pH beyond the range of its model, unless the block accepts it. Unit activity coefficients have no range; they carry a caution.
///
/// # Errors
/// [`Unsolvable::BeyondModel`].
pub(super) fn within_range(
    chosen: &ChosenModel,
    conditions: &Conditions,
    ionic_strength: f64,
) -> Result<(), Unsolvable> {
    let accepted = conditions
        .accepted
        .contains(&Acceptance::ModelOutsideItsRange);
    if ionic_strength > LARGEST_IONIC_STRENGTH
        && !accepted
        && chosen.choice != ActivityChoice::Ideal
    {
        return Err(Unsolvable::BeyondModel {
            model: chosen.choice.name(),
            ionic_strength,
        });
    }
    Ok(())
}
