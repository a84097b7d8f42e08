//! Where a polynomial first becomes positive, in exact ratios: no step of a search can skip a narrow gap.
//!
//! Source: Sturm's theorem, for instance von zur Gathen & Gerhard, Modern Computer Algebra (3rd ed. 2013), ch. 4.

use num_rational::BigRational;
use num_traits::{One, Signed, Zero};

use crate::arithmetic::ratio;

/// The largest `x` such that `p <= 0` on `[0, x]`, for `p(0) = 0`: 0 where `p` rises at once, and an infinity where
/// it never does. Coefficients from `x^0` upward. The result is within one rounding of the exact place.
pub(super) fn first_rise(p: &[BigRational]) -> f64 {
    let mut p = trimmed(p.to_vec());
    let zeros = p.iter().take_while(|coefficient| coefficient.is_zero()).count();
    p.drain(..zeros);
    let Some(leading) = p.last() else { return f64::INFINITY };
    if p[0].is_positive() {
        return 0.0;
    }
    // Cauchy's bound of the roots.
    let ratios = p.iter().map(|coefficient| (coefficient / leading).abs());
    let end = ratios.max().unwrap_or_else(BigRational::one) + BigRational::one();
    let chain = chain(without_repeated_roots(&p));
    let mut from = BigRational::zero();
    while roots_between(&chain, &from, &end) > 0 {
        let (before, root) = narrow(&chain, from, end.clone());
        let mut beside = &root - &before;
        while roots_between(&chain, &root, &(&root + &beside)) > 0 {
            beside = halved(beside);
        }
        // `root` may be the root itself, but nothing lies between it and the point beside it.
        let after = &root + halved(beside);
        if value(&p, &after).is_positive() {
            return ratio::nearest(&root);
        }
        from = after;
    }
    if value(&p, &end).is_positive() { ratio::nearest(&from) } else { f64::INFINITY }
}

/// Narrows `(low, high]`, which holds a root, to its lowest root alone, until both ends round to the same number.
fn narrow(
    chain: &[Vec<BigRational>],
    mut low: BigRational,
    mut high: BigRational,
) -> (BigRational, BigRational) {
    while roots_between(chain, &low, &high) > 1 {
        let middle = halved(&low + &high);
        if roots_between(chain, &low, &middle) > 0 {
            high = middle;
        } else {
            low = middle;
        }
    }
    // One root, and not a repeated one: now the sign tells on which side a point lies.
    let p = &chain[0];
    let below = value(p, &low).is_negative();
    // Each round gains a bit; an end that is exactly between two numbers would never let both round alike.
    for _ in 0..256 {
        if ratio::nearest(&low).to_bits() == ratio::nearest(&high).to_bits() {
            break;
        }
        let middle = halved(&low + &high);
        let at_middle = value(p, &middle);
        if at_middle.is_zero() || at_middle.is_negative() != below {
            high = middle;
        } else {
            low = middle;
        }
    }
    (low, high)
}

fn halved(x: BigRational) -> BigRational {
    x / BigRational::from_integer(2.into())
}

/// Number of different roots in `(low, high]`.
fn roots_between(chain: &[Vec<BigRational>], low: &BigRational, high: &BigRational) -> usize {
    sign_changes(chain, low).saturating_sub(sign_changes(chain, high))
}

fn sign_changes(chain: &[Vec<BigRational>], x: &BigRational) -> usize {
    let values = chain.iter().map(|p| value(p, x)).filter(|value| !value.is_zero());
    let signs: Vec<bool> = values.map(|value| value.is_positive()).collect();
    signs.windows(2).filter(|pair| pair[0] != pair[1]).count()
}

fn value(p: &[BigRational], x: &BigRational) -> BigRational {
    p.iter().rev().fold(BigRational::zero(), |sum, coefficient| sum * x + coefficient)
}

/// Sturm's chain: the polynomial, its derivative, and the negated remainders.
fn chain(p: Vec<BigRational>) -> Vec<Vec<BigRational>> {
    let mut next = derivative(&p);
    let mut chain = vec![p];
    while !next.is_empty() {
        let (_, rest) = divided(&chain[chain.len() - 1], &next);
        chain.push(next);
        next = shortened(rest.into_iter().map(|coefficient| -coefficient).collect());
    }
    chain
}

fn without_repeated_roots(p: &[BigRational]) -> Vec<BigRational> {
    let (mut a, mut b) = (p.to_vec(), derivative(p));
    while !b.is_empty() {
        let (_, rest) = divided(&a, &b);
        (a, b) = (b, shortened(rest));
    }
    shortened(divided(p, &a).0)
}

/// The same polynomial times a positive number, with whole coefficients that have no common divisor: without this
/// the remainders grow beyond use.
fn shortened(p: Vec<BigRational>) -> Vec<BigRational> {
    let content = p.iter().map(Signed::abs).fold(BigRational::zero(), gcd);
    if content.is_zero() { p } else { p.into_iter().map(|coefficient| coefficient / &content).collect() }
}

/// The largest number of which both are whole multiples, for numbers that are not negative.
fn gcd(mut a: BigRational, mut b: BigRational) -> BigRational {
    while !b.is_zero() {
        (a, b) = (b.clone(), a % b);
    }
    a
}

fn derivative(p: &[BigRational]) -> Vec<BigRational> {
    let powers = (0_u32..).map(|power| BigRational::from_integer(power.into()));
    trimmed(p.iter().zip(powers).skip(1).map(|(coefficient, power)| coefficient * power).collect())
}

/// Quotient and remainder; the divisor is not empty and its last coefficient not zero.
fn divided(p: &[BigRational], divisor: &[BigRational]) -> (Vec<BigRational>, Vec<BigRational>) {
    let mut rest = p.to_vec();
    let mut quotient = vec![BigRational::zero(); (p.len() + 1).saturating_sub(divisor.len())];
    for shift in (0..quotient.len()).rev() {
        let factor = &rest[shift + divisor.len() - 1] / &divisor[divisor.len() - 1];
        for (place, coefficient) in divisor.iter().enumerate() {
            rest[shift + place] -= &factor * coefficient;
        }
        quotient[shift] = factor;
    }
    (trimmed(quotient), trimmed(rest))
}

fn trimmed(mut p: Vec<BigRational>) -> Vec<BigRational> {
    while p.last().is_some_and(Zero::is_zero) {
        p.pop();
    }
    p
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The product of `sign`, `x`, and `(x - root)` for each root, given in hundredths.
    fn from_roots(sign: i64, roots: &[i64]) -> Vec<BigRational> {
        let mut p = vec![BigRational::zero(), BigRational::from_integer(sign.into())];
        for &root in roots {
            let root = BigRational::new(root.into(), 100.into());
            let mut next = vec![BigRational::zero(); p.len() + 1];
            for (power, coefficient) in p.iter().enumerate() {
                next[power + 1] += coefficient;
                next[power] -= coefficient * &root;
            }
            p = next;
        }
        p
    }

    fn check(sign: i64, roots: &[i64], expect: f64) {
        assert_eq!(first_rise(&from_roots(sign, roots)).to_bits(), expect.to_bits(), "{sign} {roots:?}");
    }

    #[test]
    fn the_lowest_crossing_is_found() {
        check(1, &[200], 2.0);
        check(1, &[200, 201, 202], 2.0);
        check(1, &[-300, 125, 126, 700], 1.25);
        check(-1, &[125, 126], 1.25);
        check(1, &[-300, 125], 1.25);
        check(-1, &[130, 900], 1.3);
        check(1, &[1, 2, 100000], 0.01);
    }

    #[test]
    fn a_root_that_is_only_touched_is_passed() {
        check(1, &[100, 100, 300], 3.0);
        check(1, &[100, 100, 100, 300, 500], 1.0);
        check(-1, &[100, 100, 150, 150], f64::INFINITY);
        check(-1, &[33, 33], f64::INFINITY);
    }

    #[test]
    fn what_rises_at_once_or_never_is_told() {
        check(1, &[], 0.0);
        check(-1, &[], f64::INFINITY);
        check(1, &[-100], 0.0);
        assert_eq!(first_rise(&[]).to_bits(), f64::INFINITY.to_bits());
    }
}
