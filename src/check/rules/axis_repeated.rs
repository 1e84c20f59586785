use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::Finding;

rule! {
    /// # What it looks for
    /// The same energy in two rows that follow each other.
    ///
    /// # Why it matters
    /// Either an energy was written with too few digits to tell two channels apart, or a channel
    /// stands twice; the width of a channel, which counts depend on, is then not known.
    ///
    /// # Example
    /// Energies 4.00, 4.01, 4.01, 4.02 from a step of 0.005 eV written with two decimals.
    ///
    /// # How to answer it
    /// Export the axis with more digits, or remove the channel that stands twice.
    ///
    /// # Source
    /// Common practice, no source.
    AxisRepeated, "axis-repeated", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(spectrum) = subject.spectrum() else {
        return Vec::new();
    };
    let energies = &spectrum.energy_ev;
    // Equal texts give equal doubles; nothing is computed between.
    #[allow(clippy::float_cmp)]
    let repeated = (1..energies.len()).filter(|&i| energies[i] == energies[i - 1]);
    most(
        repeated
            .map(|row| {
                subject.finding(
                    rule,
                    (row, Role::Energy),
                    "the same energy as in the row above".to_owned(),
                    format!(
                        "{} stands in lines {} and {}",
                        subject.text(row, Role::Energy),
                        subject.line(row - 1, Role::Energy),
                        subject.line(row, Role::Energy)
                    ),
                    "export the axis with more digits, or remove the channel that stands twice",
                )
            })
            .collect(),
    )
}
