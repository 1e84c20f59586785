//! CODATA 2022 constants, each in one place with its standard uncertainty.
//!
//! Source: CODATA recommended values of the fundamental physical constants 2022, NIST.
//! Values marked exact follow from the defining constants of the SI (2019).

/// A physical constant with its standard uncertainty.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Constant {
    /// The recommended value, in `unit`.
    pub value: f64,
    /// The standard uncertainty, in `unit`; zero where the value is exact.
    pub standard_uncertainty: f64,
    /// The unit, as text.
    pub unit: &'static str,
}

/// The Hartree energy.
pub const HARTREE: Constant = Constant {
    value: 27.211_386_245_981,
    standard_uncertainty: 3.0e-11,
    unit: "eV",
};

/// The Rydberg constant times h c, half a Hartree energy.
pub const RYDBERG: Constant = Constant {
    value: 13.605_693_122_990,
    standard_uncertainty: 1.5e-11,
    unit: "eV",
};

/// The Boltzmann constant (exact).
pub const BOLTZMANN: Constant = Constant {
    value: 8.617_333_262_145_177e-5,
    standard_uncertainty: 0.0,
    unit: "eV/K",
};

/// The Planck constant times the speed of light (exact).
pub const PLANCK_TIMES_LIGHT: Constant = Constant {
    value: 1_239.841_984_332_002_6,
    standard_uncertainty: 0.0,
    unit: "eV nm",
};

/// The wavenumber that belongs to one electronvolt (exact).
pub const WAVENUMBER: Constant = Constant {
    value: 8_065.543_937_349_212,
    standard_uncertainty: 0.0,
    unit: "1/(cm eV)",
};

/// One electronvolt per particle, as energy per amount of substance (exact).
pub const KILOJOULE_PER_MOLE: Constant = Constant {
    value: 96.485_332_123_310_02,
    standard_uncertainty: 0.0,
    unit: "kJ/(mol eV)",
};

/// The thermochemical calorie in joules (exact by definition).
pub const CALORIE: Constant = Constant {
    value: 4.184,
    standard_uncertainty: 0.0,
    unit: "J/cal",
};
