//! Spectra of open standards: where the values of one of their curves stand.

use std::ops::Range;

use super::parsed::Parsed;
use super::role::Hints;
use super::{Problem, Source};
use crate::schema::Spectrum;

/// A curve of a file in an open standard.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Curve {}

impl Curve {
    pub fn value_span(&self, _: &Source, _: usize, _: usize) -> Option<Range<usize>> {
        None
    }
}

/// Every curve of a file in an open standard; `None` where it is in none.
pub(super) fn curves(
    _source: &Source,
    _hints: &Hints,
    _every: bool,
) -> Option<Result<Vec<Parsed<Spectrum>>, Vec<Problem>>> {
    None
}

/// The one curve of a file in an open standard, or the one that the user names.
pub(super) fn one_curve(
    _source: &Source,
    _hints: &Hints,
    _every: bool,
) -> Option<Result<Parsed<Spectrum>, Vec<Problem>>> {
    None
}
