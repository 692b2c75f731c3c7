//! One pKa of an own substance: the number alone, or with its conditions.

use crate::block::amount::{self, unit_of};
use crate::block::constant_entry::{text, word};
use crate::block::figure;
use crate::block::range::{self, Ranged};
use crate::quantity::{Decimal, RoundingRule, Temperature, Unit};
use crate::substance::{Basis, EquationForm, StoredEquation, StoredPk};
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{Keys, Mapping, Node, Scalar, Value};
use std::ops::RangeInclusive;

/// What a pK in water can be; beyond, a substance is not computed as an acid at all.
const PK: RangeInclusive<f64> = -15.0..=20.0;

/// A number with the entry's `source`, or a mapping that may have its own.
pub(super) fn read(
    node: &Node,
    source: Option<&str>,
    heading: Span,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<StoredPk> {
    if let Value::Mapping(mapping) = &node.value {
        return with_conditions(mapping, source, diagnostics);
    }
    let value = pk(node.as_text(diagnostics)?, diagnostics);
    let source = source.map(str::to_owned);
    if source.is_none() {
        missing_source(heading, diagnostics);
    }
    Some(StoredPk {
        value: value?,
        source: source?,
        ..StoredPk::default()
    })
}

fn with_conditions(
    mapping: &Mapping,
    source: Option<&str>,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<StoredPk> {
    let mut keys = mapping.keys();
    let value = keys
        .required_text("value", diagnostics)
        .and_then(|scalar| pk(scalar, diagnostics));
    let source = text(&mut keys, "source", diagnostics).or_else(|| source.map(str::to_owned));
    if source.is_none() {
        missing_source(mapping.heading(), diagnostics);
    }
    let (kind, ionic_strength) = kind(&mut keys, diagnostics);
    let stored = StoredPk {
        value: value.unwrap_or_default(),
        uncertainty: not_negative(&mut keys, "uncertainty", "", diagnostics),
        kind,
        ionic_strength,
        medium: text(&mut keys, "medium", diagnostics),
        temperature: keys
            .text("temperature", diagnostics)
            .and_then(|scalar| celsius(scalar, diagnostics)),
        enthalpy: number(&mut keys, "enthalpy", "kJ/mol", diagnostics),
        heat_capacity: number(&mut keys, "heat capacity", "J/(mol K)", diagnostics),
        thermal_source: text(&mut keys, "thermal source", diagnostics),
        thermal_basis: basis(&mut keys, "thermal basis", diagnostics),
        equation: keys
            .mapping("equation", diagnostics)
            .and_then(|mapping| equation(mapping, diagnostics)),
        source: source.clone().unwrap_or_default(),
        locator: text(&mut keys, "locator", diagnostics),
        basis: basis(&mut keys, "basis", diagnostics),
        note: text(&mut keys, "note", diagnostics),
        others: Vec::new(),
    };
    keys.finish(diagnostics);
    (!stored.value.is_empty() && source.is_some()).then_some(stored)
}

fn missing_source(span: Span, diagnostics: &mut Vec<Diagnostic>) {
    let fault = Diagnostic::error(Rule::MissingSource, span, "own constants need their source")
        .expecting("`source: ...`");
    if diagnostics.last() != Some(&fault) {
        diagnostics.push(fault);
    }
}

/// The pK as written, without anything that would change its figures.
fn pk(scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<String> {
    let number = figure::number(scalar, diagnostics)?;
    if PK.contains(&number.to_f64()) {
        return Some(number.to_string());
    }
    diagnostics.push(
        Diagnostic::error(
            Rule::OutOfRange,
            scalar.span(),
            format!("`{}` is no pK in water", scalar.text()),
        )
        .expecting(format!("from {} to {}", PK.start(), PK.end())),
    );
    None
}

/// Kind and ionic strength, which must not contradict each other.
fn kind(
    keys: &mut Keys<'_>,
    diagnostics: &mut Vec<Diagnostic>,
) -> (Option<String>, Option<String>) {
    const KINDS: [&str; 3] = ["thermodynamic", "conditional", "unstated"];
    let scalar = keys.text("kind", diagnostics);
    let kind = scalar.and_then(|scalar| word(scalar, KINDS.into_iter(), diagnostics));
    let strength = not_negative(keys, "ionic strength", "mol/kg", diagnostics);
    match (kind.as_deref(), strength.as_deref()) {
        (Some("conditional"), None) => {
            keys.required("ionic strength", diagnostics);
        }
        (Some("thermodynamic"), Some(found)) if !found.trim_matches(['0', '.']).is_empty() => {
            diagnostics.push(
                Diagnostic::error(
                    Rule::ConflictingKeys,
                    scalar.map_or(keys.whole().heading(), Scalar::span),
                    format!("a thermodynamic constant is one at zero ionic strength, not {found}"),
                )
                .expecting("`kind: conditional`, or no `ionic strength`"),
            );
        }
        _ => {}
    }
    (kind, strength)
}

fn basis(
    keys: &mut Keys<'_>,
    key: &'static str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<String> {
    let scalar = keys.text(key, diagnostics)?;
    let known = [Basis::Read, Basis::Recalled, Basis::Stated].map(Basis::word);
    word(scalar, known.into_iter(), diagnostics)
}

/// A number as written, with or without the unit in which it is kept.
fn number(
    keys: &mut Keys<'_>,
    key: &'static str,
    unit: &str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<String> {
    let scalar = keys.text(key, diagnostics)?;
    figure::number_in(scalar, unit, diagnostics).map(|number| number.to_string())
}

fn not_negative(
    keys: &mut Keys<'_>,
    key: &'static str,
    unit: &str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<String> {
    let scalar = keys.text(key, diagnostics)?;
    let number = figure::number_in(scalar, unit, diagnostics)?;
    if number.is_negative() {
        let fault = format!("{key} is not negative");
        diagnostics.push(Diagnostic::error(Rule::OutOfRange, scalar.span(), fault));
        return None;
    }
    Some(number.to_string())
}

/// A temperature in degrees Celsius, as a number alone or with its unit.
fn celsius(scalar: &Scalar, diagnostics: &mut Vec<Diagnostic>) -> Option<String> {
    if let Ok(plain) = Decimal::parse(scalar.text())
        && (0.0..=100.0).contains(&plain.to_f64())
    {
        return Some(plain.to_string());
    }
    let measured = amount::read::<Temperature>(scalar, diagnostics)?;
    if !measured.value().is_possible() {
        diagnostics.push(range::outside(scalar.span(), measured));
        return None;
    }
    Some(match unit_of(scalar) {
        Some(Unit::Kelvin) => RoundingRule::HalfEven.to_places(measured.value().celsius(), 2),
        _ => measured.decimal.to_string(),
    })
}

/// A published equation pK(T), T in kelvin.
fn equation(mapping: &Mapping, diagnostics: &mut Vec<Diagnostic>) -> Option<StoredEquation> {
    let mut keys = mapping.keys();
    let form = keys.required_text("form", diagnostics).and_then(|scalar| {
        let known = EquationForm::FORMS.iter().map(|(text, ..)| *text);
        word(scalar, known, diagnostics)
    });
    let coefficients = coefficients(&mut keys, form.as_deref(), diagnostics);
    let from = number(&mut keys, "from", "°C", diagnostics);
    let to = number(&mut keys, "to", "°C", diagnostics);
    let source = keys
        .required_text("source", diagnostics)
        .map(|scalar| scalar.text().to_owned());
    let basis = basis(&mut keys, "basis", diagnostics);
    keys.finish(diagnostics);
    Some(StoredEquation {
        form: form?,
        coefficients: coefficients?,
        from: from.unwrap_or_else(|| "0".to_owned()),
        to: to.unwrap_or_else(|| "100".to_owned()),
        source: source?,
        basis,
    })
}

fn coefficients(
    keys: &mut Keys<'_>,
    form: Option<&str>,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Vec<String>> {
    let node = keys.required("coefficients", diagnostics)?;
    let mut found = Vec::new();
    for item in node.items() {
        let number = figure::number(item.as_text(diagnostics)?, diagnostics)?;
        found.push(number.to_string());
    }
    let wanted = EquationForm::FORMS
        .iter()
        .find(|(text, ..)| Some(*text) == form)
        .map(|(.., count)| *count);
    if wanted.is_some_and(|wanted| wanted != found.len()) {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadConstants,
                node.span,
                format!("{} coefficients", found.len()),
            )
            .expecting(format!(
                "{} of them, in the order of the letters",
                wanted.unwrap_or_default()
            )),
        );
        return None;
    }
    Some(found)
}
