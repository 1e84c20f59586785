use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::Finding;

rule! {
    /// # What it looks for
    /// Occupations that are neither empty nor full: below 0, above 2, or between one and ninety-nine
    /// hundredths of the maximum (2 where any occupation is above 1, else 1).
    ///
    /// # Why it matters
    /// A gap stands between full and empty levels. A half-filled level belongs to a metal, or to a
    /// smearing that is wider than the gap, and no edge can be read from it.
    ///
    /// # Example
    /// Occupation 0.43 at the band edge, from a smearing of 0.2 eV.
    ///
    /// # How to answer it
    /// Write the occupations of the ground state, or leave the column out and state
    /// `occupied_bands` under `[computed]`.
    ///
    /// # Source
    /// Common practice, no source.
    OccupationFractional, "occupation-fractional", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(occupations) = subject.levels().and_then(|l| l.occupation.as_ref()) else {
        return Vec::new();
    };
    let maximum = if occupations.iter().any(|f| *f > 1.01) {
        2.0
    } else {
        1.0
    };
    let bad = |f: f64| {
        let part = f / maximum;
        f.is_finite() && (!(-0.01..=1.01).contains(&part) || (part > 0.01 && part < 0.99))
    };
    let rows = occupations.iter().enumerate().filter(|(_, f)| bad(**f));
    most(
        rows.map(|(row, _)| {
            subject.finding(
                rule,
                (row, Role::Occupation),
                "an occupation that is neither empty nor full".to_owned(),
                format!(
                    "{} of at most {maximum}",
                    subject.text(row, Role::Occupation)
                ),
                "write the occupations of the ground state, or leave the column out and state \
                 occupied_bands under [computed]",
            )
        })
        .collect(),
    )
}
