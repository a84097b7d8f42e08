//! What the templates see. These structs are the data model of a template; the stages' own types stay free of it.

use serde::Serialize;

/// All that `report.html` sees.
#[derive(Debug, Serialize)]
pub(super) struct PageView {
    pub(super) title: String,
    /// Number, revision, date, names: label and text.
    pub(super) fields: Vec<Field>,
    pub(super) caution: Option<String>,
    pub(super) verdict: VerdictView,
    /// The prose with its blocks, ready to insert.
    pub(super) body: String,
    pub(super) ledger: Vec<LedgerView>,
    pub(super) inputs: Vec<InputsView>,
    pub(super) lines: Vec<LineView>,
    pub(super) digests: Vec<DigestView>,
    pub(super) tool: String,
}

#[derive(Debug, Serialize)]
pub(super) struct Field {
    pub(super) label: String,
    pub(super) text: String,
}

#[derive(Debug, Serialize)]
pub(super) struct VerdictView {
    pub(super) total: usize,
    pub(super) met: usize,
    pub(super) not_met: usize,
    pub(super) undecided: usize,
    /// Criteria that came out otherwise than the study expects.
    pub(super) out_of_order: usize,
    pub(super) expected: usize,
    pub(super) quantities: usize,
    pub(super) weakest: String,
    pub(super) meaning: String,
}

/// A quantity in the ledger.
#[derive(Clone, Debug, Serialize)]
pub(super) struct QuantityView {
    pub(super) id: String,
    pub(super) name: String,
    pub(super) text: String,
    pub(super) about: String,
    pub(super) value: String,
    pub(super) bound: String,
    pub(super) unit: String,
    pub(super) grade: String,
    pub(super) why: String,
    pub(super) order: String,
    pub(super) meshes: Vec<String>,
    pub(super) halving: String,
    pub(super) companion: String,
    pub(super) safety: String,
    pub(super) truncation: String,
    pub(super) interpolation: String,
    pub(super) rounding: String,
    pub(super) time: String,
    pub(super) true_error: String,
    /// Ids of the places in the prose that quote it.
    pub(super) cites: Vec<String>,
}

/// A run in the ledger.
#[derive(Debug, Serialize)]
pub(super) struct LedgerView {
    pub(super) id: String,
    pub(super) name: String,
    pub(super) model: String,
    pub(super) scheme: String,
    pub(super) order: u32,
    pub(super) source: String,
    pub(super) steps: String,
    pub(super) span: String,
    pub(super) overrides: Vec<String>,
    pub(super) scales: Vec<String>,
    pub(super) meshes: Vec<MeshView>,
    pub(super) companion: String,
    pub(super) caps: Vec<String>,
    pub(super) remarks: Vec<String>,
    pub(super) quantities: Vec<QuantityView>,
    pub(super) invariants: Vec<DriftView>,
    pub(super) exact: Vec<String>,
    pub(super) data: String,
    pub(super) convergence: Option<DrawingView>,
    pub(super) stability: Option<DrawingView>,
}

#[derive(Debug, Serialize)]
pub(super) struct DriftView {
    pub(super) name: String,
    pub(super) expression: String,
    pub(super) start: String,
    pub(super) largest: String,
    pub(super) at_end: String,
}

#[derive(Debug, Serialize)]
pub(super) struct MeshView {
    pub(super) label: String,
    pub(super) steps: u64,
    pub(super) smallest: String,
    pub(super) largest: String,
    pub(super) rejected_error: u64,
    pub(super) rejected_not_finite: u64,
    pub(super) switches: u64,
    pub(super) evaluations: u64,
}

#[derive(Debug, Serialize)]
pub(super) struct DrawingView {
    pub(super) svg: String,
    pub(super) note: String,
}

/// The inputs of a model.
#[derive(Debug, Serialize)]
pub(super) struct InputsView {
    pub(super) model: String,
    pub(super) rows: Vec<InputView>,
}

#[derive(Debug, Serialize)]
pub(super) struct InputView {
    pub(super) name: String,
    pub(super) kind: String,
    pub(super) value: String,
    pub(super) unit: String,
    pub(super) uncertainty: String,
    pub(super) source: String,
    pub(super) about: String,
}

#[derive(Debug, Serialize)]
pub(super) struct LineView {
    pub(super) number: usize,
    pub(super) text: String,
}

#[derive(Debug, Serialize)]
pub(super) struct DigestView {
    pub(super) path: String,
    pub(super) was: String,
    pub(super) sha256: String,
}

/// A quoted quantity.
#[derive(Debug, Serialize)]
pub(super) struct QuoteView {
    pub(super) id: String,
    pub(super) target: String,
    pub(super) text: String,
    pub(super) grade: String,
    pub(super) weak: bool,
}

/// A model block in the prose.
#[derive(Debug, Serialize)]
pub(super) struct ModelView {
    pub(super) name: String,
    pub(super) about: String,
    pub(super) states: Vec<StateView>,
    pub(super) derived: Vec<EquationView>,
    pub(super) invariants: Vec<EquationView>,
}

#[derive(Debug, Serialize)]
pub(super) struct StateView {
    pub(super) name: String,
    pub(super) rate: String,
    pub(super) start: String,
    pub(super) unit: String,
    pub(super) about: String,
    pub(super) exact: String,
}

#[derive(Debug, Serialize)]
pub(super) struct EquationView {
    pub(super) name: String,
    pub(super) text: String,
    pub(super) unit: String,
    pub(super) about: String,
}

/// A run block in the prose.
#[derive(Debug, Serialize)]
pub(super) struct RunView {
    pub(super) name: String,
    pub(super) id: String,
    pub(super) model: String,
    pub(super) scheme: String,
    pub(super) steps: String,
    pub(super) span: String,
    pub(super) weakest: String,
    pub(super) overrides: Vec<String>,
}

/// A chart block in the prose.
#[derive(Debug, Serialize)]
pub(super) struct ChartView {
    pub(super) id: String,
    pub(super) number: usize,
    pub(super) title: String,
    pub(super) svg: String,
    pub(super) note: String,
}

/// A table block in the prose.
#[derive(Debug, Serialize)]
pub(super) struct TableView {
    pub(super) id: String,
    pub(super) number: usize,
    pub(super) title: String,
    pub(super) quantities: Vec<QuantityView>,
    pub(super) heads: Vec<HeadView>,
    pub(super) rows: Vec<Vec<CellView>>,
}

#[derive(Debug, Serialize)]
pub(super) struct HeadView {
    pub(super) name: String,
    pub(super) unit: String,
}

#[derive(Clone, Debug, Serialize)]
pub(super) struct CellView {
    pub(super) value: String,
    pub(super) bound: String,
    pub(super) grade: String,
}

/// A criteria block in the prose.
#[derive(Debug, Serialize)]
pub(super) struct CriteriaView {
    pub(super) rows: Vec<CriterionView>,
}

#[derive(Debug, Serialize)]
pub(super) struct CriterionView {
    pub(super) name: String,
    pub(super) text: String,
    pub(super) target: String,
    pub(super) shown: String,
    pub(super) margin: String,
    pub(super) verdict: String,
    /// `met`, `undecided` or `not-met`, for the style.
    pub(super) class: String,
    pub(super) expect: String,
    pub(super) because: String,
    pub(super) as_expected: bool,
}
