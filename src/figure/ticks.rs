//! Ticks at 1, 2 or 5 times a power of ten, as whole numbers of their step so that none is off by a rounding.

use super::digits::{decade, decimal};

/// The distance of ticks: `digit` times `10^exponent`, where the digit is 1, 2 or 5.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Step {
    pub(super) digit: i64,
    pub(super) exponent: i32,
}

/// Share of a range by which a tick may lie beyond its end: what rounding does to the end of a run.
const SLACK: f64 = 1e-9;
/// Fewest labelled ticks that an axis should have.
pub(super) const FEWEST: usize = 4;

impl Step {
    /// The finest step that puts at most `most` ticks between `low` and `high`.
    ///
    /// Where that leaves fewer than four, one tick too many is better for a range that is `fixed`.
    pub(super) fn choose(low: f64, high: f64, most: usize, fixed: bool) -> Step {
        let lead = decade(high - low);
        let mut finer: Option<Step> = None;
        for exponent in lead - 2..=lead + 1 {
            for digit in [1, 2, 5] {
                let step = Step { digit, exponent };
                let count = step.count(low, high);
                if count <= most {
                    return match finer {
                        Some(finer) if fixed && count < FEWEST && finer.count(low, high) == most + 1 => finer,
                        _ => step,
                    };
                }
                finer = Some(step);
            }
        }
        Step { digit: 5, exponent: lead + 1 }
    }

    /// A fifth or a fourth of the step, again 1, 2 or 5 times a power of ten.
    pub(super) fn minor(self) -> Step {
        let (digit, exponent) = match self.digit {
            1 => (2, self.exponent - 1),
            2 => (5, self.exponent - 1),
            _ => (1, self.exponent),
        };
        Step { digit, exponent }
    }

    /// How many minor steps make a step.
    pub(super) fn parts(self) -> i64 {
        if self.digit == 2 { 4 } else { 5 }
    }

    /// The double nearest to `k` steps.
    pub(super) fn at(self, k: i64) -> f64 {
        format!("{}e{}", k * self.digit, self.exponent).parse().unwrap_or(f64::NAN)
    }

    /// `k` steps as text, in units of `10^common`; all with the same number of decimals.
    pub(super) fn text(self, k: i64, common: i32) -> String {
        decimal(&(k * self.digit).to_string(), self.exponent - common)
    }

    /// The numbers of the first and the last tick between `low` and `high`.
    pub(super) fn inside(self, low: f64, high: f64) -> (i64, i64) {
        let slack = SLACK * (high - low);
        (self.below(low - slack, true), self.below(high + slack, false))
    }

    /// The numbers of the last tick at or below `low`, and of the first at or above `high`.
    pub(super) fn around(self, low: f64, high: f64) -> (i64, i64) {
        let slack = SLACK * (high - low);
        (self.below(low + slack, false), self.below(high - slack, true))
    }

    pub(super) fn count(self, low: f64, high: f64) -> usize {
        let (first, last) = self.inside(low, high);
        usize::try_from(last - first + 1).unwrap_or(0)
    }

    /// The number of the last tick at or below `x`, or with `above` of the first at or above it.
    #[expect(
        clippy::cast_possible_truncation,
        reason = "far below 2^53: a range is at least 1e-12 of its ends"
    )]
    fn below(self, x: f64, above: bool) -> i64 {
        let mut k = (x / self.at(1)).floor() as i64;
        // The quotient may be off by a rounding.
        while self.at(k) > x {
            k -= 1;
        }
        while self.at(k + 1) <= x {
            k += 1;
        }
        if above && self.at(k) < x { k + 1 } else { k }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn check(low: f64, high: f64, expected: &[f64]) {
        let step = Step::choose(low, high, 7, true);
        let (first, last) = step.inside(low, high);
        let ticks: Vec<f64> = (first..=last).map(|k| step.at(k)).collect();
        assert_eq!(ticks, expected, "{low} to {high}");
    }

    #[test]
    fn ticks_are_the_doubles_nearest_to_their_decimals() {
        check(0.0, 1.0, &[0.0, 0.2, 0.4, 0.6, 0.8, 1.0]);
        check(0.0, 0.7, &[0.0, 0.2, 0.4, 0.6]);
        check(0.0, 0.6, &[0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6]);
        check(0.0, 600.0, &[0.0, 100.0, 200.0, 300.0, 400.0, 500.0, 600.0]);
        check(-1.5, 2.3, &[-1.0, 0.0, 1.0, 2.0]);
        check(-3e-9, 3e-9, &[-3e-9, -2e-9, -1e-9, 0.0, 1e-9, 2e-9, 3e-9]);
        check(-1e300, 1e300, &[-1e300, -5e299, 0.0, 5e299, 1e300]);
        check(1e9, 1e9 + 0.5, &[1e9, 1e9 + 0.1, 1e9 + 0.2, 1e9 + 0.3, 1e9 + 0.4, 1e9 + 0.5]);
        // A run that ends a rounding early has its last tick all the same.
        check(0.0, 0.5999999999999999, &[0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6]);
        check(7.0, 21.2, &[8.0, 10.0, 12.0, 14.0, 16.0, 18.0, 20.0]);
    }

    #[test]
    fn every_range_has_three_to_eight_ticks_inside_and_minor_ones_on_them() {
        let mut state = 7_u64;
        let mut next = || {
            state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
            (state >> 11) as f64 / (1_u64 << 53) as f64
        };
        let mut usual = 0;
        for round in 0..3000 {
            let size: f64 = format!("1e{}", round % 60 - 30).parse().unwrap();
            let low = (next() - 0.5) * size;
            let high = low + next() * size * if round % 3 == 0 { 1e-3 } else { 1.0 };
            let step = Step::choose(low, high, 7, true);
            let count = step.count(low, high);
            assert!((3..=8).contains(&count), "{low} {high} {count}");
            usual += usize::from((4..=7).contains(&count));
            for k in [-3, 0, 8] {
                assert_eq!(step.at(k).to_bits(), step.minor().at(k * step.parts()).to_bits());
            }
        }
        assert!(usual > 2850, "{usual}");
    }

    #[test]
    fn labels_have_the_same_decimals_and_a_real_minus() {
        let step = Step { digit: 5, exponent: -2 };
        let labels: Vec<String> = (-2..=1).map(|k| step.text(k, 0)).collect();
        assert_eq!(labels, ["\u{2212}0.10", "\u{2212}0.05", "0.00", "0.05"]);
        assert_eq!(Step { digit: 2, exponent: 7 }.text(3, 6), "60");
    }
}
