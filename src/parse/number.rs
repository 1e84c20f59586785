//! The text of one number, and of a value that is not there.

/// The sign between the whole part and the fraction.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Decimal {
    /// `1.5`
    #[default]
    Point,
    /// `1,5`
    Comma,
}

impl Decimal {
    /// The name used in settings and messages.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Point => "point",
            Self::Comma => "comma",
        }
    }

    /// Reads a name, or the sign itself.
    #[must_use]
    pub fn from_name(text: &str) -> Option<Self> {
        match text {
            "point" | "." => Some(Self::Point),
            "comma" | "," => Some(Self::Comma),
            _ => None,
        }
    }
}

/// Reads a number with a decimal point: the grammar of Rust's `f64` (`nan` and `inf` included), a
/// typographic minus, the Fortran exponent letter `D`, and Fortran's three-digit exponent without a
/// letter (`1.0-101`). `None` where the text is anything else, or digits beyond the largest number.
pub(super) fn number(text: &str) -> Option<f64> {
    let has_digits = || text.bytes().any(|b| b.is_ascii_digit());
    let within = |value: &f64| value.is_finite() || !has_digits();
    if let Ok(value) = text.parse() {
        return Some(value).filter(within);
    }
    if let Some(rest) = text.strip_prefix('−') {
        return match rest.starts_with(|c: char| c.is_ascii_digit() || c == '.') {
            true => number(rest).map(|value| -value),
            false => None,
        };
    }
    let (mantissa, exponent) = text
        .split_once(['d', 'D'])
        .or_else(|| bare_exponent(text))?;
    if !mantissa.ends_with(|c: char| c.is_ascii_digit() || c == '.') {
        return None;
    }
    let value = format!("{mantissa}e{exponent}").parse().ok();
    value.filter(within)
}

/// The mantissa and the exponent of `1.0-101`: a fraction, a sign, and exactly three digits.
fn bare_exponent(text: &str) -> Option<(&str, &str)> {
    let at = text.len().checked_sub(4)?;
    let (mantissa, exponent) = (text.get(..at)?, text.get(at..)?);
    let digits = exponent.strip_prefix(['+', '-'])?;
    let whole = mantissa.strip_prefix(['+', '-']).unwrap_or(mantissa);
    let plain = whole.bytes().all(|b| b.is_ascii_digit() || b == b'.');
    (digits.bytes().all(|b| b.is_ascii_digit()) && plain && whole.contains('.'))
        .then_some((mantissa, exponent))
}

/// Reads a number with this decimal mark. Separators of thousands are read where they can be nothing
/// else: more than one (`1,234,567`), or one beside a decimal mark (`1.234,5`).
pub(super) fn number_in(text: &str, decimal: Decimal) -> Option<f64> {
    let (mark, other) = match decimal {
        Decimal::Point => ('.', ','),
        Decimal::Comma => (',', '.'),
    };
    if !text.contains(other) {
        return match decimal {
            Decimal::Point => number(text),
            Decimal::Comma => number(&text.replace(',', ".")),
        };
    }
    let unsigned = text.strip_prefix(['+', '-', '−']).unwrap_or(text);
    let (whole, fraction) = match unsigned.split_once(mark) {
        Some((whole, fraction)) => (whole, Some(fraction)),
        None => (unsigned, None),
    };
    let groups: Vec<&str> = whole.split(other).collect();
    let digits = |group: &str| group.bytes().all(|b| b.is_ascii_digit());
    let first = groups
        .first()
        .is_some_and(|g| digits(g) && (1..=3).contains(&g.len()));
    let grouped = first && groups[1..].iter().all(|g| digits(g) && g.len() == 3);
    let certain = groups.len() > 2 || (groups.len() == 2 && fraction.is_some());
    (grouped && certain)
        .then(|| text.replace(other, "").replace(mark, "."))
        .and_then(|plain| number(&plain))
}

/// Whether a cell says that a value is not there: blank, dashes, asterisks (which a program writes
/// where a number has no room), or a word for it. `nan` is a number.
pub(super) fn is_missing(text: &str) -> bool {
    let only = |mark: u8| text.bytes().all(|byte| byte == mark);
    only(b'-')
        || only(b'*')
        || matches!(
            text,
            "–" | "—" | "n/a" | "N/A" | "NA" | "n.a." | "null" | "NULL" | "None" | "<NA>" | "#N/A"
        )
}

/// Whether the text is a number with a comma for its decimal mark.
pub(super) fn has_decimal_comma(text: &str) -> bool {
    let Some((whole, fraction)) = text.split_once(',') else {
        return false;
    };
    let whole = whole.strip_prefix(['+', '-', '−']).unwrap_or(whole);
    whole.bytes().all(|byte| byte.is_ascii_digit())
        && fraction.starts_with(|c: char| c.is_ascii_digit())
        && number(&format!("0{whole}.{fraction}")).is_some()
}

/// Whether a number with one comma may also be grouped in thousands, as in `1,234`.
pub(super) fn may_be_grouped(text: &str) -> bool {
    let unsigned = text.strip_prefix(['+', '-', '−']).unwrap_or(text);
    unsigned.split_once(',').is_some_and(|(whole, rest)| {
        let digits = |part: &str| part.bytes().all(|b| b.is_ascii_digit());
        rest.len() == 3
            && digits(rest)
            && (1..=3).contains(&whole.len())
            && !whole.starts_with('0')
            && digits(whole)
    })
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
            ("−1.5", -1.5),
            ("1.0-101", 1e-101),
            ("-2.50+100", -2.5e100),
            ("inf", f64::INFINITY),
        ] {
            assert_eq!(number(text), Some(value), "{text}");
        }
        assert!(number("NaN").unwrap().is_nan());
        for text in [
            "", "D5", "1D", "1,5", "0x1", "1.0 2.0", "*****", "nand", "infD2", "1_000", "1e400",
            "-1D999", "−", "−-1", "−nan", "--", "12-101", "1.0-12", "1.0-1011", "1.0+999", "1'234",
            "10(1)", "5%", "1.0-13.4",
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
        for (text, grouped) in [
            ("1,234", true),
            ("-12,345", true),
            ("0,123", false),
            ("1234,567", false),
            ("1,23", false),
        ] {
            assert_eq!(may_be_grouped(text), grouped, "{text}");
        }
    }

    #[test]
    fn marks_and_separators_of_thousands() {
        use Decimal::{Comma, Point};
        for (text, decimal, value) in [
            ("1,5", Comma, Some(1.5)),
            ("1,5", Point, None),
            ("1.5", Comma, None),
            ("1.234,5", Comma, Some(1_234.5)),
            ("1.234", Comma, None),
            ("1,234,567", Point, Some(1_234_567.0)),
            ("-1,234.5", Point, Some(-1_234.5)),
            ("1,234", Point, None),
            ("12,34.5", Point, None),
            ("1,2345.5", Point, None),
            ("1.2.3", Point, None),
            ("7", Comma, Some(7.0)),
            ("1,5E-01", Comma, Some(0.15)),
        ] {
            assert_eq!(number_in(text, decimal), value, "{text}");
        }
    }

    #[test]
    fn missing_values() {
        for text in ["", "-", "--", "****", "n/a", "—"] {
            assert!(is_missing(text), "{text}");
        }
        for text in ["0", "nan", "x", "-*"] {
            assert!(!is_missing(text), "{text}");
        }
    }
}
