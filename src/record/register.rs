//! What the register lists: the issued studies below an output folder, read from their records.

use super::json::FORMAT;
use crate::fault::Failure;
use serde::Deserialize;
use std::path::Path;

/// An issued study.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Entry {
    /// The report folder below the output folder, with forward slashes: `deep/surge`.
    pub name: String,
    /// The title of the study.
    pub title: String,
    /// `number`
    pub number: Option<String>,
    /// `revision`
    pub revision: Option<String>,
    /// `date`
    pub date: Option<String>,
    /// The verdicts of its criteria, in words, each with whether the study expects it.
    pub verdicts: Vec<(String, bool)>,
    /// The grades of its quantities, in words.
    pub grades: Vec<String>,
}

/// The issued studies below `out`, by the path of their folder. A folder whose record is missing or of
/// another format is left out.
///
/// # Errors
/// [`Failure`] where a folder cannot be read.
pub fn collect(out: &Path) -> Result<Vec<Entry>, Failure> {
    let mut entries = Vec::new();
    let visible = |entry: &walkdir::DirEntry| {
        entry.depth() == 0 || !entry.file_name().to_string_lossy().starts_with('.')
    };
    for found in walkdir::WalkDir::new(out).sort_by_file_name().into_iter().filter_entry(visible) {
        let found = found.map_err(|cause| {
            Failure::new(format!("cannot list the reports in {}", out.display()), cause.into())
        })?;
        if found.file_name() != "record.json" || !found.file_type().is_file() {
            continue;
        }
        let Some(folder) = found.path().parent().and_then(|folder| folder.strip_prefix(out).ok()) else {
            continue;
        };
        let bytes = std::fs::read(found.path())
            .map_err(|cause| Failure::new(format!("cannot read {}", found.path().display()), cause))?;
        entries.extend(entry(&folder.to_string_lossy().replace('\\', "/"), &bytes));
    }
    entries.sort_by(|a, b| a.name.cmp(&b.name));
    Ok(entries)
}

fn entry(name: &str, bytes: &[u8]) -> Option<Entry> {
    #[derive(Deserialize)]
    struct Record {
        format: String,
        study: Study,
        criteria: Vec<Criterion>,
        quantities: Vec<Quantity>,
    }
    #[derive(Deserialize)]
    struct Study {
        title: String,
        number: Option<String>,
        revision: Option<String>,
        date: Option<String>,
    }
    #[derive(Deserialize)]
    struct Criterion {
        verdict: String,
        #[serde(default)]
        expect: Option<Expect>,
    }
    #[derive(Deserialize)]
    struct Expect {
        verdict: String,
    }
    #[derive(Deserialize)]
    struct Quantity {
        grade: String,
    }
    let record: Record = serde_json::from_slice(bytes).ok()?;
    (record.format == FORMAT && !name.is_empty()).then(|| Entry {
        name: name.to_owned(),
        title: record.study.title,
        number: record.study.number,
        revision: record.study.revision,
        date: record.study.date,
        verdicts: record
            .criteria
            .into_iter()
            .map(|criterion| {
                let expected = criterion.expect.is_some_and(|expect| expect.verdict == criterion.verdict);
                (criterion.verdict, expected)
            })
            .collect(),
        grades: record.quantities.into_iter().map(|quantity| quantity.grade).collect(),
    })
}

#[cfg(test)]
mod tests {
    use super::super::write::{NewFile, folder};
    use super::*;

    #[test]
    fn records_below_the_folder_are_listed_by_name() {
        let out = tempfile::tempdir().unwrap();
        let record = |title: &str, format: &str| {
            let text = serde_json::json!({
                "format": format,
                "study": {"title": title, "number": "HS-1", "revision": null, "date": null},
                "criteria": [{"verdict": "met"}], "quantities": [{"grade": "converged"}],
            });
            NewFile { path: "record.json".to_owned(), bytes: text.to_string().into_bytes() }
        };
        folder(&out.path().join("b"), &[record("second", FORMAT)]).unwrap();
        folder(&out.path().join("a/deep"), &[record("first", FORMAT)]).unwrap();
        folder(&out.path().join("c"), &[record("later", "another/9")]).unwrap();
        folder(&out.path().join(".d.halfstep-x"), &[record("half", FORMAT)]).unwrap();
        let entries = collect(out.path()).unwrap();
        let names: Vec<_> = entries.iter().map(|entry| (entry.name.as_str(), entry.title.as_str())).collect();
        assert_eq!(names, [("a/deep", "first"), ("b", "second")]);
        assert_eq!(entries[0].verdicts, [("met".to_owned(), false)]);
        assert_eq!(entries[0].grades, ["converged"]);
    }
}
