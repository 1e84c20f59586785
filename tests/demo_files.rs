//! The demo says what it is, and its files agree with the truth that stands beside them.

use std::fs;

use bandrule::quantity::{Energy, EnergyUnit};

fn demo(name: &str) -> String {
    let path = format!("{}/fixtures/demo/{name}", env!("CARGO_MANIFEST_DIR"));
    fs::read_to_string(path).unwrap()
}

fn truth() -> serde_json::Value {
    serde_json::from_str(&demo("truth.json")).unwrap()
}

#[test]
fn every_file_says_first_that_it_is_invented() {
    for name in [
        "levels.csv",
        "pes.csv",
        "metal.csv",
        "ipes.csv",
        "study.toml",
    ] {
        assert!(demo(name).starts_with("# Invented data:"), "{name}");
    }
    let note = truth()["note"].as_str().unwrap().to_owned();
    assert!(note.starts_with("Invented data:"));
    assert!(
        demo("README.md")
            .lines()
            .next()
            .unwrap()
            .contains("invented")
    );
}

#[test]
fn table_has_the_gap_and_the_zone_of_the_truth() {
    let text = demo("levels.csv");
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_reader(text.as_bytes());
    let (mut highest, mut lowest, mut weight) = (f64::MIN, f64::MAX, 0.0);
    for record in reader.records() {
        let record = record.unwrap();
        let field = |index: usize| record[index].parse::<f64>().unwrap();
        let energy = Energy::new(field(7), EnergyUnit::Hartree).electronvolts();
        if field(8) > 1.0 {
            highest = f64::max(highest, energy);
        } else {
            lowest = f64::min(lowest, energy);
        }
        weight += if field(5) < 1.5 { field(4) } else { 0.0 };
    }
    assert_eq!(highest.to_bits(), 0.0_f64.to_bits());
    let gap = truth()["computed_gap"].as_f64().unwrap();
    assert!((lowest - gap).abs() < 1e-8, "{lowest} and {gap}");
    // All points of a 10 x 10 x 10 grid.
    assert!((weight - 1_000.0).abs() < 1e-9);
}

#[test]
fn truths_follow_from_their_definitions() {
    let truth = truth();
    let value = |name: &str| truth[name].as_f64().unwrap();
    let errors: f64 = truth["computed_errors"]
        .as_object()
        .unwrap()
        .values()
        .map(|error| error.as_f64().unwrap())
        .sum();
    let near = |one: f64, other: f64| assert!((one - other).abs() < 1e-7, "{one} and {other}");
    near(
        value("gap"),
        value("conduction_edge") - value("valence_edge"),
    );
    near(
        value("computed_gap_converged"),
        value("computed_gap") - errors,
    );
    near(
        value("difference"),
        value("computed_gap_converged") + value("zero_point") - value("gap"),
    );
    near(
        value("shift_conduction"),
        value("conduction_edge") - value("computed_gap"),
    );
}
