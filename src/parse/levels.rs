//! Tables of computed levels.

use super::condition::set_computation;
use super::evidence::Evidence;
use super::parsed::{Parsed, columns, provenance, unit_note};
use super::problem::Problems;
use super::reference::reference;
use super::role::{Hints, Kind, Role};
use super::table::{Content, Table, values, whole};
use super::unit_of_column::Units;
use super::{Problem, Source};
use crate::quantity::{Energy, EnergyUnit, Reference};
use crate::schema::{Computation, Document, Levels};

const ENERGIES: [Role; 2] = [Role::EnergyMeanField, Role::EnergyQuasiparticle];

/// Reads a table of computed levels.
///
/// # Errors
/// Everything that keeps the table from being read, up to a number worth reading.
pub fn read_levels(source: Source, hints: &Hints) -> Result<Parsed<Levels>, Vec<Problem>> {
    let mut problems = Problems::default();
    let read = read(&source, hints, &mut problems);
    match (read, problems.is_empty()) {
        (Some((mut document, table, meaning)), true) => {
            let notes = meaning
                .units
                .iter()
                .map(|(role, unit)| (*role, unit_note(unit)));
            let columns = columns(&table, hints, &notes.collect());
            document.provenance = provenance(&source, &table, &columns);
            if let Some(zero) = meaning.reference {
                document.reference = zero.value;
                let detail = format!("{} by {}", zero.value, zero.says);
                document.provenance.step("reference", detail);
            }
            Ok(Parsed::new(document, source, columns, table))
        }
        _ => Err(problems.into_list()),
    }
}

/// What the energies of a table mean, and who says so.
struct Meaning {
    reference: Option<Evidence<Reference>>,
    units: Vec<(Role, Evidence<EnergyUnit>)>,
}

fn read(
    source: &Source,
    hints: &Hints,
    problems: &mut Problems,
) -> Option<(Levels, Table, Meaning)> {
    let mut table = Table::open(source, Kind::Levels, hints, problems)?;
    let bare = table.fields.remove(&Role::Energy);
    let energies: Vec<(Role, usize)> = ENERGIES
        .into_iter()
        .filter_map(|role| Some((role, *table.fields.get(&role)?)))
        .collect();
    if energies.is_empty() {
        problems.push(no_energy(source, &table, bare, hints));
        return None;
    }
    let fields: Vec<usize> = energies.iter().map(|&(_, field)| field).collect();
    let reference = problems.keep(reference(source, &table, &fields, hints));
    let units = Units {
        source,
        table: &table,
        hints,
    };
    let mut found = Vec::new();
    for (role, field) in energies {
        let unit = problems.keep(units.energy(role, field, None));
        found.extend(unit.map(|unit| (role, unit)));
    }
    let document = document(source, &table, &found, problems);
    let meaning = Meaning {
        reference: reference?,
        units: found,
    };
    Some((document, table, meaning))
}

fn no_energy(source: &Source, table: &Table, bare: Option<usize>, hints: &Hints) -> Problem {
    let which = |column: usize| {
        hints.setting(&format!(
            "column.energy-mean-field = {column}` or `column.energy-quasiparticle = {column}"
        ))
    };
    match bare {
        Some(field) => Problem::new(format!(
            "column {} `{}` is an energy, but nothing says whether mean-field or quasiparticle",
            field + 1,
            table.names[field].text
        ))
        .at(table.place_of(source, field))
        .with_help(format!(
            "name it, as in `E_KS (eV)` or `E_QP (eV)`, or write {}",
            which(field + 1)
        )),
        None => table
            .with_columns(source, Problem::new("no column is known to hold energies"))
            .with_help(format!("say which one does, as in {}", which(1))),
    }
}

fn document(
    source: &Source,
    table: &Table,
    units: &[(Role, Evidence<EnergyUnit>)],
    problems: &mut Problems,
) -> Levels {
    let wanted: Vec<(Role, usize)> = table.fields.iter().map(|(&r, &f)| (r, f)).collect();
    let fields: Vec<(usize, Content)> = wanted
        .iter()
        .map(|&(role, field)| (field, content(role)))
        .collect();
    let read = values(source, &table.layout, &table.names, &fields, problems);
    let mut document = empty(table);
    for ((role, _), numbers) in wanted.into_iter().zip(read) {
        let unit = units.iter().find(|(other, _)| *other == role);
        let unit = unit.map_or(EnergyUnit::Electronvolt, |(_, unit)| unit.value);
        place_column(&mut document, role, numbers, unit);
    }
    for (key, value, _) in &table.metadata.known {
        set_computation(&mut document.computation, *key, value);
    }
    document
}

fn content(role: Role) -> Content {
    match role {
        Role::KIndex | Role::Band => Content::Integer,
        Role::Spin => Content::Spin,
        _ => Content::Number,
    }
}

fn empty(table: &Table) -> Levels {
    Levels {
        schema: Levels::identifier(),
        provenance: crate::schema::Provenance::default(),
        reference: Reference::Unknown,
        computation: Computation::default(),
        rows: table.layout.rows,
        k_index: None,
        k_x: None,
        k_y: None,
        k_z: None,
        weight: None,
        band: None,
        spin: None,
        energy_mean_field_ev: None,
        energy_quasiparticle_ev: None,
        occupation: None,
    }
}

fn place_column(document: &mut Levels, role: Role, numbers: Vec<f64>, unit: EnergyUnit) {
    let energies = |numbers: Vec<f64>| {
        let ev = |value| Energy::new(value, unit).electronvolts();
        Some(numbers.into_iter().map(ev).collect())
    };
    match role {
        Role::KIndex => document.k_index = Some(whole(numbers)),
        Role::KX => document.k_x = Some(numbers),
        Role::KY => document.k_y = Some(numbers),
        Role::KZ => document.k_z = Some(numbers),
        Role::Weight => document.weight = Some(numbers),
        Role::Band => document.band = Some(whole(numbers)),
        Role::Spin => document.spin = Some(whole(numbers)),
        Role::Occupation => document.occupation = Some(numbers),
        Role::EnergyMeanField => document.energy_mean_field_ev = energies(numbers),
        Role::EnergyQuasiparticle => document.energy_quasiparticle_ev = energies(numbers),
        // Roles of a measured curve, which `Kind::Levels` gives to no column.
        Role::Energy | Role::Intensity | Role::StandardUncertainty => {}
    }
}
