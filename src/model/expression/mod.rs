//! Expressions: their text is parsed by the crate `meval` and lowered from its token list to the graph.
//!
//! `meval`'s own evaluation is not used: it calls the system's mathematics, whose bits differ between machines.

mod functions;
mod lex;
mod lower;

pub use functions::{FUNCTIONS, is_function};
pub use lower::{Scope, lower};
