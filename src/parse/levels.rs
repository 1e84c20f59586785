//! Tables of computed levels.

use super::blocks::{self, Numbered};
use super::condition::set_computation;
use super::header_line::Name;
use super::lowering::{self, Lower, Lowering};
use super::parsed::{Melt, Parsed};
use super::role::{Hints, Kind, Role};
use super::table::Table;
use super::title::Counted;
use super::words::Tag;
use super::{Problem, Source};
use crate::quantity::{EnergyUnit, Reference};
use crate::schema::{Computation, Document, Levels, Named, Provenance};

/// Reads a table of computed levels.
///
/// # Errors
/// Everything that keeps the table from being read, up to a number worth reading.
pub fn read_levels(source: Source, hints: &Hints) -> Result<Parsed<Levels>, Vec<Problem>> {
    super::document::read_or(source, |source| lowering::read(source, hints, false))
}

impl Lower for Levels {
    const TABLE: Kind = Kind::Levels;

    fn lower(lowering: &mut Lowering<'_>) -> Option<Self> {
        let zero = reference(lowering);
        let mut document = empty(lowering.rows());
        let bands = lowering.table.many.get(&Role::BandEnergy).cloned();
        let whole = match bands {
            Some(fields) => path(lowering, &fields, &mut document),
            None => energies(lowering, &mut document),
        };
        indices(lowering, &mut document);
        blocks(lowering, &mut document);
        parts(lowering, &mut document)?;
        derive_quasiparticle(lowering, &mut document);
        for (key, value, _) in &lowering.table.metadata.known {
            set_computation(&mut document.computation, *key, value);
        }
        document.reference = zero?;
        whole.map(|()| document)
    }

    fn provenance_mut(&mut self) -> &mut Provenance {
        &mut self.provenance
    }
}

fn reference(lowering: &mut Lowering<'_>) -> Option<Reference> {
    let roles = [
        Role::EnergyMeanField,
        Role::EnergyQuasiparticle,
        Role::BandEnergy,
    ];
    let fields: Vec<usize> = roles
        .into_iter()
        .flat_map(|role| lowering.table.fields_of(role))
        .collect();
    lowering.reference(&fields)
}

fn energies(lowering: &mut Lowering<'_>, document: &mut Levels) -> Option<()> {
    let mut whole = Some(());
    for (role, column) in [
        (Role::EnergyMeanField, &mut document.energy_mean_field_ev),
        (
            Role::EnergyQuasiparticle,
            &mut document.energy_quasiparticle_ev,
        ),
    ] {
        if let Some(field) = lowering.field(role) {
            *column = lowering.energies(role, field, None);
            whole = whole.filter(|()| column.is_some());
        }
    }
    whole
}

/// A table with a column for each band: its rows are the k-points, and each gives a level a band.
fn path(lowering: &mut Lowering<'_>, fields: &[usize], document: &mut Levels) -> Option<()> {
    let role = energy_of_bands(lowering, fields)?;
    let columns = lowering.all_energies(Role::BandEnergy, None)?;
    let (rows, bands) = (lowering.rows(), columns.len());
    let mut energies = Vec::with_capacity(rows * bands);
    for row in 0..rows {
        energies.extend(columns.iter().map(|column| column[row]));
    }
    let number = |index: usize| {
        let number = lowering.table.names[fields[index]].reading.number()?;
        i64::try_from(number).ok()
    };
    let numbers: Option<Vec<i64>> = (0..bands).map(number).collect();
    let numbers = numbers.unwrap_or_else(|| (1..=i64::try_from(bands).unwrap_or(0)).collect());
    document.rows = rows * bands;
    document.band = Some((0..rows).flat_map(|_| numbers.iter().copied()).collect());
    let k =
        (0..rows).flat_map(|row| std::iter::repeat_n(i64::try_from(row + 1).unwrap_or(0), bands));
    document.k_index = Some(k.collect());
    match role {
        Role::EnergyMeanField => document.energy_mean_field_ev = Some(energies),
        _ => document.energy_quasiparticle_ev = Some(energies),
    }
    lowering.step(
        "turn",
        format!("{bands} columns of one band each into one level a row, as {role}"),
    );
    lowering.melt = Some(Melt {
        role,
        fields: fields.to_vec(),
    });
    Some(())
}

/// Whether columns of bands hold mean-field or quasiparticle energies.
fn energy_of_bands(lowering: &mut Lowering<'_>, fields: &[usize]) -> Option<Role> {
    let tags = |tag: Tag| {
        let named = |field: &usize| lowering.table.names[*field].reading.tags.contains(&tag);
        fields.iter().all(named)
    };
    let by_names = match (tags(Tag::MeanField), tags(Tag::Quasiparticle)) {
        (true, false) => Some(Role::EnergyMeanField),
        (false, true) => Some(Role::EnergyQuasiparticle),
        _ => None,
    };
    let kinds = &lowering.table.metadata.energy_kinds;
    let first = kinds.first().map(|kind| kind.value);
    let comments = first.filter(|first| kinds.iter().all(|kind| kind.value == *first));
    let role = lowering.table.bands.or(by_names).or(comments);
    if role.is_none() {
        let (first, last) = (fields[0] + 1, fields[fields.len() - 1] + 1);
        let place = lowering.table.place_of(lowering.source, fields[0]);
        lowering.problems.push(
            Problem::new(format!(
                "columns {first} to {last} are the energies of bands, but nothing says whether \
                 mean-field or quasiparticle"
            ))
            .at(place)
            .with_help(format!(
                "say it in a comment, as in `# quasiparticle energies in eV`, or write {}",
                lowering.hints.setting(&format!(
                    "column.energy-mean-field = \"{first}-{last}\"` or \
                     `column.energy-quasiparticle = \"{first}-{last}\""
                ))
            )),
        );
    }
    role
}

/// Columns that say which level a row is. A row of a path stands for every band.
fn indices(lowering: &mut Lowering<'_>, document: &mut Levels) {
    let repeat = document.rows.checked_div(lowering.rows()).unwrap_or(1);
    let mut number = |role: Role| {
        lowering
            .numbers_of(role)
            .map(|column| repeated(column, repeat))
    };
    document.k_x = number(Role::KX);
    document.k_y = number(Role::KY);
    document.k_z = number(Role::KZ);
    document.k_distance = number(Role::KDistance);
    document.weight = number(Role::Weight);
    document.occupation = number(Role::Occupation);
    let mut whole = |role: Role| {
        lowering
            .whole_of(role)
            .map(|column| repeated(column, repeat))
    };
    document.k_index = whole(Role::KIndex).or(document.k_index.take());
    document.band = whole(Role::Band).or(document.band.take());
    document.spin = whole(Role::Spin);
}

fn repeated<T: Copy>(column: Vec<T>, times: usize) -> Vec<T> {
    match times {
        1 => column,
        _ => column
            .into_iter()
            .flat_map(|value| std::iter::repeat_n(value, times))
            .collect(),
    }
}

/// What the blocks of rows count, where no column does.
fn blocks(lowering: &mut Lowering<'_>, document: &mut Levels) {
    if let Some(problem) = blocks::odd_title(lowering.source, &lowering.table.layout) {
        lowering.problems.push(problem);
    }
    if document.rows != lowering.rows() {
        return;
    }
    let (source, layout) = (lowering.source, &lowering.table.layout);
    let titled = |counted| blocks::by_titles(source, layout, counted);
    let mut notes = Vec::new();
    let mut take = |slot: &mut Option<Vec<i64>>, counted, what: &str| {
        let numbered = titled(counted).filter(|_| slot.is_none());
        let Numbered {
            numbers,
            points,
            line,
        } = numbered?;
        notes.push(format!(
            "{what} by the titles of blocks, first on line {line}"
        ));
        *slot = Some(numbers);
        points
    };
    let points = take(&mut document.k_index, Counted::K, "k-index");
    take(&mut document.band, Counted::Band, "band");
    take(&mut document.spin, Counted::Spin, "spin");
    if let (Some([x, y, z]), None) = (points, &document.k_x) {
        (document.k_x, document.k_y, document.k_z) = (Some(x), Some(y), Some(z));
    }
    let has_k =
        document.k_index.is_some() || document.k_x.is_some() || document.k_distance.is_some();
    let numbers = [&document.k_x, &document.k_y, &document.k_z];
    let mut numbers = numbers.into_iter().flatten();
    let constant = numbers.all(|column| blocks::is_constant(layout, column));
    let points = [
        &document.k_x,
        &document.k_y,
        &document.k_z,
        &document.k_distance,
    ];
    let mut points = points.into_iter().flatten();
    let same_points = points.all(|column| blocks::repeats(layout, column))
        && document
            .k_index
            .as_ref()
            .is_none_or(|column| blocks::repeats(layout, column));
    let bands = document.band.as_ref();
    let same_bands = bands.is_some_and(|column| blocks::repeats(layout, column));
    let counted = match (has_k, document.band.is_some()) {
        (true, false) if same_points => Some((&mut document.band, "band")),
        (_, true) if document.k_index.is_none() && constant && same_bands => {
            Some((&mut document.k_index, "k-index"))
        }
        _ => None,
    };
    if let (Some((slot, what)), Some(numbers)) = (counted, blocks::by_blanks(layout)) {
        let blocks = layout.breaks.len() + 1;
        notes.push(format!(
            "{what} by the {blocks} blocks between blank lines, counted from 1"
        ));
        *slot = Some(numbers);
    }
    for note in notes {
        lowering.step("number", note);
    }
}

/// The parts of the self-energy and the shares of orbitals.
fn parts(lowering: &mut Lowering<'_>, document: &mut Levels) -> Option<()> {
    let mut whole = Some(());
    for (role, column) in [
        (Role::Correction, &mut document.correction_ev),
        (Role::Exchange, &mut document.exchange_ev),
        (Role::Correlation, &mut document.correlation_ev),
        (Role::XcPotential, &mut document.xc_potential_ev),
    ] {
        if let Some(field) = lowering.field(role) {
            *column = lowering.energies(role, field, None);
            whole = whole.filter(|()| column.is_some());
        }
    }
    document.renormalization = lowering.numbers_of(Role::Renormalization);
    for field in lowering.table.fields_of(Role::Projection) {
        document.projections.push(Named {
            name: lowering.table.names[field].reading.label.clone(),
            values: lowering.numbers(field),
        });
    }
    whole
}

/// A mean-field energy and a correction make a quasiparticle energy.
fn derive_quasiparticle(lowering: &mut Lowering<'_>, document: &mut Levels) {
    if let (None, Some(start), Some(correction)) = (
        &document.energy_quasiparticle_ev,
        &document.energy_mean_field_ev,
        &document.correction_ev,
    ) {
        let sums = start
            .iter()
            .zip(correction)
            .map(|(start, correction)| start + correction);
        document.energy_quasiparticle_ev = Some(sums.collect());
        lowering.step(
            "add",
            "energy-quasiparticle = energy-mean-field + correction",
        );
    }
}

/// Says that no column holds energies that can be told apart.
pub(super) fn no_energy(source: &Source, table: &Table, hints: &Hints) -> Problem {
    let which = |column: usize| {
        hints.setting(&format!(
            "column.energy-mean-field = {column}` or `column.energy-quasiparticle = {column}"
        ))
    };
    match table.fields.get(&Role::Energy) {
        Some(&field) => Problem::new(format!(
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
            .with_help(format!(
                "say which one does, as in {}",
                which(first_with_energy_unit(table) + 1)
            )),
    }
}

/// The first column whose header has the unit of an energy, else the first.
fn first_with_energy_unit(table: &Table) -> usize {
    let has_unit = |name: &Name| {
        let mut units = name.reading.units.iter();
        units.any(|unit| EnergyUnit::from_spelling(unit).is_some())
    };
    table.names.iter().position(has_unit).unwrap_or(0)
}

fn empty(rows: usize) -> Levels {
    Levels {
        schema: Levels::identifier(),
        provenance: Provenance::default(),
        reference: Reference::Unknown,
        computation: Computation::default(),
        rows,
        k_index: None,
        k_x: None,
        k_y: None,
        k_z: None,
        k_distance: None,
        weight: None,
        band: None,
        spin: None,
        energy_mean_field_ev: None,
        energy_quasiparticle_ev: None,
        correction_ev: None,
        renormalization: None,
        exchange_ev: None,
        correlation_ev: None,
        xc_potential_ev: None,
        occupation: None,
        projections: Vec::new(),
    }
}
