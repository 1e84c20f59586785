//! The text of one number, in records and in pairs, and how finely it was written.

use nom::branch::alt;
use nom::bytes::complete::take_while;
use nom::character::complete::{char, digit1, one_of};
use nom::combinator::{map_opt, opt, recognize};
use nom::{IResult, Parser};

/// Digits, or none. (`digit0` of nom 8.0 leaves an empty rest at the wrong place where the text ends,
/// which `recognize` then takes for what was read; so does `space0`.)
pub(super) fn digits(input: &str) -> IResult<&str, &str> {
    take_while(|c: char| c.is_ascii_digit()).parse(input)
}

/// Blanks and tabs, or none.
pub(super) fn blanks(input: &str) -> IResult<&str, &str> {
    take_while(|c: char| matches!(c, ' ' | '\t')).parse(input)
}

/// Digits of a number without sign and exponent.
pub(super) fn mantissa(input: &str) -> IResult<&str, &str> {
    alt((
        recognize((digit1, opt((char('.'), digits)))),
        recognize((char('.'), digit1)),
    ))
    .parse(input)
}

/// A finite decimal number where no letter stands for a digit: the exponent may be short.
pub(super) fn decimal(input: &str) -> IResult<&str, f64> {
    let exponent = opt((one_of("eE"), opt(one_of("+-")), digit1));
    map_opt(recognize((opt(one_of("+-")), mantissa, exponent)), finite).parse(input)
}

/// The value of a text that the grammar has taken, where a double can hold it.
pub(super) fn finite(text: &str) -> Option<f64> {
    text.parse().ok().filter(|value: &f64| value.is_finite())
}

/// The whole text as a number.
pub(super) fn whole_decimal(text: &str) -> Option<f64> {
    match decimal(text) {
        Ok(("", value)) => Some(value),
        _ => None,
    }
}

/// The unit of the last place that was written: 0.01 for `1.25`, 1 for `12`, 100 for `1.2E+03`.
pub(super) fn last_place(text: &str) -> f64 {
    let (mantissa, exponent) = text.split_once(['e', 'E']).unwrap_or((text, "0"));
    let fraction = mantissa
        .split_once('.')
        .map_or("", |(_, fraction)| fraction);
    let exponent: i32 = exponent.parse().unwrap_or(0);
    let digits = i32::try_from(fraction.len()).unwrap_or(i32::MAX);
    10f64.powi(exponent.saturating_sub(digits))
}

/// The most by which rounding can have moved a number that was written with a decimal point.
pub(super) fn rounding(text: &str) -> f64 {
    if text.contains('.') {
        last_place(text) / 2.0
    } else {
        0.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers() {
        for (text, value) in [
            ("4000", 4000.0),
            ("+.5", 0.5),
            ("-5.", -5.0),
            ("4.24", 4.24),
            ("1.5E-05", 1.5e-5),
            ("1e3", 1000.0),
        ] {
            assert_eq!(whole_decimal(text), Some(value), "{text}");
        }
        for text in [
            "", "NaN", "inf", "1,5", "1E999", "1D5", "0x1", "1 2", "--1", "−1", "4 1/CM",
        ] {
            assert_eq!(whole_decimal(text), None, "{text}");
        }
    }

    #[test]
    fn places() {
        for (text, place) in [
            ("12", 1.0),
            ("1.25", 0.01),
            ("1.2E+03", 100.0),
            ("-3.", 1.0),
        ] {
            assert!((last_place(text) / place - 1.0).abs() < 1e-12, "{text}");
        }
        assert_eq!(rounding("400"), 0.0);
        assert_eq!(rounding("0.5"), 0.05);
    }
}
