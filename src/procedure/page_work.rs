//! One page worked through: every block read, solved and rendered, every fault placed in the page.

use crate::block::{self, Places};
use crate::page::{Block, Page, Region};
use crate::problem::{SolutionReference, Statement};
use crate::procedure::Desk;
use crate::procedure::plot_names::{generation, numbered};
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
        if let Some(fault) = too_many(&page) {
            work.faults.push(fault);
            return work;
        }
        let mut labels: BTreeMap<String, Span> = BTreeMap::new();
        for (index, block) in page.blocks().iter().enumerate() {
            let outline = block::outline(block.content().text());
            let here = sources.for_block(outline.label.as_deref().unwrap_or_default());
            let mut reading = block::read(block.content().text(), &here.context());
            let excerpt = block.content();
            let faults = std::mem::take(&mut reading.diagnostics);
            work.faults
                .extend(faults.into_iter().map(|fault| fault.in_page(excerpt)));
            let Some((label, label_span)) = reading.label else {
                continue;
            };
            let span = excerpt.in_page(label_span);
            if let Some(first) = labels.insert(label.to_string(), span) {
                work.faults.push(twice(&label.to_string(), span, first));
                continue;
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
            if solving && let Err(failure) = item.solve(desk, name, &page) {
                let fault = failure.diagnostic(&reading.places, label_span);
                work.faults.push(fault.in_page(excerpt));
            }
            work.blocks.push(item);
        }
        work
    }

    /// Solves and renders one statement at a desk.
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

impl BlockWork {
    fn solve(&mut self, desk: &Desk, name: &str, page: &Page) -> Result<(), Failure> {
        if let Some(statement) = &self.statement {
            let (answer, rendered, template) = rendered(desk, name, statement)?;
            self.answer = Some(answer);
            self.rendered = Some(numbered(rendered, generation(page, &self.label)));
            self.template = Some(template);
        }
        Ok(())
    }
}

fn too_many(page: &Page) -> Option<Diagnostic> {
    let count = page.blocks().len();
    let span = page.blocks().first().map_or(Span::at(0), Block::opening);
    (count > MOST_BLOCKS).then(|| {
        Diagnostic::error(
            Rule::TooManyBlocks,
            span,
            format!("the page has {count} blocks; at most {MOST_BLOCKS} are read"),
        )
    })
}

fn twice(label: &str, span: Span, first: Span) -> Diagnostic {
    Diagnostic::error(
        Rule::DuplicateLabel,
        span,
        format!("the label `{label}` stands twice in this page"),
    )
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

/// The content of the `constants` block of an answer.
pub(super) fn embedded(answer: &str) -> Option<&str> {
    let at = answer.rfind(CONSTANTS_FENCE)?;
    answer
        .get(at + CONSTANTS_FENCE.len()..)?
        .strip_suffix("```\n")
}
