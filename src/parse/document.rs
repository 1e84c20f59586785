//! Documents that were written as such: the neutral JSON.

use serde_json::Value;

use super::parsed::{Manner, Parsed};
use super::problem::visible;
use super::role::Kind;
use super::{Problem, Source};
use crate::schema::Document;

/// Whether a text is a JSON object rather than a table.
pub(super) fn is_like(text: &str) -> bool {
    text.trim_start_matches(['\u{feff}', ' ', '\t', '\r', '\n'])
        .starts_with('{')
}

/// Reads a document of one kind where the text is JSON; anything else is left to another reader.
pub(super) fn read_or<T: Document>(
    source: Source,
    other: impl FnOnce(Source) -> Result<Parsed<T>, Vec<Problem>>,
) -> Result<Parsed<T>, Vec<Problem>> {
    match is_like(source.text()) {
        true => read(source).map_err(|problem| vec![problem]),
        false => other(source),
    }
}

/// Reads a document of one kind.
pub(super) fn read<T: Document>(source: Source) -> Result<Parsed<T>, Problem> {
    let (kind, version) = schema(&source)?;
    if kind != T::KIND || version != T::VERSION.to_string() {
        return Err(Problem::new(format!(
            "`{}` is `bandrule/{kind}/{version}`; expected `{}`",
            source.name(),
            T::identifier()
        )));
    }
    let text = source.text().trim_start_matches('\u{feff}');
    let document: T = serde_json::from_str(text).map_err(|error| broken(&source, &error))?;
    check_lengths(&source, &document)?;
    let manner = Manner {
        rows: document.lengths().first().map_or(0, |first| first.1),
        dialect: format!("JSON, {}", T::identifier()),
        ..Manner::default()
    };
    Ok(Parsed::of_document(document, source, manner))
}

/// Refuses arrays of different lengths, which no shape of JSON can.
fn check_lengths<T: Document>(source: &Source, document: &T) -> Result<(), Problem> {
    let lengths = document.lengths();
    let Some(&(first, rows)) = lengths.first() else {
        return Ok(());
    };
    match lengths.iter().find(|&&(_, other)| other != rows) {
        None => Ok(()),
        Some((name, other)) => Err(Problem::new(format!(
            "in `{}` the array `{name}` has {other} entries, but `{first}` says {rows}",
            source.name()
        ))
        .with_help("every array of a document has one entry a row: convert the file again")),
    }
}

/// The kind of a document.
pub(super) fn kind(source: &Source) -> Result<Kind, Problem> {
    let (kind, _) = schema(source)?;
    Kind::from_name(&kind).ok_or_else(|| {
        let kinds: Vec<&str> = Kind::ALL.into_iter().map(Kind::name).collect();
        Problem::new(format!(
            "`{}` is `bandrule/{}`, which is not read here; expected one of {}",
            source.name(),
            visible(&kind),
            kinds.join(", ")
        ))
    })
}

/// The kind and the version that the `schema` key gives.
fn schema(source: &Source) -> Result<(String, String), Problem> {
    let text = source.text().trim_start_matches('\u{feff}');
    let value: Value = serde_json::from_str(text).map_err(|error| broken(source, &error))?;
    let schema = value
        .get("schema")
        .and_then(Value::as_str)
        .unwrap_or_default();
    match schema.split('/').collect::<Vec<_>>().as_slice() {
        ["bandrule", kind, version] => Ok(((*kind).to_owned(), (*version).to_owned())),
        _ => Err(Problem::new(format!(
            "`{}` is JSON, but its key `schema` does not say what",
            source.name()
        ))
        .with_help("expected a document such as `\"schema\": \"bandrule/levels/1\"`")),
    }
}

/// Characters of a message about JSON.
const MOST: usize = 400;

fn broken(source: &Source, error: &serde_json::Error) -> Problem {
    let line = source.lines_from(0).nth(error.line().saturating_sub(1));
    let at = line.map_or(0, |line| {
        line.start + error.column().saturating_sub(1).min(line.end - line.start)
    });
    // The words of the reader may repeat a key of any length.
    let why: String = error.to_string().chars().take(MOST).collect();
    Problem::new(format!("this is no document: {why}"))
        .at(source.place(at..at))
        .with_help("the file is damaged, was cut short or was edited: convert the original again")
}
