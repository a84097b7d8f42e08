//! The register: the page that lists all issued studies.

use serde::Serialize;

use super::templates::{TemplateError, Templates};

/// An issued study.
#[derive(Clone, Debug, Serialize)]
pub struct RegisterEntry {
    /// Folder of the report below the register: `deep/surge`.
    pub name: String,
    /// The title.
    pub title: String,
    /// `number`
    pub number: String,
    /// `revision`
    pub revision: String,
    /// `date`
    pub date: String,
    /// Criteria met.
    pub met: usize,
    /// Criteria not met.
    pub not_met: usize,
    /// Criteria undecided.
    pub undecided: usize,
    /// The weakest grade of its quantities, in a word; empty where there is none.
    pub weakest: String,
}

#[derive(Serialize)]
struct RegisterView {
    folders: Vec<FolderView>,
    count: usize,
}

#[derive(Serialize)]
struct FolderView {
    name: String,
    entries: Vec<LineView>,
}

#[derive(Serialize)]
struct LineView {
    link: String,
    #[serde(flatten)]
    entry: RegisterEntry,
}

/// Writes the register as HTML, grouped by folder; `entries` come in the order of their names.
///
/// # Errors
/// [`TemplateError`] where the template cannot be filled.
pub fn compose_register(entries: &[RegisterEntry], templates: &Templates) -> Result<String, TemplateError> {
    let mut folders: Vec<FolderView> = Vec::new();
    for entry in entries {
        let folder = entry.name.rsplit_once('/').map_or("", |(folder, _)| folder);
        let line = LineView { link: format!("{}/report.html", percent(&entry.name)), entry: entry.clone() };
        match folders.iter_mut().find(|known| known.name == folder) {
            Some(known) => known.entries.push(line),
            None => folders.push(FolderView { name: folder.to_owned(), entries: vec![line] }),
        }
    }
    templates.render("register.html", &RegisterView { folders, count: entries.len() })
}

/// A path as part of an address: all but unreserved characters and `/` percent-encoded (RFC 3986, 2.1).
fn percent(path: &str) -> String {
    let mut text = String::new();
    for byte in path.bytes() {
        if byte.is_ascii_alphanumeric() || b"-._~/".contains(&byte) {
            text.push(char::from(byte));
        } else {
            text.push('%');
            text.extend(
                [byte >> 4, byte & 15].map(|half| char::from(b"0123456789ABCDEF"[usize::from(half)])),
            );
        }
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn paths_become_addresses() {
        assert_eq!(percent("deep/pump & valve"), "deep/pump%20%26%20valve");
    }
}
