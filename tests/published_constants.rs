//! Constants and unit factors against the published values in `fixtures/published/`.

use bandrule::quantity::constants::{
    BOLTZMANN, CALORIE, Constant, HARTREE, KILOJOULE_PER_MOLE, PLANCK_TIMES_LIGHT, RYDBERG,
    WAVENUMBER,
};
use bandrule::quantity::{Energy, EnergyUnit, Temperature};

/// The records of a published table, each as text fields.
fn published(name: &str) -> Vec<csv::StringRecord> {
    let path = format!("{}/fixtures/published/{name}", env!("CARGO_MANIFEST_DIR"));
    csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_path(path)
        .unwrap()
        .records()
        .map(Result::unwrap)
        .collect()
}

fn number(text: &str) -> f64 {
    text.parse().unwrap()
}

/// The value and standard uncertainty of a published constant.
fn constant(name: &str) -> (f64, f64) {
    let records = published("constants.csv");
    let found: Vec<_> = records.iter().filter(|r| &r[0] == name).collect();
    assert_eq!(found.len(), 1, "{name}");
    (number(&found[0][1]), number(&found[0][2]))
}

/// How many significant digits a number is good for: those printed, at most what a double keeps. A
/// number with few digits is exact here.
fn digits(text: &str) -> i32 {
    let printed = text
        .chars()
        .filter(char::is_ascii_digit)
        .collect::<String>();
    match printed.trim_start_matches('0').len() {
        few @ 10..=15 => i32::try_from(few).unwrap(),
        _ => 15,
    }
}

fn close(found: f64, expected: f64, relative: f64) -> bool {
    (found - expected).abs() <= relative * expected.abs()
}

#[test]
fn constants_are_codata_2022() {
    let table: [(&str, Constant, f64); 5] = [
        ("Hartree energy in eV", HARTREE, 1.0),
        ("Rydberg constant times hc in eV", RYDBERG, 1.0),
        ("Boltzmann constant in eV/K", BOLTZMANN, 1.0),
        (
            "Planck constant times speed of light",
            PLANCK_TIMES_LIGHT,
            1.0,
        ),
        // Ours is per centimetre, the published one per metre.
        ("electronvolt-inverse metre relationship", WAVENUMBER, 100.0),
    ];
    for (name, ours, factor) in table {
        let (value, uncertainty) = constant(name);
        assert!(close(ours.value * factor, value, 1e-15), "{name}: value");
        assert!(
            close(ours.standard_uncertainty * factor, uncertainty, 1e-12),
            "{name}: standard uncertainty"
        );
    }
}

#[test]
fn molar_energy_follows_from_the_defining_constants() {
    let (charge, _) = constant("elementary charge");
    let (avogadro, _) = constant("Avogadro constant");
    assert!(close(
        KILOJOULE_PER_MOLE.value,
        charge * avogadro / 1_000.0,
        1e-15
    ));
    assert_eq!(CALORIE.value.to_bits(), 4.184_f64.to_bits());
}

#[test]
fn every_unit_agrees_with_a_published_factor() {
    let records = published("unit_factors.csv");
    for unit in EnergyUnit::ALL {
        assert!(
            records.iter().any(|r| &r[0] == unit.symbol()),
            "no published factor for {unit}"
        );
    }
    for record in &records {
        let unit = EnergyUnit::from_spelling(&record[0]).unwrap();
        let (electronvolts, in_unit) = (number(&record[1]), number(&record[2]));
        let relative = 10f64.powi(1 - digits(&record[1]).min(digits(&record[2])));
        let found = Energy::new(electronvolts, EnergyUnit::Electronvolt).in_unit(unit);
        assert!(close(found, in_unit, relative), "{record:?}: {found}");
        let back = Energy::new(in_unit, unit).electronvolts();
        assert!(close(back, electronvolts, relative), "{record:?}: {back}");
    }
}

#[test]
fn thermal_energy_at_room_temperature() {
    let (expected, _) = constant("Boltzmann constant times 300 K");
    let found = Temperature::from_kelvin(300.0).thermal_energy();
    assert!(close(found, expected, 1e-15));
}
