//! Templates: the built-in ones, and those that a laboratory puts in their place.

use crate::report::escape;
use crate::report::figures::{self, Figures};
use crate::report::view::View;
use minijinja::value::{Serde, Value};
use minijinja::{AutoEscape, Environment, Error, ErrorKind, UndefinedBehavior};

/// A template for the answers of one task.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Template {
    name: String,
    source: String,
    built_in: bool,
}

/// Why a template gives no answer.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum TemplateError {
    /// No built-in template has that name.
    #[error("no built-in template {name:?}")]
    Unknown {
        /// The name.
        name: String,
    },
    /// The source is longer than any template.
    #[error("template {name} is longer than {} bytes", Template::LONGEST)]
    TooLong {
        /// The template.
        name: String,
    },
    /// It needs more steps than any answer; a loop without end is one cause.
    #[error("template {name} needs more steps than any answer; does a loop not end?")]
    OutOfFuel {
        /// The template.
        name: String,
    },
    /// It cannot be read, or names what the view does not have.
    #[error("template {name}, line {line}: {what}")]
    Failed {
        /// The template, or the part that it includes.
        name: String,
        /// The line, counted from 1; 0 where unknown.
        line: usize,
        /// What the engine says.
        what: String,
    },
}

/// The built-in templates by task; they are made of the parts in [`PARTS`].
const BUILT_IN: [(&str, &str); 5] = [
    ("speciation", include_str!("templates/speciation.md")),
    ("preparation", include_str!("templates/preparation.md")),
    ("adjustment", include_str!("templates/adjustment.md")),
    ("mixing", include_str!("templates/mixing.md")),
    ("titration", include_str!("templates/titration.md")),
];

/// Parts that every template may include.
const PARTS: [(&str, &str); 5] = [
    ("cautions.md", include_str!("templates/cautions.md")),
    ("found.md", include_str!("templates/found.md")),
    ("method.md", include_str!("templates/method.md")),
    ("judgement.md", include_str!("templates/judgement.md")),
    ("working.md", include_str!("templates/working.md")),
];

/// Steps that the engine may take, and with them the memory: the engine charges for what it writes.
const FUEL: u64 = 4_000_000;

impl Template {
    /// Longest source of a template in bytes.
    pub const LONGEST: usize = 256 * 1024;

    /// The built-in template of a task.
    ///
    /// # Errors
    /// [`TemplateError::Unknown`] where there is no such task.
    pub fn built_in(task: &str) -> Result<Self, TemplateError> {
        BUILT_IN
            .iter()
            .find(|(name, _)| *name == task)
            .map(|(name, source)| Self {
                name: (*name).to_owned(),
                source: (*source).to_owned(),
                built_in: true,
            })
            .ok_or_else(|| TemplateError::Unknown {
                name: task.to_owned(),
            })
    }

    /// A laboratory's own template; it is named and hashed in the record.
    ///
    /// # Errors
    /// [`TemplateError::TooLong`] or [`TemplateError::Failed`] where it cannot be read as a template.
    pub fn replaced(name: &str, source: &str) -> Result<Self, TemplateError> {
        if source.len() > Self::LONGEST {
            return Err(TemplateError::TooLong {
                name: name.to_owned(),
            });
        }
        let template = Self {
            name: name.to_owned(),
            source: source.to_owned(),
            built_in: false,
        };
        Environment::empty()
            .template_from_named_str(name, source)
            .map_err(|error| template.failure(&error))?;
        Ok(template)
    }

    /// Its name: the task, or the name of the laboratory's file.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Its source, to be hashed. For a built-in template this is its whole text with every part that it may include.
    pub fn source(&self) -> String {
        if !self.built_in {
            return self.source.clone();
        }
        let mut whole = self.source.clone();
        for (name, part) in PARTS {
            whole.push_str("{# ");
            whole.push_str(name);
            whole.push_str(" #}\n");
            whole.push_str(part);
        }
        whole
    }

    /// Whether it came with the program.
    pub fn is_built_in(&self) -> bool {
        self.built_in
    }

    /// What the template makes of a view.
    pub(super) fn rendered(&self, view: &View, figures: Figures) -> Result<String, TemplateError> {
        let environment = environment(figures).map_err(|error| self.failure(&error))?;
        environment
            .template_from_named_str(&self.name, &self.source)
            .and_then(|template| template.render(Value::from(Serde(view))))
            .map_err(|error| self.failure(&error))
    }

    fn failure(&self, error: &Error) -> TemplateError {
        let mut innermost = error;
        while let Some(cause) =
            std::error::Error::source(innermost).and_then(|cause| cause.downcast_ref::<Error>())
        {
            innermost = cause;
        }
        if innermost.kind() == ErrorKind::OutOfFuel {
            return TemplateError::OutOfFuel {
                name: self.name.clone(),
            };
        }
        let kind = innermost.kind();
        TemplateError::Failed {
            name: innermost.name().unwrap_or(&self.name).to_owned(),
            line: innermost.line().unwrap_or(0),
            what: innermost
                .detail()
                .map_or_else(|| kind.to_string(), |detail| format!("{kind}: {detail}")),
        }
    }
}

/// The engine: what is missing is an error, every text is escaped unless a filter made it, and the figures' filters are known.
///
/// Texts are escaped where they are printed rather than by a filter at each place, so that a laboratory's template that forgets one
/// cannot break a page.
fn environment(figures: Figures) -> Result<Environment<'static>, Error> {
    let mut environment = Environment::new();
    environment.set_undefined_behavior(UndefinedBehavior::Strict);
    environment.set_debug(false);
    environment.set_fuel(Some(FUEL));
    environment.set_recursion_limit(50);
    let syntax = environment
        .syntax()
        .to_builder()
        .trim_blocks(true)
        .lstrip_blocks(true)
        .build()?;
    environment.set_syntax(syntax);
    environment.set_auto_escape_callback(|_| AutoEscape::Custom("markdown".into()));
    environment.set_formatter(|out, _state, value| {
        out.write_str(&printed(value)?)
            .map_err(|error| Error::new(ErrorKind::WriteFailure, error.to_string()))
    });
    for (name, source) in PARTS {
        environment.add_template(name, source)?;
    }
    add_filters(&mut environment, figures);
    Ok(environment)
}

/// A value as it is printed without a filter: texts escaped, numbers with every digit; nothing else can be printed.
fn printed(value: &Value) -> Result<String, Error> {
    if let Some(text) = value.as_str() {
        return Ok(if value.is_safe() {
            text.to_owned()
        } else {
            escape::markdown(text)
        });
    }
    if value.is_integer() {
        return Ok(value.to_string());
    }
    if value.is_number() {
        return f64::try_from(value.clone()).map(figures::unrounded);
    }
    Err(Error::new(
        ErrorKind::InvalidOperation,
        format!("a value of kind {} cannot be printed", value.kind()),
    ))
}

fn add_filters(environment: &mut Environment<'static>, figures: Figures) {
    environment.add_filter("ph", move |value: f64| safe(figures.ph(value)));
    environment.add_filter("shift", move |value: f64| safe(figures.shift(value)));
    environment.add_filter("uncertainty", move |value: f64| {
        safe(figures.uncertainty(value))
    });
    environment.add_filter("sig", move |value: f64, count: Option<u8>| {
        safe(figures.figures(value, count.unwrap_or(figures.significant())))
    });
    environment.add_filter("places", move |value: f64, places: u8| {
        safe(figures.places(value, places))
    });
    environment.add_filter("percent", move |share: f64| safe(figures.percent(share)));
    environment.add_filter("unrounded", |value: f64| safe(figures::unrounded(value)));
    environment.add_filter("subscript", |number: usize| {
        safe(figures::subscript(number))
    });
}

fn safe(text: String) -> Value {
    Value::from_safe_string(text)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::{Rendered, ReportError, render, sample};

    fn with(source: &str) -> Result<Rendered, ReportError> {
        let (statement, answer) = sample::speciation();
        let template = Template::replaced("own.md", source).map_err(ReportError::from)?;
        render("a.md", &statement, &answer, &template)
    }

    const ENDING: &str = "\n```constants\n{{ constants.written | safe }}```\n";

    #[test]
    fn a_laboratory_may_replace_a_template() {
        let own = with(&format!(
            "pH is {{{{ state.ph | places(3) }}}} by view {{{{ view }}}}\n{ENDING}"
        ))
        .unwrap();
        assert!(
            own.markdown
                .starts_with("pH is 7.042 by view 1\n\n```constants\n")
        );
    }

    #[test]
    fn a_template_that_cannot_stand_in_a_page_is_refused() {
        assert!(matches!(
            with("line\n{{ state.nothing }}"),
            Err(ReportError::Template(TemplateError::Failed { line: 2, .. }))
        ));
        assert!(matches!(
            with("{% for x in"),
            Err(ReportError::Template(TemplateError::Failed { .. }))
        ));
        let endless =
            "{% for a in range(9999) %}{% for b in range(9999) %}x{% endfor %}{% endfor %}";
        assert!(matches!(
            with(endless),
            Err(ReportError::Template(TemplateError::OutOfFuel { .. }))
        ));
        assert!(matches!(
            with(&format!("```record\nionfolio record 1\n```\n{ENDING}")),
            Err(ReportError::ReservedLine { line: 1, .. })
        ));
        assert!(matches!(with("pH\n"), Err(ReportError::NoConstants { .. })));
        assert!(matches!(
            Template::replaced("own.md", &" ".repeat(Template::LONGEST + 1)),
            Err(TemplateError::TooLong { .. })
        ));
    }
}
