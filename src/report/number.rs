//! A quantity as the report shows it.

use crate::bound::Quantity;
use crate::figure::digits::{self, Shown};

/// The number of a quantity as text, to the digits that its bound supports: `10.380 ± 0.012 m`.
pub fn shown(quantity: &Quantity) -> String {
    let unit = quantity.unit.as_deref();
    match (quantity.value, quantity.bound) {
        (Some(value), Some(_)) if quantity.whole => digits::plain(value),
        (Some(value), Some(bound)) => digits::shown(value, bound).text(unit),
        (Some(value), None) => format!("about {}, without a bound", digits::rough(value).text(unit)),
        (None, _) => "no value".to_owned(),
    }
}

/// The value alone, to the digits that the bound supports.
pub(super) fn value_alone(quantity: &Quantity) -> String {
    let unit = quantity.unit.as_deref();
    match (quantity.value, quantity.bound) {
        (Some(value), Some(_)) if quantity.whole => digits::plain(value),
        (Some(value), Some(bound)) => digits::shown(value, bound).value_text(unit),
        _ => shown(quantity),
    }
}

/// Value, bound and unit apart, for a table.
pub(super) fn parts(value: Option<f64>, bound: Option<f64>, whole: bool, unit: Option<&str>) -> Parts {
    let shown = match (value, bound) {
        (Some(value), Some(_)) if whole => {
            Shown { value: digits::plain(value), bound: "0".to_owned(), exponent: None }
        }
        (Some(value), Some(bound)) => digits::shown(value, bound),
        (Some(value), None) => digits::rough(value),
        (None, _) => Shown { value: "\u{2013}".to_owned(), bound: String::new(), exponent: None },
    };
    split(shown, unit)
}

/// The parts of a number that is text already.
pub(super) fn split(shown: Shown, unit: Option<&str>) -> Parts {
    let power = shown.exponent.map_or_else(String::new, |n| format!("× 10{} ", digits::superscript(n)));
    Parts { value: shown.value, bound: shown.bound, unit: format!("{power}{}", unit.unwrap_or("")) }
}

/// Value, bound and unit of a number as text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Parts {
    pub(super) value: String,
    pub(super) bound: String,
    pub(super) unit: String,
}

/// Pads numbers behind their decimal mark with spaces as wide as digits, so that a right-aligned column aligns at
/// the mark.
pub(super) fn align(column: &mut [&mut String]) {
    let behind = |text: &str| text.rsplit_once('.').map_or(0, |(_, behind)| behind.chars().count() + 1);
    let is_number = |text: &str| text.contains(|c: char| c.is_ascii_digit());
    let most = column.iter().filter(|text| is_number(text)).map(|text| behind(text)).max().unwrap_or(0);
    for text in column.iter_mut().filter(|text| is_number(text)) {
        let own = behind(text);
        for k in own..most {
            // U+2008 is as wide as a point, U+2007 as a digit.
            text.push(if k == 0 { '\u{2008}' } else { '\u{2007}' });
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_align_at_the_decimal_mark() {
        let (mut a, mut b, mut c) = ("10.38".to_owned(), "4".to_owned(), "0.5".to_owned());
        align(&mut [&mut a, &mut b, &mut c]);
        assert_eq!(b, "4\u{2008}\u{2007}\u{2007}");
        assert_eq!(c, "0.5\u{2007}");
        assert_eq!(a, "10.38");
    }
}
