//! How a line splits into cells, and which delimiter a table has. The one scanner serves reading and
//! locating alike, so that a position is always that of the text that was read.

use std::borrow::Cow;
use std::ops::Range;

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

/// One cell: the bytes of its content, without blanks and quotes around it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Cell {
    pub span: Range<usize>,
    pub quoted: bool,
}

impl Cell {
    /// Its text, with doubled quotes undone.
    pub fn text<'a>(&self, source: &'a Source) -> Cow<'a, str> {
        let text = source.slice(self.span.clone());
        if self.quoted && text.contains("\"\"") {
            Cow::Owned(text.replace("\"\"", "\""))
        } else {
            Cow::Borrowed(text)
        }
    }
}

/// A quoted cell that does not end, or that does not end its field: the bytes, and what is wrong.
pub(super) type Unquotable = (Range<usize>, &'static str);

/// Splits a line that starts at byte `base` into `cells`, which is emptied first.
pub(super) fn split(
    line: &str,
    base: usize,
    delimiter: Delimiter,
    cells: &mut Vec<Cell>,
) -> Result<(), Unquotable> {
    cells.clear();
    if let Some(byte) = delimiter.byte() {
        return split_at(line.as_bytes(), base, byte, cells);
    }
    split_blanks(line.as_bytes(), base, cells);
    Ok(())
}

fn is_blank(byte: u8) -> bool {
    matches!(byte, b' ' | b'\t')
}

fn split_blanks(line: &[u8], base: usize, cells: &mut Vec<Cell>) {
    let mut at = 0;
    while let Some(skip) = line[at..].iter().position(|&byte| !is_blank(byte)) {
        let start = at + skip;
        let length = line[start..].iter().position(|&byte| is_blank(byte));
        at = length.map_or(line.len(), |length| start + length);
        cells.push(Cell {
            span: base + start..base + at,
            quoted: false,
        });
    }
}

fn split_at(
    line: &[u8],
    base: usize,
    delimiter: u8,
    cells: &mut Vec<Cell>,
) -> Result<(), Unquotable> {
    let blank = |at: usize| is_blank(line[at]) && line[at] != delimiter;
    let mut at = 0;
    loop {
        while at < line.len() && blank(at) {
            at += 1;
        }
        if line.get(at) == Some(&b'"') {
            let end = quoted_end(line, at + 1).ok_or((
                base + at..base + line.len(),
                "a quoted cell does not end on its line",
            ))?;
            cells.push(Cell {
                span: base + at + 1..base + end,
                quoted: true,
            });
            at = end + 1;
            while at < line.len() && blank(at) {
                at += 1;
            }
            if at < line.len() && line[at] != delimiter {
                return Err((base + at..base + at + 1, "text follows a quoted cell"));
            }
        } else {
            let start = at;
            let length = line[at..].iter().position(|&byte| byte == delimiter);
            at = length.map_or(line.len(), |length| start + length);
            let kept = (start..at).rev().find(|&last| !blank(last));
            cells.push(Cell {
                span: base + start..base + kept.map_or(start, |last| last + 1),
                quoted: false,
            });
        }
        if at >= line.len() {
            return Ok(());
        }
        at += 1;
    }
}

/// The byte of the quote that ends a quoted cell, whose content starts at `at`.
fn quoted_end(line: &[u8], mut at: usize) -> Option<usize> {
    loop {
        at += line.get(at..)?.iter().position(|&byte| byte == b'"')?;
        if line.get(at + 1) != Some(&b'"') {
            return Some(at);
        }
        at += 2;
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
pub(super) fn conclude(rows: &[&str]) -> (Delimiter, usize) {
    let mut best = (Delimiter::Blanks, 0, -1.0);
    for delimiter in Delimiter::ALL {
        let (share, fields) = explained(rows, delimiter);
        if share > best.2 || (share >= best.2 && fields > best.1) {
            best = (delimiter, fields, share);
        }
    }
    (best.0, best.1)
}

/// The share of the cells that are numbers, and the most common number of fields.
fn explained(rows: &[&str], delimiter: Delimiter) -> (f64, usize) {
    let mut cells = Vec::new();
    let (mut all, mut numbers) = (0u32, 0u32);
    let mut counts = std::collections::BTreeMap::<usize, usize>::new();
    for row in rows {
        if split(row, 0, delimiter, &mut cells).is_err() {
            all += 1;
            continue;
        }
        *counts.entry(cells.len()).or_default() += 1;
        for cell in &cells {
            let text = &row[cell.span.clone()];
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
            let concluded = conclude(&[row, row]);
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
        let mut cells = Vec::new();
        let line = r#" "a ""b"", c" , 2,"#;
        split(line, 10, Delimiter::Comma, &mut cells).unwrap();
        let texts: Vec<_> = cells
            .iter()
            .map(|cell| &line[cell.span.start - 10..cell.span.end - 10])
            .collect();
        assert_eq!(texts, [r#"a ""b"", c"#, "2", ""]);
        assert!(split(r#"1,"ab"#, 0, Delimiter::Comma, &mut cells).is_err());
        assert!(split(r#""ab"c,1"#, 0, Delimiter::Comma, &mut cells).is_err());
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
        /// The oracle is the csv crate.
        #[test]
        fn delimited_cells_are_those_of_csv(fields in prop::collection::vec("[a-z0-9\",;µ]{0,6}", 2..6)) {
            let mut writer = csv::WriterBuilder::new().from_writer(Vec::new());
            writer.write_record(&fields).unwrap();
            let line = String::from_utf8(writer.into_inner().unwrap()).unwrap();
            let source = Source::from_text("t", &line);
            let mut cells = Vec::new();
            split(line.trim_end_matches('\n'), 0, Delimiter::Comma, &mut cells).unwrap();
            let texts: Vec<String> = cells.iter().map(|c| c.text(&source).into_owned()).collect();
            prop_assert_eq!(texts, fields);
        }

        #[test]
        fn splitting_never_panics(line in "[\" \t,;aµ1.]{0,30}") {
            let mut cells = Vec::new();
            for delimiter in Delimiter::ALL {
                let _ = split(&line, 0, delimiter, &mut cells);
                for cell in &cells {
                    prop_assert!(line.get(cell.span.clone()).is_some());
                }
            }
        }
    }
}
