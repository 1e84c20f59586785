//! Computed band energies.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Document, Named, Provenance, number};
use crate::quantity::Reference;

/// What is known of the computation itself.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Computation {
    /// The method, in the user's words.
    pub method: Option<String>,
    /// The mean-field starting point, in the user's words.
    pub starting_point: Option<String>,
    /// Whether spin-orbit coupling is in the energies.
    pub spin_orbit_included: Option<bool>,
    /// The temperature of the lattice that was computed, in kelvin.
    pub lattice_temperature_k: Option<f64>,
}

/// Band energies, one row a level, in file order. Every array that is present has `rows` entries.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Levels {
    /// `bandrule/levels/1`.
    pub schema: String,
    /// Where the numbers come from.
    pub provenance: Provenance,
    /// The zero of the energies.
    pub reference: Reference,
    /// The computation.
    pub computation: Computation,
    /// The number of levels.
    pub rows: usize,
    /// Number of the k-point, as the file counts.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub k_index: Option<Vec<i64>>,
    /// First coordinate of the k-point, in the file's own unit.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub k_x: Option<Vec<f64>>,
    /// Second coordinate.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub k_y: Option<Vec<f64>>,
    /// Third coordinate.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub k_z: Option<Vec<f64>>,
    /// Length along a path of k-points, in the file's own unit.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub k_distance: Option<Vec<f64>>,
    /// Weight of the k-point in the Brillouin zone, not normalised.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub weight: Option<Vec<f64>>,
    /// Number of the band, as the file counts.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub band: Option<Vec<i64>>,
    /// Spin channel: as the file counts, or +1 and -1.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub spin: Option<Vec<i64>>,
    /// Mean-field energy.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub energy_mean_field_ev: Option<Vec<f64>>,
    /// Quasiparticle energy.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub energy_quasiparticle_ev: Option<Vec<f64>>,
    /// Quasiparticle energy minus mean-field energy.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub correction_ev: Option<Vec<f64>>,
    /// Quasiparticle weight Z.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub renormalization: Option<Vec<f64>>,
    /// Exchange part of the self-energy.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub exchange_ev: Option<Vec<f64>>,
    /// Correlation part of the self-energy.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub correlation_ev: Option<Vec<f64>>,
    /// Exchange-correlation potential of the mean field.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub xc_potential_ev: Option<Vec<f64>>,
    /// Occupation, between 0 and the declared maximum (1 or 2).
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub occupation: Option<Vec<f64>>,
    /// Shares of atoms and orbitals in the state.
    #[serde(skip_serializing_if = "Vec::is_empty", default)]
    pub projections: Vec<Named>,
}

impl Document for Levels {
    const KIND: &'static str = "levels";

    fn lengths(&self) -> Vec<(&str, usize)> {
        let whole = [
            ("k_index", &self.k_index),
            ("band", &self.band),
            ("spin", &self.spin),
        ];
        let numbers = [
            ("k_x", &self.k_x),
            ("k_y", &self.k_y),
            ("k_z", &self.k_z),
            ("k_distance", &self.k_distance),
            ("weight", &self.weight),
            ("energy_mean_field_ev", &self.energy_mean_field_ev),
            ("energy_quasiparticle_ev", &self.energy_quasiparticle_ev),
            ("correction_ev", &self.correction_ev),
            ("renormalization", &self.renormalization),
            ("exchange_ev", &self.exchange_ev),
            ("correlation_ev", &self.correlation_ev),
            ("xc_potential_ev", &self.xc_potential_ev),
            ("occupation", &self.occupation),
        ];
        let mut lengths = vec![("rows", self.rows)];
        lengths.extend(
            whole
                .into_iter()
                .filter_map(|(name, column)| Some((name, column.as_ref()?.len()))),
        );
        lengths.extend(
            numbers
                .into_iter()
                .filter_map(|(name, column)| Some((name, column.as_ref()?.len()))),
        );
        lengths.extend(self.projections.iter().map(Named::length));
        lengths
    }
}

impl Levels {
    /// The weight of a row; one where the table has no weights.
    #[must_use]
    pub fn weight_of(&self, row: usize) -> f64 {
        self.weight.as_ref().map_or(1.0, |weights| weights[row])
    }
}
