//! Photoelectron spectra from the blocks that hold one.

use super::block::{Block, Real};
use super::experiment::{Experiment, Label};
use super::keyword::{AnalyserMode, ExperimentMode, ScanMode};
use super::signal::{intensity, kind, reading};
use super::{Skipped, known};
use crate::parse::Source;
use crate::parse::role::Role;
use crate::quantity::{AxisKind, EnergyUnit, Reference};
use crate::schema::{Conditions, Document, Provenance, Spectrum};

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

    fn spectrum(&self, source: &Source, number: usize, b: &Block) -> Result<Spectrum, String> {
        self.is_spectrum(b)?;
        let axis = self.axis(b)?;
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

    fn axis<'a>(&self, b: &'a Block) -> Result<Axis<'a>, String> {
        let (label, part, regular) = match (&b.abscissa, b.variables.first()) {
            (Some(axis), _) => (&axis.label, 31, Some((axis.start, axis.increment))),
            (None, Some(variable)) => (variable, 32, None),
            (None, None) => return Err("there is no abscissa".into()),
        };
        let read = reading(label);
        let (Some(Role::Energy), Some(kind)) = (read.role, read.axis) else {
            return Err(format!(
                "the abscissa `{}` is named as neither kinetic, binding nor photon energy",
                label.label
            ));
        };
        Ok(Axis {
            label,
            line: b.anchor.parts[part],
            kind,
            reference: read.reference.unwrap_or(Reference::Unknown),
            unit: unit(label, &read.units, kind)?,
            regular,
        })
    }

    fn provenance(
        &self,
        source: &Source,
        number: usize,
        b: &Block,
        axis: &Axis<'_>,
        variable: usize,
    ) -> Provenance {
        let mut record = Provenance::default();
        record.sources.push(source.record().clone());
        let (first, parts) = (b.anchor.first_value_line, &b.anchor.parts);
        record.step(
            "read",
            format!(
                "block {number} `{}` from line {}: {} channels, values on lines {first} to {}",
                b.identifier,
                b.anchor.line,
                b.ordinates.len() / b.variables.len().max(1),
                first + b.ordinates.len() - 1
            ),
        );
        let (axis_line, name) = (axis.line, &axis.label.label);
        record.step(
            "axis",
            format!("{} by `{name}` on line {axis_line}", axis.kind),
        );
        if axis.reference != Reference::Unknown {
            let zero = axis.reference;
            record.step(
                "reference",
                format!("{zero} by `{name}` on line {axis_line}"),
            );
        }
        if axis.unit != EnergyUnit::Electronvolt {
            let units = &axis.label.units;
            record.step(
                "convert",
                format!("energies from {units} to eV, line {axis_line}"),
            );
        }
        let label = &b.variables[variable];
        record.step(
            "intensity",
            format!(
                "variable {} `{}` in `{}` on line {}, {} on line {}",
                variable + 1,
                label.label,
                label.units,
                parts[32],
                b.signal_mode,
                parts[33]
            ),
        );
        condition_steps(b, &mut record);
        self.left_out(b, variable, &mut record);
        record
    }

    /// What the block says and the spectrum does not.
    fn left_out(&self, b: &Block, variable: usize, record: &mut Provenance) {
        let first = usize::from(self.scan_mode == ScanMode::Irregular);
        let parts = &b.anchor.parts;
        for (index, other) in b.variables.iter().enumerate().skip(first) {
            if index != variable {
                let what = format!(
                    "variable {} `{}`, line {}",
                    index + 1,
                    other.label,
                    parts[32]
                );
                record.step("leave out", what);
            }
        }
        let mut value = |what: &str, label: &Label, value: Real, line: usize| {
            let value = value.map_or("unknown".to_owned(), |value| {
                format!("{value} {}", label.units)
            });
            record.step(
                "leave out",
                format!("{what} `{}`, {value}, line {line}", label.label),
            );
        };
        for (label, &real) in self.variables.iter().zip(b.experimental_values.iter()) {
            value("experimental variable", label, real, parts[11]);
        }
        for parameter in b.parameters.iter() {
            value("parameter", &parameter.label, parameter.value, parts[40]);
        }
    }
}

/// The abscissa of a block.
struct Axis<'a> {
    label: &'a Label,
    line: usize,
    kind: AxisKind,
    reference: Reference,
    unit: EnergyUnit,
    /// Start and increment; without them the first variable is the abscissa.
    regular: Option<(Real, Real)>,
}

impl Axis<'_> {
    fn energies(&self, b: &Block) -> Result<Vec<f64>, String> {
        let values: Vec<f64> = match self.regular {
            Some((Some(start), Some(increment))) => {
                let rows = b.ordinates.len() / b.variables.len().max(1);
                (0..u32::try_from(rows).unwrap_or(u32::MAX))
                    .map(|row| increment.mul_add(f64::from(row), start))
                    .collect()
            }
            Some(_) => return Err("the start or the increment of the abscissa is unknown".into()),
            None => column(b, 0).collect(),
        };
        if values.iter().any(|&value| known(value).is_none()) {
            return Err("a value of the abscissa is unknown".into());
        }
        let energies: Vec<f64> = values
            .into_iter()
            .map(|value| self.unit.to_electronvolts(value))
            .collect();
        if energies.iter().all(|energy| energy.is_finite()) {
            Ok(energies)
        } else {
            Err("an energy of the abscissa is not finite".into())
        }
    }
}

/// The unit of the energies, which the label may repeat and not contradict.
fn unit(label: &Label, said: &[String], axis: AxisKind) -> Result<EnergyUnit, String> {
    let (name, units) = (&label.label, label.units.trim());
    let unit = EnergyUnit::from_spelling(units)
        .filter(|unit| unit.is_linear() || axis == AxisKind::Photon)
        .ok_or_else(|| format!("the unit `{units}` of the abscissa `{name}` is no energy unit"))?;
    let agrees = |text: &String| EnergyUnit::from_spelling(text) == Some(unit);
    if said.iter().all(agrees) {
        Ok(unit)
    } else {
        Err(format!(
            "the abscissa `{name}` and its unit `{units}` contradict each other"
        ))
    }
}

/// The values of a corresponding variable.
fn column(b: &Block, variable: usize) -> impl Iterator<Item = f64> + '_ {
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
fn pass_energy(b: &Block) -> Option<f64> {
    b.pass_energy_or_ratio
        .filter(|_| b.analyser_mode == AnalyserMode::Fat)
}

fn condition_steps(b: &Block, record: &mut Provenance) {
    for (name, value, unit, part) in [
        ("photon energy", b.source_energy_ev, "eV", 14),
        ("pass energy", pass_energy(b), "eV", 22),
        ("analyser work function", b.work_function_ev, "eV", 25),
        ("sample bias", b.target_bias_v, "V", 26),
        ("dwell time", b.collection_time_s, "s", 34),
    ] {
        if let Some(value) = value {
            let line = b.anchor.parts[part];
            record.step("condition", format!("{name} {value} {unit}, line {line}"));
        }
    }
    let (technique, scans) = (b.anchor.parts[9], b.anchor.parts[35]);
    record.step(
        "condition",
        format!("technique {}, line {technique}", b.technique),
    );
    record.step("condition", format!("sweeps {}, line {scans}", b.scans));
}
