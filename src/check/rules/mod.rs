//! One file a rule.

mod axis_not_monotonic;
mod axis_repeated;
mod counts_negative;
mod counts_not_whole;
mod level_repeated;
mod occupation_fractional;
mod uncertainty_not_positive;
mod value_missing;
mod weight_missing;
mod weight_negative;

pub use axis_not_monotonic::AxisNotMonotonic;
pub use axis_repeated::AxisRepeated;
pub use counts_negative::CountsNegative;
pub use counts_not_whole::CountsNotWhole;
pub use level_repeated::LevelRepeated;
pub use occupation_fractional::OccupationFractional;
pub use uncertainty_not_positive::UncertaintyNotPositive;
pub use value_missing::ValueMissing;
pub use weight_missing::WeightMissing;
pub use weight_negative::WeightNegative;

/// At most this many findings of one rule in one file name their cells; the last one says how many
/// more there are.
const MOST: usize = 5;

/// Cuts a list of findings, telling in the last one how many were cut.
fn most(mut findings: Vec<crate::schema::Finding>) -> Vec<crate::schema::Finding> {
    if findings.len() > MOST {
        let more = findings.len() - MOST;
        findings.truncate(MOST);
        if let Some(last) = findings.last_mut() {
            last.evidence = format!("{}; {more} more like it below", last.evidence);
        }
    }
    findings
}
