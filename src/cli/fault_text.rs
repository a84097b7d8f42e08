//! Why a study could not be issued or proofread.

use super::console::Console;
use super::find::Trouble;
use super::status::Status;
use crate::fault::{Failure, Faults, Sources, show};
use crate::record::RecordError;
use crate::report::ReportError;

/// Why a study could not be issued.
#[derive(Debug)]
pub enum IssueError {
    /// The study is wrong: its faults, with the files that they lie in.
    Study(Box<(Faults, Sources)>),
    /// The file cannot be taken for a study at all; says why.
    Unreadable(String),
    /// A template of the user's is wrong; says which, where and how.
    Template(String),
    /// The machine failed.
    Machine(Failure),
    /// A defect of ours; says what is known of it.
    Defect(String),
}

impl From<Failure> for IssueError {
    fn from(failure: Failure) -> Self {
        IssueError::Machine(failure)
    }
}

impl From<ReportError> for IssueError {
    fn from(error: ReportError) -> Self {
        match error {
            ReportError::Template(_) | ReportError::UnknownTemplate { .. } => {
                IssueError::Template(error.to_string())
            }
            ReportError::Missing(_) => IssueError::Defect(error.to_string()),
            ReportError::Failure(failure) => IssueError::Machine(failure),
        }
    }
}

impl From<RecordError> for IssueError {
    fn from(error: RecordError) -> Self {
        IssueError::Defect(error.to_string())
    }
}

/// How many faults of a study are shown.
pub(super) const MOST_FAULTS: usize = 50;

/// Prints why the study `shown` could not be issued, and gives the status.
pub(super) fn tell(error: &IssueError, shown: &str, console: &Console) -> Status {
    match error {
        IssueError::Study(wrong) => {
            let (faults, sources) = wrong.as_ref();
            console.error_text(&show(faults, sources, MOST_FAULTS, console.colour));
            let errors = faults.errors();
            console.fault(&format!("{shown}: {errors} {}", if errors == 1 { "error" } else { "errors" }));
            Status::Wrong
        }
        IssueError::Unreadable(why) | IssueError::Template(why) => {
            console.fault(&format!("{shown}: {why}"));
            Status::Wrong
        }
        IssueError::Machine(failure) => {
            console.fault(&format!("{shown}: {failure}"));
            Status::Failed
        }
        IssueError::Defect(what) => {
            console.fault(&format!(
                "{shown}: halfstep has a defect: {what}\n  \
                 The study may be right. Its last good report is untouched. Please report this with the study."
            ));
            Status::Failed
        }
    }
}

/// Prints what is wrong with the arguments, and gives the status.
pub(super) fn tell_troubles(troubles: &[Trouble], console: &Console) -> Status {
    for trouble in troubles {
        console.fault(&trouble.message);
    }
    troubles.iter().fold(Status::Well, |status, trouble| status.worst(trouble.status))
}
