//! Tables of a measured curve.

use super::condition::set_condition;
use super::evidence::{Evidence, agree};
use super::parsed::{Parsed, UnitNotes, columns, provenance, unit_note};
use super::problem::Problems;
use super::reference::reference;
use super::role::{Hints, Kind, Role};
use super::table::{Content, Table, values};
use super::unit_of_column::Units;
use super::{Problem, Source};
use crate::quantity::{AxisKind, Energy, EnergyUnit, IntensityUnit, Reference};
use crate::schema::{Conditions, Document, IntensityKind, Provenance, Spectrum};

/// Reads a table of a measured curve.
///
/// # Errors
/// Everything that keeps the table from being read, up to a number worth reading.
pub fn read_spectrum(source: Source, hints: &Hints) -> Result<Parsed<Spectrum>, Vec<Problem>> {
    let mut problems = Problems::default();
    let read = read(&source, hints, &mut problems);
    match (read, problems.is_empty()) {
        (Some((meaning, table, [energy, intensity, uncertainty])), true) => {
            let columns = columns(&table, hints, &meaning.notes());
            let mut record = provenance(&source, &table, &columns);
            meaning.record(&mut record);
            let document = Spectrum {
                schema: Spectrum::identifier(),
                provenance: record,
                axis: meaning.axis.value,
                reference: meaning
                    .reference
                    .map_or(Reference::Unknown, |zero| zero.value),
                energy_ev: to_ev(&energy, meaning.energy_unit.value),
                intensity,
                intensity_kind: intensity_kind(meaning.intensity_unit.value),
                standard_uncertainty: meaning.uncertainty_unit.map(|_| uncertainty),
                conditions: conditions(&table),
            };
            Ok(Parsed::new(document, source, columns, table))
        }
        _ => Err(problems.into_list()),
    }
}

/// What the numbers of a curve mean, and who says so.
struct Meaning {
    axis: Evidence<AxisKind>,
    reference: Option<Evidence<Reference>>,
    energy_unit: Evidence<EnergyUnit>,
    intensity_unit: Evidence<IntensityUnit>,
    uncertainty_unit: Option<Evidence<IntensityUnit>>,
}

impl Meaning {
    fn notes(&self) -> UnitNotes {
        let mut notes = UnitNotes::from([
            (Role::Energy, unit_note(&self.energy_unit)),
            (Role::Intensity, unit_note(&self.intensity_unit)),
        ]);
        if let Some(unit) = &self.uncertainty_unit {
            notes.insert(Role::StandardUncertainty, unit_note(unit));
        }
        notes
    }

    fn record(&self, provenance: &mut Provenance) {
        provenance.step("axis", format!("{} by {}", self.axis.value, self.axis.says));
        if let Some(zero) = &self.reference {
            provenance.step("reference", format!("{} by {}", zero.value, zero.says));
        }
    }
}

/// The energies, the intensities and, where there are any, their uncertainties.
type Numbers = [Vec<f64>; 3];

fn read(
    source: &Source,
    hints: &Hints,
    problems: &mut Problems,
) -> Option<(Meaning, Table, Numbers)> {
    let table = Table::open(source, Kind::Spectrum, hints, problems)?;
    for (role, what) in [(Role::Energy, "energies"), (Role::Intensity, "intensities")] {
        if !table.fields.contains_key(&role) {
            problems.push(missing(source, &table, role, what, hints));
        }
    }
    let energy = *table.fields.get(&Role::Energy)?;
    let intensity = *table.fields.get(&Role::Intensity)?;
    let uncertainty = table.fields.get(&Role::StandardUncertainty).copied();
    let meaning = meaning(
        source,
        &table,
        hints,
        [energy, intensity],
        uncertainty,
        problems,
    );
    let wanted: Vec<(usize, Content)> = [Some(energy), Some(intensity), uncertainty]
        .into_iter()
        .flatten()
        .map(|field| (field, Content::Number))
        .collect();
    let mut read = values(source, &table.layout, &table.names, &wanted, problems).into_iter();
    let numbers = std::array::from_fn(|_| read.next().unwrap_or_default());
    Some((meaning?, table, numbers))
}

/// Collects the meaning of the columns; every part is tried, so that all problems show at once.
fn meaning(
    source: &Source,
    table: &Table,
    hints: &Hints,
    [energy, intensity]: [usize; 2],
    uncertainty: Option<usize>,
    problems: &mut Problems,
) -> Option<Meaning> {
    let units = Units {
        source,
        table,
        hints,
    };
    let axis = problems.keep(axis(source, table, energy, hints));
    let reference = problems.keep(reference(source, table, &[energy], hints));
    // Without an axis every unit is let through: the missing axis is the problem to show.
    let along = axis.as_ref().map_or(AxisKind::Photon, |axis| axis.value);
    let energy_unit = problems.keep(units.energy(Role::Energy, energy, Some(along)));
    let intensity_unit = problems.keep(units.intensity(intensity));
    let uncertainty_unit = match (uncertainty, &intensity_unit) {
        (Some(field), Some(unit)) => problems.keep(units.uncertainty(field, unit)),
        _ => None,
    };
    Some(Meaning {
        axis: axis?,
        reference: reference?,
        energy_unit: energy_unit?,
        intensity_unit: intensity_unit?,
        uncertainty_unit,
    })
}

fn axis(
    source: &Source,
    table: &Table,
    field: usize,
    hints: &Hints,
) -> Result<Evidence<AxisKind>, Problem> {
    let (says, place) = (table.says(field), table.place_of(source, field));
    let mut evidence = Vec::new();
    let header = table.names[field].reading.axis;
    evidence.extend(header.map(|axis| Evidence::at(axis, says, place.clone())));
    evidence.extend(table.metadata.axes.iter().cloned());
    evidence.extend(
        hints
            .axis
            .map(|axis| Evidence::setting(axis, hints.says("axis"))),
    );
    agree("the axis", evidence)?.ok_or_else(|| {
        Problem::new(format!(
            "nothing says what the energies in column {} `{}` are counted along: kinetic, binding, \
             final-state or photon",
            field + 1,
            table.names[field].text
        ))
        .at(place)
        .with_help(format!(
            "name it in the header, as in `Kinetic energy (eV)`, or write {}",
            hints.setting("axis = \"kinetic\"")
        ))
    })
}

fn missing(source: &Source, table: &Table, role: Role, what: &str, hints: &Hints) -> Problem {
    let problem = Problem::new(format!("no column is known to hold {what}"));
    let by_header = match role {
        Role::Energy => "`Kinetic energy (eV)`, `Binding energy (eV)` or `E - E_F (eV)`",
        _ => "`counts`, `intensity (counts/s)` or `intensity (arb. u.)`",
    };
    table.with_columns(source, problem).with_help(format!(
        "name it in the header, as in {by_header}, or say which one does, as in {}",
        hints.setting(&format!("column.{role} = 1"))
    ))
}

fn to_ev(values: &[f64], unit: EnergyUnit) -> Vec<f64> {
    values
        .iter()
        .map(|&value| Energy::new(value, unit).electronvolts())
        .collect()
}

fn intensity_kind(unit: IntensityUnit) -> IntensityKind {
    match unit {
        IntensityUnit::Counts => IntensityKind::Counts,
        IntensityUnit::CountsPerSecond => IntensityKind::CountsPerSecond,
        IntensityUnit::Arbitrary => IntensityKind::Arbitrary,
    }
}

fn conditions(table: &Table) -> Conditions {
    let mut conditions = Conditions::default();
    for (key, value, _) in &table.metadata.known {
        set_condition(&mut conditions, *key, value);
    }
    conditions
}
