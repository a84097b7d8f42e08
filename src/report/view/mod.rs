//! What the templates see: plain data with every number already written as text.
//!
//! A field of a view is a name in a template. Texts are as the study wrote them and are escaped by the
//! templates; only `body`, `svg` and `html` hold finished markup and are shown with `| safe`.

mod annex;
mod body;
mod evidence;
mod head;
mod register;

pub use annex::{
    Digest, InputRow, Inputs, LineLink, ModelInputs, OrderRow, OverrideRow, RunConvergence, StudyText,
    TextLine,
};
pub use body::{
    Backlink, CellView, ChartView, ColumnView, CriteriaView, CriterionRow, EquationGroup, EquationRow,
    ModelView, NamedText, QuoteView, RunFacts, RunView, SchemeView, TableView,
};
pub use evidence::{
    CompanionView, DriftRow, ExactRow, Ledger, LedgerLine, MeshRow, MeshValue, Parts, RunLedger, ScaleRow,
};
pub use head::{ContentsEntry, GradeView, Sheet, SheetCell, Unbounded, VerdictCount, VerdictLine};
pub use register::{RegisterGroup, RegisterRow, RegisterView};
use serde::Serialize;

/// The whole page, for `report.html`.
#[derive(Clone, Debug, Serialize)]
pub struct ReportView {
    /// For `title-block.html`.
    pub sheet: Sheet,
    /// For `verdict.html`.
    pub verdict: VerdictLine,
    /// The headings that lead into the page, for `contents.html`.
    pub contents: Vec<ContentsEntry>,
    /// Prose and blocks as markup.
    pub body: String,
    /// For `annex-ledger.html`.
    pub ledger: Ledger,
    /// For `annex-convergence.html`.
    pub convergence: Vec<RunConvergence>,
    /// For `annex-inputs.html`.
    pub inputs: Inputs,
    /// For `annex-study-text.html`.
    pub study_text: StudyText,
    /// For `annex-digests.html`.
    pub digests: Vec<Digest>,
    /// Which tool at which version made the page: `halfstep 0.1.0`.
    pub tool: String,
}
