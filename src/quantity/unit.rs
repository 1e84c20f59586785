//! Spellings of units and the factors behind them.

use std::fmt;

use super::constants::{
    BOLTZMANN, CALORIE, HARTREE, KILOJOULE_PER_MOLE, PLANCK_TIMES_LIGHT, RYDBERG, WAVENUMBER,
};

/// A unit in which an energy may be written.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum EnergyUnit {
    /// Electronvolt.
    Electronvolt,
    /// Thousandth of an electronvolt.
    Millielectronvolt,
    /// Hartree energy, the atomic unit.
    Hartree,
    /// Rydberg energy, half a hartree.
    Rydberg,
    /// Kilojoule per mole.
    KilojoulePerMole,
    /// Kilocalorie per mole (thermochemical).
    KilocaloriePerMole,
    /// Wavenumber in reciprocal centimetres.
    ReciprocalCentimetre,
    /// Wavelength in vacuum in nanometres; reciprocal to the energy.
    Nanometre,
    /// Temperature in kelvin, times the Boltzmann constant.
    Kelvin,
}

impl EnergyUnit {
    /// Every unit, in the order in which messages list them.
    pub const ALL: [Self; 9] = [
        Self::Electronvolt,
        Self::Millielectronvolt,
        Self::Hartree,
        Self::Rydberg,
        Self::KilojoulePerMole,
        Self::KilocaloriePerMole,
        Self::ReciprocalCentimetre,
        Self::Nanometre,
        Self::Kelvin,
    ];

    /// The unit's own spelling, which [`EnergyUnit::from_spelling`] reads back.
    #[must_use]
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Electronvolt => "eV",
            Self::Millielectronvolt => "meV",
            Self::Hartree => "Ha",
            Self::Rydberg => "Ry",
            Self::KilojoulePerMole => "kJ/mol",
            Self::KilocaloriePerMole => "kcal/mol",
            Self::ReciprocalCentimetre => "cm-1",
            Self::Nanometre => "nm",
            Self::Kelvin => "K",
        }
    }

    /// Reads a spelling of an energy unit. `None` where the text is none, or where it could be two:
    /// `mev` without its capital may be milli or mega.
    ///
    /// ```
    /// use bandrule::quantity::EnergyUnit;
    /// assert_eq!(EnergyUnit::from_spelling("Hartree"), Some(EnergyUnit::Hartree));
    /// assert_eq!(EnergyUnit::from_spelling("MeV"), None);
    /// ```
    #[must_use]
    pub fn from_spelling(text: &str) -> Option<Self> {
        match text {
            "meV" => return Some(Self::Millielectronvolt),
            "K" => return Some(Self::Kelvin),
            _ => {}
        }
        let folded: String = text
            .to_lowercase()
            .chars()
            .map(|c| match c {
                '−' | '–' | '⁻' => '-',
                '¹' => '1',
                other => other,
            })
            .filter(|c| !matches!(c, ' ' | '^' | '{' | '}' | '_'))
            .collect();
        match folded.as_str() {
            "ev" | "electronvolt" | "electronvolts" => Some(Self::Electronvolt),
            "ha" | "hartree" | "hartrees" | "eh" | "a.u." | "au" => Some(Self::Hartree),
            "ry" | "rydberg" | "rydbergs" => Some(Self::Rydberg),
            "kj/mol" | "kjmol-1" | "kj.mol-1" => Some(Self::KilojoulePerMole),
            "kcal/mol" | "kcalmol-1" | "kcal.mol-1" => Some(Self::KilocaloriePerMole),
            "cm-1" | "1/cm" => Some(Self::ReciprocalCentimetre),
            "nm" => Some(Self::Nanometre),
            "kelvin" => Some(Self::Kelvin),
            _ => None,
        }
    }

    /// The value in electronvolts of `value` in this unit. A wavelength is reciprocal: zero
    /// nanometres is infinite, and the caller refuses what is not finite.
    #[must_use]
    pub fn to_electronvolts(self, value: f64) -> f64 {
        match self {
            Self::Electronvolt => value,
            Self::Millielectronvolt => value / 1_000.0,
            Self::Hartree => value * HARTREE.value,
            Self::Rydberg => value * RYDBERG.value,
            Self::KilojoulePerMole => value / KILOJOULE_PER_MOLE.value,
            Self::KilocaloriePerMole => value * CALORIE.value / KILOJOULE_PER_MOLE.value,
            Self::ReciprocalCentimetre => value / WAVENUMBER.value,
            Self::Nanometre => PLANCK_TIMES_LIGHT.value / value,
            Self::Kelvin => value * BOLTZMANN.value,
        }
    }

    /// The value in this unit of `value` in electronvolts.
    #[must_use]
    pub fn from_electronvolts(self, value: f64) -> f64 {
        match self {
            Self::Electronvolt => value,
            Self::Millielectronvolt => value * 1_000.0,
            Self::Hartree => value / HARTREE.value,
            Self::Rydberg => value / RYDBERG.value,
            Self::KilojoulePerMole => value * KILOJOULE_PER_MOLE.value,
            Self::KilocaloriePerMole => value * KILOJOULE_PER_MOLE.value / CALORIE.value,
            Self::ReciprocalCentimetre => value * WAVENUMBER.value,
            Self::Nanometre => PLANCK_TIMES_LIGHT.value / value,
            Self::Kelvin => value / BOLTZMANN.value,
        }
    }

    /// Whether a difference of two energies may be written in this unit: not for a wavelength.
    #[must_use]
    pub fn is_linear(self) -> bool {
        self != Self::Nanometre
    }
}

impl fmt::Display for EnergyUnit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.symbol())
    }
}

/// What an intensity column counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum IntensityUnit {
    /// Whole counts in a channel.
    Counts,
    /// Counts per second.
    CountsPerSecond,
    /// Arbitrary units: proportional to a signal, with no known counting statistics.
    Arbitrary,
}

impl IntensityUnit {
    /// The unit's own spelling.
    #[must_use]
    pub fn symbol(self) -> &'static str {
        match self {
            Self::Counts => "counts",
            Self::CountsPerSecond => "counts/s",
            Self::Arbitrary => "arb. u.",
        }
    }

    /// Reads a spelling of an intensity unit; `a.u.` is arbitrary here, hartree only on an energy.
    #[must_use]
    pub fn from_spelling(text: &str) -> Option<Self> {
        let folded: String = text
            .to_lowercase()
            .chars()
            .filter(|c| !matches!(c, ' ' | '.' | '_' | '^' | '{' | '}'))
            .collect();
        match folded.as_str() {
            "counts" | "count" | "cts" => Some(Self::Counts),
            "cps" | "counts/s" | "cts/s" | "c/s" | "counts/sec" | "countspersecond" | "1/s"
            | "s-1" | "countss-1" | "hz" => Some(Self::CountsPerSecond),
            "au" | "arbu" | "arbunits" | "arbitraryunits" | "arb" | "arbitrary" => {
                Some(Self::Arbitrary)
            }
            _ => None,
        }
    }
}

impl fmt::Display for IntensityUnit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.symbol())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_symbol_reads_back() {
        for unit in EnergyUnit::ALL {
            assert_eq!(EnergyUnit::from_spelling(unit.symbol()), Some(unit));
        }
        for unit in [
            IntensityUnit::Counts,
            IntensityUnit::CountsPerSecond,
            IntensityUnit::Arbitrary,
        ] {
            assert_eq!(IntensityUnit::from_spelling(unit.symbol()), Some(unit));
        }
    }

    #[test]
    fn ambiguous_prefix_is_refused() {
        for text in ["mev", "MEV", "MeV", "k", "", "volt"] {
            assert_eq!(EnergyUnit::from_spelling(text), None, "{text}");
        }
    }

    #[test]
    fn atomic_unit_depends_on_the_quantity() {
        assert_eq!(EnergyUnit::from_spelling("a.u."), Some(EnergyUnit::Hartree));
        assert_eq!(
            IntensityUnit::from_spelling("a.u."),
            Some(IntensityUnit::Arbitrary)
        );
    }

    #[test]
    fn conversion_and_back_is_identity() {
        for unit in EnergyUnit::ALL {
            for value in [-3.25, 0.017, 21.218, 4_000.0] {
                let back = unit.from_electronvolts(unit.to_electronvolts(value));
                assert!((back - value).abs() <= 4.0 * f64::EPSILON * value.abs());
            }
        }
    }
}
