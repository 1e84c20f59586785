//! The grammar of the standard's numbers: `whole = sign? digit+`,
//! `real = sign? (digit+ ("." digit*)? | "." digit+) (("E" | "e") sign? digit+)?`.

use nom::branch::alt;
use nom::character::complete::{char, digit1, one_of};
use nom::combinator::{all_consuming, opt, recognize};
use nom::{IResult, Parser};

/// A finite real number; `None` where the text is anything else.
pub(super) fn real(text: &str) -> Option<f64> {
    let (_, text) = all_consuming(decimal).parse(text).ok()?;
    text.parse().ok().filter(|value: &f64| value.is_finite())
}

/// A whole number; `None` where the text is anything else.
pub(super) fn whole(text: &str) -> Option<i64> {
    let (_, text) = all_consuming(recognize((opt(one_of("+-")), digit1::<_, ()>)))
        .parse(text)
        .ok()?;
    text.parse().ok()
}

/// Whether the text would be a number, had it a point for its comma.
pub(super) fn has_decimal_comma(text: &str) -> bool {
    text.contains(',') && real(&text.replacen(',', ".", 1)).is_some()
}

fn decimal(text: &str) -> IResult<&str, &str> {
    // Not `digit0`: at the end of a text it leaves a rest that `recognize` cannot measure against.
    let digits = alt((
        recognize((digit1, opt((char('.'), opt(digit1))))),
        recognize((char('.'), digit1)),
    ));
    let exponent = opt((one_of("eE"), opt(one_of("+-")), digit1));
    recognize((opt(one_of("+-")), digits, exponent)).parse(text)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers() {
        for (text, value) in [
            ("1E37", 1e37),
            ("1.0E+37", 1e37),
            ("-.5", -0.5),
            ("5.", 5.0),
            ("+7e-2", 0.07),
            ("1486.6", 1486.6),
        ] {
            assert_eq!(real(text), Some(value), "{text}");
        }
        for text in [
            "", "nan", "inf", "1e999", "1,5", "0x1", "1.5D0", "1 2", "E5", "−1", "1E", ".", "5 eV",
        ] {
            assert_eq!(real(text), None, "{text}");
        }
        assert_eq!(whole("-1"), Some(-1));
        assert_eq!(whole("+007"), Some(7));
        for text in ["", "1.0", "1E3", "99999999999999999999", "-", "1 2"] {
            assert_eq!(whole(text), None, "{text}");
        }
        assert!(has_decimal_comma("-1,5E3"));
        assert!(!has_decimal_comma("1,2,3") && !has_decimal_comma("a,b"));
    }
}
