//! The notebook's defaults, read by the very same keys as a block's.

use crate::block::range::{self, Ranged};
use crate::block::{amount, choice};
use crate::problem::{ActivityChoice, Air, Input, InputId, Origin, Stated, UncertaintyMode};
use crate::quantity::{Decimal, Measured, RoundingRule, Temperature};
use crate::text::Diagnostic;
use crate::yaml::{self, Limits, Node, Scalar};

/// What holds where a block says nothing, each with who stated it.
#[derive(Clone, Debug, PartialEq)]
pub struct Defaults {
    temperature: Stated<Measured<Temperature>>,
    pub(super) activity: Stated<ActivityChoice>,
    pub(super) air: Stated<Air>,
    pub(super) uncertainty: Stated<UncertaintyMode>,
    ph_decimals: Stated<u8>,
    figures: Stated<u8>,
    rounding: Stated<RoundingRule>,
}

impl Defaults {
    /// The program's own: 25 °C, Davies, closed, budget, two decimals of pH, four figures, half-even.
    pub fn program() -> Self {
        Self {
            temperature: program(Measured::celsius(Decimal::whole(25))),
            activity: program(ActivityChoice::Davies),
            air: program(Air::Closed),
            uncertainty: program(UncertaintyMode::Budget),
            ph_decimals: program(2),
            figures: program(4),
            rounding: program(RoundingRule::HalfEven),
        }
    }

    /// The defaults that a settings file states, over the program's own.
    pub fn read(node: &Node, diagnostics: &mut Vec<Diagnostic>) -> Self {
        let mut defaults = Self::program();
        let Some(mapping) = node.as_mapping(diagnostics) else {
            return defaults;
        };
        let mut keys = mapping.keys();
        if let Some(scalar) = keys.text("temperature", diagnostics) {
            put(&mut defaults.temperature, temperature(scalar, diagnostics));
        }
        if let Some(scalar) = keys.text("activity", diagnostics) {
            put(
                &mut defaults.activity,
                choice::activity(scalar, diagnostics),
            );
        }
        if let Some(scalar) = keys.text("air", diagnostics) {
            put(&mut defaults.air, choice::air(scalar, diagnostics));
        }
        if let Some(node) = keys.take("uncertainty") {
            put(
                &mut defaults.uncertainty,
                choice::uncertainty(node, diagnostics),
            );
        }
        if let Some(mapping) = keys.mapping("report", diagnostics) {
            let (ph_decimals, figures) = choice::report(mapping, diagnostics);
            put(&mut defaults.ph_decimals, ph_decimals);
            put(&mut defaults.figures, figures);
        }
        if let Some(scalar) = keys.text("rounding", diagnostics) {
            defaults.set_rounding(scalar, diagnostics);
        }
        keys.finish(diagnostics);
        defaults
    }

    /// Sets the rounding rule by its name; false if there is none of that name.
    pub fn set_rounding_rule(&mut self, name: &str) -> bool {
        let rules = [RoundingRule::HalfEven, RoundingRule::HalfUp];
        let found = rules.into_iter().find(|rule| rule.name() == name);
        put(&mut self.rounding, found);
        found.is_some()
    }

    /// Sets the rounding rule by its name.
    pub(super) fn set_rounding(&mut self, scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) {
        put(&mut self.rounding, choice::rounding(scalar, diagnostics));
    }

    /// One line for each default, in a fixed order and form, with who stated it: what a record keeps so that a result can be computed again
    /// when the settings, or the program's own defaults, have changed. [`Defaults::from_lines`] reads them back.
    pub fn lines(&self) -> Vec<String> {
        let line = |key: &str, words: &str, origin| format!("{key}: {words}; {}", word(origin));
        vec![
            line(
                "temperature",
                &self.temperature.value.to_string(),
                self.temperature.origin,
            ),
            line("activity", self.activity.value.name(), self.activity.origin),
            line("air", &choice::air_words(&self.air.value), self.air.origin),
            line(
                "uncertainty",
                &choice::uncertainty_text(self.uncertainty.value),
                self.uncertainty.origin,
            ),
            line(
                "pH decimals",
                &self.ph_decimals.value.to_string(),
                self.ph_decimals.origin,
            ),
            line(
                "figures",
                &self.figures.value.to_string(),
                self.figures.origin,
            ),
            line("rounding", self.rounding.value.name(), self.rounding.origin),
        ]
    }

    /// The defaults that such lines state; `None` if one of them is not of that form. What no line states is the program's.
    pub fn from_lines<'l>(lines: impl IntoIterator<Item = &'l str>) -> Option<Self> {
        let mut defaults = Self::program();
        for line in lines {
            let (statement, origin) = line.rsplit_once("; ")?;
            let origin = [Origin::Program, Origin::Notebook]
                .into_iter()
                .find(|known| word(*known) == origin)?;
            let (key, words) = statement.split_once(": ")?;
            let digits = || {
                words
                    .parse::<u8>()
                    .ok()
                    .filter(|count| (1..=8).contains(count))
            };
            match key {
                "pH decimals" => {
                    defaults.ph_decimals = Stated {
                        value: digits()?,
                        origin,
                    }
                }
                "figures" => {
                    defaults.figures = Stated {
                        value: digits()?,
                        origin,
                    }
                }
                _ => defaults.set(key, statement, origin)?,
            }
        }
        Some(defaults)
    }

    /// Takes the one default that a statement of the settings' form states.
    fn set(&mut self, key: &str, statement: &str, origin: Origin) -> Option<()> {
        let mut diagnostics = Vec::new();
        let root = yaml::read(statement, Limits::BLOCK, &mut diagnostics)?;
        let read = Self::read(&root, &mut diagnostics);
        if !diagnostics.is_empty() {
            return None;
        }
        match key {
            "temperature" => self.temperature = with(read.temperature, origin),
            "activity" => self.activity = with(read.activity, origin),
            "air" => self.air = with(read.air, origin),
            "uncertainty" => self.uncertainty = with(read.uncertainty, origin),
            "rounding" => self.rounding = with(read.rounding, origin),
            _ => return None,
        }
        Some(())
    }

    pub(super) fn temperature(&self) -> Stated<Input<Temperature>> {
        Stated {
            value: Input::new(InputId::new("temperature"), self.temperature.value),
            origin: self.temperature.origin,
        }
    }

    pub(super) fn rounding(&self) -> RoundingRule {
        self.rounding.value
    }

    /// Decimals of pH and significant figures of amounts.
    pub(super) fn digits(&self) -> (u8, u8) {
        (self.ph_decimals.value, self.figures.value)
    }
}

fn temperature(
    scalar: &Scalar,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Measured<Temperature>> {
    let measured = amount::read::<Temperature>(scalar, diagnostics)?;
    if measured.value().is_possible() {
        return Some(measured);
    }
    diagnostics.push(range::outside(scalar.span(), measured));
    None
}

fn program<T>(value: T) -> Stated<T> {
    with_origin(value, Origin::Program)
}

fn with<T>(stated: Stated<T>, origin: Origin) -> Stated<T> {
    with_origin(stated.value, origin)
}

fn with_origin<T>(value: T, origin: Origin) -> Stated<T> {
    Stated { value, origin }
}

/// Takes what the notebook states in place of the program's.
fn put<T>(place: &mut Stated<T>, value: Option<T>) {
    if let Some(value) = value {
        *place = with_origin(value, Origin::Notebook);
    }
}

fn word(origin: Origin) -> &'static str {
    match origin {
        Origin::Block => "block",
        Origin::Notebook => "notebook",
        Origin::Program => "program",
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::text::Rule;

    fn settings(text: &str) -> (Defaults, Vec<Rule>) {
        let mut found = Vec::new();
        let root = yaml::read(text, Limits::FILE, &mut found).unwrap();
        let defaults = Defaults::read(&root, &mut found);
        (defaults, found.iter().map(Diagnostic::rule).collect())
    }

    #[test]
    fn lines_read_back_with_who_stated_them() {
        assert_eq!(
            Defaults::from_lines(Defaults::program().lines().iter().map(String::as_str)),
            Some(Defaults::program())
        );
        let (stated, faults) = settings(
            "temperature: 22.0 ± 0.5 °C (k=2)\nair: CO2 420 ppm\nuncertainty: {draws: 5000, seed: 7}\nreport: {pH: 3 decimals}\nrounding: half-up\n",
        );
        assert_eq!(faults, []);
        let lines = stated.lines();
        assert_eq!(
            lines,
            [
                "temperature: 22.0 ± 0.5 °C (k=2); notebook",
                "activity: davies; program",
                "air: CO2 420 ppm; notebook",
                "uncertainty: simulation, 5000 draws, seed 7; notebook",
                "pH decimals: 3; notebook",
                "figures: 4; program",
                "rounding: half-up; notebook",
            ]
        );
        assert_eq!(
            Defaults::from_lines(lines.iter().map(String::as_str)),
            Some(stated)
        );
    }

    #[test]
    fn lines_of_another_form_are_no_defaults() {
        for line in [
            "temperature: 25 °C",
            "temperature: 25 °C; somebody",
            "temperature: warm; program",
            "label: a; program",
            "figures: 40; program",
        ] {
            assert_eq!(Defaults::from_lines([line]), None, "{line}");
        }
    }

    #[test]
    fn settings_are_held_to_the_rules_of_a_block() {
        let (_, faults) = settings(
            "temperature: 120 °C\nactivity: davis\nair: open\nuncertainty: simulation, 10 draws, seed 1\nreport: {pH: many}\nrounding: up\ntask: mixing\n",
        );
        assert_eq!(
            faults,
            [
                Rule::BadTemperature,
                Rule::UnknownModel,
                Rule::BadAir,
                Rule::OutOfRange,
                Rule::BadReport,
                Rule::UnknownChoice,
                Rule::UnknownKey,
            ]
        );
    }
}
