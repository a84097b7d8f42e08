//! To come.
pub mod pipeline;
