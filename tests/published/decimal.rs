//! Decimal numbers exactly as printed, and how far a binary number lies from them.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Signed, ToPrimitive, Zero};

/// A number as a table prints it.
#[derive(Debug)]
pub(crate) struct Printed {
    /// Its exact value.
    pub(crate) value: BigRational,
    /// Half a unit of its last digit.
    pub(crate) half_unit: BigRational,
    /// How many significant digits are printed; trailing zeros count.
    pub(crate) digits: usize,
}

/// Reads `-1.27083815427868618766870326927e-1`, exactly.
///
/// # Errors
/// A sentence, where the text is no decimal number.
pub(crate) fn read(text: &str) -> Result<Printed, String> {
    let wrong = || format!("`{text}` is no decimal number");
    let (mantissa, exponent) = text.split_once(['e', 'E']).unwrap_or((text, "0"));
    let exponent: i64 = exponent.parse().map_err(|_| wrong())?;
    let (whole, part) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let number: BigInt = format!("{whole}{part}").parse().map_err(|_| wrong())?;
    let last = exponent - i64::try_from(part.len()).map_err(|_| wrong())?;
    let unit = power_of_ten(last).ok_or_else(wrong)?;
    let digits = number.magnitude().to_string().trim_start_matches('0').len();
    let two = BigRational::from_integer(BigInt::from(2));
    Ok(Printed { value: BigRational::from_integer(number) * unit.clone(), half_unit: unit / two, digits })
}

/// Ten to a power of at most a thousand either way.
fn power_of_ten(power: i64) -> Option<BigRational> {
    let size = u32::try_from(power.unsigned_abs()).ok().filter(|size| *size <= 1000)?;
    let whole = BigRational::from_integer(BigInt::from(10).pow(size));
    Some(if power < 0 { BigRational::one() / whole } else { whole })
}

/// The exact distance of a finite number from a printed one.
///
/// # Errors
/// A sentence, where the number is not finite.
pub(crate) fn distance(ours: f64, printed: &Printed) -> Result<BigRational, String> {
    Ok((exact(ours)? - printed.value.clone()).abs())
}

/// A finite number as a ratio.
///
/// # Errors
/// A sentence, where the number is not finite.
pub(crate) fn exact(number: f64) -> Result<BigRational, String> {
    BigRational::from_float(number).ok_or_else(|| format!("{number} is not finite"))
}

/// The nearest binary number, for showing and for ratios.
pub(crate) fn near(ratio: &BigRational) -> f64 {
    ratio.to_f64().unwrap_or(f64::NAN)
}

#[test]
fn a_printed_number_keeps_every_digit() {
    let printed = read("-1.2500e-1").unwrap();
    assert_eq!(printed.digits, 5);
    assert_eq!(printed.value, exact(-0.125).unwrap());
    assert_eq!(printed.half_unit, BigRational::new(BigInt::from(1), BigInt::from(200_000)));
    assert!(distance(-0.125, &printed).unwrap().is_zero());
    assert!(distance(-0.125 * (1.0 + f64::EPSILON), &printed).unwrap().is_positive());
    assert!(read("1.2.3").is_err() && read("").is_err() && read("1e5000").is_err());
    assert!(exact(f64::NAN).is_err());
}
