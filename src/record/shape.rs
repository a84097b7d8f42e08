//! The shape of `record.json`: one struct an object. The order of the fields does not matter, since canonical
//! JSON sorts them; a missing value is `null`, so that every entry of a list has the same keys.

use super::digest::FileDigest;
use super::number::Number;
use serde::Serialize;

#[derive(Serialize)]
pub(super) struct Record<'a> {
    pub(super) format: &'static str,
    pub(super) tool: Tool,
    pub(super) numerics: u32,
    pub(super) study: Study<'a>,
    pub(super) models: Vec<Model<'a>>,
    pub(super) runs: Vec<Run<'a>>,
    pub(super) quantities: Vec<Quantity<'a>>,
    pub(super) criteria: Vec<Criterion<'a>>,
    pub(super) inputs: Vec<Input<'a>>,
    pub(super) files: Vec<FileDigest>,
}

#[derive(Serialize)]
pub(super) struct Tool {
    pub(super) name: &'static str,
    pub(super) version: &'static str,
}

#[derive(Serialize)]
pub(super) struct Study<'a> {
    pub(super) title: &'a str,
    pub(super) number: Option<&'a str>,
    pub(super) revision: Option<&'a str>,
    pub(super) date: Option<&'a str>,
    pub(super) prepared: Option<&'a str>,
    pub(super) checked: Option<&'a str>,
    pub(super) approved: Option<&'a str>,
    pub(super) client: Option<&'a str>,
    pub(super) caution: Option<&'a str>,
    pub(super) digest: &'a str,
}

#[derive(Serialize)]
pub(super) struct Model<'a> {
    pub(super) name: &'a str,
    pub(super) about: Option<&'a str>,
    pub(super) digest: String,
    pub(super) states: Vec<State<'a>>,
    pub(super) derived: Vec<Named<'a>>,
    pub(super) invariants: Vec<Named<'a>>,
}

#[derive(Serialize)]
pub(super) struct State<'a> {
    pub(super) name: &'a str,
    pub(super) about: Option<&'a str>,
    pub(super) unit: Option<&'a str>,
    pub(super) start: String,
    pub(super) scale: Option<String>,
    pub(super) source: Option<&'a str>,
    pub(super) rate: &'a str,
    pub(super) exact: Option<&'a str>,
}

#[derive(Serialize)]
pub(super) struct Named<'a> {
    pub(super) name: &'a str,
    pub(super) is: &'a str,
    pub(super) unit: Option<&'a str>,
    pub(super) about: Option<&'a str>,
}

#[derive(Serialize)]
pub(super) struct Run<'a> {
    pub(super) name: &'a str,
    pub(super) model: &'a str,
    pub(super) scheme: &'a str,
    pub(super) tableau: String,
    pub(super) order: u32,
    pub(super) embedded_order: Option<u32>,
    pub(super) step: Option<Number>,
    pub(super) tolerance: Option<Number>,
    pub(super) scales: Option<Vec<Scale<'a>>>,
    pub(super) norm: Option<String>,
    pub(super) controller: Option<Vec<Constant>>,
    pub(super) aim: Option<Aim<'a>>,
    pub(super) span: Span<'a>,
    pub(super) overrides: Vec<Override<'a>>,
    pub(super) parameters: Vec<Setting<'a>>,
    pub(super) start: Vec<Setting<'a>>,
    pub(super) meshes: Vec<Mesh>,
    pub(super) companion: Option<Companion>,
    pub(super) cost: Cost,
    pub(super) invariants: Vec<Drift<'a>>,
    pub(super) exact: Vec<ExactError<'a>>,
    pub(super) rows: Option<Rows<'a>>,
    pub(super) caps: &'a [String],
    pub(super) remarks: &'a [String],
}

#[derive(Serialize)]
pub(super) struct Scale<'a> {
    pub(super) state: &'a str,
    pub(super) scale: Number,
}

#[derive(Serialize)]
pub(super) struct Constant {
    pub(super) name: String,
    pub(super) value: f64,
}

#[derive(Serialize)]
pub(super) struct Aim<'a> {
    pub(super) aims: &'a [String],
    pub(super) trials: u32,
}

#[derive(Serialize)]
pub(super) struct Span<'a> {
    pub(super) from: Number,
    pub(super) until: Number,
    pub(super) unit: Option<&'a str>,
}

#[derive(Serialize)]
pub(super) struct Override<'a> {
    pub(super) name: &'a str,
    pub(super) value: &'a str,
}

#[derive(Serialize)]
pub(super) struct Setting<'a> {
    pub(super) name: &'a str,
    #[serde(flatten)]
    pub(super) number: Number,
    pub(super) unit: Option<&'a str>,
}

#[derive(Serialize)]
pub(super) struct Mesh {
    pub(super) steps: u64,
    pub(super) smallest: f64,
    pub(super) largest: f64,
    pub(super) rejected: Rejected,
    pub(super) evaluations: u64,
    pub(super) switches: u64,
}

#[derive(Serialize)]
pub(super) struct Rejected {
    pub(super) local_error: u64,
    pub(super) not_finite: u64,
    pub(super) switch: u64,
}

#[derive(Serialize)]
pub(super) struct Companion {
    pub(super) steps: u64,
    pub(super) evaluations: u64,
}

/// The whole cost of a run: all its meshes and the companion.
#[derive(Serialize)]
pub(super) struct Cost {
    pub(super) steps: u64,
    pub(super) rejected: u64,
    pub(super) evaluations: u64,
}

#[derive(Serialize)]
pub(super) struct Drift<'a> {
    pub(super) name: &'a str,
    pub(super) expression: &'a str,
    pub(super) start: f64,
    pub(super) largest: f64,
    pub(super) at_end: f64,
}

#[derive(Serialize)]
pub(super) struct ExactError<'a> {
    pub(super) state: &'a str,
    pub(super) largest: f64,
    pub(super) time: f64,
}

#[derive(Serialize)]
pub(super) struct Rows<'a> {
    pub(super) every: &'a str,
    pub(super) file: String,
    pub(super) count: usize,
    pub(super) columns: Vec<&'a str>,
}

#[derive(Serialize)]
pub(super) struct Quantity<'a> {
    pub(super) name: String,
    pub(super) about: Option<&'a str>,
    pub(super) text: &'a str,
    pub(super) unit: Option<&'a str>,
    pub(super) value: Option<f64>,
    pub(super) bits: Option<String>,
    pub(super) bound: Option<f64>,
    pub(super) bound_bits: Option<String>,
    pub(super) bound_parts: BoundParts,
    pub(super) grade: &'static str,
    pub(super) why: &'a str,
    pub(super) shown: String,
    pub(super) time: Option<f64>,
    pub(super) order: Order,
    pub(super) meshes: Vec<Option<Number>>,
    pub(super) estimates: Estimates,
    pub(super) true_error: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct BoundParts {
    pub(super) truncation: f64,
    pub(super) safety: f64,
    pub(super) interpolation: f64,
    pub(super) rounding: f64,
}

#[derive(Serialize)]
pub(super) struct Order {
    pub(super) formal: u32,
    pub(super) observed: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct Estimates {
    pub(super) halving: Option<f64>,
    pub(super) companion: Option<f64>,
}

#[derive(Serialize)]
pub(super) struct Criterion<'a> {
    pub(super) name: &'a str,
    pub(super) text: &'a str,
    pub(super) quantity: &'a str,
    pub(super) relation: &'static str,
    pub(super) limit: Number,
    pub(super) limit_text: &'a str,
    pub(super) verdict: &'static str,
    pub(super) margin: Option<f64>,
    pub(super) expect: Option<Expect<'a>>,
}

#[derive(Serialize)]
pub(super) struct Expect<'a> {
    pub(super) verdict: &'static str,
    pub(super) because: &'a str,
}

#[derive(Serialize)]
pub(super) struct Input<'a> {
    pub(super) model: &'a str,
    pub(super) parameter: &'a str,
    pub(super) written: &'a str,
    #[serde(flatten)]
    pub(super) number: Number,
    pub(super) unit: Option<&'a str>,
    pub(super) plusminus: Option<String>,
    pub(super) sd: Option<String>,
    pub(super) source: Option<&'a str>,
    pub(super) about: Option<&'a str>,
    /// The runs that use this value, and those that override it.
    pub(super) runs: Vec<&'a str>,
    pub(super) overridden: Vec<&'a str>,
}
