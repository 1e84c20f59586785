//! Measured peaks against momentum.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Conditions, Document, Provenance, number};
use crate::quantity::{AxisKind, Reference};

/// Measured peaks, one row a peak. Every array has the same length.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Dispersion {
    /// `bandrule/dispersion/1`.
    pub schema: String,
    /// Where the numbers come from.
    pub provenance: Provenance,
    /// What the energies are counted along.
    pub axis: AxisKind,
    /// What they are counted from.
    pub reference: Reference,
    /// Momenta, in the unit below.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub k: Vec<f64>,
    /// The unit of the momenta; absent where the file does not say.
    pub k_unit: Option<String>,
    /// Energies on that axis.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub energy_ev: Vec<f64>,
    /// Their standard uncertainties.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub standard_uncertainty_ev: Option<Vec<f64>>,
    /// How the peaks were measured.
    pub conditions: Conditions,
}

impl Document for Dispersion {
    const KIND: &'static str = "dispersion";

    fn lengths(&self) -> Vec<(&str, usize)> {
        let uncertainty = self.standard_uncertainty_ev.as_ref();
        let uncertainty = uncertainty.map(|column| ("standard_uncertainty_ev", column.len()));
        let mut lengths = vec![("k", self.k.len()), ("energy_ev", self.energy_ev.len())];
        lengths.extend(uncertainty);
        lengths
    }
}
