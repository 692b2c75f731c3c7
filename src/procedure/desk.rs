//! What a page is worked with: its notebook, the library with the laboratory's constants, the defaults, the templates.

use crate::block::{self, Defaults};
use crate::notebook::{Lock, LockError, Notebook, SETTINGS_FILE, SettingsError, read_page};
use crate::report::{Template, TemplateError};
use crate::substance::{Catalogue, LibraryError};
use crate::text::{Diagnostic, LineIndex};
use std::path::{Path, PathBuf};

/// Largest file of constants in bytes.
const LARGEST_CONSTANTS: usize = 4 * 1024 * 1024;

/// A place to work: the notebook around a page, or the page's folder.
#[derive(Debug)]
pub struct Desk {
    /// The notebook, if there is one.
    pub notebook: Option<Notebook>,
    /// Its folder, or the page's.
    pub root: PathBuf,
    /// The library.
    pub catalogue: Catalogue,
    /// What holds where a block says nothing.
    pub defaults: Defaults,
}

/// Why there is no desk.
#[derive(Debug, thiserror::Error)]
pub enum DeskError {
    /// The notebook's settings cannot be used.
    #[error(transparent)]
    Settings(#[from] SettingsError),
    /// The built-in library cannot be read.
    #[error("the built-in constants library cannot be read: {0}")]
    Library(LibraryError),
    /// The notebook's defaults, constants or templates are wrong.
    #[error("{path}: {message}", path = .path.display())]
    Content {
        /// The file.
        path: PathBuf,
        /// The first fault, with its place where it has one.
        message: String,
    },
}

impl Desk {
    /// The desk for a page or folder.
    ///
    /// # Errors
    /// [`DeskError`] names the file at fault.
    pub fn at(path: &Path) -> Result<Self, DeskError> {
        let embedded = Catalogue::embedded().map_err(DeskError::Library)?;
        let Some(notebook) = Notebook::around(path)? else {
            let absolute = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
            let folder = if absolute.is_dir() {
                Some(absolute.as_path())
            } else {
                absolute.parent()
            };
            return Ok(Self {
                root: folder.unwrap_or(&absolute).to_owned(),
                notebook: None,
                catalogue: embedded.clone(),
                defaults: Defaults::program(),
            });
        };
        let catalogue = match &notebook.constants {
            Some(file) => own_constants(embedded, file)?,
            None => embedded.clone(),
        };
        Ok(Self {
            root: notebook.root.clone(),
            defaults: defaults(&notebook)?,
            catalogue,
            notebook: Some(notebook),
        })
    }

    /// The template of a task: the laboratory's, where its folder has one, else the built-in one.
    ///
    /// # Errors
    /// [`TemplateError`] where a template cannot be used; the laboratory's is not silently replaced.
    pub fn template(&self, task: &str) -> Result<Template, TemplateError> {
        let own = self
            .notebook
            .as_ref()
            .and_then(|notebook| notebook.templates.as_ref());
        if let Some(folder) = own {
            let name = format!("{task}.md");
            let file = folder.join(&name);
            if file.is_file() {
                let unreadable = |what: String| TemplateError::Failed {
                    name: name.clone(),
                    line: 0,
                    what,
                };
                let bytes = read_page(&file, Template::LONGEST)
                    .map_err(|error| unreadable(error.to_string()))?;
                let source = String::from_utf8(bytes)
                    .map_err(|error| unreadable(format!("not UTF-8: {error}")))?;
                return Template::replaced(&name, &source);
            }
        }
        Template::built_in(task)
    }

    /// The right to write in the notebook, until it is dropped; a page that stands alone needs none.
    ///
    /// # Errors
    /// [`LockError`] where somebody else writes.
    pub fn lock(&self) -> Result<Option<Lock>, LockError> {
        let notebook = self.notebook.as_ref();
        notebook
            .map(|notebook| Lock::on(&notebook.root.join(SETTINGS_FILE)))
            .transpose()
    }

    /// A page's path relative to the root, with forward slashes.
    pub fn relative(&self, page: &Path) -> String {
        let absolute = std::path::absolute(page).unwrap_or_else(|_| page.to_owned());
        let inside = absolute.strip_prefix(&self.root).unwrap_or(&absolute);
        let parts: Vec<String> = inside
            .components()
            .map(|part| part.as_os_str().to_string_lossy().into_owned())
            .collect();
        parts.join("/")
    }
}

fn defaults(notebook: &Notebook) -> Result<Defaults, DeskError> {
    let path = notebook.root.join(SETTINGS_FILE);
    let mut diagnostics = Vec::new();
    let mut defaults = match &notebook.defaults {
        Some(node) => Defaults::read(node, &mut diagnostics),
        None => Defaults::program(),
    };
    if let Some(rule) = &notebook.rounding
        && !defaults.set_rounding_rule(rule)
    {
        return Err(DeskError::Content {
            path,
            message: format!("`{rule}` is no rounding rule; expected `half-even` or `half-up`"),
        });
    }
    match diagnostics.iter().find(|fault| fault.is_error()) {
        None => Ok(defaults),
        Some(fault) => {
            let bytes = read_page(&path, LARGEST_CONSTANTS).unwrap_or_default();
            Err(faulty(&path, &String::from_utf8_lossy(&bytes), fault))
        }
    }
}

/// The fault of a file, with its place.
fn faulty(path: &Path, text: &str, fault: &Diagnostic) -> DeskError {
    let place = LineIndex::new(text).line_column(fault.span().start());
    let expected = fault
        .expected()
        .map(|expected| format!("; expected {expected}"));
    let help = fault.help().map(|help| format!("; {help}"));
    DeskError::Content {
        path: path.to_owned(),
        message: format!(
            "line {}, column {}: {}{}{}",
            place.line,
            place.column,
            fault.message(),
            expected.unwrap_or_default(),
            help.unwrap_or_default()
        ),
    }
}

fn own_constants(embedded: &Catalogue, file: &Path) -> Result<Catalogue, DeskError> {
    let failed = |message: String| DeskError::Content {
        path: file.to_owned(),
        message,
    };
    let bytes = read_page(file, LARGEST_CONSTANTS).map_err(|error| failed(error.to_string()))?;
    let text = String::from_utf8(bytes).map_err(|error| {
        failed(format!(
            "not UTF-8 at byte {}",
            error.utf8_error().valid_up_to()
        ))
    })?;
    let mut diagnostics = Vec::new();
    let stored = block::constants(&text, &mut diagnostics).unwrap_or_default();
    if let Some(fault) = diagnostics.iter().find(|fault| fault.is_error()) {
        return Err(faulty(file, &text, fault));
    }
    embedded
        .overlaid(&stored)
        .map_err(|error| failed(error.to_string()))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::procedure::specimen::{ACETIC, Laboratory, SETTINGS};

    #[test]
    fn faults_of_the_defaults_have_a_place() {
        let laboratory = Laboratory::with(ACETIC);
        laboratory.write(
            "notebook/ionfolio.yaml",
            &SETTINGS.replace("25 °C", "25 mL"),
        );
        let error = Desk::at(&laboratory.page()).unwrap_err().to_string();
        assert!(error.contains("line 5, column 19"), "{error}");
    }

    #[test]
    fn a_laboratorys_own_template_is_never_silently_left_out() {
        let laboratory = Laboratory::with(ACETIC);
        let settings = format!("{SETTINGS}templates: forms\n");
        laboratory.write("notebook/ionfolio.yaml", &settings);
        std::fs::create_dir(laboratory.path("notebook/forms")).unwrap();
        let path = laboratory.path("notebook/forms/speciation.md");
        crate::notebook::create(&path, &[0xff, 0xfe]).unwrap();
        let desk = Desk::at(&laboratory.page()).unwrap();
        assert!(matches!(
            desk.template("speciation"),
            Err(TemplateError::Failed { .. })
        ));
        assert!(desk.template("mixing").is_ok());
    }
}
