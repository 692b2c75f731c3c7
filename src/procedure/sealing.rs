//! One run of sealing: results signed one after another, each usable by those that are made from it.

use crate::page::{Edit, Written};
use crate::procedure::Desk;
use crate::procedure::claim::{Claim, record_digest};
use crate::procedure::compute::ComputeError;
use crate::procedure::hand::Hand;
use crate::procedure::page_work::{BlockWork, PageWork};
use crate::procedure::seal::SealError;
use crate::record::{self, Digest, Draft, Entry, Meaning, Statement};
use crate::report::Rendered;
use std::collections::BTreeMap;

/// The register grows, and what was sealed may be used by what follows.
#[derive(Debug)]
pub(super) struct Sealing<'d> {
    desk: &'d Desk,
    pub(super) hand: Hand<'d>,
    /// Digest of the record of each label sealed in this run.
    pub(super) done: BTreeMap<String, Digest>,
}

/// What goes into the page below an answer.
struct Signed {
    record: String,
    act: String,
    digest: Digest,
}

impl<'d> Sealing<'d> {
    pub(super) fn by(desk: &'d Desk, hand: Hand<'d>) -> Self {
        Self {
            desk,
            hand,
            done: BTreeMap::new(),
        }
    }

    /// The edit that puts a sealed result into the page.
    pub(super) fn seal(&mut self, work: &PageWork, item: &BlockWork) -> Result<Edit, SealError> {
        let (Some(rendered), Some(block)) = (&item.rendered, work.block(item)) else {
            return Err(SealError::Missing(format!(
                "`{}` has no result",
                item.label
            )));
        };
        let question = block.content().text();
        let signed = match self.interrupted(work, item, question, rendered) {
            Some(found) => found,
            None => self.signed(work, item, question, rendered)?,
        };
        self.done.insert(item.label.clone(), signed.digest);
        let placing = |reason: String| ComputeError::Placing {
            label: item.label.clone(),
            reason,
        };
        let written = Written::sealed(
            &item.label,
            &rendered.markdown,
            &signed.record,
            vec![signed.act],
        )
        .map_err(|error| placing(error.to_string()))?;
        Ok(work
            .page
            .placing(block, &written)
            .map_err(|error| placing(error.to_string()))?)
    }

    fn signed(
        &mut self,
        work: &PageWork,
        item: &BlockWork,
        question: &str,
        rendered: &Rendered,
    ) -> Result<Signed, SealError> {
        let template = item
            .template
            .as_ref()
            .ok_or_else(|| SealError::Missing(format!("`{}` has no template", item.label)))?;
        let claim = Claim {
            desk: self.desk,
            identity: &self.hand.records.identity,
            program: self.hand.surroundings.program,
            done: &self.done,
            work,
            item,
            question,
            rendered,
            template,
        };
        let draft = Draft {
            statement: &claim.statement()?,
            question: question.as_bytes(),
            answer: rendered.markdown.as_bytes(),
        };
        let sealed = self
            .hand
            .sign(None, |signing| record::seal(&draft, signing))
            .map_err(|error| SealError::Record {
                label: item.label.clone(),
                error,
            })?;
        self.hand.take(sealed.entry, &sealed.register_addition);
        Ok(Signed {
            record: sealed.record,
            act: sealed.act.print(),
            digest: sealed.digest,
        })
    }

    /// The act of a run that was stopped before the page was written, if its question and answer are still the same.
    fn interrupted(
        &self,
        work: &PageWork,
        item: &BlockWork,
        question: &str,
        rendered: &Rendered,
    ) -> Option<Signed> {
        let own = self.hand.register()?;
        let is_of_this = |entry: &&Entry| {
            Statement::parse(entry.record.as_bytes()).is_ok_and(|statement| {
                entry.act.act().meaning == Meaning::Performed
                    && statement.page.as_str() == work.name
                    && statement.label.as_str() == item.label
                    && statement.question == Digest::of_lines(question.as_bytes())
                    && statement.answer == Digest::of_lines(rendered.markdown.as_bytes())
            })
        };
        let entry = own.entries().iter().rev().find(is_of_this)?;
        let digest = Digest::of_lines(entry.record.as_bytes());
        let in_page = work
            .page
            .results()
            .iter()
            .any(|region| record_digest(region) == Some(digest));
        (!in_page).then(|| Signed {
            record: entry.record.clone(),
            act: entry.act.print(),
            digest,
        })
    }
}
