//! What comment lines say: `key: value` and `key = value`, and sentences such as `energies in Ha`.

use std::borrow::Cow;
use std::ops::Range;

use memchr::{memchr2, memchr2_iter};

use super::condition::{self, ConditionKey, Value};
use super::evidence::Evidence;
use super::number::Decimal;
use super::problem::Problems;
use super::role::{Kind, Role};
use super::sentence::{self, Heard, Sentence};
use super::words::{self, Relation};
use super::{Place, Problem, Source};
use super::{dialect, header};
use crate::quantity::{AxisKind, EnergyUnit, IntensityUnit, Reference};

/// One statement of a comment line.
#[derive(Debug, Clone, PartialEq)]
pub struct Statement {
    /// The key, as the file writes it.
    pub key: String,
    /// The value, as the file writes it.
    pub value: String,
    /// Where it stands.
    pub place: Place,
}

/// Everything that the comment lines of a table say.
#[derive(Debug, Default)]
pub(super) struct Metadata {
    /// Every statement, known or not.
    pub statements: Vec<Statement>,
    /// The known ones: the key, the value, and the statement's index.
    pub known: Vec<(ConditionKey, Value, usize)>,
    /// What is said of the unit of the energies.
    /// The first part says of which energies, where it is not of all.
    pub energy_units: Vec<(Option<Role>, Evidence<EnergyUnit>)>,
    /// What is said of the unit of the intensities.
    pub intensity_units: Vec<Evidence<IntensityUnit>>,
    /// What is said of the axis.
    pub axes: Vec<Evidence<AxisKind>>,
    /// What is said of the zero.
    pub references: Vec<Evidence<Reference>>,
    /// Which energies, mean-field or quasiparticle ones, are spoken of.
    pub energy_kinds: Vec<Evidence<Role>>,
    /// Lines of comments that speak of energies or intensities and are not understood to their end.
    pub in_part: Vec<usize>,
    /// The decimal mark of the file's numbers.
    decimal: Decimal,
}

/// Pieces of a line beyond which it is no list of statements.
const MOST_PIECES: usize = 50;

/// Reads the comments of a table of `kind`; what is known but unreadable becomes a problem.
pub(super) fn read(
    source: &Source,
    comments: impl Iterator<Item = Range<usize>>,
    kind: Kind,
    decimal: Decimal,
    problems: &mut Problems,
) -> Metadata {
    let mut metadata = Metadata {
        decimal,
        ..Metadata::default()
    };
    for comment in comments {
        let text = source.slice(comment.clone());
        let mut parts = statements(text);
        if parts.is_empty() {
            parts.extend(loose(text, kind, decimal));
        }
        if parts.is_empty() {
            if let Err(problem) = metadata.listen(source, &comment, kind) {
                problems.push(problem);
            }
            continue;
        }
        for (key, value) in parts {
            let span = comment.start + key.start..comment.start + value.end;
            let statement = Statement {
                key: text[key].trim().to_owned(),
                value: text[value].trim().to_owned(),
                place: source.place(span),
            };
            if let Err(problem) = metadata.statement(&statement, kind) {
                problems.push(problem);
            }
        }
    }
    metadata
}

/// Whether a comment is a statement rather than a line of names.
pub(super) fn is_statement(text: &str) -> bool {
    !statements(text).is_empty()
}

/// Whether a line without a colon states something that is known, as in `Sweeps,10`.
pub(super) fn is_known(text: &str) -> bool {
    [Kind::Levels, Kind::Spectrum]
        .iter()
        .any(|&kind| loose(text, kind, Decimal::Comma).is_some())
}

/// A known key and its value without a sign between them, or with one that separates cells, as in
/// `photon energy 21.218 eV` or `Dwell time (s),0.5`.
fn loose(text: &str, kind: Kind, decimal: Decimal) -> Option<(Range<usize>, Range<usize>)> {
    let cell = text.find(['\t', ',', ';', '|']);
    let digit = text.find(|c: char| c.is_ascii_digit() || matches!(c, '-' | '−'));
    let cuts = [cell.map(|at| (at, at + 1)), digit.map(|at| (at, at))];
    cuts.into_iter().flatten().find_map(|(end, start)| {
        let (key, value) = (text[..end].trim(), text[start..].trim_matches(SEPARATORS));
        if key.is_empty() || value.is_empty() || !key.starts_with(char::is_alphabetic) {
            return None;
        }
        let (known, unit) = condition::recognise(key, kind)?;
        // A short word may be the name of a column: its value must be one.
        let text_of_value = with_point(value, decimal);
        condition::read(known, &text_of_value, unit.as_deref()).ok()?;
        let at = |part: &str| dialect::span_in(text, part, 0);
        Some((at(key), at(value)))
    })
}

/// A value with a decimal point, where the file's numbers have commas.
fn with_point(value: &str, decimal: Decimal) -> Cow<'_, str> {
    let is_digit = |at: Option<usize>| {
        let byte = at.and_then(|at| value.as_bytes().get(at));
        byte.is_some_and(u8::is_ascii_digit)
    };
    let comma = value
        .match_indices(',')
        .find(|(at, _)| is_digit(at.checked_sub(1)) && is_digit(Some(at + 1)));
    match (comma, decimal) {
        (Some((at, _)), Decimal::Comma) => {
            Cow::Owned(format!("{}.{}", &value[..at], &value[at + 1..]))
        }
        _ => Cow::Borrowed(value),
    }
}

const SEPARATORS: [char; 6] = [' ', '\t', ',', ';', '|', '"'];

/// The keys and values of a comment: one pair, or several separated by commas or semicolons.
fn statements(text: &str) -> Vec<(Range<usize>, Range<usize>)> {
    let mut pieces = Vec::new();
    let mut start = 0;
    for at in memchr2_iter(b',', b';', text.as_bytes()) {
        pieces.push(start..at);
        start = at + 1;
    }
    pieces.push(start..text.len());
    let pairs: Vec<_> = pieces.into_iter().map(|piece| pair(text, piece)).collect();
    if pairs.len() > MOST_PIECES {
        return Vec::new();
    }
    if pairs.len() > 1 && pairs.iter().all(Option::is_some) {
        return pairs.into_iter().flatten().collect();
    }
    pair(text, 0..text.len()).into_iter().collect()
}

fn pair(text: &str, piece: Range<usize>) -> Option<(Range<usize>, Range<usize>)> {
    let at = piece.start + memchr2(b':', b'=', text[piece.clone()].as_bytes())?;
    let key = text[piece.start..at].trim();
    let value = text[at + 1..piece.end].trim_end();
    (!key.is_empty() && !value.trim().is_empty()).then(|| {
        let start =
            piece.start + text[piece.start..at].len() - text[piece.start..at].trim_start().len();
        (start..at, at + 1..at + 1 + value.len())
    })
}

impl Metadata {
    /// The comment's name as evidence.
    fn says(place: &Place) -> String {
        format!("the comment `{}` on line {}", place.quoted(), place.line)
    }

    fn statement(&mut self, statement: &Statement, kind: Kind) -> Result<(), Problem> {
        let index = self.statements.len();
        self.statements.push(statement.clone());
        if let Some(unit) = unit_key(&statement.key) {
            return self.units(unit, statement);
        }
        let Some((key, unit)) = condition::recognise(&statement.key, kind) else {
            return Ok(());
        };
        if key == ConditionKey::Reference && statement.value.contains(|c: char| c.is_ascii_digit())
        {
            // A reference to the literature, which names no zero.
            return Ok(());
        }
        let text = with_point(&statement.value, self.decimal);
        let value = condition::read(key, &text, unit.as_deref()).map_err(|why| {
            Problem::new(format!("`{}`: {why}", statement.key))
                .at(statement.place.clone())
                .with_help("correct the line; one that does not begin with this key is not read")
        })?;
        let says = Self::says(&statement.place);
        match &value {
            Value::Axis(axis) => {
                self.axes
                    .push(Evidence::at(*axis, says, statement.place.clone()));
            }
            Value::Reference(Reference::Unknown) => {}
            Value::Reference(reference) => {
                self.references
                    .push(Evidence::at(*reference, says, statement.place.clone()));
            }
            _ => self.same_as_before(key, &value, statement)?,
        }
        self.known.push((key, value, index));
        Ok(())
    }

    fn same_as_before(
        &self,
        key: ConditionKey,
        value: &Value,
        statement: &Statement,
    ) -> Result<(), Problem> {
        // All before are the same as the first of them.
        let mut before = self.known.iter().filter(|(known, ..)| *known == key);
        let Some((_, _, index)) = before.next().filter(|(_, other, _)| other != value) else {
            return Ok(());
        };
        let other = &self.statements[*index];
        Err(Problem::new(format!(
            "`{}` is `{}` here and `{}` on line {}",
            statement.key, statement.value, other.value, other.place.line
        ))
        .at(statement.place.clone())
        .with_related(other.place.clone(), "the other value")
        .with_help("keep the line that is true"))
    }

    /// A statement of units: each item must be one; text of several words is left alone.
    fn units(&mut self, about: UnitOf, statement: &Statement) -> Result<(), Problem> {
        for item in statement.value.split([',', ';']).map(str::trim) {
            let known = (about != UnitOf::Intensity && self.energy_unit(item, &statement.place))
                || (about != UnitOf::Energy && self.intensity_unit(item, &statement.place));
            if !known && !item.contains(' ') {
                return Err(Problem::new(format!(
                    "`{}`: `{item}` is not the spelling of a unit",
                    statement.key
                ))
                .at(statement.place.clone())
                .with_help("energies are in eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm or K; intensities in counts, counts/s or arb. u."));
            }
        }
        Ok(())
    }

    fn energy_unit(&mut self, text: &str, place: &Place) -> bool {
        let unit = EnergyUnit::from_spelling(text);
        let evidence = |unit| (None, Evidence::at(unit, Self::says(place), place.clone()));
        self.energy_units.extend(unit.map(evidence));
        unit.is_some()
    }

    fn intensity_unit(&mut self, text: &str, place: &Place) -> bool {
        let unit = IntensityUnit::from_spelling(text);
        self.intensity_units
            .extend(unit.map(|unit| Evidence::at(unit, Self::says(place), place.clone())));
        unit.is_some()
    }

    /// A comment of sentences such as `All energies are in eV relative to the Fermi level`.
    fn listen(
        &mut self,
        source: &Source,
        comment: &Range<usize>,
        kind: Kind,
    ) -> Result<(), Problem> {
        let text = source.slice(comment.clone());
        let whole = match sentence::hear(text) {
            Heard::Nothing => return Ok(()),
            Heard::InPart => {
                self.in_part.push(source.place(comment.clone()).line);
                return Ok(());
            }
            Heard::Whole(whole) => whole,
        };
        for (span, sentence) in whole {
            let place = source.place(comment.start + span.start..comment.start + span.end);
            self.take(sentence, &place, kind)?;
        }
        Ok(())
    }

    fn take(&mut self, sentence: Sentence, place: &Place, kind: Kind) -> Result<(), Problem> {
        let says = || Self::says(place);
        if let Some(role) = sentence.of {
            self.energy_kinds
                .push(Evidence::at(role, says(), place.clone()));
        }
        match sentence.unit {
            Some(sentence::Unit::Energy(unit)) => {
                let evidence = Evidence::at(unit, says(), place.clone());
                self.energy_units.push((sentence.of, evidence));
            }
            Some(sentence::Unit::Intensity(unit)) => {
                let evidence = Evidence::at(unit, says(), place.clone());
                self.intensity_units.push(evidence);
            }
            None => {}
        }
        let Some((direction, zero)) = sentence.zero else {
            return Ok(());
        };
        let axis = match direction {
            Relation::Below if kind == Kind::Levels => {
                return Err(Problem::new("this comment counts the energies downwards")
                    .at(place.clone())
                    .with_help(
                        "levels are counted upwards: turn their signs, and write `relative to`",
                    ));
            }
            Relation::Below => Some(AxisKind::Binding),
            Relation::Above => Some(AxisKind::FinalState),
            Relation::From => None,
        };
        self.axes
            .extend(axis.map(|axis| Evidence::at(axis, says(), place.clone())));
        self.references
            .push(Evidence::at(zero, says(), place.clone()));
        Ok(())
    }
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum UnitOf {
    Energy,
    Intensity,
    Either,
}

/// Keys such as `units`, `energy unit`, `unit of intensity`.
fn unit_key(key: &str) -> Option<UnitOf> {
    let words: Vec<String> = key
        .split_whitespace()
        .map(str::to_lowercase)
        .filter(|word| word != "of" && word != "the")
        .collect();
    let words: Vec<&str> = words.iter().map(String::as_str).collect();
    Some(match words.as_slice() {
        ["unit" | "units"] => UnitOf::Either,
        ["energies"]
        | ["energy" | "energies", "unit" | "units"]
        | ["unit" | "units", "energy" | "energies"] => UnitOf::Energy,
        ["intensity" | "intensities", "unit" | "units"]
        | ["unit" | "units", "intensity" | "intensities"] => UnitOf::Intensity,
        _ => return None,
    })
}

/// The axis that a text names, as `kinetic`, `binding energy` or `E - E_F`.
pub(super) fn axis_named(text: &str) -> Option<AxisKind> {
    AxisKind::from_name(&text.to_lowercase()).or_else(|| header::read(text, Kind::Spectrum).axis)
}

/// The zero that a text names, as `fermi` or `vacuum level`.
pub(super) fn reference_named(text: &str) -> Option<Reference> {
    Reference::from_name(&text.to_lowercase()).or_else(|| words::reference(text))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn of(text: &str, kind: Kind) -> (Metadata, Vec<Problem>) {
        let source = Source::from_text("t", text);
        let lines: Vec<_> = source.lines_from(0).map(|l| l.start..l.end).collect();
        let mut problems = Problems::default();
        let metadata = read(
            &source,
            lines.into_iter(),
            kind,
            Decimal::Point,
            &mut problems,
        );
        (metadata, problems.into_list())
    }

    #[test]
    fn prose_trips_nothing() {
        let text = "invented data: see README\nmade on 2020-01-01 12:30\nE_F = 5\nangular resolution: 0.1 deg\n\
                    resolution sigma: 5\nenergies, as the reader knows, vary\ntime: now\nwork function of the sample: unknown\n\
                    energy is conserved\nhttps://example.org\nreference: J. Inv. Sci. 12, 3 (2001)\n=\n:\n";
        let (metadata, problems) = of(text, Kind::Spectrum);
        assert_eq!(problems, []);
        assert_eq!(metadata.known, []);
        assert!(metadata.energy_units.is_empty() && metadata.references.is_empty());
    }

    #[test]
    fn sentences_give_units_and_zeros() {
        for (text, unit, zero) in [
            ("energies in Ha", Some(EnergyUnit::Hartree), None),
            (
                "All energies are in eV relative to the Fermi level.",
                Some(EnergyUnit::Electronvolt),
                Some(Reference::Fermi),
            ),
            ("energies relative to vacuum", None, Some(Reference::Vacuum)),
            (
                "energies in Ry, relative to the Fermi level",
                Some(EnergyUnit::Rydberg),
                Some(Reference::Fermi),
            ),
            (
                "quasiparticle energies, in eV",
                Some(EnergyUnit::Electronvolt),
                None,
            ),
            ("units: eV", Some(EnergyUnit::Electronvolt), None),
            ("energy unit = Ry", Some(EnergyUnit::Rydberg), None),
            ("reference: E_VBM", None, Some(Reference::ValenceEdge)),
        ] {
            let (metadata, problems) = of(text, Kind::Levels);
            assert_eq!(problems, [], "{text}");
            assert_eq!(
                metadata.energy_units.first().map(|(_, e)| e.value),
                unit,
                "{text}"
            );
            assert_eq!(metadata.references.first().map(|e| e.value), zero, "{text}");
        }
        let (metadata, _) = of("energies in eV below E_F", Kind::Spectrum);
        assert_eq!(metadata.axes[0].value, AxisKind::Binding);
        let (_, problems) = of("energies in eV below E_F", Kind::Levels);
        assert_eq!(
            problems[0].message,
            "this comment counts the energies downwards"
        );
        let (metadata, _) = of("units: eV, counts/s", Kind::Spectrum);
        assert_eq!(
            metadata.intensity_units[0].value,
            IntensityUnit::CountsPerSecond
        );
    }

    #[test]
    fn values_have_the_decimal_mark_of_the_file() {
        let source = Source::from_text("t", "Photon energy;21,22 eV");
        let mut problems = Problems::default();
        let lines = std::iter::once(0..source.text().len());
        let metadata = read(
            &source,
            lines,
            Kind::Spectrum,
            Decimal::Comma,
            &mut problems,
        );
        assert_eq!(metadata.known[0].1, Value::Number(21.22));
        assert_eq!(metadata.statements[0].value, "21,22 eV");
    }

    #[test]
    fn several_statements_on_a_line() {
        let (metadata, problems) = of("hv = 21.218 eV, T = 300 K", Kind::Spectrum);
        assert_eq!(problems, []);
        assert_eq!(metadata.known.len(), 2);
        assert_eq!(metadata.statements[1].place.column, 17);
    }

    #[test]
    fn known_keys_with_bad_values_are_located() {
        let (_, problems) = of("photon energy: 21.218\n", Kind::Spectrum);
        insta::assert_snapshot!(problems[0], @r"
    t:1:1: `photon energy`: expected an energy with its unit (eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm, K), such as `21.218 eV`, and found `21.218` without a unit
      help: correct the line; one that does not begin with this key is not read
    ");
        let (_, problems) = of(
            "T: 300 K\nhv: 1 eV\nsample temperature: 80 K\n",
            Kind::Spectrum,
        );
        insta::assert_snapshot!(problems[0], @r"
    t:3:1: `sample temperature` is `80 K` here and `300 K` on line 1
      t:1:1: the other value
      help: keep the line that is true
    ");
        let (_, problems) = of("units: keV\n", Kind::Levels);
        insta::assert_snapshot!(problems[0], @r"
    t:1:1: `units`: `keV` is not the spelling of a unit
      help: energies are in eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm or K; intensities in counts, counts/s or arb. u.
    ");
        let (_, problems) = of("axis: sideways\n", Kind::Spectrum);
        insta::assert_snapshot!(problems[0], @r"
    t:1:1: `axis`: expected kinetic, binding, final-state or photon, and found `sideways`
      help: correct the line; one that does not begin with this key is not read
    ");
        assert_eq!(of("T: 300 K\nT = 300.0 K", Kind::Spectrum).1, []);
    }
}
