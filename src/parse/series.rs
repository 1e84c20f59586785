//! Convergence series: a value against the parameters of its computation.

use super::dispersion::uncertainties;
use super::lowering::{Lower, Lowering};
use super::role::{Kind, Role};
use crate::schema::{Document, Named, Provenance, Series};

impl Lower for Series {
    const TABLE: Kind = Kind::Series;

    fn lower(lowering: &mut Lowering<'_>) -> Option<Self> {
        let value = lowering.field(Role::Value)?;
        let uncertainty = match lowering.field(Role::StandardUncertainty) {
            Some(field) => Some(uncertainties(lowering, field, value)?),
            None => None,
        };
        let values = lowering.energies(Role::Value, value, None);
        let mut parameters = Vec::new();
        for field in lowering.table.fields_of(Role::Parameter) {
            let name = &lowering.table.names[field];
            parameters.push(Named {
                // A parameter keeps its unit in its name: it is not converted.
                name: name.text.clone(),
                values: lowering.numbers(field),
            });
        }
        Some(Self {
            schema: Self::identifier(),
            provenance: Provenance::default(),
            parameters,
            value_ev: values?,
            standard_uncertainty_ev: uncertainty,
        })
    }

    fn provenance_mut(&mut self) -> &mut Provenance {
        &mut self.provenance
    }
}
