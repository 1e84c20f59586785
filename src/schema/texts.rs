//! Many short texts in one allocation.

use std::borrow::Cow;

use schemars::{JsonSchema, Schema, SchemaGenerator};
use serde::de::{SeqAccess, Visitor};
use serde::{Deserialize, Deserializer, Serialize, Serializer};

/// A column of texts, one a row; JSON writes it as an array of strings.
///
/// ```
/// use bandrule::schema::Texts;
/// let texts: Texts = ["Si", "", "diamond"].into_iter().collect();
/// assert_eq!((texts.len(), texts.get(2)), (3, Some("diamond")));
/// ```
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Texts {
    all: String,
    ends: Vec<usize>,
}

impl Texts {
    /// Appends a text.
    pub fn push(&mut self, text: &str) {
        self.all.push_str(text);
        self.ends.push(self.all.len());
    }

    /// Appends the texts of another column.
    pub fn append(&mut self, other: &Self) {
        let base = self.all.len();
        self.all.push_str(&other.all);
        self.ends.extend(other.ends.iter().map(|end| base + end));
    }

    /// Keeps the first `rows` texts.
    pub fn truncate(&mut self, rows: usize) {
        self.ends.truncate(rows);
        self.all.truncate(self.ends.last().copied().unwrap_or(0));
    }

    /// The number of texts.
    #[must_use]
    pub fn len(&self) -> usize {
        self.ends.len()
    }

    /// Whether there is none.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.ends.is_empty()
    }

    /// The text of a row.
    #[must_use]
    pub fn get(&self, row: usize) -> Option<&str> {
        let end = *self.ends.get(row)?;
        let start = row.checked_sub(1).map_or(0, |before| self.ends[before]);
        self.all.get(start..end)
    }

    /// The texts in order.
    #[must_use]
    pub fn iter(&self) -> impl ExactSizeIterator<Item = &str> {
        (0..self.len()).map(|row| self.get(row).unwrap_or_default())
    }
}

impl<'a> FromIterator<&'a str> for Texts {
    fn from_iter<I: IntoIterator<Item = &'a str>>(texts: I) -> Self {
        let mut column = Self::default();
        texts.into_iter().for_each(|text| column.push(text));
        column
    }
}

impl Serialize for Texts {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_seq(self.iter())
    }
}

impl<'de> Deserialize<'de> for Texts {
    fn deserialize<D: Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        struct Column;
        impl<'de> Visitor<'de> for Column {
            type Value = Texts;

            fn expecting(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
                f.write_str("an array of strings")
            }

            fn visit_seq<A: SeqAccess<'de>>(self, mut items: A) -> Result<Texts, A::Error> {
                let mut texts = Texts::default();
                while let Some(text) = items.next_element::<Cow<'de, str>>()? {
                    texts.push(&text);
                }
                Ok(texts)
            }
        }
        deserializer.deserialize_seq(Column)
    }
}

impl JsonSchema for Texts {
    fn schema_name() -> Cow<'static, str> {
        Vec::<String>::schema_name()
    }

    fn inline_schema() -> bool {
        true
    }

    fn json_schema(generator: &mut SchemaGenerator) -> Schema {
        Vec::<String>::json_schema(generator)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn texts_are_kept_and_json_has_strings() {
        let mut texts: Texts = ["a", "", "µ\"b"].into_iter().collect();
        texts.append(&["c"].into_iter().collect());
        let json = serde_json::to_string(&texts).unwrap();
        assert_eq!(json, r#"["a","","µ\"b","c"]"#);
        assert_eq!(serde_json::from_str::<Texts>(&json).unwrap(), texts);
        texts.truncate(2);
        assert_eq!(texts.iter().collect::<Vec<_>>(), ["a", ""]);
    }
}
