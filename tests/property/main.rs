//! Properties that hold over many examples: orders of convergence, coverage of bounds.

#[path = "../common/mod.rs"]
mod common;
mod orders;
