//! From a run to a bound and a grade for every quantity, and from bounds to verdicts.

mod outcome;

pub use outcome::{
    Companion, CriterionOutcome, Curve, Drift, Estimates, ExactError, Grade, Mesh, Outcome, Quantity,
    Rejections, RowColumn, Rows, RunOutcome, SpectrumPoint, Steps,
};
