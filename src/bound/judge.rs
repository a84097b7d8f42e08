//! From the values of a quantity on three meshes, and by the companion, to a bound and a grade.
//!
//! Sources: Roache (1994), J. Fluids Eng. 116, 405-413, and (1998), Verification and Validation in Computational
//! Science and Engineering (safety factors 1.25 and 3); Oberkampf & Roy (2010), Verification and Validation in
//! Scientific Computing, sect. 8.6 (order clipped to [0.5, p], factor 3 outside the asymptotic range). The
//! reported value is that of the coarsest mesh, so that its error is extrapolated from two finer ones.

use super::outcome::{Estimates, Grade};
use crate::arithmetic::{elementary, larger, smaller};

/// Safety factor of grade converged.
pub const SAFETY_CONVERGED: f64 = 1.25;
/// Safety factor of grade corroborated, on the larger of two estimates.
pub const SAFETY_CORROBORATED: f64 = 1.5;
/// Safety factor of grade indicated.
pub const SAFETY_INDICATED: f64 = 3.0;
/// Two estimates agree when the larger is at most this many times the smaller.
pub const AGREEMENT: f64 = 1.5;
/// Two estimates contradict each other when the larger is more than this many times the smaller.
pub const CONTRADICTION: f64 = 10.0;
/// The observed order is near the formal one within this share of it.
pub const ORDER_WINDOW: f64 = 0.1;
/// Differences below so many units in the last place are rounding.
pub const FLOOR_ULPS: f64 = 50.0;
/// A spread of the meshes above this share of the range of the expression means that they have parted.
pub const PARTED: f64 = 0.1;

/// What is known of a quantity before it is judged.
#[derive(Clone, Debug)]
pub struct Evidence<'a> {
    /// Its value on the mesh of the run, the halved and the twice halved one.
    pub values: [Option<f64>; 3],
    /// Its value by the companion; `None` where there is none.
    pub corrected: Option<f64>,
    /// Formal order of the scheme.
    pub order: u32,
    /// Size of the numbers it was computed from, to tell rounding.
    pub scale: f64,
    /// Steps of the run; rounding of a long run is told from its square root.
    pub steps: f64,
    /// Range of the expression over the run, to tell meshes that have parted.
    pub range: f64,
    /// How far interpolation may move it.
    pub interpolation: f64,
    /// How far rounding may move it.
    pub rounding: f64,
    /// Why the grade is at most indicated, where something says so.
    pub cap: Option<&'a str>,
}

/// A bound with its grade.
#[derive(Clone, Debug, PartialEq)]
pub struct Judgement {
    /// The bound.
    pub bound: Option<f64>,
    /// The grade.
    pub grade: Grade,
    /// Why, as a sentence without full stop.
    pub why: String,
    /// What it was made from.
    pub estimates: Estimates,
}

/// How the three values hang together.
enum Pattern {
    /// Differences at rounding level; the estimate is what they leave.
    Rounding(f64),
    /// Monotone with the order of the scheme; the extrapolated error.
    Asymptotic(f64),
    /// Monotone with another order; the estimate with the order clipped.
    Monotone(f64),
    /// Not monotone; the spread.
    Oscillating(f64),
}

/// Judges a quantity.
///
/// What is bounded: the distance of the value on the coarsest mesh from the value that the exact solution of
/// the stated equations gives. An estimate, not a theorem: it fails where all meshes and the companion miss the
/// same feature, such as a pulse between all of their points.
pub fn judge(evidence: &Evidence<'_>) -> Judgement {
    let mut estimates = Estimates {
        values: evidence.values.to_vec(),
        formal_order: evidence.order,
        interpolation: evidence.interpolation,
        rounding: evidence.rounding,
        ..Estimates::default()
    };
    let [Some(q0), Some(q1), Some(q2)] = evidence.values else {
        let why = if evidence.values[0].is_none() {
            "it does not occur in this run"
        } else {
            "it does not occur on every mesh"
        };
        return unbounded(why, estimates);
    };
    let order = f64::from(evidence.order);
    let (first, second) = (q0 - q1, q1 - q2);
    // Roundings of the finest mesh, which has four times the steps, add up like a random walk.
    let ulps = larger(FLOOR_ULPS, elementary::sqrt(4.0 * evidence.steps));
    let floor = ulps * f64::EPSILON * larger(evidence.scale.abs(), q0.abs());
    let pattern = pattern(first, second, order, floor, &mut estimates);
    let spread = larger(larger(q0, q1), q2) - smaller(smaller(q0, q1), q2);
    let companion = evidence.corrected.map(|corrected| q0 - corrected);
    estimates.companion = companion;
    let beside = companion.map_or(0.0, f64::abs);

    let (mut grade, mut estimate, mut safety);
    let mut why: String;
    match pattern {
        Pattern::Rounding(rest) => {
            grade = Grade::Converged;
            safety = SAFETY_CONVERGED;
            estimate = rest;
            why = "the meshes agree to rounding".to_owned();
            if beside > larger(CONTRADICTION * rest, floor) {
                grade = Grade::Indicated;
                safety = SAFETY_INDICATED;
                estimate = beside;
                why = "the meshes agree to rounding, but the companion contradicts them".to_owned();
            }
        }
        Pattern::Asymptotic(error) => {
            let size = error.abs();
            grade = Grade::Converged;
            safety = SAFETY_CONVERGED;
            estimate = size;
            why = format!("monotone, observed order {} near {}", observed(&estimates), evidence.order);
            if let Some(other) = companion {
                let (high, low) = (larger(size, other.abs()), smaller(size, other.abs()));
                let same_sign = (error < 0.0) == (other < 0.0);
                if same_sign && high <= AGREEMENT * low {
                    grade = Grade::Corroborated;
                    safety = SAFETY_CORROBORATED;
                    estimate = high;
                    why = format!("{why}; the companion agrees");
                } else if high > CONTRADICTION * low && high > floor {
                    grade = Grade::Indicated;
                    safety = SAFETY_INDICATED;
                    estimate = high;
                    why = format!("{why}, but the companion contradicts it");
                } else {
                    estimate = high;
                    why = format!("{why}; the companion agrees only within a factor of {CONTRADICTION}");
                }
            }
        }
        Pattern::Monotone(error) => {
            grade = Grade::Indicated;
            safety = SAFETY_INDICATED;
            estimate = larger(error, beside);
            why = format!(
                "monotone, but observed order {} is not near {}",
                observed(&estimates),
                evidence.order
            );
        }
        Pattern::Oscillating(rest) => {
            grade = Grade::Indicated;
            safety = SAFETY_INDICATED;
            estimate = larger(rest, beside);
            why = "the values do not approach a limit from one side: the spread of the meshes".to_owned();
        }
    }
    let parted = spread > PARTED * evidence.range && spread > floor && grade == Grade::Indicated;
    let diverging = second.abs() >= first.abs();
    if parted && diverging {
        return unbounded(
            "the meshes do not approach each other: the run is chaotic or not resolved",
            estimates,
        );
    }
    if let Some(cap) = evidence.cap
        && grade < Grade::Indicated
    {
        grade = Grade::Indicated;
        safety = SAFETY_INDICATED;
        estimate = larger(larger(estimate, beside), spread);
        why = cap.to_owned();
    }
    estimates.safety = safety;
    estimates.truncation = safety * estimate;
    let bound = estimates.truncation + evidence.interpolation + evidence.rounding;
    if bound.is_finite() {
        Judgement { bound: Some(bound), grade, why, estimates }
    } else {
        unbounded("the estimate is not finite", estimates)
    }
}

fn pattern(first: f64, second: f64, order: f64, floor: f64, estimates: &mut Estimates) -> Pattern {
    let power = elementary::pow(2.0, order);
    let (size, size_fine) = (first.abs(), second.abs());
    if size <= floor && size_fine <= floor {
        let rest = larger(floor, larger(size, size_fine) * power / (power - 1.0));
        return Pattern::Rounding(rest);
    }
    let ratio = first / second;
    if ratio > 1.0 && ratio.is_finite() {
        estimates.observed_order = Some(elementary::ln(ratio) / std::f64::consts::LN_2);
    }
    if size_fine <= floor && size <= 4.0 * power * floor {
        // The finer meshes agree to rounding as the order lets expect, so the first difference is the error.
        estimates.halving = Some(first);
        return Pattern::Rounding(size + 2.0 * floor);
    }
    match estimates.observed_order {
        Some(observed) if (observed - order).abs() <= ORDER_WINDOW * order => {
            let by_first = first * power / (power - 1.0);
            let by_both = first + second + second / (power - 1.0);
            let error = if by_first.abs() > by_both.abs() { by_first } else { by_both };
            estimates.halving = Some(error);
            Pattern::Asymptotic(error)
        }
        Some(observed) => {
            let clipped = smaller(larger(observed, 0.5), order);
            let power = elementary::pow(2.0, clipped);
            let error = first * power / (power - 1.0);
            estimates.halving = Some(error);
            Pattern::Monotone(error.abs())
        }
        None => Pattern::Oscillating(larger(larger(size, size_fine), (first + second).abs())),
    }
}

fn observed(estimates: &Estimates) -> String {
    estimates.observed_order.map_or_else(|| "unknown".to_owned(), |order| format!("{order:.2}"))
}

/// A quantity without a bound.
pub fn unbounded(why: &str, estimates: Estimates) -> Judgement {
    Judgement { bound: None, grade: Grade::Unbounded, why: why.to_owned(), estimates }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn evidence(values: [f64; 3], corrected: Option<f64>, order: u32) -> Evidence<'static> {
        Evidence {
            values: values.map(Some),
            corrected,
            order,
            scale: 1.0,
            steps: 100.0,
            range: 10.0,
            interpolation: 0.0,
            rounding: 0.0,
            cap: None,
        }
    }

    #[test]
    fn a_clean_triple_is_converged_with_a_quarter_to_spare() {
        // Value 1 + c h^4 with c h^4 = 0.016, so the error of the coarsest is 0.016.
        let judged = judge(&evidence([1.016, 1.001, 1.0000625], None, 4));
        assert_eq!(judged.grade, Grade::Converged);
        let bound = judged.bound.unwrap();
        assert!((bound - 1.25 * 0.016).abs() < 1e-12, "{bound}");
    }

    #[test]
    fn the_companion_corroborates() {
        let judged = judge(&evidence([1.016, 1.001, 1.0000625], Some(1.0004), 4));
        assert_eq!(judged.grade, Grade::Corroborated);
        assert!((judged.bound.unwrap() - 1.5 * 0.016).abs() < 1e-12);
    }

    #[test]
    fn a_contradicting_companion_degrades() {
        let judged = judge(&evidence([1.016, 1.001, 1.0000625], Some(0.5), 4));
        assert_eq!(judged.grade, Grade::Indicated);
        assert!(judged.bound.unwrap() >= 1.5);
    }

    #[test]
    fn another_order_is_only_indicated() {
        let judged = judge(&evidence([1.4, 1.2, 1.1], None, 4));
        assert_eq!(judged.grade, Grade::Indicated);
        assert!(judged.bound.unwrap() >= 3.0 * 0.4 - 1e-12);
    }

    #[test]
    fn parted_meshes_have_no_bound() {
        let judged = judge(&evidence([1.0, 5.0, -3.0], None, 4));
        assert_eq!((judged.grade, judged.bound), (Grade::Unbounded, None));
    }

    #[test]
    fn a_missing_value_has_no_bound() {
        let mut missing = evidence([1.0, 1.0, 1.0], None, 4);
        missing.values[1] = None;
        assert_eq!(judge(&missing).grade, Grade::Unbounded);
    }
}
