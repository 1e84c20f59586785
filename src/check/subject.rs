//! What a rule is shown: a document with the places of its values.

use crate::parse::{Parsed, Place, Role};
use crate::schema::{Field, Finding, Levels, Spectrum};

use super::catalogue::Rule;

/// A document under the rules.
#[derive(Debug, Clone, Copy)]
pub enum Subject<'a> {
    /// Computed levels.
    Levels(&'a Parsed<Levels>),
    /// A measured curve.
    Spectrum(&'a Parsed<Spectrum>),
}

impl<'a> Subject<'a> {
    /// The levels, where it is these.
    #[must_use]
    pub fn levels(&self) -> Option<&'a Levels> {
        match self {
            Self::Levels(parsed) => Some(&parsed.document),
            Self::Spectrum(_) => None,
        }
    }

    /// The curve, where it is one.
    #[must_use]
    pub fn spectrum(&self) -> Option<&'a Spectrum> {
        match self {
            Self::Levels(_) => None,
            Self::Spectrum(parsed) => Some(&parsed.document),
        }
    }

    fn place(&self, row: usize, role: Role) -> Option<Place> {
        match self {
            Self::Levels(parsed) => parsed.place_of(row, role),
            Self::Spectrum(parsed) => parsed.place_of(row, role),
        }
    }

    fn field(&self, role: Role) -> Option<Field> {
        let (index, columns) = match self {
            Self::Levels(parsed) => (parsed.field_of(role)?, &parsed.columns),
            Self::Spectrum(parsed) => (parsed.field_of(role)?, &parsed.columns),
        };
        let header = columns
            .iter()
            .find(|column| column.index == index)
            .map_or_else(String::new, |column| column.header.clone());
        Some(Field {
            index: index + 1,
            header,
        })
    }

    fn file(&self) -> &str {
        match self {
            Self::Levels(parsed) => parsed.source.name(),
            Self::Spectrum(parsed) => parsed.source.name(),
        }
    }

    /// The text of a value as it stands in the file.
    #[must_use]
    pub fn text(&self, row: usize, role: Role) -> String {
        self.place(row, role).map_or_else(String::new, |place| {
            let highlight = place.highlight.clone();
            place
                .excerpt
                .chars()
                .skip(highlight.start)
                .take(highlight.len())
                .collect()
        })
    }

    /// The 1-based line of a row.
    #[must_use]
    pub fn line(&self, row: usize, role: Role) -> usize {
        self.place(row, role).map_or(1, |place| place.line)
    }

    /// A finding of `rule` at one value.
    #[must_use]
    pub fn finding(
        &self,
        rule: &dyn Rule,
        at: (usize, Role),
        message: String,
        evidence: String,
        remedy: impl Into<String>,
    ) -> Finding {
        let place = self.place(at.0, at.1);
        Finding {
            rule: rule.name().to_owned(),
            severity: rule.severity(),
            file: self.file().to_owned(),
            line: place.as_ref().map_or(1, |place| place.line),
            column: place.as_ref().map_or(1, |place| place.column),
            field: self.field(at.1),
            message,
            evidence,
            remedy: remedy.into(),
        }
    }
}
