//! Numerical integration schemes: tableaux and the only code that knows how to advance a state.

pub mod control;
pub mod dense_output;
pub mod rates;
pub mod step;
mod tableau;

pub use tableau::{Dense, ExactTableau, Scheme, Tableau};
