//! The values that blocks and the notebook's settings choose by the same words: activity model, air, uncertainty, digits, rounding.

use crate::block::amount::{Accepted, Written};
use crate::block::figure;
use crate::block::piece::Piece;
use crate::block::range::{self, Ranged};
use crate::problem::{ActivityChoice, Air, Input, InputId, UncertaintyMode};
use crate::quantity::{Dimension, Number, Pressure, RoundingRule, Unit};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{Keys, Mapping, Node, Scalar, Value};

/// Draws of a simulation that states no number.
const USUAL_DRAWS: u32 = 100_000;
/// Seed of a simulation that states none.
const USUAL_SEED: u64 = 1;

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
    const ACCEPTED: Accepted = Accepted {
        name: "the carbon dioxide of the air",
        units: &[
            Unit::PartsPerMillion,
            Unit::Atmosphere,
            Unit::Kilopascal,
            Unit::Bar,
            Unit::Millibar,
            Unit::Pascal,
        ],
    };
    let piece = Piece::from(scalar);
    let text = piece.text();
    if text == "closed" {
        return Some(Air::Closed);
    }
    let Some(gas) = ["CO2", "CO₂"].into_iter().find(|gas| text.starts_with(gas)) else {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadAir,
                scalar.span(),
                format!("`{text}` does not say what the solution exchanges with the air"),
            )
            .expecting("`closed`, `CO2 420 ppm` or `CO2 0.05 atm`")
            .did_you_mean(text, ["closed"]),
        );
        return None;
    };
    let piece = piece.part(gas.len(), text.len());
    let written = Written::read(piece, ACCEPTED, diagnostics)?;
    let id = InputId::new("air");
    if let Some(share) = written.measured::<Number>() {
        if share.value().base() >= 0.0 && share.value().base() <= 1.0 {
            return Some(Air::CarbonDioxideFraction(Input::new(id, share)));
        }
        diagnostics.push(
            Diagnostic::error(Rule::BadAir, piece.span(), "no share of the air")
                .expecting("from 0 ppm to 1000000 ppm"),
        );
        return None;
    }
    let pressure = written.measured::<Pressure>()?;
    if pressure.value().is_possible() {
        return Some(Air::CarbonDioxide(Input::new(id, pressure)));
    }
    diagnostics.push(range::outside(piece.span(), pressure));
    None
}

/// The words for an air, which [`air`] reads back.
pub(super) fn air_words(air: &Air) -> String {
    match air {
        Air::Closed => "closed".to_owned(),
        Air::CarbonDioxide(input) => format!("CO2 {}", input.measured),
        Air::CarbonDioxideFraction(input) => format!("CO2 {}", input.measured),
    }
}

/// `budget`, `none`, `simulation`, `simulation, 100000 draws, seed 1`, or a mapping with draws and seed.
pub(super) fn uncertainty(
    node: &Node,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<UncertaintyMode> {
    let mode = match &node.value {
        Value::Text(scalar) => uncertainty_words(scalar, diagnostics)?,
        Value::Mapping(mapping) => simulation(mapping, diagnostics)?,
        _ => return node.refuse("`budget`, `simulation` or `none`", diagnostics),
    };
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

fn uncertainty_words(
    scalar: &Scalar,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<UncertaintyMode> {
    let words: Vec<&str> = scalar
        .text()
        .split([' ', ','])
        .filter(|word| !word.is_empty())
        .collect();
    let mode = match words.as_slice() {
        ["budget"] => Some(UncertaintyMode::Budget),
        ["none"] => Some(UncertaintyMode::None),
        ["simulation"] => Some(UncertaintyMode::Simulation {
            draws: USUAL_DRAWS,
            seed: USUAL_SEED,
        }),
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
            .expecting("`budget`, `none`, `simulation` or `simulation, 100000 draws, seed 1`")
            .did_you_mean(scalar.text(), ["budget", "none", "simulation"]),
        );
    }
    mode
}

/// `{draws: 100000, seed: 7}`, or the same under `simulation`.
fn simulation(mapping: &Mapping, diagnostics: &mut Vec<Diagnostic>) -> Option<UncertaintyMode> {
    let mut keys = mapping.keys();
    let nested = mapping
        .entries()
        .iter()
        .any(|entry| entry.key.text() == "simulation");
    if nested {
        let inner = keys.mapping("simulation", diagnostics);
        keys.finish(diagnostics);
        return simulation(inner?, diagnostics);
    }
    let draws = whole(&mut keys, "draws", u64::from(USUAL_DRAWS), diagnostics);
    let seed = whole(&mut keys, "seed", USUAL_SEED, diagnostics);
    keys.finish(diagnostics);
    Some(UncertaintyMode::Simulation {
        draws: u32::try_from(draws?).unwrap_or(u32::MAX),
        seed: seed?,
    })
}

fn whole(
    keys: &mut Keys<'_>,
    key: &'static str,
    usual: u64,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<u64> {
    let Some(node) = keys.take(key) else {
        return Some(usual);
    };
    let scalar = node.as_text(diagnostics)?;
    let number = figure::number(scalar, diagnostics)?;
    let whole = number.to_string().parse::<u64>().ok();
    if whole.is_none() {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadNumber,
                scalar.span(),
                format!("`{}` is no whole number", scalar.text()),
            )
            .expecting("digits alone"),
        );
    }
    whole
}

/// The words for a treatment of uncertainty, which [`uncertainty`] reads back.
pub(super) fn uncertainty_text(mode: UncertaintyMode) -> String {
    match mode {
        UncertaintyMode::Budget => "budget".to_owned(),
        UncertaintyMode::None => "none".to_owned(),
        UncertaintyMode::Simulation { draws, seed } => {
            format!("simulation, {draws} draws, seed {seed}")
        }
    }
}

/// Decimals of pH and significant figures of amounts, where stated: `{pH: 2 decimals, amounts: 4 figures}`.
pub(super) fn report(
    mapping: &Mapping,
    diagnostics: &mut Vec<Diagnostic>,
) -> (Option<u8>, Option<u8>) {
    let mut keys = mapping.keys();
    let ph = digits(&mut keys, "pH", "decimals", diagnostics);
    let amounts = digits(&mut keys, "amounts", "figures", diagnostics);
    keys.finish(diagnostics);
    (ph, amounts)
}

fn digits(
    keys: &mut Keys<'_>,
    key: &'static str,
    word: &str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<u8> {
    let scalar = keys.text(key, diagnostics)?;
    let text = scalar.text();
    let bare = text
        .strip_suffix(word)
        .or_else(|| text.strip_suffix(word.trim_end_matches('s')))
        .unwrap_or(text)
        .trim();
    let count = bare
        .parse::<u8>()
        .ok()
        .filter(|count| (1..=8).contains(count));
    if count.is_none() {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadReport,
                scalar.span(),
                format!("`{text}` is no number of {word}"),
            )
            .expecting(format!("a whole number from 1 to 8, such as `3 {word}`")),
        );
    }
    count
}

/// A rounding rule by its name.
pub(super) fn rounding(scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<RoundingRule> {
    let rules = [RoundingRule::HalfEven, RoundingRule::HalfUp];
    let found = rules.into_iter().find(|rule| rule.name() == scalar.text());
    if found.is_none() {
        diagnostics.push(
            Diagnostic::error(
                Rule::UnknownChoice,
                scalar.span(),
                format!("`{}` is no rounding rule", scalar.text()),
            )
            .expecting("`half-even` or `half-up`")
            .did_you_mean(scalar.text(), rules.map(RoundingRule::name)),
        );
    }
    found
}
