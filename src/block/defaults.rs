//! The notebook's defaults, read by the very same keys as a block's.

use crate::block::amount;
use crate::problem::{ActivityChoice, Air, Input, InputId, Origin, Stated, UncertaintyMode};
use crate::quantity::{Decimal, Measured, Number, Pressure, RoundingRule, Temperature, Unit};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{self, Limits, Node, Scalar, Value};

/// A default and who stated it.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Default<T> {
    value: T,
    written: String,
    origin: Origin,
}

impl<T> Default<T> {
    pub(super) fn into_stated(self) -> Stated<T> {
        Stated {
            value: self.value,
            origin: self.origin,
        }
    }
}

/// What holds where a block says nothing.
#[derive(Clone, Debug, PartialEq)]
pub struct Defaults {
    temperature: Default<Measured<Temperature>>,
    pub(super) activity: Default<ActivityChoice>,
    pub(super) air: Default<Air>,
    pub(super) uncertainty: Default<UncertaintyMode>,
    pub(super) ph_decimals: Default<u8>,
    pub(super) figures: Default<u8>,
    rounding: RoundingRule,
}

impl Defaults {
    /// The program's own: 25 °C, Davies, closed, budget, two decimals of pH, four figures, half-even.
    pub fn program() -> Self {
        Self {
            temperature: program(Measured::celsius(Decimal::whole(25)), "25 °C"),
            activity: program(ActivityChoice::Davies, "davies"),
            air: program(Air::Closed, "closed"),
            uncertainty: program(UncertaintyMode::Budget, "budget"),
            ph_decimals: program(2, "2"),
            figures: program(4, "4"),
            rounding: RoundingRule::HalfEven,
        }
    }

    /// The defaults that a settings file states, over the program's own.
    pub fn read(node: &Node, diagnostics: &mut Vec<Diagnostic>) -> Self {
        let mut defaults = Self::program();
        let Some(mapping) = node.as_mapping(diagnostics) else {
            return defaults;
        };
        let mut keys = mapping.keys();
        if let Some(scalar) = keys.text("temperature", diagnostics)
            && let Some(measured) = amount::read::<Temperature>(scalar, diagnostics)
        {
            defaults.temperature = notebook(measured, scalar.text());
        }
        if let Some(scalar) = keys.text("activity", diagnostics)
            && let Some(model) = activity(scalar, diagnostics)
        {
            defaults.activity = notebook(model, scalar.text());
        }
        if let Some(scalar) = keys.text("air", diagnostics)
            && let Some(gas) = air(scalar, diagnostics)
        {
            defaults.air = notebook(gas, scalar.text());
        }
        if let Some(node) = keys.take("uncertainty")
            && let Some(mode) = uncertainty(node, diagnostics)
        {
            let written = match &node.value {
                Value::Text(scalar) => scalar.text().to_owned(),
                _ => written_uncertainty(mode),
            };
            defaults.uncertainty = notebook(mode, &written);
        }
        for (key, place) in [
            ("pH decimals", &mut defaults.ph_decimals),
            ("significant figures", &mut defaults.figures),
        ] {
            if let Some(scalar) = keys.text(key, diagnostics) {
                match scalar.text().parse::<u8>() {
                    Ok(count) if (1..=8).contains(&count) => {
                        *place = notebook(count, scalar.text())
                    }
                    _ => diagnostics.push(
                        Diagnostic::error(Rule::BadReport, scalar.span(), "not a number of digits")
                            .expecting("a whole number from 1 to 8"),
                    ),
                }
            }
        }
        if let Some(scalar) = keys.text("rounding", diagnostics) {
            defaults.set_rounding(scalar, diagnostics);
        }
        keys.finish(diagnostics);
        defaults
    }

    /// Sets the rounding rule by its name.
    pub fn set_rounding(&mut self, scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) {
        let rules = [RoundingRule::HalfEven, RoundingRule::HalfUp];
        match rules.into_iter().find(|rule| rule.name() == scalar.text()) {
            Some(rule) => self.rounding = rule,
            None => diagnostics.push(
                Diagnostic::error(
                    Rule::UnknownChoice,
                    scalar.span(),
                    format!("`{}` is no rounding rule", scalar.text()),
                )
                .expecting("`half-even` or `half-up`"),
            ),
        }
    }

    /// One line for each default, in a fixed order and form: what a record keeps so that a result can be computed again when the settings have
    /// changed. [`Defaults::from_lines`] reads them back.
    pub fn lines(&self) -> Vec<String> {
        vec![
            format!("temperature: {}", self.temperature.written),
            format!("activity: {}", self.activity.written),
            format!("air: {}", self.air.written),
            format!("uncertainty: {}", self.uncertainty.written),
            format!("pH decimals: {}", self.ph_decimals.written),
            format!("significant figures: {}", self.figures.written),
            format!("rounding: {}", self.rounding.name()),
        ]
    }

    /// The defaults that such lines state; `None` if one of them is not of that form.
    pub fn from_lines<'l>(lines: impl IntoIterator<Item = &'l str>) -> Option<Self> {
        let text: String = lines.into_iter().flat_map(|line| [line, "\n"]).collect();
        let mut diagnostics = Vec::new();
        let root = yaml::read(&text, Limits::BLOCK, &mut diagnostics)?;
        let defaults = Self::read(&root, &mut diagnostics);
        diagnostics.is_empty().then_some(defaults)
    }

    pub(super) fn temperature(&self) -> Stated<Input<Temperature>> {
        Stated {
            value: Input::new(InputId::new("temperature"), self.temperature.value),
            origin: self.temperature.origin,
        }
    }

    pub(super) fn rounding(&self) -> RoundingRule {
        self.rounding
    }

    pub(super) fn digits(&self) -> (u8, u8) {
        (self.ph_decimals.value, self.figures.value)
    }
}

fn program<T>(value: T, written: &str) -> Default<T> {
    Default {
        value,
        written: written.to_owned(),
        origin: Origin::Program,
    }
}

fn notebook<T>(value: T, written: &str) -> Default<T> {
    Default {
        value,
        written: written.to_owned(),
        origin: Origin::Notebook,
    }
}

/// An activity model by its name.
pub(super) fn activity(
    scalar: &Scalar,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<ActivityChoice> {
    let found = ActivityChoice::NAMES
        .iter()
        .find(|(name, _)| *name == scalar.text());
    if found.is_none() {
        let names = ActivityChoice::NAMES.map(|(name, _)| name);
        diagnostics.push(
            Diagnostic::error(
                Rule::UnknownModel,
                scalar.span(),
                format!("`{}` is no activity model", scalar.text()),
            )
            .expecting(format!("one of {}", names.join(", ")))
            .did_you_mean(scalar.text(), names),
        );
    }
    found.map(|(_, model)| *model)
}

/// `closed`, `CO2 420 ppm` or `CO2 0.05 atm`.
pub(super) fn air(scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<Air> {
    let text = scalar.text().trim();
    if text == "closed" {
        return Some(Air::Closed);
    }
    let amount_text = text
        .strip_prefix("CO2")
        .or_else(|| text.strip_prefix("CO₂"))
        .map(str::trim);
    let id = InputId::new("air");
    let parsed = amount_text.and_then(|amount_text| {
        let (number, unit) = amount_text.split_once(' ')?;
        let number = Decimal::parse(number)
            .ok()
            .filter(|number| !number.is_negative())?;
        let unit = Unit::parse(unit).ok()?;
        match unit {
            Unit::PartsPerMillion => Measured::<Number>::new(number, unit)
                .map(|measured| Air::CarbonDioxideFraction(Input::new(id, measured))),
            _ => Measured::<Pressure>::new(number, unit)
                .map(|measured| Air::CarbonDioxide(Input::new(id, measured))),
        }
    });
    if parsed.is_none() {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadAir,
                scalar.span(),
                format!("`{text}` does not say what the solution exchanges with the air"),
            )
            .expecting("`closed`, `CO2 420 ppm` or `CO2 0.05 atm`"),
        );
    }
    parsed
}

/// `budget`, `none`, `simulation`, or a mapping with draws and seed.
pub(super) fn uncertainty(
    node: &Node,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<UncertaintyMode> {
    const DRAWS: u32 = 100_000;
    let usual = UncertaintyMode::Simulation {
        draws: DRAWS,
        seed: 1,
    };
    match &node.value {
        Value::Text(scalar) => {
            let words: Vec<&str> = scalar
                .text()
                .split([' ', ','])
                .filter(|word| !word.is_empty())
                .collect();
            let mode = match words.as_slice() {
                ["budget"] => Some(UncertaintyMode::Budget),
                ["none"] => Some(UncertaintyMode::None),
                ["simulation"] => Some(usual),
                ["simulation", draws, "draws", "seed", seed] => draws
                    .parse()
                    .ok()
                    .zip(seed.parse().ok())
                    .map(|(draws, seed)| UncertaintyMode::Simulation { draws, seed }),
                _ => None,
            };
            if mode.is_none() {
                diagnostics.push(
                    Diagnostic::error(
                        Rule::UnknownChoice,
                        scalar.span(),
                        format!("`{}` is no way to treat uncertainty", scalar.text()),
                    )
                    .expecting(
                        "`budget`, `none`, `simulation` or `simulation, 100000 draws, seed 1`",
                    )
                    .did_you_mean(scalar.text(), ["budget", "none", "simulation"]),
                );
            }
            bounded(mode?, node, diagnostics)
        }
        Value::Mapping(mapping) => {
            let mut keys = mapping.keys();
            let mut count =
                |key: &'static str, usual: u64, diagnostics: &mut Vec<Diagnostic>| match keys
                    .text(key, diagnostics)
                {
                    None => Some(usual),
                    Some(scalar) => scalar.text().parse::<u64>().ok().or_else(|| {
                        diagnostics.push(Diagnostic::error(
                            Rule::BadNumber,
                            scalar.span(),
                            "not a whole number",
                        ));
                        None
                    }),
                };
            let draws = count("draws", u64::from(DRAWS), diagnostics);
            let seed = count("seed", 1, diagnostics);
            keys.finish(diagnostics);
            let draws = u32::try_from(draws?).unwrap_or(u32::MAX);
            bounded(
                UncertaintyMode::Simulation { draws, seed: seed? },
                node,
                diagnostics,
            )
        }
        _ => node.refuse("`budget`, `simulation` or `none`", diagnostics),
    }
}

fn written_uncertainty(mode: UncertaintyMode) -> String {
    match mode {
        UncertaintyMode::Budget => "budget".to_owned(),
        UncertaintyMode::None => "none".to_owned(),
        UncertaintyMode::Simulation { draws, seed } => {
            format!("simulation, {draws} draws, seed {seed}")
        }
    }
}

/// Draws from 100 to ten million.
fn bounded(
    mode: UncertaintyMode,
    node: &Node,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<UncertaintyMode> {
    if let UncertaintyMode::Simulation { draws, .. } = mode
        && !(100..=10_000_000).contains(&draws)
    {
        diagnostics.push(
            Diagnostic::error(Rule::OutOfRange, node.span, format!("{draws} draws"))
                .expecting("from 100 to 10000000 draws"),
        );
        return None;
    }
    Some(mode)
}
