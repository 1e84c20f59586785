//! Units of a density of states and of a momentum.

use std::fmt;

use super::EnergyUnit;

/// What a density of states counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum DensityUnit {
    /// States per unit of energy.
    StatesPer(EnergyUnit),
    /// Arbitrary units.
    Arbitrary,
}

impl DensityUnit {
    /// Reads a spelling, such as `states/eV`, `1/Ha` or `arb. u.`
    ///
    /// ```
    /// use bandrule::quantity::{DensityUnit, EnergyUnit};
    /// let unit = DensityUnit::from_spelling("states/Ry/cell");
    /// assert_eq!(unit, Some(DensityUnit::StatesPer(EnergyUnit::Rydberg)));
    /// ```
    #[must_use]
    pub fn from_spelling(text: &str) -> Option<Self> {
        let folded = text.to_lowercase().replace([' ', '^', '{', '}', '.'], "");
        let folded = folded
            .trim_end_matches("/cell")
            .trim_end_matches("/unitcell");
        if matches!(
            folded,
            "au" | "arbu" | "arbunits" | "arbitraryunits" | "arb"
        ) {
            return Some(Self::Arbitrary);
        }
        let unit = ["states/", "state/", "1/"]
            .iter()
            .find_map(|start| folded.strip_prefix(start))
            .or_else(|| {
                folded
                    .strip_suffix("-1")
                    .or_else(|| folded.strip_suffix("⁻¹"))
            })?;
        let unit = EnergyUnit::from_spelling(unit)?;
        // Per wavenumber and the like no density of states is written.
        matches!(
            unit,
            EnergyUnit::Electronvolt | EnergyUnit::Hartree | EnergyUnit::Rydberg
        )
        .then_some(Self::StatesPer(unit))
    }

    /// The value per electronvolt of `value` in this unit; arbitrary units stay as they are.
    #[must_use]
    pub fn to_per_electronvolt(self, value: f64) -> f64 {
        match self {
            Self::StatesPer(unit) => value / unit.to_electronvolts(1.0),
            Self::Arbitrary => value,
        }
    }
}

impl fmt::Display for DensityUnit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::StatesPer(unit) => write!(f, "states/{unit}"),
            Self::Arbitrary => f.write_str("arb. u."),
        }
    }
}

/// The unit of a momentum (a wave vector).
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum MomentumUnit {
    /// Reciprocal angstrom.
    ReciprocalAngstrom,
    /// Reciprocal nanometre.
    ReciprocalNanometre,
    /// Reciprocal bohr, the atomic unit.
    ReciprocalBohr,
    /// Pi over the lattice constant.
    PiOverA,
    /// Two pi over the lattice constant.
    TwoPiOverA,
}

impl MomentumUnit {
    /// Every unit.
    pub const ALL: [Self; 5] = [
        Self::ReciprocalAngstrom,
        Self::ReciprocalNanometre,
        Self::ReciprocalBohr,
        Self::PiOverA,
        Self::TwoPiOverA,
    ];

    /// The unit's own spelling.
    #[must_use]
    pub fn symbol(self) -> &'static str {
        match self {
            Self::ReciprocalAngstrom => "1/Å",
            Self::ReciprocalNanometre => "1/nm",
            Self::ReciprocalBohr => "1/bohr",
            Self::PiOverA => "pi/a",
            Self::TwoPiOverA => "2pi/a",
        }
    }

    /// Reads a spelling.
    #[must_use]
    pub fn from_spelling(text: &str) -> Option<Self> {
        let folded = text
            .to_lowercase()
            .replace([' ', '^', '{', '}', '*', '·'], "")
            .replace("⁻¹", "-1")
            .replace('−', "-")
            .replace('π', "pi");
        Some(match folded.as_str() {
            "1/å" | "å-1" | "1/a" | "a-1" | "1/angstrom" | "angstrom-1" | "1/ang" => {
                Self::ReciprocalAngstrom
            }
            "1/nm" | "nm-1" => Self::ReciprocalNanometre,
            "1/bohr" | "bohr-1" | "1/a0" => Self::ReciprocalBohr,
            "pi/a" => Self::PiOverA,
            "2pi/a" => Self::TwoPiOverA,
            _ => return None,
        })
    }
}

impl fmt::Display for MomentumUnit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.symbol())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spellings() {
        for unit in MomentumUnit::ALL {
            assert_eq!(MomentumUnit::from_spelling(unit.symbol()), Some(unit));
        }
        assert_eq!(
            MomentumUnit::from_spelling("Å⁻¹"),
            Some(MomentumUnit::ReciprocalAngstrom)
        );
        let per = DensityUnit::StatesPer;
        for (text, unit) in [
            ("states/eV", Some(per(EnergyUnit::Electronvolt))),
            ("1/Ha", Some(per(EnergyUnit::Hartree))),
            ("eV^-1", Some(per(EnergyUnit::Electronvolt))),
            ("arb. u.", Some(DensityUnit::Arbitrary)),
            ("eV", None),
        ] {
            assert_eq!(DensityUnit::from_spelling(text), unit, "{text}");
        }
        let hartree = per(EnergyUnit::Hartree).to_per_electronvolt(27.211_386_245_981);
        assert!((hartree - 1.0).abs() < 1e-12);
    }
}
