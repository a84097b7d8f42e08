//! Quotes and blocks where they stand in the prose.

use super::{GradeView, InputRow};
use serde::Serialize;

/// A place that quotes a quantity.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct Backlink {
    /// The id of the place.
    pub id: String,
    /// What it is: `text`, `Table 1`, `criterion freeboard`.
    pub place: String,
}

/// A quantity where it is quoted: in prose, in a table, in the criteria.
#[derive(Clone, Debug, Serialize)]
pub struct QuoteView {
    /// The id of this place.
    pub id: String,
    /// The id of the ledger line.
    pub line: String,
    /// `reject.z_max`
    pub name: String,
    /// The text to show; empty where there is no value.
    pub text: String,
    /// Whether there is a value.
    pub has_value: bool,
    /// Whether there is a bound.
    pub has_bound: bool,
    /// Whether the place may be a link: not inside another link.
    pub linked: bool,
    /// The grade.
    pub grade: GradeView,
    /// Why this grade.
    pub why: String,
}

/// A model block, for `block-model.html`.
#[derive(Clone, Debug, Serialize)]
pub struct ModelView {
    /// The id of the block.
    pub id: String,
    /// Its name.
    pub name: String,
    /// `about`
    pub about: Option<String>,
    /// The equations by kind, empty kinds left out.
    pub groups: Vec<EquationGroup>,
    /// The parameters.
    pub parameters: Vec<InputRow>,
}

/// The equations of one kind.
#[derive(Clone, Debug, Serialize)]
pub struct EquationGroup {
    /// `rate`, `start`, `derived`, `invariant`, `exact`.
    pub kind: &'static str,
    /// Its name for the reader.
    pub title: &'static str,
    /// The equations.
    pub rows: Vec<EquationRow>,
}

/// An equation.
#[derive(Clone, Debug, Serialize)]
pub struct EquationRow {
    /// The symbol on the left side.
    pub name: String,
    /// The right side as written.
    pub text: String,
    /// The unit of the symbol.
    pub unit: Option<String>,
    /// `about`
    pub about: Option<String>,
}

/// A run block, for `block-run.html`.
#[derive(Clone, Debug, Serialize)]
pub struct RunView {
    /// The id of the block.
    pub id: String,
    /// Its name.
    pub name: String,
    /// The id of its part of the ledger.
    pub ledger: String,
    /// What it integrates with what.
    pub facts: RunFacts,
    /// The weakest grade of its quantities.
    pub weakest: Option<GradeView>,
}

/// What a run is.
#[derive(Clone, Debug, Serialize)]
pub struct RunFacts {
    /// The name of its model.
    pub model: String,
    /// The id of the model's block, where the body shows it.
    pub model_id: Option<String>,
    /// The scheme.
    pub scheme: SchemeView,
    /// `fixed`, `adaptive` or `aimed`.
    pub control: &'static str,
    /// The step as text, or the tolerance.
    pub control_value: String,
    /// The aims as written.
    pub aims: Vec<String>,
    /// How many steps were tried for the aims.
    pub trials: Option<String>,
    /// Where time starts, with its unit.
    pub from: String,
    /// Where time ends, with its unit.
    pub until: String,
    /// Overrides: name and value as written.
    pub overrides: Vec<NamedText>,
    /// Steps of the run itself.
    pub steps: Option<String>,
}

/// A scheme.
#[derive(Clone, Debug, Serialize)]
pub struct SchemeView {
    /// `dormand-prince`
    pub key: &'static str,
    /// `Dormand-Prince 5(4)`
    pub name: &'static str,
    /// Author, year, where to find it.
    pub source: &'static str,
    /// Its order.
    pub order: u32,
    /// The order of its embedded weights.
    pub embedded_order: Option<u32>,
    /// Number of stages.
    pub stages: usize,
}

/// A name and a text.
#[derive(Clone, Debug, Serialize)]
pub struct NamedText {
    /// The name.
    pub name: String,
    /// The text.
    pub text: String,
}

/// A chart, for `block-chart.html` and the annex.
#[derive(Clone, Debug, Serialize)]
pub struct ChartView {
    /// The id of the figure.
    pub id: String,
    /// `Figure 1`
    pub label: String,
    /// The SVG element.
    pub svg: String,
    /// What it shows.
    pub caption: String,
    /// What the reader must know of it.
    pub note: Option<String>,
}

/// A table, for `block-table.html`.
#[derive(Clone, Debug, Serialize)]
pub struct TableView {
    /// The id of the table.
    pub id: String,
    /// `Table 1`
    pub label: String,
    /// What it lists.
    pub caption: String,
    /// What the reader must know of it.
    pub note: Option<String>,
    /// The heads of the columns.
    pub columns: Vec<ColumnView>,
    /// The rows.
    pub rows: Vec<Vec<CellView>>,
}

/// The head of a column.
#[derive(Clone, Debug, Serialize)]
pub struct ColumnView {
    /// The words.
    pub name: String,
    /// The unit.
    pub unit: Option<String>,
    /// Whether its cells are numbers.
    pub number: bool,
}

/// A cell.
#[derive(Clone, Debug, Serialize)]
pub struct CellView {
    /// The text.
    pub text: String,
    /// Whether it is a number.
    pub number: bool,
    /// Its id and the id of the ledger line that it leads to.
    pub link: Option<Backlink>,
    /// Why the number has no bound, where it has none.
    pub unbounded: Option<String>,
}

/// A criteria block, for `block-criteria.html`.
#[derive(Clone, Debug, Serialize)]
pub struct CriteriaView {
    /// The id of the block.
    pub id: String,
    /// Its name, where it has one.
    pub name: Option<String>,
    /// The criteria.
    pub rows: Vec<CriterionRow>,
}

/// A criterion.
#[derive(Clone, Debug, Serialize)]
pub struct CriterionRow {
    /// Its name.
    pub name: String,
    /// Its text: `reject.z_max <= 12.5 m`.
    pub text: String,
    /// The quantity.
    pub quantity: QuoteView,
    /// `≤`
    pub relation: &'static str,
    /// The limit as written.
    pub limit: String,
    /// The distance of the value from the limit, positive on the right side.
    pub margin: Option<String>,
    /// `met`, `undecided`, `not met`.
    pub verdict: &'static str,
    /// The same in one word.
    pub class: &'static str,
    /// The verdict that the study expects, and why.
    pub expected: Option<NamedText>,
    /// Whether it is met, or as expected.
    pub in_order: bool,
}
