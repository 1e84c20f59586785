use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::Finding;

rule! {
    /// # What it looks for
    /// A k-point weight below zero, or weights that are all zero.
    ///
    /// # Why it matters
    /// A weight is the share of the Brillouin zone that a k-point stands for. A path through the zone
    /// has no weights: its density of states is not that of the crystal.
    ///
    /// # Example
    /// All weights zero: the table lists a path for drawing bands.
    ///
    /// # How to answer it
    /// Use the table of the regular or random grid with its weights.
    ///
    /// # Source
    /// Common practice, no source.
    WeightNegative, "weight-negative", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(weights) = subject.levels().and_then(|l| l.weight.as_ref()) else {
        return Vec::new();
    };
    let remedy = "use the table of the regular or random k-grid with its weights";
    if !weights.is_empty() && weights.iter().all(|w| *w == 0.0) {
        return vec![subject.finding(
            rule,
            (0, Role::Weight),
            "every k-point weight is zero".to_owned(),
            format!("{} rows", weights.len()),
            remedy,
        )];
    }
    let rows = weights.iter().enumerate().filter(|(_, w)| **w < 0.0);
    most(
        rows.map(|(row, _)| {
            subject.finding(
                rule,
                (row, Role::Weight),
                "a negative k-point weight".to_owned(),
                subject.text(row, Role::Weight),
                remedy,
            )
        })
        .collect(),
    )
}
