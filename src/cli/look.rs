//! `bandrule look`.

use std::fmt::Write as _;
use std::path::PathBuf;

use clap::Args;

use super::reading::ReadingOptions;
use super::{DONE, print, refuse};
use crate::schema::{Document, Look, LookColumn, LookFile};

/// Arguments of `look`.
#[derive(Debug, Args)]
#[command(after_help = "\
Shows for each file the kind, every column with its role, its unit and the evidence, the dialect,
the conditions, what was skipped, and the options that would change a conclusion. A ROLE that is not
known is answered with the list of all.

Exit status: 0 done; 2 a file could not be read or is not certain, nothing printed.")]
pub(super) struct Arguments {
    /// Files: tables, documents (JSON), ISO 14976, JCAMP-DX; gzip of each
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
    /// Print one JSON document instead of text
    #[arg(long)]
    json: bool,
    #[command(flatten)]
    reading: ReadingOptions,
}

/// Runs the command and returns the exit status.
pub(super) fn run(arguments: &Arguments) -> u8 {
    let (mut files, mut refusals) = (Vec::new(), Vec::new());
    for path in &arguments.files {
        match arguments.reading.read(path) {
            Ok(read) => files.extend(read.iter().map(crate::parse::AnyParsed::look)),
            Err(message) => refusals.push(message),
        }
    }
    if !refusals.is_empty() {
        return refuse(&refusals.join("\n\n"));
    }
    let look = Look {
        schema: Look::identifier(),
        files,
    };
    let text = match arguments.json {
        true => serde_json::to_string_pretty(&look).map(|json| json + "\n"),
        false => Ok(look.files.iter().map(shown).collect::<Vec<_>>().join("\n")),
    };
    match text {
        Ok(text) => print(&text),
        Err(error) => return refuse(&format!("error: {error}")),
    }
    DONE
}

/// A file as text.
fn shown(file: &LookFile) -> String {
    let mut text = String::new();
    let block = file
        .block
        .map_or_else(String::new, |block| format!(", curve {block}"));
    // Writing to a string cannot fail.
    let _ = writeln!(
        text,
        "{}{block}: {}, {} rows",
        file.file, file.kind, file.rows
    );
    let names = file
        .names_line
        .map_or_else(String::new, |line| format!("; names on line {line}"));
    let _ = writeln!(text, "  text    {}; {}{names}", file.encoding, file.dialect);
    if let Some(reference) = file.reference {
        let _ = writeln!(text, "  zero    {reference}{}", by(file, "reference"));
    }
    let axis = by(file, "axis");
    if !axis.is_empty() {
        let _ = writeln!(text, "  axis    {}", axis.trim_start_matches(", "));
    }
    for condition in &file.conditions {
        let (key, value) = (&condition.key, &condition.value);
        let _ = writeln!(text, "  stated  {key}: {value} (line {})", condition.line);
    }
    for step in &file.provenance.steps {
        if !matches!(
            step.action.as_str(),
            "read" | "reference" | "axis" | "leave out" | "convert"
        ) {
            let _ = writeln!(text, "  {:7} {}", step.action, step.detail);
        }
    }
    text += "\n";
    columns(&mut text, &file.columns);
    skipped(&mut text, file);
    if !file.options.is_empty() {
        text += "\n  to change a conclusion\n";
        for option in &file.options {
            let _ = writeln!(text, "    {:34} {}", option.concluded, option.option);
        }
    }
    text
}

/// Who says what a step of the reading noted.
fn by(file: &LookFile, action: &str) -> String {
    let step = file
        .provenance
        .steps
        .iter()
        .find(|step| step.action == action);
    let detail = step.map(|step| step.detail.as_str());
    match (action, detail) {
        (_, None) => String::new(),
        ("reference", Some(detail)) => detail
            .split_once(" by ")
            .map_or_else(String::new, |(_, says)| format!(", by {says}")),
        (_, Some(detail)) => detail.to_owned(),
    }
}

fn columns(text: &mut String, columns: &[LookColumn]) {
    let width = |cell: fn(&LookColumn) -> &str, least: usize| {
        let longest = columns
            .iter()
            .map(|column| cell(column).chars().count())
            .max();
        longest.unwrap_or(0).clamp(least, 32)
    };
    let header = width(|column| &column.header, 6);
    let role = width(|column| column.role.as_deref().unwrap_or("-"), 4);
    let unit = width(|column| column.unit.as_deref().unwrap_or("-"), 4);
    let _ = writeln!(
        text,
        "   #  {:header$}  {:role$}  {:unit$}  {:>9}  {:>12}  {:>12}  course",
        "header", "role", "unit", "values", "least", "greatest"
    );
    for (index, column) in columns.iter().enumerate() {
        let number = |value: Option<crate::schema::number::Real>| {
            value.map_or_else(|| "-".to_owned(), |value| short(value.0))
        };
        let name: String = column.header.chars().take(header).collect();
        let _ = writeln!(
            text,
            "{:>4}  {name:header$}  {:role$}  {:unit$}  {:>9}  {:>12}  {:>12}  {}",
            index + 1,
            column.role.as_deref().unwrap_or("-"),
            column.unit.as_deref().unwrap_or("-"),
            column.count,
            number(column.minimum),
            number(column.maximum),
            column.picture
        );
        let missing = match column.missing {
            0 => String::new(),
            missing => format!("; {missing} missing"),
        };
        let _ = writeln!(text, "      by {}{missing}", column.evidence);
    }
}

/// A number in at most twelve signs.
fn short(value: f64) -> String {
    let plain = format!("{value}");
    if plain.len() <= 10 {
        return plain;
    }
    if (1e-3..1e6).contains(&value.abs()) {
        return format!("{value:.4}");
    }
    format!("{value:.4e}")
}

fn skipped(text: &mut String, file: &LookFile) {
    let unused = file
        .provenance
        .steps
        .iter()
        .filter(|step| step.action == "leave out");
    let unused: Vec<&str> = unused
        .map(|step| step.detail.as_str())
        .take(SHOWN)
        .collect();
    if file.skipped_lines == 0 && unused.is_empty() {
        return;
    }
    text.push_str("\n  skipped\n");
    for line in file.skipped.iter().take(SHOWN) {
        let _ = writeln!(text, "    line {}: {}", line.line, line.reason);
    }
    if file.skipped_lines > file.skipped.len().min(SHOWN) {
        let more = file.skipped_lines - file.skipped.len().min(SHOWN);
        let _ = writeln!(text, "    and {more} more lines");
    }
    for detail in unused {
        let _ = writeln!(text, "    {detail}");
    }
}

/// Skipped lines and columns that are listed.
const SHOWN: usize = 8;
