//! Tables of a measured curve.

use super::blocks::{self, Numbered};
use super::condition::set_condition;
use super::evidence::Evidence;
use super::lowering::{self, Lower, Lowering};
use super::parsed::Parsed;
use super::role::{Hints, Kind, Role};
use super::title::Counted;
use super::{Problem, Source};
use crate::quantity::{AxisKind, IntensityUnit};
use crate::schema::{Conditions, Document, IntensityKind, Provenance, Spectrum};

/// Reads a table of a measured curve, or the one curve of a file in an open standard.
///
/// # Errors
/// Everything that keeps the table from being read, up to a number worth reading.
pub fn read_spectrum(source: Source, hints: &Hints) -> Result<Parsed<Spectrum>, Vec<Problem>> {
    super::document::read_or(source, |source| {
        match super::standards::one_curve(&source, hints, false) {
            Some(curve) => curve,
            None => lowering::read(source, hints, false),
        }
    })
}

impl Lower for Spectrum {
    const TABLE: Kind = Kind::Spectrum;

    fn lower(lowering: &mut Lowering<'_>) -> Option<Self> {
        let energy = lowering.field(Role::Energy)?;
        let axis = lowering.axis(energy);
        let reference = lowering.reference(&[energy]);
        // Without an axis every unit is let through: the missing axis is the problem to show.
        let along = axis.unwrap_or(AxisKind::Photon);
        let energies = lowering.energies(Role::Energy, energy, Some(along));
        let intensities = intensities(lowering);
        let (unit, _) = intensities.as_ref()?;
        let uncertainty = match lowering.field(Role::StandardUncertainty) {
            Some(field) => Some(uncertainty(lowering, field, unit)?),
            None => None,
        };
        let (unit, intensity) = intensities?;
        let mut document = Self {
            schema: Self::identifier(),
            provenance: Provenance::default(),
            axis: axis?,
            reference: reference?,
            energy_ev: energies?,
            intensity,
            intensity_kind: unit.value.into(),
            standard_uncertainty: uncertainty,
            conditions: conditions(lowering),
        };
        add_sweeps(lowering, &mut document);
        lowering.one_curve(&document.energy_ev, energy)?;
        Some(document)
    }

    fn provenance_mut(&mut self) -> &mut Provenance {
        &mut self.provenance
    }
}

/// The intensities and their unit; several sweeps are added, or averaged where they are rates.
fn intensities(lowering: &mut Lowering<'_>) -> Option<(Evidence<IntensityUnit>, Vec<f64>)> {
    if let Some(field) = lowering.field(Role::Intensity) {
        let unit = unit(lowering, Role::Intensity, field)?;
        return Some((unit, lowering.numbers(field)));
    }
    let fields = lowering.table.fields_of(Role::Sweep);
    all_sweeps(lowering, &fields)?;
    let units: Vec<Option<_>> = fields
        .iter()
        .map(|&field| unit(lowering, Role::Sweep, field))
        .collect();
    let units: Option<Vec<_>> = units.into_iter().collect();
    let units = units?;
    let first = units.first()?.clone();
    if let Some(other) = units.iter().find(|unit| unit.value != first.value) {
        let problem = Problem::new(format!(
            "the sweeps are given in {} by {} and in {} by {}",
            first.value, first.says, other.value, other.says
        ));
        lowering
            .problems
            .push(problem.with_help("sweeps are added in one unit"));
        return None;
    }
    let columns: Vec<Vec<f64>> = fields
        .iter()
        .map(|&field| lowering.numbers(field))
        .collect();
    Some((first.clone(), together(lowering, &columns, first.value)))
}

/// Sweeps that the header numbers must be all there: a sum without one is no sum.
fn all_sweeps(lowering: &mut Lowering<'_>, fields: &[usize]) -> Option<()> {
    if lowering.hints.columns.contains_key(&Role::Sweep) {
        return Some(());
    }
    let number = |&field: &usize| lowering.table.names[field].reading.number();
    let mut numbers: Vec<usize> = fields.iter().filter_map(number).collect();
    numbers.sort_unstable();
    let first = numbers.first().copied().unwrap_or(1);
    let whole = first <= 1 && numbers.iter().copied().eq(first..first + fields.len());
    if !whole {
        let list: Vec<String> = numbers.iter().map(ToString::to_string).collect();
        let problem = Problem::new(format!(
            "the columns of sweeps are numbered {}: not every sweep is known",
            list.join(", ")
        ));
        let setting = lowering.hints.setting("column.sweep = \"2-4\"");
        let place = lowering.table.place_of(lowering.source, fields[0]);
        lowering.problems.push(problem.at(place).with_help(format!(
            "name the missing columns alike, or say which are to be added, as in {setting}"
        )));
    }
    whole.then_some(())
}

fn unit(lowering: &mut Lowering<'_>, role: Role, field: usize) -> Option<Evidence<IntensityUnit>> {
    let found = lowering.unit_finder().intensity(role, field);
    let unit = lowering.problems.keep(found)?;
    lowering.note(field, &unit);
    Some(unit)
}

fn uncertainty(
    lowering: &mut Lowering<'_>,
    field: usize,
    intensity: &Evidence<IntensityUnit>,
) -> Option<Vec<f64>> {
    let found = lowering.unit_finder().uncertainty(field, intensity);
    let unit = lowering.problems.keep(found)?;
    lowering.note(field, &unit);
    Some(lowering.numbers(field))
}

/// Counts of sweeps add up and stay counts; rates and arbitrary intensities are averaged.
fn together(lowering: &mut Lowering<'_>, sweeps: &[Vec<f64>], unit: IntensityUnit) -> Vec<f64> {
    let rows = sweeps.iter().map(Vec::len).min().unwrap_or(0);
    // A number of columns.
    #[allow(clippy::cast_precision_loss)]
    let (what, divisor) = match unit {
        IntensityUnit::Counts => ("added", 1.0),
        _ => ("averaged", sweeps.len() as f64),
    };
    lowering.step("sweeps", format!("{} sweeps {what}", sweeps.len()));
    let sum = |row: usize| sweeps.iter().map(|sweep| sweep[row]).sum::<f64>() / divisor;
    (0..rows).map(sum).collect()
}

/// Adds sweeps that stand below one another in blocks with the same energies.
fn add_sweeps(lowering: &mut Lowering<'_>, document: &mut Spectrum) {
    let layout = &lowering.table.layout;
    let Some(length) = blocks::equal_blocks(layout) else {
        return;
    };
    // Only what calls itself a sweep is one: the blocks may be angles or samples.
    let titled = blocks::by_titles(lowering.source, layout, Counted::Sweep);
    let each = |numbered: Numbered| {
        let mut blocks = numbered.numbers.chunks(length);
        let firsts: Vec<i64> = blocks.clone().map(|block| block[0]).collect();
        blocks.all(|block| block.iter().all(|number| *number == block[0]))
            && firsts.windows(2).all(|pair| pair[0] < pair[1])
    };
    if !titled.is_some_and(each) {
        return;
    }
    let mut energies = document.energy_ev.chunks(length);
    let first = energies.next().unwrap_or_default();
    if document.standard_uncertainty.is_some() || energies.any(|block| block != first) {
        return;
    }
    let sweeps: Vec<Vec<f64>> = document
        .intensity
        .chunks(length)
        .map(<[f64]>::to_vec)
        .collect();
    let unit = match document.intensity_kind {
        IntensityKind::Counts => IntensityUnit::Counts,
        _ => IntensityUnit::Arbitrary,
    };
    document.intensity = together(lowering, &sweeps, unit);
    document.energy_ev.truncate(length);
    set_sweeps(&mut document.conditions, sweeps.len());
}

/// The number of sweeps, where the file does not say it.
// A number of blocks or columns.
#[allow(clippy::cast_precision_loss)]
fn set_sweeps(conditions: &mut Conditions, sweeps: usize) {
    conditions.sweeps.get_or_insert(sweeps as f64);
}

/// What the comments say of the measurement.
pub(super) fn conditions(lowering: &Lowering<'_>) -> Conditions {
    let mut conditions = Conditions::default();
    for (key, value, _) in &lowering.table.metadata.known {
        set_condition(&mut conditions, *key, value);
    }
    let sweeps = lowering.table.fields_of(Role::Sweep).len();
    if sweeps > 0 {
        set_sweeps(&mut conditions, sweeps);
    }
    conditions
}
