//! What is to be determined from readings.

use crate::block::reader::Reader;
use crate::problem::{Composition, FitParameter, Ingredient};
use crate::text::{Diagnostic, Rule, Suggestion};
use crate::yaml::{Keys, Scalar};

/// The words of a fit that name no substance.
const WORDS: [(&str, FitParameter); 3] = [
    ("carbonate in titrant", FitParameter::CarbonateInTitrant),
    ("electrode offset", FitParameter::ElectrodeOffset),
    ("electrode slope", FitParameter::ElectrodeSlope),
];

/// The value of `fit`. A substance is one of the sample or of the titrant; where these could not be read, any of the library passes.
pub(super) fn read(
    reader: &mut Reader<'_>,
    keys: &mut Keys<'_>,
    sample: Option<&Composition>,
    titrant: Option<&Composition>,
) -> Vec<FitParameter> {
    let Some(node) = keys.take("fit") else {
        return Vec::new();
    };
    let names = Names {
        sample: sample.map(substances),
        titrant: titrant.map(substances),
    };
    let mut parameters: Vec<FitParameter> = Vec::new();
    for item in node.items() {
        let Some(scalar) = item.as_text(&mut reader.diagnostics) else {
            continue;
        };
        let Some(parameter) = names.parameter(reader, scalar.text()) else {
            report(reader, scalar, &names);
            continue;
        };
        if parameters.contains(&parameter) {
            reader.error(Rule::BadFit, scalar.span(), "it is named twice");
        } else {
            parameters.push(parameter);
        }
    }
    parameters
}

fn report(reader: &mut Reader<'_>, scalar: &Scalar, names: &Names) {
    let known: Vec<&str> = names
        .sample
        .iter()
        .chain(&names.titrant)
        .flatten()
        .map(String::as_str)
        .chain(WORDS.iter().map(|(word, _)| *word))
        .collect();
    let mut found = Diagnostic::error(
        Rule::BadFit,
        scalar.span(),
        format!("`{}` is nothing that can be determined here", scalar.text()),
    )
    .expecting(
        "a substance of sample or titrant, `titrant`, `pKa 1 of SUBSTANCE`, `carbonate in titrant`, `electrode offset` or `electrode slope`",
    );
    if let Some(suggestion) = Suggestion::of(scalar.text(), known) {
        found = found.helped(suggestion);
    }
    reader.diagnostics.push(found);
}

/// The substances of sample and titrant; `None` where these could not be read.
struct Names {
    sample: Option<Vec<String>>,
    titrant: Option<Vec<String>>,
}

impl Names {
    fn parameter(&self, reader: &Reader<'_>, text: &str) -> Option<FitParameter> {
        if let Some((_, parameter)) = WORDS.iter().find(|(word, _)| *word == text) {
            return Some(parameter.clone());
        }
        if text == "titrant" {
            let mut names = self.titrant.as_deref().unwrap_or_default().iter();
            return match (names.next(), names.next()) {
                (Some(only), None) => Some(FitParameter::TitrantConcentration(only.clone())),
                _ => None,
            };
        }
        if let Some(rest) = text.strip_prefix("pKa ") {
            let (step, name) = rest.split_once(" of ")?;
            let ligand = reader.catalogue.ligand(name.trim())?;
            let step = step.trim().parse::<usize>().ok()?;
            return (1..=ligand.steps.len())
                .contains(&step)
                .then(|| FitParameter::Pk {
                    ligand: ligand.name.clone(),
                    step,
                });
        }
        let name = reader.catalogue.find(text).ok()?.name.clone();
        let has =
            |names: &Option<Vec<String>>| names.as_ref().is_none_or(|names| names.contains(&name));
        if has(&self.sample) {
            Some(FitParameter::SampleConcentration(name))
        } else if has(&self.titrant) {
            Some(FitParameter::TitrantConcentration(name))
        } else {
            None
        }
    }
}

/// The names of the forms that a liquid was made of, portions of other solutions included.
fn substances(composition: &Composition) -> Vec<String> {
    let mut names = Vec::new();
    for ingredient in &composition.ingredients {
        match ingredient {
            Ingredient::Substance(content) => names.push(content.form.name.clone()),
            Ingredient::Solution(portion) => names.extend(substances(&portion.composition)),
            Ingredient::Water(_) => {}
        }
    }
    names
}
