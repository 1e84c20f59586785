//! Wrong and doubtful input: refused with a message that a newcomer can act on, and nothing written.

use super::{answered, assert_holds, compare, contents, demo, edit, text, truth};
use tempfile::TempDir;

/// Runs a study that must be refused: status 2, nothing on standard output, nothing written. Gives
/// the message, which names a file, line and column.
fn refused(folder: &TempDir) -> String {
    let before = contents(folder.path());
    let output = compare(folder, &["study.toml", "--out", "out"]);
    let message = text(&output.stderr);
    assert_eq!(output.status.code(), Some(2), "{message}");
    assert_eq!(text(&output.stdout), "");
    assert!(contents(folder.path()) == before, "nothing is written");
    let place = message
        .lines()
        .find_map(|line| line.trim().strip_prefix("--> "));
    let mut parts = place.expect("a place").split(':');
    assert!(
        folder.path().join(parts.next().unwrap()).is_file(),
        "{message}"
    );
    assert!(
        parts.next().unwrap().parse::<usize>().unwrap() > 0,
        "{message}"
    );
    assert!(
        parts.next().unwrap().parse::<usize>().unwrap() > 0,
        "{message}"
    );
    let json = compare(folder, &["study.toml", "--out", "out", "--json"]);
    assert_eq!(
        (json.status.code(), text(&json.stdout)),
        (Some(2), String::new())
    );
    assert_eq!(text(&json.stderr), message);
    message
}

fn refused_with(file: &str, from: &str, to: &str) -> String {
    let folder = demo();
    edit(&folder, file, from, to);
    refused(&folder)
}

#[test]
fn missing_unit() {
    let message = refused_with("levels.csv", "E_QP (Ha)", "E_QP");
    insta::assert_snapshot!(message, @r#"
    error: nothing says the unit of column 8 `E_QP`, read as energy-quasiparticle
     --> levels.csv:5:35
      |
    5 | ik,kx,ky,kz,weight,band,E_MF (Ha),E_QP,occupation
      |                                   ^^^^
      |
      = help: write it in the header, or as `unit.energy-quasiparticle = "eV"` under [computed] in study.toml; energies are in eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm, K
    "#);
}

#[test]
fn two_units_in_one_header() {
    let message = refused_with("levels.csv", "E_QP (Ha)", "E_QP (Ha) [eV]");
    insta::assert_snapshot!(message, @r#"
    error: the unit of energy-quasiparticle is given as Ha by the header cell `E_QP (Ha) [eV]` on line 5, and as eV by the header cell `E_QP (Ha) [eV]` on line 5
     --> levels.csv:5:35
      |
    5 | ik,kx,ky,kz,weight,band,E_MF (Ha),E_QP (Ha) [eV],occupation
      |                                   ^^^^^^^^^^^^^^
      |
      = help: find out which one is true and remove or correct the other
    "#);
}

#[test]
fn two_units_in_comment_and_header() {
    let message = refused_with(
        "levels.csv",
        "# k in units",
        "# energies in eV\n# k in units",
    );
    insta::assert_snapshot!(message, @r"
    error: the unit of energy-mean-field is given as Ha by the header cell `E_MF (Ha)` on line 6, and as eV by the comment `# energies in eV` on line 4
     --> levels.csv:6:25
      |
    6 | ik,kx,ky,kz,weight,band,E_MF (Ha),E_QP (Ha),occupation
      |                         ^^^^^^^^^
      |
     ::: levels.csv:4:3
      |
    4 | # energies in eV
      |   ^^^^^^^^^^^^^^ the comment `# energies in eV` on line 4
      |
      = help: find out which one is true and remove or correct the other

    error: the unit of energy-quasiparticle is given as Ha by the header cell `E_QP (Ha)` on line 6, and as eV by the comment `# energies in eV` on line 4
     --> levels.csv:6:35
      |
    6 | ik,kx,ky,kz,weight,band,E_MF (Ha),E_QP (Ha),occupation
      |                                   ^^^^^^^^^
      |
     ::: levels.csv:4:3
      |
    4 | # energies in eV
      |   ^^^^^^^^^^^^^^ the comment `# energies in eV` on line 4
      |
      = help: find out which one is true and remove or correct the other
    ");
}

#[test]
fn wrong_name_of_an_axis() {
    let message = refused_with("pes.csv", "Kinetic energy / eV", "Knetic energy / eV");
    insta::assert_snapshot!(message, @r#"
    error: no column is known to hold energies; the columns are 1 `Knetic energy / eV`, 2 `counts`
     --> pes.csv:4:1
      |
    4 | Knetic energy / eV;counts
      | ^^^^^^^^^^^^^^^^^^
      |
      = help: name it in the header, as in `Kinetic energy (eV)`, `Binding energy (eV)` or `E - E_F (eV)`, or say which one does, as in `column.energy = 1` under [photoemission] in study.toml
    "#);
}

#[test]
fn axis_without_its_kind() {
    let message = refused_with("pes.csv", "Kinetic energy / eV", "Energy / eV");
    insta::assert_snapshot!(message, @r#"
    error: nothing says what the energies in column 1 `Energy / eV` are counted along: kinetic, binding, final-state or photon
     --> pes.csv:4:1
      |
    4 | Energy / eV;counts
      | ^^^^^^^^^^^
      |
      = help: name it in the header, as in `Kinetic energy (eV)`, or write `axis = "kinetic"` under [photoemission] in study.toml
    "#);
}

#[test]
fn axis_that_turns_back() {
    let rows = ("16.950;60\n16.925;41", "16.925;41\n16.950;60");
    insta::assert_snapshot!(refused_with("pes.csv", rows.0, rows.1), @r#"
    error[axis-not-monotonic]: the energy axis runs downwards and turns back here
      --> pes.csv:10:1: 16.950 follows 16.925
      help: give each sweep a file of its own, or add the sweeps first; a row in the wrong place goes back to its own
    "#);
}

#[test]
fn missing_file() {
    let message = refused_with("study.toml", "\"metal.csv\"", "\"gold.csv\"");
    insta::assert_snapshot!(message, @r#"
    error: photoemission.fermi_edge names a file that is not there: gold.csv
      --> study.toml:19:14
       |
    19 | fermi_edge = "gold.csv"
       |              ^^^^^^^^^^
       |
       = help: paths are relative to the study file; looked for gold.csv
    "#);
}

#[test]
fn unknown_key() {
    let message = refused_with("study.toml", "photon_energy", "photon_enrgy");
    insta::assert_snapshot!(message, @r#"
    error: [photoemission] has no key "photon_enrgy"
      --> study.toml:18:1
       |
    18 | photon_enrgy = "21.218 eV"
       | ^^^^^^^^^^^^
       |
       = help: did you mean photon_energy?
    "#);
}

#[test]
fn kinetic_axis_that_nothing_ties() {
    let keys = "photon_energy = \"21.218 eV\"\nfermi_edge = \"metal.csv\"\n";
    insta::assert_snapshot!(refused_with("study.toml", keys, ""), @r#"
    error: a kinetic axis without what ties it to the Fermi level (photoemission)
     --> pes.csv:4:1
      |
    4 | Kinetic energy / eV;counts
      | ^^^^^^^^^^^^^^^^^^^
      |
      = help: under [photoemission] add fermi_edge = "FILE" of a metal on the same axis, or photon_energy = "… eV" and analyser_work_function = "… eV"
    "#);
}

#[test]
fn kinetic_axis_without_a_work_function() {
    let message = refused_with("study.toml", "fermi_edge = \"metal.csv\"\n", "");
    insta::assert_snapshot!(message, @r#"
    error: a kinetic axis without what ties it to the Fermi level (photoemission)
     --> pes.csv:4:1
      |
    4 | Kinetic energy / eV;counts
      | ^^^^^^^^^^^^^^^^^^^
      |
      = help: under [photoemission] add analyser_work_function = "… eV", or fermi_edge = "FILE" of a metal on the same axis
    "#);
}

#[test]
fn negative_counts() {
    let message = refused_with("pes.csv", "16.950;60", "16.950;-6");
    insta::assert_snapshot!(message, @r#"
    error[counts-negative]: a negative number of counts
      --> pes.csv:9:8: -6 counts
      help: use the counts as recorded, without subtraction; a corrected curve is not counts: rename its header to "intensity (arb. u.)"
    "#);
}

/// The metal's edge and the photon energy say 4.376 eV.
#[test]
fn metal_edge_and_work_function_that_disagree() {
    let both = "analyser_work_function = \"4.676 eV\"\nfermi_edge =";
    insta::assert_snapshot!(refused_with("study.toml", "fermi_edge =", both), @r#"
    error: the metal's Fermi edge and the work function put the Fermi level 0.300 eV apart, more than 0.030 eV
      --> study.toml:19:26
       |
    19 | analyser_work_function = "4.676 eV"
       |                          ^^^^^^^^^^
       |
      ::: study.toml:20:14
       |
    20 | fermi_edge = "metal.csv"
       |              ^^^^^^^^^^^ the metal
       |
       = help: the edge stands at 16.842 eV on the axis, the work function puts it at 16.542 eV: correct or remove the one that is wrong (work function, photon energy, bias and its sign)
    "#);
}

#[test]
fn metal_edge_and_work_function_that_agree() {
    let folder = demo();
    let both = "analyser_work_function = \"4.38 eV\"\nfermi_edge =";
    edit(&folder, "study.toml", "fermi_edge =", both);
    assert_eq!(answered(&folder)["verdict"]["agrees"], true);
}

#[test]
fn text_among_numbers() {
    let message = refused_with("pes.csv", "16.950;60", "16.950;sixty");
    insta::assert_snapshot!(message, @r#"
    error: expected a number in column `counts` and found `sixty`
     --> pes.csv:9:8
      |
    9 | 16.950;sixty
      |        ^^^^^
      |
      = help: write the number there; a row that has none may be removed on purpose, and `#` before a line makes it a comment
    "#);
}

#[test]
fn number_without_a_unit() {
    let message = refused_with("study.toml", "\"21.218 eV\"", "21.218");
    insta::assert_snapshot!(message, @r#"
    error: photoemission.photon_energy is a number without a unit
      --> study.toml:18:17
       |
    18 | photon_energy = 21.218
       |                 ^^^^^^
       |
       = help: write it as text with its unit, as in photon_energy = "21.218 eV"
    "#);
    let folder = demo();
    edit(&folder, "study.toml", "value = \"0.42 eV\"", "value = 0.42");
    insta::assert_snapshot!(refused(&folder), @r#"
    error: inverse_photoemission.resolution_fwhm.value is a number without a unit
      --> study.toml:26:29
       |
    26 | resolution_fwhm = { value = 0.42, standard_uncertainty = "0.02 eV" }
       |                             ^^^^
       |
       = help: write it as text with its unit, as in value = "0.42 eV"
    "#);
}

#[test]
fn what_is_no_toml() {
    let message = refused_with("study.toml", "[computed]", "[computed");
    insta::assert_snapshot!(message, @r#"
    error: not TOML: unclosed table, expected `]`
     --> study.toml:5:10
      |
    5 | [computed
      |          ^
      |
      = help: a study is TOML: [table] on a line of its own, then key = "text" line by line
    "#);
    let message = refused_with("study.toml", "\"levels.csv\"", "\"levels.csv");
    insta::assert_snapshot!(message, @r#"
    error: not TOML: invalid basic string, expected `"`
     --> study.toml:6:21
      |
    6 | levels = "levels.csv
      |                     ^
      |
      = help: a study is TOML: [table] on a line of its own, then key = "text" line by line
    "#);
}

#[test]
fn study_and_file_that_contradict_each_other() {
    let lines = "# photon energy: 40.814 eV\n# technique";
    insta::assert_snapshot!(refused_with("pes.csv", "# technique", lines), @r#"
    error: the study and pes.csv state different values of the photon energy: 21.218 and 40.814 eV
      --> study.toml:18:17
       |
    18 | photon_energy = "21.218 eV"
       |                 ^^^^^^^^^^^
       |
      ::: pes.csv:3:3
       |
     3 | # photon energy: 40.814 eV
       |   ^^^^^^^^^^^^^^^^^^^^^^^^ the file says
       |
       = help: correct the one that is wrong, or remove it from the study
    "#);
}

#[test]
fn every_problem_is_told_at_once() {
    let folder = demo();
    edit(&folder, "levels.csv", "E_QP (Ha)", "E_QP");
    edit(&folder, "pes.csv", "16.950;60", "16.950;sixty");
    edit(&folder, "ipes.csv", "E - E_F (eV)", "Energy (eV)");
    let message = refused(&folder);
    for place in ["levels.csv:5:35", "pes.csv:9:8", "ipes.csv:4:1"] {
        assert!(message.contains(place), "{place} in {message}");
    }
}

/// What a message advises is followed here, and the demo is answered as before.
#[test]
fn advice_settles_what_it_is_given_for() {
    let photoemission = "spectrum = \"pes.csv\"\n";
    let cases = [
        (
            ("levels.csv", "E_QP (Ha)", "E_QP"),
            (
                "levels = \"levels.csv\"\n",
                "unit.energy-quasiparticle = \"Ha\"\n",
            ),
        ),
        (
            ("pes.csv", "Kinetic energy / eV", "Energy / eV"),
            (photoemission, "axis = \"kinetic\"\n"),
        ),
        (
            ("ipes.csv", "E - E_F (eV)", "Final state energy (eV)"),
            ("spectrum = \"ipes.csv\"\n", "reference = \"fermi\"\n"),
        ),
        (
            ("study.toml", "fermi_edge = \"metal.csv\"\n", ""),
            (photoemission, "analyser_work_function = \"4.376 eV\"\n"),
        ),
        (
            (
                "pes.csv",
                "# technique",
                "# photon energy: 40.814 eV\n# technique",
            ),
            (photoemission, ""),
        ),
    ];
    for (index, ((file, from, to), (after, advice))) in cases.into_iter().enumerate() {
        let folder = demo();
        edit(&folder, file, from, to);
        edit(&folder, "study.toml", after, &format!("{after}{advice}"));
        if advice.is_empty() {
            edit(&folder, "pes.csv", "40.814 eV", "21.218 eV");
        }
        let result = answered(&folder);
        assert_eq!(result["verdict"]["agrees"], true, "case {index}");
        assert_holds(&result["measured"]["gap"], &truth()["gap"]);
    }
}

/// A curve that was corrected is no longer counts: renamed as advised it is read, its noise estimated.
#[test]
fn corrected_curve_is_read_as_what_it_is() {
    let folder = demo();
    edit(&folder, "pes.csv", "16.950;60", "16.950;-6");
    edit(&folder, "pes.csv", "eV;counts", "eV;intensity (arb. u.)");
    let result = answered(&folder);
    assert_eq!(result["fits"][0]["statistics"], "estimated-variance");
    assert_holds(
        &result["measured"]["valence_edge"],
        &truth()["valence_edge"],
    );
}
