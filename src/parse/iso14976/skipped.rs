//! What a file holds and no document can.

/// A curve that is no spectrum.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Skipped {
    /// The 1-based line at which it starts.
    pub line: usize,
    /// Why it is none.
    pub reason: String,
}
