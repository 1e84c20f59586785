//! The zero that the energies of a table are counted from.

use super::evidence::{Evidence, agree};
use super::role::Hints;
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
    evidence.extend(table.metadata.references.iter().cloned());
    let hinted = hints.reference.filter(|&zero| zero != Reference::Unknown);
    evidence.extend(hinted.map(|zero| Evidence::setting(zero, hints.says("reference"))));
    agree("the zero of the energies", evidence)
}
