//! How a value in a document finds its way back to the text it was read from.

use std::ops::Range;

/// From a row and a field to the bytes that they stand in.
pub trait Locate {
    /// The span of field `field` (0-based column of the file) in data row `row` (0-based, in file
    /// order), as zero-based bytes of the file; `None` where there is no such row or field.
    fn locate(&self, row: usize, field: usize) -> Option<Range<usize>>;

    /// The span of the header cell of a field; `None` where the file has no header.
    fn locate_header(&self, field: usize) -> Option<Range<usize>>;
}
