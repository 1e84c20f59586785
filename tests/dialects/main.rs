//! One table in many dialects: what a generator writes is read to the same numbers, or refused where
//! it is truly ambiguous. Every number of a run follows from its seed.

#![allow(
    clippy::cast_possible_wrap,
    clippy::cast_precision_loss,
    clippy::format_push_string,
    clippy::single_match_else,
    clippy::struct_excessive_bools
)]

mod dress;
mod tables;

use bandrule::parse::{Hints, Kind, Source, read_any};
use rand::SeedableRng;
use rand_chacha::ChaCha8Rng;
use serde_json::Value;

/// Dialects of each kind.
const DIALECTS: u64 = 500;

/// What became of one table.
enum Outcome {
    Read,
    Refused(String),
    Misread(String),
}

fn outcome(kind: Kind, seed: u64) -> Outcome {
    let mut random = ChaCha8Rng::seed_from_u64(seed);
    let table = tables::table(kind, &mut random);
    let (bytes, expected) = dress::written(&table, &mut random);
    let decoded = Source::from_bytes("table", bytes.clone());
    let shown = decoded.map_or_else(|_| String::new(), |source| source.text().to_owned());
    let read = Source::from_bytes("table", bytes)
        .map_err(|problem| vec![problem])
        .and_then(|source| read_any(source, None, &Hints::default()));
    let read = match read {
        Ok(read) => read,
        Err(problems) => {
            let messages: Vec<String> = problems.iter().map(ToString::to_string).collect();
            return Outcome::Refused(format!("{}\n{shown}", messages.join("\n")));
        }
    };
    let document: Value = serde_json::from_str(&read[0].to_json().unwrap()).unwrap();
    if read.len() != 1 || read[0].kind() != kind {
        return Outcome::Misread(format!("kind {:?}\n{shown}", read[0].kind()));
    }
    match expected
        .iter()
        .find_map(|(key, values)| difference(&document, key, values))
    {
        None => Outcome::Read,
        Some(what) => Outcome::Misread(format!("{what}\n{shown}")),
    }
}

/// How an array of the document differs from what was meant.
fn difference(document: &Value, key: &str, expected: &[Value]) -> Option<String> {
    let found = match key.split_once('=') {
        Some((list, name)) => document[list]
            .as_array()
            .and_then(|list| list.iter().find(|column| column["name"] == name))
            .map_or(&Value::Null, |column| &column["values"]),
        None => document.pointer(&format!("/{key}")).unwrap_or(&Value::Null),
    };
    let list = match found {
        Value::Array(list) => list.clone(),
        other => vec![other.clone()],
    };
    let same = |(one, other): (&Value, &Value)| match (one.as_f64(), other.as_f64()) {
        (Some(one), Some(other)) => (one - other).abs() <= 1e-12 * other.abs(),
        _ => one == other,
    };
    let alike = list.len() == expected.len() && list.iter().zip(expected).all(same);
    (!alike).then(|| format!("{key}: found {list:?}, expected {expected:?}"))
}

/// Refusals that are right: the text may be read in two ways.
fn is_justified(message: &str) -> bool {
    message.contains("may be a decimal fraction or grouped in thousands")
}

#[test]
fn every_dialect_is_read_to_the_same_numbers_or_refused() {
    let (mut read, mut refused, mut misread, mut unjustified) = (0, 0, Vec::new(), Vec::new());
    for (index, kind) in (0u64..).zip(Kind::ALL) {
        let mut of_kind = [0, 0];
        for number in 0..DIALECTS {
            let seed = index * 1_000_000 + number;
            match outcome(kind, seed) {
                Outcome::Read => of_kind[0] += 1,
                Outcome::Refused(message) => {
                    of_kind[1] += 1;
                    if !is_justified(&message) {
                        unjustified.push(format!("seed {seed}: {message}"));
                    }
                }
                Outcome::Misread(what) => misread.push(format!("seed {seed}: {what}")),
            }
        }
        println!(
            "{}: read {}, refused {}",
            kind.name(),
            of_kind[0],
            of_kind[1]
        );
        read += of_kind[0];
        refused += of_kind[1];
    }
    for message in &unjustified {
        println!("REFUSED {}", message.lines().next().unwrap());
    }
    let all = read + refused + misread.len();
    println!(
        "all {all}: read {read}, refused {refused}, misread {}",
        misread.len()
    );
    let first = |list: &[String]| {
        list.iter()
            .take(3)
            .cloned()
            .collect::<Vec<_>>()
            .join("\n---\n")
    };
    assert!(
        misread.is_empty(),
        "{} misread:\n{}",
        misread.len(),
        first(&misread)
    );
    assert!(
        unjustified.is_empty(),
        "{} refused without need:\n{}",
        unjustified.len(),
        first(&unjustified)
    );
    assert!(refused * 100 <= all, "{refused} of {all} refused");
}

/// Shows one table and what becomes of it: `DIALECT=1000005 cargo test --test dialects -- --ignored
/// --nocapture one`.
#[test]
#[ignore = "shows one dialect"]
fn one() {
    for seed in std::env::var("DIALECT").unwrap_or_default().split(',') {
        let seed: u64 = seed.parse().unwrap();
        let kind = Kind::ALL[usize::try_from(seed / 1_000_000).unwrap()];
        match outcome(kind, seed) {
            Outcome::Read => println!("seed {seed}: read"),
            Outcome::Refused(what) | Outcome::Misread(what) => println!("seed {seed}: {what}"),
        }
    }
}
