//! Numerical integration schemes: tableaux and the only code that knows how to advance a state.

pub mod control;
pub mod dense_output;
mod drawing;
mod explicit;
mod list;
pub mod order;
pub mod rates;
mod region;
pub mod stability;
pub mod step;
mod sturm;
mod tableau;
mod tree;

pub use drawing::{Misdrawn, Slip};
pub use list::{all, find};
pub use tableau::{Dense, ExactTableau, Scheme, Tableau};
