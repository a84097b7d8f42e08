//! The templates: built into the tool, or laid over them from a folder of the user's.

use std::path::Path;

use serde::Serialize;
use tera::{Context, Tera};

/// The templates that are built in, by their file names in `templates/`.
const BUILT_IN: [(&str, &str); 9] = [
    ("report.html", include_str!("../../templates/report.html")),
    ("quote.html", include_str!("../../templates/quote.html")),
    ("model.html", include_str!("../../templates/model.html")),
    ("run.html", include_str!("../../templates/run.html")),
    ("chart.html", include_str!("../../templates/chart.html")),
    ("table.html", include_str!("../../templates/table.html")),
    ("criteria.html", include_str!("../../templates/criteria.html")),
    ("register.html", include_str!("../../templates/register.html")),
    ("style.css", include_str!("../../templates/style.css")),
];

/// A template that cannot be read or filled; the text names file and line.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct TemplateError(pub String);

impl std::fmt::Display for TemplateError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(&self.0)
    }
}

impl std::error::Error for TemplateError {}

/// A set of templates.
pub struct Templates {
    tera: Tera,
}

impl std::fmt::Debug for Templates {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str("Templates")
    }
}

impl Templates {
    /// The built-in ones.
    ///
    /// # Errors
    /// [`TemplateError`]: a bug of ours.
    pub fn built_in() -> Result<Self, TemplateError> {
        Self::from(&BUILT_IN.map(|(name, text)| (name.to_owned(), text.to_owned())))
    }

    /// The built-in ones with those of a folder laid over: `files` holds name and text of each file there.
    ///
    /// # Errors
    /// [`TemplateError`] where a file has no built-in namesake, or is wrong.
    pub fn overlaid(folder: &Path, files: &[(String, String)]) -> Result<Self, TemplateError> {
        let mut list = BUILT_IN.map(|(name, text)| (name.to_owned(), text.to_owned()));
        for (name, text) in files {
            let Some(entry) = list.iter_mut().find(|(known, _)| known == name) else {
                let known: Vec<&str> = BUILT_IN.iter().map(|(name, _)| *name).collect();
                return Err(TemplateError(format!(
                    "{}: no template of that name; there are {}",
                    folder.join(name).display(),
                    known.join(", ")
                )));
            };
            entry.1.clone_from(text);
        }
        Self::from(&list)
    }

    fn from(list: &[(String, String)]) -> Result<Self, TemplateError> {
        let mut tera = Tera::new();
        tera.add_raw_templates(list.iter().map(|(name, text)| (name.as_str(), text.as_str())))
            .map_err(|error| TemplateError(error.to_string()))?;
        Ok(Templates { tera })
    }

    /// Fills a template.
    pub(super) fn render(&self, name: &str, view: &impl Serialize) -> Result<String, TemplateError> {
        let context = Context::from_serialize(view).map_err(|error| TemplateError(error.to_string()))?;
        self.tera.render(name, &context).map_err(|error| TemplateError(error.to_string()))
    }
}
