//! What was understood of a file, as a document of its own.

use super::any::AnyParsed;
use super::dialect::Delimiter;
use super::number::Decimal;
use super::parsed::{Column, Manner};
use super::role::Kind;
use crate::quantity::Reference;
use crate::schema::number::Real;
use crate::schema::{LookColumn, LookCondition, LookFile, LookOption, LookSkipped};

impl AnyParsed {
    /// What was understood of the file.
    #[must_use]
    pub fn look(&self) -> LookFile {
        let (source, manner) = (self.source(), self.manner());
        let conditions = self
            .conditions()
            .into_iter()
            .map(|statement| LookCondition {
                key: statement.key.clone(),
                value: statement.value.clone(),
                line: statement.place.line,
            });
        let skipped = manner.skipped.iter().map(|skipped| LookSkipped {
            line: skipped.line,
            reason: skipped.reason.clone(),
        });
        let encoding = source.encoding().name();
        LookFile {
            file: source.name().to_owned(),
            block: manner.curve,
            kind: self.kind().name().to_owned(),
            rows: manner.rows,
            encoding: match source.is_gzip() {
                true => format!("{encoding}, gzip"),
                false => encoding.to_owned(),
            },
            dialect: manner.dialect.clone(),
            names_line: manner.names_line,
            blocks: manner.blocks,
            reference: self.reference(),
            columns: self.columns().iter().map(column).collect(),
            conditions: conditions.collect(),
            skipped: skipped.collect(),
            skipped_lines: manner.skipped_lines,
            options: options(self.kind(), self.reference(), manner, self.columns()),
            provenance: self.provenance().clone(),
        }
    }
}

fn column(column: &Column) -> LookColumn {
    let summary = column.summary.as_ref();
    LookColumn {
        header: column.header.clone(),
        role: column.role.map(|role| role.name().to_owned()),
        unit: column.unit.clone(),
        evidence: column.evidence.clone(),
        count: summary.map_or(0, |s| s.count),
        missing: summary.map_or(0, |s| s.missing),
        minimum: summary.and_then(|s| s.minimum).map(Real),
        maximum: summary.and_then(|s| s.maximum).map(Real),
        sum: summary.and_then(|s| s.sum).map(Real),
        picture: summary.map_or_else(String::new, |s| s.picture.clone()),
    }
}

/// The options that would change what was concluded of a table; a document or a curve of a standard
/// says itself what it is.
fn options(
    kind: Kind,
    reference: Option<Reference>,
    manner: &Manner,
    columns: &[Column],
) -> Vec<LookOption> {
    let Some((delimiter, decimal)) = manner.signs else {
        return Vec::new();
    };
    let mut options = Vec::new();
    let mut add =
        |concluded: String, option: String| options.push(LookOption { concluded, option });
    let others = |all: Vec<&str>, own: &str| -> String {
        let others: Vec<&str> = all.into_iter().filter(|other| *other != own).collect();
        others.join("|")
    };
    let kinds = Kind::ALL.iter().map(|kind| kind.name()).collect();
    add(
        format!("kind {}", kind.name()),
        format!("--as {}", others(kinds, kind.name())),
    );
    let delimiters = Delimiter::ALL.iter().map(|d| d.name()).collect();
    add(
        format!("fields {}", delimiter.in_words()),
        format!("--delimiter {}", others(delimiters, delimiter.name())),
    );
    let decimals = vec![Decimal::Point.name(), Decimal::Comma.name()];
    add(
        format!("decimal {}", decimal.name()),
        format!("--decimal {}", others(decimals, decimal.name())),
    );
    for column in columns {
        let number = column.index + 1;
        let Some(role) = column.role else {
            add(
                format!("column {number} not used"),
                format!("--column ROLE={number}"),
            );
            continue;
        };
        if !role.is_many() {
            let other = if number == 1 { "2" } else { "1" };
            add(
                format!("column {number} is {role}"),
                format!("--column {role}={other}"),
            );
        }
        if let Some(unit) = &column.unit {
            add(format!("{role} in {unit}"), format!("--unit {role}=UNIT"));
        }
    }
    if let Some(reference) = reference {
        let all = Reference::ALL
            .iter()
            .map(|reference| reference.name())
            .collect();
        add(
            format!("zero {reference}"),
            format!("--reference {}", others(all, reference.name())),
        );
    }
    options
}
