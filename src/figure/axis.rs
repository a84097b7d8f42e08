//! Axes: their range, their ticks and the text of those.

use super::digits::{decade, power_of_ten, superscript};
use crate::arithmetic::elementary::log10;

/// An axis from `low` to `high` with its ticks.
#[derive(Clone, Debug, PartialEq)]
pub struct Axis {
    /// Lower end; for a logarithmic axis its decimal logarithm.
    pub low: f64,
    /// Upper end, above the lower one.
    pub high: f64,
    /// Labelled ticks: place and text.
    pub major: Vec<(f64, String)>,
    /// Ticks between.
    pub minor: Vec<f64>,
    /// A power of ten that all labels are to be multiplied with.
    pub exponent: Option<i32>,
    logarithmic: bool,
}

impl Axis {
    /// A linear axis that holds `low` to `high` and has about `count` labelled ticks, at multiples of 1, 2 or 5
    /// times a power of ten. With `tight` it ends at `low` and `high`, else a little beyond.
    pub fn linear(low: f64, high: f64, count: u32, tight: bool) -> Axis {
        let (low, high) = widen(low, high, tight);
        let step = step_of(high - low, count);
        let exponent = common_exponent(low, high);
        let scale = power_of_ten(exponent.unwrap_or(0));
        let places = usize::try_from(exponent.unwrap_or(0) - decade(step)).unwrap_or(0);
        let first = (low / step).ceil();
        let mut major = Vec::new();
        let mut k = first;
        while k * step <= high + 1e-9 * step && major.len() < 40 {
            let value = k * step;
            let text = format!("{:.places$}", value / scale).replace('-', "\u{2212}");
            let zero = text.chars().all(|c| matches!(c, '0' | '.' | '\u{2212}'));
            let text = if zero { text.replace('\u{2212}', "") } else { text };
            major.push((value, text));
            k += 1.0;
        }
        let parts = if leading(step) == 2 { 4.0 } else { 5.0 };
        let fine = step / parts;
        let mut minor = Vec::new();
        let mut k = (low / fine).ceil();
        while k * fine <= high + 1e-9 * fine && minor.len() < 200 {
            if (k % parts).abs() > 1e-6 {
                minor.push(k * fine);
            }
            k += 1.0;
        }
        Axis { low, high, major, minor, exponent, logarithmic: false }
    }

    /// A logarithmic axis that holds `low` to `high`, both positive, with ticks at powers of ten.
    pub fn logarithmic(low: f64, high: f64) -> Axis {
        let (first, last) = (decade(low), decade(high * (1.0 - 1e-12)) + 1);
        let (mut low_end, mut high_end) = (log10(low) - 0.15, log10(high) + 0.15);
        if high_end - low_end < 1.0 {
            (low_end, high_end) = (low_end - 0.35, high_end + 0.35);
        }
        let stride = ((last - first) / 7 + 1).max(1);
        let mut major = Vec::new();
        let mut minor = Vec::new();
        for n in first - 1..=last {
            let place = f64::from(n);
            if place >= low_end && place <= high_end && n.rem_euclid(stride) == 0 {
                major.push((place, power_text(n)));
            }
            for m in 2..10 {
                let place = place + log10(f64::from(m));
                if place >= low_end && place <= high_end {
                    minor.push(place);
                }
            }
        }
        if major.len() < 2 {
            // Less than a decade: label some of the ticks between.
            major.clear();
            for n in first - 1..=last {
                for m in [1, 2, 5] {
                    let place = f64::from(n) + log10(f64::from(m));
                    if place >= low_end && place <= high_end && !major.iter().any(|(at, _)| *at == place) {
                        major.push((place, multiple_text(m, n)));
                    }
                }
            }
            major.sort_by(|a, b| a.0.total_cmp(&b.0));
        }
        Axis { low: low_end, high: high_end, major, minor, exponent: None, logarithmic: true }
    }

    /// Where a value stands on the axis, 0 at its lower and 1 at its upper end.
    pub fn share(&self, value: f64) -> f64 {
        let place = if self.logarithmic { log10(value) } else { value };
        (place - self.low) / (self.high - self.low)
    }

    /// Where a tick stands on the axis.
    pub fn tick_share(&self, place: f64) -> f64 {
        (place - self.low) / (self.high - self.low)
    }
}

fn power_text(n: i32) -> String {
    match n {
        0 => "1".to_owned(),
        1 => "10".to_owned(),
        n => format!("10{}", superscript(n)),
    }
}

/// `m` times a power of ten, as a plain number where that is short.
fn multiple_text(m: i32, n: i32) -> String {
    match (m, n) {
        (_, 0..=3) => format!("{}", f64::from(m) * power_of_ten(n)),
        (_, -3..=-1) => format!("{:.*}", usize::try_from(-n).unwrap_or(0), f64::from(m) * power_of_ten(n)),
        (1, _) => power_text(n),
        _ => format!("{m}\u{b7}{}", power_text(n)),
    }
}

/// A range that is not empty, a little wider than asked for unless `tight`.
fn widen(low: f64, high: f64, tight: bool) -> (f64, f64) {
    let span = high - low;
    let size = crate::arithmetic::larger(low.abs(), high.abs());
    if span.is_nan() || span <= 1e-12 * size {
        let room = if size > 0.0 { 0.1 * size } else { 1.0 };
        return (low - room, high + room);
    }
    if tight { (low, high) } else { (low - 0.07 * span, high + 0.07 * span) }
}

/// 1, 2 or 5 times a power of ten, so that `span` holds about `count` of them.
fn step_of(span: f64, count: u32) -> f64 {
    let rough = span / f64::from(count.max(1));
    let n = decade(rough);
    for m in [1, 2, 5, 10] {
        let step: f64 = format!("{m}e{n}").parse().unwrap_or(rough);
        if step >= rough * 0.999 {
            return step;
        }
    }
    rough
}

fn leading(step: f64) -> u32 {
    format!("{step:e}").chars().next().and_then(|c| c.to_digit(10)).unwrap_or(1)
}

/// A power of ten to take out of all labels, where they would be very long.
fn common_exponent(low: f64, high: f64) -> Option<i32> {
    let lead = decade(crate::arithmetic::larger(low.abs(), high.abs()));
    (!(-3..=5).contains(&lead)).then_some(lead)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn labels(low: f64, high: f64) -> Vec<String> {
        Axis::linear(low, high, 6, true).major.into_iter().map(|(_, text)| text).collect()
    }

    #[test]
    fn ticks_are_multiples_of_one_two_or_five() {
        assert_eq!(labels(0.0, 600.0), ["0", "100", "200", "300", "400", "500", "600"]);
        assert_eq!(labels(-1.5, 2.3), ["\u{2212}1", "0", "1", "2"]);
        assert_eq!(labels(0.0, 0.07), ["0.00", "0.02", "0.04", "0.06"]);
        assert_eq!(Axis::linear(0.0, 3e-9, 6, true).exponent, Some(-9));
    }

    #[test]
    fn a_constant_has_an_axis_too() {
        let axis = Axis::linear(5.0, 5.0, 6, false);
        assert!(axis.low < 5.0 && axis.high > 5.0 && !axis.major.is_empty());
    }

    #[test]
    fn logarithmic_ticks_are_powers_of_ten() {
        let axis = Axis::logarithmic(1e-6, 2e-2);
        let labels: Vec<&str> = axis.major.iter().map(|(_, text)| text.as_str()).collect();
        assert_eq!(
            labels,
            [
                "10\u{207b}\u{2076}",
                "10\u{207b}\u{2075}",
                "10\u{207b}\u{2074}",
                "10\u{207b}\u{b3}",
                "10\u{207b}\u{b2}"
            ]
        );
    }
}
