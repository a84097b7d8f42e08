//! The bits: everything that decides how a number is rounded lies here.
//!
//! Invariant: no other module calls an elementary function of the standard library, a fused
//! multiply-add, or `f64::max` and `f64::min`.

pub mod eigenvalues;
pub mod elementary;
mod power_guard;
pub mod ratio;
pub mod root;

/// The larger of two numbers by comparison and selection; the first where they are equal.
/// A NaN in either gives NaN.
#[inline]
pub fn larger(a: f64, b: f64) -> f64 {
    if b > a || b.is_nan() { b } else { a }
}

/// The smaller of two numbers by comparison and selection; the first where they are equal.
/// A NaN in either gives NaN.
#[inline]
pub fn smaller(a: f64, b: f64) -> f64 {
    if b < a || b.is_nan() { b } else { a }
}
