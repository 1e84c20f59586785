//! A table whose columns have roles, and the values in them.

use std::collections::BTreeMap;
use std::ops::Range;

use super::dialect::{Delimiter, Splitter};
use super::header_line::{self, Name};
use super::layout::Layout;
use super::metadata::{self, Metadata};
use super::number::{has_decimal_comma, number};
use super::problem::{Problems, visible};
use super::role::{ColumnChoice, Hints, Kind, Role};
use super::{Place, Problem, Source};

/// How many columns a message lists.
const LISTED: usize = 20;

/// The lines, names and comments of a table, and which field has which role.
#[derive(Debug)]
pub(super) struct Table {
    pub layout: Layout,
    pub names: Vec<Name>,
    /// The line of the names.
    pub line: Option<usize>,
    pub metadata: Metadata,
    pub fields: BTreeMap<Role, usize>,
}

impl Table {
    /// Reads everything but the values. `None` where a problem leaves no table.
    pub fn open(
        source: &Source,
        kind: Kind,
        hints: &Hints,
        problems: &mut Problems,
    ) -> Option<Self> {
        let layout = problems.keep(Layout::of(source))?;
        let names = problems.keep(names(source, &layout, kind, hints))?;
        let header = names.iter().find_map(|name| name.span.clone());
        let before = layout.bare.len()
            - usize::from(
                layout
                    .bare
                    .last()
                    .is_some_and(|line| is_in(header.as_ref(), line)),
            );
        let mut comments: Vec<Range<usize>> = layout.bare[..before].to_vec();
        comments.extend(
            layout
                .comments
                .iter()
                .filter(|line| !is_in(header.as_ref(), line))
                .cloned(),
        );
        comments.sort_by_key(|line| line.start);
        let metadata = metadata::read(source, comments.into_iter(), kind, problems);
        if let Some(problem) = second_header(source, &layout, &names, kind) {
            problems.push(problem);
        }
        let line = header.map(|span| source.place(span).line);
        let mut table = Self {
            layout,
            names,
            line,
            metadata,
            fields: BTreeMap::new(),
        };
        for &role in hints.units.keys().filter(|role| !kind.has_unit(**role)) {
            let says = hints.says(&format!("unit.{role}"));
            let what = kind.in_words();
            problems.push(Problem::new(format!("{says}: {what} has no such unit")));
        }
        table.choose(source, kind, hints, problems);
        table.claim(source, kind, hints, problems);
        Some(table)
    }

    /// Gives the columns that the user names their roles.
    fn choose(&mut self, source: &Source, kind: Kind, hints: &Hints, problems: &mut Problems) {
        for (&role, choice) in &hints.columns {
            let result = if kind.roles().contains(&role) {
                self.chosen(source, role, choice, hints)
            } else {
                Err(Problem::new(format!(
                    "{}: {} has no such column",
                    hints.says(&format!("column.{role}")),
                    kind.in_words()
                )))
            };
            if let Some(field) = problems.keep(result) {
                self.fields.insert(role, field);
            }
        }
    }

    fn chosen(
        &self,
        source: &Source,
        role: Role,
        choice: &ColumnChoice,
        hints: &Hints,
    ) -> Result<usize, Problem> {
        let says = hints.says(&format!("column.{role}"));
        let fields = self.layout.fields;
        let matching: Vec<usize> = match choice {
            ColumnChoice::Number(column) => (1..=fields)
                .filter(|n| n == column)
                .map(|n| n - 1)
                .collect(),
            ColumnChoice::Header(text) => (0..fields)
                .filter(|&field| self.names[field].text == *text)
                .collect(),
        };
        match (matching.as_slice(), choice) {
            (&[field], _) => match self.fields.iter().find(|&(_, &other)| other == field) {
                Some((other, _)) => Err(Problem::new(format!(
                    "{says} and column.{other} name the same column"
                ))),
                None => Ok(field),
            },
            (_, ColumnChoice::Number(column)) => Err(Problem::new(format!(
                "{says} is {column}, but `{}` has {fields} columns, counted from 1",
                source.name()
            ))),
            ([], ColumnChoice::Header(text)) => Err(self.with_columns(
                source,
                Problem::new(format!("{says}: no column has the header `{text}`")),
            )),
            (_, ColumnChoice::Header(text)) => Err(self
                .with_columns(
                    source,
                    Problem::new(format!(
                        "{says}: more than one column has the header `{text}`"
                    )),
                )
                .with_help("name the column by its number")),
        }
    }

    /// Gives the columns whose header says what they are their roles, where nobody else has them.
    fn claim(&mut self, source: &Source, kind: Kind, hints: &Hints, problems: &mut Problems) {
        let mut claims = BTreeMap::<Role, Vec<usize>>::new();
        for (field, name) in self.names.iter().enumerate() {
            let free = !self.fields.values().any(|&chosen| chosen == field);
            if let (Some(role), true) = (name.reading.role, free) {
                claims.entry(role).or_default().push(field);
            }
        }
        for (role, claimants) in claims {
            if self.fields.contains_key(&role) {
                continue;
            }
            // An energy of unsaid kind is no role of levels: what it means is the reader's question.
            let is_role = kind.roles().contains(&role);
            if let ([first, second, ..], true) = (&claimants[..], is_role) {
                problems.push(self.rivals(source, role, [*first, *second], hints));
            }
            self.fields.insert(role, claimants[0]);
        }
    }

    fn rivals(
        &self,
        source: &Source,
        role: Role,
        [one, other]: [usize; 2],
        hints: &Hints,
    ) -> Problem {
        let (first, second) = (&self.names[one].text, &self.names[other].text);
        Problem::new(format!(
            "columns {} `{first}` and {} `{second}` both read as {role}",
            one + 1,
            other + 1
        ))
        .at(self.place_of(source, one))
        .with_related(self.place_of(source, other), "the other column")
        .with_help(format!(
            "say which one is meant, as in {}",
            hints.setting(&format!("column.{role} = {}", one + 1))
        ))
    }

    /// A problem at the header, saying which columns there are.
    pub fn with_columns(&self, source: &Source, problem: Problem) -> Problem {
        let list: Vec<String> = self
            .names
            .iter()
            .take(LISTED)
            .enumerate()
            .map(|(field, name)| format!("{} `{}`", field + 1, visible(&name.text)))
            .chain((self.names.len() > LISTED).then(|| "…".to_owned()))
            .collect();
        let message = format!("{}; the columns are {}", problem.message, list.join(", "));
        Problem { message, ..problem }.at(self.place_of(source, 0))
    }

    /// The place of a column: its header cell, or its first value where it has none.
    pub fn place_of(&self, source: &Source, field: usize) -> Place {
        let first = || self.layout.cell(source, 0, field);
        source.place(
            self.names[field]
                .span
                .clone()
                .or_else(first)
                .unwrap_or(0..0),
        )
    }

    /// A column's header cell as evidence.
    pub fn says(&self, field: usize) -> String {
        match self.line {
            Some(line) => format!(
                "the header cell `{}` on line {line}",
                self.names[field].text
            ),
            None => format!("column {}", field + 1),
        }
    }
}

fn is_in(span: Option<&Range<usize>>, line: &Range<usize>) -> bool {
    span.is_some_and(|span| line.start <= span.start && span.start <= line.end)
}

fn names(
    source: &Source,
    layout: &Layout,
    kind: Kind,
    hints: &Hints,
) -> Result<Vec<Name>, Problem> {
    match header_line::find(source, layout, kind, hints) {
        Ok(Some(names)) => Ok(names),
        // A bare line that is no header may be a damaged row: it is never passed over.
        Ok(None) if numbered(kind, hints) => Ok(header_line::nameless(layout)),
        Err(_) if numbered(kind, hints) && layout.bare.is_empty() => {
            Ok(header_line::nameless(layout))
        }
        Ok(None) => Err(no_header(source, layout, kind, hints)),
        Err(problem) => Err(problem),
    }
}

/// Whether the user names every needed column by its number.
fn numbered(kind: Kind, hints: &Hints) -> bool {
    let by_number = |role: &Role| matches!(hints.columns.get(role), Some(ColumnChoice::Number(_)));
    match kind {
        Kind::Levels => [Role::EnergyMeanField, Role::EnergyQuasiparticle]
            .iter()
            .any(by_number),
        Kind::Spectrum => [Role::Energy, Role::Intensity].iter().all(by_number),
        Kind::Any => false,
    }
}

/// A comment among the rows that gives the columns other names: another table begins there.
fn second_header(source: &Source, layout: &Layout, names: &[Name], kind: Kind) -> Option<Problem> {
    let comments = layout.comments[layout.comments_before..].iter().cloned();
    let differs = |other: &[Name]| {
        let mut pairs = names.iter().zip(other);
        pairs.any(|(one, other)| one.reading != other.reading)
    };
    let (line, _) =
        header_line::naming(source, layout, comments, kind).find(|(_, other)| differs(other))?;
    Some(
        Problem::new("this comment among the rows gives the columns other names")
            .at(source.place(line))
            .with_help("keep one table in a file"),
    )
}

fn no_header(source: &Source, layout: &Layout, kind: Kind, hints: &Hints) -> Problem {
    let first = layout.row(source, 0).unwrap_or(0..0);
    let (example, settings) = match kind {
        Kind::Levels => (
            "k,band,E_KS (eV),E_QP (eV)",
            "column.energy-quasiparticle = 4",
        ),
        Kind::Spectrum => (
            "Kinetic energy (eV),Counts",
            "column.energy = 1` and `column.intensity = 2",
        ),
        Kind::Any => ("energy_ev,intensity", ""),
    };
    let mut help = format!("write a line of names above the numbers, as in `{example}`");
    if !settings.is_empty() {
        help.push_str(", or name the columns by number: ");
        help.push_str(&hints.setting(settings));
    }
    let problem = Problem::new(format!(
        "no header says what the {} columns from line {} on are",
        layout.fields,
        source.place(first.clone()).line
    ))
    .at(source.place(first))
    .with_help(help);
    let rows = layout.rows(source).take(NEAR_ROWS);
    let below = header_line::naming(source, layout, rows, kind).next();
    let (line, label) = match (header_line::comment_header(source, layout), below) {
        (_, Some((line, _))) => (line, "these are names, but the lines above are no comments"),
        (Some(line), _) => (
            line,
            "this comment does not have one known name for each column",
        ),
        _ => return problem,
    };
    problem.with_related(source.place(line), label)
}

/// Rows in which names are looked for where there are none before the numbers.
const NEAR_ROWS: usize = 100;

/// What the cells of a column hold.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Content {
    /// A number; a blank cell is `NaN`.
    Number,
    /// A whole number.
    Integer,
    /// A whole number, or a direction: +1 for up, -1 for down.
    Spin,
}

/// The values of the wanted fields, row by row.
pub(super) fn values(
    source: &Source,
    layout: &Layout,
    names: &[Name],
    wanted: &[(usize, Content)],
    problems: &mut Problems,
) -> Vec<Vec<f64>> {
    let mut columns: Vec<Vec<f64>> = wanted
        .iter()
        .map(|_| Vec::with_capacity(layout.rows))
        .collect();
    let mut splitter = Splitter::new(source, layout.delimiter);
    for row in layout.rows(source) {
        let cells = match splitter.cells(&row) {
            Ok(cells) if cells.len() == layout.fields => cells,
            Ok(cells) => {
                problems.push_with(|| ragged(source, layout, &row, cells.len()));
                continue;
            }
            Err((span, what)) => {
                problems.push_with(|| Problem::new(what).at(source.place(span)));
                continue;
            }
        };
        for (&(field, content), column) in wanted.iter().zip(&mut columns) {
            let text = cells.get(field).unwrap_or_default().trim();
            match read(text, content) {
                Some(value) => column.push(value),
                None => problems.push_with(|| {
                    let span = layout.spans(source, &row).into_iter().nth(field);
                    unreadable(text, content, &names[field])
                        .at(source.place(span.unwrap_or(row.clone())))
                }),
            }
        }
    }
    columns
}

/// The values of one wanted column as whole numbers.
// `values` lets only whole numbers below 2^53 through for such a column.
#[allow(clippy::cast_possible_truncation)]
pub(super) fn whole(values: Vec<f64>) -> Vec<i64> {
    values.into_iter().map(|value| value as i64).collect()
}

fn read(text: &str, content: Content) -> Option<f64> {
    const LARGEST: f64 = 9_007_199_254_740_992.0;
    let is_whole = |value: &f64| value.fract() == 0.0 && value.abs() < LARGEST;
    match content {
        Content::Number if text.is_empty() => Some(f64::NAN),
        Content::Number => number(text),
        Content::Integer => number(text).filter(is_whole),
        Content::Spin => match text.to_ascii_lowercase().as_str() {
            "up" | "+" => Some(1.0),
            "down" | "dn" | "-" => Some(-1.0),
            _ => number(text).filter(is_whole),
        },
    }
}

fn ragged(source: &Source, layout: &Layout, row: &Range<usize>, found: usize) -> Problem {
    let surplus = layout.spans(source, row).into_iter().nth(layout.fields);
    let span = surplus.unwrap_or(row.end..row.end);
    let help = match layout.delimiter {
        Delimiter::Comma if found > layout.fields => {
            "if commas are decimal marks here, write points"
        }
        Delimiter::Blanks if found > 1 => "a blank cell needs another delimiter, such as a comma",
        _ => "give every row the same number of fields; a remark begins with #",
    };
    Problem::new(format!(
        "expected {} fields {}, as in most rows, and found {}",
        layout.fields,
        layout.delimiter.in_words(),
        found
    ))
    .at(source.place(span))
    .with_help(help)
}

fn unreadable(text: &str, content: Content, name: &Name) -> Problem {
    let expected = match content {
        Content::Number => "a number",
        Content::Integer => "a whole number",
        Content::Spin => "a whole number, `up` or `down`",
    };
    let column = match name.text.as_str() {
        "" => String::new(),
        header => format!(" in column `{header}`"),
    };
    let found = if text.is_empty() {
        "a blank cell".to_owned()
    } else {
        format!("`{}`", visible(text))
    };
    let problem = Problem::new(format!("expected {expected}{column} and found {found}"));
    problem.with_help(advice(text))
}

/// What to do about a text that is no number, by its form.
fn advice(text: &str) -> &'static str {
    let digit = |c: char| c.is_ascii_digit();
    if has_decimal_comma(text) {
        "decimal commas and separators of thousands are not read: write a point where the fraction \
         begins and nothing elsewhere, in the whole file"
    } else if !text.is_empty() && text.bytes().all(|byte| byte == b'*') {
        "the program that wrote the file had no room for this number"
    } else if !text.is_empty() && text.bytes().all(|byte| byte == b'-') {
        "where a value is missing, write `nan`"
    } else if text.contains(['−', '–']) && text.contains(digit) {
        "this minus is a typographic sign: write the plain `-`"
    } else if text.contains(digit) && text.parse().is_ok_and(f64::is_infinite) {
        "it is beyond the largest number, about 1.8e308"
    } else {
        "write the number there; a row that has none may be removed on purpose, and `#` before a \
         line makes it a comment"
    }
}
