use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::Finding;

rule! {
    /// # What it looks for
    /// An energy axis of a measured curve that turns back.
    ///
    /// # Why it matters
    /// A curve is a function of energy. An axis that turns holds two sweeps one below the other, or a
    /// row in the wrong place; neither may be read as one curve.
    ///
    /// # Example
    /// Energies 4.0, 4.1, 4.2, 4.0, 4.1: the second sweep begins in the fourth row.
    ///
    /// # How to answer it
    /// Put each sweep in a column or a file of its own, or add the sweeps before.
    ///
    /// # Source
    /// Common practice, no source.
    AxisNotMonotonic, "axis-not-monotonic", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(spectrum) = subject.spectrum() else {
        return Vec::new();
    };
    let energies = &spectrum.energy_ev;
    let Some(direction) = energies.windows(2).map(|w| w[1] - w[0]).find(|d| *d != 0.0) else {
        return Vec::new();
    };
    let turns = (1..energies.len()).filter(|&i| (energies[i] - energies[i - 1]) * direction < 0.0);
    let way = if direction > 0.0 {
        "upwards"
    } else {
        "downwards"
    };
    most(
        turns
            .map(|row| {
                subject.finding(
                    rule,
                    (row, Role::Energy),
                    format!("the energy axis runs {way} and turns back here"),
                    format!(
                        "{} follows {}",
                        subject.text(row, Role::Energy),
                        subject.text(row - 1, Role::Energy)
                    ),
                    "give each sweep a file of its own, or add the sweeps first; a row in the wrong \
                     place goes back to its own",
                )
            })
            .collect(),
    )
}
