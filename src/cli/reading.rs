//! Options of every command that reads files, and the reading itself.

use std::collections::BTreeMap;
use std::path::Path;

use clap::Args;

use crate::parse::{
    AnyParsed, ColumnChoice, Decimal, Delimiter, Hints, Kind, Problem, Role, Settle, Source,
    read_any, render,
};
use crate::quantity::{AxisKind, Reference};

/// What the user says of the files; each overrules what a file says.
#[derive(Debug, Args)]
#[command(next_help_heading = "What the files hold (overrules what they say)")]
pub(super) struct ReadingOptions {
    /// Kind of table: levels, spectrum, density, dispersion, gaps, series
    #[arg(long = "as", value_name = "KIND", value_parser = kind)]
    kind: Option<Kind>,
    /// Column of a role: its header, its number from 1, or 2-9 for several (may be repeated)
    #[arg(long, value_name = "ROLE=NAME|N", value_parser = column)]
    column: Vec<(Role, ColumnChoice)>,
    /// Unit of a role's column; `energy` speaks for every energy (may be repeated)
    #[arg(long, value_name = "ROLE=UNIT", value_parser = unit)]
    unit: Vec<(Role, String)>,
    /// Zero of the energies: fermi, valence-edge, vacuum, unknown
    #[arg(long, value_name = "ZERO", value_parser = reference)]
    reference: Option<Reference>,
    /// What the energies are counted along: kinetic, binding, final-state, photon
    #[arg(long, value_name = "AXIS", value_parser = axis)]
    axis: Option<AxisKind>,
    /// Decimal mark: point, comma
    #[arg(long, value_name = "MARK", value_parser = decimal)]
    decimal: Option<Decimal>,
    /// What stands between fields: semicolon, tab, comma, pipe, blanks
    #[arg(long, value_name = "SIGN", value_parser = delimiter)]
    delimiter: Option<Delimiter>,
    /// Curve of a file that holds several, from 1
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(1..))]
    block: Option<u32>,
}

impl ReadingOptions {
    /// Reads a file of any kind.
    pub(super) fn read(&self, path: &Path) -> Result<Vec<AnyParsed>, String> {
        let shown = path.display().to_string();
        Source::read(path, &shown)
            .map_err(|problem| vec![problem])
            .and_then(|source| read_any(source, self.kind, &self.hints()))
            .map_err(|problems| rendered(&problems))
    }

    fn hints(&self) -> Hints {
        Hints {
            columns: self.column.iter().cloned().collect::<BTreeMap<_, _>>(),
            units: self.unit.iter().cloned().collect(),
            axis: self.axis,
            reference: self.reference,
            decimal: self.decimal,
            delimiter: self.delimiter,
            block: self.block.map(|block| block as usize),
            settle: Settle::Options,
        }
    }
}

/// Problems as they are printed.
pub(super) fn rendered(problems: &[Problem]) -> String {
    let list: Vec<String> = problems.iter().map(render).collect();
    list.join("\n\n")
}

fn one_of<T>(text: &str, found: Option<T>, names: &[&str]) -> Result<T, String> {
    found.ok_or_else(|| format!("`{text}` is none of {}", names.join(", ")))
}

fn kind(text: &str) -> Result<Kind, String> {
    one_of(text, Kind::from_name(text), &Kind::ALL.map(Kind::name))
}

fn reference(text: &str) -> Result<Reference, String> {
    let names = Reference::ALL.map(Reference::name);
    one_of(text, Reference::from_name(text), &names)
}

fn axis(text: &str) -> Result<AxisKind, String> {
    let names = AxisKind::ALL.map(AxisKind::name);
    one_of(text, AxisKind::from_name(text), &names)
}

fn decimal(text: &str) -> Result<Decimal, String> {
    one_of(text, Decimal::from_name(text), &["point", "comma"])
}

fn delimiter(text: &str) -> Result<Delimiter, String> {
    let names = Delimiter::ALL.map(Delimiter::name);
    one_of(text, Delimiter::from_name(text), &names)
}

fn column(text: &str) -> Result<(Role, ColumnChoice), String> {
    let (role, choice) = by_role(text)?;
    match ColumnChoice::from_text(choice) {
        ColumnChoice::Number(0) | ColumnChoice::Range(0, _) => {
            Err("columns are counted from 1".to_owned())
        }
        choice => Ok((role, choice)),
    }
}

fn unit(text: &str) -> Result<(Role, String), String> {
    by_role(text).map(|(role, unit)| (role, unit.to_owned()))
}

fn by_role(text: &str) -> Result<(Role, &str), String> {
    let (role, value) = text
        .split_once('=')
        .filter(|(_, value)| !value.is_empty())
        .ok_or_else(|| "expected ROLE=VALUE".to_owned())?;
    let names: Vec<&str> = Role::ALL.iter().map(|role| role.name()).collect();
    Ok((one_of(role, Role::from_name(role), &names)?, value))
}
