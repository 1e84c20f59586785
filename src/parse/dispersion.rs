//! Tables of measured peaks against momentum.

use super::lowering::{Lower, Lowering};
use super::role::{Kind, Role};
use super::spectrum::conditions;
use crate::schema::{Dispersion, Document, Provenance};

impl Lower for Dispersion {
    const TABLE: Kind = Kind::Dispersion;

    fn lower(lowering: &mut Lowering<'_>) -> Option<Self> {
        let energy = lowering.field(Role::Energy)?;
        let momentum = lowering.field(Role::Momentum)?;
        let axis = lowering.axis(energy);
        let reference = lowering.reference(&[energy]);
        let energies = lowering.energies(Role::Energy, energy, axis);
        let found = lowering.unit_finder().momentum(momentum);
        let unit = lowering.problems.keep(found);
        if let Some(Some(unit)) = &unit {
            lowering.note(momentum, unit);
        }
        let uncertainty = match lowering.field(Role::StandardUncertainty) {
            Some(field) => Some(uncertainties(lowering, field, energy)?),
            None => None,
        };
        Some(Self {
            schema: Self::identifier(),
            provenance: Provenance::default(),
            axis: axis?,
            reference: reference?,
            k: lowering.numbers(momentum),
            k_unit: unit?.map(|unit| unit.value.symbol().to_owned()),
            energy_ev: energies?,
            standard_uncertainty_ev: uncertainty,
            conditions: conditions(lowering),
        })
    }

    fn provenance_mut(&mut self) -> &mut Provenance {
        &mut self.provenance
    }
}

/// The uncertainties of energies, in their unit where they have none of their own.
pub(super) fn uncertainties(
    lowering: &mut Lowering<'_>,
    field: usize,
    energy: usize,
) -> Option<Vec<f64>> {
    let role = Role::StandardUncertainty;
    let own = lowering.unit_finder().energy_if_said(role, field);
    let own = lowering.problems.keep(own)?;
    let by_row = lowering.field(Role::Unit).is_some();
    if own.is_some() || by_row {
        return lowering.energies(role, field, None);
    }
    let of = lowering.table.role_of(energy).unwrap_or(Role::Energy);
    let of_energy = lowering.unit_finder().energy_if_said(of, energy);
    // Energies without a unit are refused where they are read.
    let mut unit = lowering.problems.keep(of_energy)??;
    unit.says = format!("the energies, by {}", unit.says);
    lowering.note(field, &unit);
    Some(super::lowering::in_ev(lowering.numbers(field), unit.value))
}
