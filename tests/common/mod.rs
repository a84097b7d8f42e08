//! What the tests and benches share.

pub mod problems;
pub mod random;
