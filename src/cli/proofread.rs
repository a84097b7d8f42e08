//! `proofread`: checks studies as far as that needs no integration.

use super::arguments::Proofread;
use super::console::Console;
use super::fault_text::{IssueError, MOST_FAULTS, tell, tell_troubles};
use super::find::{Found, find};
use super::guard::guard;
use super::status::Status;
use super::{source, stages};
use crate::fault::show;

/// The command `proofread`.
pub(super) fn proofread(asked: &Proofread, console: &Console) -> Status {
    let studies = match find(&asked.paths) {
        Ok(studies) => studies,
        Err(troubles) => return tell_troubles(&troubles, console),
    };
    studies.iter().fold(Status::Well, |status, found| status.worst(one(found, console)))
}

fn one(found: &Found, console: &Console) -> Status {
    let checked = guard(|| stages::check(found, source::read(found)?));
    match checked.unwrap_or_else(|defect| Err(IssueError::Defect(defect))) {
        Ok((faults, sources)) => {
            console.error_text(&show(&faults, &sources, MOST_FAULTS, console.colour));
            console.print(&format!("{}: no errors\n", found.shown));
            Status::Well
        }
        Err(error) => tell(&error, &found.shown, console),
    }
}
