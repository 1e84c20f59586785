//! The curves of a result: what is drawn and what is written beside it as numbers.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// The two sides of a gap.
#[derive(
    Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize, JsonSchema,
)]
#[serde(rename_all = "kebab-case")]
pub enum Side {
    /// Occupied states, by photoemission.
    Valence,
    /// Empty states, by inverse photoemission.
    Conduction,
}

impl Side {
    /// `valence` or `conduction`.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Valence => "valence",
            Self::Conduction => "conduction",
        }
    }

    /// `photoemission` or `inverse photoemission`.
    #[must_use]
    pub fn technique(self) -> &'static str {
        match self {
            Self::Valence => "photoemission",
            Self::Conduction => "inverse photoemission",
        }
    }
}

/// One measured side on the common scale, ascending in energy, with the model that was fitted.
#[derive(Debug, Clone, PartialEq)]
pub struct SideCurve {
    /// Which side.
    pub side: Side,
    /// The unit of the intensities: `counts`, `counts/s` or `arb. u.`.
    pub intensity_unit: &'static str,
    /// Energy of the electron's state against the reference of the result, eV.
    pub energy_ev: Vec<f64>,
    /// The measured intensity.
    pub measured: Vec<f64>,
    /// Its standard uncertainty.
    pub standard_uncertainty: Vec<f64>,
    /// The fitted model, background included, also outside the fitted window.
    pub model: Vec<f64>,
    /// The background of the model.
    pub background: Vec<f64>,
    /// Measured minus model in standard uncertainties of the model.
    pub residual: Vec<f64>,
    /// First and last energy of the fitted window.
    pub window_ev: (f64, f64),
}

/// The computed density of one side, shifted and broadened as the fit found, in the intensity unit
/// of that side.
#[derive(Debug, Clone, PartialEq)]
pub struct DensityCurve {
    /// Which side.
    pub side: Side,
    /// Energies, ascending, eV against the reference of the result.
    pub energy_ev: Vec<f64>,
    /// Broadened computed density times the fitted amplitude.
    pub density: Vec<f64>,
}

/// All curves of one result.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Curves {
    /// The measured sides.
    pub sides: Vec<SideCurve>,
    /// The computed density of each measured side.
    pub densities: Vec<DensityCurve>,
}
