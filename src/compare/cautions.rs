//! What a reader of the numbers should know beside them.

use super::side::SideResult;
use crate::quantity::Reference;
use crate::schema::{Alternative, Caution, Measured, Quantity};

/// Deviance over the dispersion within which another minimum competes: a likelihood ratio of 1/1800.
const COMPETING: f64 = 15.0;

/// The cautions of a comparison, side by side, then of the whole.
pub(super) fn cautions(
    sides: &[SideResult],
    reference: Reference,
    measured: &Measured,
) -> Vec<Caution> {
    let mut list = Vec::new();
    for side in sides {
        side_cautions(side, &mut list);
    }
    let outside = |edge: Option<Quantity>, sign: f64| edge.is_some_and(|e| sign * e.value > 0.0);
    if reference == Reference::Fermi
        && (outside(measured.valence_edge, 1.0) || outside(measured.conduction_edge, -1.0))
    {
        list.push(Caution {
            name: "fermi-outside-gap".to_owned(),
            message:
                "the Fermi level lies outside the measured gap: check the calibration of both \
                      sides, charging, and that both were taken from one surface"
                    .to_owned(),
        });
    }
    list
}

/// Other minima that the data do not rule out.
pub(super) fn competing(side: &SideResult) -> Vec<Alternative> {
    let others = side.alignment.alternatives.iter();
    others
        .filter(|(_, above)| *above < COMPETING)
        .map(|&(shift_ev, deviance_above_best)| Alternative {
            shift_ev,
            deviance_above_best,
        })
        .collect()
}

fn side_cautions(side: &SideResult, list: &mut Vec<Caution>) {
    let technique = side.side.technique();
    let mut caution = |name: &str, message: String| {
        list.push(Caution {
            name: name.to_owned(),
            message: format!("{technique}: {message}"),
        });
    };
    let fit = &side.fit;
    if fit.is_inadequate() || !fit.converged {
        caution(
            "model-inadequate",
            format!(
                "the fitted model misses the curve by more than noise (reduced chi-square {:.2}, \
                 runs test {:.1e}{}); look at the residuals before you trust the edge",
                fit.reduced_chi_square,
                fit.runs_probability,
                if fit.converged { "" } else { ", not converged" }
            ),
        );
    }
    let others = competing(side);
    if !others.is_empty() {
        let shifts: Vec<String> = others
            .iter()
            .map(|a| format!("{:.2}", a.shift_ev))
            .collect();
        caution(
            "alignment-ambiguous",
            format!("shifts of {} eV fit nearly as well", shifts.join(", ")),
        );
    }
    if side.angle_resolved {
        caution(
            "matrix-elements",
            "an angle-resolved curve sees one cut of the bands; the density it is held against is \
             that of the whole zone"
                .to_owned(),
        );
    }
    let near = 1.5 * fit.gaussian_fwhm().0;
    let edge = side.computed_edge + fit.shift;
    if side.scale.reference == Reference::Fermi && edge.abs() < 4.0 * side.thermal {
        caution(
            "edge-near-fermi-level",
            format!(
                "the edge lies {:.0} meV from the Fermi level, where the thermal occupation cuts \
                 the curve; the model leaves it out",
                1e3 * edge.abs()
            ),
        );
    }
    let ends = side.curve.energies.first().zip(side.curve.energies.last());
    if ends.is_some_and(|(first, last)| edge - first < near || last - edge < near) {
        caution(
            "edge-near-window-end",
            format!("the edge lies within {near:.2} eV of the end of the curve; measure farther"),
        );
    }
}
