//! A table whose columns have roles, and the values in them.

use std::collections::{BTreeMap, BTreeSet};
use std::ops::Range;

use super::header_line::{self, Name};
use super::layout::Layout;
use super::metadata::{self, Metadata};
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
    /// The line of their units.
    pub units_line: Option<usize>,
    pub metadata: Metadata,
    /// The field of each role.
    pub fields: BTreeMap<Role, usize>,
    /// The fields of roles that several columns may have.
    pub many: BTreeMap<Role, Vec<usize>>,
    /// Which energy the columns of bands hold, where the user says it.
    pub bands: Option<Role>,
}

impl Table {
    /// Reads everything but the values. `None` where a problem leaves no table.
    pub fn open(
        source: &Source,
        layout: Layout,
        kind: Kind,
        hints: &Hints,
        problems: &mut Problems,
    ) -> Option<Self> {
        let names = problems.keep(names(source, &layout, kind, hints))?;
        let header = names.iter().find_map(|name| name.span.clone());
        let units = names.iter().find_map(|name| Some(name.unit.clone()?.1));
        let comments = layout.comments.iter().map(|aside| &aside.span);
        let mut comments: Vec<Range<usize>> = comments
            .chain(&layout.bare)
            .filter(|line| !is_in(header.as_ref(), line) && !is_in(units.as_ref(), line))
            .cloned()
            .collect();
        comments.sort_by_key(|line| line.start);
        let decimal = layout.dialect.decimal;
        let metadata = metadata::read(source, comments.into_iter(), kind, decimal, problems);
        if let Some(problem) = second_header(source, &layout, &names, kind) {
            problems.push(problem);
        }
        let line = header.map(|span| source.place(span).line);
        let units_line = units.map(|span| source.place(span).line);
        let mut table = Self {
            layout,
            names,
            line,
            units_line,
            metadata,
            fields: BTreeMap::new(),
            many: BTreeMap::new(),
            bands: None,
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
            let says = hints.says(&format!("column.{role}"));
            if !kind.roles().contains(&role) {
                let what = kind.in_words();
                problems.push(Problem::new(format!("{says}: {what} has no such column")));
                continue;
            }
            let chosen = match choice {
                ColumnChoice::Range(first, last) => {
                    self.chosen_many(source, role, *first..=*last, &says)
                }
                _ => self.chosen(source, role, choice, hints).map(|field| {
                    match is_many(role, kind) {
                        true => self.many.entry(role).or_default().push(field),
                        false => _ = self.fields.insert(role, field),
                    }
                }),
            };
            problems.keep(chosen);
        }
    }

    /// Gives neighbouring columns a role that several may have; the two energies of levels are then
    /// those of one band each.
    fn chosen_many(
        &mut self,
        source: &Source,
        role: Role,
        columns: std::ops::RangeInclusive<usize>,
        says: &str,
    ) -> Result<(), Problem> {
        let fields = self.layout.fields();
        if !(1..=fields).contains(columns.start()) || !(1..=fields).contains(columns.end()) {
            return Err(self.no_such_column(source, says, *columns.end()));
        }
        let of_bands = matches!(role, Role::EnergyMeanField | Role::EnergyQuasiparticle);
        if !of_bands && !role.is_many() {
            return Err(Problem::new(format!(
                "{says} names several columns, but only one can be the {role}"
            )));
        }
        let role = if of_bands {
            self.bands = Some(role);
            Role::BandEnergy
        } else {
            role
        };
        self.many
            .insert(role, columns.map(|column| column - 1).collect());
        Ok(())
    }

    fn no_such_column(&self, source: &Source, says: &str, column: usize) -> Problem {
        Problem::new(format!(
            "{says} is {column}, but `{}` has {} columns, counted from 1",
            source.name(),
            self.layout.fields()
        ))
    }

    fn chosen(
        &self,
        source: &Source,
        role: Role,
        choice: &ColumnChoice,
        hints: &Hints,
    ) -> Result<usize, Problem> {
        let says = hints.says(&format!("column.{role}"));
        let text = match choice {
            ColumnChoice::Header(text) => text,
            ColumnChoice::Number(column) | ColumnChoice::Range(column, _) => {
                return (1..=self.layout.fields())
                    .contains(column)
                    .then(|| column - 1)
                    .ok_or_else(|| self.no_such_column(source, &says, *column));
            }
        };
        let named = |&field: &usize| self.names[field].text == *text;
        let matching: Vec<usize> = (0..self.layout.fields()).filter(named).collect();
        match matching.as_slice() {
            &[field] => Ok(field),
            [] => Err(self.with_columns(
                source,
                Problem::new(format!("{says}: no column has the header `{text}`")),
            )),
            _ => Err(self
                .with_columns(
                    source,
                    Problem::new(format!(
                        "{says}: more than one column has the header `{text}`"
                    )),
                )
                .with_help("name the column by its number")),
        }
    }

    /// The role that a field has.
    pub fn role_of(&self, field: usize) -> Option<Role> {
        let single = self.fields.iter().find(|&(_, &other)| other == field);
        let many = || self.many.iter().find(|(_, fields)| fields.contains(&field));
        single
            .map(|(&role, _)| role)
            .or_else(|| many().map(|(&role, _)| role))
    }

    /// The fields that have a role.
    pub fn fields_of(&self, role: Role) -> Vec<usize> {
        let many = self.many.get(&role).cloned();
        many.unwrap_or_else(|| self.fields.get(&role).copied().into_iter().collect())
    }

    /// Gives the columns whose header says what they are their roles, where nobody else has them.
    fn claim(&mut self, source: &Source, kind: Kind, hints: &Hints, problems: &mut Problems) {
        self.one_role_each(hints, problems);
        let taken: BTreeSet<usize> = self
            .fields
            .values()
            .copied()
            .chain(self.many.values().flatten().copied())
            .collect();
        let mut claims = BTreeMap::<Role, Vec<usize>>::new();
        for (field, name) in self.names.iter().enumerate() {
            if let (Some(role), false) = (name.reading.role, taken.contains(&field)) {
                claims.entry(role).or_default().push(field);
            }
        }
        for (role, claimants) in claims {
            if self.fields.contains_key(&role) || self.many.contains_key(&role) {
                continue;
            }
            if is_many(role, kind) {
                self.many.insert(role, claimants);
                continue;
            }
            // An energy of unsaid kind is no role of levels: what it means is the reader's question.
            let is_role = kind.roles().contains(&role);
            if let ([first, second, ..], true) = (&claimants[..], is_role) {
                problems.push(self.rivals(source, role, [*first, *second], hints));
            }
            self.fields.insert(role, claimants[0]);
        }
        let energies = [Role::EnergyMeanField, Role::EnergyQuasiparticle];
        if energies.iter().any(|role| self.fields.contains_key(role)) {
            // Beside an energy of every level, `E1` is something else.
            self.many.remove(&Role::BandEnergy);
        }
    }

    /// A column that the user gives two roles.
    fn one_role_each(&self, hints: &Hints, problems: &mut Problems) {
        let mut roles = BTreeMap::<usize, Role>::new();
        let many = self
            .many
            .iter()
            .flat_map(|(&role, fields)| fields.iter().map(move |&f| (f, role)));
        let chosen = self
            .fields
            .iter()
            .map(|(&role, &field)| (field, role))
            .chain(many);
        for (field, role) in chosen {
            if let Some(other) = roles.insert(field, role) {
                let says = hints.says(&format!("column.{other}"));
                problems.push(Problem::new(format!(
                    "{says} and column.{role} name the same column"
                )));
            }
        }
    }

    fn rivals(
        &self,
        source: &Source,
        role: Role,
        [one, other]: [usize; 2],
        hints: &Hints,
    ) -> Problem {
        let [first, second] = [one, other].map(|field| visible(&self.names[field].text));
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
                visible(&self.names[field].text)
            ),
            None => format!("column {}", field + 1),
        }
    }
}

/// Whether several columns of such a table may have a role.
fn is_many(role: Role, kind: Kind) -> bool {
    role.is_many() && (role, kind) != (Role::Value, Kind::Series)
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
    let by_number = |role: &Role| {
        let choice = hints.columns.get(role);
        matches!(
            choice,
            Some(ColumnChoice::Number(_) | ColumnChoice::Range(..))
        )
    };
    kind.needs().iter().any(|roles| roles.iter().all(by_number))
}

/// A comment among the rows that gives the columns other names: another table begins there.
fn second_header(source: &Source, layout: &Layout, names: &[Name], kind: Kind) -> Option<Problem> {
    let comments = layout.comments.iter().filter(|aside| aside.row > 0);
    let comments = comments.map(|aside| aside.span.clone());
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

/// A header of such a table, and settings that do without one.
fn example(kind: Kind) -> (&'static str, &'static str) {
    match kind {
        Kind::Levels => (
            "k,band,E_KS (eV),E_QP (eV)",
            "column.energy-quasiparticle = 4",
        ),
        Kind::Spectrum => (
            "Kinetic energy (eV),Counts",
            "column.energy = 1` and `column.intensity = 2",
        ),
        Kind::Density => (
            "Energy (eV),DOS (states/eV)",
            "column.energy = 1` and `column.density = 2",
        ),
        Kind::Dispersion => (
            "k (1/Å),Binding energy (eV)",
            "column.momentum = 1` and `column.energy = 2",
        ),
        Kind::Gaps => (
            "material,method,gap (eV)",
            "column.material = 1` and `column.value = 3",
        ),
        Kind::Series => (
            "bands,gap (eV)",
            "column.parameter = 1` and `column.value = 2",
        ),
        Kind::Any => ("energy_ev,intensity", ""),
    }
}

fn no_header(source: &Source, layout: &Layout, kind: Kind, hints: &Hints) -> Problem {
    let first = layout.row(source, 0).unwrap_or(0..0);
    let (example, settings) = example(kind);
    let mut help = format!("write a line of names above the numbers, as in `{example}`");
    if !settings.is_empty() {
        help.push_str(", or name the columns by number: ");
        help.push_str(&hints.setting(settings));
    }
    let problem = Problem::new(format!(
        "no header says what the {} columns from line {} on are",
        layout.fields(),
        source.place(first.clone()).line
    ))
    .at(source.place(first))
    .with_help(help);
    let rows = layout.rows(source).take(NEAR_ROWS);
    let below = header_line::naming(source, layout, rows, kind).next();
    let (line, label) = match (header_line::comment_header(source, layout, None), below) {
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
