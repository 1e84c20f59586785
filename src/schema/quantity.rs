//! A value with its standard uncertainty.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

/// A value in eV with its standard uncertainty (GUM, JCGM 100:2008); absent where none is stated.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Quantity {
    /// The estimate, in eV.
    pub value: f64,
    /// Its standard uncertainty, in eV; null where not stated.
    pub standard_uncertainty: Option<f64>,
    /// Lower end of the 95 % interval, given where the interval is not symmetric or not k = 2.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub lower: Option<f64>,
    /// Upper end of the 95 % interval.
    #[serde(skip_serializing_if = "Option::is_none", default)]
    pub upper: Option<f64>,
}

impl Quantity {
    /// A value with a standard uncertainty.
    #[must_use]
    pub fn new(value: f64, standard_uncertainty: f64) -> Self {
        Self {
            value,
            standard_uncertainty: Some(standard_uncertainty),
            lower: None,
            upper: None,
        }
    }

    /// A value whose uncertainty nobody stated.
    #[must_use]
    pub fn unstated(value: f64) -> Self {
        Self {
            value,
            standard_uncertainty: None,
            lower: None,
            upper: None,
        }
    }

    /// The same value with a 95 % interval of half width `expanded`.
    #[must_use]
    pub fn with_interval(self, expanded: f64) -> Self {
        Self {
            lower: Some(self.value - expanded),
            upper: Some(self.value + expanded),
            ..self
        }
    }

    /// The standard uncertainty, or zero where none is stated.
    #[must_use]
    pub fn uncertainty_or_zero(&self) -> f64 {
        self.standard_uncertainty.unwrap_or(0.0)
    }
}
