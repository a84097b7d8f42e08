//! Where a scheme is stable: on `y' = lambda y` one step multiplies `y` by the polynomial `R(z)`, `z = h lambda`,
//! and the scheme is stable where `|R(z)| <= 1`.
//!
//! Source: Hairer & Wanner II (2nd ed. 1996), sect. IV.2.

use num_rational::BigRational;
use num_traits::{One, Zero};

use super::sturm::first_rise;
use super::tableau::ExactTableau;
use crate::arithmetic::ratio;

/// The stability polynomial `R(z) = 1 + sum_k z^k b^T A^(k-1) 1` of an explicit scheme.
#[derive(Clone, Debug, PartialEq)]
pub struct Stability {
    /// Coefficients from `z^0` upward, in lowest terms; the last is not zero.
    pub exact: Vec<BigRational>,
    /// The same, each rounded once.
    pub coefficients: Vec<f64>,
}

impl Stability {
    /// The polynomial of the scheme with these weights, `b` or `b_hat`.
    pub fn of_weights(tableau: &ExactTableau, weights: &[BigRational]) -> Self {
        let mut exact = vec![BigRational::one()];
        // A^(k-1) 1, from which s multiplications leave nothing: A is strictly lower triangular.
        let mut stages = vec![BigRational::one(); tableau.stages()];
        for _ in 0..tableau.stages() {
            exact.push(dot(weights, &stages));
            stages = tableau.a.iter().map(|row| dot(row, &stages)).collect();
        }
        while exact.len() > 1 && exact.last().is_some_and(Zero::is_zero) {
            exact.pop();
        }
        Self { coefficients: exact.iter().map(ratio::nearest).collect(), exact }
    }

    /// `R(z)` as real and imaginary part, by Horner's rule.
    pub fn at(&self, (x, y): (f64, f64)) -> (f64, f64) {
        self.coefficients
            .iter()
            .rev()
            .fold((0.0, 0.0), |(u, v), coefficient| (u * x - v * y + coefficient, u * y + v * x))
    }

    /// `|R(z)|`, rounded: the factor by which one step damps or amplifies.
    pub fn amplification(&self, z: (f64, f64)) -> f64 {
        let (u, v) = self.at(z);
        (u * u + v * v).sqrt()
    }

    /// The negative number `x` where the stable part of the real axis that begins at 0 ends, to the last bit.
    /// 0 where the scheme is not stable beside 0 at all.
    pub fn real_limit(&self) -> f64 {
        let mirrored: Vec<BigRational> = self
            .exact
            .iter()
            .enumerate()
            .map(|(power, coefficient)| if power % 2 == 1 { -coefficient } else { coefficient.clone() })
            .collect();
        let end = first_rise(&less_one(product(&mirrored, &mirrored)));
        if end > 0.0 { -end } else { 0.0 }
    }

    /// The positive number `y` where the stable part of the imaginary axis that begins at 0 ends, to the last bit.
    /// 0 where the scheme is not stable beside 0 at all: an undamped oscillation then grows at every step.
    pub fn imaginary_limit(&self) -> f64 {
        // R(iy) = even part + i odd part, with the signs of the powers of i.
        let part = |parity: usize| -> Vec<BigRational> {
            let signed = |(power, coefficient): (usize, &BigRational)| match power % 4 {
                _ if power % 2 != parity => BigRational::zero(),
                0 | 1 => coefficient.clone(),
                _ => -coefficient,
            };
            self.exact.iter().enumerate().map(signed).collect()
        };
        let (even, odd) = (part(0), part(1));
        let sum = product(&even, &even).into_iter().zip(product(&odd, &odd)).map(|(a, b)| a + b);
        first_rise(&less_one(sum.collect()))
    }

    /// A distance from 0 beyond which no point is stable: from there on the leading term alone is larger than all
    /// others together and 1. `None` where there is no such distance, because `R` is constant.
    pub(super) fn radius(&self) -> Option<f64> {
        let (leading, others) = self.coefficients.split_last().filter(|(_, others)| !others.is_empty())?;
        let exceeds = |r: f64| {
            let (sum, power) =
                others.iter().fold((1.0, 1.0), |(sum, power), c| (sum + c.abs() * power, power * r));
            leading.abs() * power > sum
        };
        let mut r = 0.5;
        while !exceeds(r) {
            r *= 1.25;
        }
        Some(r)
    }
}

fn dot(a: &[BigRational], b: &[BigRational]) -> BigRational {
    a.iter().zip(b).filter(|(a, b)| !a.is_zero() && !b.is_zero()).map(|(a, b)| a * b).sum()
}

fn product(a: &[BigRational], b: &[BigRational]) -> Vec<BigRational> {
    let mut result = vec![BigRational::zero(); (a.len() + b.len()).saturating_sub(1)];
    for (i, a) in a.iter().enumerate() {
        for (j, b) in b.iter().enumerate() {
            result[i + j] += a * b;
        }
    }
    result
}

fn less_one(mut polynomial: Vec<BigRational>) -> Vec<BigRational> {
    polynomial[0] -= BigRational::one();
    polynomial
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::scheme::{all, find};

    fn of(key: &str) -> Stability {
        let exact = &find(key).unwrap().tableau.exact;
        Stability::of_weights(exact, &exact.b)
    }

    fn embedded(key: &str) -> Stability {
        let exact = &find(key).unwrap().tableau.exact;
        Stability::of_weights(exact, exact.b_hat.as_ref().unwrap())
    }

    fn check_coefficients(stability: &Stability, expect: &str) {
        let ours: Vec<String> = stability.exact.iter().map(ToString::to_string).collect();
        assert_eq!(ours.join(" "), expect);
    }

    #[test]
    fn polynomials_are_the_published_ones() {
        // Hairer & Wanner II, sect. IV.2: a scheme with s = p stages has the Taylor polynomial of e^z; formula (2.14)
        // there for Dormand & Prince. The others: a separate calculation from the published tableaux.
        check_coefficients(&of("euler"), "1 1");
        for key in ["midpoint", "heun", "ralston"] {
            check_coefficients(&of(key), "1 1 1/2");
        }
        for key in ["kutta3", "bogacki-shampine"] {
            check_coefficients(&of(key), "1 1 1/2 1/6");
        }
        for key in ["rk4", "three-eighths"] {
            check_coefficients(&of(key), "1 1 1/2 1/6 1/24");
        }
        check_coefficients(&of("fehlberg"), "1 1 1/2 1/6 1/24 1/104");
        check_coefficients(&of("dormand-prince"), "1 1 1/2 1/6 1/24 1/120 1/600");
        check_coefficients(&embedded("bogacki-shampine"), "1 1 1/2 3/16 1/48");
        check_coefficients(&embedded("fehlberg"), "1 1 1/2 1/6 1/24 1/120 1/2080");
        check_coefficients(&embedded("dormand-prince"), "1 1 1/2 1/6 1/24 1097/120000 161/120000 1/24000");
    }

    #[test]
    fn limits_on_both_axes_are_the_reference_values() {
        // A separate bisection in 50 digits; Hairer & Wanner II, sect. IV.2 print -2, -2.51, -2.78 and -3.3.
        let two = (-2.0, 0.0);
        let three = (-2.512745326618328624023735, 1.732050807568877293527446);
        let four = (-2.785293563405281623529759, 2.828427124746190097603377);
        for (key, limits) in [
            ("euler", two),
            ("midpoint", two),
            ("heun", two),
            ("ralston", two),
            ("kutta3", three),
            ("rk4", four),
            ("three-eighths", four),
            ("bogacki-shampine", three),
            ("fehlberg", (-3.020017543970502708556828, 0.0)),
            ("dormand-prince", (-3.306567892634946503721371, 0.9971890086325299155223288)),
        ] {
            assert_eq!((of(key).real_limit(), of(key).imaginary_limit()), limits, "{key}");
        }
        for (key, limits) in [
            ("bogacki-shampine", (-3.15234661208717978373733, 2.246433045166323953917795)),
            ("fehlberg", (-3.677706621321895594864148, 0.0)),
            ("dormand-prince", (-4.384986320801944355459081, 0.0)),
        ] {
            let (real, imaginary) = (embedded(key).real_limit(), embedded(key).imaginary_limit());
            assert_eq!((real, imaginary), limits, "{key}, embedded");
        }
    }

    #[test]
    fn an_undamped_oscillation_changes_by_the_closed_form() {
        // |R(iy)| from its closed form: 1 + y^2; 1 + y^4/4; 1 - y^4/12 + y^6/36; 1 - y^6/72 + y^8/576, under a root.
        for (key, at) in [
            ("euler", [1.004987562112089027021926, 1.118033988749894848204587, 2.236067977499789696409174]),
            ("heun", [1.000012499921875976547241, 1.007782218537318706545827, 2.236067977499789696409174]),
            ("kutta3", [0.9999958472135994047777379, 0.997609991151073248133509, 1.201850425154663097706407]),
            ("rk4", [0.9999999930642360870587006, 0.9998948783722911383641912, 0.7453559924999298988030579]),
        ] {
            for (y, expect) in [0.1, 0.5, 2.0].into_iter().zip(at) {
                let ours = of(key).amplification((0.0, y));
                // Horner's rule rounds twice for each of at most four powers, and the norm thrice.
                assert!((ours - expect).abs() <= 11.0 * f64::EPSILON * expect, "{key} at {y} i: {ours}");
            }
        }
        let (u, v) = of("rk4").at((0.0, 1.0));
        let phase = crate::arithmetic::elementary::atan2(v, u);
        assert!((phase - 0.9944211062037129390037512).abs() <= 4.0 * f64::EPSILON);
    }

    #[test]
    fn beyond_the_radius_nothing_is_stable() {
        for scheme in all() {
            let stability = of(scheme.key);
            let r = stability.radius().unwrap();
            assert!(r > -stability.real_limit() && r > stability.imaginary_limit());
            for (x, y) in [(-r, 0.0), (r, 0.0), (0.0, r), (-0.8 * r, 0.6 * r), (0.6 * r, -0.8 * r)] {
                assert!(stability.amplification((x, y)) > 1.0, "{}", scheme.key);
            }
        }
    }
}
