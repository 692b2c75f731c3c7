//! Solvent, reporting, annotations, hand value, reading.

use crate::block::reader::Reader;
use crate::block::{Defaults, choice, figure};
use crate::problem::{
    AcceptanceLimit, Annotations, HandValue, InputId, MeasuredReading, Reporting, ShortcutName,
};
use crate::quantity::{Decimal, Dimension, Number, Temperature};
use crate::text::{Diagnostic, Rule};
use crate::yaml::{Keys, Scalar};

/// Anything but water is refused, with the reason and a way.
pub(super) fn solvent(reader: &mut Reader<'_>, keys: &mut Keys<'_>) {
    let Some(scalar) = keys.text("solvent", &mut reader.diagnostics) else {
        return;
    };
    if scalar.text() != "water" {
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::Solvent,
                scalar.span(),
                format!("pH and pK mean something else in {}; no figure would be right", scalar.text()),
            )
            .expecting("`water`")
            .helped("compute the aqueous part before mixing, and report its pH as that of the aqueous part"),
        );
    }
}

/// `report: {pH: 2 decimals, amounts: 4 figures}`.
pub(super) fn reporting(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    defaults: &Defaults,
) -> Reporting {
    let (ph_decimals, significant_figures) = defaults.digits();
    let mut reporting = Reporting {
        ph_decimals,
        significant_figures,
        rounding: defaults.rounding(),
    };
    if let Some(mapping) = keys.mapping("report", &mut reader.diagnostics) {
        let (decimals, figures) = choice::report(mapping, &mut reader.diagnostics);
        reporting.ph_decimals = decimals.unwrap_or(ph_decimals);
        reporting.significant_figures = figures.unwrap_or(significant_figures);
    }
    reporting
}

/// Method, equipment and notes, as written.
pub(super) fn annotations(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Annotations {
    let method = keys
        .text("method", &mut reader.diagnostics)
        .map(|scalar| scalar.text().to_owned());
    let notes = keys
        .text("notes", &mut reader.diagnostics)
        .map(|scalar| scalar.text().to_owned());
    let equipment = names(reader, keys, "equipment");
    Annotations {
        method,
        equipment,
        notes,
    }
}

/// A pH worked by hand.
pub(super) fn hand_value(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<HandValue> {
    let mapping = keys.mapping("hand value", &mut reader.diagnostics)?;
    let mut inner = mapping.keys();
    let id = InputId::new("hand value");
    let ph = reader.required::<Number>(&mut inner, "pH", &id);
    let by = inner
        .required_text("by", &mut reader.diagnostics)
        .and_then(|scalar| shortcut(reader, scalar));
    let limit = reader.amount::<Number>(&mut inner, "limit", &id);
    if let Some(limit) = limit.as_ref().filter(|limit| limit.value().base() < 0.0) {
        let span = reader.place(&limit.id);
        reader.error(Rule::OutOfRange, span, "a limit is not negative");
    }
    inner.finish(&mut reader.diagnostics);
    Some(HandValue {
        ph: ph?,
        by: by?,
        limit,
    })
}

fn shortcut(reader: &mut Reader<'_>, scalar: &Scalar) -> Option<ShortcutName> {
    let wanted = scalar.text().to_lowercase();
    let found = ShortcutName::NAMES
        .iter()
        .find(|(words, _)| *words == wanted);
    if found.is_none() {
        let names = ShortcutName::NAMES.map(|(words, _)| words);
        reader.diagnostics.push(
            Diagnostic::error(
                Rule::BadHandValue,
                scalar.span(),
                format!("`{}` is no shortcut that is known", scalar.text()),
            )
            .expecting(format!("one of {}", names.join(", ")))
            .did_you_mean(&wanted, names),
        );
    }
    found.map(|(_, shortcut)| *shortcut)
}

/// A reading of a pH meter.
pub(super) fn measured(reader: &mut Reader<'_>, keys: &mut Keys<'_>) -> Option<MeasuredReading> {
    let mapping = keys.mapping("measured", &mut reader.diagnostics)?;
    let mut inner = mapping.keys();
    let id = InputId::new("measured");
    let ph = reader.required::<Number>(&mut inner, "pH", &id);
    let temperature = reader.amount::<Temperature>(&mut inner, "temperature", &id);
    let calibration = names(reader, &mut inner, "calibration");
    let limit = inner
        .text("limit", &mut reader.diagnostics)
        .and_then(|scalar| limit(reader, scalar));
    inner.finish(&mut reader.diagnostics);
    Some(MeasuredReading {
        ph: ph?,
        temperature,
        calibration,
        limit,
    })
}

/// `7.20 ± 0.05`, or `7.15 to 7.25`: an acceptance limit has no distribution, so no words follow.
fn limit(reader: &mut Reader<'_>, scalar: &Scalar) -> Option<AcceptanceLimit> {
    let text = scalar.text();
    let pair = |a: &str, b: &str| Some((Decimal::parse(a).ok()?, Decimal::parse(b).ok()?));
    let spread = ["±", "+/-"]
        .iter()
        .find_map(|sign| text.split_once(sign))
        .and_then(|(a, b)| pair(a, b));
    let range = ["to", "..", "–"]
        .iter()
        .find_map(|word| text.split_once(word))
        .and_then(|(a, b)| pair(a, b));
    let (nominal, half_width) = match (spread, range) {
        (Some((nominal, half)), _) => (nominal.to_f64(), half.to_f64()),
        (None, Some((low, high))) => {
            let (low, high) = (low.to_f64(), high.to_f64());
            (0.5 * (low + high), 0.5 * (high - low))
        }
        (None, None) => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::BadMeasured,
                    scalar.span(),
                    format!("`{text}` is no acceptance limit"),
                )
                .expecting("`7.20 ± 0.05` or `7.15 to 7.25`"),
            );
            return None;
        }
    };
    if half_width < 0.0 {
        reader.error(
            Rule::BadMeasured,
            scalar.span(),
            "the limits are the wrong way round",
        );
        return None;
    }
    Some(AcceptanceLimit {
        nominal: Number::from_base(nominal),
        half_width: Number::from_base(half_width),
        written: text.to_owned(),
    })
}

/// A list of names as written.
pub(super) fn names(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    key: &'static str,
) -> Vec<String> {
    keys.take(key).map_or_else(Vec::new, |node| {
        node.items()
            .iter()
            .filter_map(|item| {
                item.as_text(&mut reader.diagnostics)
                    .map(|scalar| scalar.text().to_owned())
            })
            .collect()
    })
}

/// A whole number within limits, if the key is there.
pub(super) fn count(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    key: &'static str,
    from: u32,
    to: u32,
) -> Option<u32> {
    let scalar = keys.text(key, &mut reader.diagnostics)?;
    let number = figure::number(scalar, &mut reader.diagnostics)?;
    match number.to_string().parse::<u32>() {
        Ok(count) if (from..=to).contains(&count) => Some(count),
        _ => {
            reader.diagnostics.push(
                Diagnostic::error(
                    Rule::OutOfRange,
                    scalar.span(),
                    format!("`{}` is out of range", scalar.text()),
                )
                .expecting(format!("a whole number from {from} to {to}")),
            );
            None
        }
    }
}

#[cfg(test)]
mod tests {
    use crate::block::trial::{one_fault, statement};
    use crate::problem::ShortcutName;
    use crate::quantity::Dimension;
    use crate::text::Rule;

    #[test]
    fn the_examples_of_the_language_are_read() {
        let statement = statement(
            "label: a\ntask: speciation\ncontents: water\nmeasured:\n  pH: 7.18 ± 0.02 (k=2)\n  temperature: 24.6 °C\n  calibration: [phthalate 4.005, phosphate 6.865, slope 99.1 %]\n  limit: 7.20 ± 0.05\nhand value:\n  pH: -0.15\n  by: x neglected\n  limit: 0.02\nreport: {pH: 3 decimals, amounts: 1 figure}\nmethod: SOP-114 rev 3\nequipment: [balance B-04, pipette P-2]\n",
        );
        let measured = statement.measured.unwrap();
        assert!((measured.ph.measured.standard_uncertainty() - 0.01).abs() < 1e-15);
        assert_eq!(measured.calibration.len(), 3);
        assert!((measured.limit.unwrap().half_width.base() - 0.05).abs() < 1e-15);
        let hand = statement.hand_value.unwrap();
        assert_eq!(hand.by, ShortcutName::XNeglected);
        assert!(hand.ph.value().base() < 0.0);
        assert_eq!(statement.reporting.ph_decimals, 3);
        assert_eq!(statement.reporting.significant_figures, 1);
        assert_eq!(
            statement.annotations.equipment,
            ["balance B-04", "pipette P-2"]
        );
    }

    #[test]
    fn faults_of_remarks() {
        for (keys, rule, place, help) in [
            ("hand value: 2.15\n", Rule::NotAMapping, "2.15", ""),
            (
                "hand value: {pH: 2.15}\n",
                Rule::MissingKey,
                "hand value",
                "`by: ...`",
            ),
            (
                "hand value: {pH: 2.15, by: x neglectd}\n",
                Rule::BadHandValue,
                "x neglectd",
                "`x neglected`",
            ),
            (
                "hand value: {pH: 2.15, by: ampholyte, limit: -0.1}\n",
                Rule::OutOfRange,
                "-0.1",
                "",
            ),
            (
                "measured: {pH: 7.1 ± 0.02}\n",
                Rule::BadUncertainty,
                "± 0.02",
                "(k=2)",
            ),
            (
                "measured: {pH: 7.1, limit: 7.3 to 7.1}\n",
                Rule::BadMeasured,
                "7.3 to 7.1",
                "",
            ),
            (
                "report: {pH: 2, colour: 3}\n",
                Rule::UnknownKey,
                "colour",
                "`pH`",
            ),
        ] {
            one_fault(
                "speciation",
                &format!("contents: water\n{keys}"),
                rule,
                place,
                help,
            );
        }
    }
}
