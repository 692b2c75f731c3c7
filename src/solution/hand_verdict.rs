//! Whether a recorded hand value stands.

use crate::equilibrium::elementary::exp10;
use crate::problem::HandValue;
use crate::quantity::{Dimension, RoundingRule};
use crate::solution::answer::HandVerdict;
use crate::solution::shortcut::Trial;

/// Whether a recorded hand value stands: its distance from the full result against the limit.
pub(super) fn verdict(trial: &Trial<'_>, hand: &HandValue) -> HandVerdict {
    let recorded = hand.ph.value().base();
    let shift = recorded - trial.ph();
    let stands = shift.abs() <= trial.limit + 1e-12;
    let gives = trial.of(hand.by);
    let shown = |value: f64| RoundingRule::HalfEven.to_places(value, 3);
    let against = format!(
        "it is {} from the full result {}, limit {}",
        signed(shift),
        shown(trial.ph()),
        trial.limit
    );
    let of_shortcut = match &gives {
        None => format!(
            "the shortcut \"{}\" does not apply to this solution",
            hand.by.name()
        ),
        Some(result) => {
            let unit = exp10(-f64::from(trial.decimals));
            if (result.ph - recorded).abs() <= 1.0001 * unit {
                format!(
                    "the shortcut gives {}; condition: {}",
                    shown(result.ph),
                    result.condition
                )
            } else {
                format!(
                    "the shortcut, worked again, gives {}, not {}; condition: {}",
                    shown(result.ph),
                    hand.ph.measured,
                    result.condition
                )
            }
        }
    };
    HandVerdict {
        recorded: hand.ph.measured.to_string(),
        by: hand.by,
        shortcut_gives: gives.map(|result| result.ph),
        shift,
        limit: trial.limit,
        stands,
        reason: format!("{against}; {of_shortcut}"),
    }
}

fn signed(value: f64) -> String {
    let figure = RoundingRule::HalfEven.to_places(value, 3);
    if value > 0.0 {
        format!("+{figure}")
    } else {
        figure
    }
}
