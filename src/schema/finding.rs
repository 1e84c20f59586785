//! What a rule says of a user's data.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// How much a finding matters.
#[derive(
    Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Serialize, Deserialize, JsonSchema,
)]
#[serde(rename_all = "kebab-case")]
pub enum Severity {
    /// Worth knowing.
    Note,
    /// Probably wrong, or a reason for care.
    Warning,
    /// Makes a number wrong or the job impossible.
    Error,
}

impl Severity {
    /// The word used in messages, options and documents.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Note => "note",
            Self::Warning => "warning",
            Self::Error => "error",
        }
    }
}

/// The field that a finding points at.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
pub struct Field {
    /// The 1-based column of the table.
    pub index: usize,
    /// Its header, empty where the table has none.
    pub header: String,
}

/// One finding.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Finding {
    /// The rule that found it.
    pub rule: String,
    /// How much it matters.
    pub severity: Severity,
    /// The file.
    pub file: String,
    /// The 1-based line in the text.
    pub line: usize,
    /// The 1-based column of characters in the line.
    pub column: usize,
    /// The field of the table, where the finding is about one.
    pub field: Option<Field>,
    /// What is wrong, in one sentence.
    pub message: String,
    /// The numbers behind it.
    pub evidence: String,
    /// What to do about it.
    pub remedy: String,
}
