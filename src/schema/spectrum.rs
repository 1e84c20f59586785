//! A measured curve.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Document, Provenance, number};
use crate::quantity::{AxisKind, IntensityUnit, Reference};

/// What the intensity of a curve is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
#[serde(rename_all = "kebab-case")]
pub enum IntensityKind {
    /// Whole counts a channel.
    Counts,
    /// Counts per second.
    CountsPerSecond,
    /// Proportional to a signal.
    Arbitrary,
}

impl From<IntensityUnit> for IntensityKind {
    fn from(unit: IntensityUnit) -> Self {
        match unit {
            IntensityUnit::Counts => Self::Counts,
            IntensityUnit::CountsPerSecond => Self::CountsPerSecond,
            IntensityUnit::Arbitrary => Self::Arbitrary,
        }
    }
}

/// What a file says of how its curve was measured. Absent means that the file does not say.
#[derive(Debug, Clone, Default, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Conditions {
    /// Photon energy: of the source in photoemission, of the detector in inverse photoemission.
    pub photon_energy_ev: Option<f64>,
    /// Work function of the analyser.
    pub analyser_work_function_ev: Option<f64>,
    /// Work function of the cathode of the electron gun.
    pub cathode_work_function_ev: Option<f64>,
    /// Potential of the sample against the spectrometer, in volts.
    pub sample_bias_v: Option<f64>,
    /// Full width at half maximum of the instrument's Gaussian, without thermal broadening.
    pub resolution_fwhm_ev: Option<f64>,
    /// Temperature of the sample.
    pub temperature_k: Option<f64>,
    /// Pass energy of the analyser.
    pub pass_energy_ev: Option<f64>,
    /// Time spent on a channel in one sweep.
    pub dwell_s: Option<f64>,
    /// Number of sweeps that were added.
    pub sweeps: Option<f64>,
    /// The technique, in the file's words.
    pub technique: Option<String>,
}

/// A measured curve, one row a channel, in file order. Every array has the same length.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
#[serde(deny_unknown_fields)]
pub struct Spectrum {
    /// `bandrule/spectrum/1`.
    pub schema: String,
    /// Where the numbers come from.
    pub provenance: Provenance,
    /// What the energies are counted along.
    pub axis: AxisKind,
    /// What they are counted from.
    pub reference: Reference,
    /// Energies on that axis.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub energy_ev: Vec<f64>,
    /// Intensities.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub intensity: Vec<f64>,
    /// What the intensities are.
    pub intensity_kind: IntensityKind,
    /// Standard uncertainties of the intensities, in the same unit.
    #[serde(with = "number::optional_array", default)]
    #[schemars(with = "Option<Vec<number::Real>>")]
    pub standard_uncertainty: Option<Vec<f64>>,
    /// How the curve was measured.
    pub conditions: Conditions,
}

impl Document for Spectrum {
    const KIND: &'static str = "spectrum";

    fn lengths(&self) -> Vec<(&str, usize)> {
        let uncertainty = self.standard_uncertainty.as_ref();
        let uncertainty = uncertainty.map(|column| ("standard_uncertainty", column.len()));
        let mut lengths = vec![
            ("energy_ev", self.energy_ev.len()),
            ("intensity", self.intensity.len()),
        ];
        lengths.extend(uncertainty);
        lengths
    }
}
