//! The titration curve with its slope below, and the residuals of a fit.

use crate::problem::{Readings, Signal};
use crate::quantity::RoundingRule;
use crate::report::figures;
use crate::report::plot::axis::Range;
use crate::report::plot::document::Document;
use crate::report::plot::panel::{Curve, Mark, Panel};
use crate::solution::answer::{Fit, TitrationOutcome};

/// The curve, or `None` where it has no points.
pub(super) fn curve(
    label: &str,
    titrated: &TitrationOutcome,
    readings: Option<&Readings>,
) -> Option<Document> {
    let points: Vec<(f64, f64)> = titrated
        .points
        .iter()
        .map(|point| (point.volume_ml, point.ph))
        .collect();
    let slopes: Vec<(f64, f64)> = titrated
        .points
        .iter()
        .map(|point| (point.volume_ml, point.slope))
        .collect();
    let across = Range::of(points.iter().map(|(volume, _)| *volume))?;
    let dots = measured(readings);
    let upright = Range::of(points.iter().chain(&dots).map(|(_, ph)| *ph))?.to_ticks(7);
    let slope = Range::of(slopes.iter().map(|(_, slope)| *slope).chain([0.0]))?.to_ticks(4);
    let marks = equivalence_marks(titrated);
    let equivalence = marks
        .iter()
        .map(|mark| mark.name.as_str())
        .collect::<Vec<_>>()
        .join("; ");
    let circles = if dots.is_empty() {
        ""
    } else {
        " Circles are readings."
    };
    Some(Document {
        title: format!("{label}: titration curve"),
        description: format!(
            "pH against volume of titrant, with the slope below; equivalence at {}.{circles}",
            if equivalence.is_empty() {
                "no point of the curve"
            } else {
                &equivalence
            }
        ),
        label: "volume of titrant in mL".to_owned(),
        across,
        marks,
        panels: vec![
            Panel {
                curves: line(points),
                dots,
                ..panel(250.0, "pH", upright, 7)
            },
            Panel {
                curves: line(slopes),
                ..panel(120.0, "slope in pH/mL", slope, 4)
            },
        ],
    })
}

fn equivalence_marks(titrated: &TitrationOutcome) -> Vec<Mark> {
    titrated
        .equivalence_points
        .iter()
        .map(|point| Mark {
            at: point.volume_ml,
            name: format!(
                "{} mL, pH {}",
                hundredths(point.volume_ml),
                hundredths(point.ph)
            ),
        })
        .collect()
}

/// The residuals of a fit over volume, with three standard deviations, or `None` where there are none.
pub(super) fn residuals(label: &str, fit: &Fit, readings: &Readings) -> Option<Document> {
    let dots: Vec<(f64, f64)> = readings
        .points
        .iter()
        .map(|point| point.volume_ml)
        .zip(fit.residuals.iter().copied())
        .collect();
    let across = Range::of(dots.iter().map(|(volume, _)| *volume).chain([0.0]))?.to_ticks(10);
    let three = 3.0 * fit.residual_standard_deviation;
    let upright = Range::of(
        dots.iter()
            .map(|(_, residual)| *residual)
            .chain([-three, three]),
    )?
    .to_ticks(6);
    let deviation = figures::short(
        RoundingRule::HalfEven
            .to_figures(fit.residual_standard_deviation, 2)
            .to_f64(),
    );
    let panel = Panel {
        dots,
        levels: vec![
            (three, "+3 s".to_owned()),
            (0.0, String::new()),
            (-three, "−3 s".to_owned()),
        ],
        ..panel(220.0, "residual in pH", upright, 6)
    };
    Some(Document {
        title: format!("{label}: residuals of the fit"),
        description: format!(
            "Reading less fitted pH against volume of titrant; residual standard deviation s = {deviation}."
        ),
        label: "volume of titrant in mL".to_owned(),
        across,
        marks: Vec::new(),
        panels: vec![panel],
    })
}

/// A panel with a label and a range, and nothing in it yet.
fn panel(height: f64, label: &str, range: Range, ticks: u32) -> Panel {
    Panel {
        height,
        label: label.to_owned(),
        range,
        ticks,
        curves: Vec::new(),
        dots: Vec::new(),
        levels: Vec::new(),
    }
}

/// A curve without a name: it is alone in its panel.
fn line(points: Vec<(f64, f64)>) -> Vec<Curve> {
    vec![Curve {
        points,
        style: 0,
        name: None,
    }]
}

/// Readings in pH; cell voltages are not turned into pH here, that is the fit's affair.
fn measured(readings: Option<&Readings>) -> Vec<(f64, f64)> {
    readings
        .filter(|readings| readings.signal == Signal::Ph)
        .map(|readings| {
            readings
                .points
                .iter()
                .map(|point| (point.volume_ml, point.signal))
                .collect()
        })
        .unwrap_or_default()
}

fn hundredths(value: f64) -> String {
    RoundingRule::HalfEven.to_places(value, 2)
}
