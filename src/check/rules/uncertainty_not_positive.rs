use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::Finding;

rule! {
    /// # What it looks for
    /// A standard uncertainty of an intensity that is zero or negative.
    ///
    /// # Why it matters
    /// A fit weighs each channel by one over the uncertainty squared: a zero would decide alone.
    ///
    /// # Example
    /// The square root of the counts written as uncertainty, zero in a channel without counts.
    ///
    /// # How to answer it
    /// Leave the column out where the intensities are counts, or give such channels the uncertainty
    /// that they have.
    ///
    /// # Source
    /// Common practice, no source.
    UncertaintyNotPositive, "uncertainty-not-positive", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(list) = subject
        .spectrum()
        .and_then(|s| s.standard_uncertainty.as_ref())
    else {
        return Vec::new();
    };
    let rows = list.iter().enumerate().filter(|(_, u)| **u <= 0.0);
    most(
        rows.map(|(row, _)| {
            subject.finding(
                rule,
                (row, Role::StandardUncertainty),
                "a standard uncertainty that is not positive".to_owned(),
                subject.text(row, Role::StandardUncertainty),
                "leave the column out where the intensities are counts, or give the channel the \
                 uncertainty that it has",
            )
        })
        .collect(),
    )
}
