//! Where a block stood in its file.

use std::ops::Range;

use super::experiment::{Experiment, Part};
use crate::parse::Source;

/// Ordinate values between two remembered line starts.
const EVERY: usize = 1_000;
/// One place for each of the 40 numbered parts of a block; the first is not used.
pub(super) const PARTS: usize = Part::LAST as usize + 1;

/// Where a block stood in its file: line numbers, and the start of every thousandth ordinate value.
///
/// It is no part of what the block says: any two of them are equal, so that a document can be
/// compared with its reading.
#[derive(Debug, Clone)]
pub struct Anchor {
    pub(super) line: usize,
    /// The line of each part; that of the first block where this one leaves the part out.
    pub(super) parts: [usize; PARTS],
    pub(super) first_value_line: usize,
    starts: Vec<usize>,
}

impl Default for Anchor {
    fn default() -> Self {
        Self {
            line: 0,
            parts: [0; PARTS],
            first_value_line: 0,
            starts: Vec::new(),
        }
    }
}

impl PartialEq for Anchor {
    fn eq(&self, _: &Self) -> bool {
        true
    }
}

impl Anchor {
    /// The 1-based line at which the block starts; 0 where it was not read from a file.
    #[must_use]
    pub fn line(&self) -> usize {
        self.line
    }

    /// Notes the start of the line of an ordinate value.
    pub(super) fn note(&mut self, index: usize, start: usize) {
        if index.is_multiple_of(EVERY) {
            self.starts.push(start);
        }
    }

    fn value(&self, source: &Source, index: usize) -> Option<Range<usize>> {
        let start = *self.starts.get(index / EVERY)?;
        let line = source.lines_from(start).nth(index % EVERY)?;
        Some(trimmed(source, line.start..line.end))
    }
}

impl Experiment {
    /// Where an ordinate value stands: the block, the row and the corresponding variable, 0-based.
    /// `None` where there is none.
    #[must_use]
    pub fn value_span(
        &self,
        source: &Source,
        curve: usize,
        row: usize,
        variable: usize,
    ) -> Option<Range<usize>> {
        let block = self.blocks.get(curve)?;
        let variables = block.variables.len();
        let index = row.checked_mul(variables)?.checked_add(variable)?;
        let there = variable < variables && index < block.ordinates.len();
        there.then(|| block.anchor.value(source, index)).flatten()
    }
}

/// The span without blanks at its ends.
pub(super) fn trimmed(source: &Source, span: Range<usize>) -> Range<usize> {
    let text = source.slice(span.clone());
    let before = text.len() - text.trim_start().len();
    let start = span.start + before;
    start..start + text.trim().len()
}
