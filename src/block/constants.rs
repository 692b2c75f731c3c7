//! Own constants: in the block, in a file beside it, or as an answer carries them.

use crate::block::constant_entry::{self, Entries};
use crate::block::reader::Reader;
use crate::substance::{Catalogue, LibraryError, StoredConstants};
use crate::text::{Diagnostic, LineIndex, Rule, Span};
use crate::yaml::{self, Limits, Node, Scalar, Value};

/// Reads `constants` and lays them over the library.
pub(super) fn read(reader: &mut Reader<'_>, node: &Node) {
    let laid = match &node.value {
        Value::Text(scalar) => from_file(reader, scalar),
        Value::List(items) => overlaid(&reader.catalogue, items, &mut reader.diagnostics),
        _ => node.refuse(
            "a list of own constants, or the name of a constants file",
            &mut reader.diagnostics,
        ),
    };
    if let Some(catalogue) = laid {
        reader.catalogue = catalogue;
    }
}

/// The constants that a text of the `constants` form states: a laboratory's own file, or the part of an answer that carries what it was
/// computed with.
///
/// `None` if something is wrong with it, which is then reported with its place in that text.
pub fn constants(text: &str, diagnostics: &mut Vec<Diagnostic>) -> Option<StoredConstants> {
    let before = errors(diagnostics);
    let root = yaml::read(text, Limits::FILE, diagnostics)?;
    let entries = constant_entry::read(root.as_list(diagnostics)?, diagnostics);
    (errors(diagnostics) == before).then_some(entries.stored)
}

/// The library with the values of a list over it; `None` if something is wrong with the list, which is reported.
fn overlaid(
    catalogue: &Catalogue,
    items: &[Node],
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<Catalogue> {
    let before = errors(diagnostics);
    let Entries { stored, names } = constant_entry::read(items, diagnostics);
    if errors(diagnostics) > before {
        return None;
    }
    match catalogue.overlaid(&stored) {
        Ok(catalogue) => Some(catalogue),
        Err(error) => {
            let entry = names.iter().find(|(name, _)| concerns(&error, name));
            let whole = items
                .iter()
                .map(|item| item.span)
                .reduce(Span::to)
                .unwrap_or(Span::at(0));
            let span = entry.map_or(whole, |(_, span)| *span);
            diagnostics.push(Diagnostic::error(
                Rule::BadConstants,
                span,
                error.to_string(),
            ));
            None
        }
    }
}

/// Whether an error of the library is about the entry of that name.
fn concerns(error: &LibraryError, entry: &str) -> bool {
    match error {
        LibraryError::File { .. } => false,
        LibraryError::Figure { name, .. }
        | LibraryError::Word { name, .. }
        | LibraryError::Component { name, .. }
        | LibraryError::Charge { name }
        | LibraryError::Steps { name, .. }
        | LibraryError::Formula { name, .. } => name.eq_ignore_ascii_case(entry),
    }
}

/// A file of constants: a list. Its faults are told with their lines, at the place where the block names it.
fn from_file(reader: &mut Reader<'_>, name: &Scalar) -> Option<Catalogue> {
    let path = name.text();
    reader.attachments.push(path.to_owned());
    let bytes = match reader.context.attachments.read(path) {
        Ok(bytes) => bytes,
        Err(reason) => {
            reader.error(
                Rule::MissingConstantsFile,
                name.span(),
                format!("`{path}` cannot be read: {reason}"),
            );
            return None;
        }
    };
    let Ok(text) = std::str::from_utf8(&bytes) else {
        let message = format!("`{path}` is not UTF-8");
        reader.error(Rule::BadConstants, name.span(), message);
        return None;
    };
    let mut inside = Vec::new();
    let laid = yaml::read(text, Limits::FILE, &mut inside).and_then(|root| {
        let items = root.as_list(&mut inside)?;
        overlaid(&reader.catalogue, items, &mut inside)
    });
    let lines = LineIndex::new(text);
    for fault in inside {
        let line = lines.line_column(fault.span().start()).line;
        let message = format!("`{path}`, line {line}: {}", fault.message());
        let mut placed = Diagnostic::error(fault.rule(), name.span(), message);
        if let Some(expected) = fault.expected() {
            placed = placed.expecting(expected);
        }
        if let Some(help) = fault.help() {
            placed = placed.helped(help);
        }
        reader.diagnostics.push(placed);
    }
    laid
}

fn errors(diagnostics: &[Diagnostic]) -> usize {
    diagnostics.iter().filter(|found| found.is_error()).count()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::substance::{Component, written};
    use std::collections::BTreeMap;
    use std::sync::Arc;

    fn library() -> &'static Catalogue {
        Catalogue::embedded().unwrap()
    }

    #[test]
    fn what_an_answer_carries_reads_back_without_the_library() {
        let mut water = Vec::new();
        let own = constants(
            "- {substance: water, pKa: 13.995, source: invented}",
            &mut water,
        );
        let with_water = library().overlaid(&own.unwrap()).unwrap();
        let forms: Vec<_> = library().forms().cloned().collect();
        let ligands: Vec<_> = library().ligands().cloned().collect();
        let mut ions = BTreeMap::new();
        for form in &forms {
            for (component, _) in &form.contains {
                if let Component::Ion(ion) = component {
                    ions.insert(ion.name.clone(), Arc::clone(ion));
                }
            }
        }
        let ions: Vec<_> = ions.into_values().collect();
        let text = written(with_water.water(), &ligands, &ions, &forms);
        let mut faults = Vec::new();
        let stored = constants(&text, &mut faults);
        assert_eq!(faults, []);
        let alone = Catalogue::default().overlaid(&stored.unwrap()).unwrap();
        assert_eq!(alone.water(), with_water.water());
        for ligand in ligands {
            let back = alone.ligand(&ligand.name).unwrap();
            assert_eq!(back.charge, ligand.charge, "{}", ligand.name);
            assert_eq!(back.states, ligand.states, "{}", ligand.name);
            assert_eq!(back.ion_sizes, ligand.ion_sizes, "{}", ligand.name);
            assert_eq!(back.hazards, ligand.hazards, "{}", ligand.name);
            for (found, step) in back.steps.iter().zip(&ligand.steps) {
                assert_eq!(found.preferred, step.preferred, "{}", ligand.name);
            }
        }
        for form in forms {
            let back = alone.find(&form.name).unwrap();
            assert_eq!(back.formula, form.formula, "{}", form.name);
            assert_eq!(back.protons(), form.protons(), "{}", form.name);
            assert_eq!(back.all_hazards(), form.all_hazards(), "{}", form.name);
        }
    }

    /// A list, the rule that it breaks and the place.
    const FAULTS: [(&str, Rule, &str); 14] = [
        (
            "- {substance: a, charge: 0, pKa: [4.2]}",
            Rule::MissingSource,
            "substance",
        ),
        (
            "- {substance: a, charge: 0, pKa: ['4,2'], source: x}",
            Rule::DecimalComma,
            "'4,2'",
        ),
        (
            "- {substance: a, charge: 0, pKa: [7.2, 2.1], source: x}",
            Rule::BadConstants,
            "2.1",
        ),
        (
            "- {substance: a, charge: 0, pKa: 42, source: x}",
            Rule::OutOfRange,
            "42",
        ),
        (
            "- {substance: a, charge: 77, pKa: 4, source: x}",
            Rule::BadConstants,
            "77",
        ),
        (
            "- {substance: a, charge: 0, pka: 4, source: x}",
            Rule::MissingKey,
            "substance",
        ),
        (
            "- {substance: a, charge: 0, pKa: [{value: 4, kind: thermo}], source: x}",
            Rule::UnknownChoice,
            "thermo",
        ),
        (
            "- {substance: a, charge: 0, pKa: [{value: 4, kind: conditional}], source: x}",
            Rule::MissingKey,
            "value",
        ),
        (
            "- {substance: a, charge: 0, pKa: [{value: 4, uncertainty: -1}], source: x}",
            Rule::OutOfRange,
            "-1",
        ),
        (
            "- {substance: a, charge: 0, pKa: [{value: 4, temperature: 400 K}], source: x}",
            Rule::BadTemperature,
            "400 K",
        ),
        (
            "- {substance: a, charge: 0, pKa: 4, hazards: [acid], source: x}",
            Rule::UnknownChoice,
            "acid",
        ),
        ("- {ion: a}", Rule::MissingKey, "ion"),
        ("- {formula: NaCl}", Rule::BadConstants, "{formula: NaCl}"),
        (
            "- {substance: a, charge: 0, pKa: 4, source: x}\n- {substance: a, charge: 0, pKa: 5, source: x}",
            Rule::DuplicateSubstance,
            "a",
        ),
    ];

    #[test]
    fn faults_of_own_constants_stand_where_they_were_typed() {
        for (text, rule, place) in FAULTS {
            let mut found = Vec::new();
            assert_eq!(constants(text, &mut found), None, "{text}");
            let rules: Vec<Rule> = found.iter().map(Diagnostic::rule).collect();
            assert!(rules.contains(&rule), "{text}: {found:?}");
            let fault = found.iter().find(|fault| fault.rule() == rule).unwrap();
            let span = fault.span().of(text).unwrap();
            assert_eq!(span, place, "{text}");
        }
    }

    #[test]
    fn an_error_of_the_library_is_told_at_the_entry() {
        let text = "- {substance: phosphoric acid, pKa: [2.1, 7.2], source: x}\n- {substance: a, pKa: 4, source: x}";
        let mut found = Vec::new();
        let root = yaml::read(text, Limits::FILE, &mut found).unwrap();
        let items = root.as_list(&mut found).unwrap();
        assert!(overlaid(library(), items, &mut found).is_none());
        assert_eq!(found[0].span().of(text), Some("phosphoric acid"));
        assert!(found[0].message().contains("3 dissociation steps"));
    }
}
