//! A table of gaps, ionisation energies and affinities.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Document, Provenance, Texts, number};

/// What an energy excites.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum Excitation {
    /// A quasiparticle gap: an electron is taken away or added.
    Quasiparticle,
    /// An optical gap: electron and hole stay and attract each other.
    Optical,
    /// A gap from transport.
    Transport,
    /// An ionisation energy.
    Ionisation,
    /// An electron affinity.
    Affinity,
    /// Not said.
    Unknown,
}

impl Excitation {
    /// The name used in files and messages.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Quasiparticle => "quasiparticle",
            Self::Optical => "optical",
            Self::Transport => "transport",
            Self::Ionisation => "ionisation",
            Self::Affinity => "affinity",
            Self::Unknown => "unknown",
        }
    }
}

/// Gaps, ionisation energies and affinities, one row a value. Every array has the same length; a
/// text that the file does not give is empty, a number `nan`.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Gaps {
    /// `bandrule/gaps/1`.
    pub schema: String,
    /// Where the numbers come from.
    pub provenance: Provenance,
    /// Material.
    pub material: Texts,
    /// Polymorph or structure.
    pub polymorph: Option<Texts>,
    /// The value.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub value_ev: Vec<f64>,
    /// Its standard uncertainty.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub uncertainty_ev: Option<Vec<f64>>,
    /// What is excited.
    pub excitation: Vec<Excitation>,
    /// Where in momentum: `minimum`, `direct`, a named point, or empty.
    pub momentum: Texts,
    /// Method.
    pub method: Option<Texts>,
    /// Starting point of the method.
    pub starting_point: Option<Texts>,
    /// Temperature.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub temperature_k: Option<Vec<f64>>,
    /// Source of the value.
    pub source: Option<Texts>,
}

impl Document for Gaps {
    const KIND: &'static str = "gaps";

    fn lengths(&self) -> Vec<(&str, usize)> {
        let texts = [
            ("polymorph", &self.polymorph),
            ("method", &self.method),
            ("starting_point", &self.starting_point),
            ("source", &self.source),
        ];
        let numbers = [
            ("uncertainty_ev", &self.uncertainty_ev),
            ("temperature_k", &self.temperature_k),
        ];
        let mut lengths = vec![
            ("material", self.material.len()),
            ("value_ev", self.value_ev.len()),
            ("excitation", self.excitation.len()),
            ("momentum", self.momentum.len()),
        ];
        lengths.extend(
            texts
                .into_iter()
                .filter_map(|(name, column)| Some((name, column.as_ref()?.len()))),
        );
        lengths.extend(
            numbers
                .into_iter()
                .filter_map(|(name, column)| Some((name, column.as_ref()?.len()))),
        );
        lengths
    }
}
