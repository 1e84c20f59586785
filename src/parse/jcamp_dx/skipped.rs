//! A part of a file that is no spectrum.

/// Why a part of a file was left out.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Skipped {
    /// The 1-based line at which it begins, or that says why.
    pub line: usize,
    /// The reason.
    pub reason: String,
}
