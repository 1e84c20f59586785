//! The cells of a header line that is separated by blanks while its cells have blanks in them, as in
//! `k  E_QP (eV)  Kinetic energy / eV`.

use std::ops::Range;

use super::header;
use super::role::Kind;

/// Words that one name may have.
const LONGEST_NAME: usize = 6;
/// Words beyond which a line is prose, and the ways to group it are not searched.
const MOST_ATOMS: usize = 60;

/// Why a line could not be grouped into the wanted number of cells.
#[derive(Debug, PartialEq)]
pub(super) enum Ungrouped {
    /// It has this many cells.
    Count(usize),
    /// Two of the ways that it could be.
    Ambiguous([Vec<Range<usize>>; 2]),
}

/// Groups the words of a line into `wanted` cells: where two blanks or a tab stand, if that gives the
/// number; else as words with their units; else by joining words into names that the trade knows.
pub(super) fn regroup(
    line: &str,
    wanted: usize,
    kind: Kind,
) -> Result<Vec<Range<usize>>, Ungrouped> {
    let words = words(line);
    let spaced = spaced(line, &words);
    if spaced.len() == wanted && spaced.iter().all(|span| is_closed(&line[span.clone()])) {
        return Ok(spaced);
    }
    let atoms = glue(line, &words);
    if atoms.len() <= wanted {
        return if atoms.len() == wanted {
            Ok(atoms)
        } else {
            Err(Ungrouped::Count(atoms.len()))
        };
    }
    let found = atoms.len();
    if found > MOST_ATOMS {
        return Err(Ungrouped::Count(found));
    }
    let mut ways = ways(line, &atoms, wanted, kind);
    match (ways.pop(), ways.pop()) {
        (Some(only), None) => Ok(only),
        (Some(one), Some(other)) => Err(Ungrouped::Ambiguous([other, one])),
        _ => Err(Ungrouped::Count(found)),
    }
}

/// Whether every bracket is closed.
pub(super) fn is_closed(text: &str) -> bool {
    depth(text) == 0
}

fn depth(text: &str) -> i32 {
    text.chars().fold(0, |depth, c| match c {
        '(' | '[' => depth + 1,
        ')' | ']' => depth - 1,
        _ => depth,
    })
}

fn words(line: &str) -> Vec<Range<usize>> {
    let mut words: Vec<Range<usize>> = Vec::new();
    for (at, c) in line.char_indices() {
        if matches!(c, ' ' | '\t') {
            continue;
        }
        let end = at + c.len_utf8();
        match words.last_mut() {
            Some(last) if last.end == at => last.end = end,
            _ => words.push(at..end),
        }
    }
    words
}

/// The cells where at least two blanks, or a tab, stand between two cells.
fn spaced(line: &str, words: &[Range<usize>]) -> Vec<Range<usize>> {
    let mut cells: Vec<Range<usize>> = Vec::new();
    for word in words {
        match cells.last_mut() {
            Some(last) if &line[last.end..word.start] == " " => last.end = word.end,
            _ => cells.push(word.clone()),
        }
    }
    cells
}

/// Joins what belongs together by its signs: brackets, `/`, `-`, `in` with a unit, `arb. u.`.
fn glue(line: &str, words: &[Range<usize>]) -> Vec<Range<usize>> {
    let mut atoms: Vec<Range<usize>> = Vec::new();
    let mut open = false;
    for (at, word) in words.iter().enumerate() {
        let text = &line[word.clone()];
        let next = words.get(at + 1).map_or("", |next| &line[next.clone()]);
        let joins_both = is_sign(text) || (text == "in" && header::is_unit(next));
        match atoms.last_mut() {
            Some(last) if open || joins_both || joins_back(text, &line[last.clone()]) => {
                last.end = word.end;
            }
            _ => atoms.push(word.clone()),
        }
        let atom = atoms.last().map_or("", |last| &line[last.clone()]);
        open = joins_both || text.ends_with('/') || depth(atom) > 0;
    }
    atoms
}

fn is_sign(text: &str) -> bool {
    matches!(text, "/" | "-" | "−" | "–" | "@")
}

fn joins_back(text: &str, before: &str) -> bool {
    let unit_word = matches!(text, "u." | "unit" | "units" | "u");
    text.starts_with(['(', '[', '/'])
        || (unit_word
            && ["arb.", "arb", "arbitrary"]
                .iter()
                .any(|arb| before.to_lowercase().ends_with(arb)))
}

/// Up to two ways to join neighbouring atoms into `wanted` cells that are each one word or a name
/// that the trade knows.
fn ways(line: &str, atoms: &[Range<usize>], wanted: usize, kind: Kind) -> Vec<Vec<Range<usize>>> {
    // ways[used] holds the ways to cover the first `used` atoms with as many cells as the round counts.
    let mut covered: Vec<Vec<Vec<Range<usize>>>> = vec![Vec::new(); atoms.len() + 1];
    covered[0].push(Vec::new());
    for _ in 0..wanted {
        let mut next: Vec<Vec<Vec<Range<usize>>>> = vec![Vec::new(); atoms.len() + 1];
        for from in 0..atoms.len() {
            if covered[from].is_empty() {
                continue;
            }
            for to in from + 1..=atoms.len().min(from + LONGEST_NAME) {
                let span = atoms[from].start..atoms[to - 1].end;
                if starts_late(&line[span.clone()]) {
                    continue;
                }
                if to > from + 1 && !is_name(line, atoms, from..to, kind) {
                    continue;
                }
                for way in &covered[from] {
                    if next[to].len() < 2 {
                        let mut way = way.clone();
                        way.push(span.clone());
                        next[to].push(way);
                    }
                }
            }
        }
        covered = next;
    }
    covered.pop().unwrap_or_default()
}

/// Whether several atoms make one known name, a unit standing only after the last of its words.
fn is_name(line: &str, atoms: &[Range<usize>], joined: Range<usize>, kind: Kind) -> bool {
    let text = &line[atoms[joined.start].start..atoms[joined.end - 1].end];
    let unit_inside = atoms[joined.start..joined.end - 1]
        .iter()
        .map(|atom| &line[atom.clone()])
        .any(|atom| atom.contains(['(', '[', '/']) || atom.contains(" in "));
    !unit_inside && header::read(text, kind).role.is_some()
}

/// Whether the text starts with a word that only ever follows the name it belongs to.
fn starts_late(text: &str) -> bool {
    let first = text.split(' ').next().unwrap_or("").to_lowercase();
    matches!(
        first.as_str(),
        "index"
            | "idx"
            | "number"
            | "level"
            | "of"
            | "at"
            | "value"
            | "state"
            | "point"
            | "channel"
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    fn grouped(line: &str, wanted: usize, kind: Kind) -> String {
        match regroup(line, wanted, kind) {
            Ok(spans) => spans
                .into_iter()
                .map(|span| &line[span])
                .collect::<Vec<_>>()
                .join("|"),
            Err(Ungrouped::Count(count)) => format!("count {count}"),
            Err(Ungrouped::Ambiguous(_)) => "ambiguous".into(),
        }
    }

    #[test]
    fn lines_of_names() {
        for (line, wanted, kind, expected) in [
            (
                "k band E_QP (eV) occ",
                4,
                Kind::Levels,
                "k|band|E_QP (eV)|occ",
            ),
            (
                "  k  n  E KS (eV)  E QP (eV)",
                4,
                Kind::Levels,
                "k|n|E KS (eV)|E QP (eV)",
            ),
            (
                "Kinetic energy / eV Intensity / counts",
                2,
                Kind::Spectrum,
                "Kinetic energy / eV|Intensity / counts",
            ),
            (
                "E - E_F (eV) counts",
                2,
                Kind::Spectrum,
                "E - E_F (eV)|counts",
            ),
            (
                "Binding energy in eV Intensity (arb. u.)",
                2,
                Kind::Spectrum,
                "Binding energy in eV|Intensity (arb. u.)",
            ),
            (
                "energy above Fermi level (eV) count rate (1/s)",
                2,
                Kind::Spectrum,
                "energy above Fermi level (eV)|count rate (1/s)",
            ),
            (
                "k index band index KS energy (eV) GW energy (eV)",
                4,
                Kind::Levels,
                "k index|band index|KS energy (eV)|GW energy (eV)",
            ),
            (
                "Kinetic energy/eV I / arb. u.",
                2,
                Kind::Spectrum,
                "Kinetic energy/eV|I / arb. u.",
            ),
            ("a b", 3, Kind::Levels, "count 2"),
            ("some words here now", 2, Kind::Levels, "count 4"),
            (
                "k occ GW energy / eV",
                3,
                Kind::Levels,
                "k|occ|GW energy / eV",
            ),
            // KS may belong to either energy.
            ("energy KS energy", 2, Kind::Levels, "ambiguous"),
        ] {
            assert_eq!(grouped(line, wanted, kind), expected, "{line}");
        }
    }
}
