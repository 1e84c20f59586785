//! What an energy is counted along, and from where. Terms follow ISO 18115-1.

use std::fmt;

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// The kind of an energy axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum AxisKind {
    /// Kinetic energy of the electron, detected or (in an isochromat) incident.
    Kinetic,
    /// Binding energy: counted downwards from the reference.
    Binding,
    /// Energy of the electron's state above the reference, negative for occupied states.
    FinalState,
    /// Photon energy.
    Photon,
}

impl AxisKind {
    /// Every kind.
    pub const ALL: [Self; 4] = [Self::Kinetic, Self::Binding, Self::FinalState, Self::Photon];

    /// The name used in study files, messages and documents.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Kinetic => "kinetic",
            Self::Binding => "binding",
            Self::FinalState => "final-state",
            Self::Photon => "photon",
        }
    }

    /// Reads a name back.
    #[must_use]
    pub fn from_name(text: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|kind| kind.name() == text)
    }
}

impl fmt::Display for AxisKind {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}

/// The zero that an energy is counted from.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, Default, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum Reference {
    /// The Fermi level.
    Fermi,
    /// The highest occupied level.
    ValenceEdge,
    /// The vacuum level of the sample.
    Vacuum,
    /// Not stated.
    #[default]
    Unknown,
}

impl Reference {
    /// Every reference.
    pub const ALL: [Self; 4] = [Self::Fermi, Self::ValenceEdge, Self::Vacuum, Self::Unknown];

    /// The name used in study files, messages and documents.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Fermi => "fermi",
            Self::ValenceEdge => "valence-edge",
            Self::Vacuum => "vacuum",
            Self::Unknown => "unknown",
        }
    }

    /// Reads a name back.
    #[must_use]
    pub fn from_name(text: &str) -> Option<Self> {
        Self::ALL
            .into_iter()
            .find(|reference| reference.name() == text)
    }
}

impl fmt::Display for Reference {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.name())
    }
}
