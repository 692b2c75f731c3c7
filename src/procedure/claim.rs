//! What a record claims of a block: question, answer, attachments, sources, template, program.

use crate::notebook::read_page;
use crate::page::{Mark, PAGE_LIMIT, Page};
use crate::procedure::countersign::unescaped;
use crate::procedure::page_work::{BlockWork, PageWork};
use crate::procedure::seal::{SealError, Session};
use crate::record::{
    Digest, Label, Named, NotebookPath, ResultName, Statement, Supersession, TextLine, ValueFault,
};
use std::collections::BTreeMap;

impl Session<'_> {
    /// The statement of a block's result.
    pub(super) fn statement(
        &self,
        work: &PageWork,
        item: &BlockWork,
        question: &str,
    ) -> Result<Statement, SealError> {
        let rendered = item
            .rendered
            .as_ref()
            .ok_or_else(|| SealError::Missing(format!("`{}` has no result", item.label)))?;
        let template = item
            .template
            .as_ref()
            .ok_or_else(|| SealError::Missing(format!("`{}` has no template", item.label)))?;
        let template_name = if template.is_built_in() {
            format!("built-in {}", template.name())
        } else {
            template.name().to_owned()
        };
        let program = self.hand.surroundings.program;
        let program_digest = program.digest.ok_or_else(|| {
            SealError::Missing(
                "the program's own file cannot be read, so its digest is not known".to_owned(),
            )
        })?;
        let lines = self.desk.defaults.lines();
        let defaults: String = lines
            .iter()
            .flat_map(|line| {
                [
                    line, "
",
                ]
            })
            .collect();
        Ok(Statement {
            notebook: self.hand.records.identity.clone(),
            page: named("the page", &work.name, NotebookPath::new)?,
            label: named("the label", &item.label, Label::new)?,
            supersedes: Self::supersession(work, item)?,
            question: Digest::of_lines(question.as_bytes()),
            answer: Digest::of_lines(rendered.markdown.as_bytes()),
            defaults: Some(Digest::of_lines(defaults.as_bytes())),
            attachments: self.attachments(work, item)?,
            uses: self.uses(work, item)?,
            template: Named::new(
                named("the template", &template_name, TextLine::new)?,
                Digest::of_lines(template.source().as_bytes()),
            ),
            program: Named::new(
                named("the program", &program.name, TextLine::new)?,
                program_digest,
            ),
            result: named("the result", &rendered.headline, TextLine::new)?,
        })
    }

    /// What the draft supersedes: the latest sealed result of this label that is marked as superseded, with the reason in its notice.
    fn supersession(work: &PageWork, item: &BlockWork) -> Result<Option<Supersession>, SealError> {
        let region = work.page.results().iter().rev().find(|region| {
            region.label() == item.label
                && region.mark() == Some(Mark::Superseded)
                && region.record().is_some()
        });
        let Some(region) = region else {
            return Ok(None);
        };
        let digest = region
            .record()
            .map(|fence| Digest::of_lines(fence.content.text().as_bytes()))
            .ok_or_else(|| SealError::Missing("the superseded result has no record".to_owned()))?;
        let notice = region
            .notice()
            .and_then(|span| span.of(work.page.text()))
            .unwrap_or_default();
        let reason = unescaped(
            notice
                .rsplit_once("Reason: ")
                .map_or("not stated", |(_, reason)| reason.trim()),
        );
        Ok(Some(Supersession {
            replaced: Named::new(named("the label", &item.label, Label::new)?, digest),
            reason: named("the reason", &reason, TextLine::new)?,
        }))
    }

    /// Files of the question and of the answer, by their paths in the notebook.
    fn attachments(
        &self,
        work: &PageWork,
        item: &BlockWork,
    ) -> Result<Vec<Named<NotebookPath>>, SealError> {
        let folder = work.name.rsplit_once('/').map_or("", |(folder, _)| folder);
        let page_folder = self.desk.root.join(folder);
        let mut found = BTreeMap::new();
        for name in &item.attachments {
            let bytes = crate::notebook::attachment(&self.desk.root, &page_folder, name)
                .map_err(|error| SealError::Missing(format!("{name}: {error}")))?;
            let path = joined(folder, name);
            found.insert(
                named("the attachment", &path, NotebookPath::new)?,
                Digest::of_file(&bytes),
            );
        }
        for plot in item
            .rendered
            .iter()
            .flat_map(|rendered| &rendered.attachments)
        {
            let path = joined(folder, &plot.file_name);
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

    /// The sealed results that a block is made from.
    fn uses(&self, work: &PageWork, item: &BlockWork) -> Result<Vec<Named<ResultName>>, SealError> {
        let mut found = BTreeMap::new();
        for reference in &item.references {
            let page = reference.page.clone().unwrap_or_else(|| work.name.clone());
            let digest = if page == work.name {
                self.done
                    .get(&reference.label)
                    .copied()
                    .or_else(|| sealed_digest(&work.page, &reference.label))
            } else {
                let there = read_page(&self.desk.root.join(&page), PAGE_LIMIT)
                    .ok()
                    .and_then(|bytes| Page::read(bytes).ok());
                there.and_then(|page| sealed_digest(&page, &reference.label))
            };
            let digest = digest.ok_or_else(|| SealError::SourceNotSealed {
                label: item.label.clone(),
                source_label: format!("{page}#{}", reference.label),
            })?;
            let name = ResultName {
                page: named("the page", &page, NotebookPath::new)?,
                label: named("the label", &reference.label, Label::new)?,
            };
            found.insert(
                format!("{page}#{}", reference.label),
                Named::new(name, digest),
            );
        }
        Ok(found.into_values().collect())
    }
}

/// The digest of the record of a label's current result.
pub(super) fn sealed_digest(page: &Page, label: &str) -> Option<Digest> {
    let region = page
        .results()
        .iter()
        .find(|region| region.label() == label && region.mark().is_none())?;
    region
        .record()
        .map(|fence| Digest::of_lines(fence.content.text().as_bytes()))
}

/// A path beside a page, as the notebook has it; `..` and `.` taken out.
fn joined(folder: &str, name: &str) -> String {
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
