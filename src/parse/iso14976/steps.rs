//! The record of what a spectrum was made of, line by line.

use super::abscissa::Axis;
use super::block::{Block, Real};
use super::experiment::{Experiment, Label};
use super::keyword::ScanMode;
use super::spectra::pass_energy;
use crate::parse::Source;
use crate::quantity::{EnergyUnit, Reference};
use crate::schema::Provenance;

impl Experiment {
    pub(super) fn provenance(
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
