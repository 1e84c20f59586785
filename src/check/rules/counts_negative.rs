use super::most;
use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::{Finding, IntensityKind};

rule! {
    /// # What it looks for
    /// A negative number in a column of counts.
    ///
    /// # Why it matters
    /// Counts are never negative: something was subtracted, so the numbers no longer have counting
    /// statistics and an uncertainty from them would be wrong.
    ///
    /// # Example
    /// A dark level of 12 counts taken off a curve whose gap region holds 10.
    ///
    /// # How to answer it
    /// Use the counts as recorded; the fit has a background of its own. If only the corrected curve
    /// is left, say so in its header: `intensity (arb. u.)`. Its noise is then estimated.
    ///
    /// # Source
    /// Common practice, no source.
    CountsNegative, "counts-negative", Error, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(spectrum) = subject.spectrum() else {
        return Vec::new();
    };
    if spectrum.intensity_kind != IntensityKind::Counts {
        return Vec::new();
    }
    let negative = spectrum
        .intensity
        .iter()
        .enumerate()
        .filter(|(_, n)| **n < 0.0);
    most(
        negative
            .map(|(row, _)| {
                subject.finding(
                    rule,
                    (row, Role::Intensity),
                    "a negative number of counts".to_owned(),
                    format!("{} counts", subject.text(row, Role::Intensity)),
                    "use the counts as recorded, without subtraction; a corrected curve is not \
                     counts: rename its header to \"intensity (arb. u.)\"",
                )
            })
            .collect(),
    )
}
