//! Where numbers come from and what was done with them.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// A file that was read.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
pub struct SourceRecord {
    /// The path as it was given.
    pub file: String,
    /// Its size in bytes.
    pub size_bytes: u64,
    /// The SHA-256 of its bytes, in lower-case hexadecimal.
    pub sha256: String,
}

/// One thing that was done with the numbers.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Step {
    /// What was done, in a few words.
    pub action: String,
    /// With which numbers, on what evidence.
    pub detail: String,
}

/// The origin of a document.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Provenance {
    /// The program and its version.
    pub program: String,
    /// The files that were read, in order.
    pub sources: Vec<SourceRecord>,
    /// What was done, in order.
    pub steps: Vec<Step>,
}

impl Default for Provenance {
    fn default() -> Self {
        Self {
            program: concat!("bandrule ", env!("CARGO_PKG_VERSION")).to_owned(),
            sources: Vec::new(),
            steps: Vec::new(),
        }
    }
}

impl Provenance {
    /// Appends a step.
    pub fn step(&mut self, action: impl Into<String>, detail: impl Into<String>) {
        self.steps.push(Step {
            action: action.into(),
            detail: detail.into(),
        });
    }
}
