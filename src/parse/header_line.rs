//! Which line holds the names of the columns, and its cells.

use std::ops::Range;

use super::dialect::{self, Cell, Delimiter};
use super::header::{self, Reading};
use super::layout::Layout;
use super::metadata;
use super::number::number;
use super::regroup::{self, Ungrouped};
use super::role::{ColumnChoice, Hints, Kind};
use super::{Problem, Source};

/// The header of one column.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Name {
    /// The text of its cell; empty where the table has no header.
    pub text: String,
    /// Where it stands.
    pub span: Option<Range<usize>>,
    /// What it says.
    pub reading: Reading,
}

impl Name {
    fn nameless() -> Self {
        Self {
            text: String::new(),
            span: None,
            reading: Reading::default(),
        }
    }
}

/// Names for the columns of a table without a header.
pub(super) fn nameless(layout: &Layout) -> Vec<Name> {
    vec![Name::nameless(); layout.fields]
}

/// The names of the columns: the bare line before the numbers, or else the last comment line before
/// them where it has a name for each column. `None` where there is no such line.
pub(super) fn find(
    source: &Source,
    layout: &Layout,
    kind: Kind,
    hints: &Hints,
) -> Result<Option<Vec<Name>>, Problem> {
    if let Some(line) = layout.bare.last() {
        let cells = cells(source, layout, line.clone(), kind)
            .map_err(|why| why.problem(source, layout, line))?;
        let names = names(source, &cells, kind);
        return match names.iter().find(|name| number(&name.text).is_some()) {
            Some(name) => Err(neither(source, name)),
            None => Ok(Some(names)),
        };
    }
    let Some(line) = comment_header(source, layout) else {
        return Ok(None);
    };
    match cells(source, layout, line.clone(), kind) {
        Ok(cells) => {
            let names = names(source, &cells, kind);
            Ok(holds_names(&names, kind, hints).then_some(names))
        }
        Err(Mismatch::Ambiguous(ways)) => {
            Err(Mismatch::Ambiguous(ways).problem(source, layout, &line))
        }
        Err(_) => Ok(None),
    }
}

/// The last comment before the numbers that has letters and is no statement such as `axis: kinetic`.
pub(super) fn comment_header(source: &Source, layout: &Layout) -> Option<Range<usize>> {
    let before = &layout.comments[..layout.comments_before];
    let line = before.iter().rev().find(|line| {
        source
            .slice((*line).clone())
            .contains(char::is_alphanumeric)
    })?;
    let text = source.slice(line.clone());
    let lower = text.to_ascii_lowercase();
    if let Some(rest) = lower
        .strip_prefix("columns:")
        .or(lower.strip_prefix("columns ="))
    {
        let start = line.end - rest.trim_start().len();
        return Some(start..line.end);
    }
    (!metadata::is_statement(text)).then(|| line.clone())
}

fn holds_names(names: &[Name], kind: Kind, hints: &Hints) -> bool {
    let chosen = |name: &Name| {
        hints
            .columns
            .values()
            .any(|choice| matches!(choice, ColumnChoice::Header(text) if *text == name.text))
    };
    let known = |name: &Name| kind == Kind::Any || name.reading.role.is_some() || chosen(name);
    names.iter().any(known) && !names.iter().any(|name| number(&name.text).is_some())
}

fn names(source: &Source, cells: &[Cell], kind: Kind) -> Vec<Name> {
    cells
        .iter()
        .map(|cell| {
            let text = cell.text(source).into_owned();
            Name {
                reading: header::read(&text, kind),
                text,
                span: Some(cell.span.clone()),
            }
        })
        .collect()
}

/// Why a line gives no name to each column.
enum Mismatch {
    Count(usize),
    Ambiguous([Vec<String>; 2]),
    Quotes(dialect::Unquotable),
}

impl Mismatch {
    fn problem(self, source: &Source, layout: &Layout, line: &Range<usize>) -> Problem {
        let fields = layout.fields;
        match self {
            Self::Quotes((span, what)) => Problem::new(what).at(source.place(span)),
            Self::Count(found) => Problem::new(format!(
                "the header has {found} cells, but the rows have {fields} fields {}",
                layout.delimiter.in_words()
            ))
            .at(source.place(line.clone()))
            .with_help(
                "give every column one name, and separate names by two blanks or more where a name \
                 has blanks in it; where commas are decimal marks, write points",
            ),
            Self::Ambiguous([one, other]) => Problem::new(format!(
                "the header can be read in more than one way as {fields} columns: {} or {}",
                one.join(" | "),
                other.join(" | ")
            ))
            .at(source.place(line.clone()))
            .with_help("separate the names by two blanks or more, or by commas"),
        }
    }
}

fn cells(
    source: &Source,
    layout: &Layout,
    line: Range<usize>,
    kind: Kind,
) -> Result<Vec<Cell>, Mismatch> {
    let text = source.slice(line.clone());
    let mut cells = Vec::new();
    if layout.delimiter != Delimiter::Blanks {
        dialect::split(text, line.start, layout.delimiter, &mut cells).map_err(Mismatch::Quotes)?;
        return match cells.len() {
            found if found == layout.fields => Ok(cells),
            found => Err(Mismatch::Count(found)),
        };
    }
    for delimiter in Delimiter::CHARACTERS {
        let split = dialect::split(text, line.start, delimiter, &mut cells);
        let whole = |cell: &Cell| regroup::is_closed(source.slice(cell.span.clone()));
        if split.is_ok()
            && cells.len() > 1
            && cells.len() == layout.fields
            && cells.iter().all(whole)
        {
            return Ok(cells);
        }
    }
    regroup::regroup(text, layout.fields, kind)
        .map(|spans| {
            let cell = |span: Range<usize>| Cell {
                span: line.start + span.start..line.start + span.end,
                quoted: false,
            };
            spans.into_iter().map(cell).collect()
        })
        .map_err(|why| match why {
            Ungrouped::Count(found) => Mismatch::Count(found),
            Ungrouped::Ambiguous(ways) => Mismatch::Ambiguous(ways.map(|spans| {
                spans
                    .into_iter()
                    .map(|span| text[span].to_owned())
                    .collect()
            })),
        })
}

fn neither(source: &Source, name: &Name) -> Problem {
    let problem = Problem::new(format!(
        "the line before the numbers is neither a header nor a row: `{}` is a number among names",
        name.text
    ))
    .with_help("a header holds names only; mark a comment with #");
    match &name.span {
        Some(span) => problem.at(source.place(span.clone())),
        None => problem,
    }
}
