//! A column that is known by its name.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::number;

/// A column and its name.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Named {
    /// The name, as the file writes it.
    pub name: String,
    /// One value a row.
    #[serde(with = "number::array")]
    #[schemars(with = "Vec<number::Real>")]
    pub values: Vec<f64>,
}

impl Named {
    /// Its name and its length.
    pub(super) fn length(&self) -> (&str, usize) {
        (&self.name, self.values.len())
    }
}
