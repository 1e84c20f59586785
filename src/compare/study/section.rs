//! Reading keys of a TOML table, collecting every problem instead of stopping at the first.

use std::collections::BTreeMap;
use std::ops::Range;
use std::path::{Path, PathBuf};

use toml::Spanned;
use toml::de::{DeTable, DeValue};

use super::{NamedFile, Stated};
use crate::parse::{
    ColumnChoice, Place, Problem, Role, Source, energy_text, potential_text, temperature_text,
    time_text,
};

/// What a quantity of a key is measured in.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Dimension {
    Energy,
    Potential,
    Temperature,
    Time,
}

impl Dimension {
    fn read(self, text: &str) -> Result<f64, String> {
        match self {
            Self::Energy => energy_text(text).map(crate::quantity::Energy::electronvolts),
            Self::Potential => potential_text(text),
            Self::Temperature => temperature_text(text).map(crate::quantity::Temperature::kelvin),
            Self::Time => time_text(text),
        }
    }

    fn unit(self) -> &'static str {
        match self {
            Self::Energy => "eV",
            Self::Potential => "V",
            Self::Temperature => "K",
            Self::Time => "s",
        }
    }

    fn example(self) -> &'static str {
        match self {
            Self::Energy => "\"4.37 eV\"",
            Self::Potential => "\"-5 V\"",
            Self::Temperature => "\"300 K\"",
            Self::Time => "\"0.5 s\"",
        }
    }
}

/// The reader of one study file.
pub(super) struct Reader<'a> {
    pub(super) source: &'a Source,
    folder: PathBuf,
    problems: Vec<Problem>,
}

/// One table of it, with the keys that were asked for.
pub(super) struct Section<'a> {
    name: String,
    table: Option<&'a DeTable<'a>>,
    asked: Vec<&'static str>,
}

impl<'a> Reader<'a> {
    pub(super) fn new(source: &'a Source, folder: &Path) -> Self {
        Self {
            source,
            folder: folder.to_owned(),
            problems: Vec::new(),
        }
    }

    pub(super) fn into_problems(self) -> Vec<Problem> {
        self.problems
    }

    pub(super) fn problem(&mut self, problem: Problem) {
        self.problems.push(problem);
    }

    pub(super) fn place(&self, span: Range<usize>) -> Place {
        self.source.place(span)
    }

    fn wrong(
        &mut self,
        section: &Section<'_>,
        key: &str,
        value: &Spanned<DeValue<'_>>,
        want: &str,
    ) {
        let found = value.get_ref().type_str();
        let place = self.place(value.span());
        self.problem(
            Problem::new(format!(
                "{} must be {want}, found {found}",
                section.path(key)
            ))
            .at(place),
        );
    }

    /// A whole file: the root table as a section.
    pub(super) fn root<'t>(table: &'t DeTable<'t>) -> Section<'t> {
        Section {
            name: String::new(),
            table: Some(table),
            asked: Vec::new(),
        }
    }

    /// A table within a section; empty where it is not there.
    pub(super) fn section<'t>(
        &mut self,
        parent: &mut Section<'t>,
        key: &'static str,
    ) -> Section<'t> {
        let name = parent.path(key);
        let table = parent.value(key).and_then(|value| {
            let table = value.get_ref().as_table();
            if table.is_none() {
                self.wrong(parent, key, value, "a table");
            }
            table
        });
        Section {
            name,
            table,
            asked: Vec::new(),
        }
    }

    pub(super) fn text(
        &mut self,
        section: &mut Section<'_>,
        key: &'static str,
    ) -> Option<(String, Place)> {
        let value = section.value(key)?;
        if let Some(text) = value.get_ref().as_str() {
            Some((text.to_owned(), self.place(value.span())))
        } else {
            self.wrong(section, key, value, "a string");
            None
        }
    }

    /// One of several words.
    pub(super) fn word<T: Copy>(
        &mut self,
        section: &mut Section<'_>,
        key: &'static str,
        words: &[(&str, T)],
    ) -> Option<(T, Place)> {
        let (text, place) = self.text(section, key)?;
        let found = words.iter().find(|(word, _)| *word == text);
        if found.is_none() {
            self.problem(unknown_word(&section.path(key), &text, words).at(place.clone()));
        }
        found.map(|(_, value)| (*value, place))
    }

    /// A list of words, in order, none twice.
    pub(super) fn words<T: Copy + PartialEq>(
        &mut self,
        section: &mut Section<'_>,
        key: &'static str,
        words: &[(&str, T)],
    ) -> Option<Vec<(T, Place)>> {
        let value = section.value(key)?;
        let Some(list) = value.get_ref().as_array() else {
            self.wrong(section, key, value, "a list of strings");
            return None;
        };
        let mut found: Vec<(T, Place)> = Vec::new();
        for item in list {
            let place = self.place(item.span());
            let text = item.get_ref().as_str().unwrap_or_default();
            match words.iter().find(|(word, _)| *word == text) {
                Some((_, value)) if found.iter().any(|(known, _)| known == value) => self.problem(
                    Problem::new(format!("{} names \"{text}\" twice", section.path(key))).at(place),
                ),
                Some((_, value)) => found.push((*value, place)),
                None => {
                    self.problem(unknown_word(&section.path(key), text, words).at(place));
                }
            }
        }
        Some(found)
    }

    /// A positive whole number.
    pub(super) fn whole(&mut self, section: &mut Section<'_>, key: &'static str) -> Option<Stated> {
        let value = section.value(key)?;
        let number = value
            .get_ref()
            .as_integer()
            .and_then(|integer| integer.as_str().parse::<u32>().ok())
            .filter(|number| *number > 0);
        if number.is_none() {
            self.wrong(section, key, value, "a whole number above zero");
        }
        Some(Stated {
            value: f64::from(number?),
            standard_uncertainty: None,
            place: self.place(value.span()),
        })
    }

    /// A quantity: `"4.37 eV"`, or `{ value = "4.37 eV", standard_uncertainty = "0.02 eV" }`.
    pub(super) fn quantity(
        &mut self,
        section: &mut Section<'_>,
        key: &'static str,
        dimension: Dimension,
    ) -> Option<Stated> {
        let value = section.value(key)?;
        let name = section.path(key);
        let place = self.place(value.span());
        match value.get_ref() {
            DeValue::String(text) => Some(Stated {
                value: self.number(&name, text, dimension, &place)?,
                standard_uncertainty: None,
                place,
            }),
            DeValue::Table(table) => self.quantity_table(name, table, dimension, place),
            other => {
                self.problem(without_unit(&name, key, other, dimension).at(place));
                None
            }
        }
    }

    fn quantity_table(
        &mut self,
        name: String,
        table: &DeTable<'_>,
        dimension: Dimension,
        place: Place,
    ) -> Option<Stated> {
        let mut inner = Section {
            name,
            table: Some(table),
            asked: Vec::new(),
        };
        let mut read = |key: &'static str| -> Option<(f64, Place)> {
            let value = inner.value(key)?;
            let (name, place) = (inner.path(key), self.place(value.span()));
            let DeValue::String(text) = value.get_ref() else {
                self.problem(without_unit(&name, key, value.get_ref(), dimension).at(place));
                return None;
            };
            let number = self.number(&name, text, dimension, &place)?;
            Some((number, place))
        };
        let value = read("value");
        let uncertainty = read("standard_uncertainty");
        if let Some((number, at)) = &uncertainty
            && *number < 0.0
        {
            self.problem(
                Problem::new(format!(
                    "{} is negative",
                    inner.path("standard_uncertainty")
                ))
                .at(at.clone()),
            );
        }
        if inner
            .table
            .is_some_and(|table| table.get("value").is_none())
        {
            self.problem(
                Problem::new(format!("{} has no value", inner.name))
                    .at(place.clone())
                    .with_help(format!("add value = {}", dimension.example())),
            );
        }
        self.finish(&inner);
        Some(Stated {
            value: value?.0,
            standard_uncertainty: uncertainty.map(|(number, _)| number),
            place,
        })
    }

    fn number(
        &mut self,
        name: &str,
        text: &str,
        dimension: Dimension,
        place: &Place,
    ) -> Option<f64> {
        match dimension.read(text) {
            Ok(number) if number.is_finite() => Some(number),
            Ok(_) => {
                self.problem(Problem::new(format!("{name} is not finite")).at(place.clone()));
                None
            }
            Err(why) => {
                self.problem(
                    Problem::new(format!("{name}: {why}"))
                        .at(place.clone())
                        .with_help(format!("write it like {}", dimension.example())),
                );
                None
            }
        }
    }

    /// A file that must be there.
    pub(super) fn file(
        &mut self,
        section: &mut Section<'_>,
        key: &'static str,
    ) -> Option<NamedFile> {
        let (shown, place) = self.text(section, key)?;
        let path = self.folder.join(&shown);
        if !path.is_file() {
            self.problem(
                Problem::new(format!(
                    "{} names a file that is not there: {shown}",
                    section.path(key)
                ))
                .at(place)
                .with_help(format!(
                    "paths are relative to the study file; looked for {}",
                    path.display()
                )),
            );
            return None;
        }
        Some(NamedFile { path, shown, place })
    }

    /// `unit.ROLE = "…"`.
    pub(super) fn units(&mut self, section: &mut Section<'_>) -> BTreeMap<Role, String> {
        let mut units = BTreeMap::new();
        for (role, value) in self.by_role(section, "unit") {
            match value.get_ref().as_str() {
                Some(text) => {
                    units.insert(role, text.to_owned());
                }
                None => self.wrong(section, "unit", value, "made of strings"),
            }
        }
        units
    }

    /// `column.ROLE = "header"`, its number, or `"2-9"` for several.
    pub(super) fn columns(&mut self, section: &mut Section<'_>) -> BTreeMap<Role, ColumnChoice> {
        let mut columns = BTreeMap::new();
        for (role, value) in self.by_role(section, "column") {
            let number = value
                .get_ref()
                .as_integer()
                .and_then(|integer| integer.as_str().parse::<usize>().ok())
                .filter(|number| *number > 0);
            let choice = match (value.get_ref().as_str(), number) {
                (Some(text), _) => match ColumnChoice::from_text(text) {
                    range @ ColumnChoice::Range(..) => range,
                    _ => ColumnChoice::Header(text.to_owned()),
                },
                (None, Some(number)) => ColumnChoice::Number(number),
                (None, None) => {
                    self.wrong(
                        section,
                        "column",
                        value,
                        "made of headers or numbers from 1",
                    );
                    continue;
                }
            };
            columns.insert(role, choice);
        }
        columns
    }

    fn by_role<'t>(
        &mut self,
        section: &mut Section<'t>,
        key: &'static str,
    ) -> Vec<(Role, &'t Spanned<DeValue<'t>>)> {
        let Some(value) = section.value(key) else {
            return Vec::new();
        };
        let Some(table) = value.get_ref().as_table() else {
            self.wrong(section, key, value, "a table by role");
            return Vec::new();
        };
        let mut list = Vec::new();
        for (name, value) in table {
            if let Some(role) = Role::from_name(name.get_ref()) {
                list.push((role, value));
            } else {
                let roles: Vec<(&str, ())> =
                    Role::ALL.iter().map(|role| (role.name(), ())).collect();
                let place = self.place(name.span());
                self.problem(unknown_word(&section.path(key), name.get_ref(), &roles).at(place));
            }
        }
        list
    }

    /// Reports the keys that nobody asked for.
    pub(super) fn finish(&mut self, section: &Section<'_>) {
        for (key, _) in section.table.into_iter().flatten() {
            let name: &str = key.get_ref();
            if section.asked.contains(&name) {
                continue;
            }
            let place = self.place(key.span());
            let known: Vec<(&str, ())> = section.asked.iter().map(|key| (*key, ())).collect();
            let owner = if section.name.is_empty() {
                "the study".to_owned()
            } else {
                format!("[{}]", section.name)
            };
            let help = nearest(name, &known).map_or_else(
                || format!("{owner} knows {}", listed(&known)),
                |near| format!("did you mean {near}?"),
            );
            self.problem(
                Problem::new(format!("{owner} has no key \"{name}\""))
                    .at(place)
                    .with_help(help),
            );
        }
    }
}

impl<'a> Section<'a> {
    /// Whether the file has this table.
    pub(super) fn is_there(&self) -> bool {
        self.table.is_some()
    }

    /// Whether the table has this key.
    pub(super) fn has(&self, key: &str) -> bool {
        self.table.is_some_and(|table| table.contains_key(key))
    }

    /// The full name of a key.
    pub(super) fn path(&self, key: &str) -> String {
        if self.name.is_empty() {
            key.to_owned()
        } else {
            format!("{}.{key}", self.name)
        }
    }

    fn value(&mut self, key: &'static str) -> Option<&'a Spanned<DeValue<'a>>> {
        self.asked.push(key);
        self.table?.get(key)
    }
}

/// The problem of a quantity that is no text: a bare number, mostly.
fn without_unit(name: &str, key: &str, value: &DeValue<'_>, dimension: Dimension) -> Problem {
    let float = value.as_float().map(toml::de::DeFloat::as_str);
    let number = float.or(value.as_integer().map(toml::de::DeInteger::as_str));
    match number {
        Some(number) => {
            Problem::new(format!("{name} is a number without a unit")).with_help(format!(
                "write it as text with its unit, as in {key} = \"{number} {}\"",
                dimension.unit()
            ))
        }
        None => Problem::new(format!(
            "{name} must be a quantity, found {}",
            value.type_str()
        ))
        .with_help(format!(
            "write it as text with its unit, as in {key} = {}",
            dimension.example()
        )),
    }
}

fn unknown_word<T>(name: &str, text: &str, words: &[(&str, T)]) -> Problem {
    let problem = Problem::new(format!("{name} knows no \"{text}\""));
    match nearest(text, words) {
        Some(near) => problem.with_help(format!(
            "did you mean \"{near}\"? It knows {}",
            listed(words)
        )),
        None => problem.with_help(format!("it knows {}", listed(words))),
    }
}

fn listed<T>(words: &[(&str, T)]) -> String {
    let list: Vec<&str> = words.iter().map(|(word, _)| *word).collect();
    list.join(", ")
}

/// The word that differs from `text` by the fewest letters, where these are few.
fn nearest<'w, T>(text: &str, words: &[(&'w str, T)]) -> Option<&'w str> {
    words
        .iter()
        .map(|(word, _)| (distance(text, word), *word))
        .min()
        .filter(|(letters, word)| *letters <= 1 + word.len() / 5)
        .map(|(_, word)| word)
}

/// Levenshtein distance.
fn distance(a: &str, b: &str) -> usize {
    let b: Vec<char> = b.chars().collect();
    let mut row: Vec<usize> = (0..=b.len()).collect();
    for (i, x) in a.chars().enumerate() {
        let mut corner = i;
        row[0] = i + 1;
        for (j, y) in b.iter().enumerate() {
            let replaced = corner + usize::from(x != *y);
            corner = row[j + 1];
            row[j + 1] = replaced.min(corner + 1).min(row[j] + 1);
        }
    }
    row[b.len()]
}
