//! From a plan to runs with a bound and a grade for every quantity, and from bounds to verdicts.
//!
//! Enters: a [`Plan`](crate::plan::Plan). Leaves: an [`Outcome`]. A local error estimate is never summed into a
//! global one; tolerances are never laddered: an adaptive run freezes its mesh, and the mesh is halved.

pub mod aim;
mod companion;
mod court;
mod execute;
pub mod judge;
mod outcome;
mod rough;
pub mod settle;
mod verdict;

pub use execute::execute;
pub use outcome::{
    Companion, CriterionOutcome, Curve, Drift, Estimates, ExactError, Grade, Mesh, Outcome, Quantity,
    RowColumn, Rows, RunOutcome, SpectrumPoint, Steps,
};
pub use verdict::verdict;
