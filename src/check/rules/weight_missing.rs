use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::Finding;

rule! {
    /// # What it looks for
    /// A table of levels that names k-points and gives them no weights.
    ///
    /// # Why it matters
    /// Every k-point then counts alike. That is right for all points of a regular grid and for random
    /// points; it is wrong for a grid reduced by symmetry, and for a path through the zone, and moves
    /// the density of states that curves are fitted with.
    ///
    /// # Example
    /// The 56 irreducible points of a 10 x 10 x 10 grid without the column of their multiplicities.
    ///
    /// # How to answer it
    /// Add a column `weight`; with equal numbers where the points do count alike.
    ///
    /// # Source
    /// Common practice, no source.
    WeightMissing, "weight-missing", Warning, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(levels) = subject.levels() else {
        return Vec::new();
    };
    let named_by = if levels.k_index.is_some() {
        Role::KIndex
    } else if levels.k_x.is_some() {
        Role::KX
    } else {
        return Vec::new();
    };
    if levels.weight.is_some() || levels.rows == 0 {
        return Vec::new();
    }
    vec![subject.finding(
        rule,
        (0, named_by),
        "the k-points have no weights, so all count alike".to_owned(),
        format!(
            "{} levels without a weight, the first at k-point {}",
            levels.rows,
            subject.text(0, named_by)
        ),
        "add a column \"weight\"; a grid reduced by symmetry is read wrong without it",
    )]
}
