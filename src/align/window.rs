//! A stretch of an energy axis.

use std::ops::Range;

/// Energies from `start` to `stop`, both included.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Window {
    /// First energy.
    pub start: f64,
    /// Last energy.
    pub stop: f64,
}

impl Window {
    /// The indices of an ascending axis that lie in the window.
    #[must_use]
    pub fn indices(&self, ascending: &[f64]) -> Range<usize> {
        let first = ascending.partition_point(|&e| e < self.start);
        let last = ascending.partition_point(|&e| e <= self.stop);
        first..last.max(first)
    }
}
