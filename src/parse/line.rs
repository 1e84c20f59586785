//! What one line of a table is: a row, a comment, the title of a block, or nothing.

use std::ops::Range;

use super::cells::BLANKS;
use super::dialect::{self, Delimiter, Dialect};
use super::title::title;
use super::{Source, metadata};

/// What a line is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Place {
    Blank,
    /// A line with a comment mark.
    Comment,
    /// A line such as `k-point 3`, of the rows that follow.
    Title,
    /// The names once more.
    Repeat,
    /// A line of dashes and the like.
    Ruler,
    Row,
}

/// Tells the lines of one table apart.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Lines {
    dialect: Dialect,
    /// The lines before the rows that are no comments, with single blanks.
    names: Vec<String>,
}

impl Lines {
    /// With the lines that stand before the rows, which may be repeated among them.
    pub fn new(source: &Source, dialect: &Dialect, before: &[(Place, Range<usize>)]) -> Self {
        let bare = before.iter().filter(|(place, _)| *place == Place::Row);
        let last = bare.rev().take(2);
        Self {
            dialect: dialect.clone(),
            names: last
                .map(|(_, span)| single(source.slice(span.clone())))
                .collect(),
        }
    }

    /// What a line is.
    pub fn place(&self, line: &str) -> Place {
        match begins_row(line.as_bytes()) {
            true => Place::Row,
            false => self.slowly(line),
        }
    }

    fn slowly(&self, line: &str) -> Place {
        let first = line.trim_start_matches(BLANKS).bytes().next();
        if first.is_some_and(|b| b.is_ascii_alphabetic()) && !self.may_be_name(first) {
            // Most lines of a table of texts: neither marked, nor drawn, nor like any line above.
            return match is_title(line) && !self.dialect.is_row(line) {
                true => Place::Title,
                false => Place::Row,
            };
        }
        if line.trim().is_empty() {
            Place::Blank
        } else if is_ruler(line) {
            Place::Ruler
        } else if let Some(at) = self.comment(line) {
            match is_title(&line[at..]) {
                true => Place::Title,
                false => Place::Comment,
            }
        } else if is_title(line) && !self.dialect.is_row(line) {
            Place::Title
        } else if !self.names.is_empty() && self.names.contains(&single(line)) {
            Place::Repeat
        } else {
            Place::Row
        }
    }

    /// Whether one of the lines above the rows begins with this sign.
    fn may_be_name(&self, first: Option<u8>) -> bool {
        self.names.iter().any(|name| name.bytes().next() == first)
    }

    /// Where the text of a comment line starts.
    pub fn comment(&self, line: &str) -> Option<usize> {
        comment(line, &self.dialect)
    }
}

/// Whether a line is a row by its first sign: it begins with a number.
pub(super) fn begins_row(text: &[u8]) -> bool {
    let first = text.iter().position(|b| !matches!(b, b' ' | b'\t'));
    match first.map(|at| (text[at], text.get(at + 1))) {
        Some((b'0'..=b'9', _)) => true,
        Some((b'+' | b'-' | b'.', next)) => matches!(next, Some(b'0'..=b'9' | b'.')),
        _ => false,
    }
}

/// A line with single blanks between its words.
fn single(line: &str) -> String {
    line.split_whitespace().collect::<Vec<_>>().join(" ")
}

/// Whether a line is a comment whatever the dialect, or may be one: it tells nothing of the dialect.
pub(super) fn is_aside(line: &str) -> bool {
    sure_comment(line).is_some()
        || is_ruler(line)
        || line.trim_start().starts_with(';')
        || quoted(line)
}

/// Where the text of a comment line starts, after its marks; `None` for another line.
pub(super) fn comment(line: &str, dialect: &Dialect) -> Option<usize> {
    if let Some(at) = sure_comment(line) {
        return Some(at);
    }
    let text = line.trim_start();
    let start = line.len() - text.len();
    let after = |marks: &[char]| Some(start + text.len() - text.trim_start_matches(marks).len());
    match text.as_bytes().first()? {
        b';' if dialect.delimiter == Delimiter::Semicolon && dialect.is_row(line) => None,
        b';' => after(&[';', ' ', '\t']),
        b'"' if quoted(line) && dialect.fields > 1 => after(&['"', ' ', '\t']),
        _ => None,
    }
}

fn sure_comment(line: &str) -> Option<usize> {
    const MARKS: [char; 4] = ['#', '!', '%', '@'];
    let text = line.trim_start();
    let is_comment = text.starts_with(MARKS) || text.starts_with("//");
    let rest = text.trim_start_matches([' ', '\t', '#', '!', '%', '@', '/']);
    is_comment.then(|| line.len() - rest.len())
}

/// Whether a line is one text after a quote, as in `"cleaved in vacuum"`.
fn quoted(line: &str) -> bool {
    let text = line.trim();
    let quotes = text.bytes().filter(|&b| b == b'"').count();
    text.starts_with('"')
        && (quotes == 1 || (quotes == 2 && text.ends_with('"')))
        && !dialect::looks_numeric(text)
}

/// Whether a line is drawn rather than written, as `-----` and `|---|---|`.
fn is_ruler(line: &str) -> bool {
    let drawn = |b: u8| {
        matches!(
            b,
            b'-' | b'=' | b'_' | b'+' | b'|' | b':' | b'*' | b'~' | b' ' | b'\t'
        )
    };
    let long = |mark: &str| line.contains(mark);
    line.bytes().all(drawn)
        && (long("----")
            || long("====")
            || long("____")
            || long("~~~~")
            || (long("---") && long("|")))
}

/// Whether a line looks like the first row: like numbers, and not like the title of a block, a
/// statement or a comment.
pub(super) fn starts_rows(line: &str) -> bool {
    dialect::looks_numeric(line) && !is_statement(line) && !is_title(line)
}

/// Whether a line may be a row that tells something of the dialect.
pub(super) fn tells_dialect(line: &str) -> bool {
    dialect::has_numbers(line) && !is_statement(line) && !is_title(line)
}

/// Whether a line without a comment mark is a statement, such as `Sweeps: 10` or `T = 300 K`.
pub(super) fn is_statement(line: &str) -> bool {
    let text = line.trim_start_matches(BLANKS);
    text.starts_with(char::is_alphabetic)
        && (metadata::is_statement(text) || metadata::is_known(text))
}

/// Whether a line is the title of a block: a word for a k-point, band, spin or sweep, a whole number,
/// and perhaps more.
pub(super) fn is_title(line: &str) -> bool {
    title(line).is_some()
}
