//! Shares of the species over pH, with the pH of the solution, and the buffer capacity below.

use crate::quantity::RoundingRule;
use crate::report::plot::axis::Range;
use crate::report::plot::document::Document;
use crate::report::plot::panel::{Curve, Mark, Panel};
use crate::solution::answer::{Distribution, DistributionCurve, State};

/// Fewest protonation states that make a plot worth its place: two are said by one pK.
const FEWEST_STATES: usize = 3;

/// Most characters of a name beside a panel.
const LONGEST_NAME: usize = 20;

/// The plot, or `None` where no ligand has more than one step.
pub(super) fn over_ph(label: &str, distribution: &Distribution, state: &State) -> Option<Document> {
    let across = Range::of(distribution.ph.iter().copied())?;
    let mut ligands: Vec<&str> = Vec::new();
    for curve in &distribution.curves {
        if !ligands.contains(&curve.component.as_str()) {
            ligands.push(&curve.component);
        }
    }
    let mut panels: Vec<Panel> = ligands
        .iter()
        .filter_map(|ligand| shares(ligand, distribution))
        .collect();
    if panels.is_empty() {
        return None;
    }
    let names = ligands.join(", ");
    panels.extend(capacity(distribution));
    let ph = RoundingRule::HalfEven.to_places(state.ph, 2);
    let with_capacity = if distribution.buffer_capacity.is_empty() {
        ""
    } else {
        "; below it the buffer capacity β"
    };
    Some(Document {
        title: format!("{label}: species over pH"),
        description: format!(
            "Share of each species of {names} over pH, the solution's pH {ph} marked{with_capacity}."
        ),
        label: "pH".to_owned(),
        across,
        marks: vec![Mark {
            at: state.ph,
            name: format!("this solution, pH {ph}"),
        }],
        panels,
    })
}

fn shares(ligand: &str, distribution: &Distribution) -> Option<Panel> {
    let own: Vec<&DistributionCurve> = distribution
        .curves
        .iter()
        .filter(|curve| curve.component == ligand)
        .collect();
    if own.len() < FEWEST_STATES {
        return None;
    }
    let curves = own
        .into_iter()
        .enumerate()
        .map(|(style, curve)| {
            let points: Vec<(f64, f64)> = distribution
                .ph
                .iter()
                .copied()
                .zip(curve.fractions.iter().copied())
                .collect();
            let top = top(&points);
            Curve {
                name: top.map(|top| (curve.species.clone(), top)),
                points,
                style,
            }
        })
        .collect();
    Some(Panel {
        height: 210.0,
        label: format!("share of {}", shortened(ligand)),
        range: Range {
            low: 0.0,
            high: 1.1,
        },
        ticks: 6,
        curves,
        dots: Vec::new(),
        levels: Vec::new(),
    })
}

/// A name that fits beside a panel; the whole one stands in the description.
fn shortened(name: &str) -> String {
    if name.chars().count() <= LONGEST_NAME {
        return name.to_owned();
    }
    let mut short: String = name.chars().take(LONGEST_NAME - 1).collect();
    short.push('…');
    short
}

/// The middle of the stretch in which a curve is near its top.
fn top(points: &[(f64, f64)]) -> Option<(f64, f64)> {
    let highest = points
        .iter()
        .map(|(_, y)| *y)
        .filter(|y| y.is_finite())
        .max_by(f64::total_cmp)?;
    let near = || points.iter().filter(|(_, y)| *y >= 0.995 * highest);
    let (first, last) = (near().next()?, near().next_back()?);
    Some((0.5 * (first.0 + last.0), highest))
}

fn capacity(distribution: &Distribution) -> Option<Panel> {
    let points: Vec<(f64, f64)> = distribution
        .ph
        .iter()
        .copied()
        .zip(distribution.buffer_capacity.iter().map(|mol| 1000.0 * mol))
        .collect();
    // Beyond the steps water itself buffers without end; the axis follows the hills between.
    let inner = points
        .iter()
        .filter(|(ph, _)| (2.5..=11.5).contains(ph))
        .map(|(_, capacity)| *capacity);
    let highest = Range::of(inner)?.high * 1.25;
    let range = Range {
        low: 0.0,
        high: highest,
    }
    .to_ticks(4);
    Some(Panel {
        height: 130.0,
        label: "β in mmol/L per pH".to_owned(),
        range,
        ticks: 4,
        curves: vec![Curve {
            name: None,
            points,
            style: 0,
        }],
        dots: Vec::new(),
        levels: Vec::new(),
    })
}
