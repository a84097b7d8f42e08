//! Numbers as text: only the digits which the bound supports.

use crate::arithmetic::{elementary, larger};

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
/// the interval as computed. At most ten digits are shown: a tighter bound is then rounded up to the last of them.
/// Source of the two digits: JCGM 100:2008 (GUM), 7.2.6.
///
/// # Shapes and units
/// `value` and `bound` are finite, `bound >= 0`.
pub fn shown(value: f64, bound: f64) -> Shown {
    if bound == 0.0 {
        return exact(value);
    }
    let mut place = decade(bound) - 1;
    let coarsest = decade(value.abs()) - MOST_DIGITS + 1;
    if value != 0.0 && place < coarsest {
        return shown_at(value, bound, coarsest);
    }
    loop {
        let rounded = round_to(value, place);
        let moved = (rounded.1 - value).abs();
        // The sum is nudged up by more than its own rounding.
        let whole = if moved == 0.0 { bound } else { (bound + moved) * (1.0 + 4.0 * f64::EPSILON) };
        let digits = ceil_to(whole, place);
        if digits < 100 {
            return write(&rounded.0, digits, place, larger(rounded.1.abs(), bound));
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
    let rounded = round_to(value, place);
    let moved = (rounded.1 - value).abs();
    let whole = if moved == 0.0 { bound } else { (bound + moved) * (1.0 + 4.0 * f64::EPSILON) };
    let digits = if whole == 0.0 { 0 } else { ceil_to(whole, place) };
    write(&rounded.0, digits, place, larger(rounded.1.abs(), bound))
}

/// A value without a bound, to three significant digits.
pub fn rough(value: f64) -> Shown {
    if value == 0.0 {
        return exact(value);
    }
    let place = decade(value.abs()) - 2;
    let (units, rounded) = round_to(value, place);
    let mut shown = write(&units, 0, place, rounded.abs());
    shown.bound.clear();
    shown
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

/// The value as a whole number of `10^place` (as decimal text), and as the double nearest to that.
fn round_to(value: f64, place: i32) -> (String, f64) {
    // Rust rounds decimals from the exact expansion, ties to even.
    let digits = decade(value.abs()) - place;
    let units = if value == 0.0 || digits < -1 {
        "0".to_owned()
    } else if digits < 0 {
        // The leading digit stands just below the place: 0 or 1 unit.
        let half = format!("5e{}", place - 1).parse().unwrap_or(f64::INFINITY);
        let one = if value.abs() > half { "1" } else { "0" };
        if value < 0.0 && one == "1" { "-1".to_owned() } else { one.to_owned() }
    } else {
        let text = format!("{:.*e}", usize::try_from(digits).unwrap_or(0), value);
        let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
        let mut units = mantissa.replace('.', "");
        // Rounding may have carried into the next decade.
        let carried = exponent.parse::<i32>().unwrap_or(0) - place - digits;
        for _ in 0..carried {
            units.push('0');
        }
        units
    };
    let rounded = format!("{units}e{place}").parse().unwrap_or(value);
    (units, rounded)
}

/// The smallest whole number of `10^place` that is not below `value > 0`; large where it has more than two digits.
fn ceil_to(value: f64, place: i32) -> u64 {
    let (units, rounded) = round_to(value, place);
    let digits: u64 = units.parse().unwrap_or(u64::MAX);
    if rounded < value { digits.saturating_add(1) } else { digits }
}

fn write(units: &str, bound: u64, place: i32, size: f64) -> Shown {
    let lead = decade(size);
    let scientific = place > 0 && lead >= MOST_WHOLE || place < -MOST_BROKEN - 2 && lead < -3 || place < -18;
    let exponent = scientific.then_some(lead);
    let shift = place - exponent.unwrap_or(0);
    Shown { value: decimal(units, shift), bound: decimal(&bound.to_string(), shift), exponent }
}

/// A whole number of `10^shift` as decimal text.
fn decimal(units: &str, shift: i32) -> String {
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
        check(1.23456e-9, 2.2e-13, "(1.23456 ± 0.00022) × 10\u{207b}\u{2079}");
    }

    #[test]
    fn the_printed_interval_contains_the_computed_one() {
        let mut state = 1_u64;
        let mut next = || {
            state = state.wrapping_mul(6364136223846793005).wrapping_add(1442695040888963407);
            (state >> 11) as f64 / (1_u64 << 53) as f64
        };
        for _ in 0..20_000 {
            // Both from 1e-20 to 1e20.
            let mut size = || elementary::pow(10.0, next() * 40.0 - 20.0);
            let (value, bound) = (size() - size(), size());
            if bound == 0.0 {
                continue;
            }
            let text = shown(value, bound);
            let number = |text: &str| {
                let exponent = text_exponent(&shown(value, bound));
                format!("{}e{exponent}", text.replace('\u{2212}', "-")).parse::<f64>().unwrap()
            };
            let (v, b) = (number(&text.value), number(&text.bound));
            let slack = 1e-12 * (v.abs() + b);
            assert!(
                v - b <= value - bound + slack && v + b >= value + bound - slack,
                "{value} {bound} {text:?}"
            );
            // Not looser than the two digits ask for, or the tenth digit of the value.
            assert!(b <= 1.16 * bound + 2e-9 * value.abs() + 1e-300, "{value} {bound} {text:?}");
        }
    }

    fn text_exponent(shown: &Shown) -> i32 {
        shown.exponent.unwrap_or(0)
    }

    #[test]
    fn parameters_are_shown_as_written() {
        assert_eq!(plain(0.35), "0.35");
        assert_eq!(plain(-3200.0), "\u{2212}3200");
        assert_eq!(plain(5.670374419e-8), "5.670374419e\u{2212}8");
    }
}
