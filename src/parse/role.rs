//! What a column may be, and what the user says of it.

use std::collections::BTreeMap;

use crate::quantity::{AxisKind, Reference};

/// What the numbers of a column are.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Role {
    /// Number of the k-point.
    KIndex,
    /// First coordinate of the k-point.
    KX,
    /// Second coordinate of the k-point.
    KY,
    /// Third coordinate of the k-point.
    KZ,
    /// Weight of the k-point.
    Weight,
    /// Number of the band.
    Band,
    /// Spin channel.
    Spin,
    /// Mean-field energy.
    EnergyMeanField,
    /// Quasiparticle energy.
    EnergyQuasiparticle,
    /// Occupation.
    Occupation,
    /// Energy of a channel of a measured curve.
    Energy,
    /// Intensity in a channel.
    Intensity,
    /// Standard uncertainty of the intensity.
    StandardUncertainty,
}

impl Role {
    /// Every role, in the order in which messages list them.
    pub const ALL: [Self; 13] = [
        Self::KIndex,
        Self::KX,
        Self::KY,
        Self::KZ,
        Self::Weight,
        Self::Band,
        Self::Spin,
        Self::EnergyMeanField,
        Self::EnergyQuasiparticle,
        Self::Occupation,
        Self::Energy,
        Self::Intensity,
        Self::StandardUncertainty,
    ];

    /// The name used in settings and messages.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::KIndex => "k-index",
            Self::KX => "k-x",
            Self::KY => "k-y",
            Self::KZ => "k-z",
            Self::Weight => "weight",
            Self::Band => "band",
            Self::Spin => "spin",
            Self::EnergyMeanField => "energy-mean-field",
            Self::EnergyQuasiparticle => "energy-quasiparticle",
            Self::Occupation => "occupation",
            Self::Energy => "energy",
            Self::Intensity => "intensity",
            Self::StandardUncertainty => "standard-uncertainty",
        }
    }

    /// Reads a name back.
    #[must_use]
    pub fn from_name(text: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|role| role.name() == text)
    }
}

impl std::fmt::Display for Role {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(self.name())
    }
}

/// How the user names a column.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum ColumnChoice {
    /// By the text of its header cell.
    Header(String),
    /// By its number, from 1.
    Number(usize),
}

/// What the user says of a table; each entry is evidence beside the file's own.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Hints {
    /// Which column has a role.
    pub columns: BTreeMap<Role, ColumnChoice>,
    /// The unit of a role's column. On a table of levels, `Energy` speaks for both energies.
    pub units: BTreeMap<Role, String>,
    /// The axis of a measured curve.
    pub axis: Option<AxisKind>,
    /// The zero of the energies.
    pub reference: Option<Reference>,
    /// Where the user writes these, as in `under [photoemission] in study.toml`.
    pub settle: String,
}

impl Hints {
    /// A setting with the place to write it.
    pub(super) fn setting(&self, setting: &str) -> String {
        format!("`{setting}` {}", self.settle).trim_end().to_owned()
    }

    /// A setting's key with the place where it stands, as evidence.
    pub(super) fn says(&self, key: &str) -> String {
        format!("{key} {}", self.settle).trim_end().to_owned()
    }
}

/// The kind of table that a reader wants, which decides what a header word means.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Kind {
    /// Computed levels.
    Levels,
    /// A measured curve.
    Spectrum,
    /// Any numbers: no cell has a role.
    Any,
}

impl Kind {
    /// The roles that a column of such a table may be given.
    pub fn roles(self) -> &'static [Role] {
        match self {
            Self::Levels => &Role::ALL[..10],
            Self::Spectrum => &Role::ALL[10..],
            Self::Any => &[],
        }
    }

    /// Whether a unit may be given for a role in such a table.
    pub fn has_unit(self, role: Role) -> bool {
        match self {
            Self::Levels => matches!(
                role,
                Role::Energy | Role::EnergyMeanField | Role::EnergyQuasiparticle
            ),
            Self::Spectrum => self.roles().contains(&role),
            Self::Any => false,
        }
    }

    /// Such a table in words.
    pub fn in_words(self) -> &'static str {
        match self {
            Self::Levels => "a table of levels",
            Self::Spectrum => "a measured curve",
            Self::Any => "a table",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_read_back_and_kinds_split_the_roles() {
        for role in Role::ALL {
            assert_eq!(Role::from_name(role.name()), Some(role));
        }
        assert_eq!(Kind::Levels.roles().last(), Some(&Role::Occupation));
        assert_eq!(Kind::Spectrum.roles().first(), Some(&Role::Energy));
    }
}
