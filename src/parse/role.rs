//! What a column may be, and what the user says of it.

use std::collections::BTreeMap;

use super::dialect::Delimiter;
use super::number::Decimal;
use crate::quantity::{AxisKind, Reference};

macro_rules! roles {
    ($($(#[$doc:meta])* $role:ident = $name:literal),* $(,)?) => {
        /// What the numbers of a column are.
        #[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
        pub enum Role { $($(#[$doc])* $role),* }

        impl Role {
            /// Every role, in the order in which messages list them.
            pub const ALL: &[Self] = &[$(Self::$role),*];

            /// The name used in settings and messages.
            #[must_use]
            pub fn name(self) -> &'static str {
                match self { $(Self::$role => $name),* }
            }
        }
    };
}

roles! {
    /// Number of the k-point.
    KIndex = "k-index",
    /// First coordinate of the k-point.
    KX = "k-x",
    /// Second coordinate of the k-point.
    KY = "k-y",
    /// Third coordinate of the k-point.
    KZ = "k-z",
    /// Length along a path of k-points.
    KDistance = "k-distance",
    /// Weight of the k-point.
    Weight = "weight",
    /// Number of the band.
    Band = "band",
    /// Spin channel.
    Spin = "spin",
    /// Mean-field energy.
    EnergyMeanField = "energy-mean-field",
    /// Quasiparticle energy.
    EnergyQuasiparticle = "energy-quasiparticle",
    /// Energy of one band, in a table that has a column for each.
    BandEnergy = "band-energy",
    /// Quasiparticle energy minus mean-field energy.
    Correction = "correction",
    /// Quasiparticle weight Z.
    Renormalization = "renormalization",
    /// Exchange part of the self-energy.
    Exchange = "exchange",
    /// Correlation part of the self-energy.
    Correlation = "correlation",
    /// Exchange-correlation potential.
    XcPotential = "xc-potential",
    /// Occupation.
    Occupation = "occupation",
    /// Share of an atom or orbital, by name.
    Projection = "projection",
    /// Energy of a channel, a point of a grid or a peak.
    Energy = "energy",
    /// Intensity in a channel.
    Intensity = "intensity",
    /// Intensity in a channel in one of several sweeps.
    Sweep = "sweep",
    /// Standard uncertainty of the intensity, energy or value.
    StandardUncertainty = "standard-uncertainty",
    /// Total density of states.
    Density = "density",
    /// Momentum of a measured peak.
    Momentum = "momentum",
    /// Material.
    Material = "material",
    /// Polymorph or structure.
    Polymorph = "polymorph",
    /// Gap, ionisation energy or affinity; or what a convergence series follows.
    Value = "value",
    /// What is excited: quasiparticle, optical, transport, ionisation, affinity.
    Excitation = "excitation",
    /// Where in momentum: minimum, direct, a named point.
    Transition = "transition",
    /// Method.
    Method = "method",
    /// Starting point of the method.
    StartingPoint = "starting-point",
    /// Temperature in kelvin.
    Temperature = "temperature",
    /// Source of the value.
    Origin = "source",
    /// Unit of the energies of its row.
    Unit = "unit",
    /// What a convergence series varies, by name.
    Parameter = "parameter",
}

impl Role {
    /// Reads a name back.
    #[must_use]
    pub fn from_name(text: &str) -> Option<Self> {
        Self::ALL.iter().copied().find(|role| role.name() == text)
    }

    /// Whether several columns may have it.
    #[must_use]
    pub fn is_many(self) -> bool {
        matches!(
            self,
            Self::BandEnergy | Self::Projection | Self::Sweep | Self::Value | Self::Parameter
        )
    }

    /// Whether its numbers are energies of a table of `kind`.
    pub(super) fn is_energy(self, kind: Kind) -> bool {
        match self {
            Self::EnergyMeanField
            | Self::EnergyQuasiparticle
            | Self::BandEnergy
            | Self::Correction
            | Self::Exchange
            | Self::Correlation
            | Self::XcPotential
            | Self::Energy
            | Self::Value => true,
            Self::StandardUncertainty => kind != Kind::Spectrum,
            _ => false,
        }
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
    /// Several neighbouring ones, by the numbers of the first and the last.
    Range(usize, usize),
}

impl ColumnChoice {
    /// Reads `3`, `2-9` or the text of a header cell.
    #[must_use]
    pub fn from_text(text: &str) -> Self {
        if let Ok(number) = text.parse() {
            return Self::Number(number);
        }
        let range = text
            .split_once('-')
            .and_then(|(first, last)| Some((first.parse().ok()?, last.parse().ok()?)));
        match range {
            Some((first, last)) if first <= last => Self::Range(first, last),
            _ => Self::Header(text.to_owned()),
        }
    }
}

/// What the user says of a table; each entry is evidence beside the file's own.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Hints {
    /// Which column has a role.
    pub columns: BTreeMap<Role, ColumnChoice>,
    /// The unit of a role's column. `Energy` speaks for every energy of a table of levels.
    pub units: BTreeMap<Role, String>,
    /// The axis of a measured curve.
    pub axis: Option<AxisKind>,
    /// The zero of the energies.
    pub reference: Option<Reference>,
    /// The decimal mark.
    pub decimal: Option<Decimal>,
    /// What stands between fields.
    pub delimiter: Option<Delimiter>,
    /// Which block of a file with several curves, from 1.
    pub block: Option<usize>,
    /// Where the user writes these.
    pub settle: Settle,
}

/// Where the user writes a setting, which decides how a message spells it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Settle {
    /// As an option of the command: `--column ROLE=NAME`.
    Options,
    /// As a key at a place, such as `under [photoemission] in study.toml`.
    Keys(String),
}

impl Default for Settle {
    fn default() -> Self {
        Self::Keys(String::new())
    }
}

impl Hints {
    /// A setting with the place to write it. Several are joined by "` or `" and the like.
    pub(super) fn setting(&self, setting: &str) -> String {
        match &self.settle {
            Settle::Keys(place) => format!("`{setting}` {place}").trim_end().to_owned(),
            Settle::Options => {
                let options: Vec<String> = setting.split('`').map(option).collect();
                format!("`{}`", options.join("`"))
            }
        }
    }

    /// A setting's key with the place where it stands, as evidence.
    pub(super) fn says(&self, key: &str) -> String {
        match &self.settle {
            Settle::Keys(place) => format!("{key} {place}").trim_end().to_owned(),
            Settle::Options => match key.split_once('.') {
                Some((option, role)) => format!("--{option} {role}"),
                None => format!("--{key}"),
            },
        }
    }
}

/// A setting as an option: `column.energy = 1` is `--column energy=1`.
fn option(setting: &str) -> String {
    let Some((key, value)) = setting.split_once(" = ") else {
        return setting.to_owned();
    };
    let value = value.trim_matches('"');
    match key.split_once('.') {
        Some((option, role)) => format!("--{option} {role}={value}"),
        None => format!("--{key} {value}"),
    }
}

/// The kind of a table, which decides what a header word means.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Kind {
    /// Computed levels.
    Levels,
    /// A measured curve.
    Spectrum,
    /// A computed density of states.
    Density,
    /// Measured peaks against momentum.
    Dispersion,
    /// Gaps, ionisation energies and affinities.
    Gaps,
    /// A convergence series.
    Series,
    /// Any numbers: no cell has a role.
    Any,
}

impl Kind {
    /// The kinds that a table may be.
    pub const ALL: [Self; 6] = [
        Self::Levels,
        Self::Spectrum,
        Self::Density,
        Self::Dispersion,
        Self::Gaps,
        Self::Series,
    ];

    /// The name used in options and documents.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Levels => "levels",
            Self::Spectrum => "spectrum",
            Self::Density => "density",
            Self::Dispersion => "dispersion",
            Self::Gaps => "gaps",
            Self::Series => "series",
            Self::Any => "numbers",
        }
    }

    /// Reads a name back.
    #[must_use]
    pub fn from_name(text: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|kind| kind.name() == text)
    }

    /// The roles that a column of such a table may be given.
    pub(super) fn roles(self) -> &'static [Role] {
        use Role as R;
        match self {
            Self::Levels => &[
                R::KIndex,
                R::KX,
                R::KY,
                R::KZ,
                R::KDistance,
                R::Weight,
                R::Band,
                R::Spin,
                R::EnergyMeanField,
                R::EnergyQuasiparticle,
                R::BandEnergy,
                R::Correction,
                R::Renormalization,
                R::Exchange,
                R::Correlation,
                R::XcPotential,
                R::Occupation,
                R::Projection,
                R::Unit,
            ],
            Self::Spectrum => &[R::Energy, R::Intensity, R::Sweep, R::StandardUncertainty],
            Self::Density => &[R::Energy, R::Density, R::Projection],
            Self::Dispersion => &[R::Momentum, R::Energy, R::StandardUncertainty],
            Self::Gaps => &[
                R::Material,
                R::Polymorph,
                R::Value,
                R::StandardUncertainty,
                R::Excitation,
                R::Transition,
                R::Method,
                R::StartingPoint,
                R::Temperature,
                R::Origin,
                R::Unit,
            ],
            Self::Series => &[R::Parameter, R::Value, R::StandardUncertainty, R::Unit],
            Self::Any => &[],
        }
    }

    /// The roles that such a table must have: all of one of these.
    pub(super) fn needs(self) -> &'static [&'static [Role]] {
        use Role as R;
        match self {
            Self::Levels => &[
                &[R::EnergyQuasiparticle],
                &[R::EnergyMeanField],
                &[R::BandEnergy],
            ],
            Self::Spectrum => &[&[R::Energy, R::Intensity], &[R::Energy, R::Sweep]],
            Self::Density => &[&[R::Energy, R::Density], &[R::Energy, R::Projection]],
            Self::Dispersion => &[&[R::Momentum, R::Energy]],
            Self::Gaps => &[&[R::Material, R::Value]],
            Self::Series => &[&[R::Parameter, R::Value]],
            Self::Any => &[],
        }
    }

    /// Whether a unit may be given for a role in such a table.
    pub(super) fn has_unit(self, role: Role) -> bool {
        // On levels, gaps and series `energy` speaks for every energy.
        let general =
            role == Role::Energy && matches!(self, Self::Levels | Self::Gaps | Self::Series);
        let own = self.roles().contains(&role);
        let of_density = self == Self::Density && role == Role::Projection;
        let intensity =
            self == Self::Spectrum || of_density || matches!(role, Role::Density | Role::Momentum);
        general || (own && (role.is_energy(self) || intensity))
    }

    /// Such a table in words.
    pub(super) fn in_words(self) -> &'static str {
        match self {
            Self::Levels => "a table of levels",
            Self::Spectrum => "a measured curve",
            Self::Density => "a density of states",
            Self::Dispersion => "a table of measured peaks",
            Self::Gaps => "a table of gaps",
            Self::Series => "a convergence series",
            Self::Any => "a table",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_read_back() {
        for &role in Role::ALL {
            assert_eq!(Role::from_name(role.name()), Some(role));
        }
        for kind in Kind::ALL {
            assert_eq!(Kind::from_name(kind.name()), Some(kind));
        }
    }

    #[test]
    fn settings_are_keys_or_options() {
        let setting = "column.energy = 1` and `unit.energy = \"eV\"";
        let mut hints = Hints::default();
        assert_eq!(
            hints.setting(setting),
            "`column.energy = 1` and `unit.energy = \"eV\"`"
        );
        hints.settle = Settle::Options;
        assert_eq!(
            hints.setting(setting),
            "`--column energy=1` and `--unit energy=eV`"
        );
        assert_eq!(hints.setting("axis = \"kinetic\""), "`--axis kinetic`");
        assert_eq!(hints.says("unit.energy"), "--unit energy");
    }

    #[test]
    fn choices() {
        for (text, choice) in [
            ("3", ColumnChoice::Number(3)),
            ("2-9", ColumnChoice::Range(2, 9)),
            ("E-E_F", ColumnChoice::Header("E-E_F".into())),
            ("9-2", ColumnChoice::Header("9-2".into())),
        ] {
            assert_eq!(ColumnChoice::from_text(text), choice);
        }
    }
}
