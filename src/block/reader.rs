//! The block as a whole: its keys, in whatever order they stand, to a statement.

use crate::block::piece::Piece;
use crate::block::range::Ranged;
use crate::block::{Context, Defaults, amount, conditions, constants, label, range, remarks, task};
use crate::problem::{Input, InputId, Label, SolutionReference, Statement};
use crate::quantity::Measured;
use crate::substance::Catalogue;
use crate::text::{Diagnostic, Rule, Span};
use crate::yaml::{self, Keys, Limits};
use std::collections::BTreeMap;

/// Where each input was typed, in the block's text.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Places(BTreeMap<InputId, Span>);

impl Places {
    /// Where an input was typed.
    pub fn of(&self, id: &InputId) -> Option<Span> {
        self.0.get(id).copied()
    }
}

/// What was read of a block.
#[derive(Debug)]
pub struct Reading {
    /// The statement, if nothing is wrong with it.
    pub statement: Option<Statement>,
    /// Where its inputs stand.
    pub places: Places,
    /// Everything that is wrong, with places in the block's text.
    pub diagnostics: Vec<Diagnostic>,
    /// The label with its place, also where the rest is wrong.
    pub label: Option<(Label, Span)>,
    /// Other blocks whose solutions it uses.
    pub references: Vec<SolutionReference>,
    /// Files that it reads, by their paths relative to the page.
    pub attachments: Vec<String>,
}

/// Reads a block.
pub fn read(content: &str, context: &Context<'_>) -> Reading {
    let mut diagnostics = Vec::new();
    let root = yaml::read(content, Limits::BLOCK, &mut diagnostics);
    let mut reader = Reader {
        context,
        catalogue: context.catalogue.clone(),
        diagnostics,
        places: BTreeMap::new(),
        references: Vec::new(),
        attachments: Vec::new(),
    };
    let mapping = root
        .as_ref()
        .and_then(|root| root.as_mapping(&mut reader.diagnostics));
    let mut label = None;
    let mut statement = None;
    if let Some(mapping) = mapping {
        let mut keys = mapping.keys();
        label = label::read(&mut reader, &mut keys);
        statement = reader.statement(&mut keys, label.as_ref().map(|(label, _)| label.clone()));
        keys.finish(&mut reader.diagnostics);
    }
    let faulty = reader.diagnostics.iter().any(Diagnostic::is_error);
    Reading {
        statement: if faulty { None } else { statement },
        places: Places(reader.places),
        diagnostics: reader.diagnostics,
        label,
        references: reader.references,
        attachments: reader.attachments,
    }
}

/// What the readers of single keys share.
#[derive(Debug)]
pub(super) struct Reader<'a> {
    pub(super) context: &'a Context<'a>,
    /// The library with the block's own constants.
    pub(super) catalogue: Catalogue,
    pub(super) diagnostics: Vec<Diagnostic>,
    places: BTreeMap<InputId, Span>,
    pub(super) references: Vec<SolutionReference>,
    pub(super) attachments: Vec<String>,
}

impl Reader<'_> {
    /// Reads an amount as an input and remembers its place; what is not possible is refused.
    pub(super) fn input<'s, D: Ranged>(
        &mut self,
        id: InputId,
        piece: impl Into<Piece<'s>>,
    ) -> Option<Input<D>> {
        let piece = piece.into();
        let measured = amount::read::<D>(piece, &mut self.diagnostics)?;
        self.checked(id, piece, measured)
    }

    /// An amount that was read already, as an input.
    pub(super) fn checked<D: Ranged>(
        &mut self,
        id: InputId,
        piece: Piece<'_>,
        measured: Measured<D>,
    ) -> Option<Input<D>> {
        self.places.insert(id.clone(), piece.span());
        if measured.value().is_possible() {
            return Some(Input::new(id, measured));
        }
        self.diagnostics
            .push(range::outside(piece.span(), measured));
        None
    }

    /// Remembers the place of an input that was not read as a single amount.
    pub(super) fn input_place(&mut self, id: &InputId, span: Span) {
        self.places.insert(id.clone(), span);
    }

    /// The place of an input that was read; the beginning of the block where none is known.
    pub(super) fn place(&self, id: &InputId) -> Span {
        self.places.get(id).copied().unwrap_or(Span::at(0))
    }

    /// The amount of a key of the block itself, if the key is there.
    pub(super) fn top<D: Ranged>(
        &mut self,
        keys: &mut Keys<'_>,
        key: &'static str,
    ) -> Option<Input<D>> {
        let scalar = keys.text(key, &mut self.diagnostics)?;
        self.input(InputId::new(key), scalar)
    }

    /// The amount of a key, if the key is there.
    pub(super) fn amount<D: Ranged>(
        &mut self,
        keys: &mut Keys<'_>,
        key: &'static str,
        id: &InputId,
    ) -> Option<Input<D>> {
        let scalar = keys.text(key, &mut self.diagnostics)?;
        self.input(id.within(key), scalar)
    }

    /// The amount of a key that must be there.
    pub(super) fn required<D: Ranged>(
        &mut self,
        keys: &mut Keys<'_>,
        key: &'static str,
        id: &InputId,
    ) -> Option<Input<D>> {
        let scalar = keys.required_text(key, &mut self.diagnostics)?;
        self.input(id.within(key), scalar)
    }

    /// Reports an error.
    pub(super) fn error(&mut self, rule: Rule, span: Span, message: impl Into<String>) {
        self.diagnostics
            .push(Diagnostic::error(rule, span, message));
    }

    fn statement(&mut self, keys: &mut Keys<'_>, label: Option<Label>) -> Option<Statement> {
        if let Some(node) = keys.take("constants") {
            constants::read(self, node);
        }
        let defaults: &Defaults = self.context.defaults;
        let conditions = conditions::read(self, keys, defaults);
        remarks::solvent(self, keys);
        let reporting = remarks::reporting(self, keys, defaults);
        let annotations = remarks::annotations(self, keys);
        let hand_value = remarks::hand_value(self, keys);
        let measured = remarks::measured(self, keys);
        let problem = task::read(self, keys);
        Some(Statement {
            label: label?,
            conditions: conditions?,
            problem: problem?,
            hand_value,
            measured,
            reporting,
            annotations,
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::block::trial::{faults, one_fault, reading, statement};
    use crate::problem::{ActivityChoice, Air, Ingredient, Origin, Problem, UncertaintyMode};

    const WATER: &str = "contents: water\n";

    #[test]
    fn what_a_block_leaves_open_is_the_programs() {
        let conditions = statement("label: a\ntask: speciation\ncontents: water\n").conditions;
        assert_eq!(conditions.temperature.origin, Origin::Program);
        assert!((conditions.temperature.value.value().celsius() - 25.0).abs() < 1e-12);
        assert_eq!(conditions.activity.value, ActivityChoice::Davies);
        assert_eq!(conditions.air.value, Air::Closed);
        assert_eq!(conditions.uncertainty.value, UncertaintyMode::Budget);
    }

    #[test]
    fn keys_stand_in_any_order() {
        let one = statement(
            "label: a\ntask: speciation\ntemperature: 4 °C\ncontents: {acid A: 1 mol/L}\nconstants: house.yaml\n",
        );
        let other = statement(
            "constants: house.yaml\ncontents: {acid A: 1 mol/L}\ntemperature: 4 °C\ntask: speciation\nlabel: a\n",
        );
        assert_eq!(one, other);
        assert_eq!(one.conditions.temperature.origin, Origin::Block);
    }

    #[test]
    fn own_values_go_over_the_library() {
        let statement = statement(
            "label: a\ntask: speciation\ncontents: {sodium acetate: 0.1 mol/L}\nconstants:\n  - substance: acetic acid\n    pKa: 4.70\n    source: report 11-204\n  - {substance: water, pKa: 13.90, source: report 11-205}\n",
        );
        let Problem::Speciation(task) = &statement.problem else {
            panic!()
        };
        let Some(Ingredient::Substance(content)) = task.composition.ingredients.first() else {
            panic!()
        };
        let ligand = content.form.ligands().next().unwrap();
        assert!(ligand.own);
        assert_eq!(ligand.steps[0].preferred.pk.to_string(), "4.70");
        assert_eq!(statement.conditions.pkw.unwrap().pk.to_string(), "13.90");
    }

    #[test]
    fn faults_of_a_constants_file_are_told_with_their_lines() {
        let found = faults("speciation", "contents: water\nconstants: broken.yaml\n");
        assert_eq!(
            (found[0].0, found[0].1.as_str()),
            (Rule::MissingSource, "broken.yaml")
        );
        let text = "label: a\ntask: speciation\ncontents: water\nconstants: broken.yaml\n";
        assert!(
            reading(text).diagnostics[0]
                .message()
                .starts_with("`broken.yaml`, line 2: ")
        );
        one_fault(
            "speciation",
            "contents: water\nconstants: no.yaml\n",
            Rule::MissingConstantsFile,
            "no.yaml",
            "",
        );
    }

    #[test]
    fn the_label_is_known_where_the_rest_is_wrong() {
        let reading = reading("label: rb-118\ntask: mixng\n");
        assert_eq!(reading.label.unwrap().0.as_str(), "rb-118");
        assert_eq!(reading.statement, None);
        assert_eq!(reading.diagnostics.len(), 1);
        assert_eq!(
            reading.diagnostics[0].help(),
            Some("did you mean `mixing`?")
        );
    }

    #[test]
    fn a_label_that_cannot_stand_is_mended() {
        let reading = reading("label: Rinse Bath 118\ntask: speciation\ncontents: water\n");
        assert_eq!(reading.diagnostics[0].rule(), Rule::BadLabel);
        assert_eq!(
            reading.diagnostics[0].help(),
            Some("write `label: rinse-bath-118`")
        );
    }

    #[test]
    fn every_fault_is_told_at_once() {
        let found = faults(
            "speciation",
            "temprature: 25 °C\nactivity: davis\nair: open\nsolvent: methanol\nuncertainty: guess\nreport: {pH: x}\nhand value: {pH: 2, by: luck}\nmeasured: {limit: 7}\ncontents: {malonic acid: 1 N}\n",
        );
        let rules: Vec<Rule> = found.iter().map(|fault| fault.0).collect();
        for rule in [
            Rule::UnknownKey,
            Rule::UnknownModel,
            Rule::BadAir,
            Rule::Solvent,
            Rule::UnknownChoice,
            Rule::BadReport,
            Rule::BadHandValue,
            Rule::MissingKey,
            Rule::BadMeasured,
            Rule::RefusedUnit,
        ] {
            assert_eq!(
                rules.iter().filter(|found| **found == rule).count(),
                1,
                "{rule}"
            );
        }
        assert_eq!(rules.len(), 10);
    }

    #[test]
    fn conditions_outside_of_what_is_known_are_refused() {
        for (keys, rule, place, help) in [
            (
                "temperature: 120 °C\n",
                Rule::BadTemperature,
                "120 °C",
                "100 °C",
            ),
            (
                "temperature: 25 K\n",
                Rule::BadTemperature,
                "25 K",
                "`25 °C`",
            ),
            ("temperature: 25\n", Rule::MissingUnit, "25", "°C, K"),
            ("temperature: 77 °F\n", Rule::RefusedUnit, "°F", "°C"),
            ("air: CO2 420\n", Rule::MissingUnit, "420", "ppm"),
            ("air: CO2 0,05 atm\n", Rule::DecimalComma, "0,05", "0.05"),
            (
                "air: CO2 2000000 ppm\n",
                Rule::BadAir,
                "2000000 ppm",
                "1000000",
            ),
            (
                "uncertainty: {draws: 5}\n",
                Rule::OutOfRange,
                "{draws: 5}",
                "from 100",
            ),
            (
                "accept: everything\n",
                Rule::UnknownChoice,
                "everything",
                "model outside",
            ),
            ("solvent: D2O\n", Rule::Solvent, "D2O", "aqueous part"),
        ] {
            one_fault("speciation", &format!("{WATER}{keys}"), rule, place, help);
        }
    }

    #[test]
    fn a_text_that_is_no_block_has_no_statement() {
        for text in ["", "- a\n", "label\n", "\u{0}", "label: a: b\n"] {
            let reading = reading(text);
            assert_eq!(reading.statement, None, "{text:?}");
            assert!(!reading.diagnostics.is_empty(), "{text:?}");
        }
    }
}
