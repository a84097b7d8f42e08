//! The other annexes.

use super::{ChartView, GradeView};
use serde::Serialize;

/// An input: a parameter or a start value.
#[derive(Clone, Debug, Serialize)]
pub struct InputRow {
    /// Its name.
    pub name: String,
    /// Its value as written, or the expression that it comes from.
    pub value: String,
    /// Whether the value is an expression of parameters.
    pub is_expression: bool,
    /// Its unit.
    pub unit: Option<String>,
    /// `plusminus`: half width of a uniform distribution.
    pub plusminus: Option<String>,
    /// `sd`: standard uncertainty.
    pub sd: Option<String>,
    /// `scale`: a typical size.
    pub scale: Option<String>,
    /// `source`
    pub source: Option<String>,
    /// `about`
    pub about: Option<String>,
    /// The line of the study where it stands.
    pub at: Option<LineLink>,
}

/// A line of the study's text.
#[derive(Clone, Debug, Serialize)]
pub struct LineLink {
    /// Its number, from 1.
    pub number: usize,
    /// Its id.
    pub id: String,
}

/// A run in the annex of convergence and stability.
#[derive(Clone, Debug, Serialize)]
pub struct RunConvergence {
    /// The name of the run.
    pub name: String,
    /// The id of its part of the ledger.
    pub ledger: String,
    /// The observed orders of its quantities.
    pub orders: Vec<OrderRow>,
    /// The charts: error against step, then the region of stability.
    pub charts: Vec<ChartView>,
}

/// The observed order of a quantity.
#[derive(Clone, Debug, Serialize)]
pub struct OrderRow {
    /// `reject.z_max`
    pub name: String,
    /// The id of its ledger line.
    pub line: String,
    /// The observed order.
    pub observed: Option<String>,
    /// The formal order.
    pub formal: u32,
    /// The grade.
    pub grade: GradeView,
}

/// The annex of inputs.
#[derive(Clone, Debug, Serialize)]
pub struct Inputs {
    /// Every model.
    pub models: Vec<ModelInputs>,
    /// What single runs override.
    pub overrides: Vec<OverrideRow>,
    /// Number of inputs.
    pub count: usize,
    /// How many of them state no source.
    pub without_source: usize,
}

/// The inputs of a model.
#[derive(Clone, Debug, Serialize)]
pub struct ModelInputs {
    /// The name of the model.
    pub name: String,
    /// The parameters.
    pub parameters: Vec<InputRow>,
    /// The start values.
    pub starts: Vec<InputRow>,
}

/// An override.
#[derive(Clone, Debug, Serialize)]
pub struct OverrideRow {
    /// The run.
    pub run: String,
    /// The id of its part of the ledger.
    pub ledger: String,
    /// The parameter or state.
    pub name: String,
    /// The value in the model, as written.
    pub model_value: Option<String>,
    /// The value in the run, as written.
    pub value: String,
}

/// The study's own text.
#[derive(Clone, Debug, Serialize)]
pub struct StudyText {
    /// The name of the file.
    pub name: String,
    /// Its lines.
    pub lines: Vec<TextLine>,
}

/// A line of the study's text.
#[derive(Clone, Debug, Serialize)]
pub struct TextLine {
    /// Its number, from 1.
    pub number: usize,
    /// Its id.
    pub id: String,
    /// Its text without the end of the line.
    pub text: String,
}

/// The digest of a file.
#[derive(Clone, Debug, Serialize)]
pub struct Digest {
    /// The path.
    pub path: String,
    /// SHA-256 in hexadecimal.
    pub sha256: String,
}
