//! What the tests and benches share.

pub mod coverage;
pub mod problems;
pub mod random;
