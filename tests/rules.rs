//! The laws that every rule of the catalogue keeps, held by its fixtures.
//!
//! `fixtures/rules/NAME/bad.csv` fires the rule and no other error; its first line says where and on
//! which text. `good.csv`, its neighbour, fires nothing at all.

use std::collections::BTreeSet;
use std::fs;
use std::path::PathBuf;

use bandrule::check::{CATALOGUE, validate_levels, validate_spectrum};
use bandrule::parse::{Hints, Source, read_levels, read_spectrum};
use bandrule::schema::{Finding, Severity};

const HEADINGS: [&str; 5] = [
    "# What it looks for",
    "# Why it matters",
    "# Example",
    "# How to answer it",
    "# Source",
];

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("fixtures/rules")
}

fn fixture(rule: &str, name: &str) -> String {
    let path = folder().join(rule).join(name);
    let text = fs::read_to_string(&path).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
    assert!(text.starts_with("# Invented. "), "{}", path.display());
    text
}

/// What the rules say of a fixture, read as its first line tells.
fn findings(text: &str, shown: &str) -> Vec<Finding> {
    let source = Source::from_text(shown, text);
    let hints = Hints::default();
    let first = text.lines().next().unwrap();
    if first.starts_with("# Invented. Levels") {
        let parsed = read_levels(source, &hints).unwrap_or_else(|e| panic!("{shown}: {e:#?}"));
        validate_levels(parsed).1
    } else {
        assert!(
            first.starts_with("# Invented. Spectrum"),
            "{shown}: {first}"
        );
        let parsed = read_spectrum(source, &hints).unwrap_or_else(|e| panic!("{shown}: {e:#?}"));
        validate_spectrum(parsed).1
    }
}

/// Where the first line says that a rule fires: line, column, text.
fn told(text: &str) -> (usize, usize, &str) {
    let (_, rest) = text.split_once("fires in line ").unwrap();
    let (line, rest) = rest.split_once(", column ").unwrap();
    let (column, rest) = rest.split_once(", on ").unwrap();
    let (cell, _) = rest.split_once(": ").unwrap();
    (line.parse().unwrap(), column.parse().unwrap(), cell)
}

/// The text of the cell that starts at a place, and the number of cells before it.
fn cell(text: &str, line: usize, column: usize) -> (String, usize) {
    let delimiter = |c: char| c == ',' || c == ';';
    let content = text.lines().nth(line - 1).expect("a line of the file");
    let before: String = content.chars().take(column - 1).collect();
    let after: String = content.chars().skip(column - 1).collect();
    let cell = after.split(delimiter).next().unwrap().to_owned();
    (cell, before.chars().filter(|c| delimiter(*c)).count())
}

#[test]
fn names_are_unique_sorted_and_well_formed() {
    let names: Vec<&str> = CATALOGUE.iter().map(|rule| rule.name()).collect();
    let sorted: Vec<&str> = names
        .iter()
        .copied()
        .collect::<BTreeSet<_>>()
        .into_iter()
        .collect();
    assert_eq!(names, sorted);
    for name in names {
        let words = name.split('-');
        let is_word = |word: &str| !word.is_empty() && word.chars().all(|c| c.is_ascii_lowercase());
        assert!(words.into_iter().all(is_word), "{name}");
    }
}

#[test]
fn manual_pages_have_every_heading_in_order_with_text_under_it() {
    for rule in CATALOGUE {
        let lines: Vec<&str> = rule.manual().lines().map(str::trim).collect();
        let headings: Vec<&str> = lines
            .iter()
            .copied()
            .filter(|l| l.starts_with('#'))
            .collect();
        assert_eq!(headings, HEADINGS, "{}", rule.name());
        for part in rule.manual().split("# ").skip(1) {
            let (_, body) = part.split_once('\n').unwrap();
            assert!(body.trim().len() > 10, "{}: {part}", rule.name());
        }
    }
}

#[test]
fn bad_fixtures_fire_their_rule_where_they_say() {
    for rule in CATALOGUE {
        let name = rule.name();
        let shown = format!("{name}/bad.csv");
        let text = fixture(name, "bad.csv");
        let found = findings(&text, &shown);
        let (own, other): (Vec<_>, Vec<_>) = found.iter().partition(|f| f.rule == name);
        assert!(
            other.iter().all(|f| f.severity < Severity::Error),
            "{other:#?}"
        );
        let [finding] = own.as_slice() else {
            panic!("{name} fires {} times: {own:#?}", own.len());
        };
        let (line, column, wanted) = told(&text);
        assert_eq!((finding.line, finding.column), (line, column), "{name}");
        let (found, before) = cell(&text, finding.line, finding.column);
        assert_eq!(found, wanted, "{name}");
        let field = finding.field.as_ref().expect("a field");
        assert_eq!(field.index, before + 1, "{name}");
        let header = text.lines().find(|l| !l.starts_with('#')).unwrap();
        let named = header.split([',', ';']).nth(before).unwrap();
        assert_eq!(field.header, named, "{name}");
        assert_eq!((finding.severity, &finding.file), (rule.severity(), &shown));
        // A level is named by the lines of its two rows, a value by its text.
        let names_it =
            finding.evidence.contains(wanted) || finding.evidence.contains(&format!(" and {line}"));
        assert!(names_it, "{name}: {}", finding.evidence);
        assert!(!finding.message.is_empty() && !finding.remedy.is_empty());
    }
}

#[test]
fn good_fixtures_fire_nothing() {
    for rule in CATALOGUE {
        let shown = format!("{}/good.csv", rule.name());
        let found = findings(&fixture(rule.name(), "good.csv"), &shown);
        assert!(found.is_empty(), "{found:#?}");
    }
}

#[test]
fn an_error_withholds_the_document_and_a_warning_does_not() {
    for rule in CATALOGUE {
        let text = fixture(rule.name(), "bad.csv");
        let source = Source::from_text("bad.csv", &text);
        let passed = if text.starts_with("# Invented. Levels") {
            validate_levels(read_levels(source, &Hints::default()).unwrap())
                .0
                .is_some()
        } else {
            validate_spectrum(read_spectrum(source, &Hints::default()).unwrap())
                .0
                .is_some()
        };
        assert_eq!(passed, rule.severity() < Severity::Error, "{}", rule.name());
    }
}

#[test]
fn no_fixture_is_an_orphan() {
    let names: BTreeSet<String> = CATALOGUE.iter().map(|r| r.name().to_owned()).collect();
    let mut folders = BTreeSet::new();
    for entry in fs::read_dir(folder()).unwrap() {
        let entry = entry.unwrap();
        folders.insert(entry.file_name().into_string().unwrap());
        let files: BTreeSet<String> = fs::read_dir(entry.path())
            .unwrap()
            .map(|file| file.unwrap().file_name().into_string().unwrap())
            .collect();
        let wanted = ["bad.csv", "good.csv"].map(str::to_owned);
        assert_eq!(files, BTreeSet::from(wanted), "{}", entry.path().display());
    }
    assert_eq!(folders, names);
}
