//! Axes: their range, their ticks and the text of those.

use super::digits::{decade, decimal, superscript};
use super::ticks::{FEWEST, Step};
use crate::arithmetic::elementary::log10;
use crate::arithmetic::{larger, smaller};

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

/// Numbers larger than this are not drawn: differences between them overflow.
const LARGEST: f64 = 1e300;
/// Room beyond the data on an axis that is not tight, as a share of the range.
const ROOM: f64 = 0.04;
/// Decades above which not every power of ten has a label.
const MOST_DECADES: i32 = 8;

/// Whether a number can be shown on an axis.
pub fn can_be_drawn(x: f64) -> bool {
    x.abs() <= LARGEST
}

impl Axis {
    /// A linear axis that holds `low` to `high` and has four to `most` labelled ticks (or nearly), at multiples of 1,
    /// 2 or 5 times a power of ten. With `tight` it ends at `low` and `high`, else a little beyond, but it does not
    /// go beyond zero for that.
    pub fn linear(low: f64, high: f64, most: usize, tight: bool) -> Axis {
        let (mut low, mut high) = widen(low, high);
        if !tight {
            let room = ROOM * (high - low);
            low = if low >= 0.0 && low < room { 0.0 } else { low - room };
            high = if high <= 0.0 && high > -room { 0.0 } else { high + room };
        }
        let step = Step::choose(low, high, most, tight);
        if !tight && step.count(low, high) < FEWEST {
            let (first, last) = step.around(low, high);
            (low, high) = (step.at(first), step.at(last));
        }
        let exponent = common_exponent(larger(low.abs(), high.abs()));
        let (first, last) = step.inside(low, high);
        let major = (first..=last).map(|k| (step.at(k), step.text(k, exponent.unwrap_or(0)))).collect();
        let fine = step.minor();
        let (first, last) = fine.inside(low, high);
        let minor = (first..=last).filter(|k| k % step.parts() != 0).map(|k| fine.at(k)).collect();
        Axis { low, high, major, minor, exponent, logarithmic: false }
    }

    /// A logarithmic axis that holds `low` to `high`, both positive, and a little more, with ticks at powers of ten; over
    /// less than two decades at 1, 2 and 5 times those. There are at least three.
    pub fn logarithmic(low: f64, high: f64) -> Axis {
        let (below, above) = (below(low), above(high));
        let (least, most) = (log10(low), log10(high));
        let room = larger(ROOM * (most - least), 0.03);
        let mut ends = (least - room, most + room);
        let (first, last) = (below.1 - 1, above.1 + 1);
        let every = ends.1 - ends.0 <= 2.0;
        let stride = (last - first) / (MOST_DECADES + 1) + 1;
        let labelled = |m: u32, n: i32| m == 1 && n.rem_euclid(stride) == 0 || every && matches!(m, 2 | 5);
        let count = |ends: (f64, f64)| {
            let all = (first..=last).flat_map(|n| (1..10).map(move |m| (m, n)));
            all.filter(|(m, n)| labelled(*m, *n) && within(place((*m, *n)), ends)).count()
        };
        if count(ends) < 3 {
            ends = (smaller(ends.0, place(below)), larger(ends.1, place(above)));
        }
        if count(ends) < 3 {
            ends = (smaller(ends.0, f64::from(below.1)), larger(ends.1, f64::from(below.1 + 1)));
        }
        let mut major = Vec::new();
        let mut minor = Vec::new();
        for (m, n) in (first..=last).flat_map(|n| (1..10).map(move |m| (m, n))) {
            let at = place((m, n));
            if !within(at, ends) {
                continue;
            }
            if labelled(m, n) {
                major.push((at, log_text(m, n, every)));
            } else if m == 1 || stride == 1 {
                minor.push(at);
            }
        }
        Axis { low: ends.0, high: ends.1, major, minor, exponent: None, logarithmic: true }
    }

    /// Where a value stands on the axis, 0 at its lower and 1 at its upper end.
    pub fn share(&self, value: f64) -> f64 {
        self.tick_share(if self.logarithmic { log10(value) } else { value })
    }

    /// Where a tick stands on the axis.
    pub fn tick_share(&self, place: f64) -> f64 {
        (place - self.low) / (self.high - self.low)
    }
}

/// A quantity and its unit with the power of ten that the numbers leave out: `Pressure p / (10⁶ Pa)`, the
/// quotient of quantity and unit that ISO 80000-1 advises.
pub fn with_exponent(title: &str, exponent: Option<i32>) -> String {
    let Some(n) = exponent else {
        return title.to_owned();
    };
    let power = superscript(n);
    match title.rsplit_once(" / ") {
        Some((quantity, unit)) => format!("{quantity} / (10{power} {unit})"),
        None => format!("{title} / 10{power}"),
    }
}

/// Where `m` times `10^n` stands on a logarithmic axis.
fn place((m, n): (u32, i32)) -> f64 {
    f64::from(n) + log10(f64::from(m))
}

fn within(place: f64, ends: (f64, f64)) -> bool {
    place >= ends.0 && place <= ends.1
}

fn number((m, n): (u32, i32)) -> f64 {
    format!("{m}e{n}").parse().unwrap_or(f64::NAN)
}

/// The largest 1, 2 or 5 times a power of ten that is not above a positive number.
fn below(x: f64) -> (u32, i32) {
    let n = decade(x);
    for m in [5, 2] {
        if number((m, n)) <= x {
            return (m, n);
        }
    }
    (1, n)
}

/// The smallest 1, 2 or 5 times a power of ten that is not below a positive number.
fn above(x: f64) -> (u32, i32) {
    let n = decade(x);
    for m in [1, 2, 5] {
        if number((m, n)) >= x {
            return (m, n);
        }
    }
    (1, n + 1)
}

/// Powers of ten as such, and numbers in between as decimals where those are short.
fn log_text(m: u32, n: i32, every: bool) -> String {
    match (m, n) {
        (m, -3..=3) if every => decimal(&m.to_string(), n),
        (1, 0) => "1".to_owned(),
        (1, 1) => "10".to_owned(),
        (1, n) => format!("10{}", superscript(n)),
        (m, n) => format!("{m}\u{b7}10{}", superscript(n)),
    }
}

/// A range that is not empty: a constant and its roundings get room around them.
fn widen(low: f64, high: f64) -> (f64, f64) {
    let size = larger(low.abs(), high.abs());
    if !(high - low > 1e-12 * size && high - low > 1e-290) {
        let room = if size > 1e-280 { 0.1 * size } else { 1.0 };
        return (low - room, high + room);
    }
    (low, high)
}

/// A power of ten, a multiple of three, to take out of all labels where they would be very long.
fn common_exponent(size: f64) -> Option<i32> {
    let lead = decade(size);
    if (-3..=4).contains(&lead) { None } else { Some(3 * lead.div_euclid(3)) }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn texts(axis: Axis) -> Vec<String> {
        axis.major.into_iter().map(|(_, text)| text).collect()
    }

    fn labels(low: f64, high: f64) -> Vec<String> {
        texts(Axis::linear(low, high, 7, true))
    }

    #[test]
    fn ticks_are_multiples_of_one_two_or_five() {
        assert_eq!(labels(0.0, 600.0), ["0", "100", "200", "300", "400", "500", "600"]);
        assert_eq!(labels(-1.5, 2.3), ["\u{2212}1", "0", "1", "2"]);
        assert_eq!(
            labels(0.0, 0.07),
            ["0.00", "0.01", "0.02", "0.03", "0.04", "0.05", "0.06", "0.07"][..]
                .iter()
                .step_by(2)
                .copied()
                .collect::<Vec<_>>()
        );
        assert_eq!(labels(0.0, 24.0), ["0", "5", "10", "15", "20"]);
        assert_eq!(
            labels(998.5, 1001.5),
            ["998.5", "999.0", "999.5", "1000.0", "1000.5", "1001.0", "1001.5"]
        );
    }

    #[test]
    fn large_and_small_numbers_share_a_power_of_ten() {
        let axis = Axis::linear(0.0, 1.2e7, 7, true);
        assert_eq!(
            (axis.exponent, texts(axis)),
            (Some(6), ["0", "2", "4", "6", "8", "10", "12"].map(str::to_owned).to_vec())
        );
        let axis = Axis::linear(0.0, 3e-9, 7, true);
        assert_eq!((axis.exponent, axis.major[1].1.as_str()), (Some(-9), "0.5"));
        assert_eq!(with_exponent("Pressure p / Pa", Some(6)), "Pressure p / (10\u{2076} Pa)");
        assert_eq!(with_exponent("Ratio", Some(-9)), "Ratio / 10\u{207b}\u{2079}");
    }

    #[test]
    fn an_axis_with_room_has_four_to_seven_ticks_and_stays_on_its_side_of_zero() {
        for k in 1..2000 {
            let high = f64::from(k) * 0.037;
            for low in [0.0, 0.3 * high, -0.77 * high, 0.99 * high] {
                let axis = Axis::linear(low, high, 7, false);
                assert!((4..=7).contains(&axis.major.len()), "{low} {high} {}", axis.major.len());
                assert!(axis.low <= low && axis.high >= high);
                assert_eq!(axis.low < 0.0, low < 0.0, "{low} {high}");
                assert!(
                    axis.major.iter().all(|(at, _)| (-1e-8..=1.0 + 1e-8).contains(&axis.tick_share(*at)))
                );
            }
        }
    }

    #[test]
    fn a_constant_has_an_axis_too() {
        for x in [5.0, 0.0, -1e-300, 1e300, 5e-324] {
            let axis = Axis::linear(x, x, 7, false);
            assert!(axis.low < x && axis.high > x && axis.major.len() >= 3, "{x} {axis:?}");
        }
    }

    #[test]
    fn logarithmic_ticks_are_powers_of_ten() {
        assert_eq!(
            texts(Axis::logarithmic(1e-6, 2e-2)),
            [
                "10\u{207b}\u{2076}",
                "10\u{207b}\u{2075}",
                "10\u{207b}\u{2074}",
                "10\u{207b}\u{b3}",
                "10\u{207b}\u{b2}"
            ]
        );
        assert_eq!(texts(Axis::logarithmic(0.125, 0.5)), ["0.1", "0.2", "0.5"]);
        assert_eq!(texts(Axis::logarithmic(1e-7, 3e-7))[1], "2\u{b7}10\u{207b}\u{2077}");
        let wide = texts(Axis::logarithmic(1e-300, 1e300)).len();
        assert!((5..=10).contains(&wide), "{wide}");
    }

    #[test]
    fn a_logarithmic_axis_holds_its_data() {
        for (low, high) in [(1.0, 1.0), (0.5, 0.5), (9.9, 10.1), (2e-12, 4e-3), (1e-300, 3e-297)] {
            let axis = Axis::logarithmic(low, high);
            assert!(
                axis.share(low) >= 0.0 && axis.share(high) <= 1.0 && axis.major.len() >= 3,
                "{low} {high} {axis:?}"
            );
        }
    }
}
