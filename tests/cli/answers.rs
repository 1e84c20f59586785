//! What the program answers, prints and writes.

use std::fs;
use std::path::Path;

use assert_cmd::Command;
use serde_json::Value;
use sha2::{Digest, Sha256};

use super::{answered, assert_holds, compare, contents, demo, edit, number, text, truth};

const FILES: [&str; 7] = [
    "computed_conduction.csv",
    "computed_valence.csv",
    "figure.svg",
    "inverse_photoemission.csv",
    "photoemission.csv",
    "report.html",
    "result.json",
];

#[test]
fn demo_is_answered_on_one_screen_and_in_files() {
    let folder = demo();
    let output = compare(&folder, &["study.toml", "--out", "out"]);
    assert_eq!(output.status.code(), Some(0));
    assert_eq!(text(&output.stderr), "");
    let printed = text(&output.stdout);
    let written = "\nWritten to out: report.html, figure.svg, result.json, 4 tables (CSV)\n";
    assert!(printed.ends_with(written), "{printed}");
    assert!(printed.lines().count() <= 24, "{printed}");
    for line in printed.lines() {
        assert!(line.chars().count() <= 80, "{line}");
    }
    let out = folder.path().join("out");
    let names: Vec<String> = contents(&out).into_keys().collect();
    assert_eq!(names, FILES);
}

#[test]
fn result_of_the_demo_holds_the_truth_and_lists_its_files() {
    let folder = demo();
    let result = answered(&folder);
    let truth = truth();
    assert_holds(&result["measured"]["valence_edge"], &truth["valence_edge"]);
    assert_holds(
        &result["measured"]["conduction_edge"],
        &truth["conduction_edge"],
    );
    assert_holds(&result["measured"]["gap"], &truth["gap"]);
    assert_holds(&result["shift"]["valence"], &truth["shift_valence"]);
    assert_holds(&result["shift"]["conduction"], &truth["shift_conduction"]);
    assert_holds(&result["difference"], &truth["difference"]);
    let computed = number(&result["computed"]["gap"]["value"]);
    assert!((computed - number(&truth["computed_gap"])).abs() < 1e-6);
    assert_eq!(result["verdict"]["agrees"], true);
    assert_eq!(result["cautions"], Value::Array(Vec::new()));
    let difference = number(&result["difference"]["value"]);
    let expanded = number(&result["expanded"]["expanded_uncertainty_ev"]);
    assert!((number(&result["en_score"]) - difference / expanded).abs() < 1e-12);
    for file in result["files"].as_array().unwrap() {
        let name = file["file"].as_str().unwrap();
        let bytes = fs::read(folder.path().join("out").join(name)).unwrap();
        let digest = Sha256::digest(&bytes);
        let hash: String = digest.iter().map(|byte| format!("{byte:02x}")).collect();
        assert_eq!(file["sha256"], hash, "{name}");
        assert_eq!(file["size_bytes"], bytes.len(), "{name}");
    }
    assert_eq!(result["files"].as_array().unwrap().len(), FILES.len() - 1);
    for source in [
        "study.toml",
        "levels.csv",
        "pes.csv",
        "metal.csv",
        "ipes.csv",
    ] {
        let sources = result["provenance"]["sources"].as_array().unwrap();
        assert!(
            sources.iter().any(|known| known["file"] == source),
            "{source}"
        );
    }
}

#[test]
fn a_result_is_replaced_only_where_asked_and_is_the_same_for_any_number_of_threads() {
    let folder = demo();
    let run = |threads: &str, arguments: &[&str]| {
        Command::new(env!("CARGO_BIN_EXE_bandrule"))
            .current_dir(folder.path())
            .env("RAYON_NUM_THREADS", threads)
            .args(["compare", "study.toml", "--out", "out"])
            .args(arguments)
            .output()
            .unwrap()
    };
    assert_eq!(run("1", &[]).status.code(), Some(0));
    let out = folder.path().join("out");
    fs::write(out.join("notes.txt"), "mine").unwrap();
    let first = contents(&out);

    let again = run("1", &[]);
    assert_eq!(
        (again.status.code(), text(&again.stdout)),
        (Some(2), String::new())
    );
    insta::assert_snapshot!(text(&again.stderr), @"error: out/result.json exists already: choose another name, or ask for the old one to be replaced (--replace)");
    assert!(contents(&out) == first, "nothing is changed");

    let replaced = run("2", &["--replace"]);
    assert_eq!(
        replaced.status.code(),
        Some(0),
        "{}",
        text(&replaced.stderr)
    );
    assert!(
        contents(&out) == first,
        "the same bytes, and what is not ours stays"
    );
}

#[test]
fn json_is_one_document_and_the_result() {
    let folder = demo();
    let output = compare(&folder, &["study.toml", "--out", "out", "--json"]);
    assert_eq!(output.status.code(), Some(0));
    assert_eq!(text(&output.stderr), "");
    // One document and nothing after it.
    let printed: Value = serde_json::from_slice(&output.stdout).unwrap();
    let written = fs::read(folder.path().join("out/result.json")).unwrap();
    assert_eq!(printed, serde_json::from_slice::<Value>(&written).unwrap());
}

#[test]
fn several_studies_are_answered_together_or_not_at_all() {
    let folder = demo();
    let path = |name: &str| folder.path().join(name);
    fs::copy(path("study.toml"), path("other.toml")).unwrap();
    let arguments = ["study.toml", "other.toml", "--out", "out", "--json"];
    let output = compare(&folder, &arguments);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    let printed: Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(printed.as_array().map(Vec::len), Some(2));
    assert!(path("out/study/result.json").is_file() && path("out/other/result.json").is_file());

    fs::remove_dir_all(path("out")).unwrap();
    edit(&folder, "other.toml", "\"ipes.csv\"", "\"missing.csv\"");
    let output = compare(&folder, &arguments);
    assert_eq!(
        (output.status.code(), text(&output.stdout)),
        (Some(2), String::new())
    );
    assert!(
        !path("out").exists(),
        "the study that could be answered waits for the other"
    );
}

#[test]
fn final_state_axis_with_no_reference_has_no_gap() {
    let folder = demo();
    edit(
        &folder,
        "ipes.csv",
        "E - E_F (eV)",
        "Final state energy (eV)",
    );
    let result = answered(&folder);
    assert_eq!(result["measured"]["gap"], Value::Null);
    assert_eq!(result["difference"], Value::Null);
    assert_eq!(result["en_score"], Value::Null);
    assert_eq!(result["verdict"]["agrees"], Value::Null);
    insta::assert_snapshot!(result["verdict"]["statement"].as_str().unwrap(), @"No verdict: nothing ties the energies of inverse photoemission to a reference; state reference = \"fermi\" there if they count from the Fermi level, or give the Fermi edge of a metal (fermi_edge).");
}

#[test]
fn computation_without_uncertainty_has_no_verdict() {
    let folder = demo();
    let study = fs::read_to_string(folder.path().join("study.toml")).unwrap();
    let start = study.find("[computed.uncertainty]").unwrap();
    let stop = study.find("[photoemission]").unwrap();
    edit(&folder, "study.toml", &study[start..stop], "");
    let result = answered(&folder);
    assert!(result["difference"]["value"].is_f64());
    assert_eq!(result["verdict"]["agrees"], Value::Null);
    let statement = result["verdict"]["statement"].as_str().unwrap();
    let why = "but no uncertainty of the computed gap is stated (add [computed.uncertainty]).";
    assert!(statement.starts_with("No verdict: computed minus measured gap is "));
    assert!(statement.ends_with(why), "{statement}");
}

#[test]
fn photoemission_alone_has_an_edge_and_no_gap() {
    let folder = demo();
    let study = fs::read_to_string(folder.path().join("study.toml")).unwrap();
    let start = study.find("[inverse_photoemission]").unwrap();
    let stop = study.find("[corrections]").unwrap();
    edit(&folder, "study.toml", &study[start..stop], "");
    let result = answered(&folder);
    assert_holds(
        &result["measured"]["valence_edge"],
        &truth()["valence_edge"],
    );
    assert_eq!(result["measured"]["conduction_edge"], Value::Null);
    assert_eq!(result["measured"]["gap"], Value::Null);
    assert_eq!(result["verdict"]["agrees"], Value::Null);
    insta::assert_snapshot!(result["verdict"]["statement"].as_str().unwrap(), @"No verdict: a gap needs both photoemission and inverse photoemission; the study names one of them.");
}

#[test]
fn the_readme_shows_what_the_program_says() {
    let readme = Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md");
    let readme = fs::read_to_string(readme).unwrap();
    let folder = demo();
    let output = compare(&folder, &["study.toml", "--out", "out"]);
    let said = text(&output.stdout);
    assert!(
        readme.contains(said.trim_end()),
        "README.md should show:\n{said}"
    );
}

/// The tables of the README's worked example are read as they stand there.
#[test]
fn the_tables_of_the_readme_are_read() {
    use bandrule::parse::{Hints, Source, read_levels, read_spectrum};
    let readme = Path::new(env!("CARGO_MANIFEST_DIR")).join("README.md");
    let readme = fs::read_to_string(readme).unwrap();
    let table = |first: &str| -> String {
        let lines = readme.lines().map(str::trim);
        let lines = lines.skip_while(|line| !line.starts_with(first));
        let lines: Vec<&str> = lines.take_while(|line| !line.starts_with("```")).collect();
        lines.join("\n")
    };
    let levels = table("# k, band and occupation");
    let levels = read_levels(Source::from_text("levels.csv", &levels), &Hints::default());
    assert_eq!(levels.unwrap().document.rows, 2);
    let pes = table("# temperature: 300 K");
    let pes = read_spectrum(Source::from_text("pes.csv", &pes), &Hints::default());
    let pes = pes.unwrap().document;
    assert_eq!(pes.intensity, [211.0, 225.0]);
    assert_eq!(pes.conditions.temperature_k, Some(300.0));
}
