//! A record that belongs to no page: what a keeper or adopter signed. It is kept in the signer's register.

use super::digest::Digest;
use super::identity::{NotebookId, NotebookPath, TextLine};
use super::lines::{LineError, LineReader, LineWriter, text_of};
use super::statement::{Named, ordered};

const KIND: &str = "declaration";
const KEYS: &[&str] = &["notebook", "file", "says"];

/// What is declared of files of the notebook: a changed roster, a constant that was checked against its source.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Declaration {
    /// The notebook.
    pub notebook: NotebookId,
    /// The files, in the order of their paths, with the digests of their lines (CR LF read as LF).
    pub files: Vec<Named<NotebookPath>>,
    /// What is declared, a line each: who was enrolled, which value was checked where.
    pub says: Vec<TextLine>,
}

impl Declaration {
    /// The lines, with LF.
    #[must_use]
    pub fn print(&self) -> String {
        let mut lines = LineWriter::new(KIND, 1);
        lines.line("notebook", &self.notebook);
        for file in &self.files {
            lines.line("file", file);
        }
        for says in &self.says {
            lines.line("says", says);
        }
        lines.finish()
    }

    /// Reads the lines.
    ///
    /// # Errors
    ///
    /// [`LineError`] names the line that departs from the form, and tells a newer version apart.
    pub fn parse(bytes: &[u8]) -> Result<Self, LineError> {
        let text = text_of(bytes)?;
        let mut lines = LineReader::new(&text, KIND, KEYS)?;
        let declaration = Self {
            notebook: lines.take("notebook", NotebookId::new)?,
            files: ordered(&mut lines, "file", NotebookPath::new)?,
            says: lines.many("says", TextLine::new)?,
        };
        lines.finish()?;
        Ok(declaration)
    }

    /// The digest by which the act names it.
    #[must_use]
    pub fn digest(&self) -> Digest {
        Digest::of_lines(self.print().as_bytes())
    }

    /// The declared digest of a file.
    #[must_use]
    pub fn digest_of(&self, path: &str) -> Option<Digest> {
        let file = self.files.iter().find(|file| file.name.as_str() == path)?;
        Some(file.digest)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_printed_reads_back() {
        let declaration = Declaration {
            notebook: NotebookId::new("5f1c9d0e7a2b4c68").unwrap(),
            files: vec![Named::new(
                NotebookPath::new("roster").unwrap(),
                Digest::of_lines(b"x\n"),
            )],
            says: vec![TextLine::new("enrolled bench.analyst").unwrap()],
        };
        let text = declaration.print();
        assert_eq!(
            Declaration::parse(text.as_bytes()).as_ref(),
            Ok(&declaration)
        );
        assert_eq!(
            declaration.digest_of("roster"),
            Some(Digest::of_lines(b"x\r\n"))
        );
        assert_eq!(declaration.digest_of("people.yaml"), None);
    }
}
