//! Numbers as the record and the data files hold them: finite, as decimal and as bits.

use serde::Serialize;

/// What a record cannot hold. Either is a defect of ours: a run stops before such a number gets out.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum RecordError {
    /// A NaN or an infinity; says where.
    NotFinite(String),
    /// Columns of a table that are not of the same length; says which.
    Uneven(String),
    /// The JSON writer refused; says why.
    Json(String),
}

impl std::fmt::Display for RecordError {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            RecordError::NotFinite(place) => write!(f, "a number is not finite: {place}"),
            RecordError::Uneven(place) => write!(f, "columns are not of the same length: {place}"),
            RecordError::Json(cause) => write!(f, "the record cannot be written as JSON: {cause}"),
        }
    }
}

impl std::error::Error for RecordError {}

/// A finite number with its bits, so that a reader need not trust anybody's decimal conversion.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Number {
    /// The number; the JSON writer gives the shortest decimal that reads back to it.
    pub value: f64,
    /// Its 64 bits as 16 hexadecimal digits.
    pub bits: String,
}

impl Number {
    /// The number with its bits.
    ///
    /// # Errors
    /// [`RecordError::NotFinite`] with the place `at`.
    pub fn new(value: f64, at: &str) -> Result<Self, RecordError> {
        Ok(Number { value: finite(value, at)?, bits: bits(value) })
    }
}

/// The number itself where it is finite.
///
/// # Errors
/// [`RecordError::NotFinite`] with the place `at`.
pub fn finite(value: f64, at: &str) -> Result<f64, RecordError> {
    if value.is_finite() { Ok(value) } else { Err(RecordError::NotFinite(at.to_owned())) }
}

/// As [`finite`], where there is a number.
///
/// # Errors
/// [`RecordError::NotFinite`] with the place `at`.
pub fn finite_option(value: Option<f64>, at: &str) -> Result<Option<f64>, RecordError> {
    value.map(|value| finite(value, at)).transpose()
}

/// The 64 bits of a number as 16 hexadecimal digits: 1 is `3ff0000000000000`.
pub fn bits(value: f64) -> String {
    format!("{:016x}", value.to_bits())
}

/// The shortest decimal that reads back to the same number: `0.1`, `1200`, `1e-7`, `-0`.
pub fn decimal(value: f64) -> String {
    let size = value.abs();
    if size == 0.0 || (1e-5..1e16).contains(&size) { format!("{value}") } else { format!("{value:e}") }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn bits_are_those_of_the_standard() {
        // IEEE 754-2019, table 3.5: sign, 11 bits of biased exponent, 52 bits of fraction.
        assert_eq!(bits(1.0), "3ff0000000000000");
        assert_eq!(bits(-2.0), "c000000000000000");
        assert_eq!(bits(f64::from_bits(1)), "0000000000000001");
    }

    #[test]
    fn a_decimal_is_short_and_reads_back() {
        for (value, text) in [
            (0.1, "0.1"),
            (1200.0, "1200"),
            (1e-7, "1e-7"),
            (-0.0, "-0"),
            (1e16, "1e16"),
            (f64::MAX, "1.7976931348623157e308"),
            (5e-324, "5e-324"),
            (-1.5, "-1.5"),
        ] {
            assert_eq!(decimal(value), text);
            assert_eq!(text.parse::<f64>().unwrap().to_bits(), value.to_bits());
        }
    }

    #[test]
    fn a_number_that_is_not_finite_is_refused_with_its_place() {
        for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
            assert_eq!(Number::new(value, "reject.z"), Err(RecordError::NotFinite("reject.z".to_owned())));
        }
        assert_eq!(finite_option(None, "x"), Ok(None));
    }
}
