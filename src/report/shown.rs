//! How a quantity is written: the rounding itself belongs to `figure`.

use crate::bound::Quantity;

/// A quantity as text, rounded as its bound allows.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ShownText {
    /// `12.41`
    pub value: String,
    /// `0.03`; `None` where the quantity has no bound.
    pub bound: Option<String>,
    /// Value, bound and unit: `12.41 ± 0.03 m`; value and unit where it has no bound.
    pub joined: String,
    /// Value and unit: `12.41 m`.
    pub plain: String,
}

/// Writes a quantity that has a value.
pub type Show<'a> = &'a dyn Fn(&Quantity) -> ShownText;
