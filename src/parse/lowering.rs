//! From the values of a table to a document: the steps that every kind takes.

use std::collections::BTreeMap;

use rayon::prelude::*;

use super::cells::is_plain_remark;
use super::evidence::{Evidence, settled};
use super::layout::Layout;
use super::parsed::{Column, Melt, Parsed, columns, provenance};
use super::problem::{Problems, visible};
use super::reference::reference;
use super::role::{Hints, Kind, Role};
use super::summary::Summary;
use super::table::Table;
use super::unit_of_column::Units;
use super::values::{Content, Values, values};
use super::{Problem, Source};
use crate::quantity::{AxisKind, Energy, EnergyUnit, MomentumUnit, Reference};
use crate::schema::{Document, Provenance, Texts};

/// A document that a table can be lowered to.
pub(super) trait Lower: Document {
    /// The kind of the table.
    const TABLE: Kind;

    /// Makes the document; what keeps it from being made goes to the problems.
    fn lower(lowering: &mut Lowering<'_>) -> Option<Self>;

    /// Where the document keeps its origin.
    fn provenance_mut(&mut self) -> &mut Provenance;
}

/// Reads a table as a document. With `every` the columns that are not used are read too, and all are
/// summed up.
pub(super) fn read<T: Lower>(
    source: Source,
    hints: &Hints,
    every: bool,
) -> Result<Parsed<T>, Vec<Problem>> {
    let layout = Layout::of(&source, hints).map_err(|problem| vec![problem])?;
    read_laid_out(source, layout, hints, every)
}

/// Reads a table whose lines are known.
pub(super) fn read_laid_out<T: Lower>(
    source: Source,
    layout: Layout,
    hints: &Hints,
    every: bool,
) -> Result<Parsed<T>, Vec<Problem>> {
    let mut problems = Problems::default();
    let lowered = Table::open(&source, layout, T::TABLE, hints, &mut problems)
        .and_then(|table| lowered::<T>(&source, table, hints, every, &mut problems));
    match lowered {
        Some((document, columns, table, melt)) if problems.is_empty() => {
            Ok(Parsed::of_table(document, source, columns, table, melt))
        }
        _ => Err(problems.into_list()),
    }
}

type Lowered<T> = (T, Vec<Column>, Table, Option<Melt>);

fn lowered<T: Lower>(
    source: &Source,
    table: Table,
    hints: &Hints,
    every: bool,
    problems: &mut Problems,
) -> Option<Lowered<T>> {
    let has = |role: &Role| !table.fields_of(*role).is_empty();
    if !T::TABLE.needs().iter().any(|roles| roles.iter().all(has)) {
        missing(source, &table, T::TABLE, hints, problems);
        return None;
    }
    if let Some(problem) = nameless_text(source, &table) {
        problems.push(problem);
    }
    units_of_numbers(source, &table, T::TABLE, problems);
    let wanted = wanted(&table, every);
    let mut of_values = Problems::default();
    // The hash of the file is made beside the reading.
    let (_, read) = rayon::join(
        || source.record(),
        || values(source, &table.layout, &table.names, &wanted, &mut of_values),
    );
    let summaries: Vec<Option<Summary>> = match every {
        true => read
            .columns
            .par_iter()
            .map(|column| Some(Summary::of(column)))
            .collect(),
        false => vec![None; wanted.len()],
    };
    let fields = wanted.iter().map(|&(field, _)| field);
    let mut lowering = Lowering {
        source,
        table: &table,
        hints,
        kind: T::TABLE,
        problems,
        values: fields.clone().zip(read.columns).collect(),
        units: BTreeMap::new(),
        steps: Vec::new(),
        melt: None,
    };
    let document = T::lower(&mut lowering);
    let Lowering {
        units, steps, melt, ..
    } = lowering;
    problems.append(of_values);
    let mut columns = columns(&table, hints, &units);
    for (field, summary) in fields.zip(summaries) {
        columns[field].summary = summary;
    }
    let mut document = document?;
    let mut record = provenance(source, &table, T::TABLE, &columns);
    if let Some(first) = read.left_out.first() {
        record.step(
            "leave out",
            format!(
                "text after the last field in {} rows, first on line {}: `{}`",
                read.left_out_rows,
                source.place(first.clone()).line,
                source.slice(first.clone())
            ),
        );
    }
    for (action, detail) in steps {
        record.step(action, detail);
    }
    *document.provenance_mut() = record;
    Some((document, columns, table, melt))
}

/// Refuses units of columns that have none, such as an occupation in per cent.
fn units_of_numbers(source: &Source, table: &Table, kind: Kind, problems: &mut Problems) {
    for (field, name) in table.names.iter().enumerate() {
        let Some(role) = table.role_of(field) else {
            continue;
        };
        let below = name.unit.as_ref().map(|(text, _)| text);
        let of_momentum = matches!(role, Role::KX | Role::KY | Role::KZ | Role::KDistance);
        let known = |text: &&String| {
            (of_momentum && MomentumUnit::from_spelling(text).is_some()) || role == Role::Parameter
        };
        let Some(unit) = name
            .reading
            .units
            .iter()
            .chain(below)
            .find(|text| !known(text))
        else {
            continue;
        };
        // Temperatures are looked at where they are read.
        if !kind.has_unit(role) && role != Role::Temperature {
            let problem = Problem::new(format!("a column of {role} has no unit `{unit}`"));
            let place = table.place_of(source, field);
            problems.push(problem.at(place).with_help(
                "give plain numbers, and a remark elsewhere than in the brackets of a unit",
            ));
        }
    }
}

/// A text that may change a number in a column that the names leave out.
fn nameless_text(source: &Source, table: &Table) -> Option<Problem> {
    let numeric = &table.layout.dialect.numeric;
    let nameless = |&field: &usize| {
        let unnamed = table.names[field].text.is_empty() && table.role_of(field).is_none();
        unnamed && table.line.is_some() && numeric.get(field) == Some(&false)
    };
    let fields: Vec<usize> = (0..table.layout.fields()).filter(nameless).collect();
    if fields.is_empty() {
        return None;
    }
    table.layout.rows(source).find_map(|row| {
        let spans = table.layout.cells(source, &row).spans;
        let mut cells = fields.iter().filter_map(|&field| spans.get(field));
        let span = cells.find(|span| {
            let text = source.slice((*span).clone());
            !text.is_empty() && !is_plain_remark(text)
        })?;
        Some(
            Problem::new(format!(
                "`{}` stands in a column without a name and may change a number",
                source.slice(span.clone())
            ))
            .at(source.place(span.clone()))
            .with_help("name the column, as in `unit`, or remove it on purpose"),
        )
    })
}

/// The fields to read and what they hold.
fn wanted(table: &Table, every: bool) -> Vec<(usize, Content)> {
    (0..table.layout.fields())
        .filter_map(|field| {
            let numeric = table.layout.dialect.numeric.get(field) == Some(&true);
            match table.role_of(field) {
                Some(role) => Some((field, content(role))),
                None if !every => None,
                None if numeric => Some((field, Content::Unused)),
                None => Some((field, Content::Text)),
            }
        })
        .collect()
}

fn content(role: Role) -> Content {
    match role {
        Role::KIndex | Role::Band => Content::Integer,
        Role::Spin => Content::Spin,
        Role::Material
        | Role::Polymorph
        | Role::Excitation
        | Role::Transition
        | Role::Method
        | Role::StartingPoint
        | Role::Origin
        | Role::Unit => Content::Text,
        _ => Content::Number,
    }
}

/// Says which needed columns are not known.
fn missing(source: &Source, table: &Table, kind: Kind, hints: &Hints, problems: &mut Problems) {
    if kind == Kind::Levels {
        return problems.push(super::levels::no_energy(source, table, hints));
    }
    let needs = kind.needs().first().copied().unwrap_or_default();
    for &role in needs
        .iter()
        .filter(|role| table.fields_of(**role).is_empty())
    {
        let (what, examples) = example(kind, role);
        let problem = Problem::new(format!("no column is known to hold {what}"));
        problems.push(table.with_columns(source, problem).with_help(format!(
            "name it in the header, as in {examples}, or say which one does, as in {}",
            hints.setting(&format!("column.{role} = 1"))
        )));
    }
}

fn example(kind: Kind, role: Role) -> (&'static str, &'static str) {
    match (kind, role) {
        (Kind::Density, Role::Energy) => ("energies", "`Energy (eV)` or `E - E_F (eV)`"),
        (_, Role::Energy) => (
            "energies",
            "`Kinetic energy (eV)`, `Binding energy (eV)` or `E - E_F (eV)`",
        ),
        (_, Role::Intensity) => (
            "intensities",
            "`counts`, `intensity (counts/s)` or `intensity (arb. u.)`",
        ),
        (_, Role::Density) => ("a density of states", "`DOS (states/eV)`"),
        (_, Role::Momentum) => ("momenta", "`k (1/Å)`"),
        (_, Role::Material) => ("materials", "`material`"),
        (_, Role::Parameter) => ("parameters", "`bands`, `cutoff (Ry)` or `k-points`"),
        _ => ("values", "`gap (eV)`"),
    }
}

/// A table on its way to a document.
pub(super) struct Lowering<'a> {
    pub source: &'a Source,
    pub table: &'a Table,
    pub hints: &'a Hints,
    pub kind: Kind,
    pub problems: &'a mut Problems,
    values: BTreeMap<usize, Values>,
    units: BTreeMap<usize, (String, String)>,
    steps: Vec<(String, String)>,
    /// Where several columns of the file became one of the document.
    pub melt: Option<Melt>,
}

impl Lowering<'_> {
    /// The units of this table's columns.
    pub fn unit_finder(&self) -> Units<'_> {
        Units {
            source: self.source,
            table: self.table,
            kind: self.kind,
            hints: self.hints,
        }
    }

    /// The number of rows of the file.
    pub fn rows(&self) -> usize {
        self.table.layout.rows
    }

    /// The field of a role that one column may have.
    pub fn field(&self, role: Role) -> Option<usize> {
        self.table.fields.get(&role).copied()
    }

    /// Takes the numbers of a field.
    pub fn numbers(&mut self, field: usize) -> Vec<f64> {
        self.values
            .remove(&field)
            .map(Values::numbers)
            .unwrap_or_default()
    }

    /// Takes the numbers of a role, where there is a column of them.
    pub fn numbers_of(&mut self, role: Role) -> Option<Vec<f64>> {
        self.field(role).map(|field| self.numbers(field))
    }

    /// Takes the whole numbers of a role.
    pub fn whole_of(&mut self, role: Role) -> Option<Vec<i64>> {
        let field = self.field(role)?;
        self.values.remove(&field).map(Values::whole)
    }

    /// Takes the texts of a role.
    pub fn texts_of(&mut self, role: Role) -> Option<Texts> {
        let field = self.field(role)?;
        self.values.remove(&field).map(Values::texts)
    }

    /// Notes the unit of a field and who gives it.
    pub fn note<U: std::fmt::Display>(&mut self, field: usize, unit: &Evidence<U>) {
        self.units
            .insert(field, (unit.value.to_string(), unit.says.clone()));
    }

    /// Notes what was done.
    pub fn step(&mut self, action: &str, detail: impl Into<String>) {
        self.steps.push((action.to_owned(), detail.into()));
    }

    /// Takes the energies of a field in eV; its unit is looked for, or given by a column of units.
    pub fn energies(
        &mut self,
        role: Role,
        field: usize,
        axis: Option<AxisKind>,
    ) -> Option<Vec<f64>> {
        if let Some(units) = self.field(Role::Unit) {
            let said = self.unit_finder().energy_if_said(role, field);
            match self.problems.keep(said)? {
                None => return self.energies_by_row(field, units),
                Some(said) => self.rows_agree(units, &said)?,
            }
        }
        let unit = self.unit_finder().energy(role, field, axis);
        let unit = self.problems.keep(unit)?;
        self.note(field, &unit);
        Some(in_ev(self.numbers(field), unit.value))
    }

    /// The energies of every field of a role that several columns may have.
    pub fn all_energies(&mut self, role: Role, axis: Option<AxisKind>) -> Option<Vec<Vec<f64>>> {
        let fields = self.table.fields_of(role);
        let columns: Vec<Option<Vec<f64>>> = fields
            .into_iter()
            .map(|field| self.energies(role, field, axis))
            .collect();
        columns.into_iter().collect()
    }

    /// A column of units must say what the header says.
    fn rows_agree(&mut self, units: usize, said: &Evidence<EnergyUnit>) -> Option<()> {
        let Some(Values::Texts(texts)) = self.values.get(&units) else {
            return Some(());
        };
        let other =
            |text: &str| !text.is_empty() && EnergyUnit::from_spelling(text) != Some(said.value);
        let Some(row) = texts.iter().position(other) else {
            return Some(());
        };
        let text = texts.get(row).unwrap_or_default();
        let problem = Problem::new(format!(
            "the unit of this row is `{text}`, but {} gives {}",
            said.says, said.value
        ));
        let span = self.table.layout.cell(self.source, row, units);
        let place = self.source.place(span.unwrap_or(0..0));
        let help = "remove the unit from the one place or correct the other";
        self.problems.push(problem.at(place).with_help(help));
        None
    }

    fn energies_by_row(&mut self, field: usize, units: usize) -> Option<Vec<f64>> {
        let Some(Values::Texts(texts)) = self.values.get(&units) else {
            return None;
        };
        let texts = texts.clone();
        let mut numbers = self.numbers(field);
        let mut before: Option<(&str, Option<EnergyUnit>)> = None;
        for (row, (number, text)) in numbers.iter_mut().zip(texts.iter()).enumerate() {
            let known = before.filter(|(same, _)| *same == text);
            let unit = known.map_or_else(|| EnergyUnit::from_spelling(text), |(_, unit)| unit);
            before = Some((text, unit));
            match unit.filter(|unit| unit.is_linear()) {
                Some(unit) => *number = Energy::new(*number, unit).electronvolts(),
                // A value that is not there needs no unit.
                None if number.is_nan() => {}
                None => {
                    let (source, layout) = (self.source, &self.table.layout);
                    let Some(span) = layout.cell(source, row, units) else {
                        // The row itself is refused.
                        continue;
                    };
                    self.problems.push_with(|| {
                        Problem::new(format!("`{text}` is not the unit of an energy"))
                            .at(source.place(span))
                            .with_help(
                                "energies are in eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1 or K",
                            )
                    });
                }
            }
        }
        let says = self.table.says(units);
        self.units.insert(field, ("by row".to_owned(), says));
        Some(numbers)
    }

    /// The zero of the energies in some fields.
    pub fn reference(&mut self, fields: &[usize]) -> Option<Reference> {
        let found = reference(self.source, self.table, fields, self.hints);
        let zero = self.problems.keep(found)?;
        let Some(zero) = zero else {
            return Some(Reference::Unknown);
        };
        self.step("reference", format!("{} by {}", zero.value, zero.says));
        Some(zero.value)
    }

    /// Refuses energies that begin anew: another curve stands below the first.
    pub fn one_curve(&mut self, energies: &[f64], field: usize) -> Option<()> {
        let first = *energies.first()?;
        // The same number as written; a channel that is there twice is a rule's matter.
        #[allow(clippy::float_cmp)]
        let again = |pair: &[f64]| pair[0] != first && pair[1] == first;
        let Some(row) = energies.windows(2).position(again).map(|row| row + 1) else {
            return Some(());
        };
        let span = self.table.layout.cell(self.source, row, field);
        let place = self.source.place(span.unwrap_or(0..0));
        self.problems.push(
            Problem::new("the energies begin anew here: the file holds more than one curve")
                .at(place)
                .with_help(
                    "give each curve a file of its own; sweeps of one curve are added where each has a \
                     title such as `# sweep 1`, and blank lines between them",
                ),
        );
        None
    }

    /// What the energies of a field are counted along, where anything says it.
    // Nothing said, or said in two ways, which is a problem: the two are told apart.
    #[allow(clippy::option_option)]
    pub fn axis_if_said(&mut self, field: usize) -> Option<Option<AxisKind>> {
        let (says, place) = (
            self.table.says(field),
            self.table.place_of(self.source, field),
        );
        let mut evidence = Vec::new();
        let header = self.table.names[field].reading.axis;
        evidence.extend(header.map(|axis| Evidence::at(axis, says, place)));
        evidence.extend(self.table.metadata.axes.iter().cloned());
        let says = self.hints.says("axis");
        let hint = self.hints.axis.map(|axis| Evidence::setting(axis, says));
        let axis = settled("the axis", evidence, hint, self.hints);
        let axis = self.problems.keep(axis)?;
        if let Some(axis) = &axis {
            self.step("axis", format!("{} by {}", axis.value, axis.says));
        }
        Some(axis.map(|axis| axis.value))
    }

    /// What the energies of a measurement are counted along.
    pub fn axis(&mut self, field: usize) -> Option<AxisKind> {
        let axis = self.axis_if_said(field)?;
        if axis.is_none() {
            let problem = Problem::new(format!(
                "nothing says what the energies in column {} `{}` are counted along: kinetic, \
                 binding, final-state or photon",
                field + 1,
                visible(&self.table.names[field].text)
            ));
            self.problems.push(
                problem
                    .at(self.table.place_of(self.source, field))
                    .with_help(format!(
                        "name it in the header, as in `Kinetic energy (eV)`, or write {}",
                        self.hints.setting("axis = \"kinetic\"")
                    )),
            );
        }
        axis
    }
}

/// Energies in eV.
pub(super) fn in_ev(mut values: Vec<f64>, unit: EnergyUnit) -> Vec<f64> {
    if unit != EnergyUnit::Electronvolt {
        for value in &mut values {
            *value = Energy::new(*value, unit).electronvolts();
        }
    }
    values
}
