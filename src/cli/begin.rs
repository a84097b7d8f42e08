//! `begin`: writes a first study.

use super::console::Console;
use super::status::Status;
use crate::record::write;
use std::io::ErrorKind;
use std::path::Path;

/// A study that can be issued as it is, with a comment on every part.
const FIRST_STUDY: &str = include_str!("begin.md");

/// The command `begin`. It overwrites nothing.
pub(super) fn begin(file: &Path, console: &Console) -> Status {
    let shown = file.display();
    if !file.extension().is_some_and(|extension| extension.eq_ignore_ascii_case("md")) {
        console.fault(&format!("{shown} does not end in .md, as the file of a study should"));
        return Status::Wrong;
    }
    match write::new_file(file, FIRST_STUDY.as_bytes()) {
        Ok(()) => {
            console.print(&format!("wrote {shown}; next: halfstep issue {shown}\n"));
            Status::Well
        }
        Err(failure) if failure.cause.kind() == ErrorKind::AlreadyExists => {
            console.fault(&format!("{shown} is there already, and is left as it is"));
            Status::Wrong
        }
        Err(failure) => {
            console.failure(&failure);
            Status::Failed
        }
    }
}
