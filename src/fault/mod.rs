//! Faults: what is wrong with a study, where, and what to do about it.
//!
//! A stage takes `&mut Faults` and returns what it could make, so that the later stages report too:
//! all faults of a study come at once. A [`Fault`] is about the study; a machine that fails (disk,
//! memory) is a [`Failure`].

mod collect;
mod place;
mod show;

pub use collect::{Fault, Faults, Severity, clip};
pub use place::{FileId, SourceFile, Sources, Span};
pub use show::{nearest, show};

/// The machine failed: a disk, a permission, memory. Carries the path and the cause.
#[derive(Debug)]
pub struct Failure {
    /// What was being done, to which path: `cannot write out/surge/report.html`.
    pub doing: String,
    /// What the system said.
    pub cause: std::io::Error,
}

impl Failure {
    /// A failure while `doing` something.
    pub fn new(doing: impl Into<String>, cause: std::io::Error) -> Self {
        Failure { doing: doing.into(), cause }
    }
}

impl std::fmt::Display for Failure {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{}: {}", self.doing, self.cause)
    }
}

impl std::error::Error for Failure {
    fn source(&self) -> Option<&(dyn std::error::Error + 'static)> {
        Some(&self.cause)
    }
}
