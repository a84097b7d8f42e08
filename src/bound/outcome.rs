//! What is known of an executed study: plain data, for the figures, the report and the record.

use crate::fault::Span;
use crate::run::Rejections;
use crate::scheme::Scheme;
use crate::study::block::criteria::{Relation, Verdict};

/// How a bound was got, from the strongest down.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Grade {
    /// A second estimate that shares no assumption with the first agrees within a factor of 1.5.
    Corroborated,
    /// Three meshes, monotone, observed order near the scheme's.
    Converged,
    /// Converging, but not in the asymptotic range.
    Indicated,
    /// No bound.
    Unbounded,
}

impl Grade {
    /// The word for it.
    pub fn word(self) -> &'static str {
        match self {
            Grade::Corroborated => "corroborated",
            Grade::Converged => "converged",
            Grade::Indicated => "indicated",
            Grade::Unbounded => "unbounded",
        }
    }
}

/// Everything that came of a study.
#[derive(Clone, Debug)]
pub struct Outcome {
    /// In the order of the study.
    pub runs: Vec<RunOutcome>,
    /// In the order of the study.
    pub criteria: Vec<CriterionOutcome>,
}

impl Outcome {
    /// The quantity `RUN.NAME`.
    pub fn quantity(&self, name: &str) -> Option<(&RunOutcome, &Quantity)> {
        let (run, quantity) = name.split_once('.')?;
        let run = self.runs.iter().find(|candidate| candidate.name == run)?;
        Some((run, run.quantities.iter().find(|candidate| candidate.name == quantity)?))
    }
    /// The weakest grade of all quantities; `None` where there is none.
    pub fn weakest_grade(&self) -> Option<Grade> {
        self.runs.iter().flat_map(|run| &run.quantities).map(|quantity| quantity.grade).max()
    }
}

/// How the steps of a run came about.
#[derive(Clone, Debug, PartialEq)]
pub enum Steps {
    /// `step: 0.5 s`
    Fixed {
        /// The step.
        step: f64,
    },
    /// `tolerance: 1e-6`
    Adaptive {
        /// The relative tolerance.
        tolerance: f64,
        /// The typical scale of each state; its absolute tolerance is `tolerance` times this.
        scales: Vec<f64>,
    },
    /// `aim: 0.01 m`: the step was found.
    Aimed {
        /// The step that was found.
        step: f64,
        /// The aims as written: `z_max: 0.01 m`.
        aims: Vec<String>,
        /// How many steps were tried.
        trials: u32,
    },
}

/// What came of a run.
#[derive(Clone, Debug)]
pub struct RunOutcome {
    /// Its name.
    pub name: String,
    /// Index of its model.
    pub model: usize,
    /// Its scheme.
    pub scheme: &'static Scheme,
    /// How its steps came about.
    pub steps: Steps,
    /// Start and end of time.
    pub span: (f64, f64),
    /// The unit of time as text.
    pub time_unit: Option<String>,
    /// The value of every parameter of the model in this run, overrides applied.
    pub parameters: Vec<f64>,
    /// The start value of every state in this run.
    pub start: Vec<f64>,
    /// The overrides as written: name and `VALUE UNIT`.
    pub overrides: Vec<(String, String)>,
    /// The run itself, then with every step halved, then halved again; only the first where no bound was
    /// asked for.
    pub meshes: Vec<Mesh>,
    /// The cost of the companion, where there is one.
    pub companion: Option<Companion>,
    /// The quantities in the order of the study.
    pub quantities: Vec<Quantity>,
    /// The rows, where asked for.
    pub rows: Option<Rows>,
    /// The curves for the charts of the study that show this run.
    pub curves: Vec<Curve>,
    /// Drift of the invariants.
    pub invariants: Vec<Drift>,
    /// Largest true error of each state with a closed form.
    pub exact: Vec<ExactError>,
    /// Step times eigenvalues of the Jacobian along the run.
    pub spectrum: Vec<SpectrumPoint>,
    /// What limits the grades of the whole run, in words; empty where nothing does.
    pub caps: Vec<String>,
    /// What a reader should know of the run beside that: a companion that was lost, say.
    pub remarks: Vec<String>,
}

/// The steps and the cost of one mesh.
#[derive(Clone, Debug, PartialEq)]
pub struct Mesh {
    /// Number of steps accepted.
    pub accepted: u64,
    /// Smallest step.
    pub smallest: f64,
    /// Largest step.
    pub largest: f64,
    /// Steps rejected, by cause.
    pub rejected: Rejections,
    /// Evaluations of all the rates of the model, dense output included.
    pub evaluations: u64,
    /// Kinks and jumps that were located and made mesh points.
    pub switches: u64,
}

/// The cost of the companion.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Companion {
    /// Its own steps.
    pub steps: u64,
    /// Evaluations of all the rates.
    pub evaluations: u64,
}

/// A quantity: value, bound and all that tells where they come from.
#[derive(Clone, Debug, PartialEq)]
pub struct Quantity {
    /// Its name in the run: `z_max`.
    pub name: String,
    /// The text that defines it: `highest z`.
    pub text: String,
    /// `about`
    pub about: Option<String>,
    /// The unit as text.
    pub unit: Option<String>,
    /// Whether it counts something, so that it is shown as a whole number.
    pub whole: bool,
    /// The value at the scheme and step that the study names; `None` where it does not occur or is withheld.
    pub value: Option<f64>,
    /// The bound; `None` for grade unbounded.
    pub bound: Option<f64>,
    /// The grade of the bound.
    pub grade: Grade,
    /// Why this grade, as a sentence without full stop.
    pub why: String,
    /// What the bound is made of.
    pub estimates: Estimates,
    /// The time at which the value is taken, where it is not the end or the whole span.
    pub time: Option<f64>,
    /// The true error against a closed form: value minus exact value.
    pub true_error: Option<f64>,
    /// Where it stands in the study.
    pub at: Span,
}

/// The raw values behind a bound.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Estimates {
    /// The value on each mesh, coarse to fine.
    pub values: Vec<Option<f64>>,
    /// The observed order.
    pub observed_order: Option<f64>,
    /// The formal order of the scheme.
    pub formal_order: u32,
    /// Extrapolated error of the value (signed: value minus limit).
    pub halving: Option<f64>,
    /// Error of the value by the companion (signed).
    pub companion: Option<f64>,
    /// The factor by which the larger estimate was multiplied.
    pub safety: f64,
    /// The part of the bound for truncation, safety included.
    pub truncation: f64,
    /// The part for interpolation inside a step.
    pub interpolation: f64,
    /// The part for rounding.
    pub rounding: f64,
}

/// Tabulated output of a run.
#[derive(Clone, Debug, PartialEq)]
pub struct Rows {
    /// The interval as written: `1 s`.
    pub every: String,
    /// The columns after time: name, unit, values, bounds and grades, each as long as `times`. The states
    /// first, then the derived quantities.
    pub columns: Vec<RowColumn>,
    /// The times.
    pub times: Vec<f64>,
}

/// A column of [`Rows`].
#[derive(Clone, Debug, PartialEq)]
pub struct RowColumn {
    /// Name of the state or derived quantity.
    pub name: String,
    /// The unit as text.
    pub unit: Option<String>,
    /// The values.
    pub values: Vec<f64>,
    /// The bounds; `None` where there is none.
    pub bounds: Vec<Option<f64>>,
    /// The grades.
    pub grades: Vec<Grade>,
}

/// A curve for a chart, thinned to what the eye can see with its extremes kept.
#[derive(Clone, Debug, PartialEq)]
pub struct Curve {
    /// The expression on the vertical axis.
    pub expression: String,
    /// Its unit as text, where it is known.
    pub unit: Option<String>,
    /// The expression on the horizontal axis; `t` for time.
    pub against: String,
    /// Its unit as text, where it is known.
    pub against_unit: Option<String>,
    /// The points in order of time.
    pub points: Vec<(f64, f64)>,
    /// The largest bound of the ordinate over the curve, where there is one.
    pub bound: Option<f64>,
    /// The grade of that bound.
    pub grade: Grade,
}

/// How far an invariant strayed from its start value.
#[derive(Clone, Debug, PartialEq)]
pub struct Drift {
    /// Its name.
    pub name: String,
    /// Its expression.
    pub expression: String,
    /// Its value at the start.
    pub start: f64,
    /// The largest distance from it at any step end.
    pub largest: f64,
    /// The distance at the end.
    pub at_end: f64,
}

/// The largest true error of a state with a closed form.
#[derive(Clone, Debug, PartialEq)]
pub struct ExactError {
    /// The state.
    pub state: String,
    /// The largest distance at any step end.
    pub largest: f64,
    /// The time of it.
    pub time: f64,
}

/// Step times an eigenvalue of the Jacobian at some time of a run.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SpectrumPoint {
    /// The time.
    pub time: f64,
    /// Real part of step times eigenvalue.
    pub re: f64,
    /// Imaginary part.
    pub im: f64,
}

/// What came of a criterion.
#[derive(Clone, Debug, PartialEq)]
pub struct CriterionOutcome {
    /// Its name.
    pub name: String,
    /// Its text: `reject.z_max <= 12.5 m`.
    pub text: String,
    /// The quantity: `reject.z_max`.
    pub quantity: String,
    /// The comparison.
    pub relation: Relation,
    /// The limit.
    pub limit: f64,
    /// The limit as written.
    pub limit_text: String,
    /// The verdict.
    pub verdict: Verdict,
    /// Distance of the value from the limit, positive on the right side.
    pub margin: Option<f64>,
    /// The verdict that the study expects, with its reason.
    pub expect: Option<(Verdict, String)>,
}

impl CriterionOutcome {
    /// Whether the exit status may stay 0: met, or as expected.
    pub fn is_in_order(&self) -> bool {
        match &self.expect {
            Some((expected, _)) => self.verdict == *expected,
            None => self.verdict == Verdict::Met,
        }
    }
}
