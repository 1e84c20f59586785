//! The published shapes of the documents: `schemas/` is current, and real documents keep to it.
//!
//! After a change of the types, `BLESS=1 cargo test --test schemas` writes the files anew.

use std::fs;
use std::path::{Path, PathBuf};

use bandrule::compare::{Study, compare};
use bandrule::export;
use bandrule::parse::{Hints, Source, read_any, read_levels, read_spectrum};
use bandrule::quantity::Reference;
use bandrule::schema::{
    Density, Dispersion, Document, Gaps, Levels, Look, ResultDocument, Series, Spectrum,
    json_schema,
};
use jsonschema::draft202012;
use serde_json::{Value, json};

fn root() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

fn schema_path<T: Document>() -> PathBuf {
    root()
        .join("schemas")
        .join(format!("{}.schema.json", T::KIND))
}

/// What a validator objects to, each with the place in the document. The schema is the generated one,
/// which another test holds equal to the file.
fn objections<T: Document>(document: &Value) -> Vec<String> {
    let validator = draft202012::new(&json_schema::<T>()).unwrap();
    let errors = validator.iter_errors(document);
    errors
        .map(|e| format!("{}: {e}", e.instance_path))
        .collect()
}

fn assert_valid<T: Document>(document: &Value) {
    let objections = objections::<T>(document);
    assert!(objections.is_empty(), "{objections:#?}");
}

fn assert_broken<T: Document>(document: &Value, place: &str) {
    let objections = objections::<T>(document);
    let there = objections
        .iter()
        .any(|objection| objection.starts_with(place));
    assert!(there, "an objection at {place:?} among {objections:#?}");
    assert!(
        serde_json::from_value::<T>(document.clone()).is_err(),
        "at {place:?}"
    );
}

fn demo(name: &str) -> Source {
    let path = root().join("fixtures/demo").join(name);
    Source::read(&path, name).unwrap()
}

fn levels() -> Levels {
    let hints = Hints {
        reference: Some(Reference::ValenceEdge),
        ..Hints::default()
    };
    read_levels(demo("levels.csv"), &hints).unwrap().document
}

fn spectrum(name: &str) -> Spectrum {
    read_spectrum(demo(name), &Hints::default())
        .unwrap()
        .document
}

/// The demo's result as the program writes it.
fn result(folder: &Path) -> Value {
    let study = root().join("fixtures/demo/study.toml");
    let mut outcome = compare(&Study::read(&study, "study.toml").unwrap()).unwrap();
    export::write_result(&mut outcome.result, &outcome.curves, folder, false).unwrap();
    let printed = serde_json::to_value(&outcome.result).unwrap();
    let text = fs::read_to_string(folder.join("result.json")).unwrap();
    let written: Value = serde_json::from_str(&text).unwrap();
    assert_eq!(written, printed, "what is printed is what is written");
    written
}

fn is_current<T: Document>() {
    let schema = json_schema::<T>();
    let mut text = serde_json::to_string_pretty(&schema).unwrap();
    text.push('\n');
    let path = schema_path::<T>();
    if std::env::var_os("BLESS").is_some_and(|value| value == "1") {
        fs::create_dir_all(path.parent().unwrap()).unwrap();
        fs::write(&path, &text).unwrap();
    }
    let found = fs::read_to_string(&path).unwrap_or_default();
    assert!(found == text, "{} is old: run with BLESS=1", path.display());
    assert_eq!(
        schema["$schema"],
        "https://json-schema.org/draft/2020-12/schema"
    );
    draft202012::meta::validate(&schema).unwrap();
}

#[test]
fn schemas_are_current_and_schemas() {
    is_current::<Levels>();
    is_current::<Spectrum>();
    is_current::<Density>();
    is_current::<Dispersion>();
    is_current::<Gaps>();
    is_current::<Series>();
    is_current::<Look>();
    is_current::<ResultDocument>();
    let files = fs::read_dir(root().join("schemas")).unwrap();
    assert_eq!(files.count(), 8, "no other file among the schemas");
}

/// A small table of each kind that the demo has not.
const TABLES: [(&str, &str); 5] = [
    (
        "levels",
        "# quasiparticle energies in Ha\nkpath,band 1,band 2\n0,-0.5,0.5\n1,nan,0.25\n",
    ),
    (
        "density",
        "E - E_F (eV),DOS (states/eV),Zn d\n0,1,2\n1,2,3\n",
    ),
    (
        "dispersion",
        "k (1/Å),Binding energy (eV),error\n0,1,0.1\n0.1,2,0.1\n",
    ),
    (
        "gaps",
        "material,PBE (eV),G0W0 (eV),optical gap (eV)\nXa,0.5,1.5,\nXb,2.5,3.5,3\n",
    ),
    (
        "series",
        "bands,cutoff (Ry),gap (eV)\n100,20,1.5\n200,20,1.6\n",
    ),
];

#[test]
fn documents_and_looks_of_every_kind_are_valid_and_come_back() {
    for (kind, text) in TABLES {
        let source = Source::from_text("t", text);
        let read =
            read_any(source, None, &Hints::default()).unwrap_or_else(|why| panic!("{why:?}"));
        assert_eq!(read[0].kind().name(), kind);
        let json = read[0].to_json().unwrap();
        let value: Value = serde_json::from_str(&json).unwrap();
        match kind {
            "levels" => assert_valid::<Levels>(&value),
            "density" => assert_valid::<Density>(&value),
            "dispersion" => assert_valid::<Dispersion>(&value),
            "gaps" => assert_valid::<Gaps>(&value),
            _ => assert_valid::<Series>(&value),
        }
        let back = read_any(Source::from_text("t", &json), None, &Hints::default()).unwrap();
        assert_eq!(back[0].to_json().unwrap(), json);
        let look = Look {
            schema: Look::identifier(),
            files: vec![read[0].look(), back[0].look()],
        };
        let look = serde_json::to_value(look).unwrap();
        assert_valid::<Look>(&look);
    }
}

#[test]
fn a_document_whose_arrays_differ_in_length_is_refused() {
    let mut document = serde_json::to_value(spectrum("pes.csv")).unwrap();
    document["intensity"].as_array_mut().unwrap().pop();
    let source = Source::from_text("short.json", &document.to_string());
    let problems = read_any(source, None, &Hints::default()).unwrap_err();
    assert!(
        problems[0].message.contains("`intensity` has 342 entries"),
        "{problems:?}"
    );
}

#[test]
fn documents_of_the_demo_are_valid_and_come_back() {
    let document = serde_json::to_value(levels()).unwrap();
    assert_valid::<Levels>(&document);
    assert_eq!(
        serde_json::from_value::<Levels>(document).unwrap(),
        levels()
    );
    for name in ["pes.csv", "metal.csv", "ipes.csv"] {
        let document = serde_json::to_value(spectrum(name)).unwrap();
        assert_valid::<Spectrum>(&document);
        let back: Spectrum = serde_json::from_value(document).unwrap();
        assert_eq!(back, spectrum(name));
    }
}

#[test]
fn result_of_the_demo_is_valid_and_a_broken_one_is_not() {
    let folder = tempfile::tempdir().unwrap();
    let document = result(&folder.path().join("out"));
    assert_valid::<ResultDocument>(&document);
    let back: ResultDocument = serde_json::from_value(document.clone()).unwrap();
    assert_eq!(serde_json::to_value(back).unwrap(), document);

    let mut broken = document.clone();
    broken.as_object_mut().unwrap().remove("verdict");
    assert_broken::<ResultDocument>(&broken, "");
    let mut broken = document.clone();
    broken["verdict"]["agrees"] = json!("yes");
    assert_broken::<ResultDocument>(&broken, "/verdict/agrees");
    let mut broken = document.clone();
    broken["measured"]["gap"]["value"] = json!("3.4 eV");
    assert_broken::<ResultDocument>(&broken, "/measured/gap");
    let mut broken = document;
    broken["budget"][0]["evaluation"] = json!("C");
    assert_broken::<ResultDocument>(&broken, "/budget/0/evaluation");
}

#[test]
fn numbers_that_are_not_finite_travel_as_words() {
    let mut document = spectrum("ipes.csv");
    document.energy_ev[0] = 0.1 + 0.2;
    document.intensity[0] = f64::NAN;
    document.intensity[1] = f64::NEG_INFINITY;
    document.standard_uncertainty = Some(vec![f64::INFINITY; document.intensity.len()]);
    let text = serde_json::to_string(&document).unwrap();
    let value: Value = serde_json::from_str(&text).unwrap();
    assert_eq!(value["intensity"][0], "nan");
    assert_eq!(value["intensity"][1], "-inf");
    assert_valid::<Spectrum>(&value);
    let back: Spectrum = serde_json::from_str(&text).unwrap();
    let bits = |list: &[f64]| list.iter().map(|x| x.to_bits()).collect::<Vec<_>>();
    assert!(back.intensity[0].is_nan());
    assert_eq!(bits(&back.intensity[1..]), bits(&document.intensity[1..]));
    assert_eq!(bits(&back.energy_ev), bits(&document.energy_ev));
    assert_eq!(back.standard_uncertainty, document.standard_uncertainty);

    let mut broken = value;
    broken["intensity"][0] = json!("NaN");
    assert_broken::<Spectrum>(&broken, "/intensity/0");
    let mut levels = levels();
    levels.energy_quasiparticle_ev.as_mut().unwrap()[3] = f64::NAN;
    assert_valid::<Levels>(&serde_json::to_value(levels).unwrap());
}

#[test]
fn broken_documents_are_not_valid() {
    let document = serde_json::to_value(spectrum("pes.csv")).unwrap();
    for key in [
        "schema",
        "provenance",
        "axis",
        "energy_ev",
        "intensity_kind",
        "conditions",
    ] {
        let mut broken = document.clone();
        broken.as_object_mut().unwrap().remove(key);
        assert_broken::<Spectrum>(&broken, "");
    }
    let mut broken = document.clone();
    broken["axis"] = json!("kinetc");
    assert_broken::<Spectrum>(&broken, "/axis");
    let mut broken = document.clone();
    broken["energy_ev"] = json!(16.5);
    assert_broken::<Spectrum>(&broken, "/energy_ev");
    let document = serde_json::to_value(levels()).unwrap();
    let mut broken = document.clone();
    broken["band"][2] = json!(1.5);
    assert_broken::<Levels>(&broken, "/band/2");
    let mut broken = document;
    broken["rows"] = json!(-1);
    assert_broken::<Levels>(&broken, "/rows");
}

/// A document says what it is: one of another kind is not valid, even where every key fits.
#[test]
fn a_document_of_another_kind_is_not_valid() {
    let mut document = serde_json::to_value(spectrum("pes.csv")).unwrap();
    document["schema"] = json!("bandrule/levels/1");
    let objections = objections::<Spectrum>(&document);
    assert!(
        objections.iter().any(|o| o.starts_with("/schema")),
        "{objections:?}"
    );
}
