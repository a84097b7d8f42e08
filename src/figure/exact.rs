//! Rounding of doubles in exact decimal arithmetic.
//!
//! A double is a whole number of some power of ten, so every rounding here is of the number itself and not of an
//! image of it: ties are ties of the double, and what is rounded up is never too small.

use num_bigint::{BigInt, Sign};

/// A value and its bound as whole numbers of one small power of ten.
pub(super) struct Pair {
    value: BigInt,
    bound: BigInt,
    /// The unit of both is `10^-scale`.
    scale: i32,
}

/// A value and its bound as whole numbers of `10^place`.
pub(super) struct Rounded {
    /// The value, rounded to the nearest, ties to even.
    pub(super) value: BigInt,
    /// The bound and what rounding moved the value by, rounded up.
    pub(super) bound: BigInt,
}

impl Pair {
    /// `None` where one is not finite or the bound is negative.
    pub(super) fn of(value: f64, bound: f64) -> Option<Pair> {
        if !value.is_finite() || !bound.is_finite() || bound < 0.0 {
            return None;
        }
        let ((value, a), (bound, b)) = (parts(value), parts(bound));
        let scale = a.max(b);
        Some(Pair { value: value * ten(scale - a), bound: bound * ten(scale - b), scale })
    }

    /// Both in units of `10^place`.
    pub(super) fn at(&self, place: i32) -> Rounded {
        // Refine the unit where the place lies below it.
        let finer = (-place - self.scale).max(0);
        let (value, bound) = (&self.value * ten(finer), &self.bound * ten(finer));
        let unit = ten(place + self.scale + finer);
        let rounded = half_even(&value, &unit);
        let moved = BigInt::from((value - &rounded * &unit).magnitude().clone());
        Rounded { value: rounded, bound: up(&(bound + moved), &unit) }
    }
}

/// `number / unit` to the nearest whole number, ties to even (ISO 80000-1:2009, annex B, rule A).
pub(super) fn half_even(number: &BigInt, unit: &BigInt) -> BigInt {
    let (size, unit) = (number.magnitude(), unit.magnitude());
    let (quotient, rest) = (size / unit, size % unit);
    let twice = rest * 2_u32;
    let odd = quotient.bit(0);
    let away = twice > *unit || twice == *unit && odd;
    let size = if away { quotient + 1_u32 } else { quotient };
    if size.bits() == 0 { BigInt::ZERO } else { BigInt::from_biguint(number.sign(), size) }
}

/// The smallest whole number not below `number / unit`, for a number of at least 0.
fn up(number: &BigInt, unit: &BigInt) -> BigInt {
    let (quotient, rest) = (number / unit, number % unit);
    if rest.sign() == Sign::NoSign { quotient } else { quotient + 1 }
}

/// `10^n`, 1 for a negative n.
pub(super) fn ten(n: i32) -> BigInt {
    BigInt::from(10).pow(u32::try_from(n).unwrap_or(0))
}

/// A finite double as a whole number of `10^-scale`.
fn parts(x: f64) -> (BigInt, i32) {
    let bits = x.to_bits();
    let fraction = bits & ((1 << 52) - 1);
    let field = i32::try_from((bits >> 52) & 0x7ff).unwrap_or(0);
    // x is mantissa times 2^power.
    let (mantissa, power) = if field == 0 { (fraction, -1074) } else { (fraction | 1 << 52, field - 1075) };
    if mantissa == 0 {
        return (BigInt::ZERO, 0);
    }
    let zeros = i32::try_from(mantissa.trailing_zeros()).unwrap_or(0);
    let (odd, power) = (mantissa >> mantissa.trailing_zeros(), power + zeros);
    let size = BigInt::from(odd);
    // 2^-n is 5^n times 10^-n.
    let (size, scale) = match u32::try_from(power) {
        Ok(power) => (size << power, 0),
        Err(_) => (size * BigInt::from(5).pow(power.unsigned_abs()), -power),
    };
    (if x < 0.0 { -size } else { size }, scale)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_double_is_taken_as_it_is() {
        assert_eq!(parts(-0.375), (BigInt::from(-375), 3));
        assert_eq!(parts(1e22), ("10000000000000000000000".parse().unwrap(), 0));
        let tenth = "1000000000000000055511151231257827021181583404541015625";
        assert_eq!(parts(0.1), (tenth.parse().unwrap(), 55));
        assert_eq!(parts(5e-324).1, 1074);
        assert_eq!(parts(-0.0), (BigInt::ZERO, 0));
    }

    /// Source: rule A of ISO 80000-1:2009, annex B, with its own examples 12.223 to 1235.0 and further common cases
    /// (the same rule in IS 2:1960).
    #[test]
    fn decimals_are_rounded_by_rule_a_of_iso_80000_1() {
        let mut cases = 0;
        for line in include_str!("data/rounding_cases.csv").lines().skip(1) {
            let fields: Vec<&str> = line.split(',').collect();
            let (number, a) = read(fields[0]);
            let (unit, b) = read(fields[1]);
            let (expected, c) = read(fields[2]);
            let scale = a.max(b).max(c);
            let unit = unit * ten(scale - b);
            let rounded = half_even(&(number * ten(scale - a)), &unit) * unit;
            assert_eq!(rounded, expected * ten(scale - c), "{line}");
            cases += 1;
        }
        assert_eq!(cases, 16);
    }

    /// A decimal as a whole number of `10^-scale`.
    fn read(text: &str) -> (BigInt, i32) {
        let behind = text.split_once('.').map_or(0, |(_, behind)| behind.len());
        (text.replace('.', "").parse().unwrap(), i32::try_from(behind).unwrap())
    }
}
