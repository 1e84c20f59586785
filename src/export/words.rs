//! How quantities and references read in words, shared by the figure, the report and the summary.

use crate::quantity::{Reference, rounded, with_uncertainty};
use crate::schema::{Quantity, ResultDocument};

/// The text on one line, fit for a terminal and for XML: every control character is a space.
pub(super) fn plain(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            '\u{fffe}' | '\u{ffff}' | '\u{2028}' | '\u{2029}' => ' ',
            c if c.is_control() => ' ',
            c => c,
        })
        .collect()
}

/// A number with a true minus sign.
pub(super) fn typeset(number: &str) -> String {
    number.replace('-', "\u{2212}")
}

/// The text with its units kept on the line of their numbers.
pub(super) fn unbroken(text: &str) -> String {
    ["%", "eV", "±"].iter().fold(plain(text), |text, unit| {
        text.replace(&format!(" {unit}"), &format!("\u{a0}{unit}"))
    })
}

/// The 95 % interval: as stated, else two standard uncertainties to each side.
pub(super) fn interval(quantity: &Quantity) -> Option<(f64, f64)> {
    match (quantity.lower, quantity.upper) {
        (Some(lower), Some(upper)) => Some((lower, upper)),
        _ => quantity
            .standard_uncertainty
            .map(|u| (quantity.value - 2.0 * u, quantity.value + 2.0 * u)),
    }
}

/// Value and standard uncertainty, without the unit.
pub(super) fn value(quantity: &Quantity) -> String {
    match quantity.standard_uncertainty {
        Some(u) => with_uncertainty(quantity.value, u),
        None => rounded(quantity.value, f64::NAN),
    }
}

/// Value and half width of the 95 % interval, both half widths where they differ as rounded.
pub(super) fn value_with_interval(quantity: &Quantity) -> String {
    let Some((lower, upper)) = interval(quantity) else {
        return format!("{} eV, uncertainty not stated", value(quantity));
    };
    let (below, above) = (quantity.value - lower, upper - quantity.value);
    let least = below.min(above);
    if rounded(below, least) == rounded(above, least) {
        return format!("{} eV", with_uncertainty(quantity.value, below));
    }
    format!(
        "{} (+{} -{}) eV",
        rounded(quantity.value, least),
        rounded(above, least),
        rounded(below, least)
    )
}

/// The ends of an interval, rounded by its half width.
pub(super) fn interval_text((lower, upper): (f64, f64)) -> String {
    let half = (upper - lower) / 2.0;
    format!("{} to {}", rounded(lower, half), rounded(upper, half))
}

/// The 95 % interval of the difference: its own, else that of the expanded uncertainty.
pub(super) fn difference_interval(result: &ResultDocument) -> Option<(f64, f64)> {
    let difference = result.difference.as_ref()?;
    if difference.lower.is_some() && difference.upper.is_some() {
        return interval(difference);
    }
    match &result.expanded {
        Some(expanded) => Some((
            difference.value - expanded.expanded_uncertainty_ev,
            difference.value + expanded.expanded_uncertainty_ev,
        )),
        None => interval(difference),
    }
}

/// Each budget row's share of the variance of the difference; zeros where nothing contributes.
pub(super) fn variance_shares(result: &ResultDocument) -> Vec<f64> {
    let squares = result.budget.iter().map(|row| row.difference_ev.powi(2));
    let total: f64 = squares.clone().sum();
    squares
        .map(|square| if total > 0.0 { square / total } else { 0.0 })
        .collect()
}

/// The title of the energy axis.
pub(super) fn energy_title(reference: Reference) -> &'static str {
    match reference {
        Reference::Fermi => "E - E_F (eV)",
        _ => "E (eV)",
    }
}

/// What the energies are counted from.
pub(super) fn counted_from(reference: Reference) -> &'static str {
    match reference {
        Reference::Fermi => "the Fermi level",
        Reference::ValenceEdge => "the highest occupied level",
        Reference::Vacuum => "the vacuum level of the sample",
        Reference::Unknown => "a zero that is not stated",
    }
}

/// The answer in words.
pub(super) fn agreement(agrees: Option<bool>) -> &'static str {
    match agrees {
        Some(true) => "Computed and measured gap agree",
        Some(false) => "Computed and measured gap disagree",
        None => "The data cannot tell",
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn asymmetric_intervals_show_both_half_widths() {
        let skew = Quantity {
            lower: Some(1.0),
            upper: Some(1.3),
            ..Quantity::new(1.1, 0.08)
        };
        assert_eq!(value_with_interval(&skew), "1.10 (+0.20 -0.10) eV");
        assert_eq!(
            value_with_interval(&Quantity::new(1.1, 0.08)),
            "1.10 ± 0.16 eV"
        );
        assert_eq!(
            value_with_interval(&Quantity::unstated(1.1)),
            "1.1000 eV, uncertainty not stated"
        );
    }

    #[test]
    fn control_characters_never_reach_a_terminal() {
        assert_eq!(plain("a\n\u{1b}[31mb\u{2028}"), "a  [31mb ");
    }
}
