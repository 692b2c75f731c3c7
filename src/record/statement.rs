//! What is claimed: the lines of a record.
//!
//! The lines are those of the page's `record` fence. The notebook's defaults that bear on the block belong to what is
//! claimed: a question without its defaults is another question, and a changed default would show only as a result that
//! recomputes differently, with nothing to say why. `assumed:` states each of them, for whoever holds the page alone;
//! `defaults:` is the digest of these lines, and stands alone in records that do not state them.
//!
//! Method, equipment and notes have no lines: they stand in the question and are signed with it.

use std::fmt;

use super::digest::Digest;
use super::identity::{Label, NotebookId, NotebookPath, TextLine};
use super::lines::{LineError, LineReader, LineWriter, ValueFault, text_of};

const KIND: &str = "record";
const KEYS: &[&str] = &[
    "notebook",
    "page",
    "label",
    "supersedes",
    "reason",
    "question",
    "answer",
    "defaults",
    "attachment",
    "uses",
    "template",
    "assumed",
    "program",
    "result",
];

/// A name, and the digest of what it names.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Named<T> {
    /// The name.
    pub name: T,
    /// The digest of what has it.
    pub digest: Digest,
}

/// A result elsewhere that this one is made from: `stocks/2026-10.md#naoh-01`.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct ResultName {
    /// The page on which it stands.
    pub page: NotebookPath,
    /// Its label there.
    pub label: Label,
}

/// The sealed result of the same page that a record takes the place of, and why.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Supersession {
    /// Label and record digest of the result that is replaced.
    pub replaced: Named<Label>,
    /// Why it is replaced.
    pub reason: TextLine,
}

/// What a record claims: which question, with what, got which answer.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Statement {
    /// The notebook.
    pub notebook: NotebookId,
    /// The page, from the notebook's folder.
    pub page: NotebookPath,
    /// The label of the block.
    pub label: Label,
    /// What it takes the place of.
    pub supersedes: Option<Supersession>,
    /// The digest of the block's content.
    pub question: Digest,
    /// The digest of the answer.
    pub answer: Digest,
    /// The digest of the notebook's defaults that bear on the block, if any do.
    pub defaults: Option<Digest>,
    /// Files that belong to question or answer, in the order of their paths.
    pub attachments: Vec<Named<NotebookPath>>,
    /// Results that it is made from, in order, each with the digest of its record.
    pub uses: Vec<Named<ResultName>>,
    /// The template that rendered the answer.
    pub template: Named<TextLine>,
    /// The notebook's defaults that bear on the block, in their order, each as `temperature: 25 °C`.
    pub assumed: Vec<TextLine>,
    /// The program, name and version, that computed the answer.
    pub program: Named<TextLine>,
    /// The answer in one line.
    pub result: TextLine,
}

impl Statement {
    /// The record's lines, with LF.
    #[must_use]
    pub fn print(&self) -> String {
        let mut lines = LineWriter::new(KIND, 1);
        lines
            .line("notebook", &self.notebook)
            .line("page", &self.page)
            .line("label", &self.label);
        match &self.supersedes {
            None => lines.line("supersedes", "none"),
            Some(supersession) => lines
                .line("supersedes", &supersession.replaced)
                .line("reason", &supersession.reason),
        };
        lines
            .line("question", self.question)
            .line("answer", self.answer);
        if let Some(defaults) = &self.defaults {
            lines.line("defaults", defaults);
        }
        for attachment in &self.attachments {
            lines.line("attachment", attachment);
        }
        for used in &self.uses {
            lines.line("uses", used);
        }
        lines.line("template", &self.template);
        for assumed in &self.assumed {
            lines.line("assumed", assumed);
        }
        lines
            .line("program", &self.program)
            .line("result", &self.result);
        lines.finish()
    }

    /// Reads the content of a `record` fence.
    ///
    /// # Errors
    ///
    /// [`LineError`] names the line that departs from the form, and tells a newer version apart.
    pub fn parse(bytes: &[u8]) -> Result<Self, LineError> {
        let text = text_of(bytes)?;
        let mut lines = LineReader::new(&text, KIND, KEYS)?;
        let notebook = lines.take("notebook", NotebookId::new)?;
        let page = lines.take("page", NotebookPath::new)?;
        let label = lines.take("label", Label::new)?;
        let supersedes = supersession(&mut lines)?;
        let question = lines.take("question", Digest::parse)?;
        let answer = lines.take("answer", Digest::parse)?;
        let defaults = lines.optional("defaults", Digest::parse)?;
        let statement = Self {
            notebook,
            page,
            label,
            supersedes,
            question,
            answer,
            defaults,
            attachments: ordered(&mut lines, "attachment", NotebookPath::new)?,
            uses: ordered(&mut lines, "uses", ResultName::parse)?,
            template: lines.take("template", |value| Named::parse(value, TextLine::new))?,
            assumed: assumed(&mut lines, defaults)?,
            program: lines.take("program", |value| Named::parse(value, TextLine::new))?,
            result: lines.take("result", TextLine::new)?,
        };
        lines.finish()?;
        Ok(statement)
    }

    /// The digest of the defaults that bear on the block: of the `assumed:` values, a line each, where they are stated.
    #[must_use]
    pub fn defaults_digest(&self) -> Option<Digest> {
        if self.assumed.is_empty() {
            return self.defaults;
        }
        Some(digest_of_defaults(&self.assumed))
    }

    /// The record's digest, by which acts and later records name it.
    #[must_use]
    pub fn digest(&self) -> Digest {
        Digest::of_lines(self.print().as_bytes())
    }

    /// Puts attachments and uses into the order in which they are printed, each once.
    #[must_use]
    pub fn in_order(mut self) -> Self {
        self.attachments.sort();
        self.attachments.dedup();
        self.uses.sort();
        self.uses.dedup();
        self
    }
}

/// Reads the `assumed:` lines; where `defaults:` stands as well, it must be their digest.
fn assumed(
    lines: &mut LineReader<'_>,
    defaults: Option<Digest>,
) -> Result<Vec<TextLine>, LineError> {
    let assumed = lines.many("assumed", TextLine::new)?;
    let agrees = |digest| digest == digest_of_defaults(&assumed);
    if assumed.is_empty() || defaults.is_none_or(agrees) {
        Ok(assumed)
    } else {
        Err(lines.faulty("assumed", ValueFault::Defaults))
    }
}

fn digest_of_defaults(assumed: &[TextLine]) -> Digest {
    let lines: Vec<String> = assumed.iter().map(|line| format!("{line}\n")).collect();
    Digest::of_lines(lines.concat().as_bytes())
}

fn supersession(lines: &mut LineReader<'_>) -> Result<Option<Supersession>, LineError> {
    let replaced = lines.take("supersedes", |value| match value {
        "none" => Ok(None),
        _ => Named::parse(value, Label::new).map(Some),
    })?;
    replaced
        .map(|replaced| {
            let reason = lines.take("reason", TextLine::new)?;
            Ok(Supersession { replaced, reason })
        })
        .transpose()
}

/// Lines of one key, in strictly rising order of the names, so that one content has one spelling.
pub(super) fn ordered<T: Ord>(
    lines: &mut LineReader<'_>,
    key: &'static str,
    name: impl Fn(&str) -> Result<T, ValueFault>,
) -> Result<Vec<Named<T>>, LineError> {
    let values = lines.many(key, |value| Named::parse(value, &name))?;
    if values.is_sorted_by(|a, b| a.name < b.name) {
        Ok(values)
    } else {
        Err(lines.faulty(key, ValueFault::Order))
    }
}

impl<T> Named<T> {
    /// A name with the digest of what it names.
    pub fn new(name: T, digest: Digest) -> Self {
        Self { name, digest }
    }

    pub(super) fn parse(
        value: &str,
        name: impl Fn(&str) -> Result<T, ValueFault>,
    ) -> Result<Self, ValueFault> {
        let (before, digest) = value.rsplit_once(' ').ok_or(ValueFault::NamedDigest)?;
        if before.ends_with(' ') {
            return Err(ValueFault::NamedDigest);
        }
        Ok(Self::new(name(before)?, Digest::parse(digest)?))
    }
}

impl<T: fmt::Display> fmt::Display for Named<T> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{} {}", self.name, self.digest)
    }
}

impl ResultName {
    /// Reads `PAGE#LABEL`.
    ///
    /// # Errors
    ///
    /// [`ValueFault`] if page or label are missing or not of their form.
    pub fn parse(text: &str) -> Result<Self, ValueFault> {
        let (page, label) = text.split_once('#').ok_or(ValueFault::Label)?;
        Ok(Self {
            page: NotebookPath::new(page)?,
            label: Label::new(label)?,
        })
    }
}

impl fmt::Display for ResultName {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}#{}", self.page, self.label)
    }
}

#[cfg(test)]
pub(super) mod tests {
    use super::*;

    /// A record with every line that there is. Invented data.
    pub(in crate::record) fn full() -> Statement {
        let digest = |text: &str| Digest::of_file(text.as_bytes());
        Statement {
            notebook: NotebookId::new("5f1c9d0e7a2b4c68").unwrap(),
            page: NotebookPath::new("rinse/2026-11-03.md").unwrap(),
            label: Label::new("rb-118").unwrap(),
            supersedes: Some(Supersession {
                replaced: Named::new(Label::new("rb-117").unwrap(), digest("old")),
                reason: TextLine::new("lot of the buffer salt was misread").unwrap(),
            }),
            question: digest("question\n"),
            answer: digest("answer\n"),
            defaults: Some(digest("temperature: 25 °C\nair: closed\n")),
            attachments: vec![Named::new(
                NotebookPath::new("readings/run 17.csv").unwrap(),
                digest("1,2\n"),
            )],
            uses: vec![Named::new(
                ResultName::parse("stocks/2026-10.md#naoh-01").unwrap(),
                digest("stock"),
            )],
            template: Named::new(TextLine::new("built-in speciation").unwrap(), digest("t")),
            assumed: ["temperature: 25 °C", "air: closed"]
                .map(|line| TextLine::new(line).unwrap())
                .to_vec(),
            program: Named::new(TextLine::new("ionfolio 0.1.0").unwrap(), digest("p")),
            result: TextLine::new("pH 7.20, expanded uncertainty 0.03 (k=2)").unwrap(),
        }
    }

    #[test]
    fn what_is_printed_reads_back_and_line_endings_do_not_matter() {
        let mut plain = full();
        plain.supersedes = None;
        plain.defaults = None;
        plain.attachments.clear();
        plain.uses.clear();
        plain.assumed.clear();
        for statement in [full(), plain] {
            let text = statement.print();
            assert_eq!(Statement::parse(text.as_bytes()).as_ref(), Ok(&statement));
            let crlf = text.replace('\n', "\r\n");
            assert_eq!(Statement::parse(crlf.as_bytes()), Ok(statement));
        }
    }

    #[test]
    fn a_changed_text_is_refused_or_means_something_else() {
        let text = full().print();
        for at in 0..text.len() {
            for flip in [0x01_u8, 0x20, 0x80] {
                let mut bytes = text.clone().into_bytes();
                bytes[at] ^= flip;
                if let Ok(other) = Statement::parse(&bytes) {
                    assert_eq!(other.print().as_bytes(), bytes, "byte {at}");
                    assert_ne!(other, full(), "byte {at}");
                }
            }
        }
    }

    #[test]
    fn reason_belongs_to_a_supersession() {
        let text = full().print();
        let without = text.replace("reason: lot of the buffer salt was misread\n", "");
        let error = Statement::parse(without.as_bytes());
        assert_eq!(
            error,
            Err(LineError::Expected {
                line: 6,
                key: "reason"
            })
        );
    }

    #[test]
    fn stated_defaults_agree_with_their_digest() {
        let digest = |statement: &Statement| statement.defaults_digest();
        let (stated, mut bare) = (full(), full());
        bare.assumed.clear();
        assert_eq!(digest(&stated), stated.defaults);
        assert_eq!(digest(&bare), stated.defaults);
        let text = stated.print();
        let fault = ValueFault::Defaults;
        let line = 14;
        let key = "assumed";
        assert_eq!(
            Statement::parse(text.replace("closed", "open").as_bytes()),
            Err(LineError::Value { line, key, fault })
        );
    }

    #[test]
    fn attachments_stand_in_order_and_once() {
        let mut twice = full();
        twice.attachments.extend(full().attachments);
        let error = Statement::parse(twice.print().as_bytes()).unwrap_err();
        let fault = ValueFault::Order;
        assert_eq!(
            error,
            LineError::Value {
                line: 11,
                key: "attachment",
                fault
            }
        );
        assert_eq!(twice.in_order(), full());
    }
}
