//! A document with the text it was read from: where each value stood.

use std::collections::BTreeMap;
use std::ops::Range;

use super::condition::ConditionKey;
use super::decode::Encoding;
use super::dialect::Delimiter;
use super::layout::Layout;
use super::metadata::Statement;
use super::number::Decimal;
use super::role::{Hints, Kind, Role};
use super::skipped::{self, Skipped};
use super::summary::Summary;
use super::table::Table;
use super::{Place, Source};
use crate::quantity::IntensityUnit;
use crate::schema::{IntensityKind, Locate, Provenance};

/// What was understood of one column.
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    /// The text of its header cell; empty where there is none.
    pub header: String,
    /// Its 0-based field.
    pub index: usize,
    /// What it is; `None` where it is not used.
    pub role: Option<Role>,
    /// The unit of its numbers in the file.
    pub unit: Option<String>,
    /// Who says so.
    pub evidence: String,
    /// What its numbers are like, where that was asked for.
    pub summary: Option<Summary>,
}

/// How a text was read.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Manner {
    /// The dialect in words.
    pub dialect: String,
    /// The signs of the dialect, where the text is a table.
    pub signs: Option<(Delimiter, Decimal)>,
    /// Which curve of the file it is, from 1, where the file may hold several.
    pub curve: Option<usize>,
    /// The 1-based line of the names.
    pub names_line: Option<usize>,
    /// The number of rows of the file.
    pub rows: usize,
    /// How many blocks of rows blank lines make.
    pub blocks: usize,
    /// The first lines that were skipped.
    pub skipped: Vec<Skipped>,
    /// How many there are.
    pub skipped_lines: usize,
}

/// Neighbouring columns of the file that became one of the document: its row `r` stands in row
/// `r / fields.len()` of the file.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Melt {
    /// The roles whose values stand in these fields.
    pub role: Role,
    /// The fields, in the order of the document's rows.
    pub fields: Vec<usize>,
}

/// Where the values of a document stand. There is one a file.
#[allow(clippy::large_enum_variant)]
#[derive(Debug, Clone, PartialEq)]
enum Positions {
    Table {
        layout: Layout,
        headers: Vec<Option<Range<usize>>>,
        melt: Option<Melt>,
    },
    Curve(super::standards::Curve),
    /// No place is known, as in a document that was read as such.
    Nowhere,
}

/// A document, the text it was read from, and the way from the one back to the other.
#[derive(Debug, Clone, PartialEq)]
pub struct Parsed<T> {
    /// The document.
    pub document: T,
    /// The text.
    pub source: Source,
    /// Its columns, in order.
    pub columns: Vec<Column>,
    /// What its comment lines state, in order.
    pub statements: Vec<Statement>,
    /// How it was read.
    pub manner: Manner,
    positions: Positions,
    known: Vec<(ConditionKey, usize)>,
}

impl<T> Parsed<T> {
    /// A document from a table.
    pub(super) fn of_table(
        document: T,
        source: Source,
        columns: Vec<Column>,
        table: Table,
        melt: Option<Melt>,
    ) -> Self {
        let manner = manner(&source, &table);
        let known = table.metadata.known.iter();
        Self {
            document,
            columns,
            known: known.map(|(key, _, index)| (*key, *index)).collect(),
            statements: table.metadata.statements,
            manner,
            positions: Positions::Table {
                layout: table.layout,
                headers: table.names.into_iter().map(|name| name.span).collect(),
                melt,
            },
            source,
        }
    }

    /// A document that was read as such.
    pub(super) fn of_document(document: T, source: Source, manner: Manner) -> Self {
        Self {
            document,
            source,
            columns: Vec::new(),
            statements: Vec::new(),
            manner,
            positions: Positions::Nowhere,
            known: Vec::new(),
        }
    }

    /// A document from a curve of an open standard.
    pub(super) fn of_curve(
        document: T,
        source: Source,
        columns: Vec<Column>,
        manner: Manner,
        curve: super::standards::Curve,
    ) -> Self {
        Self {
            columns,
            positions: Positions::Curve(curve),
            ..Self::of_document(document, source, manner)
        }
    }

    /// The 0-based field that has a role.
    #[must_use]
    pub fn field_of(&self, role: Role) -> Option<usize> {
        self.columns
            .iter()
            .find(|column| column.role == Some(role))
            .map(|column| column.index)
    }

    /// The row of the file and the field of a value of the document.
    fn position(&self, row: usize, role: Role) -> Option<(usize, usize)> {
        let Positions::Table {
            melt: Some(melt), ..
        } = &self.positions
        else {
            return Some((row, self.field_of(role)?));
        };
        let columns = melt.fields.len();
        let field = match role == melt.role {
            true => melt.fields[row % columns],
            false => self.field_of(role)?,
        };
        Some((row / columns, field))
    }

    /// The place of a value: the row is 0-based, in the order of the document.
    #[must_use]
    pub fn place_of(&self, row: usize, role: Role) -> Option<Place> {
        let (row, field) = self.position(row, role)?;
        Some(self.source.place(self.locate(row, field)?))
    }

    /// The place of the header cell of a role's column.
    #[must_use]
    pub fn header_place(&self, role: Role) -> Option<Place> {
        let span = self.locate_header(self.field_of(role)?)?;
        Some(self.source.place(span))
    }

    /// The comment lines that conditions were read from, in order.
    pub fn conditions(&self) -> impl Iterator<Item = &Statement> {
        self.known
            .iter()
            .filter_map(|(_, index)| self.statements.get(*index))
    }

    /// The comment line that a condition was read from.
    #[must_use]
    pub fn statement(&self, key: ConditionKey) -> Option<&Statement> {
        let (_, index) = self.known.iter().find(|(known, _)| *known == key)?;
        self.statements.get(*index)
    }
}

fn manner(source: &Source, table: &Table) -> Manner {
    let dialect = &table.layout.dialect;
    let (skipped, skipped_lines) = skipped::skipped(source, table);
    Manner {
        dialect: format!(
            "{} fields {}, decimal {}",
            dialect.fields,
            dialect.delimiter.in_words(),
            dialect.decimal.name()
        ),
        signs: Some((dialect.delimiter, dialect.decimal)),
        curve: None,
        names_line: table.line,
        rows: table.layout.rows,
        blocks: table.layout.breaks.len() + 1,
        skipped,
        skipped_lines,
    }
}

impl<T> Locate for Parsed<T> {
    fn locate(&self, row: usize, field: usize) -> Option<Range<usize>> {
        match &self.positions {
            Positions::Table { layout, .. } => layout.cell(&self.source, row, field),
            Positions::Curve(curve) => curve.value_span(&self.source, row, field),
            Positions::Nowhere => None,
        }
    }

    fn locate_header(&self, field: usize) -> Option<Range<usize>> {
        match &self.positions {
            Positions::Table { headers, .. } => headers.get(field)?.clone(),
            _ => None,
        }
    }
}

/// Every column with its role, unit and evidence.
pub(super) fn columns(
    table: &Table,
    hints: &Hints,
    units: &BTreeMap<usize, (String, String)>,
) -> Vec<Column> {
    table
        .names
        .iter()
        .enumerate()
        .map(|(index, name)| {
            let role = table.role_of(index);
            let unit = units.get(&index);
            Column {
                header: name.text.clone(),
                index,
                role,
                unit: unit.map(|(unit, _)| unit.clone()),
                evidence: evidence(table, hints, index, role, unit),
                summary: None,
            }
        })
        .collect()
}

fn evidence(
    table: &Table,
    hints: &Hints,
    index: usize,
    role: Option<Role>,
    unit: Option<&(String, String)>,
) -> String {
    let chosen = role.filter(|role| hints.columns.contains_key(role));
    let says = match chosen {
        Some(role) => hints.says(&format!("column.{role}")),
        None => table.says(index),
    };
    match unit {
        Some((unit, by)) if *by != says => format!("{says}; {unit} by {by}"),
        _ => says,
    }
}

/// The record of how a table was read.
pub(super) fn provenance(
    source: &Source,
    table: &Table,
    kind: Kind,
    columns: &[Column],
) -> Provenance {
    let mut provenance = of_source(source);
    let header = match table.line {
        Some(line) => format!("names on line {line}"),
        None => "no names".to_owned(),
    };
    provenance.step(
        "read",
        format!(
            "{} rows of {} fields {}; {header}",
            table.layout.rows,
            table.layout.fields(),
            table.layout.dialect.delimiter.in_words()
        ),
    );
    for column in columns {
        let number = column.index + 1;
        match (column.role, &column.unit) {
            (None, _) => provenance.step(
                "leave out",
                format!(
                    "column {number} `{}`: not a name that is known here",
                    column.header
                ),
            ),
            (Some(role), Some(unit)) if role.is_energy(kind) && unit != "eV" => provenance.step(
                "convert",
                format!(
                    "column {number} ({role}) from {unit} to eV: {}",
                    column.evidence
                ),
            ),
            _ => {}
        }
    }
    provenance
}

/// The record of a file, and of its encoding where that is not UTF-8.
pub(super) fn of_source(source: &Source) -> Provenance {
    let mut provenance = Provenance::default();
    provenance.sources.push(source.record().clone());
    if source.is_gzip() {
        provenance.step("open", "gzip");
    }
    if !matches!(source.encoding(), Encoding::Utf8 | Encoding::Utf8Marked) {
        provenance.step("decode", source.encoding().name());
    }
    provenance
}

/// The unit of intensities of a kind.
pub(super) fn intensity_symbol(kind: IntensityKind) -> &'static str {
    match kind {
        IntensityKind::Counts => IntensityUnit::Counts,
        IntensityKind::CountsPerSecond => IntensityUnit::CountsPerSecond,
        IntensityKind::Arbitrary => IntensityUnit::Arbitrary,
    }
    .symbol()
}
