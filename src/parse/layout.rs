//! Which lines of a text are comments, names and rows.

use std::ops::Range;

use super::dialect::{self, Delimiter};
use super::{Problem, Source};

/// Rows between two remembered offsets.
const ANCHOR_ROWS: usize = 1_000;
/// Rows from which the delimiter is concluded.
const SAMPLE_ROWS: usize = 1_000;

/// The lines of a table. Rows are found again by scanning from an anchor; none is stored.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Layout {
    /// What separates the fields.
    pub delimiter: Delimiter,
    /// The number of fields that a row has.
    pub fields: usize,
    /// The number of rows.
    pub rows: usize,
    /// The comment lines without their marks, in order.
    pub comments: Vec<Range<usize>>,
    /// How many of the comments stand before the first row.
    pub comments_before: usize,
    /// The lines before the first row that are neither comments nor blank.
    pub bare: Vec<Range<usize>>,
    anchors: Vec<usize>,
}

impl Layout {
    /// Finds the lines, refused where there are no rows of numbers.
    pub fn of(source: &Source) -> Result<Self, Problem> {
        let mut layout = Self {
            delimiter: Delimiter::Blanks,
            fields: 0,
            rows: 0,
            comments: Vec::new(),
            comments_before: 0,
            bare: Vec::new(),
            anchors: Vec::new(),
        };
        let mut sample = Vec::new();
        for line in source.lines_from(0) {
            let text = source.slice(line.start..line.end);
            if text.trim().is_empty() {
                continue;
            }
            if let Some(comment) = comment(text) {
                layout.comments.push(line.start + comment..line.end);
            } else if layout.rows == 0 && !dialect::looks_numeric(text) {
                layout.bare.push(line.start..line.end);
            } else {
                layout.add_row(line.start);
                if sample.len() < SAMPLE_ROWS {
                    sample.push(line.start..line.end);
                }
            }
        }
        if layout.rows == 0 {
            return Err(no_rows(source));
        }
        (layout.delimiter, layout.fields) = dialect::conclude(source, &sample);
        Ok(layout)
    }

    fn add_row(&mut self, start: usize) {
        if self.rows == 0 {
            self.comments_before = self.comments.len();
        }
        if self.rows.is_multiple_of(ANCHOR_ROWS) {
            self.anchors.push(start);
        }
        self.rows += 1;
    }

    /// The rows in file order.
    pub fn rows<'a>(&self, source: &'a Source) -> impl Iterator<Item = Range<usize>> + 'a {
        rows_from(source, self.anchors.first().copied())
    }

    /// One row.
    pub fn row(&self, source: &Source, row: usize) -> Option<Range<usize>> {
        if row >= self.rows {
            return None;
        }
        rows_from(source, self.anchors.get(row / ANCHOR_ROWS).copied()).nth(row % ANCHOR_ROWS)
    }

    /// The bytes of one cell of a row.
    pub fn cell(&self, source: &Source, row: usize, field: usize) -> Option<Range<usize>> {
        self.spans(source, &self.row(source, row)?)
            .into_iter()
            .nth(field)
    }

    /// The bytes of the cells of a row; none where its quotes are wrong.
    pub fn spans(&self, source: &Source, row: &Range<usize>) -> Vec<Range<usize>> {
        let text = source.slice(row.clone());
        dialect::spans(text, row.start, self.delimiter).unwrap_or_default()
    }
}

fn rows_from(source: &Source, start: Option<usize>) -> impl Iterator<Item = Range<usize>> + '_ {
    source
        .lines_from(start.unwrap_or(source.text().len()))
        .map(|line| line.start..line.end)
        .filter(|line| {
            let text = source.slice(line.clone());
            comment(text).is_none() && !text.trim().is_empty()
        })
}

/// Where the text of a comment line starts, after its marks; `None` for another line.
fn comment(line: &str) -> Option<usize> {
    let marks = ['#', '!', '%'];
    line.trim_start()
        .starts_with(marks)
        .then(|| line.len() - line.trim_start_matches([' ', '\t', '#', '!', '%']).len())
}

fn no_rows(source: &Source) -> Problem {
    Problem::new(format!(
        "there are no rows of numbers in `{}`",
        source.name()
    ))
    .with_help(
        "expected lines of numbers separated by commas, semicolons, tabs or blanks, \
         under a line of column names",
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_are_told_apart_and_rows_are_found_again() {
        let mut text = String::from("\u{feff}title\r\n# a: b\r\n!! k  E\r\n\r\nk,E\r\n");
        for row in 0..2_500 {
            text.push_str(&format!("{row},{}\r\n", row * 2));
            if row % 7 == 0 {
                text.push_str("% between\r\n\r\n");
            }
        }
        let source = Source::from_text("t", &text);
        let layout = Layout::of(&source).unwrap();
        assert_eq!((layout.delimiter, layout.fields), (Delimiter::Comma, 2));
        assert_eq!((layout.rows, layout.bare.len()), (2_500, 2));
        assert_eq!(layout.comments_before, 2);
        assert_eq!(source.slice(layout.comments[1].clone()), "k  E");
        for row in [0, 999, 1_000, 1_001, 2_499] {
            let cell = layout.cell(&source, row, 1).unwrap();
            assert_eq!(source.slice(cell), (row * 2).to_string());
        }
        assert_eq!(layout.cell(&source, 2_500, 0), None);
        assert_eq!(layout.cell(&source, 0, 2), None);
        assert!(
            layout
                .rows(&source)
                .eq((0..2_500).filter_map(|row| layout.row(&source, row)))
        );
    }

    #[test]
    fn text_without_numbers_is_refused() {
        for text in ["", "# only\n", "a,b\n", "\u{feff}"] {
            assert!(Layout::of(&Source::from_text("t", text)).is_err(), "{text}");
        }
    }
}
