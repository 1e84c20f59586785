//! Newtypes that are built and read through a named unit.

use super::constants::BOLTZMANN;
use super::unit::EnergyUnit;

/// An energy, or a difference of energies.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd, Default)]
pub struct Energy(f64);

impl Energy {
    /// The energy that is `value` in `unit`.
    ///
    /// ```
    /// use bandrule::quantity::{Energy, EnergyUnit};
    /// let photon = Energy::new(58.4334, EnergyUnit::Nanometre);
    /// assert!((photon.electronvolts() - 21.218).abs() < 1e-3);
    /// ```
    #[must_use]
    pub fn new(value: f64, unit: EnergyUnit) -> Self {
        Self(unit.to_electronvolts(value))
    }

    /// The value in electronvolts.
    #[must_use]
    pub fn electronvolts(self) -> f64 {
        self.0
    }

    /// The value in `unit`.
    #[must_use]
    pub fn in_unit(self, unit: EnergyUnit) -> f64 {
        unit.from_electronvolts(self.0)
    }
}

/// A thermodynamic temperature.
#[derive(Debug, Clone, Copy, PartialEq, PartialOrd)]
pub struct Temperature(f64);

impl Temperature {
    /// The temperature of `value` kelvin.
    #[must_use]
    pub fn from_kelvin(value: f64) -> Self {
        Self(value)
    }

    /// The value in kelvin.
    #[must_use]
    pub fn kelvin(self) -> f64 {
        self.0
    }

    /// The Boltzmann constant times this temperature, in electronvolts.
    #[must_use]
    pub fn thermal_energy(self) -> f64 {
        self.0 * BOLTZMANN.value
    }
}
