//! Arguments for which the library behind [`super::elementary`] misses the nearest number: powers and angles at the
//! ends of the range, where its pairs of numbers lose their low part. They are rare, so they are computed exactly.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, ToPrimitive};

use super::ratio;

/// `x^y` where the library cannot be trusted with it; `None` where it can.
pub(super) fn special_power(x: f64, y: f64) -> Option<f64> {
    #[expect(clippy::float_cmp, reason = "these very exponents and this very base")]
    let (one, same, root, inverse) = (y == 0.0 || x == 1.0, y == 1.0, y == 0.5, y == -0.5);
    if one {
        return Some(1.0);
    }
    if same {
        return Some(x);
    }
    if x.is_finite() && x > 0.0 {
        if root {
            return Some(x.sqrt());
        }
        if inverse {
            return Some(inverse_root(x));
        }
    }
    whole_power(x, y)
}

/// `1 / sqrt(x)` for a positive number: the library fails near the upper end of the range, and 1 over the rounded
/// root rounds twice. Taking out a power of 4 changes no bit of the result.
fn inverse_root(x: f64) -> f64 {
    const TWO_TO_300: f64 = f64::from_bits((1023 + 300) << 52);
    const TWO_TO_600: f64 = TWO_TO_300 * TWO_TO_300;
    if x > 1e150 {
        pxfm::f_pow(x / TWO_TO_600, -0.5) / TWO_TO_300
    } else if x < 1e-150 {
        pxfm::f_pow(x * TWO_TO_600, -0.5) * TWO_TO_300
    } else {
        pxfm::f_pow(x, -0.5)
    }
}

/// `x^y` for a whole exponent of at most four digits, where the result is near the ends of the range.
fn whole_power(x: f64, y: f64) -> Option<f64> {
    const MOST: f64 = 9999.0;
    // Powers of two between which the library rounds rightly.
    const SAFE: std::ops::Range<i64> = -900..990;
    let n = y.to_i32().filter(|&n| f64::from(n).to_bits() == y.to_bits() && y.abs() <= MOST)?;
    if x == 0.0 || !x.is_finite() {
        return None;
    }
    let exponent = exponent(x);
    let n_wide = i64::from(n);
    let (one, other) = (n_wide * exponent, n_wide * (exponent + 1));
    let (low, high) = if one < other { (one, other) } else { (other, one) };
    if SAFE.contains(&low) && SAFE.contains(&high) {
        return None;
    }
    let negative = x < 0.0 && n % 2 != 0;
    let magnitude = if low > 1025 {
        f64::INFINITY
    } else if high < -1080 {
        0.0
    } else {
        ratio::nearest(&ratio::exact(x.abs())?.pow(n))
    };
    Some(if negative { -magnitude } else { magnitude })
}

/// The angle of a point so near the positive half of the x axis that the result may be subnormal: `y / x` less a
/// part that is far too small to see, except that it breaks a tie.
pub(super) fn tiny_angle(y: f64, x: f64) -> Option<f64> {
    if y == 0.0 || !y.is_finite() || x <= 0.0 || !x.is_finite() || exponent(y) - exponent(x) > -1000 {
        return None;
    }
    // Two numbers of 53 bits cannot come nearer to a tie than this without being one.
    let less = BigRational::new(BigInt::one(), BigInt::one() << 200);
    Some(ratio::nearest(&(ratio::exact(y)? / ratio::exact(x)? * (BigRational::one() - less))))
}

/// The power of two at or below the magnitude of a number that is finite and not 0.
fn exponent(x: f64) -> i64 {
    let bits = x.to_bits() & !(1 << 63);
    let field = i64::try_from(bits >> 52).unwrap_or(0);
    if field == 0 { -1011 - i64::from(bits.leading_zeros()) } else { field - 1023 }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn exponents_are_those_of_the_format() {
        for (x, expect) in
            [(1.0, 0), (-1.5, 0), (0.99, -1), (f64::MAX, 1023), (f64::MIN_POSITIVE, -1022), (5e-324, -1074)]
        {
            assert_eq!(exponent(x), expect, "{x}");
        }
    }

    #[test]
    fn a_tie_of_a_tiny_angle_falls_towards_zero() {
        // y / x is 1.5 times the smallest number, and the angle a trace less; the quotient alone would round up.
        let x = f64::from_bits((1023 + 100) << 52);
        let y = 3.0 * f64::from_bits(1 << 52) / f64::from_bits((1023 - 47) << 52);
        let quotient = y / x;
        assert_eq!((quotient.to_bits(), tiny_angle(y, x).map(f64::to_bits)), (2, Some(1)));
    }
}
