//! Which lines of a text are comments, names and rows.

use std::ops::Range;

use memchr::{memchr2, memrchr2};
use rayon::prelude::*;

use super::cells::{self, Cells};
use super::dialect::{self, Dialect};
use super::line::{self, Lines, Place as LinePlace};
use super::role::Hints;
use super::{Problem, Source};

/// Rows between two remembered offsets.
const ANCHOR_ROWS: usize = 1_000;
/// Rows from which the dialect is concluded.
const SAMPLE_ROWS: usize = 1_000;
/// Bytes of rows that are enough for it.
const SAMPLE_BYTES: usize = 4 << 20;
/// Bytes of a line beyond which it is no table's: a million numbers.
const MOST_LINE: usize = 16 << 20;
/// Bytes that are scanned at once. It does not depend on the machine, so that nothing else does.
const CHUNK: usize = 1 << 20;

/// A line that is no row, and how many rows stand before it.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Aside {
    pub span: Range<usize>,
    pub row: usize,
}

/// The lines of a table. Rows are found again by scanning from an anchor; none is stored.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Layout {
    /// How the rows are written.
    pub dialect: Dialect,
    /// The number of rows.
    pub rows: usize,
    /// The comment lines without their marks, in order.
    pub comments: Vec<Aside>,
    /// Lines such as `k-point 3`, with or without a comment mark, in order.
    pub titles: Vec<Aside>,
    /// The lines before the first row that are neither comments nor blank.
    pub bare: Vec<Range<usize>>,
    /// The rows that a blank line stands before, the first row excepted.
    pub breaks: Vec<usize>,
    /// Lines among the rows that repeat the names.
    pub repeated: Vec<Range<usize>>,
    /// Lines of dashes and the like.
    pub rulers: Vec<Range<usize>>,
    lines: Lines,
    anchors: Vec<(usize, usize)>,
}

impl Layout {
    /// Finds the lines, refused where there are no rows of numbers.
    pub fn of(source: &Source, hints: &Hints) -> Result<Self, Problem> {
        short_lines(source)?;
        let sample = sample(source);
        if sample.is_empty() {
            return Err(no_rows(source));
        }
        let mut dialect = dialect::conclude(source, &sample, hints)?;
        let (start, before) = prelude(source, &dialect);
        let Some(start) = start else {
            return Err(no_rows(source));
        };
        if dialect.trailing && names_the_last(source, &before, &dialect) {
            // The last column has a name and no value.
            dialect.trailing = false;
            dialect.fields += 1;
            dialect.numeric.push(false);
        }
        let mut layout = Self {
            rows: 0,
            comments: Vec::new(),
            titles: Vec::new(),
            bare: Vec::new(),
            breaks: Vec::new(),
            repeated: Vec::new(),
            rulers: Vec::new(),
            anchors: Vec::new(),
            lines: Lines::new(source, &dialect, &before),
            dialect,
        };
        layout.take(before);
        for chunk in layout.scanned(source, start) {
            layout.append(chunk);
        }
        layout.breaks.retain(|&row| row > 0 && row < layout.rows);
        layout.breaks.dedup();
        Ok(layout)
    }

    /// Takes the lines before the rows.
    fn take(&mut self, before: Vec<(LinePlace, Range<usize>)>) {
        for (place, span) in before {
            let aside = Aside { span, row: 0 };
            match place {
                LinePlace::Comment => self.comments.push(aside),
                LinePlace::Title => self.titles.push(aside),
                LinePlace::Ruler => self.rulers.push(aside.span),
                _ => self.bare.push(aside.span),
            }
        }
    }

    fn scanned(&self, source: &Source, start: usize) -> Vec<Chunk> {
        chunks(source.text().as_bytes(), start)
            .into_par_iter()
            .map(|range| Chunk::scan(source, &self.lines, range))
            .collect()
    }

    fn append(&mut self, chunk: Chunk) {
        let shifted = |asides: Vec<Aside>| {
            let row = self.rows;
            asides.into_iter().map(move |aside| Aside {
                row: aside.row + row,
                ..aside
            })
        };
        self.comments.extend(shifted(chunk.comments));
        self.titles.extend(shifted(chunk.titles));
        self.repeated.extend(chunk.repeated);
        self.rulers.extend(chunk.rulers);
        let rows = self.rows;
        self.breaks
            .extend(chunk.breaks.into_iter().map(|row| row + rows));
        self.anchors
            .extend(chunk.anchors.into_iter().map(|(row, at)| (row + rows, at)));
        self.rows += chunk.rows;
    }

    /// The number of fields that a row has.
    pub fn fields(&self) -> usize {
        self.dialect.fields
    }

    /// The rows in file order.
    pub fn rows<'a>(&'a self, source: &'a Source) -> impl Iterator<Item = Range<usize>> + 'a {
        self.rows_at(source, 0)
    }

    /// The rows from a remembered one on.
    pub fn rows_at<'a>(
        &'a self,
        source: &'a Source,
        anchor: usize,
    ) -> impl Iterator<Item = Range<usize>> + 'a {
        let start = self
            .anchors
            .get(anchor)
            .map_or(source.text().len(), |a| a.1);
        source
            .lines_from(start)
            .map(|line| line.start..line.end)
            .filter(|line| self.is_row(source.slice(line.clone())))
    }

    /// The remembered rows: the number of each, in order.
    pub fn anchors(&self) -> impl ExactSizeIterator<Item = usize> + '_ {
        self.anchors.iter().map(|anchor| anchor.0)
    }

    /// The byte of a remembered row.
    pub fn anchor_start(&self, anchor: usize) -> usize {
        self.anchors
            .get(anchor)
            .map_or(usize::MAX, |anchor| anchor.1)
    }

    /// Whether a line from the first row on is a row.
    pub fn is_row(&self, line: &str) -> bool {
        self.lines.place(line) == LinePlace::Row
    }

    /// One row.
    pub fn row(&self, source: &Source, row: usize) -> Option<Range<usize>> {
        if row >= self.rows {
            return None;
        }
        let anchor = self
            .anchors
            .partition_point(|a| a.0 <= row)
            .checked_sub(1)?;
        self.rows_at(source, anchor)
            .nth(row - self.anchors[anchor].0)
    }

    /// The bytes of one cell of a row.
    pub fn cell(&self, source: &Source, row: usize, field: usize) -> Option<Range<usize>> {
        let row = self.row(source, row)?;
        self.cells(source, &row).spans.get(field).cloned()
    }

    /// The cells of a row; none where it cannot be split.
    pub fn cells(&self, source: &Source, row: &Range<usize>) -> Cells {
        cells::split(source, row, &self.dialect).unwrap_or(Cells {
            spans: Vec::new(),
            left_out: None,
        })
    }
}

/// Refuses lines that no table has, among the first.
fn short_lines(source: &Source) -> Result<(), Problem> {
    let mut lines = source.lines_from(0).take(SAMPLE_ROWS);
    let long = lines.find(|line| line.end - line.start > MOST_LINE);
    long.map_or(Ok(()), |line| {
        Err(Problem::new(format!(
            "a line of {} bytes; no table has one of more than {MOST_LINE}",
            line.end - line.start
        ))
        .at(source.place(line.start..line.start))
        .with_help("write every row of the table on a line of its own, and no binary data"))
    })
}

/// Up to a number of rows as they look before the dialect is known. Where no line looks like a row,
/// every line with something in it that is no comment.
fn sample(source: &Source) -> Vec<Range<usize>> {
    let spans = || {
        source
            .lines_from(0)
            .map(|line| line.start..line.end)
            .filter(|span| {
                let text = source.slice(span.clone());
                !text.trim().is_empty() && !line::is_aside(text)
            })
    };
    let before = |span: &Range<usize>| !line::tells_dialect(source.slice(span.clone()));
    let numeric = first(spans().skip_while(before));
    match numeric.is_empty() {
        true => first(spans()),
        false => numeric,
    }
}

/// The rows of a sample: all until they are many.
fn first(spans: impl Iterator<Item = Range<usize>>) -> Vec<Range<usize>> {
    let mut bytes = 0;
    let few = spans.take(SAMPLE_ROWS).take_while(|span| {
        let room = bytes < SAMPLE_BYTES;
        bytes += span.len();
        room
    });
    few.collect()
}

/// The first byte of the first row, and the lines before it.
fn prelude(source: &Source, dialect: &Dialect) -> (Option<usize>, Vec<(LinePlace, Range<usize>)>) {
    let lines = Lines::new(source, dialect, &[]);
    let mut before = Vec::new();
    for line in source.lines_from(0) {
        let text = source.slice(line.start..line.end);
        match lines.place(text) {
            LinePlace::Blank => {}
            LinePlace::Row if line::starts_rows(text) || is_row(text, dialect) => {
                return (Some(line.start), before);
            }
            LinePlace::Comment => {
                let text = line.start + line::comment(text, dialect).unwrap_or(0);
                before.push((LinePlace::Comment, text..line.end));
            }
            place => before.push((place, line.start..line.end)),
        }
    }
    (None, before)
}

/// Whether a line that does not look like numbers is a row all the same, as one of mostly text is.
fn is_row(text: &str, dialect: &Dialect) -> bool {
    dialect.fields > 1 && !line::is_statement(text) && dialect.is_row(text)
}

/// Whether the names give one to the column that every row leaves blank after its last delimiter.
fn names_the_last(
    source: &Source,
    before: &[(LinePlace, Range<usize>)],
    dialect: &Dialect,
) -> bool {
    before.iter().rev().any(|(place, span)| {
        let cells = cells::rough(source.slice(span.clone()), dialect.delimiter);
        let named =
            cells.len() == dialect.fields + 1 && cells.last().is_some_and(|c| !c.is_empty());
        named && *place != LinePlace::Title
    })
}

/// Cuts a text from a byte on into pieces that end where lines end.
fn chunks(bytes: &[u8], start: usize) -> Vec<Range<usize>> {
    let mut chunks = Vec::new();
    let mut at = start;
    while at < bytes.len() {
        let near = bytes.len().min(at + CHUNK);
        let end = if near == bytes.len() {
            near
        } else {
            line_end(bytes, at, near)
        };
        chunks.push(at..end);
        at = end;
    }
    chunks
}

/// The byte after the line end that is last before `near`, or else first after it.
fn line_end(bytes: &[u8], from: usize, near: usize) -> usize {
    let last = memrchr2(b'\n', b'\r', &bytes[from..near]).map(|at| from + at);
    let next = || memchr2(b'\n', b'\r', &bytes[near..]).map(|at| near + at);
    match last.or_else(next) {
        None => bytes.len(),
        Some(at) if bytes[at] == b'\r' && bytes.get(at + 1) == Some(&b'\n') => at + 2,
        Some(at) => at + 1,
    }
}

/// What stands in a piece of the text; rows are counted from its beginning.
#[derive(Debug, Default)]
struct Chunk {
    rows: usize,
    comments: Vec<Aside>,
    titles: Vec<Aside>,
    breaks: Vec<usize>,
    repeated: Vec<Range<usize>>,
    rulers: Vec<Range<usize>>,
    anchors: Vec<(usize, usize)>,
}

impl Chunk {
    fn scan(source: &Source, lines: &Lines, range: Range<usize>) -> Self {
        let mut chunk = Self::default();
        let inside = source.lines_from(range.start);
        for line in inside.take_while(|line| line.start < range.end) {
            let text = source.slice(line.start..line.end);
            let row = chunk.rows;
            let span = line.start..line.end;
            match lines.place(text) {
                LinePlace::Row => {
                    if row.is_multiple_of(ANCHOR_ROWS) {
                        chunk.anchors.push((row, line.start));
                    }
                    chunk.rows += 1;
                }
                LinePlace::Blank if chunk.breaks.last() != Some(&row) => chunk.breaks.push(row),
                LinePlace::Blank => {}
                LinePlace::Comment => {
                    let text = line.start + lines.comment(text).unwrap_or(0);
                    let span = text..line.end;
                    chunk.comments.push(Aside { span, row });
                }
                LinePlace::Title => chunk.titles.push(Aside { span, row }),
                LinePlace::Repeat => chunk.repeated.push(span),
                LinePlace::Ruler => chunk.rulers.push(span),
            }
        }
        chunk
    }
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
    use crate::parse::Delimiter;

    fn of(text: &str) -> (Source, Layout) {
        let source = Source::from_text("t", text);
        let layout = Layout::of(&source, &Hints::default()).unwrap();
        (source, layout)
    }

    #[test]
    fn line_that_no_table_has_is_refused_and_few_bytes_are_sampled() {
        let long = format!("E,I\n{}\n", "1,".repeat(MOST_LINE / 2 + 1));
        let source = Source::from_text("t", &long);
        let refused = Layout::of(&source, &Hints::default()).unwrap_err();
        assert_eq!(refused.place.unwrap().line, 2);
        let wide = ("1 ".repeat(SAMPLE_BYTES / 8) + "\n").repeat(9);
        assert_eq!(sample(&Source::from_text("t", &wide)).len(), 4);
    }

    #[test]
    fn lines_are_told_apart_and_rows_are_found_again() {
        let mut text = String::from("\u{feff}title\r\n# a: b\r\n!! k  E\r\n\r\nk,E\r\n");
        for row in 0..2_500 {
            text.push_str(&format!("{row},{}\r\n", row * 2));
            if row % 7 == 0 {
                text.push_str("% between\r\n\r\n");
            }
            if row % 1_000 == 999 {
                text.push_str(" k,E\r\n");
            }
        }
        let (source, layout) = of(&text);
        assert_eq!(
            (layout.dialect.delimiter, layout.fields()),
            (Delimiter::Comma, 2)
        );
        assert_eq!((layout.rows, layout.bare.len()), (2_500, 2));
        assert_eq!(layout.comments.iter().filter(|c| c.row == 0).count(), 2);
        assert_eq!(source.slice(layout.comments[1].span.clone()), "k  E");
        assert_eq!(layout.repeated.len(), 2);
        assert_eq!(layout.breaks[..2], [1, 8]);
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
    fn pieces_end_where_lines_end_and_cover_the_text() {
        for end in ["\n", "\r\n", "\r"] {
            let text = format!("a b{end}{}", format!("1 2{end}").repeat(700_000));
            let pieces = chunks(text.as_bytes(), 0);
            assert!(pieces.len() > 1);
            assert!(pieces.iter().all(|p| text[..p.end].ends_with(end)));
            assert!(pieces.windows(2).all(|p| p[0].end == p[1].start));
            let (source, layout) = of(&text);
            assert_eq!((layout.rows, layout.breaks.len()), (700_000, 0));
            assert_eq!(source.slice(layout.row(&source, 654_321).unwrap()), "1 2");
        }
        let (source, layout) = of(&format!("a,b\n1,2\n\n{}\n3,4\n", "\n".repeat(3 << 20)));
        assert_eq!((layout.rows, &layout.breaks[..]), (2, &[1][..]));
        assert_eq!(source.slice(layout.row(&source, 1).unwrap()), "3,4");
    }

    #[test]
    fn tables_of_mostly_text_have_rows() {
        let text = "a table of gaps, invented\nmaterial;polymorph;method;source;gap (eV)\n\
                    Xy;cubic;G0W0;this work;1.5\nZz;;HF;that work;2.5\n";
        let (source, layout) = of(text);
        assert_eq!((layout.rows, layout.bare.len(), layout.fields()), (2, 2, 5));
        assert!(
            source
                .slice(layout.row(&source, 0).unwrap())
                .starts_with("Xy")
        );
    }

    #[test]
    fn comment_marks_of_every_kind() {
        let text = "# a\n! b\n% c\n// d\n@ e\n\" f\n\"g h\"\n; i 5\nk E\n1 2\n; j\n3 4\n";
        let (source, layout) = of(text);
        let texts: Vec<&str> = layout
            .comments
            .iter()
            .map(|aside| source.slice(aside.span.clone()))
            .collect();
        assert_eq!(texts, ["a", "b", "c", "d", "e", "f", "g h\"", "i 5", "j"]);
        assert_eq!((layout.rows, layout.bare.len()), (2, 1));
        // A first cell may be blank where semicolons separate.
        let (_, layout) = of("; note\nk;E\n;2\n3;4\n");
        assert_eq!((layout.rows, layout.comments.len()), (2, 1));
    }

    #[test]
    fn text_without_numbers_is_refused() {
        for text in ["", "# only\n", "a,b\n", "\u{feff}"] {
            let source = Source::from_text("t", text);
            assert!(Layout::of(&source, &Hints::default()).is_err(), "{text}");
        }
    }
}
