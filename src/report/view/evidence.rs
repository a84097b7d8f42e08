//! The ledger.

use super::{Backlink, GradeView, LineLink, RunFacts};
use serde::Serialize;

/// The ledger.
#[derive(Clone, Debug, Serialize)]
pub struct Ledger {
    /// Every run.
    pub runs: Vec<RunLedger>,
    /// The grades that occur, from the strongest down.
    pub grades: Vec<GradeView>,
    /// How local errors are measured against the tolerance, in words.
    pub norm: String,
}

/// A run in the ledger.
#[derive(Clone, Debug, Serialize)]
pub struct RunLedger {
    /// The id of this part.
    pub id: String,
    /// The name of the run.
    pub name: String,
    /// What the run is.
    pub facts: RunFacts,
    /// The typical scale of each state and its absolute tolerance, for an adaptive run.
    pub scales: Vec<ScaleRow>,
    /// The meshes.
    pub meshes: Vec<MeshRow>,
    /// The cost of the companion.
    pub companion: Option<CompanionView>,
    /// Evaluations of all the rates, meshes and companion together.
    pub evaluations: String,
    /// What limits the grades of the whole run.
    pub caps: Vec<String>,
    /// What a reader should know beside that.
    pub remarks: Vec<String>,
    /// The drift of the invariants.
    pub invariants: Vec<DriftRow>,
    /// The largest true errors.
    pub exact: Vec<ExactRow>,
    /// The quantities.
    pub lines: Vec<LedgerLine>,
}

/// A state's part in the error norm.
#[derive(Clone, Debug, Serialize)]
pub struct ScaleRow {
    /// The state.
    pub state: String,
    /// Its typical scale, with its unit.
    pub scale: String,
    /// Its absolute tolerance, with its unit.
    pub tolerance: String,
}

/// A mesh.
#[derive(Clone, Debug, Serialize)]
pub struct MeshRow {
    /// `as named`, `halved`, `halved twice`.
    pub label: &'static str,
    /// Steps accepted.
    pub accepted: String,
    /// Smallest step.
    pub smallest: String,
    /// Largest step.
    pub largest: String,
    /// Rejected for the local error.
    pub local_error: String,
    /// Rejected because a stage was not finite.
    pub not_finite: String,
    /// Cut at a kink or jump.
    pub switch: String,
    /// Kinks and jumps made mesh points.
    pub switches: String,
    /// Evaluations of all the rates.
    pub evaluations: String,
}

/// The cost of the companion.
#[derive(Clone, Debug, Serialize)]
pub struct CompanionView {
    /// Its own steps.
    pub steps: String,
    /// Evaluations of all the rates.
    pub evaluations: String,
}

/// The drift of an invariant.
#[derive(Clone, Debug, Serialize)]
pub struct DriftRow {
    /// Its name.
    pub name: String,
    /// Its expression.
    pub expression: String,
    /// Its value at the start.
    pub start: String,
    /// The largest distance from it.
    pub largest: String,
    /// The distance at the end.
    pub at_end: String,
}

/// The true error of a state.
#[derive(Clone, Debug, Serialize)]
pub struct ExactRow {
    /// The state.
    pub state: String,
    /// The largest error, with its unit.
    pub largest: String,
    /// The time of it, with its unit.
    pub time: String,
}

/// A quantity in the ledger, for `ledger-line.html`.
#[derive(Clone, Debug, Serialize)]
pub struct LedgerLine {
    /// The id of the line.
    pub id: String,
    /// `reject.z_max`
    pub name: String,
    /// The text that defines it.
    pub text: String,
    /// `about`
    pub about: Option<String>,
    /// Value, bound and unit; empty where there is no value.
    pub shown: String,
    /// Whether there is a value.
    pub has_value: bool,
    /// The bound with its unit, to the digits of the report.
    pub bound: Option<String>,
    /// The grade.
    pub grade: GradeView,
    /// Why this grade.
    pub why: String,
    /// Where it stands in the study.
    pub at: Option<LineLink>,
    /// The time at which the value is taken, with its unit.
    pub time: Option<String>,
    /// The value on each mesh, every digit.
    pub values: Vec<MeshValue>,
    /// The order observed over the three meshes.
    pub observed_order: Option<String>,
    /// The formal order of the scheme.
    pub formal_order: u32,
    /// The signed estimate by halving, with its unit.
    pub halving: Option<String>,
    /// The signed estimate by the companion, with its unit.
    pub companion: Option<String>,
    /// What the bound is made of, where there is one.
    pub parts: Option<Parts>,
    /// The true error, with its unit.
    pub true_error: Option<String>,
    /// Whether the true error is within the bound; `None` where one of them is not known.
    pub holds: Option<bool>,
    /// The places that quote it.
    pub cited: Vec<Backlink>,
}

/// The value on a mesh.
#[derive(Clone, Debug, Serialize)]
pub struct MeshValue {
    /// `as named`, `halved`, `halved twice`.
    pub label: &'static str,
    /// The value, every digit; `None` where it does not occur.
    pub value: Option<String>,
}

/// What a bound is made of; each with its unit.
#[derive(Clone, Debug, Serialize)]
pub struct Parts {
    /// The factor by which the larger estimate was multiplied.
    pub safety: String,
    /// Truncation, safety included.
    pub truncation: String,
    /// Interpolation inside a step.
    pub interpolation: String,
    /// Rounding.
    pub rounding: String,
}
