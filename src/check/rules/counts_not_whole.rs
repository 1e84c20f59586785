use crate::check::catalogue::rule;
use crate::check::{Rule, Subject};
use crate::parse::Role;
use crate::schema::{Finding, IntensityKind};

rule! {
    /// # What it looks for
    /// Numbers in a column of counts that are not whole.
    ///
    /// # Why it matters
    /// Counts that were averaged, normalised, smoothed or corrected for dead time do not have the
    /// statistics of counts. Their noise is then estimated from the curve.
    ///
    /// # Example
    /// 1033.4 counts: the mean of five sweeps.
    ///
    /// # How to answer it
    /// Use the sum of sweeps instead of their mean. For a rate, name the column `counts/s` and state
    /// `dwell` and `sweeps`, from which the counts are recovered.
    ///
    /// # Source
    /// Common practice, no source.
    CountsNotWhole, "counts-not-whole", Warning, check
}

fn check(rule: &dyn Rule, subject: Subject<'_>) -> Vec<Finding> {
    let Some(spectrum) = subject.spectrum() else {
        return Vec::new();
    };
    if spectrum.intensity_kind != IntensityKind::Counts {
        return Vec::new();
    }
    let broken = |n: f64| n.is_finite() && n.fract() != 0.0;
    let count = spectrum.intensity.iter().filter(|n| broken(**n)).count();
    let first = spectrum.intensity.iter().position(|n| broken(*n));
    first
        .map(|row| {
            subject.finding(
                rule,
                (row, Role::Intensity),
                "a column of counts holds numbers that are not whole".to_owned(),
                format!(
                    "{count} of {} rows, the first {}",
                    spectrum.intensity.len(),
                    subject.text(row, Role::Intensity)
                ),
                "use the sum of sweeps, not their mean; the noise is estimated from the curve",
            )
        })
        .into_iter()
        .collect()
}
