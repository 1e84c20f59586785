//! Where an ordinate stands: lines remembered now and then, and scanned again on demand.

use std::ops::Range;

use super::document::{Block, Document, Ordinates, Points, Value};
use super::points::pairs;
use super::token::line;
use crate::parse::Source;

/// Lines of a table between two that are remembered.
const ANCHOR_LINES: usize = 256;

/// A line of a table that is remembered.
#[derive(Debug, Clone, Copy, PartialEq)]
struct Anchor {
    /// The first row that the line adds.
    row: usize,
    /// Its first byte.
    byte: usize,
    /// Whether it begins with a repeat of the ordinate before.
    repeats: bool,
}

/// Lines of a table that are remembered.
#[derive(Debug, Clone, Default)]
pub(super) struct Anchors {
    list: Vec<Anchor>,
    lines: usize,
}

impl Anchors {
    /// Notes a line of a table, every one in order.
    pub fn note(&mut self, row: usize, byte: usize, repeats: bool) {
        if self.lines.is_multiple_of(ANCHOR_LINES) {
            self.list.push(Anchor { row, byte, repeats });
        }
        self.lines += 1;
    }

    fn before(&self, row: usize) -> Option<Anchor> {
        let after = self.list.partition_point(|anchor| anchor.row <= row);
        self.list.get(after.checked_sub(1)?).copied()
    }
}

impl Document {
    /// The bytes of the text in which a value stands. Curves are the blocks of [`Document::blocks`];
    /// variable 0 is the ordinate, variable 1 the abscissa of a pair. `None` where there is no such
    /// value, or where the document was not read from `source`. An ordinate that is given by a count
    /// stands where the count does.
    #[must_use]
    pub fn value_span(
        &self,
        source: &Source,
        curve: usize,
        row: usize,
        variable: usize,
    ) -> Option<Range<usize>> {
        let blocks = self.blocks();
        let Block { records } = blocks.get(curve)?;
        records.iter().find_map(|record| match &record.value {
            Value::Ordinates(table) if variable == 0 => ordinate(table, source, row),
            Value::Points(table) if variable < 2 => pair(table, source, row, variable),
            _ => None,
        })
    }
}

/// The lines of a table from a byte, with their first byte and without comments.
fn lines(source: &Source, byte: usize) -> impl Iterator<Item = (usize, &str)> {
    source.lines_from(byte).map(|line| {
        let text = source.slice(line.start..line.end);
        let content = text.split_once("$$").map_or(text, |(content, _)| content);
        (line.start, content.trim_end())
    })
}

fn ordinate(table: &Ordinates, source: &Source, row: usize) -> Option<Range<usize>> {
    if row >= table.values.len() {
        return None;
    }
    let anchor = table.anchors.before(row)?;
    let (mut rows, mut repeats) = (anchor.row, anchor.repeats);
    for (start, text) in lines(source, anchor.byte) {
        if text.is_empty() {
            continue;
        }
        let (_, tokens) = line(text).ok()?;
        let mut ends = false;
        for (index, token) in tokens.enumerate() {
            let (span, token) = token.ok()?;
            if index > 0 || !repeats {
                rows += token.rows();
            }
            if row < rows {
                return Some(start + span.start..start + span.end);
            }
            ends = token.ends_in_difference(ends);
        }
        repeats = ends;
    }
    None
}

fn pair(table: &Points, source: &Source, row: usize, variable: usize) -> Option<Range<usize>> {
    let anchor = table.anchors.before(row)?;
    let mut rows = anchor.row;
    for (start, text) in lines(source, anchor.byte) {
        for pair in pairs(text) {
            let (x, y) = pair.ok()?;
            if rows == row {
                let span = if variable == 1 { x.0 } else { y.0 };
                return Some(start + span.start..start + span.end);
            }
            rows += 1;
        }
    }
    None
}
