//! Numbers of the annexes as text: the raw evidence behind a bound, not results.

/// Every digit that is needed to read the same number again: `−0.1234567890123`, `1.5e-9` as `1.5 × 10⁻⁹`.
pub(super) fn exact(x: f64) -> String {
    if !x.is_finite() {
        return NOT_FINITE.to_owned();
    }
    if x == 0.0 {
        return "0".to_owned();
    }
    if (1e-4..1e7).contains(&x.abs()) { typeset(&format!("{x}")) } else { typeset(&format!("{x:e}")) }
}

/// Three significant digits: `0.0123`, `1.23 × 10⁻⁹`.
pub(super) fn brief(x: f64) -> String {
    if !x.is_finite() {
        return NOT_FINITE.to_owned();
    }
    if x == 0.0 {
        return "0".to_owned();
    }
    let scientific = format!("{x:.2e}");
    let exponent: i32 = scientific.split_once('e').and_then(|(_, e)| e.parse().ok()).unwrap_or(0);
    if (-3..6).contains(&exponent) {
        let decimals = usize::try_from(2 - exponent).unwrap_or(0);
        typeset(&format!("{x:.decimals$}"))
    } else {
        typeset(&scientific)
    }
}

/// A whole number with a thin blank between groups of three digits.
pub(super) fn count(n: u64) -> String {
    let digits = n.to_string();
    if digits.len() < 5 {
        return digits;
    }
    let mut text = String::new();
    for (i, digit) in digits.chars().enumerate() {
        if i > 0 && (digits.len() - i).is_multiple_of(3) {
            text.push('\u{202f}');
        }
        text.push(digit);
    }
    text
}

/// A text and its unit, which do not part at the end of a line.
pub(super) fn with_unit(text: &str, unit: Option<&str>) -> String {
    unit.map_or_else(|| text.to_owned(), |unit| format!("{text}\u{a0}{unit}"))
}

/// A number as a study or Rust writes it, with a minus sign for each hyphen and a power of ten for `e`.
pub(super) fn typeset(text: &str) -> String {
    let text = text.replace('-', "\u{2212}");
    let Some((digits, exponent)) = text.split_once(['e', 'E']) else { return text };
    let raised: String = exponent
        .chars()
        .filter(|&c| c != '+')
        .map(|c| match c {
            '\u{2212}' => '⁻',
            '1' => '¹',
            '2' => '²',
            '3' => '³',
            '4' => '⁴',
            '5' => '⁵',
            '6' => '⁶',
            '7' => '⁷',
            '8' => '⁸',
            '9' => '⁹',
            _ => '⁰',
        })
        .collect();
    format!("{digits}\u{a0}×\u{a0}10{raised}")
}

const NOT_FINITE: &str = "not finite";

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn an_exact_number_reads_back_to_the_same_bits() {
        for x in [0.1 + 0.2, -1.0 / 3.0, 1.234e-9, 6.02214076e23, 5e-324] {
            let text = exact(x).replace('\u{2212}', "-");
            let text = match text.split_once("\u{a0}×\u{a0}10") {
                None => text,
                Some((digits, raised)) => {
                    let plain: String = raised
                        .chars()
                        .map(|c| {
                            "⁰¹²³⁴⁵⁶⁷⁸⁹".chars().position(|r| r == c).map_or("-".into(), |i| i.to_string())
                        })
                        .collect();
                    format!("{digits}e{plain}")
                }
            };
            assert_eq!(text.parse::<f64>().unwrap().to_bits(), x.to_bits(), "{text}");
        }
    }

    #[test]
    fn a_brief_number_has_three_digits() {
        assert_eq!(brief(0.012345), "0.0123");
        assert_eq!(brief(-4321.0), "−4321");
        assert_eq!(brief(9.999), "10.0");
        assert_eq!(brief(1.23456e-9), "1.23\u{a0}×\u{a0}10⁻⁹");
        assert_eq!(brief(0.0), "0");
        assert_eq!(brief(f64::NAN), "not finite");
    }

    #[test]
    fn counts_are_grouped_from_five_digits_on() {
        assert_eq!(count(1200), "1200");
        assert_eq!(count(1234567), "1\u{202f}234\u{202f}567");
    }
}
