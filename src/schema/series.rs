//! A convergence series.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Document, Named, Provenance, number};

/// A value against the parameters of its computation, one row a computation. Every array has the same
/// length.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Series {
    /// `bandrule/series/1`.
    pub schema: String,
    /// Where the numbers come from.
    pub provenance: Provenance,
    /// The parameters, in the file's own units.
    pub parameters: Vec<Named>,
    /// The value.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub value_ev: Vec<f64>,
    /// Its standard uncertainty.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub standard_uncertainty_ev: Option<Vec<f64>>,
}

impl Document for Series {
    const KIND: &'static str = "series";

    fn lengths(&self) -> Vec<(&str, usize)> {
        let uncertainty = self.standard_uncertainty_ev.as_ref();
        let uncertainty = uncertainty.map(|column| ("standard_uncertainty_ev", column.len()));
        let mut lengths = vec![("value_ev", self.value_ev.len())];
        lengths.extend(uncertainty);
        lengths.extend(self.parameters.iter().map(Named::length));
        lengths
    }
}
