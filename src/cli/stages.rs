//! Where the command meets the stages: each function here calls one group of them and does nothing else.

use super::fault_text::IssueError;
use super::find::Found;
use crate::bound::{Outcome, Quantity, RunOutcome};
use crate::fault::{Faults, Sources};
use crate::model::Model;
use crate::record::digest::FileDigest;
use crate::record::json::StepControl;
use crate::record::register::Entry;
use crate::scheme::Scheme;
use crate::study::Study;
use std::path::PathBuf;

/// What the stages need to know beside the study.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Settings {
    /// A folder with the user's own templates.
    pub templates: Option<PathBuf>,
    /// The largest number of steps of a run.
    pub limit: u64,
}

/// An executed study: all that its report and its record are made of.
#[derive(Debug)]
pub struct Executed {
    /// The study as read.
    pub study: Study,
    /// The files that it was read from.
    pub sources: Sources,
    /// The checked models.
    pub models: Vec<Model>,
    /// What came of the runs.
    pub outcome: Outcome,
    /// Warnings and notes.
    pub faults: Faults,
    /// The files read beside the study itself.
    pub read: Vec<FileDigest>,
}

/// Reads and checks a study as far as that needs no integration: its warnings and notes, with the files that they
/// lie in.
///
/// # Errors
/// [`IssueError::Study`] with all faults where one is an error.
pub fn check(_found: &Found, _text: String) -> Result<(Faults, Sources), IssueError> {
    Err(not_connected())
}

/// Executes a study: from its text to a bound for every quantity. `progress` is told what is being done.
///
/// # Errors
/// [`IssueError`] of any kind.
pub fn execute(
    _found: &Found,
    _text: String,
    _settings: &Settings,
    _progress: &dyn Fn(&str),
) -> Result<Executed, IssueError> {
    Err(not_connected())
}

/// The report as HTML. `files` are the digests of the study and of all files read and written but the report
/// and the record.
///
/// # Errors
/// [`IssueError`] where a template of the user's is wrong or cannot be read.
pub fn report(
    _executed: &Executed,
    _files: &[FileDigest],
    _settings: &Settings,
) -> Result<String, IssueError> {
    Err(not_connected())
}

/// The text of a quantity as the report shows it: value, bound and unit.
pub fn shown(quantity: &Quantity) -> String {
    let unit = quantity.unit.as_deref().map_or_else(String::new, |unit| format!(" {unit}"));
    match (quantity.value, quantity.bound) {
        (Some(value), Some(bound)) => format!("{value} ± {bound}{unit}"),
        (Some(value), None) => format!("{value}{unit}, no bound"),
        (None, _) => "withheld".to_owned(),
    }
}

/// How an adaptive run chose its steps; `None` for a fixed step.
pub fn step_control(_run: &RunOutcome) -> Option<StepControl> {
    None
}

/// The register as HTML; `None` while there is none.
pub fn register(_entries: &[Entry]) -> Option<String> {
    None
}

/// All schemes in the order in which they are listed.
pub fn schemes() -> &'static [Scheme] {
    &[]
}

/// What is computed of a scheme's stability, a line each.
pub fn stability(_scheme: &Scheme) -> Vec<String> {
    Vec::new()
}

fn not_connected() -> IssueError {
    IssueError::Defect("this build has no stages between the text of a study and its report".to_owned())
}
