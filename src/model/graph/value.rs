//! The value of single nodes: what folding and running both use.

use super::{Binary, Unary};
use crate::arithmetic::elementary as e;

/// A function of one argument at `x`.
#[inline]
pub fn apply_unary(function: Unary, x: f64) -> f64 {
    match function {
        Unary::Negate => -x,
        Unary::Sqrt => e::sqrt(x),
        Unary::Cbrt => e::cbrt(x),
        Unary::Exp => e::exp(x),
        Unary::Ln => e::ln(x),
        Unary::Log10 => e::log10(x),
        Unary::Sin => e::sin(x),
        Unary::Cos => e::cos(x),
        Unary::Tan => e::tan(x),
        Unary::Asin => e::asin(x),
        Unary::Acos => e::acos(x),
        Unary::Atan => e::atan(x),
        Unary::Sinh => e::sinh(x),
        Unary::Cosh => e::cosh(x),
        Unary::Tanh => e::tanh(x),
        Unary::Asinh => e::asinh(x),
        Unary::Acosh => e::acosh(x),
        Unary::Atanh => e::atanh(x),
        Unary::Floor => x.floor(),
        Unary::Ceil => x.ceil(),
        Unary::Round => x.round(),
    }
}

/// A function of two arguments at `(x, y)`.
#[inline]
pub fn apply(operation: Binary, x: f64, y: f64) -> f64 {
    match operation {
        Binary::Add => x + y,
        Binary::Subtract => x - y,
        Binary::Multiply => x * y,
        Binary::Divide => x / y,
        Binary::Remainder => x % y,
        Binary::Power => e::pow(x, y),
        Binary::Atan2 => e::atan2(x, y),
    }
}

/// -1, 0 or 1 by the sign of `on` where `mode` is 0, else the mode.
#[inline]
pub fn sign(on: f64, mode: i8) -> f64 {
    if mode != 0 {
        f64::from(mode)
    } else if on > 0.0 {
        1.0
    } else if on < 0.0 {
        -1.0
    } else if on == 0.0 {
        0.0
    } else {
        f64::NAN
    }
}

/// One of two values by the sign of `on` where `mode` is 0, else by the mode.
#[inline]
pub fn pick(on: f64, positive: f64, negative: f64, mode: i8) -> f64 {
    if mode > 0 {
        positive
    } else if mode < 0 {
        negative
    } else if on >= 0.0 {
        positive
    } else if on < 0.0 {
        negative
    } else {
        f64::NAN
    }
}
