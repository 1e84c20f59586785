//! Tables of a computed density of states.

use super::condition::set_computation;
use super::lowering::{Lower, Lowering};
use super::role::{Kind, Role};
use super::{Problem, Source};
use crate::quantity::{AxisKind, DensityUnit, EnergyUnit};
use crate::schema::{Computation, Density, DensityKind, Document, Named, Provenance};

impl Lower for Density {
    const TABLE: Kind = Kind::Density;

    fn lower(lowering: &mut Lowering<'_>) -> Option<Self> {
        let energy = lowering.field(Role::Energy)?;
        let axis = lowering.axis_if_said(energy);
        let reference = lowering.reference(&[energy]);
        let energies = lowering.energies(Role::Energy, energy, None);
        let unit = density_unit(lowering, energy);
        let mut computation = Computation::default();
        for (key, value, _) in &lowering.table.metadata.known {
            set_computation(&mut computation, *key, value);
        }
        let energies = energies?;
        lowering.one_curve(&energies, energy)?;
        let upwards = upwards(lowering, axis?, energies);
        let unit = unit?;
        let total = lowering.field(Role::Density);
        let total = total.map(|field| column(lowering, field, unit));
        let mut projections = Vec::new();
        for field in lowering.table.fields_of(Role::Projection) {
            projections.push(Named {
                name: lowering.table.names[field].reading.label.clone(),
                values: column(lowering, field, unit),
            });
        }
        Some(Self {
            schema: Self::identifier(),
            provenance: Provenance::default(),
            reference: reference?,
            computation,
            energy_ev: upwards,
            density_kind: match unit {
                DensityUnit::StatesPer(_) => DensityKind::StatesPerEv,
                DensityUnit::Arbitrary => DensityKind::Arbitrary,
            },
            total,
            projections,
        })
    }

    fn provenance_mut(&mut self) -> &mut Provenance {
        &mut self.provenance
    }
}

/// Energies counted upwards: a computed density on a binding axis is turned.
fn upwards(lowering: &mut Lowering<'_>, axis: Option<AxisKind>, energies: Vec<f64>) -> Vec<f64> {
    match axis {
        Some(AxisKind::Binding) => {
            lowering.step("turn", "binding energies to energies: signs changed");
            energies.into_iter().map(|energy| -energy).collect()
        }
        _ => energies,
    }
}

fn column(lowering: &mut Lowering<'_>, field: usize, unit: DensityUnit) -> Vec<f64> {
    let numbers = lowering.numbers(field).into_iter();
    numbers
        .map(|value| unit.to_per_electronvolt(value))
        .collect()
}

/// The one unit of all densities; arbitrary where none is said and the energies are in eV.
fn density_unit(lowering: &mut Lowering<'_>, energy: usize) -> Option<DensityUnit> {
    let mut said: Option<DensityUnit> = None;
    let fields = lowering.table.fields_of(Role::Density).into_iter();
    for field in fields.chain(lowering.table.fields_of(Role::Projection)) {
        let role = lowering.table.role_of(field)?;
        let found = lowering.unit_finder().density(role, field);
        let Some(unit) = lowering.problems.keep(found)? else {
            continue;
        };
        lowering.note(field, &unit);
        if said.is_some_and(|said| said != unit.value) {
            let problem = Problem::new("the densities are given in more than one unit");
            let place = lowering.table.place_of(lowering.source, field);
            lowering
                .problems
                .push(problem.at(place).with_help("write them in one unit"));
            return None;
        }
        said = Some(unit.value);
    }
    let energies = lowering.unit_finder().energy_if_said(Role::Energy, energy);
    let energies = lowering.problems.keep(energies)?.map(|unit| unit.value);
    match (said, energies) {
        (Some(unit), _) => Some(unit),
        (None, Some(EnergyUnit::Electronvolt)) => Some(DensityUnit::Arbitrary),
        // Energies without a unit are refused elsewhere.
        (None, None) => None,
        (None, Some(_)) => {
            lowering.problems.push(no_unit(lowering.source, lowering));
            None
        }
    }
}

fn no_unit(source: &Source, lowering: &Lowering<'_>) -> Problem {
    let field = lowering.table.fields_of(Role::Density).first().copied();
    let field = field.or(lowering.table.fields_of(Role::Projection).first().copied());
    Problem::new("nothing says the unit of the density of states, and its energies are not in eV")
        .at(lowering.table.place_of(source, field.unwrap_or(0)))
        .with_help(
            "write it in the header, as in `DOS (states/eV)`, `DOS (states/Ha)` or `DOS (arb. u.)`",
        )
}
