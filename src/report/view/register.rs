//! The register.

use super::{GradeView, VerdictCount};
use serde::Serialize;

/// The register, for `register.html`.
#[derive(Clone, Debug, Serialize)]
pub struct RegisterView {
    /// The issued studies by folder, in the order of their names.
    pub groups: Vec<RegisterGroup>,
    /// Number of studies.
    pub count: usize,
}

/// The issued studies of one folder.
#[derive(Clone, Debug, Serialize)]
pub struct RegisterGroup {
    /// The folder; empty for the top one.
    pub folder: String,
    /// Its studies.
    pub rows: Vec<RegisterRow>,
}

/// An issued study.
#[derive(Clone, Debug, Serialize)]
pub struct RegisterRow {
    /// Its number.
    pub number: Option<String>,
    /// Its title.
    pub title: String,
    /// Its revision.
    pub revision: Option<String>,
    /// Its date.
    pub date: Option<String>,
    /// `met`, `not met`, `undecided`, in this order.
    pub counts: Vec<VerdictCount>,
    /// Number of criteria.
    pub criteria: usize,
    /// The weakest grade.
    pub weakest: Option<GradeView>,
    /// The address of its report, relative to the register.
    pub link: String,
}
