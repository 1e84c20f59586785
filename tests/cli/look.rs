//! `bandrule look`: what it shows, and what overrules a conclusion.

use serde_json::Value;

use super::{number, run, text, with_file};

const LEVELS: &str = "# invented data: a path through an invented zone\n# energies in Ha, relative to the Fermi level\n\
                      band  E_KS  E_QP  note\n# k-point 1: 0.0 0.0 0.0\n1  -0.20  -0.25  7\n2  0.10  0.20  --\n\n\
                      # k-point 2: 0.0 0.0 0.5\n1  -0.30  ****  8\n2  0.15  0.25  9\n";

fn look(bytes: &[u8], arguments: &[&str]) -> String {
    let folder = with_file("file.txt", bytes);
    let mut all = vec!["look", "file.txt"];
    all.extend(arguments);
    let output = run(&folder, &all);
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    assert_eq!(text(&output.stderr), "");
    text(&output.stdout)
}

fn refused(bytes: &[u8], arguments: &[&str]) -> String {
    let folder = with_file("file.txt", bytes);
    let mut all = vec!["look", "file.txt"];
    all.extend(arguments);
    let output = run(&folder, &all);
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(text(&output.stdout), "");
    text(&output.stderr)
}

fn json(bytes: &[u8], arguments: &[&str]) -> Value {
    let mut all = arguments.to_vec();
    all.push("--json");
    let look: Value = serde_json::from_str(&look(bytes, &all)).unwrap();
    assert_eq!(look["schema"], "bandrule/look/1");
    look["files"][0].clone()
}

#[test]
fn everything_that_was_understood_is_shown_with_its_evidence() {
    insta::assert_snapshot!(look(LEVELS.as_bytes(), &[]), @r"
    file.txt: levels, 4 rows
      text    UTF-8; 4 fields separated by blanks, decimal point; names on line 3
      zero    fermi, by the comment `# energies in Ha, relative to the Fermi level` on line 2
      number  k-index by the titles of blocks, first on line 4

       #  header  role                  unit     values         least      greatest  course
       1  band    band                  -             4             1             2  ▁█▁█
          by the header cell `band` on line 3
       2  E_KS    energy-mean-field     Ha            4          -0.3          0.15  ▂█▁█
          by the header cell `E_KS` on line 3; Ha by the comment `# energies in Ha, relative to the Fermi level` on line 2
       3  E_QP    energy-quasiparticle  Ha            3         -0.25          0.25  ▁█ █
          by the header cell `E_QP` on line 3; Ha by the comment `# energies in Ha, relative to the Fermi level` on line 2; 1 missing
       4  note    -                     -             3             7             9  ▁ ▄█
          by the header cell `note` on line 3; 1 missing

      skipped
        line 1: a statement that is not known here: `# invented data: a path through an invented zone`
        column 4 `note`: not a name that is known here

      to change a conclusion
        kind levels                        --as spectrum|density|dispersion|gaps|series
        fields separated by blanks         --delimiter semicolon|tab|comma|pipe
        decimal point                      --decimal comma
        column 1 is band                   --column band=2
        column 2 is energy-mean-field      --column energy-mean-field=1
        energy-mean-field in Ha            --unit energy-mean-field=UNIT
        column 3 is energy-quasiparticle   --column energy-quasiparticle=1
        energy-quasiparticle in Ha         --unit energy-quasiparticle=UNIT
        column 4 not used                  --column ROLE=4
        zero fermi                         --reference valence-edge|vacuum|unknown
    ");
}

#[test]
fn json_has_the_numbers_of_every_column() {
    let file = json(LEVELS.as_bytes(), &[]);
    assert_eq!(
        (file["kind"].as_str(), file["rows"].as_u64()),
        (Some("levels"), Some(4))
    );
    assert_eq!(file["reference"], "fermi");
    let columns = file["columns"].as_array().unwrap();
    let quasiparticle = &columns[2];
    assert_eq!(quasiparticle["role"], "energy-quasiparticle");
    assert_eq!(quasiparticle["unit"], "Ha");
    assert_eq!(
        (
            quasiparticle["count"].as_u64(),
            quasiparticle["missing"].as_u64()
        ),
        (Some(3), Some(1))
    );
    assert_eq!(number(&quasiparticle["minimum"]), -0.25);
    assert_eq!(number(&quasiparticle["maximum"]), 0.25);
    assert!((number(&quasiparticle["sum"]) - 0.2).abs() < 1e-15);
    // A column that is not used is read all the same.
    assert_eq!(columns[3]["role"], Value::Null);
    assert_eq!(number(&columns[3]["sum"]), 24.0);
}

#[test]
fn options_overrule_what_the_file_says_and_say_so() {
    let file = json(
        LEVELS.as_bytes(),
        &["--unit", "energy=eV", "--reference", "vacuum"],
    );
    assert_eq!(file["reference"], "vacuum");
    let column = &file["columns"][2];
    assert_eq!(column["unit"], "eV");
    let evidence = column["evidence"].as_str().unwrap();
    assert!(
        evidence.contains("--unit energy, against Ha by the comment"),
        "{evidence}"
    );
    let curve = "1;1,250\n2;2,500\n";
    let message = refused(curve.as_bytes(), &[]);
    assert!(message.contains("--decimal comma"), "{message}");
    let all = [
        "--decimal",
        "comma",
        "--as",
        "spectrum",
        "--column",
        "energy=1",
        "--column",
        "intensity=2",
        "--unit",
        "energy=eV",
        "--unit",
        "intensity=counts/s",
        "--axis",
        "kinetic",
    ];
    let file = json(curve.as_bytes(), &all);
    assert_eq!(number(&file["columns"][1]["sum"]), 3.75);
}

#[test]
fn bands_in_columns_are_asked_for_and_settled() {
    let path = b"# energies in eV\nkpath b1 b2\n0.0 -1 2\n0.1 -2 3\n";
    let message = refused(path, &[]);
    assert!(
        message.contains("--column energy-mean-field=1"),
        "{message}"
    );
    let file = json(path, &["--column", "energy-quasiparticle=2-3"]);
    assert_eq!(file["kind"], "levels");
    assert_eq!(file["columns"][2]["role"], "band-energy");
    let message = refused(path, &["--column", "energy-quasiparticle=2-4"]);
    assert!(message.contains("has 3 columns"), "{message}");
}

#[test]
fn arguments_that_mean_nothing_are_usage_errors() {
    for (arguments, says) in [
        (["--column", "colour=1"], "colour"),
        (["--column", "energy"], "ROLE=VALUE"),
        (["--column", "energy=0"], "counted from 1"),
        (["--as", "bands"], "levels"),
        (["--reference", "midgap"], "valence-edge"),
        (["--decimal", "dot"], "comma"),
        (["--block", "0"], "0"),
    ] {
        let message = refused(b"KE (eV),counts\n1,2\n", &arguments);
        assert!(message.contains(says), "{message}");
    }
}

#[test]
fn several_files_are_shown_together_or_none_is() {
    let folder = with_file("a.csv", b"KE (eV),counts\n1,2\n");
    std::fs::write(folder.path().join("b.csv"), "KE (eV),counts\n1\n").unwrap();
    let output = run(&folder, &["look", "a.csv", "b.csv", "absent.csv"]);
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(text(&output.stdout), "");
    let message = text(&output.stderr);
    assert!(
        message.contains("b.csv") && message.contains("absent.csv"),
        "{message}"
    );
    let output = run(&folder, &["look", "a.csv", "a.csv", "--json"]);
    let look: Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(look["files"].as_array().unwrap().len(), 2);
}

/// The same bytes give the same output for any number of threads.
#[test]
fn threads_do_not_show() {
    let mut table = String::from("k band E_QP (eV)\n");
    for row in 0..60_000 {
        table += &format!("{} {} {}\n", row / 10, row % 10, f64::from(row).sin());
    }
    let folder = with_file("t.txt", table.as_bytes());
    let with = |threads: &str| {
        assert_cmd::Command::new(env!("CARGO_BIN_EXE_bandrule"))
            .current_dir(folder.path())
            .env("RAYON_NUM_THREADS", threads)
            .args(["look", "t.txt", "--json"])
            .output()
            .unwrap()
            .stdout
    };
    let one = with("1");
    assert!(!one.is_empty());
    assert!(one == with("2") && one == with("7"));
}
