//! An SVG document: panels above each other with a common axis below.

use crate::report::escape;
use crate::report::plot::axis::Range;
use crate::report::plot::panel::{Frame, Mark, Panel, pixels, push, text};

/// Width of the document, and its margins, in pixels.
const WIDTH: f64 = 680.0;
const LEFT: f64 = 74.0;
const RIGHT: f64 = 18.0;
const TOP: f64 = 58.0;
const BOTTOM: f64 = 52.0;
const GAP: f64 = 16.0;

/// A whole plot.
#[derive(Clone, Debug)]
pub(super) struct Document {
    pub(super) title: String,
    /// What it shows, in a sentence.
    pub(super) description: String,
    /// Label of the common axis, with its unit.
    pub(super) label: String,
    /// Range of the common axis.
    pub(super) across: Range,
    /// Marks through all panels.
    pub(super) marks: Vec<Mark>,
    pub(super) panels: Vec<Panel>,
}

impl Document {
    /// The document's text, ending in a line feed.
    pub(super) fn svg(&self) -> String {
        let panels: f64 = self.panels.iter().map(|panel| panel.height + GAP).sum();
        let height = TOP + panels - GAP + BOTTOM;
        let mut svg = String::new();
        self.open(height, &mut svg);
        let mut top = TOP;
        for panel in &self.panels {
            let frame = Frame {
                left: LEFT,
                top,
                width: WIDTH - LEFT - RIGHT,
                height: panel.height,
                across: self.across,
                upright: panel.range,
            };
            self.draw_grid(top, panel.height, &mut svg);
            panel.draw(frame, &self.marks, &mut svg);
            top += panel.height + GAP;
        }
        self.draw_common_axis(top - GAP, &mut svg);
        self.draw_marks(&mut svg);
        push(&mut svg, "</svg>");
        svg
    }

    fn open(&self, height: f64, svg: &mut String) {
        let (width, height) = (pixels(WIDTH), pixels(height));
        push(
            svg,
            &format!(
                "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {width} {height}\" width=\"{width}\" height=\"{height}\" role=\"img\" \
                 aria-labelledby=\"title description\" font-family=\"DejaVu Sans, Arial, Helvetica, sans-serif\" font-size=\"13\">"
            ),
        );
        push(
            svg,
            &format!("<title id=\"title\">{}</title>", escape::xml(&self.title)),
        );
        push(
            svg,
            &format!(
                "<desc id=\"description\">{}</desc>",
                escape::xml(&self.description)
            ),
        );
        push(
            svg,
            &format!("<rect width=\"{width}\" height=\"{height}\" fill=\"#fff\"/>"),
        );
        push(
            svg,
            &format!(
                "<text x=\"{}\" y=\"22\" font-size=\"15\" font-weight=\"bold\">{}</text>",
                pixels(LEFT),
                escape::xml(&self.title)
            ),
        );
    }

    fn x(&self, value: f64) -> f64 {
        LEFT + (WIDTH - LEFT - RIGHT) * self.across.share(value)
    }

    fn draw_grid(&self, top: f64, height: f64, svg: &mut String) {
        for tick in self.across.ticks(10) {
            let x = pixels(self.x(tick.value));
            push(
                svg,
                &format!(
                    "<line x1=\"{x}\" y1=\"{}\" x2=\"{x}\" y2=\"{}\" stroke=\"#ddd\" stroke-width=\"1\"/>",
                    pixels(top),
                    pixels(top + height)
                ),
            );
        }
    }

    fn draw_common_axis(&self, bottom: f64, svg: &mut String) {
        for tick in self.across.ticks(10) {
            push(
                svg,
                &text(self.x(tick.value), bottom + 18.0, "middle", &tick.label),
            );
        }
        let middle = LEFT + (WIDTH - LEFT - RIGHT) / 2.0;
        push(svg, &text(middle, bottom + 40.0, "middle", &self.label));
    }

    /// The names of the marks above the first panel, in two rows where they are close.
    fn draw_marks(&self, svg: &mut String) {
        let mut latest = f64::NEG_INFINITY;
        let mut raised = false;
        for mark in self
            .marks
            .iter()
            .filter(|mark| self.across.contains(mark.at))
        {
            let x = self.x(mark.at);
            raised = x - latest < 110.0 && !raised;
            latest = x;
            let y = if raised { TOP - 20.0 } else { TOP - 6.0 };
            let share = self.across.share(mark.at);
            let anchor = if share < 0.1 {
                "start"
            } else if share > 0.9 {
                "end"
            } else {
                "middle"
            };
            push(svg, &text(x, y, anchor, &mark.name));
        }
    }
}
