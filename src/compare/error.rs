//! Why a comparison could not be made.

use std::fmt;

use crate::parse::Problem;
use crate::schema::{Finding, Severity};

/// Why a comparison could not be made.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
pub enum Error {
    /// The study or a file of it was refused.
    #[error("{}", Lines(.0))]
    Refused(Vec<Problem>),
    /// The rules found errors in a file.
    #[error("{}", Findings(.0))]
    Findings(Vec<Finding>),
}

impl From<Problem> for Error {
    fn from(problem: Problem) -> Self {
        Self::Refused(vec![problem])
    }
}

impl From<Vec<Problem>> for Error {
    fn from(problems: Vec<Problem>) -> Self {
        Self::Refused(problems)
    }
}

struct Lines<'a>(&'a [Problem]);

impl fmt::Display for Lines<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        for (index, problem) in self.0.iter().enumerate() {
            let end = if index == 0 { "" } else { "\n" };
            write!(f, "{end}{problem}")?;
        }
        Ok(())
    }
}

struct Findings<'a>(&'a [Finding]);

impl fmt::Display for Findings<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let errors = self.0.iter().filter(|x| x.severity == Severity::Error);
        for (index, finding) in errors.enumerate() {
            let end = if index == 0 { "" } else { "\n" };
            let Finding {
                file,
                line,
                column,
                rule,
                message,
                evidence,
                remedy,
                ..
            } = finding;
            write!(
                f,
                "{end}{file}:{line}:{column}: {message} ({evidence}) [{rule}]\n  help: {remedy}"
            )?;
        }
        Ok(())
    }
}
