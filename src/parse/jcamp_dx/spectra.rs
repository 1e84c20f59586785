//! From blocks to curves: what the abscissas are, on what evidence, and what the ordinates are.

use super::abscissa::Abscissa;
use super::axis::Axis;
use super::document::{Block, Document, Record, Value};
use super::label;
use super::number::decimal;
use crate::parse::Skipped;
use crate::parse::Source;
use crate::parse::problem::visible;
use crate::quantity::{EnergyUnit, IntensityUnit, Reference};
use crate::schema::{Conditions, Document as _, IntensityKind, Provenance, Spectrum};

/// Records that a curve is made from, in normal form.
const USED: [&str; 15] = [
    label::TITLE,
    label::VERSION,
    label::DATA_TYPE,
    label::END,
    label::XY_DATA,
    label::XY_POINTS,
    "XUNITS",
    "YUNITS",
    "XLABEL",
    "FIRSTX",
    "LASTX",
    "NPOINTS",
    "XFACTOR",
    "YFACTOR",
    "TEMPERATURE",
];

/// Records that only repeat what the table says, and were held to it.
const CHECKED: [&str; 6] = ["FIRSTY", "DELTAX", "MINX", "MAXX", "MINY", "MAXY"];

/// A block with the text that it was read from.
pub(super) struct Curve<'a> {
    pub block: Block<'a>,
    pub source: &'a Source,
}

impl Document {
    /// Each data block as a curve, or the reason why it is none; in the order of
    /// [`Document::blocks`]. `source` is the text that the document was read from.
    #[must_use]
    pub fn spectra(&self, source: &Source) -> Vec<Result<Spectrum, Skipped>> {
        let blocks = self.blocks().into_iter();
        blocks
            .map(|block| Curve { block, source }.spectrum())
            .collect()
    }
}

impl Curve<'_> {
    fn spectrum(&self) -> Result<Spectrum, Skipped> {
        let table = self.table()?;
        let abscissa = self.abscissa()?;
        let (x, y) = self.numbers(table);
        let energy_ev = self.energies(&abscissa, &x)?;
        let y_unit = self.block.text("YUNITS").unwrap_or("");
        let unit = IntensityUnit::from_spelling(y_unit);
        Ok(Spectrum {
            schema: Spectrum::identifier(),
            provenance: self.provenance(table, &abscissa, y.len(), unit),
            axis: abscissa.axis,
            reference: abscissa.reference,
            energy_ev,
            intensity: y,
            intensity_kind: unit.map_or(IntensityKind::Arbitrary, IntensityKind::from),
            standard_uncertainty: None,
            conditions: self.conditions(),
        })
    }

    /// The record of the block's table.
    fn table(&self) -> Result<&Record, Skipped> {
        let records = self.block.records;
        let is_curve =
            |record: &&Record| matches!(record.value, Value::Ordinates(_) | Value::Points(_));
        if let Some(record) = records.iter().find(is_curve) {
            return Ok(record);
        }
        let why = |record: &Record| {
            Some((
                record.start,
                label::no_curve(&label::normal(&record.label))?,
            ))
        };
        let first = records.first().map_or(0, |record| record.start);
        let (at, why) = records
            .iter()
            .find_map(why)
            .unwrap_or((first, "the block holds no table of a curve"));
        Err(self.skipped(at, why))
    }

    pub fn skipped(&self, byte: usize, reason: impl Into<String>) -> Skipped {
        Skipped {
            line: self.source.place(byte..byte).line,
            reason: reason.into(),
        }
    }

    /// The line of a record in words; empty where the block has none.
    pub fn says(&self, label: &str) -> String {
        self.block.record(label).map_or_else(String::new, |record| {
            let line = self.source.place(record.start..record.start).line;
            match &record.value {
                Value::Text(text) => {
                    format!("`##{}= {}` (line {line})", record.label, visible(text))
                }
                Value::Number(number) => format!("{} {number} (line {line})", record.label),
                _ => format!("`##{}=` (line {line})", record.label),
            }
        })
    }

    /// Abscissas and ordinates with their factors.
    fn numbers(&self, table: &Record) -> (Vec<f64>, Vec<f64>) {
        let number = |label| self.block.number(label);
        let factor = |label| number(label).unwrap_or(1.0);
        let scaled = |values: &[f64], factor: f64| values.iter().map(|it| it * factor).collect();
        match &table.value {
            Value::Ordinates(ordinates) => {
                let ends = ["FIRSTX", "LASTX"].map(|label| number(label).unwrap_or(f64::NAN));
                let rows = ordinates.values.len();
                let axis = Axis::between(ends, rows as u64);
                let x = (0..rows).map(|row| axis.at(row)).collect();
                (x, scaled(&ordinates.values, factor("YFACTOR")))
            }
            Value::Points(points) => (
                scaled(&points.abscissas, factor("XFACTOR")),
                scaled(&points.ordinates, factor("YFACTOR")),
            ),
            _ => (Vec::new(), Vec::new()),
        }
    }

    /// The technique in the file's words, and the temperature where its unit is given.
    fn conditions(&self) -> Conditions {
        Conditions {
            technique: self.block.text("DATA TYPE").map(str::to_owned),
            temperature_k: self.block.text("TEMPERATURE").and_then(kelvin),
            ..Conditions::default()
        }
    }

    fn provenance(
        &self,
        table: &Record,
        abscissa: &Abscissa,
        count: usize,
        unit: Option<IntensityUnit>,
    ) -> Provenance {
        let mut record = Provenance::default();
        record.sources.push(self.source.record().clone());
        let line = self.source.place(table.start..table.start).line;
        let factor = |label| match self.block.record(label) {
            Some(_) => self.says(label),
            None => format!("no {label}"),
        };
        record.step(
            "read",
            format!(
                "{count} ordinates of `##{}=` from line {line} on; {}; {}",
                table.label,
                factor("XFACTOR"),
                factor("YFACTOR")
            ),
        );
        record.step(
            "axis",
            format!("{} by {}", abscissa.axis, abscissa.evidence),
        );
        if abscissa.reference != Reference::Unknown {
            record.step(
                "reference",
                format!("{} by {}", abscissa.reference, abscissa.evidence),
            );
        }
        if abscissa.unit != EnergyUnit::Electronvolt {
            let vacuum = if abscissa.unit.is_linear() {
                ""
            } else {
                ", as in vacuum"
            };
            record.step(
                "convert",
                format!("abscissas to eV{vacuum}: {}", self.says("XUNITS")),
            );
        }
        let intensity = unit.map_or("arb. u.", IntensityUnit::symbol);
        record.step(
            "intensity",
            format!("{intensity} by {}", self.says("YUNITS")),
        );
        let left_out = self.left_out();
        if !left_out.is_empty() {
            record.step(
                "leave out",
                format!("records that make no number here: {}", left_out.join(", ")),
            );
        }
        record
    }

    /// The labels of records that no number of the curve comes from.
    fn left_out(&self) -> Vec<&str> {
        let used =
            |normal: &str| USED.contains(&normal) || CHECKED.contains(&normal) || normal.is_empty();
        let records = self.block.records.iter();
        let bare_temperature = self.conditions().temperature_k.is_none();
        records
            .filter(|record| {
                let normal = label::normal(&record.label);
                !used(&normal) || (normal == "TEMPERATURE" && bare_temperature)
            })
            .map(|record| record.label.as_str())
            .collect()
    }
}

/// A temperature that is given with its unit, in kelvin.
fn kelvin(text: &str) -> Option<f64> {
    let (unit, value) = decimal(text.trim()).ok()?;
    let kelvin = match unit.trim().to_ascii_uppercase().as_str() {
        "K" | "KELVIN" => value,
        "C" | "DEG C" | "DEGREES C" | "°C" | "CELSIUS" => value + 273.15,
        _ => return None,
    };
    (kelvin >= 0.0).then_some(kelvin)
}
