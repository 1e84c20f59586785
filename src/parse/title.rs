//! The title of a block of rows: `k-point 3: 0.0 0.5 0.5`, `band = 4`, with or without a comment mark.

use super::number;

/// What the title of a block counts.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub(super) enum Counted {
    K,
    Band,
    Spin,
    Sweep,
}

/// A title: what it counts, the number, and the coordinates where three of them follow.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Title {
    pub counted: Counted,
    pub number: i64,
    pub point: Option<[f64; 3]>,
}

/// Reads a title; `None` for any other line.
pub(super) fn title(line: &str) -> Option<Title> {
    let text = line.trim();
    if !matches!(
        text.as_bytes().first(),
        Some(b'k' | b'K' | b'b' | b'B' | b's' | b'S' | b'i' | b'I')
    ) {
        return None;
    }
    let name = text
        .bytes()
        .take(LONGEST + 1)
        .position(|b| b.is_ascii_digit() || matches!(b, b'=' | b':' | b'#'))?;
    let counted = counted(text[..name].trim())?;
    let mut words = text[name..]
        .split(separates)
        .filter(|word| !word.is_empty());
    let number = words.next()?.parse().ok()?;
    let rest: Vec<&str> = words.filter(|word| *word != "k").collect();
    let values: Vec<f64> = rest.iter().map_while(|word| number::number(word)).collect();
    // Whole numbers after a bare word may as well be the names of columns.
    let marked = text.contains(['=', ':', '#', '(', '[', '.']);
    let point = match values.as_slice() {
        _ if values.len() < rest.len() => return None,
        [] => None,
        &[x, y, z] if counted == Counted::K && marked => Some([x, y, z]),
        _ => return None,
    };
    Some(Title {
        counted,
        number,
        point,
    })
}

/// Whether a line begins as a title does: with a word for what is counted, and a number.
pub(super) fn is_like_title(line: &str) -> bool {
    let text = line.trim();
    let name = text
        .bytes()
        .take(LONGEST + 1)
        .position(|b| b.is_ascii_digit() || matches!(b, b'=' | b':' | b'#'));
    name.and_then(|at| text.get(..at))
        .is_some_and(|name| counted(name.trim()).is_some())
}

/// The longest name of what a title counts, in bytes.
const LONGEST: usize = 20;

fn counted(name: &str) -> Option<Counted> {
    let name = name.to_lowercase();
    let name = name
        .trim_end_matches("no.")
        .trim_end_matches("number")
        .trim_end_matches("index")
        .trim_end();
    Some(match name {
        "k" | "k-point" | "kpoint" | "k point" | "kpt" | "ik" => Counted::K,
        "band" | "iband" | "ib" => Counted::Band,
        "spin" | "spin channel" | "ispin" => Counted::Spin,
        "sweep" | "scan" => Counted::Sweep,
        _ => return None,
    })
}

fn separates(c: char) -> bool {
    c.is_whitespace() || matches!(c, '=' | ':' | '#' | ',' | ';' | '(' | ')' | '[' | ']')
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn titles() {
        for (line, counted, number, point) in [
            ("k-point 3", Counted::K, 3, None),
            ("k = 12", Counted::K, 12, None),
            (
                "k-point 3: 0.0 0.5 -0.5",
                Counted::K,
                3,
                Some([0.0, 0.5, -0.5]),
            ),
            ("kpt #4 (0, 0, 0.25)", Counted::K, 4, Some([0.0, 0.0, 0.25])),
            ("ik 2 k = 0 0 1", Counted::K, 2, Some([0.0, 0.0, 1.0])),
            ("Band no. 7", Counted::Band, 7, None),
            ("band index: 7", Counted::Band, 7, None),
            ("spin 1", Counted::Spin, 1, None),
            ("Sweep 2", Counted::Sweep, 2, None),
        ] {
            let title = title(line).unwrap_or_else(|| panic!("{line}"));
            assert_eq!(
                (title.counted, title.number, title.point),
                (counted, number, point)
            );
        }
        for line in [
            "k 1 2 3",
            "k1 k2 k3",
            "band 1 2",
            "k E",
            "k-point",
            "kinetic 5",
            "k = 1.5",
            "1 2",
            "k = 1 0.5",
        ] {
            assert_eq!(title(line), None, "{line}");
        }
    }
}
