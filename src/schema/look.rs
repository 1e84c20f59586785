//! What was understood of some files, as `look --json` prints it.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::number::Real;
use super::{Document, Provenance};
use crate::quantity::Reference;

/// What was understood of some files.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Look {
    /// `bandrule/look/1`.
    pub schema: String,
    /// The files, and the curves of files that hold several, in order.
    pub files: Vec<LookFile>,
}

impl Document for Look {
    const KIND: &'static str = "look";
}

/// What was understood of a file, or of one of its curves.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct LookFile {
    /// The path as it was given.
    pub file: String,
    /// Which curve of the file, from 1, where it may hold several.
    pub block: Option<usize>,
    /// The kind: `levels`, `spectrum`, `density`, `dispersion`, `gaps` or `series`.
    pub kind: String,
    /// Rows of the file.
    pub rows: usize,
    /// How its bytes are text.
    pub encoding: String,
    /// How its rows are written.
    pub dialect: String,
    /// The 1-based line of the names.
    pub names_line: Option<usize>,
    /// Blocks of rows that blank lines make.
    pub blocks: usize,
    /// The zero of the energies, where the kind has one.
    pub reference: Option<Reference>,
    /// Its columns, in order.
    pub columns: Vec<LookColumn>,
    /// What it says of a measurement or a computation.
    pub conditions: Vec<LookCondition>,
    /// The first lines that were skipped.
    pub skipped: Vec<LookSkipped>,
    /// How many lines were skipped.
    pub skipped_lines: usize,
    /// The options that would change a conclusion.
    pub options: Vec<LookOption>,
    /// The file, and what was done with its numbers.
    pub provenance: Provenance,
}

/// What was understood of a column. The numbers are those of the file, in its unit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct LookColumn {
    /// The text of its header cell.
    pub header: String,
    /// What it is; absent where it is not used.
    pub role: Option<String>,
    /// The unit of its numbers.
    pub unit: Option<String>,
    /// Who says so.
    pub evidence: String,
    /// How many values there are.
    pub count: usize,
    /// How many rows have none.
    pub missing: usize,
    /// The least value.
    pub minimum: Option<Real>,
    /// The greatest value.
    pub maximum: Option<Real>,
    /// The sum of the values.
    pub sum: Option<Real>,
    /// Their course over the rows, as signs of rising height.
    pub picture: String,
}

/// A condition that the file states.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct LookCondition {
    /// The key, as the file writes it.
    pub key: String,
    /// The value, as the file writes it.
    pub value: String,
    /// The 1-based line.
    pub line: usize,
}

/// A line that was skipped.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct LookSkipped {
    /// The 1-based line.
    pub line: usize,
    /// Why.
    pub reason: String,
}

/// An option that would change a conclusion.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct LookOption {
    /// What was concluded.
    pub concluded: String,
    /// The option, as it is written on the command line.
    pub option: String,
}
