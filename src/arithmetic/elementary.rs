//! The only place that computes elementary functions.
//!
//! By definition each gives the correctly rounded binary64 value, so that a faster implementation changes no
//! bit. The values come from the crate `pxfm`, pinned exactly, behind guards for its known slips; the points of
//! `elementary_points.txt` beside this file hold both to the definition.
//!
//! Infinities and zeros in give what IEEE 754-2019 says (sect. 9.2.1), and what has no value is a NaN. Sign and
//! payload of a NaN differ between machines: nothing may look at them.

use super::power_guard;

/// `sin x`, x in radians. NaN for an infinity.
pub fn sin(x: f64) -> f64 {
    pxfm::f_sin(x)
}
/// `cos x`, x in radians. NaN for an infinity.
pub fn cos(x: f64) -> f64 {
    pxfm::f_cos(x)
}
/// `tan x`, x in radians. NaN for an infinity.
pub fn tan(x: f64) -> f64 {
    pxfm::f_tan(x)
}
/// `arcsin x`. NaN outside [-1, 1].
pub fn asin(x: f64) -> f64 {
    pxfm::f_asin(x)
}
/// `arccos x`. NaN outside [-1, 1].
pub fn acos(x: f64) -> f64 {
    pxfm::f_acos(x)
}
/// `arctan x`.
pub fn atan(x: f64) -> f64 {
    pxfm::f_atan(x)
}
/// The angle of the point `(x, y)`.
pub fn atan2(y: f64, x: f64) -> f64 {
    power_guard::tiny_angle(y, x).unwrap_or_else(|| pxfm::f_atan2(y, x))
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
/// `arcosh x`. NaN below 1.
pub fn acosh(x: f64) -> f64 {
    pxfm::f_acosh(x)
}
/// `artanh x`. NaN outside [-1, 1], an infinity at its ends.
pub fn atanh(x: f64) -> f64 {
    pxfm::f_atanh(x)
}
/// `e^x`.
pub fn exp(x: f64) -> f64 {
    pxfm::f_exp(x)
}
/// Natural logarithm. NaN below 0, minus infinity at 0.
pub fn ln(x: f64) -> f64 {
    pxfm::f_log(x)
}
/// Decimal logarithm. NaN below 0, minus infinity at 0.
pub fn log10(x: f64) -> f64 {
    pxfm::f_log10(x)
}
/// Cube root.
pub fn cbrt(x: f64) -> f64 {
    pxfm::f_cbrt(x)
}
/// Square root, by the processor: IEEE 754 asks for the correctly rounded value. NaN below 0.
pub fn sqrt(x: f64) -> f64 {
    x.sqrt()
}
/// `x^y` for any exponent. As in IEEE 754, `x^0` and `1^y` are 1 even for a NaN, and a negative `x` has a power only
/// for whole `y`.
pub fn pow(x: f64, y: f64) -> f64 {
    power_guard::special_power(x, y).unwrap_or_else(|| pxfm::f_pow(x, y))
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

#[cfg(test)]
mod tests {
    use super::*;

    type One = fn(f64) -> f64;
    type Two = fn(f64, f64) -> f64;

    const ONE: [(&str, One); 17] = [
        ("sin", sin),
        ("cos", cos),
        ("tan", tan),
        ("asin", asin),
        ("acos", acos),
        ("atan", atan),
        ("sinh", sinh),
        ("cosh", cosh),
        ("tanh", tanh),
        ("asinh", asinh),
        ("acosh", acosh),
        ("atanh", atanh),
        ("exp", exp),
        ("ln", ln),
        ("log10", log10),
        ("cbrt", cbrt),
        ("sqrt", sqrt),
    ];
    const TWO: [(&str, Two); 2] = [("atan2", atan2), ("pow", pow)];

    const INFINITY: f64 = f64::INFINITY;
    const NAN: f64 = f64::NAN;

    fn same(name: &str, arguments: &[f64], ours: f64, expect: f64) {
        let agree = ours.to_bits() == expect.to_bits() || (ours.is_nan() && expect.is_nan());
        assert!(agree, "{name}{arguments:?}: {ours:e} and not {expect:e}");
    }

    #[test]
    fn the_points_of_the_table_come_out_to_the_last_bit() {
        let table = include_str!("elementary_points.txt");
        let number = |hexadecimal: &str| f64::from_bits(u64::from_str_radix(hexadecimal, 16).unwrap());
        let rows = || table.lines().filter(|line| !line.starts_with('#'));
        let of = |name: &str| {
            let own = rows().filter_map(|row| row.strip_prefix(name)?.strip_prefix(' '));
            own.map(|row| row.split(' ').map(number).collect::<Vec<_>>()).collect::<Vec<_>>()
        };
        let mut checked = 0;
        for (name, function) in ONE.into_iter().filter(|(name, _)| *name != "sqrt") {
            let points = of(name);
            assert!(points.len() >= 40, "{name}");
            for point in &points {
                same(name, &point[..1], function(point[0]), point[1]);
            }
            checked += points.len();
        }
        for (name, function) in TWO {
            let points = of(name);
            assert!(points.len() >= 40, "{name}");
            for point in &points {
                same(name, &point[..2], function(point[0], point[1]), point[2]);
            }
            checked += points.len();
        }
        assert_eq!(checked, rows().count());
    }

    #[test]
    fn zeros_and_infinities_give_what_the_standard_says() {
        // IEEE 754-2019, sect. 9.2.1; C11 annex F.10 for the signs of zeros.
        let half_pi = std::f64::consts::FRAC_PI_2;
        // Name, then f(0), f(-0), f(infinity), f(-infinity).
        let expect = [
            ("sin", [0.0, -0.0, NAN, NAN]),
            ("cos", [1.0, 1.0, NAN, NAN]),
            ("tan", [0.0, -0.0, NAN, NAN]),
            ("asin", [0.0, -0.0, NAN, NAN]),
            ("acos", [half_pi, half_pi, NAN, NAN]),
            ("atan", [0.0, -0.0, half_pi, -half_pi]),
            ("sinh", [0.0, -0.0, INFINITY, -INFINITY]),
            ("cosh", [1.0, 1.0, INFINITY, INFINITY]),
            ("tanh", [0.0, -0.0, 1.0, -1.0]),
            ("asinh", [0.0, -0.0, INFINITY, -INFINITY]),
            ("acosh", [NAN, NAN, INFINITY, NAN]),
            ("atanh", [0.0, -0.0, NAN, NAN]),
            ("exp", [1.0, 1.0, INFINITY, 0.0]),
            ("ln", [-INFINITY, -INFINITY, INFINITY, NAN]),
            ("log10", [-INFINITY, -INFINITY, INFINITY, NAN]),
            ("cbrt", [0.0, -0.0, INFINITY, -INFINITY]),
            ("sqrt", [0.0, -0.0, INFINITY, NAN]),
        ];
        for ((name, function), (expected, results)) in ONE.into_iter().zip(expect) {
            assert_eq!(name, expected);
            for (x, result) in [0.0, -0.0, INFINITY, -INFINITY].into_iter().zip(results) {
                same(name, &[x], function(x), result);
            }
        }
    }

    #[test]
    fn what_has_no_value_is_a_nan() {
        for (name, function) in ONE {
            same(name, &[NAN], function(NAN), NAN);
        }
        for (name, x) in [("asin", 1.5), ("acos", -1.5), ("acosh", 0.5), ("atanh", 2.0), ("ln", -1.0)] {
            let function = ONE.iter().find(|(known, _)| *known == name).unwrap().1;
            same(name, &[x], function(x), NAN);
        }
        same("sqrt", &[-1.0], sqrt(-1.0), NAN);
        same("log10", &[-1e-300], log10(-1e-300), NAN);
        for (x, y) in [(NAN, 1.0), (1.0, NAN), (NAN, NAN), (NAN, 0.0)] {
            same("atan2", &[x, y], atan2(x, y), NAN);
        }
        for (x, y) in
            [(NAN, 1.0), (NAN, 0.5), (NAN, -0.5), (2.0, NAN), (-8.0, 1.0 / 3.0), (-4.0, 0.5), (-4.0, -0.5)]
        {
            same("pow", &[x, y], pow(x, y), NAN);
        }
    }

    #[test]
    fn powers_at_the_edges_give_what_the_standard_says() {
        // IEEE 754-2019, sect. 9.2.1, pow.
        for (x, y, expect) in [
            (NAN, 0.0, 1.0),
            (0.0, 0.0, 1.0),
            (INFINITY, -0.0, 1.0),
            (1.0, NAN, 1.0),
            (1.0, INFINITY, 1.0),
            (-1.0, INFINITY, 1.0),
            (-1.0, -INFINITY, 1.0),
            (0.0, -1.0, INFINITY),
            (-0.0, -3.0, -INFINITY),
            (-0.0, -2.0, INFINITY),
            (-0.0, -0.5, INFINITY),
            (-0.0, 3.0, -0.0),
            (-0.0, 1.0, -0.0),
            (-0.0, 2.0, 0.0),
            (-0.0, 0.5, 0.0),
            (0.5, INFINITY, 0.0),
            (0.5, -INFINITY, INFINITY),
            (2.0, INFINITY, INFINITY),
            (2.0, -INFINITY, 0.0),
            (INFINITY, 0.5, INFINITY),
            (INFINITY, -0.5, 0.0),
            (-INFINITY, 3.0, -INFINITY),
            (-INFINITY, 2.0, INFINITY),
            (-INFINITY, 0.5, INFINITY),
            (-INFINITY, -3.0, -0.0),
            (-INFINITY, -0.5, 0.0),
            (-2.0, 3.0, -8.0),
            (-2.0, -1075.0, -0.0),
            (-2.0, 1025.0, -INFINITY),
            (f64::MAX, 2.0, INFINITY),
            (f64::MAX, -2.0, 0.0),
        ] {
            same("pow", &[x, y], pow(x, y), expect);
        }
    }

    #[test]
    fn angles_on_the_axes_give_what_the_standard_says() {
        // IEEE 754-2019, sect. 9.2.1, atan2.
        use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};
        for (y, x, expect) in [
            (0.0, 0.0, 0.0),
            (-0.0, 0.0, -0.0),
            (0.0, -0.0, PI),
            (-0.0, -0.0, -PI),
            (0.0, 3.0, 0.0),
            (-0.0, 3.0, -0.0),
            (0.0, -3.0, PI),
            (-0.0, -3.0, -PI),
            (2.0, 0.0, FRAC_PI_2),
            (-2.0, -0.0, -FRAC_PI_2),
            (2.0, INFINITY, 0.0),
            (-2.0, INFINITY, -0.0),
            (2.0, -INFINITY, PI),
            (INFINITY, 2.0, FRAC_PI_2),
            (-INFINITY, -2.0, -FRAC_PI_2),
            (INFINITY, INFINITY, FRAC_PI_4),
            (-INFINITY, -INFINITY, -2.356194490192345),
        ] {
            same("atan2", &[y, x], atan2(y, x), expect);
        }
    }

    #[test]
    fn a_power_by_squaring_is_exact_where_its_products_are() {
        for (x, n, expect) in [(3.0, 0, 1.0), (3.0, 1, 3.0), (3.0, 13, 1594323.0), (-2.0, 31, -2147483648.0)]
        {
            same("power", &[x], power(x, n), expect);
        }
        // The chain: x * x^2 first, then times x^4.
        let x = 1.1_f64;
        let square = x * x;
        same("power", &[x], power(x, 7), (x * square) * (square * square));
    }
}
