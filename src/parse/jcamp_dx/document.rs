//! The labelled data records of a document, in order and typed.

use super::label;
use super::place::Anchors;

/// A document: every labelled data record in order, `##TITLE=` and `##END=` of each block included.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Document {
    /// Comments (`$$`) before the first record.
    pub comments: Vec<String>,
    /// The records.
    pub records: Vec<Record>,
}

/// A labelled data record, `##LABEL= value`. Where it stood is no part of what it equals.
#[derive(Debug, Clone)]
pub struct Record {
    /// The label as written, without `##` and `=`; [`super::normal_label`] makes two comparable.
    pub label: String,
    /// Its value.
    pub value: Value,
    /// The comments (`$$`) in it, in order, without the sign.
    pub comments: Vec<String>,
    /// The byte at which it begins.
    pub(super) start: usize,
}

impl Record {
    /// A record that was not read from a file.
    #[must_use]
    pub fn new(label: impl Into<String>, value: Value) -> Self {
        Self {
            label: label.into(),
            value,
            comments: Vec::new(),
            start: 0,
        }
    }

    /// Whether its label is this one, given in normal form.
    pub(super) fn is(&self, normal: &str) -> bool {
        label::normal(&self.label) == normal
    }
}

impl PartialEq for Record {
    fn eq(&self, other: &Self) -> bool {
        (&self.label, &self.value, &self.comments) == (&other.label, &other.value, &other.comments)
    }
}

/// The value of a record.
#[derive(Debug, Clone, PartialEq)]
pub enum Value {
    /// Text without its comments; lines are separated by `\n` and have no blanks at their end.
    Text(String),
    /// FIRSTX, LASTX, FIRSTY, XFACTOR, YFACTOR, DELTAX, MAXX, MINX, MAXY, MINY.
    Number(f64),
    /// NPOINTS, BLOCKS.
    Count(u64),
    /// XYDATA.
    Ordinates(Ordinates),
    /// XYPOINTS.
    Points(Points),
}

/// The table `##XYDATA= (X++(Y..Y))`: ordinates at equal steps.
#[derive(Debug, Clone, Default)]
pub struct Ordinates {
    /// The ordinates as in the file, before YFACTOR; not a number where the file has `?`.
    pub values: Vec<f64>,
    pub(super) anchors: Anchors,
}

impl Ordinates {
    /// A table that was not read from a file.
    #[must_use]
    pub fn new(values: Vec<f64>) -> Self {
        Self {
            values,
            anchors: Anchors::default(),
        }
    }
}

impl PartialEq for Ordinates {
    fn eq(&self, other: &Self) -> bool {
        same(&self.values, &other.values)
    }
}

/// The table `##XYPOINTS= (XY..XY)`: pairs at any steps.
#[derive(Debug, Clone, Default)]
pub struct Points {
    /// The abscissas as in the file, before XFACTOR.
    pub abscissas: Vec<f64>,
    /// The ordinates as in the file, before YFACTOR; not a number where the file has `?`.
    pub ordinates: Vec<f64>,
    pub(super) anchors: Anchors,
}

impl Points {
    /// A table that was not read from a file.
    #[must_use]
    pub fn new(abscissas: Vec<f64>, ordinates: Vec<f64>) -> Self {
        Self {
            abscissas,
            ordinates,
            anchors: Anchors::default(),
        }
    }
}

impl PartialEq for Points {
    fn eq(&self, other: &Self) -> bool {
        same(&self.abscissas, &other.abscissas) && same(&self.ordinates, &other.ordinates)
    }
}

/// Equal to the last bit, an invalid ordinate equal to another.
fn same(a: &[f64], b: &[f64]) -> bool {
    let pairs = || a.iter().zip(b);
    a.len() == b.len()
        && pairs().all(|(a, b)| a.to_bits() == b.to_bits() || (a.is_nan() && b.is_nan()))
}

/// The records of one block, from `##TITLE=` to `##END=`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Block<'a> {
    /// The records.
    pub records: &'a [Record],
}

impl<'a> Block<'a> {
    /// The first record with a label, in whatever spelling.
    #[must_use]
    pub fn record(&self, label: &str) -> Option<&'a Record> {
        let wanted = label::normal(label);
        self.records.iter().find(|record| record.is(&wanted))
    }

    /// The text of a record.
    #[must_use]
    pub fn text(&self, label: &str) -> Option<&'a str> {
        match &self.record(label)?.value {
            Value::Text(text) => Some(text),
            _ => None,
        }
    }

    /// The number of a record.
    #[must_use]
    pub fn number(&self, label: &str) -> Option<f64> {
        match self.record(label)?.value {
            Value::Number(number) => Some(number),
            _ => None,
        }
    }
}

impl Document {
    /// The blocks that hold data, in order: every one but LINK blocks. A curve's index counts these.
    #[must_use]
    pub fn blocks(&self) -> Vec<Block<'_>> {
        let mut blocks = Vec::new();
        let mut start = None;
        for (index, record) in self.records.iter().enumerate() {
            match (label::normal(&record.label).as_str(), &record.value) {
                (label::TITLE, _) => start = Some(index),
                (label::DATA_TYPE, Value::Text(text)) if is_link(text) => start = None,
                (label::END, _) => {
                    blocks.extend(start.take().map(|start| Block {
                        records: &self.records[start..=index],
                    }));
                }
                _ => {}
            }
        }
        blocks
    }
}

/// Whether a data type is that of a block which only holds other blocks.
pub(super) fn is_link(data_type: &str) -> bool {
    label::normal(data_type) == "LINK"
}
