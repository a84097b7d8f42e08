//! The machine-readable twin of a report, digests, and writing to disk.
//!
//! Enters: a study, its models and what came of it. Leaves: `record.json` and `data/RUN.csv` as bytes, and
//! a report folder on disk that is either the old one or the new one.
//!
//! Invariant: the same study gives the same bytes. No clock, host, user or path of this machine is known
//! here but in [`timing::Timing`], whose file is in no digest.

pub mod csv;
pub mod digest;
#[cfg(test)]
pub(crate) mod example;
pub mod json;
pub mod number;
pub mod numerics;
pub mod register;
mod shape;
mod swap;
pub mod timing;
pub mod write;

pub use number::RecordError;
pub use numerics::NUMERICS;
