//! What blocks refer to: other blocks' solutions, in the same page or another, and files beside the page.

use crate::block::{self, Attachments, Context, SolutionError, Solutions};
use crate::notebook::{attachment, read_page};
use crate::page::{PAGE_LIMIT, Page};
use crate::problem::{Composition, Problem, SolutionReference, Statement};
use crate::procedure::Desk;
use crate::procedure::recomputation::sealed_desk;
use crate::record;
use crate::solution;
use std::cell::RefCell;
use std::collections::BTreeMap;
use std::path::PathBuf;
use std::rc::Rc;
use std::sync::Arc;

/// Most blocks that may be made from one another in a row.
const LONGEST_CHAIN: usize = 32;

/// A block's place: page relative to the root, and label.
type Place = (String, String);

/// Looks up for one page at a desk.
#[derive(Debug)]
pub(super) struct Sources<'d> {
    desk: &'d Desk,
    page_name: String,
    page: Rc<Page>,
    stack: Vec<Place>,
    shared: Rc<Shared>,
    /// Whether other blocks are taken with the constants and defaults of their sealed results.
    as_sealed: bool,
}

/// What all look-ups of one run share.
#[derive(Debug, Default)]
pub(super) struct Shared {
    pages: RefCell<BTreeMap<String, Rc<Page>>>,
    solutions: RefCell<BTreeMap<Place, Result<Arc<Composition>, SolutionError>>>,
}

impl<'d> Sources<'d> {
    /// Look-ups for a page.
    pub(super) fn of(desk: &'d Desk, page_name: &str, page: Rc<Page>) -> Self {
        let shared = Shared::default();
        shared
            .pages
            .borrow_mut()
            .insert(page_name.to_owned(), Rc::clone(&page));
        Self {
            desk,
            page_name: page_name.to_owned(),
            page,
            stack: Vec::new(),
            shared: Rc::new(shared),
            as_sealed: false,
        }
    }

    /// Look-ups that take other blocks as they were sealed, for computing again when the library or the settings have changed.
    pub(super) fn as_sealed(desk: &'d Desk, page_name: &str, page: Rc<Page>) -> Self {
        Self {
            as_sealed: true,
            ..Self::of(desk, page_name, page)
        }
    }

    /// The same look-ups, for a block that is being read: it may not be made from itself.
    pub(super) fn for_block(&self, label: &str) -> Self {
        let mut stack = self.stack.clone();
        stack.push((self.page_name.clone(), label.to_owned()));
        Self {
            desk: self.desk,
            page_name: self.page_name.clone(),
            page: Rc::clone(&self.page),
            stack,
            shared: Rc::clone(&self.shared),
            as_sealed: self.as_sealed,
        }
    }

    fn page(&self, name: &str) -> Result<Rc<Page>, SolutionError> {
        if let Some(page) = self.shared.pages.borrow().get(name) {
            return Ok(Rc::clone(page));
        }
        let failed = |reason: String| SolutionError::Page { reason };
        let plain = std::path::Path::new(name)
            .components()
            .all(|part| matches!(part, std::path::Component::Normal(_)));
        if !plain {
            return Err(failed(
                "its path does not lead to a page of the notebook".to_owned(),
            ));
        }
        let bytes = read_page(&self.desk.root.join(name), PAGE_LIMIT)
            .map_err(|error| failed(error.to_string()))?;
        let page = Rc::new(Page::read(bytes).map_err(|error| failed(error.to_string()))?);
        self.shared
            .pages
            .borrow_mut()
            .insert(name.to_owned(), Rc::clone(&page));
        Ok(page)
    }

    fn worked_out(&self, place: &Place) -> Result<Arc<Composition>, SolutionError> {
        let page = self.page(&place.0)?;
        let mut labels = Vec::new();
        for block in page.blocks() {
            let content = block.content().text();
            let outline = block::outline(content);
            if outline.label.as_deref() == Some(&place.1) {
                let there = Sources {
                    desk: self.desk,
                    page_name: place.0.clone(),
                    page: Rc::clone(&page),
                    stack: self.stack.clone(),
                    shared: Rc::clone(&self.shared),
                    as_sealed: self.as_sealed,
                }
                .for_block(&place.1);
                let sealed = self
                    .as_sealed
                    .then(|| self.sealed(&page, &place.1))
                    .flatten();
                let mut context = there.context();
                if let Some(desk) = &sealed {
                    context.catalogue = &desk.catalogue;
                    context.defaults = &desk.defaults;
                }
                let reading = block::read(content, &context);
                let statement = reading.statement.ok_or(SolutionError::Faulty)?;
                return liquid(&statement).map(Arc::new);
            }
            labels.extend(outline.label);
        }
        Err(SolutionError::Unknown { labels })
    }

    /// The desk of a label's sealed result, if it has one.
    fn sealed(&self, page: &Page, label: &str) -> Option<Desk> {
        let region = page
            .results()
            .iter()
            .find(|region| region.label() == label && region.mark().is_none())?;
        let record = region.record()?;
        let statement = record::Statement::parse(record.content.text().as_bytes()).ok()?;
        sealed_desk(self.desk, region.answer().text(), &statement).ok()
    }

    /// The context in which the page's blocks are read.
    pub(super) fn context(&self) -> Context<'_> {
        Context {
            catalogue: &self.desk.catalogue,
            defaults: &self.desk.defaults,
            solutions: self,
            attachments: self,
        }
    }
}

/// The liquid that a block's task ends in.
fn liquid(statement: &Statement) -> Result<Composition, SolutionError> {
    match &statement.problem {
        Problem::Speciation(task) => Ok(task.composition.clone()),
        Problem::Mixing(task) => Ok(task.mixture.clone()),
        Problem::Preparation(_) | Problem::Adjustment(_) => solution::solve(statement)
            .map(|answer| answer.liquid)
            .map_err(|_unsolved| SolutionError::Faulty),
        Problem::Titration(task) => Ok(task.sample.clone()),
    }
}

impl Solutions for Sources<'_> {
    fn solution(&self, reference: &SolutionReference) -> Result<Arc<Composition>, SolutionError> {
        let name = reference
            .page
            .clone()
            .unwrap_or_else(|| self.page_name.clone());
        let place = (name, reference.label.clone());
        if self.stack.contains(&place) || self.stack.len() >= LONGEST_CHAIN {
            return Err(SolutionError::Circular);
        }
        if let Some(known) = self.shared.solutions.borrow().get(&place) {
            return known.clone();
        }
        let found = self.worked_out(&place);
        // A circle is a matter of where one came from; everything else holds for everybody.
        if found != Err(SolutionError::Circular) {
            self.shared
                .solutions
                .borrow_mut()
                .insert(place, found.clone());
        }
        found
    }
}

impl Attachments for Sources<'_> {
    fn read(&self, path: &str) -> Result<Vec<u8>, String> {
        let page: PathBuf = self.desk.root.join(&self.page_name);
        let folder = page.parent().unwrap_or(&self.desk.root);
        attachment(&self.desk.root, folder, path).map_err(|error| error.to_string())
    }
}
