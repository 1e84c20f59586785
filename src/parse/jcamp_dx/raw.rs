//! From text to records that are not yet understood: `##LABEL= value`, its lines, its comments.

use std::ops::Range;

use nom::bytes::complete::{tag, take_till};
use nom::character::complete::char;
use nom::combinator::consumed;
use nom::sequence::{delimited, terminated};
use nom::{IResult, Parser};

use super::document::{Ordinates, Points, Record, Value};
use super::label::{self, Kind};
use super::number::{blanks, whole_decimal};
use crate::parse::problem::visible;
use crate::parse::{Problem, Source};

const BLANK: [char; 2] = [' ', '\t'];

/// A record as bytes of the file.
#[derive(Debug, Clone)]
pub(super) struct Raw {
    /// The label in normal form.
    pub normal: String,
    /// The label as written.
    pub label: Range<usize>,
    /// Everything after `=` up to the next record.
    pub value: Range<usize>,
}

/// One line of a value without its comment; `None` where it is a comment only.
#[derive(Debug, Clone)]
pub(super) struct Piece {
    pub content: Option<Range<usize>>,
    pub comment: Option<String>,
}

/// `##LABEL=` at the start of a line: what was taken, and the label.
fn opening(line: &str) -> IResult<&str, (&str, &str)> {
    let flag = (blanks, tag("##"));
    consumed(terminated(
        delimited(flag, take_till(|c| c == '='), char('=')).map(str::trim),
        blanks,
    ))
    .parse(line)
}

/// The comments before the first record, and the records.
pub(super) fn split(source: &Source) -> Result<(Vec<String>, Vec<Raw>), Problem> {
    let mut comments = Vec::new();
    let mut raws: Vec<Raw> = Vec::new();
    for line in source.lines_from(0) {
        let text = source.slice(line.start..line.end);
        if let Some(raw) = raws.last_mut() {
            raw.value.end = line.end;
        }
        if text.trim_start_matches(BLANK).starts_with("##") {
            if let Some(raw) = raws.last_mut() {
                raw.value.end = raw.value.start.max(line.start);
            }
            raws.push(open(source, text, line.start)?);
        } else if raws.is_empty() {
            let piece = piece(source, line.start..line.end);
            comments.extend(piece.comment);
            match piece.content {
                Some(content) if !content.is_empty() => return Err(no_title(source, content)),
                _ => {}
            }
        }
    }
    Ok((comments, raws))
}

fn open(source: &Source, line: &str, start: usize) -> Result<Raw, Problem> {
    let opened = opening(line).ok();
    let Some((rest, (taken, label))) = opened.filter(|(_, it)| !it.1.contains("$$")) else {
        return Err(Problem::new(format!(
            "labelled data record: expected `##LABEL=` and found no `=` in `{}`",
            visible(line)
        ))
        .at(source.place(start..start + line.len())));
    };
    let at = start + line.len() - line.trim_start_matches(BLANK).len();
    Ok(Raw {
        normal: label::normal(label),
        label: at..start + taken.trim_end().len(),
        value: start + taken.len()..start + taken.len() + rest.len(),
    })
}

pub(super) fn no_title(source: &Source, found: Range<usize>) -> Problem {
    Problem::new(format!(
        "`##TITLE=`: expected it as the first record of a block and found `{}`",
        visible(source.slice(found.clone()))
    ))
    .at(source.place(found))
}

/// A line, or the rest of one, split at `$$`; without blanks at the end of its content.
fn piece(source: &Source, line: Range<usize>) -> Piece {
    let text = source.slice(line.clone());
    let (content, comment) = match text.split_once("$$") {
        Some((content, comment)) => (content, Some(comment.trim().to_owned())),
        None => (text, None),
    };
    let content = content.trim_end();
    let only_comment = content.is_empty() && comment.is_some();
    Piece {
        content: (!only_comment).then(|| line.start..line.start + content.len()),
        comment,
    }
}

impl Raw {
    /// The lines of the value, beginning with the rest of the record's own line.
    pub fn pieces<'a>(&self, source: &'a Source) -> impl Iterator<Item = Piece> + 'a {
        let end = self.value.end;
        source
            .lines_from(self.value.start)
            .take_while(move |line| line.start < end)
            .map(move |line| piece(source, line.start..line.end.min(end)))
    }

    /// Where the value stands in the record's own line; its label where there is none.
    pub fn head(&self, source: &Source) -> Range<usize> {
        self.pieces(source)
            .next()
            .and_then(|piece| piece.content)
            .filter(|content| !content.is_empty())
            .unwrap_or_else(|| self.label.clone())
    }

    /// The problem that this record does not hold what it should.
    pub fn expected(&self, source: &Source, what: &str, found: &str) -> Problem {
        let found = if found.is_empty() {
            "nothing".to_owned()
        } else {
            format!("`{}`", visible(found))
        };
        Problem::new(format!(
            "`{}`: expected {what} and found {found}",
            source.slice(self.label.clone())
        ))
        .at(source.place(self.head(source)))
    }

    /// The record with its value typed; tables are still empty.
    pub fn record(&self, source: &Source) -> Result<Record, Problem> {
        let kind = label::kind(&self.normal);
        let value = match kind {
            Kind::Ordinates => Value::Ordinates(Ordinates::default()),
            Kind::Points => Value::Points(Points::default()),
            _ => self.value_of(source, kind)?,
        };
        let label = source.slice(self.label.clone());
        let label = label.trim_start_matches("##").trim_end_matches('=').trim();
        let comments = self.pieces(source).filter_map(|piece| piece.comment);
        Ok(Record {
            label: label.to_owned(),
            value,
            comments: comments.collect(),
            start: self.label.start,
        })
    }

    /// The value's text, or the number that it is.
    fn value_of(&self, source: &Source, kind: Kind) -> Result<Value, Problem> {
        let text = self.text(source);
        match kind {
            Kind::Number => whole_decimal(&text)
                .map(Value::Number)
                .ok_or_else(|| self.expected(source, "a finite decimal number", &text)),
            Kind::Count => Some(&text)
                .filter(|text| text.bytes().all(|byte| byte.is_ascii_digit()))
                .and_then(|text| text.parse().ok())
                .map(Value::Count)
                .ok_or_else(|| self.expected(source, "a whole number from zero", &text)),
            _ => Ok(Value::Text(text)),
        }
    }

    /// The lines of the value without comments and without empty lines at the end.
    pub fn text(&self, source: &Source) -> String {
        let lines: Vec<&str> = self
            .pieces(source)
            .filter_map(|piece| piece.content)
            .map(|content| source.slice(content))
            .collect();
        lines.join("\n").trim_end().to_owned()
    }
}
