use super::*;
use crate::export::sample;
use crate::schema::Quantity;

fn entries(dir: &Path) -> Vec<String> {
    let mut names: Vec<String> = fs::read_dir(dir)
        .unwrap()
        .map(|entry| entry.unwrap().file_name().into_string().unwrap())
        .collect();
    names.sort();
    names
}

fn written(dir: &Path, replace: bool) -> Result<ResultDocument, Error> {
    let (mut result, curves) = sample::two_sides();
    write_result(&mut result, &curves, dir, replace).map(|()| result)
}

#[test]
fn a_folder_holds_every_file_with_its_hash() {
    let home = tempfile::tempdir().unwrap();
    let dir = home.path().join("a/b");
    let result = written(&dir, false).unwrap();
    let mut names = NAMES.map(str::to_owned).to_vec();
    names.sort();
    assert_eq!(entries(&dir), names);
    let back: ResultDocument =
        serde_json::from_slice(&fs::read(dir.join(RESULT)).unwrap()).unwrap();
    assert_eq!(back, result);
    assert_eq!(back.files.len(), 6);
    for record in &back.files {
        let bytes = fs::read(dir.join(&record.file)).unwrap();
        assert_eq!(record.size_bytes, bytes.len() as u64);
        assert_eq!(record.sha256, hexadecimal(&Sha256::digest(&bytes)));
    }
}

#[test]
fn hashes_are_those_of_the_standard() {
    // FIPS 180-2, appendix B.1: the message "abc".
    assert_eq!(
        hexadecimal(&Sha256::digest(b"abc")),
        "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
    );
}

#[test]
fn the_same_input_gives_the_same_bytes() {
    let home = tempfile::tempdir().unwrap();
    let (one, two) = (home.path().join("1"), home.path().join("2"));
    written(&one, false).unwrap();
    written(&two, false).unwrap();
    for name in NAMES {
        assert_eq!(
            fs::read(one.join(name)).unwrap(),
            fs::read(two.join(name)).unwrap(),
            "{name}"
        );
    }
}

#[test]
fn an_existing_result_needs_replace() {
    let home = tempfile::tempdir().unwrap();
    written(home.path(), false).unwrap();
    assert!(matches!(
        check_target(home.path(), false),
        Err(Error::Exists { .. })
    ));
    assert!(matches!(
        written(home.path(), false),
        Err(Error::Exists { .. })
    ));
    assert!(check_target(home.path(), true).is_ok());
    written(home.path(), true).unwrap();
    assert_eq!(entries(home.path()).len(), NAMES.len());
}

#[test]
fn replacing_removes_listed_files_without_successor_and_nothing_else() {
    let home = tempfile::tempdir().unwrap();
    fs::write(home.path().join("notes.txt"), "mine").unwrap();
    written(home.path(), false).unwrap();
    let (mut result, curves) = sample::one_side();
    write_result(&mut result, &curves, home.path(), true).unwrap();
    assert_eq!(
        entries(home.path()),
        [
            "computed_valence.csv",
            "figure.svg",
            "notes.txt",
            "photoemission.csv",
            "report.html",
            "result.json"
        ]
    );
}

#[test]
fn a_file_that_the_old_result_does_not_list_is_refused() {
    let home = tempfile::tempdir().unwrap();
    let (mut result, curves) = sample::one_side();
    write_result(&mut result, &curves, home.path(), false).unwrap();
    let foreign = home.path().join("inverse_photoemission.csv");
    fs::write(&foreign, "mine").unwrap();
    let before = fs::read(home.path().join(RESULT)).unwrap();
    match written(home.path(), true) {
        Err(Error::NotOurs { path }) => assert_eq!(path, foreign),
        other => panic!("{other:?}"),
    }
    assert_eq!(fs::read_to_string(&foreign).unwrap(), "mine");
    assert_eq!(fs::read(home.path().join(RESULT)).unwrap(), before);
}

#[test]
fn files_without_any_result_are_refused() {
    let home = tempfile::tempdir().unwrap();
    fs::write(home.path().join("figure.svg"), "mine").unwrap();
    assert!(matches!(
        check_target(home.path(), true),
        Err(Error::NotOurs { .. })
    ));
    fs::write(
        home.path().join(RESULT),
        r#"{"schema":"other/1","files":[]}"#,
    )
    .unwrap();
    assert!(matches!(
        check_target(home.path(), true),
        Err(Error::NotAResult { .. })
    ));
    fs::write(home.path().join("plain"), "").unwrap();
    assert!(matches!(
        check_target(&home.path().join("plain"), true),
        Err(Error::NotAFolder { .. })
    ));
}

#[test]
fn names_in_an_old_result_never_lead_out_of_the_folder() {
    let home = tempfile::tempdir().unwrap();
    let dir = home.path().join("out");
    fs::create_dir(&dir).unwrap();
    let victim = home.path().join("victim.txt");
    fs::write(&victim, "mine").unwrap();
    let records: Vec<FileRecord> = [
        "../victim.txt",
        victim.to_str().unwrap(),
        "./x",
        "..",
        "",
        "a/../../victim.txt",
    ]
    .into_iter()
    .map(|file| FileRecord {
        file: file.to_owned(),
        size_bytes: 0,
        sha256: String::new(),
    })
    .collect();
    let listing = serde_json::json!({"schema": "bandrule/result/1", "files": records});
    fs::write(dir.join(RESULT), listing.to_string()).unwrap();
    written(&dir, true).unwrap();
    assert_eq!(fs::read_to_string(&victim).unwrap(), "mine");
    for name in ["..", ".", "", "a/b", "a\\b", "c:x", "/x", "x/"] {
        assert!(!is_plain_name(name), "{name}");
    }
    assert!(is_plain_name("photoemission.csv"));
}

#[test]
fn a_failed_read_back_leaves_nothing_behind() {
    let home = tempfile::tempdir().unwrap();
    let dir = home.path().join("a/b");
    let (mut result, curves) = sample::two_sides();
    result.difference = Some(Quantity::new(f64::NAN, 0.1));
    let before = result.files.clone();
    let told = write_result(&mut result, &curves, &dir, false).unwrap_err();
    assert!(
        matches!(&told, Error::RoundTrip { file, .. } if file == RESULT),
        "{told}"
    );
    assert_eq!(entries(home.path()), Vec::<String>::new());
    assert_eq!(result.files, before);

    written(&dir, false).unwrap();
    let whole = fs::read(dir.join(RESULT)).unwrap();
    write_result(&mut result, &curves, &dir, true).unwrap_err();
    assert_eq!(entries(&dir).len(), NAMES.len());
    assert_eq!(fs::read(dir.join(RESULT)).unwrap(), whole);
}

#[cfg(unix)]
#[test]
fn files_get_the_permissions_of_any_new_file() {
    use std::os::unix::fs::PermissionsExt;
    let home = tempfile::tempdir().unwrap();
    written(home.path(), false).unwrap();
    let other = home.path().join("other");
    fs::write(&other, "").unwrap();
    let mode = |path: PathBuf| fs::metadata(path).unwrap().permissions().mode();
    assert_eq!(mode(home.path().join(RESULT)), mode(other));
}

/// Leaves a folder for the eye: `cargo test draw_for_the_eye -- --ignored`, then look at target/look.
#[test]
#[ignore = "writes files to look at"]
fn draw_for_the_eye() {
    let home = Path::new(env!("CARGO_MANIFEST_DIR")).join("target/look");
    for (name, (mut result, curves)) in sample::all() {
        write_result(&mut result, &curves, &home.join(name), true).unwrap();
        fs::write(
            home.join(name).join("summary.txt"),
            crate::export::summary(&result),
        )
        .unwrap();
    }
}
