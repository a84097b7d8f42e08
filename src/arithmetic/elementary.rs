//! The only place that computes elementary functions.
//!
//! By definition each gives the correctly rounded binary64 value, so that a faster implementation changes no
//! bit. The values come from the crate `pxfm`, pinned exactly, behind guards for its known slips.

/// `sin x`, x in radians.
pub fn sin(x: f64) -> f64 {
    pxfm::f_sin(x)
}
/// `cos x`, x in radians.
pub fn cos(x: f64) -> f64 {
    pxfm::f_cos(x)
}
/// `tan x`, x in radians.
pub fn tan(x: f64) -> f64 {
    pxfm::f_tan(x)
}
/// `arcsin x`.
pub fn asin(x: f64) -> f64 {
    pxfm::f_asin(x)
}
/// `arccos x`.
pub fn acos(x: f64) -> f64 {
    pxfm::f_acos(x)
}
/// `arctan x`.
pub fn atan(x: f64) -> f64 {
    pxfm::f_atan(x)
}
/// The angle of the point `(x, y)`.
pub fn atan2(y: f64, x: f64) -> f64 {
    pxfm::f_atan2(y, x)
}
/// `sinh x`.
pub fn sinh(x: f64) -> f64 {
    if x == 0.0 { x } else { pxfm::f_sinh(x) }
}
/// `cosh x`.
pub fn cosh(x: f64) -> f64 {
    pxfm::f_cosh(x)
}
/// `tanh x`.
pub fn tanh(x: f64) -> f64 {
    pxfm::f_tanh(x)
}
/// `arsinh x`.
pub fn asinh(x: f64) -> f64 {
    pxfm::f_asinh(x)
}
/// `arcosh x`.
pub fn acosh(x: f64) -> f64 {
    pxfm::f_acosh(x)
}
/// `artanh x`.
pub fn atanh(x: f64) -> f64 {
    pxfm::f_atanh(x)
}
/// `e^x`.
pub fn exp(x: f64) -> f64 {
    pxfm::f_exp(x)
}
/// Natural logarithm.
pub fn ln(x: f64) -> f64 {
    pxfm::f_log(x)
}
/// Decimal logarithm.
pub fn log10(x: f64) -> f64 {
    pxfm::f_log10(x)
}
/// Cube root.
pub fn cbrt(x: f64) -> f64 {
    pxfm::f_cbrt(x)
}
/// Square root, by the processor: IEEE 754 asks for the correctly rounded value.
pub fn sqrt(x: f64) -> f64 {
    x.sqrt()
}
/// `x^y` for any exponent.
pub fn pow(x: f64, y: f64) -> f64 {
    if y == 0.5 {
        x.sqrt()
    } else if y == -0.5 {
        1.0 / x.sqrt()
    } else if x == 1.0 || y == 0.0 {
        1.0
    } else {
        pxfm::f_pow(x, y)
    }
}
/// `x^n` by squaring from the lowest bit of `n` upward: the stated multiplication chain.
pub fn power(x: f64, n: u32) -> f64 {
    let (mut result, mut square, mut n) = (1.0, x, n);
    while n > 0 {
        if n & 1 == 1 {
            result *= square;
        }
        n >>= 1;
        if n > 0 {
            square *= square;
        }
    }
    result
}
