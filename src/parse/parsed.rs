//! A document with the text it was read from: where each value stood.

use std::collections::BTreeMap;
use std::ops::Range;

use super::condition::ConditionKey;
use super::evidence::Evidence;
use super::layout::Layout;
use super::metadata::Statement;
use super::role::{Hints, Role};
use super::table::Table;
use super::{Place, Source};
use crate::schema::{Locate, Provenance};

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
    layout: Layout,
    headers: Vec<Option<Range<usize>>>,
    known: Vec<(ConditionKey, usize)>,
}

impl<T> Parsed<T> {
    pub(super) fn new(document: T, source: Source, columns: Vec<Column>, table: Table) -> Self {
        let known = table.metadata.known.iter();
        Self {
            document,
            source,
            columns,
            known: known.map(|(key, _, index)| (*key, *index)).collect(),
            statements: table.metadata.statements,
            layout: table.layout,
            headers: table.names.into_iter().map(|name| name.span).collect(),
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

    /// The place of a value: the row is 0-based, in file order.
    #[must_use]
    pub fn place_of(&self, row: usize, role: Role) -> Option<Place> {
        let span = self.locate(row, self.field_of(role)?)?;
        Some(self.source.place(span))
    }

    /// The place of the header cell of a role's column.
    #[must_use]
    pub fn header_place(&self, role: Role) -> Option<Place> {
        let span = self.locate_header(self.field_of(role)?)?;
        Some(self.source.place(span))
    }

    /// The comment line that a condition was read from.
    #[must_use]
    pub fn statement(&self, key: ConditionKey) -> Option<&Statement> {
        let (_, index) = self.known.iter().find(|(known, _)| *known == key)?;
        self.statements.get(*index)
    }
}

impl<T> Locate for Parsed<T> {
    fn locate(&self, row: usize, field: usize) -> Option<Range<usize>> {
        self.layout.cell(&self.source, row, field)
    }

    fn locate_header(&self, field: usize) -> Option<Range<usize>> {
        self.headers.get(field)?.clone()
    }
}

/// A unit in the file's spelling and who gives it, by role.
pub(super) type UnitNotes = BTreeMap<Role, (String, String)>;

/// A unit as a note.
pub(super) fn unit_note<U: std::fmt::Display>(unit: &Evidence<U>) -> (String, String) {
    (unit.value.to_string(), unit.says.clone())
}

/// Every column with its role, unit and evidence.
pub(super) fn columns(table: &Table, hints: &Hints, units: &UnitNotes) -> Vec<Column> {
    table
        .names
        .iter()
        .enumerate()
        .map(|(index, name)| {
            let chosen = table.fields.iter().find(|&(_, &field)| field == index);
            let role = chosen.map(|(&role, _)| role);
            let unit = role.and_then(|role| units.get(&role));
            Column {
                header: name.text.clone(),
                index,
                role,
                unit: unit.map(|(unit, _)| unit.clone()),
                evidence: evidence(table, hints, index, role, unit),
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
pub(super) fn provenance(source: &Source, table: &Table, columns: &[Column]) -> Provenance {
    let mut provenance = Provenance::default();
    provenance.sources.push(source.record().clone());
    let header = match table.line {
        Some(line) => format!("names on line {line}"),
        None => "no names".to_owned(),
    };
    provenance.step(
        "read",
        format!(
            "{} rows of {} fields {}; {header}",
            table.layout.rows,
            table.layout.fields,
            table.layout.delimiter.in_words()
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
            (Some(role), Some(unit)) if is_energy(role) && unit != "eV" => provenance.step(
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

fn is_energy(role: Role) -> bool {
    matches!(
        role,
        Role::Energy | Role::EnergyMeanField | Role::EnergyQuasiparticle
    )
}
