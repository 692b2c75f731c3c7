//! The block as a whole: its keys, in whatever order they stand, to a statement.

use crate::block::amount::Piece;
use crate::block::range::Ranged;
use crate::block::{
    Context, Defaults, KEYS, adjustment, amount, conditions, constants, contents, mixing,
    preparation, range, remarks, titration,
};
use crate::problem::{Input, InputId, Label, Problem, SolutionReference, Speciation, Statement};
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
        label = reader.label(&mut keys);
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

    fn label(&mut self, keys: &mut Keys<'_>) -> Option<(Label, Span)> {
        let Some(node) = keys.take("label") else {
            if !keys.whole().is_partial() {
                self.diagnostics.push(
                    Diagnostic::error(
                        Rule::MissingLabel,
                        keys.whole().heading(),
                        "the block has no label",
                    )
                    .expecting("`label: a-name`, in lower-case letters, digits and hyphens"),
                );
            }
            return None;
        };
        let scalar = node.as_text(&mut self.diagnostics)?;
        match Label::new(scalar.text()) {
            Ok(label) => Some((label, scalar.span())),
            Err(error) => {
                self.diagnostics.push(
                    Diagnostic::error(Rule::BadLabel, scalar.span(), error.to_string())
                        .helped(format!("write `label: {}`", suggested_label(scalar.text()))),
                );
                None
            }
        }
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
        let problem = self.problem(keys);
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

    fn problem(&mut self, keys: &mut Keys<'_>) -> Option<Problem> {
        let Some(node) = keys.take("task") else {
            if !keys.whole().is_partial() {
                self.diagnostics.push(
                    Diagnostic::error(
                        Rule::MissingKey,
                        keys.whole().heading(),
                        "the key `task` is missing",
                    )
                    .expecting(format!("one of {}", Problem::TASKS.join(", "))),
                );
            }
            skip_task_keys(keys);
            return None;
        };
        let scalar = node.as_text(&mut self.diagnostics)?;
        match scalar.text() {
            "speciation" => contents::composition(self, keys, &InputId::new("contents"))
                .map(|composition| Problem::Speciation(Speciation { composition })),
            "preparation" => {
                preparation::read(self, keys).map(|task| Problem::Preparation(Box::new(task)))
            }
            "adjustment" => {
                adjustment::read(self, keys).map(|task| Problem::Adjustment(Box::new(task)))
            }
            "mixing" => mixing::read(self, keys).map(Problem::Mixing),
            "titration" => {
                titration::read(self, keys).map(|task| Problem::Titration(Box::new(task)))
            }
            other => {
                self.diagnostics.push(
                    Diagnostic::error(
                        Rule::UnknownTask,
                        scalar.span(),
                        format!("`{other}` is no task"),
                    )
                    .expecting(format!("one of {}", Problem::TASKS.join(", ")))
                    .did_you_mean(other, Problem::TASKS),
                );
                skip_task_keys(keys);
                None
            }
        }
    }
}

/// Without a task nobody can say which of its keys belong; none is reported as unknown.
fn skip_task_keys(keys: &mut Keys<'_>) {
    for entry in KEYS.iter().filter(|entry| !entry.tasks.is_empty()) {
        keys.take(entry.key);
    }
}

/// A label that would be accepted, made of what was written.
fn suggested_label(text: &str) -> String {
    let mut label = String::new();
    for c in text.chars().flat_map(char::to_lowercase) {
        if c.is_ascii_lowercase() || c.is_ascii_digit() {
            label.push(c);
        } else if !label.is_empty() && !label.ends_with('-') {
            label.push('-');
        }
        if label.len() >= Label::LONGEST {
            break;
        }
    }
    let label = label.trim_end_matches('-');
    if label.is_empty() {
        "a-name".to_owned()
    } else {
        label.to_owned()
    }
}
