//! How a line splits into cells, and which delimiter a table has. The csv crate reads delimited
//! cells; where a cell stands is found by scanning its one line again.

use std::io::Cursor;
use std::ops::Range;

use csv::StringRecord;

use super::Source;
use super::number::{has_decimal_comma, number};

/// What stands between two fields.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Delimiter {
    Semicolon,
    Tab,
    Comma,
    Blanks,
}

impl Delimiter {
    /// Every delimiter; of two that explain the rows equally well the first one is taken.
    const ALL: [Self; 4] = [Self::Semicolon, Self::Tab, Self::Comma, Self::Blanks];

    /// The delimiters that are one character.
    pub const CHARACTERS: [Self; 3] = [Self::Semicolon, Self::Tab, Self::Comma];

    /// The dialect in words.
    pub fn in_words(self) -> &'static str {
        match self {
            Self::Semicolon => "separated by semicolons",
            Self::Tab => "separated by tabs",
            Self::Comma => "separated by commas",
            Self::Blanks => "separated by blanks",
        }
    }

    fn byte(self) -> Option<u8> {
        match self {
            Self::Semicolon => Some(b';'),
            Self::Tab => Some(b'\t'),
            Self::Comma => Some(b','),
            Self::Blanks => None,
        }
    }
}

/// A quoted cell that csv would read with text from elsewhere: the bytes, and what is wrong.
pub(super) type Unquotable = (Range<usize>, &'static str);

/// Splits lines of a source into the texts of their cells: by the csv crate, or at blanks.
pub(super) struct Splitter<'a> {
    source: &'a Source,
    delimiter: Delimiter,
    csv: csv::Reader<Cursor<&'a str>>,
    record: StringRecord,
}

impl<'a> Splitter<'a> {
    pub fn new(source: &'a Source, delimiter: Delimiter) -> Self {
        // Where lines that are no rows stand between, the buffer is filled anew.
        let csv = csv::ReaderBuilder::new()
            .has_headers(false)
            .flexible(true)
            .delimiter(delimiter.byte().unwrap_or(b','))
            .buffer_capacity(1_024)
            .from_reader(Cursor::new(source.text()));
        Self {
            source,
            delimiter,
            csv,
            record: StringRecord::new(),
        }
    }

    /// The cells of a line, whose range ends where the line ends, with blanks around them.
    pub fn cells(&mut self, line: &Range<usize>) -> Result<&StringRecord, Unquotable> {
        let text = self.source.slice(line.clone());
        if self.delimiter == Delimiter::Blanks {
            self.record.clear();
            text.split(BLANKS)
                .filter(|word| !word.is_empty())
                .for_each(|word| self.record.push_field(word));
            return Ok(&self.record);
        }
        if text.contains('"') {
            // csv takes text after a closed quote, and the next line into an open one.
            spans(text, line.start, self.delimiter)?;
        }
        let mut start = csv::Position::new();
        start.set_byte(line.start as u64);
        self.csv
            .seek(start)
            .and_then(|()| self.csv.read_record(&mut self.record))
            .map_err(|_| (line.clone(), "this line cannot be split into cells"))?;
        Ok(&self.record)
    }
}

const BLANKS: [char; 2] = [' ', '\t'];

/// The bytes of the cells' contents in a line that starts at byte `base`, without the quotes and
/// blanks around them.
pub(super) fn spans(
    line: &str,
    base: usize,
    delimiter: Delimiter,
) -> Result<Vec<Range<usize>>, Unquotable> {
    let Some(byte) = delimiter.byte() else {
        let words = line.split(BLANKS).filter(|word| !word.is_empty());
        return Ok(words.map(|word| span_of(word.trim(), line, base)).collect());
    };
    let mut spans = Vec::new();
    let mut rest = line;
    loop {
        let (content, length) = if rest.starts_with('"') {
            quoted(rest, char::from(byte)).map_err(|(at, what)| {
                let from = base + line.len() - rest.len() + at;
                (from..base + line.len(), what)
            })?
        } else {
            let length = rest.find(char::from(byte)).unwrap_or(rest.len());
            (&rest[..length], length)
        };
        let span = span_of(content.trim(), line, base);
        if !rest.starts_with('"') && content.trim_start().starts_with('"') {
            return Err((span, "blanks stand before this quoted cell: remove them"));
        }
        spans.push(span);
        match rest.get(length + 1..) {
            Some(next) => rest = next,
            None => return Ok(spans),
        }
    }
}

/// The bytes of a part of a line that starts at byte `base`.
fn span_of(part: &str, line: &str, base: usize) -> Range<usize> {
    let start = base + part.as_ptr().addr() - line.as_ptr().addr();
    start..start + part.len()
}

/// The content of the quoted cell that starts a text, and the length of its field.
fn quoted(text: &str, delimiter: char) -> Result<(&str, usize), (usize, &'static str)> {
    let bytes = text.as_bytes();
    let mut end = 1;
    loop {
        match text[end..].find('"') {
            None => return Err((0, "a quoted cell does not end on its line")),
            Some(more) => end += more,
        }
        if bytes.get(end + 1) != Some(&b'"') {
            break;
        }
        end += 2;
    }
    let length = text[end..]
        .find(delimiter)
        .map_or(text.len(), |more| end + more);
    match text[end + 1..length].trim() {
        "" => Ok((&text[1..end], length)),
        _ => Err((end + 1, "text follows a quoted cell")),
    }
}

/// Whether a line looks like numbers rather than names, whatever its delimiter.
pub(super) fn looks_numeric(line: &str) -> bool {
    let words = line
        .split([' ', '\t', ',', ';', '"'])
        .filter(|word| !word.is_empty());
    let (mut all, mut numbers) = (0, 0);
    for word in words {
        all += 1;
        numbers += usize::from(number(word).is_some());
    }
    numbers * 3 > all
}

/// The delimiter that makes most cells of the rows numbers (with a decimal comma too, so that it can
/// be pointed at), and the number of fields that most rows have under it.
pub(super) fn conclude(source: &Source, rows: &[Range<usize>]) -> (Delimiter, usize) {
    let mut best = (Delimiter::Blanks, 0, -1.0);
    for delimiter in Delimiter::ALL {
        let (share, fields) = explained(source, rows, delimiter);
        if share > best.2 || (share >= best.2 && fields > best.1) {
            best = (delimiter, fields, share);
        }
    }
    (best.0, best.1)
}

/// The share of the cells that are numbers, and the most common number of fields.
fn explained(source: &Source, rows: &[Range<usize>], delimiter: Delimiter) -> (f64, usize) {
    let mut splitter = Splitter::new(source, delimiter);
    let (mut all, mut numbers) = (0u32, 0u32);
    let mut counts = std::collections::BTreeMap::<usize, usize>::new();
    for row in rows {
        // A row with wrong quotes is refused later; here it still shows its delimiter.
        let plain = || source.slice(row.clone()).replace('"', "");
        let plain = splitter.cells(row).is_err().then(plain);
        let cells: Vec<&str> = match (&plain, delimiter.byte()) {
            (Some(text), Some(byte)) => text.split(char::from(byte)).collect(),
            _ => splitter.record.iter().collect(),
        };
        *counts.entry(cells.len()).or_default() += 1;
        for text in cells.into_iter().map(str::trim) {
            all += u32::from(!text.is_empty());
            numbers += u32::from(number(text).is_some() || has_decimal_comma(text));
        }
    }
    let most = counts.into_iter().max_by_key(|&(_, count)| count);
    let share = f64::from(numbers) / f64::from(all.max(1));
    (share, most.map_or(0, |(fields, _)| fields))
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[test]
    fn delimiter_is_concluded() {
        use Delimiter::{Blanks, Comma, Semicolon, Tab};
        for (row, delimiter, fields) in [
            ("1,2,3", Comma, 3),
            ("1, 2", Comma, 2),
            ("1 2 3", Blanks, 3),
            ("  1\t 2", Tab, 2),
            ("1\t\t3", Tab, 3),
            ("1 2\t3 4", Blanks, 4),
            ("1;2", Semicolon, 2),
            ("1,5;2,5", Semicolon, 2),
            ("1,5 2,5", Blanks, 2),
            ("1,5\t2,5", Tab, 2),
            ("up;1;-2.5", Semicolon, 3),
            ("G, 1, 2.5", Comma, 3),
            ("\"a;b\",1,2", Comma, 3),
            ("5", Blanks, 1),
        ] {
            let source = Source::from_text("t", row);
            let concluded = conclude(&source, &[0..row.len(), 0..row.len()]);
            // One field: any delimiter reads it alike.
            assert_eq!(concluded.1, fields, "{row}");
            assert!(
                fields == 1 || concluded.0 == delimiter,
                "{row}: {concluded:?}"
            );
        }
    }

    #[test]
    fn quotes() {
        let line = r#""a ""b"", c" , 2,"#;
        let spans_of = |line| spans(line, 10, Delimiter::Comma);
        let texts: Vec<_> = spans_of(line)
            .unwrap()
            .iter()
            .map(|span| &line[span.start - 10..span.end - 10])
            .collect();
        assert_eq!(texts, [r#"a ""b"", c"#, "2", ""]);
        for (line, span, what) in [
            (r#"1,"ab"#, 12..15, "does not end"),
            (r#""ab"c,1"#, 14..17, "follows"),
            (r#"1, "ab",2"#, 13..17, "before"),
        ] {
            let (found, why) = spans_of(line).unwrap_err();
            assert_eq!(found, span, "{line}");
            assert!(why.contains(what), "{line}: {why}");
        }
    }

    #[test]
    fn numbers_are_told_from_names() {
        for line in ["1 2", "up 1 2 -3.5", "nan,1", "1,5;2", "G,up,VB,1,2.5"] {
            assert!(looks_numeric(line), "{line}");
        }
        for line in ["E (eV),counts", "k1 k2 k3", "Kinetic energy / eV, 300 K"] {
            assert!(!looks_numeric(line), "{line}");
        }
    }

    proptest! {
        /// csv reads every cell; the span of each holds what csv read, and no other line is touched.
        #[test]
        fn spans_hold_what_csv_reads(
            lines in prop::collection::vec("[\" \t,;aµ1.\u{a0}]{1,20}", 1..6),
            end in prop::sample::select(vec!["\n", "\r\n", "\r", "\n\n# \"\n"]),
        ) {
            let text = lines.join(end);
            let source = Source::from_text("t", &text);
            for delimiter in Delimiter::ALL {
                let mut splitter = Splitter::new(&source, delimiter);
                for line in source.lines_from(0).filter(|line| line.start < line.end) {
                    let line = line.start..line.end;
                    let spans = spans(source.slice(line.clone()), line.start, delimiter);
                    match (splitter.cells(&line), spans) {
                        (Ok(cells), Ok(spans)) => {
                            prop_assert_eq!(cells.len(), spans.len());
                            for (cell, span) in cells.iter().map(str::trim).zip(spans) {
                                let found = source.slice(span);
                                prop_assert!(cell == found || cell == found.replace("\"\"", "\""));
                            }
                        }
                        (Err(one), Err(other)) => prop_assert_eq!(one, other),
                        (one, other) => prop_assert!(false, "{:?} {:?}", one.map(|_| ()), other),
                    }
                }
            }
        }

        /// What csv writes comes back.
        #[test]
        fn written_cells_come_back(fields in prop::collection::vec("[a-z0-9\",;µ]{0,6}", 2..6)) {
            let mut writer = csv::WriterBuilder::new().from_writer(Vec::new());
            writer.write_record(&fields).unwrap();
            let line = String::from_utf8(writer.into_inner().unwrap()).unwrap();
            let source = Source::from_text("t", &line);
            let mut splitter = Splitter::new(&source, Delimiter::Comma);
            let cells = splitter.cells(&(0..line.len() - 1)).unwrap();
            prop_assert!(cells.iter().eq(fields.iter().map(String::as_str)));
        }
    }
}
