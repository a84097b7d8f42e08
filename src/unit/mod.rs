//! Values with a unit, as a study writes them: `3200 m`, `0.35 s^2/m`, `12`.
//!
//! Units are text for now; their algebra (dimension, table of factors) belongs in this folder.

mod read;

pub use read::{Parts, is_value, parts, read_value};

use crate::fault::Span;

/// A number with its unit and place: `9.80665 m/s^2`.
#[derive(Clone, Debug, PartialEq)]
pub struct Value {
    /// The number, finite.
    pub number: f64,
    /// The number as the study writes it: `9.80665`.
    pub digits: String,
    /// The unit as the study writes it, without surrounding blanks; `None` where there is none.
    pub unit: Option<String>,
    /// Where it stands.
    pub at: Span,
}
