//! Numerical integration schemes: tableaux and the only code that knows how to advance a state.

mod tableau;

pub use tableau::{Dense, ExactTableau, Scheme, Tableau};
