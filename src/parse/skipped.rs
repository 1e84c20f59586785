//! Which lines of a table were read past, and why.

use std::collections::BTreeSet;

use super::Source;
use super::metadata;
use super::table::Table;

/// A line that was read past.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Skipped {
    /// The 1-based line.
    pub line: usize,
    /// Why.
    pub reason: String,
}

/// Why a comment on energies may be no evidence.
const IN_PART: &str = "a comment that is not understood to its end, so that nothing of it is used";
/// Lines that are listed.
const LISTED: usize = 20;

/// The first lines that were skipped, and how many there are.
pub(super) fn skipped(source: &Source, table: &Table) -> (Vec<Skipped>, usize) {
    let understood = understood(table);
    let mut lines: Vec<(usize, &str)> = Vec::new();
    let layout = &table.layout;
    for span in layout.comments.iter().map(|aside| &aside.span) {
        let reason = match metadata::is_statement(source.slice(span.clone())) {
            true => "a statement that is not known here",
            false => "a comment",
        };
        lines.push((span.start, reason));
    }
    lines.extend(
        layout
            .bare
            .iter()
            .map(|span| (span.start, "text before the table")),
    );
    lines.extend(
        layout
            .repeated
            .iter()
            .map(|span| (span.start, "the names once more")),
    );
    lines.extend(
        layout
            .rulers
            .iter()
            .map(|span| (span.start, "a drawn line")),
    );
    lines.sort_unstable();
    // Beyond some lines each is counted without being looked up.
    let (near, far) = lines.split_at(lines.len().min(10 * LISTED));
    let mut skipped: Vec<Skipped> = near
        .iter()
        .map(|&(at, reason)| {
            let place = source.place(at..at);
            let in_part = table.metadata.in_part.contains(&place.line);
            let reason = if in_part { IN_PART } else { reason };
            (place.line, reason, place.quoted())
        })
        .filter(|(line, ..)| !understood.contains(line))
        .map(|(line, reason, text)| Skipped {
            line,
            reason: format!("{reason}: `{text}`"),
        })
        .collect();
    let all = skipped.len() + far.len();
    skipped.truncate(LISTED);
    (skipped, all)
}

/// The lines that gave names, units, conditions, an axis or a zero.
fn understood(table: &Table) -> BTreeSet<usize> {
    let metadata = &table.metadata;
    let known = metadata.known.iter();
    let mut lines: BTreeSet<usize> = known
        .map(|(.., index)| metadata.statements[*index].place.line)
        .collect();
    let places = [
        metadata
            .energy_units
            .iter()
            .map(|(_, e)| &e.place)
            .collect::<Vec<_>>(),
        metadata.intensity_units.iter().map(|e| &e.place).collect(),
        metadata.energy_kinds.iter().map(|e| &e.place).collect(),
        metadata.axes.iter().map(|e| &e.place).collect(),
        metadata.references.iter().map(|e| &e.place).collect(),
    ];
    lines.extend(
        places
            .into_iter()
            .flatten()
            .flatten()
            .map(|place| place.line),
    );
    lines.extend(table.line);
    lines.extend(table.units_line);
    lines
}
