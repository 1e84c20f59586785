//! How one line splits into cells, and where each of them stands.

use std::borrow::Cow;
use std::ops::Range;

use super::dialect::{Delimiter, Dialect, span_in};
use super::header;
use super::number::{has_decimal_comma, is_missing, number, number_in};
use super::{Problem, Source};

pub(super) const BLANKS: [char; 2] = [' ', '\t'];

/// The bytes that are wrong in a line, and what is.
pub(super) type Unquotable = (Range<usize>, &'static str);

/// The problem that a cell is not quoted as it should be.
pub(super) fn unquotable(source: &Source, (span, what): Unquotable) -> Problem {
    Problem::new(what).at(source.place(span)).with_help(
        "a quoted cell begins and ends with a quote, on one line; double a quote within it",
    )
}

/// The cells of a row.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Cells {
    /// Where each field stands, without quotes and blanks around it; empty where it is blank.
    pub spans: Vec<Range<usize>>,
    /// Text after the last field that belongs to none.
    pub left_out: Option<Range<usize>>,
}

/// Why a line is no row of the table.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum NoRow {
    /// Its quotes are wrong.
    Quotes(Unquotable),
    /// It has this many fields.
    Count(usize, Vec<Range<usize>>),
}

/// Splits a row. A line that has not the right number of fields as it stands is tried again without a
/// remark at its end, with numbers that have grown together taken apart, by position, and with text
/// after the last field left out.
pub(super) fn split(
    source: &Source,
    row: &Range<usize>,
    dialect: &Dialect,
) -> Result<Cells, NoRow> {
    let line = source.slice(row.clone());
    let plain = spans(line, row.start, dialect.delimiter).map_err(NoRow::Quotes)?;
    let remark = plain
        .iter()
        .position(|span| is_remark(source.slice(span.clone())));
    if let Some(cells) = exact(&plain, dialect).filter(|_| remark.is_none()) {
        return Ok(cells);
    }
    if dialect.delimiter == Delimiter::Pipe {
        // Strokes at both ends may stand for blank cells.
        let whole = delimited(line, line, row.start, b'|').map_err(NoRow::Quotes)?;
        if let Some(cells) = exact(&whole, dialect) {
            return Ok(cells);
        }
    }
    if let Some(at) = remark {
        let kept = &plain[..at];
        if let Some(mut cells) = exact(kept, dialect) {
            cells.left_out = Some(plain[at].start..row.end);
            return Ok(cells);
        }
    }
    if dialect.delimiter == Delimiter::Blanks {
        let kept = &plain[..remark.unwrap_or(plain.len())];
        let pieces = apart(source, kept);
        let others = aligned(&pieces, row.start, dialect, by_signs(source, kept))
            .or_else(|| by_position(source, &pieces, row.start, dialect))
            .or_else(|| with_text_after(source, kept, dialect));
        if let Some(cells) = others {
            return Ok(cells);
        }
    }
    Err(NoRow::Count(plain.len(), plain))
}

/// Whether a cell begins a remark at the end of a line.
pub(super) fn is_remark(cell: &str) -> bool {
    cell.starts_with(['#', '!']) && cell != "#N/A"
}

/// The cells as they stand, empty ones after the last delimiter left away.
fn exact(spans: &[Range<usize>], dialect: &Dialect) -> Option<Cells> {
    let surplus = spans.get(dialect.fields..)?;
    surplus.iter().all(Range::is_empty).then(|| Cells {
        spans: spans[..dialect.fields].to_vec(),
        left_out: None,
    })
}

/// Takes apart numbers that fill their fields, as in `-12.34567890-13.45678901`.
fn apart(source: &Source, spans: &[Range<usize>]) -> Vec<Range<usize>> {
    let mut pieces = Vec::new();
    for span in spans {
        match grown_together(source.slice(span.clone())) {
            None => pieces.push(span.clone()),
            Some(parts) => {
                let shifted = |p: Range<usize>| span.start + p.start..span.start + p.end;
                pieces.extend(parts.into_iter().map(shifted));
            }
        }
    }
    pieces
}

/// Decimals that a range of values hardly has.
const MANY_DECIMALS: usize = 4;

/// Whether all numbers that have grown together have a sign between them and many decimals.
fn by_signs(source: &Source, spans: &[Range<usize>]) -> bool {
    spans.iter().all(|span| {
        let text = source.slice(span.clone());
        grown_together(text).is_none_or(|parts| {
            let signed = parts[1..]
                .iter()
                .all(|part| text[part.clone()].starts_with(['-', '+']));
            let decimals = text.len() - text.rfind('.').map_or(text.len(), |at| at + 1);
            signed && decimals >= MANY_DECIMALS
        })
    })
}

/// Numbers that were taken apart as the cells of a row: they end where their columns do.
fn aligned(
    pieces: &[Range<usize>],
    start: usize,
    dialect: &Dialect,
    apart_by_signs: bool,
) -> Option<Cells> {
    let in_line = |(piece, extent): (&Range<usize>, &Range<usize>)| piece.end - start == extent.end;
    let aligned = match &dialect.extents {
        Some(extents) => pieces.iter().zip(extents).all(in_line),
        // Without columns to end in, a sign and many decimals must tell: `1.1-1.2` is a range.
        None => apart_by_signs,
    };
    (pieces.len() == dialect.fields && aligned).then(|| Cells {
        spans: pieces.to_vec(),
        left_out: None,
    })
}

/// Numbers that may have grown together.
const MOST_TOGETHER: usize = 100;

/// The parts of a text that is several numbers with the same number of decimals.
pub(super) fn grown_together(text: &str) -> Option<Vec<Range<usize>>> {
    let bytes = text.as_bytes();
    let of_numbers = |&b: &u8| b.is_ascii_digit() || matches!(b, b'.' | b'-' | b'+');
    let points = text.matches('.').count();
    if !(2..=MOST_TOGETHER).contains(&points) || !bytes.iter().all(of_numbers) {
        return None;
    }
    let decimals = text.len() - text.rfind('.')? - 1;
    let mut cuts = vec![0];
    for (at, pair) in bytes.windows(2).enumerate() {
        let last = cuts[cuts.len() - 1];
        // A number ends so many digits after its point.
        let point = text[last..=at].find('.').map(|point| last + point);
        let full = point.is_some_and(|point| at == point + decimals);
        if full && (pair[1].is_ascii_digit() || matches!(pair[1], b'-' | b'+')) {
            cuts.push(at + 1);
        }
    }
    cuts.push(text.len());
    let parts: Vec<Range<usize>> = cuts.windows(2).map(|cut| cut[0]..cut[1]).collect();
    let alike = parts.iter().all(|part| {
        let part = &text[part.clone()];
        let digits = part
            .split_once('.')
            .is_some_and(|(_, f)| f.len() == decimals);
        decimals > 0 && digits && number_in(part, super::number::Decimal::Point).is_some()
    });
    (parts.len() > 1 && alike).then_some(parts)
}

/// Puts the words of a short row into the columns that they stand in.
fn by_position(
    source: &Source,
    spans: &[Range<usize>],
    start: usize,
    dialect: &Dialect,
) -> Option<Cells> {
    let extents = dialect.extents.as_ref()?;
    let line = source.slice(start..spans.last()?.end);
    if spans.len() >= dialect.fields || line.contains('\t') || !line.is_ascii() {
        return None;
    }
    let mut cells: Vec<Range<usize>> = extents
        .iter()
        .map(|extent| start + extent.start..start + extent.start)
        .collect();
    for span in spans {
        // Numbers end where their column ends, and begin after the column before.
        let field = extents.iter().position(|e| span.end == start + e.end)?;
        let before = field.checked_sub(1).map_or(0, |before| extents[before].end);
        if span.start < start + before {
            return None;
        }
        if !cells[field].is_empty() {
            return None;
        }
        cells[field] = span.clone();
    }
    Some(Cells {
        spans: cells,
        left_out: None,
    })
}

/// Leaves out words after the last field, of which none is a number.
fn with_text_after(source: &Source, spans: &[Range<usize>], dialect: &Dialect) -> Option<Cells> {
    let after = spans
        .get(dialect.fields..)
        .filter(|after| !after.is_empty())?;
    let is_text = |span: &Range<usize>| {
        let text = source.slice(span.clone());
        number_in(text, dialect.decimal).is_none() && !is_missing(text) && is_plain_remark(text)
    };
    let column = dialect.fields.checked_sub(1)?;
    let last = source.slice(spans.get(column)?.clone());
    let numeric = dialect.numeric.get(column).copied().unwrap_or(false);
    let belongs = numeric && number_in(last, dialect.decimal).is_some();
    (belongs && after.iter().all(is_text)).then(|| Cells {
        spans: spans[..dialect.fields].to_vec(),
        left_out: Some(after[0].start..spans[spans.len() - 1].end),
    })
}

/// Whether a text without a name may be left out: words, and nothing that would change a number, such
/// as a unit, a factor, an exponent or an uncertainty.
pub(super) fn is_plain_remark(text: &str) -> bool {
    let bare = text.trim_matches(['(', ')', '[', ']', ',', '.']);
    let exponent = bare.strip_prefix(['E', 'e', 'D', 'd', 'x', '×', '*']);
    text.starts_with(|c: char| c.is_alphabetic() || c == '(' || c == '[')
        && !text.contains(|c: char| c.is_ascii_digit() || matches!(c, '±' | '%' | '='))
        && !header::is_any_unit(bare)
        && exponent.is_none_or(|rest| rest.chars().all(char::is_alphabetic) && !rest.is_empty())
}

/// The columns' extents in lines that blanks separate: `None` where two columns share a place, or
/// where a line has signs of more than one byte.
pub(super) fn extents(
    source: &Source,
    rows: &[Range<usize>],
    fields: usize,
    delimiter: Delimiter,
) -> Option<Vec<Range<usize>>> {
    if delimiter != Delimiter::Blanks {
        return None;
    }
    let mut extents: Vec<Range<usize>> = Vec::new();
    let mut whole = 0;
    for row in rows {
        let line = source.slice(row.clone());
        let at = |text: &str| span_in(line, text, 0);
        let spans: Vec<Range<usize>> = rough(line, delimiter).into_iter().map(at).collect();
        let is_number = |span: &Range<usize>| {
            let text = &line[span.clone()];
            number(text).is_some() || has_decimal_comma(text)
        };
        if spans.len() != fields || !spans.iter().any(is_number) {
            // Names among the lines say nothing of where numbers stand.
            continue;
        }
        if line.contains('\t') || !line.is_ascii() {
            return None;
        }
        whole += 1;
        if extents.is_empty() {
            extents = spans;
            continue;
        }
        for (extent, span) in extents.iter_mut().zip(spans) {
            // Numbers are aligned at their ends: a column that wanders has no extent.
            if extent.end != span.end {
                return None;
            }
            extent.start = extent.start.min(span.start);
        }
    }
    let apart = extents.windows(2).all(|pair| pair[0].end <= pair[1].start);
    (whole > 1 && apart).then_some(extents)
}

/// The texts of the cells of a line whose quotes may be wrong, numbers that have grown together
/// taken apart.
pub(super) fn rough(line: &str, delimiter: Delimiter) -> Vec<&str> {
    let Some(byte) = delimiter.byte() else {
        let words = line.split(BLANKS).filter(|word| !word.is_empty());
        return words
            .take_while(|word| !is_remark(word))
            .flat_map(|word| match grown_together(word) {
                Some(parts) => parts.into_iter().map(|part| &word[part]).collect(),
                None => vec![word],
            })
            .collect();
    };
    if let Ok(spans) = spans(line, 0, delimiter) {
        return spans.into_iter().map(|span| &line[span]).collect();
    }
    let cells = line.split(char::from(byte));
    cells
        .map(|cell| cell.trim_matches([' ', '\t', '"']))
        .collect()
}

/// The bytes of the cells' contents in a line that starts at byte `base`, without the quotes and
/// blanks around them.
pub(super) fn spans(
    line: &str,
    base: usize,
    delimiter: Delimiter,
) -> Result<Vec<Range<usize>>, Unquotable> {
    let Some(byte) = delimiter.byte() else {
        let words = line.split(BLANKS).filter(|word| !word.is_empty());
        return Ok(words.map(|word| span_in(line, word.trim(), base)).collect());
    };
    let rest = match delimiter {
        Delimiter::Pipe => unframed(line),
        _ => line,
    };
    delimited(line, rest, base, byte)
}

/// The same for a part of a line that a character delimits.
fn delimited(
    line: &str,
    mut rest: &str,
    base: usize,
    byte: u8,
) -> Result<Vec<Range<usize>>, Unquotable> {
    let mut spans = Vec::new();
    let end = rest.as_ptr().addr() - line.as_ptr().addr() + rest.len();
    loop {
        let (content, length) = if rest.starts_with('"') {
            quoted(rest, char::from(byte)).map_err(|(at, what)| {
                let from = base + end - rest.len() + at;
                (from..base + end, what)
            })?
        } else {
            let length = memchr::memchr(byte, rest.as_bytes()).unwrap_or(rest.len());
            (&rest[..length], length)
        };
        let span = span_in(line, content.trim(), base);
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

/// A line without the strokes at both its ends.
fn unframed(line: &str) -> &str {
    let inside = line.trim_matches(BLANKS).strip_prefix('|');
    inside
        .and_then(|rest| rest.strip_suffix('|'))
        .unwrap_or(line)
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

/// The text of a cell, its doubled quotes made single where it was quoted.
pub(super) fn text_of<'a>(source: &'a Source, span: &Range<usize>) -> Cow<'a, str> {
    let text = source.slice(span.clone());
    let before = span
        .start
        .checked_sub(1)
        .map(|at| source.slice(at..span.start));
    match text.contains("\"\"") && before == Some("\"") {
        true => Cow::Owned(text.replace("\"\"", "\"")),
        false => Cow::Borrowed(text),
    }
}
