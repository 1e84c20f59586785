//! The zero that the energies of a table are counted from.

use super::evidence::{Evidence, settled};
use super::role::{Hints, Settle};
use super::table::Table;
use super::{Problem, Source};
use crate::quantity::Reference;

/// The zero that headers of `fields`, comments and the user give, all of whom must agree.
pub(super) fn reference(
    source: &Source,
    table: &Table,
    fields: &[usize],
    hints: &Hints,
) -> Result<Option<Evidence<Reference>>, Problem> {
    let mut evidence = Vec::new();
    for &field in fields {
        if let Some(zero) = table.names[field].reading.reference {
            let place = table.place_of(source, field);
            evidence.push(Evidence::at(zero, table.says(field), place));
        }
    }
    let in_part = !evidence.is_empty() && evidence.len() < fields.len();
    evidence.extend(table.metadata.references.iter().cloned());
    let by_all = !table.metadata.references.is_empty() || hints.reference.is_some();
    if let (true, false, Some(zero)) = (in_part, by_all, evidence.first()) {
        let other = fields
            .iter()
            .find(|&&field| table.names[field].reading.reference.is_none());
        let field = other.copied().unwrap_or(0);
        return Err(Problem::new(format!(
            "the zero of column {} `{}` is not said, while {} gives {}",
            field + 1,
            table.names[field].text,
            zero.says,
            zero.value
        ))
        .at(table.place_of(source, field))
        .with_help(format!(
            "name the zero of every energy, or write {}",
            hints.setting(&format!("reference = \"{}\"", zero.value))
        )));
    }
    // A study may leave the zero open; an option overrules the file even so.
    let open = hints.settle != Settle::Options;
    let hinted = hints
        .reference
        .filter(|&zero| !open || zero != Reference::Unknown);
    let hint = hinted.map(|zero| Evidence::setting(zero, hints.says("reference")));
    settled("the zero of the energies", evidence, hint, hints)
}
