//! The reader of values: `NUMBER` or `NUMBER UNIT`.
//!
//! - NUMBER: an optional sign, decimal digits with at most one point, an optional exponent (`-1.5`, `.5`,
//!   `2.`, `1e-6`). It must be finite, and zero only where its digits are.
//! - UNIT: text that starts with a letter, `°`, `%` or `1/`, of letters, digits and `^ / * · . ( ) _ ° %`; signs
//!   stand behind `^` alone. Blanks may part it: `kg m/s`.
//! - The blank between them may be left out (`3200m`), unless the unit starts with `e` or `E`: `1eV` would
//!   read as a number with a broken exponent, and is an error that asks for the blank.

use std::ops::Range;

use super::Value;
use crate::fault::{Fault, Faults, Span, clip};

/// Where the number and the unit of a value stand in its text, in bytes.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Parts {
    /// The number.
    pub number: Range<usize>,
    /// The unit.
    pub unit: Option<Range<usize>>,
}

/// The parts of a text that has the form of a value; `None` for any other text.
pub fn parts(text: &str) -> Option<Parts> {
    let start = text.len() - text.trim_start().len();
    let end = text.trim_end().len();
    let number = start..start + number_length(text.get(start..end)?)?;
    let rest = &text[number.end..end];
    let unit = rest.trim_start();
    if unit.is_empty() {
        return Some(Parts { number, unit: None });
    }
    let glued = unit.len() == rest.len();
    if !is_unit(unit) || glued && (unit.starts_with(['e', 'E', '1']) || is_other_base(&text[start..end])) {
        return None;
    }
    Some(Parts { number, unit: Some(end - unit.len()..end) })
}

/// Whether a text should be read as a value rather than as an expression: it has the form of one, or of a
/// number that slipped (`1,5 m`, `.inf`).
pub fn is_value(text: &str) -> bool {
    parts(text).is_some() || slip(text.trim()).is_some()
}

/// Reads a value.
///
/// `at` is the place of `text`, and `exact` tells whether byte `i` of `text` is byte `at.start + i` of the file;
/// faults then mark the number or the unit alone.
///
/// # Errors
/// `None` and one fault where the text is no value: `not-a-value`, or `number-range` for a number that is not
/// finite or is too small for binary64.
pub fn read_value(text: &str, at: Span, exact: bool, faults: &mut Faults) -> Option<Value> {
    let place = |range: Range<usize>| if exact { at.part(range.start, range.end) } else { at };
    let Some(parts) = parts(text) else {
        faults.add(refusal(text, &place));
        return None;
    };
    let digits = &text[parts.number.clone()];
    let number: f64 = digits.parse().ok()?;
    let mantissa = digits.split(['e', 'E']).next().unwrap_or_default();
    if number.is_infinite() {
        let message = format!("the number `{}` is larger than binary64 can hold", clip(digits));
        faults.add(
            Fault::error("number-range", place(parts.number), message)
                .help("the largest is about 1.8e308: choose another unit"),
        );
        return None;
    }
    if number == 0.0 && mantissa.bytes().any(|byte| byte.is_ascii_digit() && byte != b'0') {
        let message = format!("the number `{}` is so small that binary64 makes it zero", clip(digits));
        faults.add(
            Fault::error("number-range", place(parts.number), message)
                .help("the smallest is about 4.9e-324: choose another unit, or write 0"),
        );
        return None;
    }
    let whole = parts.number.start..parts.unit.as_ref().map_or(parts.number.end, |unit| unit.end);
    Some(Value {
        number,
        digits: digits.to_string(),
        unit: parts.unit.map(|unit| text[unit].to_string()),
        at: place(whole),
    })
}

/// Length of the number at the start of a text.
fn number_length(text: &str) -> Option<usize> {
    let bytes = text.as_bytes();
    let digits = |from: usize| bytes[from..].iter().take_while(|byte| byte.is_ascii_digit()).count();
    let mut at = usize::from(matches!(bytes.first(), Some(b'+' | b'-')));
    let whole = digits(at);
    at += whole;
    let mut fraction = 0;
    if bytes.get(at) == Some(&b'.') {
        fraction = digits(at + 1);
        at += 1 + fraction;
    }
    if whole + fraction == 0 {
        return None;
    }
    if matches!(bytes.get(at), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(at + 1), Some(b'+' | b'-')));
        let exponent = bytes.get(at + 1 + sign..).map_or(0, |_| digits(at + 1 + sign));
        if exponent > 0 {
            at += 1 + sign + exponent;
        }
    }
    Some(at)
}

/// Whether a text has the form of a unit.
fn is_unit(text: &str) -> bool {
    let Some(first) = text.chars().next() else { return false };
    let starts = first.is_alphabetic()
        || first == '°'
        || (first == '%' && matches!(text[1..].trim_start().chars().next(), None | Some('/' | '*' | '·')))
        || text
            .strip_prefix("1/")
            .is_some_and(|rest| rest.starts_with(|c: char| c.is_alphabetic() || c == '('));
    let mut before = ' ';
    let mut gap = false;
    starts
        && text.char_indices().all(|(i, c)| {
            let fine = match c {
                ' ' | '\t' => {
                    gap = true;
                    return true;
                }
                // A digit belongs to a name or an exponent, and is the 1 of `1/s` at the very start only.
                '0'..='9' => i == 0 || !gap && (before.is_alphanumeric() || "^+-.".contains(before)),
                '+' | '-' => before == '^' || before == '(',
                '^' | '/' | '*' | '·' | '.' | '(' | ')' | '_' | '°' | '%' => true,
                _ => c.is_alphanumeric() || matches!(c, '⁺' | '⁻'),
            };
            gap = false;
            before = c;
            fine
        })
}

/// A well-known slip in a number: what is wrong, and what to do.
fn slip(text: &str) -> Option<(&'static str, &'static str)> {
    let bare = text.trim_start_matches(['+', '-', '.']);
    let word: String =
        bare.chars().take_while(|c| c.is_alphabetic()).take(9).flat_map(char::to_lowercase).collect();
    let starts_with_digit = |text: &str| text.starts_with(|c: char| c.is_ascii_digit());
    // `inf` and `nan` may be names in an expression; alone or with a dot in front they are meant as numbers.
    if matches!(word.as_str(), "nan" | "inf" | "infinity") && bare.len() == word.len() {
        return Some(("a value must be a finite number", "write a number such as `1e6`"));
    }
    if text.strip_prefix(['−', '–']).is_some_and(|rest| starts_with_digit(rest.trim_start())) {
        return Some(("the minus sign is not the one of the keyboard", "write `-`"));
    }
    let length = number_length(text)?;
    let rest = &text[length..];
    if rest.strip_prefix([',', '_', '\'', '\u{a0}', '\u{202f}', '\u{2009}']).is_some_and(starts_with_digit) {
        return Some((
            "a number is written with a point and without marks between thousands",
            "write `1000` or `1.5`",
        ));
    }
    if rest.starts_with(' ') && starts_with_digit(rest.trim_start()) && !rest.trim_start().starts_with("1/") {
        return Some(("a number contains no blank", "write `1000` in one piece"));
    }
    if rest.starts_with(['e', 'E']) && is_unit(rest) {
        return Some((
            "a number with `e` behind it is read as a broken exponent",
            "put a blank between number and unit",
        ));
    }
    if is_other_base(text) {
        return Some(("a number is written in decimal digits", "write for example `31`"));
    }
    None
}

/// Whether a text is a number of another base: `0x1F`.
fn is_other_base(text: &str) -> bool {
    let bare = text.trim_start_matches(['+', '-']).as_bytes();
    matches!(bare, [b'0', b'x' | b'X' | b'b' | b'o', digit, ..] if digit.is_ascii_hexdigit())
}

fn refusal(text: &str, place: &impl Fn(Range<usize>) -> Span) -> Fault {
    let start = text.len() - text.trim_start().len();
    let end = text.trim_end().len().max(start);
    let trimmed = text.trim();
    let whole = place(start..end);
    if let Some((message, help)) = slip(trimmed) {
        return Fault::error("not-a-value", whole, format!("{message}: `{}`", clip(trimmed))).help(help);
    }
    if trimmed.is_empty() {
        return Fault::error("not-a-value", whole, "a value is missing")
            .help("write `NUMBER` or `NUMBER UNIT`: `3200 m`");
    }
    if let Some(length) = number_length(trimmed) {
        let rest = trimmed[length..].trim_start();
        let at = place(end - rest.len()..end);
        let message = format!("`{}` is no unit", clip(rest));
        return Fault::error("not-a-value", at, message).help(
            "a value is one number and a unit such as `m`, `m/s^2`, `1/s` or `%`; it takes no formula",
        );
    }
    Fault::error("not-a-value", whole, format!("`{}` is no value", clip(trimmed)))
        .help("write `NUMBER` or `NUMBER UNIT`: `3200 m`, `0.35 s^2/m`, `1e-6`")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::fault::FileId;

    /// Reads `input`; expects `number|unit`, or `code@from..to`.
    fn check(input: &str, expect: &str) {
        let mut faults = Faults::new();
        let at = Span::new(FileId(0), 100, 100 + input.len());
        let got = if let Some(value) = read_value(input, at, true, &mut faults) {
            assert!(faults.is_empty() && is_value(input));
            let text = &input[value.at.start - 100..value.at.end - 100];
            assert!(text.starts_with(&value.digits), "{text}");
            format!("{:?}|{}", value.number, value.unit.unwrap_or_default())
        } else {
            let list = faults.sorted();
            assert_eq!(list.len(), 1, "{input}");
            assert!(list[0].help.is_some());
            format!("{}@{}..{}", list[0].code, list[0].at.start - 100, list[0].at.end - 100)
        };
        assert_eq!(got, expect, "{input}");
    }

    #[test]
    fn numbers_with_and_without_units_are_read() {
        check("3200 m", "3200.0|m");
        check("-1.5 m", "-1.5|m");
        check("0.35 s^2/m", "0.35|s^2/m");
        check("1e-6", "1e-6|");
        check(" +.5E+3  kg m^-1 s^(-2) ", "500.0|kg m^-1 s^(-2)");
        check("2.", "2.0|");
        check("20 °C", "20.0|°C");
        check("5 %", "5.0|%");
        check("5 %/s", "5.0|%/s");
        check("4 1/s", "4.0|1/s");
        check("4 1/(m s)", "4.0|1/(m s)");
        check("3 m²", "3.0|m²");
        check("7 µm", "7.0|µm");
        check("1 eV", "1.0|eV");
        check("0e-400 m", "0.0|m");
        check("-0", "-0.0|");
        check("1e3m", "1000.0|m");
    }

    #[test]
    fn the_blank_before_the_unit_may_be_left_out_unless_it_starts_like_an_exponent() {
        check("3200m", "3200.0|m");
        check("5%", "5.0|%");
        check("1eV", "not-a-value@0..3");
        check("1e", "not-a-value@0..2");
    }

    #[test]
    fn numbers_out_of_range_are_refused_at_the_number() {
        check("1e400 m", "number-range@0..5");
        check("  -1e999", "number-range@2..8");
        check("1e-400 m", "number-range@0..6");
        check("NaN", "not-a-value@0..3");
        check("inf", "not-a-value@0..3");
        check("-.inf", "not-a-value@0..5");
        check("Infinity", "not-a-value@0..8");
    }

    #[test]
    fn slips_are_refused_with_help() {
        check("1,5 m", "not-a-value@0..5");
        check("1_000", "not-a-value@0..5");
        check("1 000 m", "not-a-value@0..7");
        check("−1.5 m", "not-a-value@0..8");
        check("0x1F", "not-a-value@0..4");
        check("", "not-a-value@0..0");
        check("   ", "not-a-value@3..3");
        check("m", "not-a-value@0..1");
        check("3 + 4", "not-a-value@2..5");
        check("3*x", "not-a-value@1..3");
        check("3 m + 4 m", "not-a-value@2..9");
        check("5 % 3", "not-a-value@2..5");
        check("1e", "not-a-value@0..2");
        check("+", "not-a-value@0..1");
        check("1.2.3", "not-a-value@3..5");
        check("4 h 2", "not-a-value@2..5");
    }

    #[test]
    fn expressions_are_no_values() {
        for text in
            ["2*h", "sqrt(2*g*H)", "h0", "2 - x", "5 % x", "nan0", "inf*2", "-x", "2 h + 1", "3 m - 2 m"]
        {
            assert!(!is_value(text), "{text}");
        }
    }

    #[test]
    fn a_text_without_exact_places_is_marked_whole() {
        let mut faults = Faults::new();
        let at = Span::new(FileId(0), 5, 50);
        assert!(read_value("1e400 m", at, false, &mut faults).is_none());
        assert_eq!(faults.sorted()[0].at, at);
    }

    #[test]
    fn a_megabyte_of_digits_is_read() {
        let mut faults = Faults::new();
        let text = format!("0.{} m", "3".repeat(1_000_000));
        let value = read_value(&text, Span::default(), false, &mut faults).unwrap();
        assert!((value.number - 1.0 / 3.0).abs() < 1e-15);
        assert!(read_value(&"9".repeat(1_000_000), Span::default(), false, &mut faults).is_none());
        assert!(faults.sorted()[0].message.len() < 200);
    }
}
