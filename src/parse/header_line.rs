//! Which line holds the names of the columns, and its cells.

use std::ops::Range;

use rayon::prelude::*;

use super::cells::{self, Unquotable};
use super::dialect::Delimiter;
use super::header::{self, Reading};
use super::layout::{Aside, Layout};
use super::metadata;
use super::number::number;
use super::problem::visible;
use super::regroup::{self, Ungrouped};
use super::role::{ColumnChoice, Hints, Kind};
use super::{Problem, Source};

/// Cells that one task reads.
const AT_ONCE: usize = 1_000;
/// Lines above the names in which other names are looked for.
const MOST_ABOVE: usize = 1_000;

/// The header of one column.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Name {
    /// The text of its cell; empty where the table has no header.
    pub text: String,
    /// Where it stands.
    pub span: Option<Range<usize>>,
    /// What it says.
    pub reading: Reading,
    /// The unit that the line below the names gives it, and where.
    pub unit: Option<Cell>,
}

impl Name {
    fn nameless() -> Self {
        Self {
            text: String::new(),
            span: None,
            reading: Reading::default(),
            unit: None,
        }
    }
}

/// Names for the columns of a table without a header.
pub(super) fn nameless(layout: &Layout) -> Vec<Name> {
    vec![Name::nameless(); layout.fields()]
}

/// The names of the columns: the bare line before the numbers, or else the last comment line before
/// them where it has a name for each column; a line of units may stand below. `None` where there is
/// no such line.
pub(super) fn find(
    source: &Source,
    layout: &Layout,
    kind: Kind,
    hints: &Hints,
) -> Result<Option<Vec<Name>>, Problem> {
    let units = units_line(source, layout);
    let bare =
        &layout.bare[..layout.bare.len() - usize::from(units.is_some() && !layout.bare.is_empty())];
    let mut names = match (
        bare.last(),
        comment_header(source, layout, units.as_deref()),
    ) {
        (Some(line), _) => Some(bare_header(source, layout, line, kind, hints)?),
        (None, Some(line)) => commented_header(source, layout, &line, kind, hints)?,
        (None, None) => None,
    };
    for (name, (unit, span)) in names.iter_mut().flatten().zip(units.into_iter().flatten()) {
        name.unit = (!matches!(unit.as_str(), "" | "-" | "1")).then_some((unit, span));
    }
    Ok(names)
}

fn commented_header(
    source: &Source,
    layout: &Layout,
    line: &Range<usize>,
    kind: Kind,
    hints: &Hints,
) -> Result<Option<Vec<Name>>, Problem> {
    match cells(source, layout, line.clone(), kind) {
        Ok(cells) => {
            let names = names(cells, kind);
            Ok(holds_names(&names, kind, hints).then_some(names))
        }
        Err(Mismatch::Ambiguous(ways)) => {
            Err(Mismatch::Ambiguous(ways).problem(source, layout, line))
        }
        Err(_) => Ok(None),
    }
}

/// The last line before the numbers where it has a unit for each column, and another line of names
/// stands above it.
fn units_line(source: &Source, layout: &Layout) -> Option<Vec<Cell>> {
    let comments = before(layout).len();
    let line = match layout.bare.as_slice() {
        [] if comments > 1 => before(layout)[comments - 1].span.clone(),
        [only] if comments > 0 => only.clone(),
        [.., last] if layout.bare.len() > 1 => last.clone(),
        _ => return None,
    };
    let text = source.slice(line.clone());
    let spans = cells::spans(text, line.start, layout.dialect.delimiter).ok()?;
    let mut cells: Vec<Cell> = spans
        .into_iter()
        .map(|span| (bracketless(source.slice(span.clone())).to_owned(), span))
        .collect();
    while cells.len() > layout.fields() && cells.last().is_some_and(|cell| cell.0.is_empty()) {
        cells.pop();
    }
    let known = cells.iter().any(|(text, _)| header::is_unit(text));
    let all = cells
        .iter()
        .all(|(text, _)| matches!(text.as_str(), "" | "-" | "1") || header::is_any_unit(text));
    (known && all && cells.len() == layout.fields()).then_some(cells)
}

fn bracketless(text: &str) -> &str {
    let inner = text
        .strip_prefix('(')
        .and_then(|rest| rest.strip_suffix(')'))
        .or_else(|| {
            text.strip_prefix('[')
                .and_then(|rest| rest.strip_suffix(']'))
        });
    inner.unwrap_or(text).trim()
}

/// The comments before the first row.
fn before(layout: &Layout) -> &[Aside] {
    let until = layout.comments.partition_point(|aside| aside.row == 0);
    &layout.comments[..until]
}

/// The names in the last line before the numbers that is no comment.
fn bare_header(
    source: &Source,
    layout: &Layout,
    line: &Range<usize>,
    kind: Kind,
    hints: &Hints,
) -> Result<Vec<Name>, Problem> {
    let names = cells(source, layout, line.clone(), kind).map(|cells| names(cells, kind));
    let own = names.as_deref().unwrap_or_default();
    let above = layout
        .bare
        .iter()
        .rev()
        .filter(|other| other.start < line.start)
        .take(MOST_ABOVE);
    let above = above.cloned().chain(comment_header(source, layout, None));
    let other = naming(source, layout, above, kind).find(|(_, names)| known(names) > known(own));
    if let (Some((other, _)), false) = (other, chosen(own, hints)) {
        return Err(between(source, line, other));
    }
    if !source.slice(line.clone()).contains(char::is_alphabetic) {
        return Err(neither(source, line.clone(), "it has no letter"));
    }
    let names = names.map_err(|why| why.problem(source, layout, line))?;
    let of_number = names.iter().find(|name| number(&name.text).is_some());
    match of_number.and_then(|name| Some((name, name.span.clone()?))) {
        Some((name, span)) => {
            let why = format!("`{}` is a number among names", visible(&name.text));
            Err(neither(source, span, &why))
        }
        None => Ok(names),
    }
}

/// Those of some lines that name the columns, two of them at least in the trade's words.
pub(super) fn naming<'a>(
    source: &'a Source,
    layout: &'a Layout,
    lines: impl Iterator<Item = Range<usize>> + 'a,
    kind: Kind,
) -> impl Iterator<Item = (Range<usize>, Vec<Name>)> + 'a {
    lines.filter_map(move |line| {
        let names = names(cells(source, layout, line.clone(), kind).ok()?, kind);
        (known(&names) > 1).then_some((line, names))
    })
}

/// The last comment before the numbers that has letters and is no statement such as `axis: kinetic`.
/// A line of units is passed over.
pub(super) fn comment_header(
    source: &Source,
    layout: &Layout,
    units: Option<&[Cell]>,
) -> Option<Range<usize>> {
    let units = units.and_then(|units| Some(units.first()?.1.start));
    let mut lines = before(layout).iter().rev().map(|aside| &aside.span);
    let line = lines.find(|line| {
        let of_units = units.is_some_and(|at| line.start <= at && at < line.end);
        !of_units
            && source
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
    let is_name = kind == Kind::Any || known(names) > 0 || chosen(names, hints);
    is_name && !names.iter().any(|name| number(&name.text).is_some())
}

/// How many of the names say what they are.
fn known(names: &[Name]) -> usize {
    let roles = names.iter().filter(|name| name.reading.role.is_some());
    roles.count()
}

/// Whether the user names a column by one of the names.
fn chosen(names: &[Name], hints: &Hints) -> bool {
    hints.columns.values().any(|choice| {
        matches!(choice, ColumnChoice::Header(text) if names.iter().any(|name| *text == name.text))
    })
}

/// One cell: its text and where it stands.
pub(super) type Cell = (String, Range<usize>);

fn names(cells: Vec<Cell>, kind: Kind) -> Vec<Name> {
    cells
        .into_par_iter()
        .with_min_len(AT_ONCE)
        .map(|(text, span)| Name {
            reading: header::read(&text, kind),
            text,
            span: Some(span),
            unit: None,
        })
        .collect()
}

/// Why a line gives no name to each column.
enum Mismatch {
    Count(usize),
    Ambiguous([Vec<String>; 2]),
    Quotes(Unquotable),
}

impl Mismatch {
    fn problem(self, source: &Source, layout: &Layout, line: &Range<usize>) -> Problem {
        let fields = layout.fields();
        match self {
            Self::Quotes(why) => cells::unquotable(source, why),
            Self::Count(found) => Problem::new(format!(
                "the header has {found} cells, but the rows have {fields} fields {}",
                layout.dialect.delimiter.in_words()
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
    let fields = layout.fields();
    if layout.dialect.delimiter != Delimiter::Blanks {
        return delimited(source, &line, layout.dialect.delimiter, fields);
    }
    for delimiter in Delimiter::CHARACTERS {
        if fields > 1
            && let Ok(cells) = delimited(source, &line, delimiter, fields)
            && cells.iter().all(|(text, _)| regroup::is_closed(text))
        {
            return Ok(cells);
        }
    }
    match grouped(source, &line, fields, kind) {
        // Text after the numbers of every row needs no name.
        Err(Mismatch::Count(_)) if layout.dialect.numeric.last() == Some(&false) && fields > 2 => {
            let mut cells = grouped(source, &line, fields - 1, kind)?;
            cells.push((String::new(), line.end..line.end));
            Ok(cells)
        }
        grouped => grouped,
    }
}

fn grouped(
    source: &Source,
    line: &Range<usize>,
    fields: usize,
    kind: Kind,
) -> Result<Vec<Cell>, Mismatch> {
    let text = source.slice(line.clone());
    regroup::regroup(text, fields, kind)
        .map(|spans| {
            let cell = |span: Range<usize>| {
                let place = line.start + span.start..line.start + span.end;
                (text[span].to_owned(), place)
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

/// The cells of a line with a delimiter of one character; empty ones after the last are left away.
fn delimited(
    source: &Source,
    line: &Range<usize>,
    delimiter: Delimiter,
    fields: usize,
) -> Result<Vec<Cell>, Mismatch> {
    let mut spans = cells::spans(source.slice(line.clone()), line.start, delimiter)
        .map_err(Mismatch::Quotes)?;
    while spans.len() > fields && spans.last().is_some_and(Range::is_empty) {
        spans.pop();
    }
    if spans.len() != fields {
        return Err(Mismatch::Count(spans.len()));
    }
    let cell = |span: Range<usize>| (cells::text_of(source, &span).into_owned(), span);
    Ok(spans.into_iter().map(cell).collect())
}

fn neither(source: &Source, span: Range<usize>, why: &str) -> Problem {
    Problem::new(format!(
        "the line before the numbers is neither a header nor a row: {why}"
    ))
    .at(source.place(span))
    .with_help("a header holds names only; mark a comment with #")
}

fn between(source: &Source, line: &Range<usize>, names: Range<usize>) -> Problem {
    Problem::new("this line between the names and the numbers is neither")
        .at(source.place(line.clone()))
        .with_related(source.place(names), "the names of the columns")
        .with_help(
            "write a unit beside its name, as in `Kinetic energy (eV)`; mend a damaged row; \
             mark a comment with #",
        )
}
