//! The templates: built in, each replaceable by a file of the same name in a folder of the user's.

use super::ReportError;
use crate::fault::Failure;
use std::collections::BTreeMap;
use std::path::Path;
use tera::{Context, Tera};

/// The templates, read and checked.
#[derive(Debug)]
pub struct Templates {
    tera: Tera,
}

impl Templates {
    /// Those that are built in.
    ///
    /// # Errors
    /// [`ReportError::Template`] only where the program itself is broken.
    pub fn builtin() -> Result<Self, ReportError> {
        Self::of(builtin())
    }

    /// Those that are built in, with each file in `folder` in place of the one of the same name. Hidden files
    /// are passed over.
    ///
    /// # Errors
    /// [`ReportError::UnknownTemplate`] for a file whose name no template has, [`ReportError::Template`] with
    /// file, line and column for one that cannot be read as a template, [`ReportError::Failure`] where the
    /// disk fails.
    pub fn with_folder(folder: &Path) -> Result<Self, ReportError> {
        let mut all = builtin();
        let failed = |cause| {
            ReportError::Failure(Failure::new(
                format!("cannot read the templates in {}", folder.display()),
                cause,
            ))
        };
        let mut paths = Vec::new();
        for entry in std::fs::read_dir(folder).map_err(failed)? {
            paths.push(entry.map_err(failed)?.path());
        }
        // The order of a folder differs from disk to disk, and with it which of two errors is told.
        paths.sort();
        for path in paths {
            let name = path.file_name().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default();
            if name.starts_with('.') {
                continue;
            }
            let Some((known, content)) = all.iter_mut().find(|(known, _)| **known == name) else {
                return Err(ReportError::UnknownTemplate {
                    path: path.display().to_string(),
                    known: BUILTIN.iter().map(|(known, _)| *known).collect(),
                });
            };
            *content = std::fs::read_to_string(&path).map_err(|cause| {
                ReportError::Failure(Failure::new(
                    format!("cannot read the template {known} in {}", folder.display()),
                    cause,
                ))
            })?;
        }
        Self::of(all)
    }

    /// The names of all templates.
    pub fn names() -> impl Iterator<Item = &'static str> {
        BUILTIN.iter().map(|(name, _)| *name)
    }

    /// The text of the built-in template of that name, to start one's own from.
    pub fn text(name: &str) -> Option<&'static str> {
        BUILTIN.iter().find(|(known, _)| *known == name).map(|(_, text)| *text)
    }

    /// Fills in a template.
    pub(super) fn render<V: serde::Serialize>(&self, name: &str, view: &V) -> Result<String, ReportError> {
        Ok(self.tera.render(name, &Context::from_serialize(view)?)?)
    }

    fn of(all: BTreeMap<&'static str, String>) -> Result<Self, ReportError> {
        let mut tera = Tera::new();
        tera.autoescape_on([".html"]);
        tera.add_raw_templates(all)?;
        Ok(Templates { tera })
    }
}

fn builtin() -> BTreeMap<&'static str, String> {
    BUILTIN.iter().map(|(name, text)| (*name, (*text).to_owned())).collect()
}

macro_rules! builtin {
    ($($name:literal),* $(,)?) => {
        [$(($name, include_str!(concat!("../../templates/", $name)))),*]
    };
}

const BUILTIN: [(&str, &str); 22] = builtin![
    "annex-convergence.html",
    "annex-digests.html",
    "annex-inputs.html",
    "annex-ledger.html",
    "annex-study-text.html",
    "block-chart.html",
    "block-criteria.html",
    "block-model.html",
    "block-run.html",
    "block-table.html",
    "contents.html",
    "ledger-line.html",
    "marks.html",
    "prose-footnote-mark.html",
    "prose-footnote.html",
    "prose-quote.html",
    "prose-table.html",
    "register.html",
    "report.html",
    "style.css",
    "title-block.html",
    "verdict.html",
];

#[cfg(test)]
#[expect(clippy::disallowed_methods, reason = "a test sets up the folder of a user")]
mod tests {
    use super::*;

    #[test]
    fn every_file_of_the_folder_is_built_in() {
        let mut names: Vec<String> = std::fs::read_dir(concat!(env!("CARGO_MANIFEST_DIR"), "/templates"))
            .unwrap()
            .map(|entry| entry.unwrap().file_name().to_string_lossy().into_owned())
            .collect();
        names.sort();
        assert_eq!(names, Templates::names().collect::<Vec<_>>());
    }

    #[test]
    fn a_file_of_the_user_replaces_the_one_of_the_same_name() {
        let folder = tempfile::tempdir().unwrap();
        std::fs::write(folder.path().join("prose-quote.html"), "<b>{{ text }}</b>").unwrap();
        std::fs::write(folder.path().join(".hidden"), "").unwrap();
        let templates = Templates::with_folder(folder.path()).unwrap();
        let text = templates.render("prose-quote.html", &BTreeMap::from([("text", "1 < 2")])).unwrap();
        assert_eq!(text, "<b>1 &lt; 2</b>");
    }

    #[test]
    fn an_unknown_file_is_an_error_that_names_it_and_those_that_are_known() {
        let folder = tempfile::tempdir().unwrap();
        std::fs::write(folder.path().join("reprot.html"), "").unwrap();
        let message = Templates::with_folder(folder.path()).unwrap_err().to_string();
        assert!(message.contains("reprot.html") && message.contains(" report.html"), "{message}");
    }

    #[test]
    fn a_broken_template_is_an_error_with_file_and_line() {
        let folder = tempfile::tempdir().unwrap();
        std::fs::write(folder.path().join("verdict.html"), "<p>\n{% if %}\n").unwrap();
        let message = Templates::with_folder(folder.path()).unwrap_err().to_string();
        assert!(message.contains("verdict.html:2"), "{message}");
    }

    #[test]
    fn a_field_that_is_not_there_is_an_error_with_file_and_line() {
        let folder = tempfile::tempdir().unwrap();
        std::fs::write(folder.path().join("prose-quote.html"), "\n{{ nothing }}").unwrap();
        let templates = Templates::with_folder(folder.path()).unwrap();
        let message =
            templates.render("prose-quote.html", &BTreeMap::from([("text", "")])).unwrap_err().to_string();
        assert!(message.contains("prose-quote.html:2") && message.contains("nothing"), "{message}");
    }

    #[test]
    fn a_folder_that_is_not_there_is_a_failure_with_its_path() {
        let message = Templates::with_folder(Path::new("no/such/folder")).unwrap_err().to_string();
        assert!(message.contains("no/such/folder"), "{message}");
    }
}
