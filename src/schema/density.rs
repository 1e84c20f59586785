//! A computed density of states.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Computation, Document, Named, Provenance, number};
use crate::quantity::Reference;

/// What a density of states counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum DensityKind {
    /// States per electronvolt.
    StatesPerEv,
    /// Proportional to that.
    Arbitrary,
}

/// A density of states on a grid, one row a point. Every array has the same length.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Density {
    /// `bandrule/density/1`.
    pub schema: String,
    /// Where the numbers come from.
    pub provenance: Provenance,
    /// The zero of the energies.
    pub reference: Reference,
    /// The computation.
    pub computation: Computation,
    /// Energies, more bound lower.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub energy_ev: Vec<f64>,
    /// What the densities count.
    pub density_kind: DensityKind,
    /// The total density.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub total: Option<Vec<f64>>,
    /// Shares of atoms, orbitals or spins.
    #[serde(default)]
    pub projections: Vec<Named>,
}

impl Document for Density {
    const KIND: &'static str = "density";

    fn lengths(&self) -> Vec<(&str, usize)> {
        let mut lengths = vec![("energy_ev", self.energy_ev.len())];
        lengths.extend(self.total.as_ref().map(|column| ("total", column.len())));
        lengths.extend(self.projections.iter().map(Named::length));
        lengths
    }
}
