//! What may be said of the difference.
//!
//! `E_n` = d / U(d), U the expanded uncertainty of the difference (ISO/IEC 17043). At most one reads
//! as agreement only where U(d) is no larger than the study's tolerance.

use super::study::ComputedEnergies;
use crate::quantity::{rounded, with_uncertainty};
use crate::schema::{Caution, Expanded, Verdict};

/// The difference and what surrounds it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Grounds<'a> {
    pub difference: f64,
    pub expanded: &'a Expanded,
    pub tolerance: f64,
    pub computed_stated: bool,
    pub energies: ComputedEnergies,
    pub cautions: &'a [Caution],
}

/// The `E_n` number, d / U(d); `None` where there is no uncertainty.
#[must_use]
pub fn en_score(difference: f64, expanded: &Expanded) -> Option<f64> {
    let score = difference / expanded.expanded_uncertainty_ev;
    score.is_finite().then_some(score)
}

/// The verdict where there is a difference.
pub(super) fn verdict(grounds: Grounds<'_>) -> Verdict {
    let Grounds {
        difference,
        expanded,
        tolerance,
        computed_stated,
        energies,
        cautions,
    } = grounds;
    let expanded_uncertainty = expanded.expanded_uncertainty_ev;
    let found = format!(
        "computed minus measured gap is {} eV (95 %)",
        with_uncertainty(difference, expanded_uncertainty)
    );
    let open = |why: &str| Verdict {
        agrees: None,
        statement: format!("No verdict: {found}, but {why}."),
    };
    if cautions.iter().any(|c| c.name == "alignment-ambiguous") {
        return open("other alignments fit nearly as well");
    }
    if !computed_stated {
        return open("no uncertainty of the computed gap is stated (add [computed.uncertainty])");
    }
    let kind = match energies {
        ComputedEnergies::Quasiparticle => "quasiparticle",
        ComputedEnergies::MeanField => "mean-field",
    };
    if difference.abs() > expanded_uncertainty {
        let way = if difference > 0.0 { "above" } else { "below" };
        return Verdict {
            agrees: Some(false),
            statement: format!(
                "The computed {kind} gap lies {way} the measured one: {found}, more than the \
                 uncertainty explains."
            ),
        };
    }
    if expanded_uncertainty > tolerance {
        return open(&format!(
            "the uncertainty exceeds the tolerance of {} eV: the data cannot discriminate",
            rounded(tolerance, 0.1 * tolerance)
        ));
    }
    Verdict {
        agrees: Some(true),
        statement: format!("The computed {kind} gap agrees with the measured one: {found}."),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn expanded(u: f64) -> Expanded {
        Expanded {
            standard_uncertainty_ev: u / 2.0,
            effective_degrees_of_freedom: None,
            coverage_factor: 2.0,
            expanded_uncertainty_ev: u,
        }
    }

    fn agrees(difference: f64, u: f64, stated: bool, cautions: &[Caution]) -> Option<bool> {
        verdict(Grounds {
            difference,
            expanded: &expanded(u),
            tolerance: 0.2,
            computed_stated: stated,
            energies: ComputedEnergies::Quasiparticle,
            cautions,
        })
        .agrees
    }

    #[test]
    fn agreement_needs_a_small_uncertainty() {
        assert_eq!(agrees(0.05, 0.1, true, &[]), Some(true));
        assert_eq!(agrees(0.05, 0.3, true, &[]), None);
        assert_eq!(agrees(0.15, 0.1, true, &[]), Some(false));
        assert_eq!(agrees(0.5, 0.3, true, &[]), Some(false));
    }

    #[test]
    fn nothing_is_said_on_open_grounds() {
        assert_eq!(agrees(0.05, 0.1, false, &[]), None);
        let ambiguous = [Caution {
            name: "alignment-ambiguous".to_owned(),
            message: String::new(),
        }];
        assert_eq!(agrees(0.05, 0.1, true, &ambiguous), None);
    }
}
