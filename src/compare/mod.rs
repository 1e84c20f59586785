//! From a study to an answer: calibration, edges, gap, difference, uncertainty budget, verdict.
//!
//! This room owns what a comparison means: which numbers are like, what each contributes to the
//! uncertainty, and when agreement may be stated. It takes only documents that have been through the
//! rules, calls `align` for every fit, and writes nothing.

// A problem carries its place and the places beside it: it is met once a run, not in a hot loop.
#![allow(clippy::result_large_err)]

mod bands;
mod budget;
mod cautions;
mod drawn;
mod error;
mod inputs;
mod outcome;
mod scale;
mod side;
mod study;
mod verdict;

pub use budget::{Budget, Cause};
pub use error::Error;
pub use outcome::{Outcome, compare};
pub use study::{
    ComparisonSection, ComputedEnergies, ComputedSection, Correction, NamedFile, Protocol,
    SideSection, Stated, Study,
};
pub use verdict::en_score;
