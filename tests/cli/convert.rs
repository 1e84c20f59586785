//! `bandrule convert`: documents written whole, read back, and used in place of their tables.

use std::fs;

use serde_json::Value;

use super::{answered, demo, edit, run, text, with_file};

#[test]
fn a_converted_file_takes_the_place_of_its_table() {
    let folder = demo();
    let table = answered(&folder);
    for name in ["pes", "ipes", "metal", "levels"] {
        let (from, to) = (format!("{name}.csv"), format!("{name}.json"));
        let output = run(&folder, &["convert", &from, "--to", &to]);
        assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
        assert!(text(&output.stdout).contains(&format!("written to {to}")));
        edit(
            &folder,
            "study.toml",
            &format!("\"{from}\""),
            &format!("\"{to}\""),
        );
        fs::remove_file(folder.path().join(from)).unwrap();
    }
    fs::remove_dir_all(folder.path().join("out")).unwrap();
    let document = answered(&folder);
    assert_eq!(document["computed"]["valence_edge"]["line"], Value::Null);
    for key in ["measured", "shift", "difference", "verdict"] {
        assert_eq!(table[key], document[key], "{key}");
    }
}

#[test]
fn what_is_there_is_replaced_only_on_request() {
    let folder = with_file("a.csv", b"KE (eV),counts\n1,2\n");
    fs::write(folder.path().join("a.json"), "mine").unwrap();
    let output = run(&folder, &["convert", "a.csv", "--to", "a.json"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(text(&output.stderr).contains("--replace"));
    assert_eq!(
        fs::read_to_string(folder.path().join("a.json")).unwrap(),
        "mine"
    );
    let output = run(
        &folder,
        &["convert", "a.csv", "--to", "a.json", "--replace", "--json"],
    );
    assert_eq!(output.status.code(), Some(0));
    let look: Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(look["kind"], "spectrum");
    let document: Value =
        serde_json::from_str(&fs::read_to_string(folder.path().join("a.json")).unwrap()).unwrap();
    assert_eq!(document["schema"], "bandrule/spectrum/1");
    assert_eq!(document["provenance"]["sources"][0]["file"], "a.csv");
}

#[test]
fn targets_and_sources_that_are_no_files_are_refused() {
    let folder = with_file("a.csv", b"KE (eV),counts\n1,2\n");
    fs::create_dir(folder.path().join("dir.json")).unwrap();
    for (arguments, says) in [
        (vec!["convert", "a.csv", "--to", "a.csv"], ".json"),
        (
            vec!["convert", "a.csv", "--to", "dir.json", "--replace"],
            "no regular file",
        ),
        (
            vec!["convert", "a.csv", "--to", "absent/a.json"],
            "could not create",
        ),
        (vec!["convert", "dir.json", "--to", "b.json"], "a directory"),
        (vec!["look", "/dev/zero"], "a device"),
    ] {
        let output = run(&folder, &arguments);
        assert_eq!(output.status.code(), Some(2), "{arguments:?}");
        assert_eq!(text(&output.stdout), "");
        assert!(
            text(&output.stderr).contains(says),
            "{}",
            text(&output.stderr)
        );
    }
    let names: Vec<_> = fs::read_dir(folder.path())
        .unwrap()
        .map(|e| e.unwrap().file_name())
        .collect();
    assert_eq!(names.len(), 2, "{names:?}");
}

#[test]
fn one_curve_of_several_is_converted_or_asked_for() {
    let root = std::path::Path::new(env!("CARGO_MANIFEST_DIR"));
    let bytes = fs::read(root.join("fixtures/iso14976/sdp-regular.vms")).unwrap();
    let folder = with_file("depth.vms", &bytes);
    let output = run(&folder, &["convert", "depth.vms", "--to", "one.json"]);
    assert_eq!(output.status.code(), Some(2));
    assert!(
        text(&output.stderr).contains("--block 1"),
        "{}",
        text(&output.stderr)
    );
    let output = run(
        &folder,
        &["convert", "depth.vms", "--to", "one.json", "--block", "2"],
    );
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let output = run(&folder, &["look", "one.json", "--json"]);
    let look: Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(look["files"][0]["kind"], "spectrum");
}
