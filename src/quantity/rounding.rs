//! Rounding of a value by its uncertainty.
//!
//! GUM (JCGM 100:2008) 7.2.6: an uncertainty is usually quoted to at most two significant digits,
//! and the estimate is rounded to the same decimal place.

/// The number of decimals at which `uncertainty` shows two significant digits, between 0 and 12.
///
/// ```
/// assert_eq!(bandrule::quantity::decimals_for(0.0312), 3);
/// assert_eq!(bandrule::quantity::decimals_for(0.0996), 2); // rounds to 0.10
/// assert_eq!(bandrule::quantity::decimals_for(32.0), 0);
/// ```
#[must_use]
pub fn decimals_for(uncertainty: f64) -> usize {
    let size = uncertainty.abs();
    if !size.is_finite() || size == 0.0 {
        return 4;
    }
    (0..=12usize)
        .find(|&decimals| {
            let scale = 10f64.powi(i32::try_from(decimals).unwrap_or(12));
            (size * scale).round() >= 10.0
        })
        .unwrap_or(12)
}

/// `value` with as many decimals as `uncertainty` bears; never shows a negative zero.
#[must_use]
pub fn rounded(value: f64, uncertainty: f64) -> String {
    let text = format!("{value:.*}", decimals_for(uncertainty));
    if text.starts_with('-') && text.chars().all(|c| matches!(c, '-' | '0' | '.')) {
        return text[1..].to_owned();
    }
    text
}

/// The value and its uncertainty, both rounded: `5.431 ± 0.062`.
///
/// ```
/// assert_eq!(bandrule::quantity::with_uncertainty(5.43089, 0.0618), "5.431 ± 0.062");
/// ```
#[must_use]
pub fn with_uncertainty(value: f64, uncertainty: f64) -> String {
    format!(
        "{} ± {}",
        rounded(value, uncertainty),
        rounded(uncertainty, uncertainty)
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn value_and_uncertainty_share_their_last_decimal() {
        assert_eq!(with_uncertainty(-0.0004, 0.012), "0.000 ± 0.012");
        assert_eq!(with_uncertainty(50.000_838, 32e-6), "50.000838 ± 0.000032");
        assert_eq!(with_uncertainty(1.0, 0.0996), "1.00 ± 0.10");
        assert_eq!(with_uncertainty(1234.5, 123.0), "1234 ± 123");
    }

    #[test]
    fn absurd_uncertainties_do_not_panic() {
        for u in [0.0, f64::NAN, f64::INFINITY, 1e-300, 1e300] {
            let _ = with_uncertainty(1.5, u);
        }
    }
}
