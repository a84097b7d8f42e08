//! The register: the page that lists all issued studies.

use super::summary::{class, grade};
use super::view::{RegisterGroup, RegisterRow, RegisterView, VerdictCount};
use super::{ReportError, Templates};
use crate::bound::Grade;
use crate::study::block::criteria::Verdict;
use std::collections::BTreeMap;

/// An issued study.
#[derive(Clone, Debug, PartialEq)]
pub struct RegisterEntry {
    /// The folder of its report inside the folder of all reports, with forward slashes; empty for the top one.
    pub folder: String,
    /// Its number.
    pub number: Option<String>,
    /// Its title.
    pub title: String,
    /// Its revision.
    pub revision: Option<String>,
    /// Its date.
    pub date: Option<String>,
    /// How many criteria came out so, and how many of them as the study expects; a verdict that did not come
    /// may be left out.
    pub verdicts: Vec<(Verdict, usize, usize)>,
    /// The weakest grade of its quantities.
    pub weakest: Option<Grade>,
    /// The address of its report relative to the register: `surge/report.html`.
    pub link: String,
}

/// The register as one HTML page: by folder, then by number and title.
///
/// # Errors
/// [`ReportError::Template`] where a template of the user's asks for what is not there.
pub fn compose_register(entries: &[RegisterEntry], templates: &Templates) -> Result<String, ReportError> {
    let mut groups: BTreeMap<&str, Vec<&RegisterEntry>> = BTreeMap::new();
    for entry in entries {
        groups.entry(entry.folder.as_str()).or_default().push(entry);
    }
    let groups = groups.into_iter().map(|(folder, mut entries)| {
        entries.sort_by_key(|entry| (&entry.number, &entry.title, &entry.link));
        RegisterGroup { folder: folder.to_owned(), rows: entries.into_iter().map(row).collect() }
    });
    let view = RegisterView { groups: groups.collect(), count: entries.len() };
    templates.render("register.html", &view)
}

fn row(entry: &RegisterEntry) -> RegisterRow {
    let counts: Vec<VerdictCount> = [Verdict::Met, Verdict::NotMet, Verdict::Undecided]
        .into_iter()
        .map(|verdict| {
            let of = entry.verdicts.iter().filter(|(came, ..)| *came == verdict);
            VerdictCount {
                word: verdict.words(),
                class: class(verdict),
                count: of.clone().map(|(_, count, _)| count).sum(),
                expected: of.map(|(.., expected)| expected).sum(),
            }
        })
        .collect();
    RegisterRow {
        number: entry.number.clone(),
        title: entry.title.clone(),
        revision: entry.revision.clone(),
        date: entry.date.clone(),
        criteria: counts.iter().map(|count| count.count).sum(),
        counts,
        weakest: entry.weakest.map(grade),
        link: address(&entry.link),
    }
}

/// A relative address with everything but plain letters escaped: a name with `:` is no scheme.
fn address(path: &str) -> String {
    let plain = |byte: u8| byte.is_ascii_alphanumeric() || matches!(byte, b'/' | b'-' | b'_' | b'.' | b'~');
    let escaped = |byte: u8| if plain(byte) { char::from(byte).to_string() } else { format!("%{byte:02X}") };
    let text: String = path.bytes().map(escaped).collect();
    // Two slashes at the start would name another machine.
    text.trim_start_matches('/').to_owned()
}
