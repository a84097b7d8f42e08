//! Title block, verdict line and contents.

use serde::Serialize;

/// The title block.
#[derive(Clone, Debug, Serialize)]
pub struct Sheet {
    /// The title.
    pub title: String,
    /// The cells in their order: those that every sheet has, empty where the study says nothing.
    pub cells: Vec<SheetCell>,
    /// The caution of the study.
    pub caution: Option<String>,
}

/// A cell of the title block.
#[derive(Clone, Debug, Serialize)]
pub struct SheetCell {
    /// `number`, `revision`, `date`, `client`, `prepared`, `checked`, `approved`.
    pub key: &'static str,
    /// The label: `Prepared by`.
    pub label: &'static str,
    /// What the study says.
    pub text: Option<String>,
}

/// The verdict line.
#[derive(Clone, Debug, Serialize)]
pub struct VerdictLine {
    /// Number of criteria.
    pub criteria: usize,
    /// `met`, `not met`, `undecided`, in this order.
    pub counts: Vec<VerdictCount>,
    /// Whether each criterion is met or comes out as the study expects.
    pub in_order: bool,
    /// The weakest grade of all quantities.
    pub weakest: Option<GradeView>,
    /// Number of quantities.
    pub quantities: usize,
    /// The first quantities without a bound, and why.
    pub unbounded: Vec<Unbounded>,
    /// How many more there are.
    pub unbounded_more: usize,
}

/// How many criteria came out so.
#[derive(Clone, Debug, Serialize)]
pub struct VerdictCount {
    /// `met`, `not met`, `undecided`.
    pub word: &'static str,
    /// The same in one word, for a class: `met`, `not-met`, `undecided`.
    pub class: &'static str,
    /// How many.
    pub count: usize,
    /// How many of them the study expects so.
    pub expected: usize,
}

/// A quantity that has no bound.
#[derive(Clone, Debug, Serialize)]
pub struct Unbounded {
    /// `reject.z_end`
    pub name: String,
    /// The id of its ledger line.
    pub line: String,
    /// Whether it has a value at all.
    pub has_value: bool,
    /// Why there is no bound.
    pub why: String,
}

/// A grade.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct GradeView {
    /// `corroborated`
    pub word: &'static str,
    /// Its plain meaning, a clause.
    pub meaning: &'static str,
}

/// An entry of the contents.
#[derive(Clone, Debug, Serialize)]
pub struct ContentsEntry {
    /// The id of the heading.
    pub id: String,
    /// Its text.
    pub text: String,
}
