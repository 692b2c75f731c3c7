//! What a block's result claims: the statement that its record prints.

use crate::block;
use crate::notebook::{attachment, read_page};
use crate::page::{Mark, PAGE_LIMIT, Page, Region};
use crate::procedure::Desk;
use crate::procedure::countersign::unescaped;
use crate::procedure::page_work::{BlockWork, PageWork};
use crate::procedure::seal::SealError;
use crate::procedure::surroundings::Program;
use crate::record::{
    Digest, Label, Named, NotebookId, NotebookPath, ResultName, Statement, Supersession, TextLine,
    ValueFault,
};
use crate::report::{Rendered, Template};
use std::collections::BTreeMap;

/// A block whose result is to be claimed, and everything that the claim names by digest.
#[derive(Debug)]
pub(super) struct Claim<'a> {
    pub(super) desk: &'a Desk,
    pub(super) identity: &'a NotebookId,
    pub(super) program: &'a Program,
    /// Records sealed in this run, by label.
    pub(super) done: &'a BTreeMap<String, Digest>,
    pub(super) work: &'a PageWork,
    pub(super) item: &'a BlockWork,
    /// The block's content.
    pub(super) question: &'a str,
    pub(super) rendered: &'a Rendered,
    pub(super) template: &'a Template,
}

impl Claim<'_> {
    /// The statement.
    ///
    /// # Errors
    /// [`SealError`]: a source that is not sealed as it stands, a missing file, a name that fits into no record.
    pub(super) fn statement(&self) -> Result<Statement, SealError> {
        let program_digest = self.program.digest.ok_or_else(|| {
            SealError::Missing(
                "the program's own file cannot be read, so its digest is not known".to_owned(),
            )
        })?;
        let lines = self.desk.defaults.lines();
        let assumed: Vec<TextLine> = lines
            .iter()
            .map(|line| named("a default", line, TextLine::new))
            .collect::<Result<_, _>>()?;
        Ok(Statement {
            notebook: self.identity.clone(),
            page: named("the page", &self.work.name, NotebookPath::new)?,
            label: named("the label", &self.item.label, Label::new)?,
            supersedes: self.supersession()?,
            question: Digest::of_lines(self.question.as_bytes()),
            answer: Digest::of_lines(self.rendered.markdown.as_bytes()),
            defaults: Some(Digest::of_lines(joined_lines(&lines).as_bytes())),
            attachments: self.attachments()?,
            uses: self.uses()?,
            template: Named::new(
                named("the template", &self.template_name(), TextLine::new)?,
                Digest::of_lines(self.template.source().as_bytes()),
            ),
            assumed,
            program: Named::new(
                named("the program", &self.program.name, TextLine::new)?,
                program_digest,
            ),
            result: named("the result", &self.rendered.headline, TextLine::new)?,
        })
    }

    fn template_name(&self) -> String {
        if self.template.is_built_in() {
            format!("built-in {}", self.template.name())
        } else {
            self.template.name().to_owned()
        }
    }

    /// What the result supersedes: the latest sealed result of this label that is marked as superseded, with the reason in its notice.
    fn supersession(&self) -> Result<Option<Supersession>, SealError> {
        let label = &self.item.label;
        let replaced = self.work.page.results().iter().rev().find_map(|region| {
            let marked = region.label() == label && region.mark() == Some(Mark::Superseded);
            marked.then_some(region).zip(record_digest(region))
        });
        let Some((region, digest)) = replaced else {
            return Ok(None);
        };
        let notice = region
            .notice()
            .and_then(|span| span.of(self.work.page.text()))
            .unwrap_or_default();
        let reason = unescaped(
            notice
                .rsplit_once("Reason: ")
                .map_or("not stated", |(_, reason)| reason.trim()),
        );
        Ok(Some(Supersession {
            replaced: Named::new(named("the label", label, Label::new)?, digest),
            reason: named("the reason", &reason, TextLine::new)?,
        }))
    }

    /// Files of the question and of the answer, by their paths in the notebook.
    fn attachments(&self) -> Result<Vec<Named<NotebookPath>>, SealError> {
        let folder = self
            .work
            .name
            .rsplit_once('/')
            .map_or("", |(folder, _)| folder);
        let page_folder = self.desk.root.join(folder);
        let mut found = BTreeMap::new();
        for name in &self.item.attachments {
            let bytes = attachment(&self.desk.root, &page_folder, name)
                .map_err(|error| SealError::Missing(format!("{name}: {error}")))?;
            let path = beside(folder, name);
            found.insert(
                named("the attachment", &path, NotebookPath::new)?,
                Digest::of_file(&bytes),
            );
        }
        for plot in &self.rendered.attachments {
            let path = beside(folder, &plot.file_name);
            found.insert(
                named("the plot", &path, NotebookPath::new)?,
                Digest::of_file(&plot.bytes),
            );
        }
        Ok(found
            .into_iter()
            .map(|(path, digest)| Named::new(path, digest))
            .collect())
    }

    /// The sealed results that the block is made from.
    fn uses(&self) -> Result<Vec<Named<ResultName>>, SealError> {
        let mut found = BTreeMap::new();
        for reference in &self.item.references {
            let page = reference
                .page
                .as_ref()
                .map_or(self.work.name.as_str(), String::as_str);
            let place = format!("{page}#{}", reference.label);
            let digest = self.source(page, &reference.label, &place)?;
            let name = ResultName {
                page: named("the page", page, NotebookPath::new)?,
                label: named("the label", &reference.label, Label::new)?,
            };
            found.insert(place, Named::new(name, digest));
        }
        Ok(found.into_values().collect())
    }

    /// The record of a source, which must have been sealed for the block as it stands now.
    fn source(&self, page: &str, label: &str, place: &str) -> Result<Digest, SealError> {
        if page == self.work.name {
            return match self.done.get(label) {
                Some(digest) => Ok(*digest),
                None => self.sealed_source(&self.work.page, label, place),
            };
        }
        let there = read_page(&self.desk.root.join(page), PAGE_LIMIT)
            .ok()
            .and_then(|bytes| Page::read(bytes).ok());
        match there {
            Some(there) => self.sealed_source(&there, label, place),
            None => Err(self.not_sealed(place)),
        }
    }

    fn sealed_source(&self, page: &Page, label: &str, place: &str) -> Result<Digest, SealError> {
        match sealed_source(page, label) {
            Source::Sealed(digest) => Ok(digest),
            Source::Changed => Err(SealError::SourceChanged {
                label: self.item.label.clone(),
                source_label: place.to_owned(),
            }),
            Source::NotSealed => Err(self.not_sealed(place)),
        }
    }

    fn not_sealed(&self, place: &str) -> SealError {
        SealError::SourceNotSealed {
            label: self.item.label.clone(),
            source_label: place.to_owned(),
        }
    }
}

/// How a label that another block is made from stands.
enum Source {
    /// Sealed, for the block as it stands.
    Sealed(Digest),
    /// Sealed, and the block was changed since.
    Changed,
    /// A draft, or nothing.
    NotSealed,
}

fn sealed_source(page: &Page, label: &str) -> Source {
    let region = page
        .results()
        .iter()
        .find(|region| region.label() == label && region.mark().is_none());
    let Some((region, digest)) = region.and_then(|region| Some((region, record_digest(region)?)))
    else {
        return Source::NotSealed;
    };
    if is_of_this_question(page, region) {
        Source::Sealed(digest)
    } else {
        Source::Changed
    }
}

/// Whether a sealed result was sealed for the block that its label has now.
pub(super) fn is_of_this_question(page: &Page, region: &Region) -> bool {
    let sealed = region
        .record()
        .and_then(|fence| Statement::parse(fence.content.text().as_bytes()).ok());
    let question = page
        .blocks()
        .iter()
        .map(|block| block.content().text())
        .find(|content| block::outline(content).label.as_deref() == Some(region.label()));
    match (sealed, question) {
        (Some(statement), Some(question)) => {
            statement.question == Digest::of_lines(question.as_bytes())
        }
        _ => false,
    }
}

/// The digest of a result's record.
pub(super) fn record_digest(region: &Region) -> Option<Digest> {
    region
        .record()
        .map(|fence| Digest::of_lines(fence.content.text().as_bytes()))
}

/// Lines as they are digested: each with LF.
pub(super) fn joined_lines(lines: &[String]) -> String {
    lines
        .iter()
        .flat_map(|line| [line.as_str(), "\n"])
        .collect()
}

/// A path beside a page, as the notebook has it; `..` and `.` taken out.
fn beside(folder: &str, name: &str) -> String {
    let mut parts: Vec<&str> = folder.split('/').filter(|part| !part.is_empty()).collect();
    for part in name.split('/') {
        match part {
            "" | "." => {}
            ".." => {
                parts.pop();
            }
            part => parts.push(part),
        }
    }
    parts.join("/")
}

fn named<T>(
    what: &'static str,
    text: &str,
    make: impl Fn(&str) -> Result<T, ValueFault>,
) -> Result<T, SealError> {
    make(text).map_err(|fault| SealError::Name {
        what,
        text: text.to_owned(),
        fault,
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn paths_beside_a_page_are_those_of_the_notebook() {
        assert_eq!(beside("rinse", "../readings/run.csv"), "readings/run.csv");
        assert_eq!(beside("", "./run.csv"), "run.csv");
        assert_eq!(beside("a/b", "plot.svg"), "a/b/plot.svg");
    }
}
