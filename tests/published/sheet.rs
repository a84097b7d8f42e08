//! The sheets of printed values: one TOML file a source, one entry a number.

use serde::Deserialize;
use std::path::{Path, PathBuf};

/// Where a printed value may come from.
const KINDS: [&str; 6] = [
    "published",
    "closed form",
    "computed twice",
    "formula at 60 digits",
    "common practice, no source",
    "from memory",
];

/// A file of printed values.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(crate) struct Sheet {
    /// A bound may be at most this many times the true error.
    pub(crate) loose: Option<f64>,
    /// For the arithmetic of the schemes: the largest relative distance. Bounds are then not looked at.
    pub(crate) relative: Option<f64>,
    /// The entries.
    #[serde(rename = "check")]
    pub(crate) checks: Vec<Check>,
}

/// A printed value and where we compute it.
#[derive(Debug, Deserialize)]
#[serde(deny_unknown_fields)]
pub(crate) struct Check {
    /// The study beside this file, without `.md`.
    pub(crate) study: String,
    /// `RUN.QUANTITY`
    pub(crate) quantity: String,
    /// The value as printed.
    pub(crate) printed: String,
    /// Its significant digits, counted by whoever copied it.
    pub(crate) digits: usize,
    /// The unit of the printed value, where it has one.
    pub(crate) unit: Option<String>,
    /// Author, year, table, section or formula.
    pub(crate) source: String,
    /// One of [`KINDS`].
    pub(crate) kind: String,
    /// Overrides [`Sheet::loose`].
    pub(crate) loose: Option<f64>,
    /// The reason for the override.
    pub(crate) because: Option<String>,
    /// The size that [`Sheet::relative`] refers to, where the value itself is much smaller than the state was.
    pub(crate) size: Option<f64>,
}

/// This folder.
pub(crate) fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/published")
}

/// The files of this folder with that extension, without it, in order of their names.
///
/// # Errors
/// What the disk said.
pub(crate) fn names(extension: &str) -> Result<Vec<String>, String> {
    let mut names = Vec::new();
    for entry in std::fs::read_dir(folder()).map_err(|error| error.to_string())? {
        let path = entry.map_err(|error| error.to_string())?.path();
        if path.extension().is_some_and(|found| found == extension) {
            names.extend(path.file_stem().map(|stem| stem.to_string_lossy().into_owned()));
        }
    }
    names.sort();
    Ok(names)
}

/// All sheets with their names.
///
/// # Errors
/// The file and what is wrong with it.
pub(crate) fn read() -> Result<Vec<(String, Sheet)>, String> {
    let mut sheets = Vec::new();
    for name in names("toml")? {
        let text = std::fs::read_to_string(folder().join(format!("{name}.toml")))
            .map_err(|error| format!("{name}: {error}"))?;
        let sheet: Sheet = toml::from_str(&text).map_err(|error| format!("{name}: {error}"))?;
        sheets.push((name, sheet));
    }
    Ok(sheets)
}

/// What is wrong with an entry itself, whatever we compute.
pub(crate) fn flaws(sheet: &Sheet, check: &Check) -> Vec<String> {
    let mut flaws = Vec::new();
    if !KINDS.contains(&check.kind.as_str()) {
        flaws.push(format!("`{}` is no kind of source", check.kind));
    }
    if check.source.trim().is_empty() {
        flaws.push("it names no source".to_owned());
    }
    if check.loose.is_some() != check.because.is_some() {
        flaws.push("`loose` and `because` go together".to_owned());
    }
    if sheet.loose.is_some() == sheet.relative.is_some() {
        flaws.push("its sheet gives one of `loose` and `relative`".to_owned());
    }
    match crate::decimal::read(&check.printed) {
        Ok(printed) if printed.digits != check.digits => {
            flaws.push(format!("{} digits are printed, not {}", printed.digits, check.digits));
        }
        // Fewer digits than twelve would make half a unit of the last one larger than any error of ours.
        Ok(printed) if sheet.relative.is_none() && printed.digits < 12 => {
            flaws.push("it has too few digits".to_owned());
        }
        Ok(_) => (),
        Err(wrong) => flaws.push(wrong),
    }
    flaws
}
