use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::Finding;

rule! {
    /// # What it looks for
    /// A blank, `nan` or infinity where a number is needed: energies, intensities and their
    /// uncertainties, weights, coordinates, occupations.
    ///
    /// # Why it matters
    /// Nothing can be fitted through a value that is not there, and leaving it out in silence would
    /// change a density of states or a count.
    ///
    /// # Example
    /// A quasiparticle energy `nan` where a solver did not converge.
    ///
    /// # How to answer it
    /// Supply the value, or remove the row on purpose.
    ///
    /// # Source
    /// Common practice, no source.
    ValueMissing, "value-missing", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let mut found = Vec::new();
    for (role, values) in columns(subject) {
        let missing = values.iter().enumerate().filter(|(_, v)| !v.is_finite());
        found.extend(most(
            missing
                .map(|(row, value)| {
                    let text = subject.text(row, role);
                    subject.finding(
                        rule,
                        (row, role),
                        format!("no number for {}", role.name()),
                        if text.is_empty() {
                            format!("read as {value}")
                        } else {
                            format!("\"{text}\"")
                        },
                        "supply the value, or remove the row on purpose",
                    )
                })
                .collect(),
        ));
    }
    found
}

fn columns(subject: Subject<'_>) -> Vec<(Role, &[f64])> {
    let mut list: Vec<(Role, &[f64])> = Vec::new();
    if let Some(levels) = subject.levels() {
        for (role, values) in [
            (Role::KX, &levels.k_x),
            (Role::KY, &levels.k_y),
            (Role::KZ, &levels.k_z),
            (Role::Weight, &levels.weight),
            (Role::EnergyMeanField, &levels.energy_mean_field_ev),
            (Role::EnergyQuasiparticle, &levels.energy_quasiparticle_ev),
            (Role::Occupation, &levels.occupation),
        ] {
            if let Some(values) = values {
                list.push((role, values));
            }
        }
    }
    if let Some(spectrum) = subject.spectrum() {
        list.push((Role::Energy, &spectrum.energy_ev));
        list.push((Role::Intensity, &spectrum.intensity));
        if let Some(values) = &spectrum.standard_uncertainty {
            list.push((Role::StandardUncertainty, values));
        }
    }
    list
}
