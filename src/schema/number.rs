//! Numbers that may not be finite. JSON has no spelling for them, so they travel as the strings
//! `"nan"`, `"inf"` and `"-inf"`; every finite double survives to its last bit.

use schemars::JsonSchema;
use serde::{Deserialize, Deserializer, Serialize, Serializer};

/// A double that serializes even where it is not finite.
#[derive(Debug, Clone, Copy, PartialEq, JsonSchema)]
#[schemars(untagged)]
#[allow(dead_code)] // The variants describe the JSON shape to the schema generator.
enum RealShape {
    /// A finite number.
    Finite(f64),
    /// A number that is not finite.
    NotFinite(Word),
}

/// The spellings of numbers that are not finite.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize, JsonSchema)]
enum Word {
    #[serde(rename = "nan")]
    Nan,
    #[serde(rename = "inf")]
    Infinity,
    #[serde(rename = "-inf")]
    MinusInfinity,
}

/// One double.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Real(pub f64);

impl JsonSchema for Real {
    fn schema_name() -> std::borrow::Cow<'static, str> {
        "Real".into()
    }
    fn json_schema(generator: &mut schemars::SchemaGenerator) -> schemars::Schema {
        RealShape::json_schema(generator)
    }
}

impl Serialize for Real {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        if self.0.is_finite() {
            serializer.serialize_f64(self.0)
        } else if self.0.is_nan() {
            Word::Nan.serialize(serializer)
        } else if self.0 > 0.0 {
            Word::Infinity.serialize(serializer)
        } else {
            Word::MinusInfinity.serialize(serializer)
        }
    }
}

impl<'de> Deserialize<'de> for Real {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        #[derive(Deserialize)]
        #[serde(
            untagged,
            expecting = "expected a number, or one of \"nan\", \"inf\", \"-inf\""
        )]
        enum Either {
            Number(f64),
            Word(Word),
        }
        Ok(Self(match Either::deserialize(deserializer)? {
            Either::Number(value) => value,
            Either::Word(Word::Nan) => f64::NAN,
            Either::Word(Word::Infinity) => f64::INFINITY,
            Either::Word(Word::MinusInfinity) => f64::NEG_INFINITY,
        }))
    }
}

/// For `#[serde(with = "array")]` on a `Vec<f64>`.
pub mod array {
    use super::{Deserialize, Deserializer, Real, Serializer};

    /// Writes each value as a [`Real`].
    ///
    /// # Errors
    /// Those of the serializer.
    pub fn serialize<S: Serializer>(values: &[f64], serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(values.iter().map(|&value| Real(value)))
    }

    /// Reads each value as a [`Real`].
    ///
    /// # Errors
    /// Those of the deserializer, where an entry is neither a number nor one of the words.
    pub fn deserialize<'de, D: Deserializer<'de>>(deserializer: D) -> Result<Vec<f64>, D::Error> {
        let reals = Vec::<Real>::deserialize(deserializer)?;
        Ok(reals.into_iter().map(|real| real.0).collect())
    }
}

/// For `#[serde(with = "optional_array")]` on an `Option<Vec<f64>>`.
pub mod optional_array {
    use super::{Deserialize, Deserializer, Real, Serialize, Serializer};

    /// Writes each value as a [`Real`], or null.
    ///
    /// # Errors
    /// Those of the serializer.
    // The signature is the one that serde's `with` asks for.
    #[allow(clippy::ref_option)]
    pub fn serialize<S: Serializer>(
        values: &Option<Vec<f64>>,
        serializer: S,
    ) -> Result<S::Ok, S::Error> {
        values
            .as_ref()
            .map(|values| values.iter().map(|&value| Real(value)).collect::<Vec<_>>())
            .serialize(serializer)
    }

    /// Reads each value as a [`Real`], or null.
    ///
    /// # Errors
    /// Those of the deserializer, where an entry is neither a number nor one of the words.
    pub fn deserialize<'de, D: Deserializer<'de>>(
        deserializer: D,
    ) -> Result<Option<Vec<f64>>, D::Error> {
        let reals = Option::<Vec<Real>>::deserialize(deserializer)?;
        Ok(reals.map(|reals| reals.into_iter().map(|real| real.0).collect()))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words_and_last_bits_survive() {
        let values = [
            f64::NAN,
            f64::INFINITY,
            f64::NEG_INFINITY,
            0.1 + 0.2,
            5e-324,
            f64::MAX,
            -0.0,
        ];
        for value in values {
            let text = serde_json::to_string(&Real(value)).unwrap();
            let back: Real = serde_json::from_str(&text).unwrap();
            assert!(
                back.0.to_bits() == value.to_bits() || (back.0.is_nan() && value.is_nan()),
                "{text}"
            );
        }
    }
}
