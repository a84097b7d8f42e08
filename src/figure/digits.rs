//! Numbers as text: only the digits which the bound supports.

use super::exact::{Pair, Rounded};
use crate::arithmetic::elementary;
use num_bigint::BigInt;

/// A value with its bound as text, both to the same place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Shown {
    /// The value: `10.380`.
    pub value: String,
    /// The bound: `0.012`; empty where there is none.
    pub bound: String,
    /// The power of ten that both are to be multiplied with.
    pub exponent: Option<i32>,
}

impl Shown {
    /// `10.380 ± 0.012 m`, `(1.2345 ± 0.0012) × 10⁻⁷ m`.
    pub fn text(&self, unit: Option<&str>) -> String {
        let unit = unit.map_or_else(String::new, |unit| format!(" {unit}"));
        let Shown { value, bound, exponent } = self;
        match (bound.is_empty(), exponent) {
            (true, None) => format!("{value}{unit}"),
            (true, Some(n)) => format!("{value} × 10{}{unit}", superscript(*n)),
            (false, None) => format!("{value} ± {bound}{unit}"),
            (false, Some(n)) => format!("({value} ± {bound}) × 10{}{unit}", superscript(*n)),
        }
    }
    /// The value alone: `10.380 m`.
    pub fn value_text(&self, unit: Option<&str>) -> String {
        Shown { bound: String::new(), ..self.clone() }.text(unit)
    }
    /// The bound alone: `0.012 m`.
    pub fn bound_text(&self, unit: Option<&str>) -> String {
        Shown { value: self.bound.clone(), bound: String::new(), exponent: self.exponent }.text(unit)
    }
}

/// Most significant digits of a value: a bound at rounding level would show many more than anyone reads. The record
/// has them all.
pub const MOST_DIGITS: i32 = 10;
/// Places before the decimal mark above which a common power of ten is written.
const MOST_WHOLE: i32 = 7;
/// Places behind the decimal mark beyond which a common power of ten is written.
const MOST_BROKEN: i32 = 7;

/// A value and its bound: the bound to two significant digits, the value to the same place.
///
/// The bound is rounded up, and takes in what rounding the value moves, so that the interval as printed contains
/// the interval as computed, in exact arithmetic. At most ten digits are shown: a tighter bound is then rounded up to
/// the last of them. A bound of 0 stands for a number that is exact, and the value is shown as it is.
/// Source of the two digits: JCGM 100:2008 (GUM), 7.2.6.
///
/// # Shapes and units
/// `value` and `bound` are finite, `bound >= 0`. Anything else is shown as a dash without a bound.
pub fn shown(value: f64, bound: f64) -> Shown {
    match supported(value, bound) {
        Some(Supported::Rounded(rounded, place)) => write(&rounded, place),
        Some(Supported::Exact) => exact(value),
        None => nothing(),
    }
}

/// The same digits in units of a given power of ten, as in a column whose numbers share one.
pub fn shown_in(value: f64, bound: f64, exponent: i32) -> Shown {
    match supported(value, bound) {
        Some(Supported::Rounded(rounded, place)) => write_in(&rounded, place, Some(exponent)),
        // All digits of the shortest decimal, at its own place.
        Some(Supported::Exact) => {
            let text = format!("{value:e}");
            let (digits, power) = text.split_once('e').unwrap_or((&text, "0"));
            let behind = digits.split_once('.').map_or(0, |(_, behind)| behind.len());
            let place = power.parse().unwrap_or(0) - i32::try_from(behind).unwrap_or(0);
            let value =
                if value == 0.0 { plain(value) } else { decimal(&digits.replace('.', ""), place - exponent) };
            Shown { value, bound: "0".to_owned(), exponent: Some(exponent) }
        }
        None => nothing(),
    }
}

/// The digits that a bound supports.
enum Supported {
    /// Value and bound in units of a power of ten.
    Rounded(Rounded, i32),
    /// All of them.
    Exact,
}

fn supported(value: f64, bound: f64) -> Option<Supported> {
    let pair = Pair::of(value, bound)?;
    if bound == 0.0 {
        return Some(Supported::Exact);
    }
    let mut place = decade(bound) - 1;
    let coarsest = decade(value.abs()) - MOST_DIGITS + 1;
    if value != 0.0 && place < coarsest {
        return Some(Supported::Rounded(pair.at(coarsest), coarsest));
    }
    loop {
        let rounded = pair.at(place);
        if rounded.bound < BigInt::from(100) {
            return Some(Supported::Rounded(rounded, place));
        }
        place += 1;
    }
}

/// A value and its bound to a given place, as in a column whose numbers share one: fewer digits than the bound
/// supports may come of it, never more. The bound is rounded up.
pub fn shown_at(value: f64, bound: f64, place: i32) -> Shown {
    if bound > 0.0 && decade(bound) - 1 > place {
        return shown(value, bound);
    }
    Pair::of(value, bound).map_or_else(nothing, |pair| write(&pair.at(place), place))
}

/// A value without a bound, to three significant digits.
pub fn rough(value: f64) -> Shown {
    let Some(pair) = Pair::of(value, 0.0) else {
        return nothing();
    };
    if value == 0.0 {
        return Shown { bound: String::new(), ..exact(value) };
    }
    let place = decade(value.abs()) - 2;
    let rounded = Rounded { bound: BigInt::ZERO, ..pair.at(place) };
    Shown { bound: String::new(), ..write(&rounded, place) }
}

/// What stands in place of a number that is not finite.
fn nothing() -> Shown {
    Shown { value: "\u{2013}".to_owned(), bound: String::new(), exponent: None }
}

fn exact(value: f64) -> Shown {
    Shown { value: plain(value), bound: "0".to_owned(), exponent: None }
}

/// The shortest decimal that gives the same double: `0.35`, `1.5e-9`, with a real minus sign.
pub fn plain(value: f64) -> String {
    let size = value.abs();
    let text =
        if size == 0.0 || (1e-4..1e9).contains(&size) { format!("{value}") } else { format!("{value:e}") };
    let text = if text == "-0" { "0".to_owned() } else { text };
    if !value.is_finite() {
        return "\u{2013}".to_owned();
    }
    text.replace('-', "\u{2212}")
}

/// A number of which only the size matters, to two significant digits: `1.4e-3`.
pub fn size(value: f64) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let magnitude = value.abs();
    let text = if (1e-3..1e4).contains(&magnitude) {
        let places = usize::try_from(1 - decade(magnitude)).unwrap_or(0);
        format!("{value:.places$}")
    } else {
        format!("{value:.1e}")
    };
    text.replace('-', "\u{2212}")
}

/// The exponent of the leading decimal digit.
pub fn decade(size: f64) -> i32 {
    let text = format!("{size:e}");
    text.split_once('e').and_then(|(_, exponent)| exponent.parse().ok()).unwrap_or(0)
}

/// Text of a rounded value and bound.
fn write(rounded: &Rounded, place: i32) -> Shown {
    let lead = larger_lead(&rounded.value, &rounded.bound, place);
    let scientific = place > 0 && lead >= MOST_WHOLE || place < -MOST_BROKEN - 2 && lead < -3 || place < -18;
    write_in(rounded, place, scientific.then_some(lead))
}

/// Text of a rounded value and bound in units of a power of ten.
fn write_in(rounded: &Rounded, place: i32, exponent: Option<i32>) -> Shown {
    let shift = place - exponent.unwrap_or(0);
    let text = |units: &BigInt| decimal(&units.to_string(), shift);
    Shown { value: text(&rounded.value), bound: text(&rounded.bound), exponent }
}

/// The exponent of the leading digit of the larger of two numbers, given in units of `10^place`.
fn larger_lead(value: &BigInt, bound: &BigInt, place: i32) -> i32 {
    let most = value.magnitude().max(bound.magnitude()).to_string().len();
    i32::try_from(most).unwrap_or(i32::MAX).saturating_add(place).saturating_sub(1)
}

/// A whole number of `10^shift` as decimal text.
pub(super) fn decimal(units: &str, shift: i32) -> String {
    let (sign, digits) = units.strip_prefix('-').map_or(("", units), |digits| ("\u{2212}", digits));
    let sign = if digits.bytes().all(|digit| digit == b'0') { "" } else { sign };
    if shift >= 0 {
        let zeros = if digits == "0" { 0 } else { usize::try_from(shift).unwrap_or(0) };
        return format!("{sign}{digits}{}", "0".repeat(zeros));
    }
    let behind = usize::try_from(-shift).unwrap_or(0);
    let padded = format!("{digits:0>width$}", width = behind + 1);
    let (whole, broken) = padded.split_at(padded.len() - behind);
    format!("{sign}{whole}.{broken}")
}

/// A whole number in superscript digits.
pub fn superscript(n: i32) -> String {
    n.to_string()
        .chars()
        .map(|c| match c {
            '-' => '\u{207b}',
            '1' => '\u{b9}',
            '2' => '\u{b2}',
            '3' => '\u{b3}',
            c => char::from_u32(0x2070 + c.to_digit(10).unwrap_or(0)).unwrap_or(c),
        })
        .collect()
}

/// `10^n` as the nearest double.
pub fn power_of_ten(n: i32) -> f64 {
    format!("1e{n}").parse().unwrap_or_else(|_| elementary::pow(10.0, f64::from(n)))
}

#[cfg(test)]
mod tests {
    use super::super::exact::ten;
    use super::*;

    fn check(value: f64, bound: f64, expected: &str) {
        assert_eq!(shown(value, bound).text(None), expected, "{value} {bound}");
    }

    #[test]
    fn the_bound_has_two_digits_and_the_value_the_same_place() {
        check(10.37953, 0.0117, "10.380 ± 0.013");
        check(10.37953, 0.0101, "10.380 ± 0.011");
        check(-1.5, 0.25, "\u{2212}1.50 ± 0.25");
        check(0.0, 0.0996, "0.00 ± 0.10");
        check(12345.0, 678.0, "12340 ± 690");
        check(4.0, 0.0, "4 ± 0");
        check(1.23456e-9, 2.19e-13, "(1.23456 ± 0.00022) × 10\u{207b}\u{2079}");
    }

    #[test]
    fn a_bound_that_rounds_up_over_a_decade_takes_the_value_with_it() {
        check(5.0, 0.0996, "5.00 ± 0.10");
        check(5.123, 0.0999, "5.12 ± 0.11");
        check(0.0, 99.5, "0 ± 100");
        check(9.9999, 0.00999, "10.000 ± 0.011");
    }

    #[test]
    fn a_bound_larger_than_its_value_leaves_no_digit_of_it() {
        check(0.4, 12.0, "0 ± 13");
        check(-0.4, 12.0, "0 ± 13");
        check(1e-9, 250.0, "0 ± 260");
        check(1e-300, 1e300, "(0.0 ± 1.1) × 10\u{b3}\u{2070}\u{2070}");
    }

    #[test]
    fn the_ends_of_the_range_of_doubles_are_shown() {
        check(1e300, 9.95e297, "(1.000 ± 0.010) × 10\u{b3}\u{2070}\u{2070}");
        check(f64::MAX, f64::MAX, "(1.8 ± 1.8) × 10\u{b3}\u{2070}\u{2078}");
        check(0.0, 5e-324, "(0.0 ± 5.0) × 10\u{207b}\u{b3}\u{b2}\u{2074}");
        check(5e-324, 5e-324, "(4.9 ± 5.0) × 10\u{207b}\u{b3}\u{b2}\u{2074}");
        check(f64::NAN, 1.0, "\u{2013}");
        check(1.0, f64::INFINITY, "\u{2013}");
        check(1.0, -1.0, "\u{2013}");
    }

    #[test]
    fn a_tie_of_the_double_goes_to_the_even_digit() {
        // 0.5, 1.5 and 2.5 are ties in binary too; half a unit is then in the bound.
        check(0.5, 10.0, "0 ± 11");
        check(1.5, 10.0, "2 ± 11");
        check(2.5, 10.0, "2 ± 11");
        // 2.675 as a double lies below the tie of its decimal.
        check(2.675, 0.1, "2.67 ± 0.11");
        check(2.6750000000000003, 0.1, "2.68 ± 0.11");
    }

    /// Source: common practice in tables of values and standard uncertainties: two digits of the uncertainty, and
    /// the value to the same place. Bounds are rounded up here, so ours may be one unit larger, never smaller.
    #[test]
    fn values_have_as_many_digits_as_common_practice_gives_them() {
        let mut cases = 0;
        for line in include_str!("data/value_uncertainty_format.csv").lines().skip(1) {
            let fields: Vec<&str> = line.split(',').collect();
            let bound: f64 = fields[1].parse().unwrap();
            let ours = shown(fields[0].parse().unwrap(), bound);
            assert_eq!((ours.value.as_str(), ours.exponent), (fields[2], None), "{line}");
            let (printed, ours): (f64, f64) = (fields[3].parse().unwrap(), ours.bound.parse().unwrap());
            let unit = power_of_ten(decade(printed) - 1);
            assert!(ours >= bound && ours <= printed + 1.001 * unit, "{line} {ours}");
            cases += 1;
        }
        assert_eq!(cases, 6);
    }

    /// A printed number in units of `10^-scale`.
    fn read(text: &str, exponent: i32, scale: i32) -> BigInt {
        let behind = text.split_once('.').map_or(0, |(_, behind)| i32::try_from(behind.len()).unwrap());
        let digits: BigInt = text.replace('.', "").replace('\u{2212}', "-").parse().unwrap();
        digits * ten(scale + exponent - behind)
    }

    #[test]
    fn the_printed_interval_contains_the_computed_one_exactly() {
        let mut state = 1_u64;
        let mut next = || {
            state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
            (state >> 11) as f64 / (1_u64 << 53) as f64
        };
        for round in 0..20_000 {
            let value = (next() - 0.5) * power_of_ten(round % 41 - 20);
            let bound = next() * power_of_ten(round % 37 - 18);
            if bound == 0.0 {
                continue;
            }
            let text = shown(value, bound);
            let exponent = text.exponent.unwrap_or(0);
            let scale = 200;
            let (v, b) = (read(&text.value, exponent, scale), read(&text.bound, exponent, scale));
            // Rust prints the exact expansion where it is asked for enough digits.
            let exactly = |x: f64| read(&format!("{x:.200}"), 0, scale);
            let (value_exact, bound_exact) = (exactly(value), exactly(bound));
            assert!(&v - &b <= &value_exact - &bound_exact, "{value} {bound} {text:?}");
            assert!(v + b >= value_exact + bound_exact, "{value} {bound} {text:?}");
            // Not looser than the two digits ask for, or the tenth digit of the value.
            let printed: f64 = format!("{}e{exponent}", text.bound).parse().unwrap();
            assert!(printed <= 1.16 * bound + 2e-9 * value.abs(), "{value} {bound} {text:?}");
        }
    }

    #[test]
    fn a_column_may_share_a_place_or_a_power() {
        assert_eq!(shown_at(10.37953, 0.0001, -2).text(None), "10.38 ± 0.01");
        assert_eq!(shown_at(10.37953, 0.3, -3).text(None), "10.38 ± 0.31");
        assert_eq!(shown_in(1234.5, 1.2, 3).text(None), "(1.2345 ± 0.0012) × 10\u{b3}");
        assert_eq!(shown_in(-1500.0, 0.0, 3).value, "\u{2212}1.5");
        assert_eq!(shown_in(0.0, 0.0, 3).value, "0");
    }

    #[test]
    fn parameters_are_shown_as_written() {
        assert_eq!(plain(0.35), "0.35");
        assert_eq!(plain(-3200.0), "\u{2212}3200");
        assert_eq!(plain(5.670374419e-8), "5.670374419e\u{2212}8");
        assert_eq!(plain(-0.0), "0");
        assert_eq!(plain(1e300), "1e300");
        assert_eq!(plain(f64::NAN), "\u{2013}");
    }

    #[test]
    fn a_number_without_a_bound_has_three_digits() {
        assert_eq!(rough(10.37953).text(Some("m")), "10.4 m");
        assert_eq!(rough(-0.0012345).text(None), "\u{2212}0.00123");
        assert_eq!(rough(0.0).text(None), "0");
    }
}
