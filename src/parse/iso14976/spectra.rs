//! Photoelectron spectra from the blocks that hold one.

use std::ops::Range;

use super::abscissa::Axis;
use super::block::Block;
use super::experiment::Experiment;
use super::keyword::{AnalyserMode, ExperimentMode, ScanMode};
use super::known;
use super::signal::{intensity, kind};
use crate::parse::{Skipped, Source};
use crate::schema::{Conditions, Document, Spectrum};

impl Experiment {
    /// A spectrum for each block, in order, or why the block is none.
    ///
    /// The photon energy is the characteristic energy of the analysis source. The zero of the
    /// energies is what the label of the abscissa says, else it is unknown.
    #[must_use]
    pub fn spectra(&self, source: &Source) -> Vec<Result<Spectrum, Skipped>> {
        let skipped = |block: &Block, reason| Skipped {
            line: block.anchor.line(),
            reason,
        };
        (1..)
            .zip(&self.blocks)
            .map(|(number, block)| {
                self.spectrum(source, number, block)
                    .map_err(|reason| skipped(block, reason))
            })
            .collect()
    }

    /// What the energies and the intensities of a block are called.
    pub(in crate::parse) fn labels(&self, curve: usize) -> [String; 2] {
        let Some(block) = self.blocks.get(curve) else {
            return Default::default();
        };
        let variable = |index: usize| block.variables.get(index);
        let abscissa = block.abscissa.as_ref().map(|abscissa| &abscissa.label);
        let intensity = self.intensity_variable(curve).and_then(variable);
        [abscissa.or(variable(0)), intensity]
            .map(|label| label.map_or_else(String::new, |l| format!("{} ({})", l.label, l.units)))
    }

    /// Where the energy (field 0) or the intensity (field 1) of a row stands.
    pub(in crate::parse) fn field_span(
        &self,
        source: &Source,
        curve: usize,
        row: usize,
        field: usize,
    ) -> Option<Range<usize>> {
        let variable = match field {
            0 if self.scan_mode == ScanMode::Regular => return None,
            0 => 0,
            _ => self.intensity_variable(curve)?,
        };
        self.value_span(source, curve, row, variable)
    }

    fn spectrum(&self, source: &Source, number: usize, b: &Block) -> Result<Spectrum, String> {
        self.is_spectrum(b)?;
        let axis = Axis::of(b)?;
        let variable = intensity(b, self.scan_mode)?;
        let label = b.variables.get(variable).ok_or("no such variable")?;
        let intensity_kind = kind(label, b.signal_mode)?;
        let energy_ev = axis.energies(b)?;
        let intensity = column(b, variable).map(|value| known(value).unwrap_or(f64::NAN));
        Ok(Spectrum {
            schema: Spectrum::identifier(),
            axis: axis.kind,
            reference: axis.reference,
            intensity: intensity.collect(),
            intensity_kind,
            standard_uncertainty: None,
            conditions: conditions(b),
            provenance: self.provenance(source, number, b, &axis, variable),
            energy_ev,
        })
    }

    fn is_spectrum(&self, b: &Block) -> Result<(), String> {
        match (self.mode, self.scan_mode) {
            (
                ExperimentMode::Norm | ExperimentMode::Sdp,
                ScanMode::Regular | ScanMode::Irregular,
            ) => {}
            (ExperimentMode::Norm | ExperimentMode::Sdp, ScanMode::Mapping) => {
                return Err("scan mode MAPPING is an image and no spectrum".into());
            }
            (ExperimentMode::SdpSv, _) => {
                return Err("experiment mode SDPSV has one value a depth and no spectrum".into());
            }
            (mode, _) => {
                return Err(format!(
                    "experiment mode {mode} is a map or an image and no single spectrum"
                ));
            }
        }
        if !b.technique.is_photoemission() {
            return Err(format!(
                "technique {} is no photoemission: UPS and XPS are read",
                b.technique
            ));
        }
        if b.ordinates.is_empty() {
            return Err("there are no ordinate values".into());
        }
        Ok(())
    }
}

/// The values of a corresponding variable.
pub(super) fn column(b: &Block, variable: usize) -> impl Iterator<Item = f64> + '_ {
    let step = b.variables.len().max(1);
    b.ordinates.iter().skip(variable).step_by(step).copied()
}

fn conditions(b: &Block) -> Conditions {
    Conditions {
        photon_energy_ev: b.source_energy_ev,
        analyser_work_function_ev: b.work_function_ev,
        sample_bias_v: b.target_bias_v,
        pass_energy_ev: pass_energy(b),
        dwell_s: b.collection_time_s,
        // A number of scans is far below 2^52.
        #[allow(clippy::cast_precision_loss)]
        sweeps: Some(b.scans as f64),
        technique: Some(b.technique.to_string()),
        ..Conditions::default()
    }
}

/// The pass energy, which is constant with fixed analyser transmission only.
pub(super) fn pass_energy(b: &Block) -> Option<f64> {
    b.pass_energy_or_ratio
        .filter(|_| b.analyser_mode == AnalyserMode::Fat)
}
