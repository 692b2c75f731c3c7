//! `ionfolio.yaml`: what holds for the whole notebook.

use crate::notebook::{FileError, People, read_page};
use crate::text::{Diagnostic, LineIndex, Rule};
use crate::yaml::{self, Keys, Limits, Mapping, Node};
use std::path::{Path, PathBuf};

/// The name of the settings file.
pub const SETTINGS_FILE: &str = "ionfolio.yaml";

/// Largest settings file in bytes.
const LARGEST: usize = 256 * 1024;

/// What a notebook asks of its records.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Policy {
    /// Meanings of acts that each record needs.
    pub required: Vec<String>,
    /// Whether one may review one's own work.
    pub own_review: bool,
    /// Days until a review is overdue.
    pub review_days: Option<u32>,
}

/// A notebook: its folder and what its settings say.
#[derive(Clone, Debug)]
pub struct Notebook {
    /// The folder, absolute.
    pub root: PathBuf,
    /// Its identity: 16 or 32 hexadecimal digits, or nothing where none is stated.
    pub identity: Option<String>,
    /// Title.
    pub title: Option<String>,
    /// Minutes east of Greenwich for times that are written.
    pub offset_minutes: i32,
    /// Defaults for block keys, unread; `rounding` stands among them.
    pub defaults: Option<Node>,
    /// Rounding rule, unread.
    pub rounding: Option<String>,
    /// What it asks of records.
    pub policy: Policy,
    /// The roster's path.
    pub roster: PathBuf,
    /// The folder of registers.
    pub registers: PathBuf,
    /// Path of `people.yaml`.
    pub people_file: PathBuf,
    /// Names and roles.
    pub people: People,
    /// The laboratory's own constants, where there are any.
    pub constants: Option<PathBuf>,
    /// The folder of the laboratory's own templates, where there is one.
    pub templates: Option<PathBuf>,
}

/// Why a notebook's settings cannot be used.
#[derive(Debug, thiserror::Error)]
pub enum SettingsError {
    /// The file cannot be read.
    #[error("{path}: {error}", path = .path.display())]
    File {
        /// The file.
        path: PathBuf,
        /// Why.
        error: FileError,
    },
    /// The file has errors.
    #[error("{path}:{line}:{column}: {message}", path = .path.display())]
    Content {
        /// The file.
        path: PathBuf,
        /// Line of the first error.
        line: usize,
        /// Column of the first error.
        column: usize,
        /// What it is.
        message: String,
    },
}

impl Notebook {
    /// The notebook that a file or folder belongs to: the nearest folder upwards with a settings file.
    ///
    /// # Errors
    /// [`SettingsError`] where the settings file has errors; `Ok(None)` where there is no such file.
    pub fn around(path: &Path) -> Result<Option<Self>, SettingsError> {
        let absolute = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
        let start = if absolute.is_dir() {
            Some(absolute.as_path())
        } else {
            absolute.parent()
        };
        let mut folder = start;
        while let Some(here) = folder {
            let file = here.join(SETTINGS_FILE);
            if file.is_file() {
                return Self::read(here, &file).map(Some);
            }
            folder = here.parent();
        }
        Ok(None)
    }

    fn read(root: &Path, file: &Path) -> Result<Self, SettingsError> {
        let text = text_of(file)?;
        let mut diagnostics = Vec::new();
        let tree = yaml::read(&text, Limits::FILE, &mut diagnostics);
        let mut notebook = Self::of(root);
        if let Some(mapping) = tree
            .as_ref()
            .and_then(|tree| tree.as_mapping(&mut diagnostics))
        {
            notebook.take(mapping, &mut diagnostics);
        }
        first_error(file, &text, &diagnostics)?;
        if notebook.people_file.is_file() {
            let text = text_of(&notebook.people_file)?;
            let mut diagnostics = Vec::new();
            notebook.people = People::read(&text, &mut diagnostics);
            first_error(&notebook.people_file, &text, &diagnostics)?;
        }
        Ok(notebook)
    }

    fn of(root: &Path) -> Self {
        Self {
            root: root.to_owned(),
            identity: None,
            title: None,
            offset_minutes: 0,
            defaults: None,
            rounding: None,
            policy: Policy {
                required: vec!["performed".to_owned()],
                own_review: false,
                review_days: None,
            },
            roster: root.join("roster"),
            registers: root.join("registers"),
            people_file: root.join("people.yaml"),
            people: People::default(),
            constants: None,
            templates: None,
        }
    }

    fn take(&mut self, mapping: &Mapping, diagnostics: &mut Vec<Diagnostic>) {
        let mut keys = mapping.keys();
        if let Some(scalar) = keys.text("notebook", diagnostics) {
            let hex = scalar.text();
            if [16, 32].contains(&hex.len())
                && hex
                    .chars()
                    .all(|c| c.is_ascii_digit() || ('a'..='f').contains(&c))
            {
                self.identity = Some(hex.to_owned());
            } else {
                diagnostics.push(
                    Diagnostic::error(
                        Rule::BadSetting,
                        scalar.span(),
                        "not an identity of a notebook",
                    )
                    .expecting("32 lower-case hexadecimal digits, drawn at random once"),
                );
            }
        }
        self.title = keys
            .text("title", diagnostics)
            .map(|scalar| scalar.text().to_owned());
        if let Some(scalar) = keys.text("time zone", diagnostics) {
            match offset(scalar.text()) {
                Some(minutes) => self.offset_minutes = minutes,
                None => diagnostics.push(
                    Diagnostic::error(
                        Rule::BadTimeZone,
                        scalar.span(),
                        format!("`{}` is no offset from UTC", scalar.text()),
                    )
                    .expecting("an offset such as `+01:00`, in quotation marks"),
                ),
            }
        }
        self.defaults = keys.take("defaults").cloned();
        self.rounding = keys
            .text("rounding", diagnostics)
            .map(|scalar| scalar.text().to_owned());
        if let Some(inner) = keys.mapping("policy", diagnostics) {
            self.policy = policy(inner, diagnostics);
        }
        for (key, place) in [
            ("roster", &mut self.roster),
            ("registers", &mut self.registers),
            ("people", &mut self.people_file),
        ] {
            if let Some(path) = inside(&self.root, &mut keys, key, diagnostics) {
                *place = path;
            }
        }
        self.constants = inside(&self.root, &mut keys, "constants", diagnostics);
        self.templates = inside(&self.root, &mut keys, "templates", diagnostics);
        keys.finish(diagnostics);
    }

    /// A page's path relative to the notebook, with forward slashes; `None` for a page outside it.
    pub fn relative(&self, page: &Path) -> Option<String> {
        let absolute = std::path::absolute(page).ok()?;
        let inside = absolute.strip_prefix(&self.root).ok()?;
        let parts: Option<Vec<&str>> = inside
            .components()
            .map(|part| part.as_os_str().to_str())
            .collect();
        parts.map(|parts| parts.join("/"))
    }
}

fn text_of(path: &Path) -> Result<String, SettingsError> {
    let failed = |error| SettingsError::File {
        path: path.to_owned(),
        error,
    };
    let bytes = read_page(path, LARGEST).map_err(failed)?;
    String::from_utf8(bytes).map_err(|error| SettingsError::Content {
        path: path.to_owned(),
        line: 1,
        column: 1,
        message: format!("not UTF-8 at byte {}", error.utf8_error().valid_up_to()),
    })
}

fn first_error(path: &Path, text: &str, diagnostics: &[Diagnostic]) -> Result<(), SettingsError> {
    let Some(fault) = diagnostics.iter().find(|fault| fault.is_error()) else {
        return Ok(());
    };
    let place = LineIndex::new(text).line_column(fault.span().start());
    let expected = fault
        .expected()
        .map(|expected| format!("; expected {expected}"))
        .unwrap_or_default();
    let help = fault
        .help()
        .map(|help| format!("; {help}"))
        .unwrap_or_default();
    Err(SettingsError::Content {
        path: path.to_owned(),
        line: place.line,
        column: place.column,
        message: format!("{}{expected}{help}", fault.message()),
    })
}

/// A path below the notebook.
fn inside(
    root: &Path,
    keys: &mut Keys<'_>,
    key: &'static str,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<PathBuf> {
    let scalar = keys.text(key, diagnostics)?;
    let path = Path::new(scalar.text());
    let plain = path
        .components()
        .all(|part| matches!(part, std::path::Component::Normal(_)));
    if !plain {
        diagnostics.push(
            Diagnostic::error(
                Rule::BadPath,
                scalar.span(),
                format!("`{}` is not a path inside the notebook", scalar.text()),
            )
            .expecting("a relative path without `..`"),
        );
        return None;
    }
    Some(root.join(path))
}

fn policy(mapping: &Mapping, diagnostics: &mut Vec<Diagnostic>) -> Policy {
    let mut keys = mapping.keys();
    let required = keys.take("acts").map_or_else(
        || vec!["performed".to_owned()],
        |node| {
            node.items()
                .iter()
                .filter_map(|item| {
                    item.as_text(diagnostics)
                        .map(|scalar| scalar.text().to_owned())
                })
                .collect()
        },
    );
    let own_review = match keys.text("own review", diagnostics) {
        None => false,
        Some(scalar) => match scalar.text() {
            "allowed" => true,
            "refused" => false,
            other => {
                diagnostics.push(
                    Diagnostic::error(
                        Rule::BadSetting,
                        scalar.span(),
                        format!("`{other}` is no policy"),
                    )
                    .expecting("`allowed` or `refused`"),
                );
                false
            }
        },
    };
    let review_days = keys.text("review within", diagnostics).and_then(|scalar| {
        let days = scalar.text().trim_end_matches("days").trim().parse().ok();
        if days.is_none() {
            diagnostics.push(
                Diagnostic::error(Rule::BadSetting, scalar.span(), "not a number of days")
                    .expecting("`30 days`"),
            );
        }
        days
    });
    keys.finish(diagnostics);
    Policy {
        required,
        own_review,
        review_days,
    }
}

/// `+01:00` as minutes.
fn offset(text: &str) -> Option<i32> {
    if matches!(text, "UTC" | "Z") {
        return Some(0);
    }
    let (sign, rest) = match text.strip_prefix('+') {
        Some(rest) => (1, rest),
        None => (-1, text.strip_prefix(['-', '−'])?),
    };
    let (hours, minutes) = rest.split_once(':')?;
    let (hours, minutes): (i32, i32) = (hours.parse().ok()?, minutes.parse().ok()?);
    ((0..=14).contains(&hours) && (0..60).contains(&minutes))
        .then_some(sign * (60 * hours + minutes))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn offsets_are_minutes() {
        assert_eq!(offset("+01:00"), Some(60));
        assert_eq!(offset("-03:30"), Some(-210));
        assert_eq!(offset("Berlin"), None);
    }

    #[test]
    fn faults_have_a_place() {
        let folder = tempfile::tempdir().unwrap();
        crate::notebook::create(
            &folder.path().join(SETTINGS_FILE),
            b"title: x\ntime zone: Berlin\n",
        )
        .unwrap();
        let error = Notebook::around(folder.path()).unwrap_err().to_string();
        assert!(error.contains("ionfolio.yaml:2:12"), "{error}");
    }
}
