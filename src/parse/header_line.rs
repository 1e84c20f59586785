//! Which line holds the names of the columns, and its cells.

use std::ops::Range;

use super::dialect::{self, Delimiter, Splitter};
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
        return bare_header(source, layout, line, kind, hints).map(Some);
    }
    let Some(line) = comment_header(source, layout) else {
        return Ok(None);
    };
    match cells(source, layout, line.clone(), kind) {
        Ok(cells) => {
            let names = names(cells, kind);
            Ok(holds_names(&names, kind, hints).then_some(names))
        }
        Err(Mismatch::Ambiguous(ways)) => {
            Err(Mismatch::Ambiguous(ways).problem(source, layout, &line))
        }
        Err(_) => Ok(None),
    }
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
    let above = layout.bare.iter().rev().skip(1).cloned();
    let above = above.chain(comment_header(source, layout));
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
            let why = format!("`{}` is a number among names", name.text);
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
type Cell = (String, Range<usize>);

fn names(cells: Vec<Cell>, kind: Kind) -> Vec<Name> {
    cells
        .into_iter()
        .map(|(text, span)| Name {
            reading: header::read(&text, kind),
            text,
            span: Some(span),
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
    if layout.delimiter != Delimiter::Blanks {
        return delimited(source, &line, layout.delimiter, layout.fields);
    }
    for delimiter in Delimiter::CHARACTERS {
        if layout.fields > 1
            && let Ok(cells) = delimited(source, &line, delimiter, layout.fields)
            && cells.iter().all(|(text, _)| regroup::is_closed(text))
        {
            return Ok(cells);
        }
    }
    let text = source.slice(line.clone());
    regroup::regroup(text, layout.fields, kind)
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

/// The cells of a line with a delimiter of one character.
fn delimited(
    source: &Source,
    line: &Range<usize>,
    delimiter: Delimiter,
    fields: usize,
) -> Result<Vec<Cell>, Mismatch> {
    let spans = dialect::spans(source.slice(line.clone()), line.start, delimiter)
        .map_err(Mismatch::Quotes)?;
    if spans.len() != fields {
        return Err(Mismatch::Count(spans.len()));
    }
    let mut splitter = Splitter::new(source, delimiter);
    let cells = splitter.cells(line).map_err(Mismatch::Quotes)?;
    let texts = cells.iter().map(|text| text.trim().to_owned());
    Ok(texts.zip(spans).collect())
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
