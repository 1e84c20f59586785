//! What the abscissas of a block are, on what evidence: the axis, its zero and its unit.

use super::label;
use super::spectra::Curve;
use crate::parse::Skipped;
use crate::parse::header::{self, Reading};
use crate::parse::role::Kind;
use crate::quantity::{AxisKind, EnergyUnit, Reference};

/// Data types, in normal form, whose abscissa is the energy of light.
const OPTICAL: [&str; 7] = [
    "INFRAREDSPECTRUM",
    "INFRAREDTRANSFORMEDSPECTRUM",
    "NEARINFRAREDSPECTRUM",
    "UVVISSPECTRUM",
    "UVVISIBLESPECTRUM",
    "UVVISNIRSPECTRUM",
    "ULTRAVIOLETVISIBLESPECTRUM",
];

/// What the abscissas mean.
pub(super) struct Abscissa {
    pub axis: AxisKind,
    pub reference: Reference,
    pub unit: EnergyUnit,
    /// How many of that unit one abscissa is.
    pub scale: f64,
    pub evidence: String,
}

impl Curve<'_> {
    /// What the abscissas of the block are.
    pub fn abscissa(&self) -> Result<Abscissa, Skipped> {
        let readings = self.readings();
        let (axis, evidence) = self.axis(&readings)?;
        let units = self.says("XUNITS");
        let Some((unit, scale)) = self.unit(&readings) else {
            return self.no_axis(format!(
                "{units} gives no unit of energy, wavenumber or wavelength"
            ));
        };
        if axis != AxisKind::Photon && !unit.is_linear() {
            return self.no_axis(format!("{units} gives a wavelength for {axis} energy"));
        }
        let Ok(reference) = one(readings.iter().filter_map(|it| it.reference)) else {
            return self.no_axis(format!("{units} and XLABEL count from two zeros"));
        };
        Ok(Abscissa {
            axis,
            reference: reference.unwrap_or_default(),
            unit,
            scale,
            evidence,
        })
    }

    /// What the energies are counted along and who says so: a label of the axis, else for light the
    /// data type.
    fn axis(&self, readings: &[Reading]) -> Result<(AxisKind, String), Skipped> {
        let data_type = label::normal(self.block.text("DATA TYPE").unwrap_or(""));
        let (by_type, units) = (self.says("DATA TYPE"), self.says("XUNITS"));
        if data_type.contains("RAMAN") {
            return self.no_axis(format!(
                "{by_type}: a Raman shift is counted from the exciting line and is no energy of \
                 light or of an electron"
            ));
        }
        let by_label = match one(readings.iter().filter_map(|it| it.axis)) {
            Ok(axis) => axis,
            Err([a, b]) => {
                return self.no_axis(format!("{units} and XLABEL disagree: {a} and {b} energy"));
            }
        };
        match (by_label, OPTICAL.contains(&data_type.as_str())) {
            (Some(axis), true) if axis != AxisKind::Photon => self.no_axis(format!(
                "{units} says {axis} energy and {by_type} says light"
            )),
            (Some(axis), _) => match self.says("XLABEL").as_str() {
                "" => Ok((axis, units)),
                label => Ok((axis, format!("{units}, {label}"))),
            },
            (None, true) => Ok((AxisKind::Photon, format!("{by_type}, {units}"))),
            (None, false) => self.no_axis(format!(
                "{units} says neither kinetic, binding nor photon energy, and {by_type} is no \
                 spectrum of light in the standard"
            )),
        }
    }

    fn no_axis<T>(&self, reason: String) -> Result<T, Skipped> {
        let at = self.block.record("XUNITS").map_or(0, |record| record.start);
        Err(self.skipped(at, reason))
    }

    /// What XUNITS and XLABEL say in the trade's words.
    fn readings(&self) -> Vec<Reading> {
        ["XUNITS", "XLABEL"]
            .iter()
            .filter_map(|label| self.block.text(label))
            .map(|text| header::read(text, Kind::Spectrum))
            .collect()
    }

    /// The unit of the abscissas, by XUNITS or a unit in its label, and how many of it one is.
    fn unit(&self, readings: &[Reading]) -> Option<(EnergyUnit, f64)> {
        let whole = self.block.text("XUNITS").and_then(unit);
        whole.or_else(|| match readings.first()?.units.as_slice() {
            [one] => unit(one),
            _ => None,
        })
    }

    /// The abscissas as energies in eV.
    pub fn energies(&self, abscissa: &Abscissa, x: &[f64]) -> Result<Vec<f64>, Skipped> {
        let Abscissa { unit, scale, .. } = *abscissa;
        let energy = |&x: &f64| {
            let usable = unit.is_linear() || x > 0.0;
            Some(unit.to_electronvolts(x * scale)).filter(|energy| usable && energy.is_finite())
        };
        let energies: Option<Vec<f64>> = x.iter().map(energy).collect();
        energies.ok_or_else(|| {
            let at = self.block.record("FIRSTX").or(self.block.record("XUNITS"));
            let reason = format!(
                "{}: there are abscissas that give no finite energy (a wavelength must be above zero)",
                self.says("XUNITS")
            );
            self.skipped(at.map_or(0, |record| record.start), reason)
        })
    }
}

/// The value that all of some agree on; two that differ.
fn one<T: Copy + PartialEq>(mut values: impl Iterator<Item = T>) -> Result<Option<T>, [T; 2]> {
    let first = values.next();
    match (first, values.next()) {
        (Some(a), Some(b)) if a != b => Err([a, b]),
        _ => Ok(first),
    }
}

/// A unit in the standard's words or in ours, and how many of it one is.
fn unit(text: &str) -> Option<(EnergyUnit, f64)> {
    match label::normal(text).as_str() {
        "NANOMETERS" | "NANOMETRES" => Some((EnergyUnit::Nanometre, 1.0)),
        "MICROMETERS" | "MICROMETRES" => Some((EnergyUnit::Nanometre, 1_000.0)),
        _ => EnergyUnit::from_spelling(text).map(|unit| (unit, 1.0)),
    }
}
