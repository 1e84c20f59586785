//! The text of one number.

/// Reads a number: the grammar of Rust's `f64` (`nan` and `inf` included), and the Fortran exponent
/// letter `D`. `None` where the text is anything else, or digits beyond the largest number.
pub(super) fn number(text: &str) -> Option<f64> {
    let within = |value: &f64| value.is_finite() || !text.contains(|c: char| c.is_ascii_digit());
    if let Ok(value) = text.parse() {
        return Some(value).filter(within);
    }
    let (mantissa, exponent) = text.split_once(['d', 'D'])?;
    if !mantissa.ends_with(|c: char| c.is_ascii_digit() || c == '.') {
        return None;
    }
    let value = format!("{mantissa}e{exponent}").parse().ok();
    value.filter(within)
}

/// Whether the text is a number with a comma for its decimal mark.
pub(super) fn has_decimal_comma(text: &str) -> bool {
    let Some((whole, fraction)) = text.split_once(',') else {
        return false;
    };
    let whole = whole.strip_prefix(['+', '-']).unwrap_or(whole);
    whole.bytes().all(|byte| byte.is_ascii_digit())
        && fraction.starts_with(|c: char| c.is_ascii_digit())
        && number(&format!("0{whole}.{fraction}")).is_some()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn grammar() {
        for (text, value) in [
            ("1.0E+00", 1.0),
            ("1.5D+00", 1.5),
            ("-2.d-3", -2e-3),
            (".5", 0.5),
            ("5.", 5.0),
            ("+7", 7.0),
            ("inf", f64::INFINITY),
        ] {
            assert_eq!(number(text), Some(value), "{text}");
        }
        assert!(number("NaN").unwrap().is_nan());
        for text in [
            "", "D5", "1D", "1,5", "0x1", "1.0 2.0", "*****", "nand", "infD2", "1_000", "1e400",
            "-1D999", "−1", "--", "1.0+001", "1'234", "10(1)", "5%",
        ] {
            assert_eq!(number(text), None, "{text}");
        }
    }

    #[test]
    fn decimal_comma() {
        for text in ["1,5", "-0,25", "1,5E-3", ",5", "+12,0"] {
            assert!(has_decimal_comma(text), "{text}");
        }
        for text in ["1.5", "a,b", "1,2,3", "1,", "1;5"] {
            assert!(!has_decimal_comma(text), "{text}");
        }
    }
}
