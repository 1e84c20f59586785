//! The catalogue of rules.

use super::rules;
use super::subject::Subject;
use crate::schema::{Finding, Severity};

/// A rule. Its manual page is the doc comment of its type.
pub trait Rule: Sync {
    /// The name, which names the defect.
    fn name(&self) -> &'static str;
    /// How much a finding of it matters.
    fn severity(&self) -> Severity;
    /// The manual page: what it looks for, why it matters, example, how to answer it, source.
    fn manual(&self) -> &'static str;
    /// The findings in one document, in order of place.
    fn check(&self, subject: Subject<'_>) -> Vec<Finding>;
}

/// Every rule.
pub static CATALOGUE: &[&dyn Rule] = &[
    &rules::AxisNotMonotonic,
    &rules::AxisRepeated,
    &rules::CountsNegative,
    &rules::CountsNotWhole,
    &rules::LevelRepeated,
    &rules::OccupationFractional,
    &rules::UncertaintyNotPositive,
    &rules::ValueMissing,
    &rules::WeightMissing,
    &rules::WeightNegative,
];

/// Declares a rule: the doc comment becomes its manual page.
macro_rules! rule {
    ($(#[doc = $line:literal])+ $name:ident, $spelling:literal, $severity:ident, $check:path) => {
        $(#[doc = $line])+
        #[derive(Debug, Clone, Copy)]
        pub struct $name;

        impl $crate::check::Rule for $name {
            fn name(&self) -> &'static str {
                $spelling
            }
            fn severity(&self) -> $crate::schema::Severity {
                $crate::schema::Severity::$severity
            }
            fn manual(&self) -> &'static str {
                concat!($($line, "\n"),+)
            }
            fn check(
                &self,
                subject: $crate::check::Subject<'_>,
            ) -> Vec<$crate::schema::Finding> {
                $check(self, subject)
            }
        }
    };
}
pub(super) use rule;
