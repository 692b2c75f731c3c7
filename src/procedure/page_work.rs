//! One page worked through: every block read, solved and rendered, every fault placed in the page.

use crate::block::{self, Places};
use crate::page::{Block, Page, Region};
use crate::problem::{SolutionReference, Statement};
use crate::procedure::Desk;
use crate::procedure::sources::Sources;
use crate::report::{self, Rendered, Template};
use crate::solution::{self, Unsolvable, answer::Answer};
use crate::text::{Diagnostic, Rule, Span};
use std::collections::BTreeMap;
use std::rc::Rc;

/// Most blocks of one page.
const MOST_BLOCKS: usize = 2_000;

/// A page with what became of its blocks.
#[derive(Debug)]
pub struct PageWork {
    /// The page's path relative to the notebook.
    pub name: String,
    /// The page.
    pub page: Rc<Page>,
    /// Everything that is wrong, with places in the page.
    pub faults: Vec<Diagnostic>,
    /// The blocks whose labels could be read, in page order.
    pub blocks: Vec<BlockWork>,
}

/// One block.
#[derive(Debug)]
pub struct BlockWork {
    /// Its label.
    pub label: String,
    /// Which of the page's blocks it is.
    pub index: usize,
    /// What was read, if nothing is wrong with it.
    pub statement: Option<Statement>,
    /// What was found.
    pub answer: Option<Answer>,
    /// How it reads.
    pub rendered: Option<Rendered>,
    /// The template's name and source.
    pub template: Option<Template>,
    /// Other blocks whose solutions it uses.
    pub references: Vec<SolutionReference>,
    /// Files that it reads.
    pub attachments: Vec<String>,
}

impl PageWork {
    /// Reads the blocks of a page without solving them.
    pub fn read(desk: &Desk, name: &str, page: Page) -> Self {
        Self::through(desk, name, page, false)
    }

    /// Reads, solves and renders the blocks of a page.
    pub fn solve(desk: &Desk, name: &str, page: Page) -> Self {
        Self::through(desk, name, page, true)
    }

    fn through(desk: &Desk, name: &str, page: Page, solving: bool) -> Self {
        let page = Rc::new(page);
        let sources = Sources::of(desk, name, Rc::clone(&page));
        let mut work = Self {
            name: name.to_owned(),
            faults: page.diagnostics().to_vec(),
            blocks: Vec::new(),
            page: Rc::clone(&page),
        };
        if page.blocks().len() > MOST_BLOCKS {
            let span = page.blocks().first().map_or(Span::at(0), Block::opening);
            work.faults.push(Diagnostic::error(
                Rule::TooManyBlocks,
                span,
                format!(
                    "the page has {} blocks; at most {MOST_BLOCKS} are read",
                    page.blocks().len()
                ),
            ));
            return work;
        }
        let mut labels = BTreeMap::new();
        for index in 0..page.blocks().len() {
            work.take(desk, &sources, index, &mut labels, solving);
        }
        work
    }

    /// Takes up one block of the page.
    fn take(
        &mut self,
        desk: &Desk,
        sources: &Sources<'_>,
        index: usize,
        labels: &mut BTreeMap<String, Span>,
        solving: bool,
    ) {
        let page = Rc::clone(&self.page);
        let Some(excerpt) = page.blocks().get(index).map(Block::content) else {
            return;
        };
        let outline = block::outline(excerpt.text());
        let here = sources.for_block(outline.label.as_deref().unwrap_or_default());
        let reading = block::read(excerpt.text(), &here.context());
        let faults = reading.diagnostics.into_iter();
        self.faults
            .extend(faults.map(|fault| fault.in_page(excerpt)));
        let Some((label, label_place)) = reading.label else {
            return;
        };
        let span = excerpt.in_page(label_place);
        if let Some(first) = labels.insert(label.to_string(), span) {
            self.faults.push(twice(label.as_str(), span, first));
            return;
        }
        let mut item = BlockWork {
            label: label.to_string(),
            index,
            statement: reading.statement,
            answer: None,
            rendered: None,
            template: None,
            references: reading.references,
            attachments: reading.attachments,
        };
        if solving && let Some(statement) = &item.statement {
            match finished(desk, &self.name, statement) {
                Ok((answer, rendered, template)) => {
                    item.answer = Some(answer);
                    item.rendered = Some(rendered);
                    item.template = Some(template);
                }
                Err(failure) => {
                    let fault = failure.diagnostic(&reading.places, label_place);
                    self.faults.push(fault.in_page(excerpt));
                }
            }
        }
        self.blocks.push(item);
    }

    /// Solves and renders one statement at a desk; the defaults are not yet among its constants.
    ///
    /// # Errors
    /// Why not, in a sentence part.
    pub(super) fn finish(
        desk: &Desk,
        name: &str,
        statement: &Statement,
    ) -> Result<Rendered, String> {
        match rendered(desk, name, statement) {
            Ok((_, rendered, _)) => Ok(rendered),
            Err(Failure::Unsolvable(error)) => Err(error.to_string()),
            Err(Failure::Report(message)) => Err(message),
        }
    }

    /// Whether anything is an error.
    pub fn is_faulty(&self) -> bool {
        self.faults.iter().any(Diagnostic::is_error)
    }

    /// The page's block of a label.
    pub fn block(&self, work: &BlockWork) -> Option<&Block> {
        self.page.blocks().get(work.index)
    }

    /// The current result of a label: neither superseded nor withdrawn.
    pub fn result(&self, label: &str) -> Option<&Region> {
        self.page
            .results()
            .iter()
            .find(|region| region.label() == label && region.mark().is_none())
    }
}

/// Two blocks of one label.
fn twice(label: &str, span: Span, first: Span) -> Diagnostic {
    let message = format!("the label `{label}` stands twice in this page");
    Diagnostic::error(Rule::DuplicateLabel, span, message)
        .and(first, "first here")
        .helped("give this block a label of its own")
}

/// Why a block has no result.
enum Failure {
    Unsolvable(Unsolvable),
    Report(String),
}

impl Failure {
    /// The fault at the block's label, where no input is at fault alone.
    fn diagnostic(self, places: &Places, label: Span) -> Diagnostic {
        match self {
            Self::Unsolvable(error) => {
                let rule = match error {
                    Unsolvable::BeyondModel { .. } => Rule::ModelRange,
                    Unsolvable::Unreachable { .. }
                    | Unsolvable::IonicStrengthUnreachable { .. } => Rule::UnreachableTarget,
                    _ => Rule::Unsolvable,
                };
                let place = error
                    .input()
                    .and_then(|input| places.of(input))
                    .unwrap_or(label);
                Diagnostic::error(rule, place, error.to_string())
            }
            Self::Report(message) => Diagnostic::error(Rule::BadTemplate, label, message),
        }
    }
}

fn finished(
    desk: &Desk,
    name: &str,
    statement: &Statement,
) -> Result<(Answer, Rendered, Template), Failure> {
    let (answer, mut rendered, template) = rendered(desk, name, statement)?;
    rendered.markdown = with_defaults(&rendered.markdown, &desk.defaults.lines());
    Ok((answer, rendered, template))
}

fn rendered(
    desk: &Desk,
    name: &str,
    statement: &Statement,
) -> Result<(Answer, Rendered, Template), Failure> {
    let answer = solution::solve(statement).map_err(Failure::Unsolvable)?;
    let template = desk
        .template(statement.problem.task())
        .map_err(|error| Failure::Report(error.to_string()))?;
    let rendered = report::render(name, statement, &answer, &template)
        .map_err(|error| Failure::Report(error.to_string()))?;
    Ok((answer, rendered, template))
}

/// What opens the last fence of an answer.
const CONSTANTS_FENCE: &str = "```constants\n";

/// What a line of the constants says of a default that bore on the block.
const DEFAULT_LINE: &str = "# where the block is silent: ";

/// The answer with the defaults that held, as remarks in its `constants` block: with them it can be computed again when the settings have changed.
pub(super) fn with_defaults(markdown: &str, lines: &[String]) -> String {
    let remarks: String = lines
        .iter()
        .flat_map(|line| [DEFAULT_LINE, line, "\n"])
        .collect();
    match markdown.rfind(CONSTANTS_FENCE) {
        Some(at) => {
            let (before, after) = markdown.split_at(at + CONSTANTS_FENCE.len());
            format!("{before}{remarks}{after}")
        }
        None => markdown.to_owned(),
    }
}

/// The `constants` block of an answer and the defaults that it names.
pub(super) fn embedded(answer: &str) -> Option<(String, Vec<String>)> {
    let at = answer.rfind(CONSTANTS_FENCE)?;
    let inside = answer
        .get(at + CONSTANTS_FENCE.len()..)?
        .strip_suffix("```\n")?;
    let defaults = inside
        .lines()
        .filter_map(|line| line.strip_prefix(DEFAULT_LINE))
        .map(str::to_owned)
        .collect();
    Some((inside.to_owned(), defaults))
}
