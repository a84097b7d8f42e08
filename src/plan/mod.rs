//! What to execute, in which order, as plain data.
//!
//! Enters: a study and its checked models. Leaves: a [`Plan`]. Nothing is integrated here, so `proofread` ends
//! with this stage. It knows expressions as nodes of a graph, and nothing of how a run is carried out.

mod check;
mod lay_out;
mod mesh;

pub use lay_out::lay_out;
pub use mesh::Nominal;

use crate::fault::Span;
use crate::model::graph::{Graph, NodeId};
use crate::scheme::Scheme;
use crate::study::block::run::{BoundAsked, Direction, Occurrence};

/// The largest number of steps of a run, where neither study nor command line says otherwise.
pub const DEFAULT_LIMIT: u64 = 100_000_000;
/// The largest number of rows of a run.
pub const ROWS_LIMIT: u64 = 1_000_000;

/// What a study asks to execute: its runs in the order of the study.
#[derive(Clone, Debug)]
pub struct Plan {
    /// The runs.
    pub runs: Vec<RunPlan>,
}

/// A run to execute.
#[derive(Clone, Debug)]
pub struct RunPlan {
    /// Its name.
    pub name: String,
    /// Its name's place in the study.
    pub at: Span,
    /// Index of its model.
    pub model: usize,
    /// Its scheme.
    pub scheme: &'static Scheme,
    /// How steps are chosen.
    pub steps: StepsPlan,
    /// Start of time.
    pub from: f64,
    /// End of time, above `from`.
    pub until: f64,
    /// The unit of time as text.
    pub time_unit: Option<String>,
    /// All expressions: those of the model and those of the quantities, curves and columns of this run.
    pub graph: Graph,
    /// Value of every parameter, overrides applied.
    pub parameters: Vec<f64>,
    /// Start value of every state, overrides applied.
    pub start: Vec<f64>,
    /// Rate of every state.
    pub rates: Vec<NodeId>,
    /// Closed form of every state that has one: index of the state and node.
    pub exact: Vec<(usize, NodeId)>,
    /// The overrides as written.
    pub overrides: Vec<(String, String)>,
    /// The interval of the rows, and as written.
    pub rows: Option<(f64, String)>,
    /// The columns of the rows: states, derived quantities, then what tables ask for.
    pub columns: Vec<ColumnPlan>,
    /// The quantities.
    pub quantities: Vec<QuantityPlan>,
    /// The curves that charts ask for.
    pub curves: Vec<CurvePlan>,
    /// The invariants: name, text and node.
    pub invariants: Vec<(String, String, NodeId)>,
    /// Non-zero entries of the Jacobian: row, column, node.
    pub jacobian: Vec<(usize, usize, NodeId)>,
    /// Which estimates are asked for.
    pub bound: BoundAsked,
    /// The largest number of steps.
    pub limit: u64,
    /// What limits the grades of the whole run from the start, in words.
    pub caps: Vec<String>,
}

/// How steps are chosen.
#[derive(Clone, Debug, PartialEq)]
pub enum StepsPlan {
    /// A fixed step.
    Fixed(f64),
    /// A relative tolerance, with the typical scale of each state where the study gives one.
    Adaptive {
        /// The tolerance.
        tolerance: f64,
        /// The scales.
        scales: Vec<Option<f64>>,
    },
    /// The largest step whose bounds meet the aims.
    Aim(Vec<AimPlan>),
}

/// An aim for one quantity.
#[derive(Clone, Debug, PartialEq)]
pub struct AimPlan {
    /// Index of the quantity.
    pub quantity: usize,
    /// Its bound should be at most this.
    pub bound: f64,
    /// As written: `z_max: 0.01 m`.
    pub text: String,
}

/// A column of the rows.
#[derive(Clone, Debug, PartialEq)]
pub struct ColumnPlan {
    /// Name or expression.
    pub name: String,
    /// The unit as text.
    pub unit: Option<String>,
    /// What it shows.
    pub node: NodeId,
}

/// A curve of a chart.
#[derive(Clone, Debug, PartialEq)]
pub struct CurvePlan {
    /// The ordinate as text.
    pub expression: String,
    /// Its unit as text.
    pub unit: Option<String>,
    /// The ordinate.
    pub node: NodeId,
    /// The abscissa as text.
    pub against: String,
    /// Its unit as text.
    pub against_unit: Option<String>,
    /// The abscissa.
    pub against_node: NodeId,
}

/// A quantity to read from a run.
#[derive(Clone, Debug, PartialEq)]
pub struct QuantityPlan {
    /// Its name.
    pub name: String,
    /// As written.
    pub text: String,
    /// `about`
    pub about: Option<String>,
    /// The unit as text, where it is known.
    pub unit: Option<String>,
    /// Its place in the study.
    pub at: Span,
    /// The expression that is read.
    pub node: NodeId,
    /// What is read of it.
    pub measure: Measure,
}

/// What is read of an expression over a run.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Measure {
    /// Its value at the end.
    Final,
    /// Its value at a time.
    At(f64),
    /// Its largest value.
    Highest,
    /// Its smallest value.
    Lowest,
    /// Its mean over time.
    Mean,
    /// Its integral over time.
    Integral,
    /// The time of its largest value.
    TimeOfHighest,
    /// The time of its smallest value.
    TimeOfLowest,
    /// The time of a passage.
    TimeWhen {
        /// Through this level.
        level: f64,
        /// In this direction.
        direction: Direction,
        /// Which of them.
        which: Occurrence,
    },
    /// The number of passages.
    Count {
        /// Through this level.
        level: f64,
        /// In this direction.
        direction: Direction,
    },
}
