//! From exact ratios to binary64 and back: every coefficient is rounded once.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{Signed, ToPrimitive, Zero};

/// Bits of a binary64 significand.
const SIGNIFICAND: i64 = 53;
/// Exponent of the lowest bit of the smallest binary64 number.
const LOWEST: i64 = -1074;

/// The binary64 number nearest to an exact ratio, ties to even; an infinity where it is too large, and a
/// zero of the same sign where it is too small.
pub fn nearest(ratio: &BigRational) -> f64 {
    let magnitude = nearest_magnitude(ratio.numer().abs(), ratio.denom().clone());
    if ratio.is_negative() { -magnitude } else { magnitude }
}

/// The exact value of a finite binary64 number.
pub fn exact(x: f64) -> Option<BigRational> {
    BigRational::from_float(x)
}

fn nearest_magnitude(numerator: BigInt, denominator: BigInt) -> f64 {
    if numerator.is_zero() {
        return 0.0;
    }
    // Two bits more than a significand, so that what is cut off can be compared with one half.
    let shift = SIGNIFICAND + 2 - (length(&numerator) - length(&denominator));
    let (up, down) = if shift >= 0 { (shift, 0) } else { (0, -shift) };
    let (dividend, divisor) = (numerator << up, denominator << down);
    let quotient = &dividend / &divisor;
    let inexact = !(dividend % divisor).is_zero();
    let surplus = length(&quotient) - SIGNIFICAND;
    let lowest = (surplus - shift).max(LOWEST);
    let cut = lowest + shift;
    let mut significand = &quotient >> cut;
    let rest = &quotient - (&significand << cut);
    let half = BigInt::from(1) << (cut - 1);
    let odd = significand.bit(0);
    if rest > half || (rest == half && (inexact || odd)) {
        significand += 1;
    }
    // At most 2^53, hence exact; the product is exact too because the rounding is done.
    significand.to_f64().map_or(f64::INFINITY, |significand| scale(significand, lowest))
}

/// `x * 2^n` for an integer `x` of at most 54 bits whose product is representable or too large.
fn scale(x: f64, n: i64) -> f64 {
    let (high, low) = if n > 900 { (900, n - 900) } else { (n, 0) };
    x * power_of_two(high) * power_of_two(low)
}

fn power_of_two(n: i64) -> f64 {
    match n {
        1024.. => f64::INFINITY,
        -1022..1024 => f64::from_bits((n + 1023).unsigned_abs() << 52),
        LOWEST..-1022 => f64::from_bits(1 << (n - LOWEST)),
        _ => 0.0,
    }
}

fn length(x: &BigInt) -> i64 {
    i64::try_from(x.bits()).unwrap_or(i64::MAX)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(numerator: &str, denominator: &str, expect: f64) {
        let ratio = BigRational::new(numerator.parse().unwrap(), denominator.parse().unwrap());
        assert_eq!(nearest(&ratio).to_bits(), expect.to_bits(), "{ratio}");
        let negative = if ratio.is_zero() { 0.0 } else { -expect };
        assert_eq!(nearest(&-ratio).to_bits(), negative.to_bits());
    }

    #[test]
    fn small_ratios_round_as_one_division_does() {
        // IEEE 754: the quotient of two exact integers is the nearest number to their ratio.
        for numerator in 1..60_i32 {
            for denominator in 1..60_i32 {
                check(
                    &numerator.to_string(),
                    &denominator.to_string(),
                    f64::from(numerator) / f64::from(denominator),
                );
            }
        }
    }

    #[test]
    fn ties_go_to_the_even_neighbour_and_the_least_excess_breaks_them() {
        // 2^53 + 1 lies between 2^53 and 2^53 + 2.
        check("9007199254740993", "1", 9007199254740992.0);
        check("9007199254740995", "1", 9007199254740996.0);
        check("9007199254740993000000000000000001", "1000000000000000000", 9007199254740994.0);
        check("9007199254740992999999999999999999", "1000000000000000000", 9007199254740992.0);
    }

    #[test]
    fn the_ends_of_the_range_are_met() {
        let two_to = |n: u32| (BigInt::from(1) << n).to_string();
        check("0", "1", 0.0);
        check("1", &two_to(1074), 5e-324);
        check("1", &two_to(1075), 0.0);
        check("3", &two_to(1075), 1e-323);
        check("3", &two_to(1076), 5e-324);
        check("1", &two_to(1022), f64::MIN_POSITIVE);
        check(&two_to(1023), "1", 8.98846567431158e307);
        check(&two_to(1024), "1", f64::INFINITY);
    }

    #[test]
    fn every_finite_number_comes_back_from_its_exact_value() {
        let mut bits = 1_u64;
        for _ in 0..2000 {
            bits = bits.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
            let x = f64::from_bits(bits);
            let back = exact(x).map(|ratio| nearest(&ratio));
            assert_eq!(back, x.is_finite().then_some(x));
        }
    }
}
