//! The dialect of a table: what stands between its fields and which decimal mark its numbers have.

use std::collections::BTreeMap;
use std::ops::Range;

use super::cells::{self, BLANKS};
use super::number::{Decimal, has_decimal_comma, is_missing, may_be_grouped, number, number_in};
use super::role::Hints;
use super::{Problem, Source};

/// What stands between two fields.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Delimiter {
    /// `;`
    Semicolon,
    /// A tab.
    Tab,
    /// `,`
    Comma,
    /// `|`, at the ends of a line too.
    Pipe,
    /// Any number of blanks and tabs.
    Blanks,
}

impl Delimiter {
    /// Every delimiter; of two that explain the rows equally well the first one is taken.
    pub const ALL: [Self; 5] = [
        Self::Semicolon,
        Self::Tab,
        Self::Comma,
        Self::Pipe,
        Self::Blanks,
    ];

    /// The delimiters that are one character.
    pub(super) const CHARACTERS: [Self; 4] = [Self::Semicolon, Self::Tab, Self::Comma, Self::Pipe];

    /// The name used in settings.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Semicolon => "semicolon",
            Self::Tab => "tab",
            Self::Comma => "comma",
            Self::Pipe => "pipe",
            Self::Blanks => "blanks",
        }
    }

    /// Reads a name, or the character itself.
    #[must_use]
    pub fn from_name(text: &str) -> Option<Self> {
        let named = |delimiter: &Self| {
            let character = delimiter.byte().map(|byte| char::from(byte).to_string());
            delimiter.name() == text || character.as_deref() == Some(text)
        };
        let spelled = match text {
            "\\t" => Some(Self::Tab),
            " " => Some(Self::Blanks),
            _ => None,
        };
        spelled.or_else(|| Self::ALL.into_iter().find(named))
    }

    /// The dialect in words.
    pub(super) fn in_words(self) -> &'static str {
        match self {
            Self::Semicolon => "separated by semicolons",
            Self::Tab => "separated by tabs",
            Self::Comma => "separated by commas",
            Self::Pipe => "separated by upright strokes",
            Self::Blanks => "separated by blanks",
        }
    }

    pub(super) fn byte(self) -> Option<u8> {
        match self {
            Self::Semicolon => Some(b';'),
            Self::Tab => Some(b'\t'),
            Self::Comma => Some(b','),
            Self::Pipe => Some(b'|'),
            Self::Blanks => None,
        }
    }
}

/// How the rows of a table are written.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Dialect {
    pub delimiter: Delimiter,
    pub decimal: Decimal,
    /// The number of fields that a row has.
    pub fields: usize,
    /// Whether the rows end with a delimiter after which nothing stands.
    pub trailing: bool,
    /// Where the cells of each column stand in its line, in bytes, where blanks separate them and
    /// every column keeps to itself.
    pub extents: Option<Vec<Range<usize>>>,
    /// Which columns hold numbers.
    pub numeric: Vec<bool>,
}

/// Whether a line looks like numbers rather than names, whatever its delimiter.
pub(super) fn looks_numeric(line: &str) -> bool {
    let (all, numbers) = numbers_among_words(line);
    numbers * 2 > all
}

/// Whether a line has enough numbers to tell something of the dialect.
pub(super) fn has_numbers(line: &str) -> bool {
    let (all, numbers) = numbers_among_words(line);
    numbers * 3 > all
}

fn numbers_among_words(line: &str) -> (usize, usize) {
    let words = line
        .split([' ', '\t', ',', ';', '|', '"'])
        .filter(|word| !word.is_empty());
    let (mut all, mut numbers) = (0, 0);
    for word in words {
        all += 1;
        let is_number = number(word).is_some() || cells::grown_together(word).is_some();
        numbers += usize::from(is_number);
    }
    (all, numbers)
}

/// Concludes the dialect from some rows.
pub(super) fn conclude(
    source: &Source,
    rows: &[Range<usize>],
    hints: &Hints,
) -> Result<Dialect, Problem> {
    let mut best: Option<Explained> = None;
    for delimiter in Delimiter::ALL {
        if hints.delimiter.is_some_and(|wanted| wanted != delimiter) {
            continue;
        }
        let new = explained(source, rows, delimiter);
        let rank = |one: &Explained| (one.numbers, one.fields, one.share);
        let better = best.as_ref().is_none_or(|best| rank(&new) > rank(best));
        if better {
            best = Some(new);
        }
    }
    let Explained {
        delimiter,
        fields,
        trailing,
        ..
    } = best.unwrap_or_default();
    let decimal = match hints.decimal {
        Some(decimal) => decimal,
        None => decimal(source, rows, delimiter, hints)?,
    };
    let mut dialect = Dialect {
        delimiter,
        decimal,
        fields,
        trailing,
        extents: None,
        numeric: Vec::new(),
    };
    dialect.extents = cells::extents(source, rows, fields, delimiter);
    dialect.numeric = numeric(source, rows, &dialect);
    Ok(dialect)
}

/// How well a delimiter explains the rows.
struct Explained {
    delimiter: Delimiter,
    /// Numbers in a row, less half of the doubtful texts, times the share of the rows that have the
    /// most common number of fields.
    numbers: f64,
    /// The share of the cells that are numbers.
    share: f64,
    fields: usize,
    trailing: bool,
}

impl Default for Explained {
    fn default() -> Self {
        Self {
            delimiter: Delimiter::Blanks,
            numbers: 0.0,
            share: 0.0,
            fields: 0,
            trailing: false,
        }
    }
}

/// How well a delimiter explains the rows; a number may have a decimal comma too.
fn explained(source: &Source, rows: &[Range<usize>], delimiter: Delimiter) -> Explained {
    let (mut all, mut numbers, mut doubtful) = (0u32, 0u32, 0u32);
    let mut counts = BTreeMap::<usize, [u32; 2]>::new();
    for row in rows {
        let line = source.slice(row.clone());
        let cells = cells::rough(line, delimiter);
        let [count, open] = counts.entry(cells.len()).or_default();
        *count += 1;
        *open += u32::from(cells.last().is_some_and(|cell| cell.is_empty()));
        for text in cells.into_iter().filter(|text| !is_missing(text)) {
            all += 1;
            let is_number = number(text).is_some() || has_decimal_comma(text);
            numbers += u32::from(is_number);
            doubtful += u32::from(!is_number && is_doubtful(text));
        }
    }
    let most = counts.into_iter().max_by_key(|&(_, [count, _])| count);
    let (fields, [count, open]) = most.unwrap_or_default();
    let lines = f64::from(u32::try_from(rows.len()).unwrap_or(u32::MAX).max(1));
    let trailing = delimiter != Delimiter::Blanks && fields > 1 && open == count;
    Explained {
        delimiter,
        numbers: (f64::from(numbers) - f64::from(doubtful) / 2.0) / lines * f64::from(count)
            / lines,
        share: f64::from(numbers) / f64::from(all.max(1)),
        fields: fields - usize::from(trailing),
        trailing,
    }
}

/// Whether a text may have been cut in the wrong places: it has a sign that separates cells, or a
/// number after its last blank, as where a decimal comma was taken for a delimiter.
fn is_doubtful(text: &str) -> bool {
    let number_last = text
        .rsplit_once([' ', '\t', ';', '|'])
        .is_some_and(|(_, last)| number(last).is_some());
    number_last || text.contains([',', ';', '\t', '|'])
}

/// The decimal mark that the numbers of the rows have.
fn decimal(
    source: &Source,
    rows: &[Range<usize>],
    delimiter: Delimiter,
    hints: &Hints,
) -> Result<Decimal, Problem> {
    let (mut comma, mut certain, mut point) = (None, false, None);
    for row in rows {
        let line = source.slice(row.clone());
        if !line.contains(',') && point.is_some() {
            continue;
        }
        for text in cells::rough(line, delimiter) {
            if text.contains('.') && number(text).is_some() {
                point.get_or_insert_with(|| span_in(line, text, row.start));
            } else if has_decimal_comma(text)
                || number_in(text, Decimal::Comma).is_some_and(|_| text.contains(','))
            {
                comma.get_or_insert_with(|| span_in(line, text, row.start));
                certain |= !may_be_grouped(text);
            }
        }
    }
    let settle = hints.setting("decimal = \"comma\"");
    match (comma, point) {
        (None, _) => Ok(Decimal::Point),
        (Some(comma), Some(point)) => Err(Problem::new(format!(
            "`{}` has a comma and `{}` a point: both cannot be decimal marks",
            source.slice(comma.clone()),
            source.slice(point.clone())
        ))
        .at(source.place(comma))
        .with_related(source.place(point), "the other number")
        .with_help(
            "write a point where the fraction begins and nothing elsewhere, in the whole file",
        )),
        (Some(comma), None) if !certain => Err(Problem::new(format!(
            "`{}` may be a decimal fraction or grouped in thousands, and no number of the table tells",
            source.slice(comma.clone())
        ))
        .at(source.place(comma))
        .with_help(format!(
            "say which, as {settle}, or write the numbers without separators of thousands"
        ))),
        (Some(_), None) => Ok(Decimal::Comma),
    }
}

/// The bytes of a part of a line that starts at byte `base`.
pub(super) fn span_in(line: &str, part: &str, base: usize) -> Range<usize> {
    let start = base + part.as_ptr().addr() - line.as_ptr().addr();
    start..start + part.len()
}

/// Which columns hold numbers in most of the rows that have every field.
fn numeric(source: &Source, rows: &[Range<usize>], dialect: &Dialect) -> Vec<bool> {
    let (mut numbers, mut others) = (vec![0u32; dialect.fields], vec![0u32; dialect.fields]);
    for row in rows {
        let line = source.slice(row.clone());
        let cells = cells::rough(line, dialect.delimiter);
        if cells.len() < dialect.fields {
            continue;
        }
        for (field, text) in cells.into_iter().take(dialect.fields).enumerate() {
            if number_in(text, dialect.decimal).is_some() {
                numbers[field] += 1;
            } else if !is_missing(text) {
                others[field] += 1;
            }
        }
    }
    let pairs = numbers.into_iter().zip(others);
    pairs.map(|(numbers, others)| numbers > others).collect()
}

impl Dialect {
    /// Whether a line has every field and numbers where the table has them.
    pub fn is_row(&self, line: &str) -> bool {
        let cells = cells::rough(line.trim_matches(BLANKS), self.delimiter);
        if cells.len() < self.fields || cells.len() > self.fields + 1 {
            return false;
        }
        let wanted = self.numeric.iter().filter(|numeric| **numeric).count();
        let found = cells
            .iter()
            .zip(&self.numeric)
            .filter(|(text, numeric)| **numeric && number_in(text, self.decimal).is_some())
            .count();
        found > 0 && 2 * found >= wanted
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn concluded(row: &str) -> Result<Dialect, Problem> {
        let source = Source::from_text("t", row);
        conclude(&source, &[0..row.len(), 0..row.len()], &Hints::default())
    }

    #[test]
    fn delimiter_and_decimal_mark_are_concluded() {
        use Delimiter::{Blanks, Comma, Pipe, Semicolon, Tab};
        for (row, delimiter, fields, decimal) in [
            ("1,2,3", Comma, 3, Decimal::Point),
            ("1, 2", Comma, 2, Decimal::Point),
            ("1 2 3", Blanks, 3, Decimal::Point),
            ("  1\t 2", Tab, 2, Decimal::Point),
            ("1\t\t3", Tab, 3, Decimal::Point),
            ("1 2\t3 4", Blanks, 4, Decimal::Point),
            ("1;2", Semicolon, 2, Decimal::Point),
            ("1,5;2,5", Semicolon, 2, Decimal::Comma),
            ("1,5 2,5", Blanks, 2, Decimal::Comma),
            ("1,5\t2,5", Tab, 2, Decimal::Comma),
            ("\"1,5\",\"2,5\"", Comma, 2, Decimal::Comma),
            ("1.234,5;2", Semicolon, 2, Decimal::Comma),
            ("up;1;-2.5", Semicolon, 3, Decimal::Point),
            ("G, 1, 2.5", Comma, 3, Decimal::Point),
            ("\"a;b\",1,2", Comma, 3, Decimal::Point),
            ("Xa,cubic,QSGW,,0.047,Ha,,run 2", Comma, 8, Decimal::Point),
            ("Xa cubic 3,1", Blanks, 3, Decimal::Comma),
            ("Xa;note, in part;3.1", Semicolon, 3, Decimal::Point),
            ("| 1 | 2.5 |", Pipe, 2, Decimal::Point),
            ("1|2", Pipe, 2, Decimal::Point),
            ("1,2,", Comma, 2, Decimal::Point),
            ("1;2,5;", Semicolon, 2, Decimal::Comma),
            ("-1.2500-3.4500 7", Blanks, 3, Decimal::Point),
            ("5", Semicolon, 1, Decimal::Point),
        ] {
            let found = concluded(row).unwrap();
            assert_eq!(
                (found.delimiter, found.fields, found.decimal),
                (delimiter, fields, decimal),
                "{row}"
            );
        }
    }

    #[test]
    fn doubtful_decimal_marks_are_refused() {
        let text = concluded("1,234;2").unwrap_err().to_string();
        assert!(text.contains("grouped in thousands"), "{text}");
        let text = concluded("1,23;2.5").unwrap_err().to_string();
        assert!(text.contains("both cannot be"), "{text}");
    }

    #[test]
    fn numbers_are_told_from_names() {
        for line in ["1 2", "up 1 2 -3.5", "nan,1", "1,5;2", "|1|2|"] {
            assert!(looks_numeric(line), "{line}");
        }
        for line in ["E (eV),counts", "k1 k2 k3", "Kinetic energy / eV, 300 K"] {
            assert!(!looks_numeric(line), "{line}");
        }
    }
}
