//! One panel of a plot: a frame with an axis of its own, curves, dots and marks.

use crate::quantity::RoundingRule;
use crate::report::escape;
use crate::report::plot::axis::Range;

/// How a curve is drawn: colour (Okabe and Ito's palette, safe for the colour-blind; recalled) and dash pattern.
const STYLES: [(&str, &str); 7] = [
    ("#0072B2", ""),
    ("#D55E00", "9 4"),
    ("#000000", "2 3"),
    ("#009E73", "10 3 2 3"),
    ("#CC79A7", "5 3"),
    ("#E69F00", "14 4"),
    ("#56B4E9", "10 3 2 3 2 3"),
];

/// Where and what a panel is.
#[derive(Clone, Debug)]
pub(super) struct Panel {
    /// Height of the frame in pixels.
    pub(super) height: f64,
    /// Label of the upright axis.
    pub(super) label: String,
    /// Its range.
    pub(super) range: Range,
    /// Most intervals between its ticks.
    pub(super) ticks: u32,
    pub(super) curves: Vec<Curve>,
    pub(super) dots: Vec<(f64, f64)>,
    /// Level lines with their names.
    pub(super) levels: Vec<(f64, String)>,
}

/// A curve with its name beside it.
#[derive(Clone, Debug)]
pub(super) struct Curve {
    pub(super) points: Vec<(f64, f64)>,
    /// Index of its style.
    pub(super) style: usize,
    /// Its name and the point beside which it stands.
    pub(super) name: Option<(String, (f64, f64))>,
}

/// A mark across all panels at one place of the common axis.
#[derive(Clone, Debug)]
pub(super) struct Mark {
    pub(super) at: f64,
    pub(super) name: String,
}

/// The frame of a panel on the page, in pixels, with the common axis.
#[derive(Clone, Copy, Debug)]
pub(super) struct Frame {
    pub(super) left: f64,
    pub(super) top: f64,
    pub(super) width: f64,
    pub(super) height: f64,
    pub(super) across: Range,
    pub(super) upright: Range,
}

impl Frame {
    fn x(self, value: f64) -> f64 {
        self.left + self.width * self.across.share(value)
    }

    fn y(self, value: f64) -> f64 {
        self.top + self.height * (1.0 - self.upright.share(value))
    }

    fn bottom(self) -> f64 {
        self.top + self.height
    }

    fn right(self) -> f64 {
        self.left + self.width
    }
}

impl Panel {
    /// Draws the panel.
    pub(super) fn draw(&self, frame: Frame, marks: &[Mark], svg: &mut String) {
        self.draw_axis(frame, svg);
        for mark in marks.iter().filter(|mark| frame.across.contains(mark.at)) {
            let x = pixels(frame.x(mark.at));
            push(
                svg,
                &format!(
                    "<line x1=\"{x}\" y1=\"{}\" x2=\"{x}\" y2=\"{}\" stroke=\"#555\" stroke-width=\"1\" stroke-dasharray=\"3 3\"/>",
                    pixels(frame.top),
                    pixels(frame.bottom())
                ),
            );
        }
        for (level, name) in &self.levels {
            let y = frame.y(*level);
            push(
                svg,
                &format!(
                    "<line x1=\"{}\" y1=\"{1}\" x2=\"{2}\" y2=\"{1}\" stroke=\"#555\" stroke-width=\"1\" stroke-dasharray=\"6 4\"/>",
                    pixels(frame.left),
                    pixels(y),
                    pixels(frame.right())
                ),
            );
            let beside = if y - frame.top < 18.0 { 14.0 } else { -4.0 };
            push(svg, &text(frame.right() - 4.0, y + beside, "end", name));
        }
        for curve in &self.curves {
            draw_curve(curve, frame, svg);
        }
        for (x, y) in &self.dots {
            push(
                svg,
                &format!(
                    "<circle cx=\"{}\" cy=\"{}\" r=\"3\" fill=\"#fff\" stroke=\"#000\" stroke-width=\"1.2\"/>",
                    pixels(frame.x(*x)),
                    pixels(frame.y(*y))
                ),
            );
        }
        for curve in &self.curves {
            draw_name(curve, frame, svg);
        }
    }

    fn draw_axis(&self, frame: Frame, svg: &mut String) {
        for tick in self.range.ticks(self.ticks) {
            let y = frame.y(tick.value);
            push(
                svg,
                &format!(
                    "<line x1=\"{}\" y1=\"{1}\" x2=\"{2}\" y2=\"{1}\" stroke=\"#ddd\" stroke-width=\"1\"/>",
                    pixels(frame.left),
                    pixels(y),
                    pixels(frame.right())
                ),
            );
            push(svg, &text(frame.left - 7.0, y + 4.0, "end", &tick.label));
        }
        push(
            svg,
            &format!(
                "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" fill=\"none\" stroke=\"#000\" stroke-width=\"1\"/>",
                pixels(frame.left),
                pixels(frame.top),
                pixels(frame.width),
                pixels(frame.height)
            ),
        );
        let middle = frame.top + frame.height / 2.0;
        push(
            svg,
            &format!(
                "<text x=\"18\" y=\"{0}\" text-anchor=\"middle\" transform=\"rotate(-90 18 {0})\">{1}</text>",
                pixels(middle),
                escape::xml(&self.label)
            ),
        );
    }
}

fn draw_curve(curve: &Curve, frame: Frame, svg: &mut String) {
    let (colour, dashes) = style(curve.style);
    let mut points = String::new();
    for (x, y) in curve
        .points
        .iter()
        .filter(|(x, y)| x.is_finite() && y.is_finite())
    {
        if !points.is_empty() {
            points.push(' ');
        }
        points.push_str(&pixels(frame.x(*x)));
        points.push(',');
        points.push_str(&pixels(frame.y(*y)));
    }
    let dashes = if dashes.is_empty() {
        String::new()
    } else {
        format!(" stroke-dasharray=\"{dashes}\"")
    };
    push(
        svg,
        &format!(
            "<polyline points=\"{points}\" fill=\"none\" stroke=\"{colour}\" stroke-width=\"2\" stroke-linejoin=\"round\"{dashes}/>"
        ),
    );
}

/// The name of a curve, above its point, kept inside the frame, in the colour of the curve on a white edge.
fn draw_name(curve: &Curve, frame: Frame, svg: &mut String) {
    let Some((name, (x, y))) = &curve.name else {
        return;
    };
    let (colour, _) = style(curve.style);
    let share = frame.across.share(*x);
    let (anchor, aside) = if share < 0.12 {
        ("start", 6.0)
    } else if share > 0.88 {
        ("end", -6.0)
    } else {
        ("middle", 0.0)
    };
    let y = (frame.y(*y) - 7.0).max(frame.top + 15.0);
    push(
        svg,
        &format!(
            "<text x=\"{}\" y=\"{}\" text-anchor=\"{anchor}\" fill=\"{colour}\" stroke=\"#fff\" stroke-width=\"4\" stroke-linejoin=\"round\" paint-order=\"stroke\">{}</text>",
            pixels(frame.x(*x) + aside),
            pixels(y),
            escape::xml(name)
        ),
    );
}

fn style(index: usize) -> (&'static str, &'static str) {
    STYLES
        .get(index % STYLES.len())
        .copied()
        .unwrap_or(("#000000", ""))
}

/// A text at a place.
pub(super) fn text(x: f64, y: f64, anchor: &str, content: &str) -> String {
    format!(
        "<text x=\"{}\" y=\"{}\" text-anchor=\"{anchor}\">{}</text>",
        pixels(x),
        pixels(y),
        escape::xml(content)
    )
}

/// A length in pixels, to hundredths.
pub(super) fn pixels(value: f64) -> String {
    RoundingRule::HalfEven.to_places(value, 2)
}

/// One element, one line.
pub(super) fn push(svg: &mut String, element: &str) {
    svg.push_str(element);
    svg.push('\n');
}
