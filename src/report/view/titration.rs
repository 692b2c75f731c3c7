//! A titration as templates see it.

use crate::problem::Readings;
use crate::report::figures::Figures;
use crate::solution::answer::{EquivalencePoint, Fit, IndicatorEndPoint, TitrationOutcome};
use serde::Serialize;

/// A titration, computed and, where there are readings, fitted.
#[derive(Debug, Serialize)]
pub(in crate::report) struct TitrationView {
    /// The whole curve.
    points: Vec<PointView>,
    /// About a dozen points spread over the curve, for a table.
    excerpt: Vec<PointView>,
    equivalence_points: Vec<EquivalenceView>,
    indicators: Vec<IndicatorView>,
    fit: Option<FitView>,
}

/// One point of the curve.
#[derive(Clone, Copy, Debug, Serialize)]
struct PointView {
    volume_ml: f64,
    ph: f64,
    /// In pH per mL.
    slope: f64,
}

/// One equivalence point.
#[derive(Debug, Serialize)]
struct EquivalenceView {
    what: String,
    volume_ml: f64,
    ph: f64,
    slope: f64,
    /// The nearest steepest point of the curve.
    steepest_ml: Option<f64>,
}

/// An indicator at an equivalence point.
#[derive(Debug, Serialize)]
struct IndicatorView {
    name: String,
    /// Transition range.
    low: f64,
    high: f64,
    /// The equivalence point, from 1.
    equivalence_point: usize,
    /// At the middle and at the end of the range.
    middle_ml: f64,
    end_ml: f64,
    /// Systematic error at the middle of the range, in percent.
    error_percent: f64,
}

/// A fit to readings.
#[derive(Debug, Serialize)]
struct FitView {
    /// The attachment.
    readings: Option<String>,
    number_of_readings: usize,
    fitted: Vec<FittedView>,
    correlation: Vec<Vec<f64>>,
    residual_standard_deviation: f64,
    degrees_of_freedom: usize,
    runs_probability: f64,
    /// Lines of the file.
    outliers: Vec<usize>,
    end_points: Vec<EndPointView>,
    warnings: Vec<String>,
}

/// One fitted quantity.
#[derive(Debug, Serialize)]
struct FittedView {
    quantity: String,
    /// Unrounded.
    value: f64,
    standard_error: f64,
    /// Rounded to the place of the standard error.
    value_text: String,
    standard_error_text: String,
    unit: &'static str,
}

/// An end point by a method.
#[derive(Debug, Serialize)]
struct EndPointView {
    method: String,
    volume_ml: f64,
}

/// Number of points in the excerpt.
const EXCERPT: usize = 12;

impl TitrationView {
    pub(super) fn of(
        figures: Figures,
        titration: &TitrationOutcome,
        readings: Option<&Readings>,
    ) -> Self {
        let points: Vec<PointView> = titration
            .points
            .iter()
            .map(|point| PointView {
                volume_ml: point.volume_ml,
                ph: point.ph,
                slope: point.slope,
            })
            .collect();
        Self {
            excerpt: excerpt(&points),
            points,
            equivalence_points: titration
                .equivalence_points
                .iter()
                .map(EquivalenceView::of)
                .collect(),
            indicators: titration.indicators.iter().map(IndicatorView::of).collect(),
            fit: titration
                .fit
                .as_ref()
                .map(|fit| FitView::of(figures, fit, readings)),
        }
    }
}

/// Points spread evenly over the volumes, the first and the last among them.
fn excerpt(points: &[PointView]) -> Vec<PointView> {
    let (Some(first), Some(last)) = (points.first(), points.last()) else {
        return Vec::new();
    };
    let mut chosen: Vec<PointView> = vec![*first];
    let steps = u32::try_from(EXCERPT - 1).unwrap_or(1);
    for step in 1..=steps {
        let share = f64::from(step) / f64::from(steps);
        let wanted = first.volume_ml + share * (last.volume_ml - first.volume_ml);
        let nearest = points.iter().min_by(|a, b| {
            let distance = |point: &PointView| (point.volume_ml - wanted).abs();
            distance(a).total_cmp(&distance(b))
        });
        if let (Some(nearest), Some(latest)) = (nearest, chosen.last())
            && nearest.volume_ml > latest.volume_ml
        {
            chosen.push(*nearest);
        }
    }
    chosen
}

impl EquivalenceView {
    fn of(point: &EquivalencePoint) -> Self {
        Self {
            what: point.what.clone(),
            volume_ml: point.volume_ml,
            ph: point.ph,
            slope: point.slope,
            steepest_ml: point.steepest_ml,
        }
    }
}

impl IndicatorView {
    fn of(end_point: &IndicatorEndPoint) -> Self {
        Self {
            name: end_point.indicator.clone(),
            low: end_point.range.0,
            high: end_point.range.1,
            equivalence_point: end_point.equivalence_point + 1,
            middle_ml: end_point.volumes_ml.1,
            end_ml: end_point.volumes_ml.0,
            error_percent: end_point.error_percent,
        }
    }
}

impl FitView {
    fn of(figures: Figures, fit: &Fit, readings: Option<&Readings>) -> Self {
        Self {
            readings: readings.map(|readings| readings.path.clone()),
            number_of_readings: fit.residuals.len(),
            fitted: fit
                .fitted
                .iter()
                .map(|fitted| {
                    let (value_text, standard_error_text) =
                        figures.with_error(fitted.value, fitted.standard_error);
                    FittedView {
                        quantity: fitted.quantity.clone(),
                        value: fitted.value,
                        standard_error: fitted.standard_error,
                        value_text,
                        standard_error_text,
                        unit: fitted.unit,
                    }
                })
                .collect(),
            correlation: fit.correlation.clone(),
            residual_standard_deviation: fit.residual_standard_deviation,
            degrees_of_freedom: fit.degrees_of_freedom,
            runs_probability: fit.runs_probability,
            outliers: fit.outliers.clone(),
            end_points: fit
                .end_points
                .iter()
                .map(|(method, volume_ml)| EndPointView {
                    method: method.clone(),
                    volume_ml: *volume_ml,
                })
                .collect(),
            warnings: fit.warnings.clone(),
        }
    }
}
