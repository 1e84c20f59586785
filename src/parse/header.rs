//! The grammar of one header cell: `cell = name (unit | zero | argument)*`, where a unit stands in
//! brackets, after `/`, after ` in `, or as the last piece (`E_QP_eV`), and a zero is written as a
//! difference (`E - E_F`) or in words (`relative to vacuum`). Which words make which role is said in
//! [`super::forms`].

use nom::branch::alt;
use nom::bytes::complete::{take_till, take_till1};
use nom::character::complete::char;
use nom::combinator::map;
use nom::multi::many0;
use nom::sequence::{delimited, preceded};
use nom::{IResult, Parser};

use super::forms;
use super::role::{Kind, Role};
use super::words::{self, Relation, Tag};
use crate::quantity::{AxisKind, DensityUnit, EnergyUnit, IntensityUnit, MomentumUnit, Reference};

/// What a header cell says.
#[derive(Debug, Clone, Default, PartialEq)]
pub(super) struct Reading {
    /// What the column is; `None` where the cell does not say it in the trade's words.
    pub role: Option<Role>,
    /// What its energies are counted along.
    pub axis: Option<AxisKind>,
    /// What they are counted from.
    pub reference: Option<Reference>,
    /// Every unit that the cell gives, readable or not.
    pub units: Vec<String>,
    /// Whether the name itself says that the column holds counts.
    pub counts: bool,
    /// The words of its name, where they are the trade's.
    pub tags: Vec<Tag>,
    /// The name without its unit and zero.
    pub label: String,
}

impl Reading {
    /// The number that ends the name, as in `G0W0 band 5`.
    pub fn number(&self) -> Option<usize> {
        let name = self.label.trim_end_matches(|c: char| c.is_ascii_digit());
        self.label[name.len()..].parse().ok()
    }
}

/// Reads a header cell of a table of `kind`.
pub(super) fn read(cell: &str, kind: Kind) -> Reading {
    let cell = plain(cell);
    if kind == Kind::Spectrum && IntensityUnit::from_spelling(&cell).is_some() {
        return Reading {
            role: Some(Role::Intensity),
            units: vec![cell],
            ..Reading::default()
        };
    }
    let mut reading = Reading::default();
    // A unit after `in` may have a stroke of its own.
    let cell = match cell.rsplit_once(" in ") {
        Some((head, unit)) if unit.contains('/') && is_any_unit(unit.trim()) => {
            reading.units.push(unit.trim().to_owned());
            head
        }
        _ => &cell,
    };
    let Ok(("", parts)) = parts(cell) else {
        return reading;
    };
    let mut name = String::new();
    for part in parts {
        match part {
            Part::Text(text) => name.push_str(text),
            Part::Unit(text) if text.trim().is_empty() => name.push(' '),
            Part::Unit(text) => reading.units.push(text.trim().to_owned()),
            Part::Group(text) => group(text, kind, &mut name, &mut reading),
        }
    }
    read_name(&name, kind, &mut reading);
    reading
}

/// The cell with typographic signs in their plain form.
fn plain(cell: &str) -> String {
    let plain = cell
        .replace("⁻¹", "-1")
        .chars()
        // Marks that cannot be seen are no part of a name.
        .filter(|c| {
            !matches!(
                c,
                '$' | '\\' | '{' | '}' | '\u{feff}' | '\u{200b}' | '\u{ad}'
            )
        })
        .map(|c| match c {
            '−' | '–' | '⁻' => '-',
            '\t' | '\u{a0}' => ' ',
            other => other,
        })
        .collect::<String>();
    let plain = plain.trim();
    // Brackets around the name itself, as in `(E - E_F) / eV`.
    match plain
        .strip_prefix('(')
        .and_then(|rest| rest.split_once(')'))
    {
        Some((name, rest)) => format!("{name}{rest}"),
        None => plain.to_owned(),
    }
}

#[derive(Debug, Clone, Copy)]
enum Part<'a> {
    Text(&'a str),
    Group(&'a str),
    Unit(&'a str),
}

fn parts(cell: &str) -> IResult<&str, Vec<Part<'_>>> {
    let opens = |c: char| matches!(c, '(' | '[');
    let round = delimited(char('('), take_till(|c| c == ')'), char(')'));
    let square = delimited(char('['), take_till(|c| c == ']'), char(']'));
    many0(alt((
        map(round, Part::Group),
        map(square, Part::Group),
        map(preceded(char('/'), take_till1(opens)), Part::Unit),
        map(char('/'), |_| Part::Text(" ")),
        map(take_till1(move |c| c == '/' || opens(c)), Part::Text),
    )))
    .parse(cell)
}

/// What stands in brackets: units and zeros separated by commas, an argument, or more of the name.
fn group(text: &str, kind: Kind, name: &mut String, reading: &mut Reading) {
    for piece in text.split([',', ';']).map(str::trim) {
        let zero = words::relation(piece).filter(|(before, ..)| before.is_empty());
        let words = words::words(piece);
        let is_known = |word: &String| words::tags_of(word, kind).is_some();
        let known = piece.contains(char::is_alphabetic) && words.iter().all(is_known);
        if matches!(piece, "" | "E" | "k" | "ε") {
            continue;
        }
        if is_unit(piece) || is_other_unit(piece, kind) {
            reading.units.push(piece.to_owned());
        } else if known || zero.is_some() {
            name.push(' ');
            name.push_str(piece);
        } else {
            reading.units.push(piece.to_owned());
        }
    }
    name.push(' ');
}

/// Whether a text is a unit of momentum, temperature or a density of states, where there are such.
fn is_other_unit(text: &str, kind: Kind) -> bool {
    match kind {
        Kind::Gaps => text == "K",
        Kind::Dispersion => MomentumUnit::from_spelling(text).is_some(),
        Kind::Density => DensityUnit::from_spelling(text).is_some(),
        _ => false,
    }
}

/// Whether a text is a unit of any quantity that a table may hold.
pub(super) fn is_any_unit(text: &str) -> bool {
    is_unit(text)
        || MomentumUnit::from_spelling(text).is_some()
        || DensityUnit::from_spelling(text).is_some()
        || matches!(text, "K" | "V" | "s" | "deg" | "°")
}

/// Whether a text is a unit of an energy or an intensity.
pub(super) fn is_unit(text: &str) -> bool {
    EnergyUnit::from_spelling(text).is_some() || IntensityUnit::from_spelling(text).is_some()
}

fn read_name(name: &str, kind: Kind, reading: &mut Reading) {
    let name = without_unit(name.trim(), &mut reading.units);
    let Some((name, direction)) = zero(name, reading) else {
        return;
    };
    name.trim().clone_into(&mut reading.label);
    if is_correction(name, kind) {
        reading.role = Some(Role::Correction);
        return;
    }
    if is_formula(name, kind) {
        return;
    }
    let Some(tags) = tags(name, kind) else {
        return;
    };
    reading.role = forms::role(&tags, kind);
    reading.tags.clone_from(&tags);
    reading.counts = matches!(reading.role, Some(Role::Intensity | Role::Sweep))
        && tags.contains(&Tag::Counts)
        && !tags.contains(&Tag::Rate);
    if reading.role == Some(Role::Energy) {
        reading.axis = match (axis(&tags), direction) {
            (None, Some(Relation::Above)) => Some(AxisKind::FinalState),
            (None, Some(Relation::Below)) => Some(AxisKind::Binding),
            // Counted upwards by one word and downwards by another: not said.
            (Some(AxisKind::Binding), Some(Relation::Above))
            | (Some(AxisKind::Kinetic | AxisKind::FinalState), Some(Relation::Below)) => None,
            (axis, _) => axis,
        };
    }
    if direction == Some(Relation::Below) && kind == Kind::Levels {
        // Counted downwards: a level is counted upwards, so this is no energy of a level.
        reading.role = None;
    }
}

/// The name without a unit at its end: ` in eV`, `_eV`, ` eV`.
fn without_unit<'a>(name: &'a str, units: &mut Vec<String>) -> &'a str {
    if let Some((head, unit)) = name.rsplit_once(" in ") {
        let unit = unit.trim();
        if is_unit(unit) || !unit.contains(' ') {
            units.push(unit.to_owned());
            return head.trim();
        }
    }
    match name.rsplit_once(['_', ' ']) {
        Some((head, "counts")) if name.ends_with("_counts") && is_intensity(head) => {
            units.push("counts".to_owned());
            head
        }
        Some((head, unit)) if is_suffix_unit(unit) && !head.trim().is_empty() => {
            units.push(unit.to_owned());
            head.trim_end_matches(['_', ' '])
        }
        _ => name,
    }
}

/// Whether a name is that of an intensity or a sweep without the word "counts".
fn is_intensity(name: &str) -> bool {
    let tags = tags(name, Kind::Spectrum).unwrap_or_default();
    tags.contains(&Tag::Sweep) || tags.contains(&Tag::Intensity)
}

/// Whether the last piece of a name is a unit. `K` is not (`E_K`), nor is `counts`, which is a name;
/// `cts` is both.
/// `mev` and `kev` are, so that they are refused as units rather than overlooked.
fn is_suffix_unit(piece: &str) -> bool {
    let intensity = IntensityUnit::from_spelling(piece);
    (EnergyUnit::from_spelling(piece).is_some() && piece != "K")
        || intensity.is_some_and(|unit| unit != IntensityUnit::Counts || piece == "cts")
        || matches!(piece.to_ascii_lowercase().as_str(), "mev" | "kev")
}

/// The name without its zero, and the direction it counts in; `None` where nothing else is left.
fn zero<'a>(name: &'a str, reading: &mut Reading) -> Option<(&'a str, Option<Relation>)> {
    if let Some((before, relation, reference)) = words::relation(name) {
        reading.reference = Some(reference);
        return (!before.is_empty()).then_some((before, Some(relation)));
    }
    for (at, _) in name.match_indices('-') {
        let (left, right) = (name[..at].trim(), name[at + 1..].trim());
        if left.is_empty() || right.is_empty() {
            continue;
        }
        if let Some(reference) = words::reference(right) {
            reading.reference = Some(reference);
            return Some((left, Some(Relation::Above)));
        }
        let symbol = left.starts_with(['E', 'e', 'ε']);
        if let (true, Some(reference), "E" | "e" | "ε") = (symbol, words::reference(left), right) {
            reading.reference = Some(reference);
            return Some((right, Some(Relation::Below)));
        }
    }
    Some((name, None))
}

/// Whether a name is the difference of a quasiparticle and a mean-field energy.
fn is_correction(name: &str, kind: Kind) -> bool {
    let is = |part: &str, wanted: Tag| {
        let tags = tags(part.trim(), kind).unwrap_or_default();
        let energy = |tag: &Tag| [Tag::Energy, Tag::Plain, wanted].contains(tag);
        tags.contains(&wanted) && tags.iter().all(energy)
    };
    kind == Kind::Levels
        && name.match_indices('-').any(|(at, _)| {
            is(&name[..at], Tag::Quasiparticle) && is(&name[at + 1..], Tag::MeanField)
        })
}

/// Whether a name is computed with: a minus before it, a difference (`E - E_KS`), another sign (`∆E`,
/// `%`, `√I`). It is then the name of something else.
fn is_formula(name: &str, kind: Kind) -> bool {
    let separates = |c: char| c.is_whitespace() || "_-.,:;'#@".contains(c);
    let has_energy = |part: &str| {
        let words = words::words(part);
        words
            .iter()
            .any(|word| words::tag(word, kind).is_some_and(|tag| is_of_energy(tag, kind)))
    };
    let difference = |at: usize| {
        let (left, right) = (&name[..at], &name[at + 1..]);
        left.trim().is_empty()
            || (left.ends_with(' ') && right.starts_with(' '))
            || (has_energy(left) && has_energy(right))
    };
    name.contains(|c: char| !c.is_alphanumeric() && !separates(c))
        || name.match_indices('-').any(|(at, _)| difference(at))
}

/// Whether a word stands for an energy, or in a table of gaps for what gives one.
fn is_of_energy(tag: Tag, kind: Kind) -> bool {
    let of_gaps = matches!(
        tag,
        Tag::MeanField | Tag::Quasiparticle | Tag::Experiment | Tag::Gap
    );
    tag == Tag::Energy || (kind == Kind::Gaps && of_gaps)
}

/// What the words of a name say; `None` where a word is not one of the trade's. After `@` stands
/// the starting point of a quasiparticle energy.
fn tags(name: &str, kind: Kind) -> Option<Vec<Tag>> {
    let read = |name: &str| -> Option<Vec<Tag>> {
        let tags: Option<Vec<Vec<Tag>>> = words::words(name)
            .iter()
            .map(|word| words::tags_of(word, kind))
            .collect();
        tags.map(|tags| tags.concat())
    };
    match name.split_once('@') {
        Some((head, start)) => {
            let head = read(head)?;
            let known = read(start)?
                .iter()
                .all(|&tag| tag == Tag::MeanField || tag == Tag::Gap);
            (known && head.contains(&Tag::Quasiparticle)).then_some(head)
        }
        None => read(name),
    }
}

fn axis(tags: &[Tag]) -> Option<AxisKind> {
    tags.iter().find_map(|tag| match tag {
        Tag::Kinetic => Some(AxisKind::Kinetic),
        Tag::Binding => Some(AxisKind::Binding),
        Tag::FinalState => Some(AxisKind::FinalState),
        Tag::Photon => Some(AxisKind::Photon),
        _ => None,
    })
}
