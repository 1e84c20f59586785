//! The program from outside: exit status, standard output, standard error and files.

#![allow(
    clippy::cast_precision_loss,
    clippy::float_cmp,
    clippy::format_collect,
    clippy::format_push_string
)]

mod answers;
mod convert;
mod look;
mod refusals;

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;
use std::process::Output;

use assert_cmd::Command;
use serde_json::Value;
use tempfile::TempDir;

/// A copy of the demo in a folder of its own.
fn demo() -> TempDir {
    let folder = tempfile::tempdir().unwrap();
    let source = Path::new(env!("CARGO_MANIFEST_DIR")).join("fixtures/demo");
    for name in [
        "study.toml",
        "levels.csv",
        "pes.csv",
        "metal.csv",
        "ipes.csv",
    ] {
        fs::copy(source.join(name), folder.path().join(name)).unwrap();
    }
    folder
}

fn truth() -> Value {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("fixtures/demo/truth.json");
    serde_json::from_str(&fs::read_to_string(path).unwrap()).unwrap()
}

/// Replaces the one place where a file of the demo says `from`.
fn edit(folder: &TempDir, file: &str, from: &str, to: &str) {
    let path = folder.path().join(file);
    let text = fs::read_to_string(&path).unwrap();
    assert_eq!(text.matches(from).count(), 1, "{file} says once {from:?}");
    fs::write(&path, text.replace(from, to)).unwrap();
}

/// Runs `bandrule compare` with the folder as working directory.
fn compare(folder: &TempDir, arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_bandrule"))
        .current_dir(folder.path())
        .arg("compare")
        .args(arguments)
        .output()
        .unwrap()
}

/// Runs the program in a folder.
fn run(folder: &TempDir, arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_bandrule"))
        .current_dir(folder.path())
        .args(arguments)
        .output()
        .unwrap()
}

/// A folder with one file.
fn with_file(name: &str, bytes: &[u8]) -> TempDir {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join(name), bytes).unwrap();
    folder
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).unwrap()
}

/// Every file under a folder with its bytes.
fn contents(folder: &Path) -> BTreeMap<String, Vec<u8>> {
    let mut all = BTreeMap::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        let name = path.file_name().unwrap().to_str().unwrap().to_owned();
        if path.is_dir() {
            let inner = contents(&path).into_iter();
            all.extend(inner.map(|(file, bytes)| (format!("{name}/{file}"), bytes)));
            all.insert(name + "/", Vec::new());
        } else {
            all.insert(name, fs::read(&path).unwrap());
        }
    }
    all
}

/// Runs the demo with one edit, which must be answered; gives the result.
fn answered(folder: &TempDir) -> Value {
    let output = compare(folder, &["study.toml", "--out", "out"]);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    assert_eq!(text(&output.stderr), "");
    let json = fs::read_to_string(folder.path().join("out/result.json")).unwrap();
    serde_json::from_str(&json).unwrap()
}

fn number(value: &Value) -> f64 {
    value
        .as_f64()
        .unwrap_or_else(|| panic!("a number: {value}"))
}

fn assert_holds(quantity: &Value, truth: &Value) {
    let (lower, upper) = (number(&quantity["lower"]), number(&quantity["upper"]));
    let truth = number(truth);
    assert!(lower <= truth && truth <= upper, "{truth} in {quantity}");
    assert!(number(&quantity["standard_uncertainty"]) > 0.0);
}
