//! The runner, and what it hands on.

use std::ops::Deref;

use super::catalogue::CATALOGUE;
use super::subject::Subject;
use crate::parse::Parsed;
use crate::schema::{Finding, Levels, Severity, Spectrum};

/// A document that has been through the rules without an error.
#[derive(Debug, Clone)]
pub struct Validated<T>(Parsed<T>);

impl<T> Deref for Validated<T> {
    type Target = Parsed<T>;

    fn deref(&self) -> &Parsed<T> {
        &self.0
    }
}

/// Runs the rules over levels. The document comes back only where no finding is an error.
#[must_use]
pub fn validate_levels(parsed: Parsed<Levels>) -> (Option<Validated<Levels>>, Vec<Finding>) {
    let findings = run(Subject::Levels(&parsed));
    (passed(&findings).then_some(Validated(parsed)), findings)
}

/// Runs the rules over a curve. The document comes back only where no finding is an error.
#[must_use]
pub fn validate_spectrum(parsed: Parsed<Spectrum>) -> (Option<Validated<Spectrum>>, Vec<Finding>) {
    let findings = run(Subject::Spectrum(&parsed));
    (passed(&findings).then_some(Validated(parsed)), findings)
}

fn passed(findings: &[Finding]) -> bool {
    findings
        .iter()
        .all(|finding| finding.severity < Severity::Error)
}

fn run(subject: Subject<'_>) -> Vec<Finding> {
    let mut findings: Vec<Finding> = CATALOGUE
        .iter()
        .flat_map(|rule| rule.check(subject))
        .collect();
    findings.sort_by(|a, b| {
        (&a.file, a.line, a.column, &a.rule).cmp(&(&b.file, b.line, b.column, &b.rule))
    });
    findings
}
