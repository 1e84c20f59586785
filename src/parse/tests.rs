//! What the readers do with whole texts: documents, refusals, positions.

use proptest::prelude::*;

use super::*;
use crate::quantity::{AxisKind, Reference};
use crate::schema::{IntensityKind, Levels, Locate, Spectrum};

fn hints() -> Hints {
    Hints {
        settle: Settle::Keys("under [computed] in study.toml".into()),
        ..Hints::default()
    }
}

fn levels(text: &str, hints: &Hints) -> Result<Parsed<Levels>, Vec<Problem>> {
    read_levels(Source::from_text("levels.csv", text), hints)
}

fn spectrum(text: &str, hints: &Hints) -> Result<Parsed<Spectrum>, Vec<Problem>> {
    read_spectrum(Source::from_text("curve.txt", text), hints)
}

/// The one problem of a refused table of levels.
fn refused(text: &str, hints: &Hints) -> String {
    let problems = levels(text, hints).unwrap_err();
    assert_eq!(problems.len(), 1, "{problems:#?}");
    problems[0].to_string()
}

/// The one problem of a refused curve.
fn refused_curve(text: &str) -> String {
    let problems = spectrum(text, &hints()).unwrap_err();
    assert_eq!(problems.len(), 1, "{problems:#?}");
    problems[0].to_string()
}

#[test]
fn levels_with_everything() {
    let text = "\u{feff}# invented data: see README\r\n# energies in Ha relative to the Fermi level\r\n\
                # method: perturbative, starting point: generalised gradient\r\n# spin-orbit: no\r\n\
                k,kx,ky,kz,wtk,band,spin,E_KS,E_QP (Ha),occ,note\r\n\
                1,0,0,0,0.25,4,up,-0.5,-0.6D+00,1,0.8\r\n\
                1,0,0,0,0.25,5,down,0.1,,0,0.7\r\n";
    let parsed = levels(text, &hints()).unwrap();
    let document = &parsed.document;
    assert_eq!(document.rows, 2);
    assert_eq!(document.band, Some(vec![4, 5]));
    assert_eq!(document.spin, Some(vec![1, -1]));
    assert_eq!(document.reference, Reference::Fermi);
    assert_eq!(document.computation.method.as_deref(), Some("perturbative"));
    assert_eq!(document.computation.spin_orbit_included, Some(false));
    // 27.211386245981 eV: CODATA 2022.
    let energies = document.energy_quasiparticle_ev.as_ref().unwrap();
    assert!((energies[0] + 0.6 * 27.211_386_245_981).abs() < 1e-12);
    assert!(energies[1].is_nan());
    assert_eq!(parsed.field_of(Role::Occupation), Some(9));
    assert_eq!(parsed.columns[10].role, None);
    assert_eq!(parsed.columns[7].unit.as_deref(), Some("Ha"));
    let steps: Vec<String> = document
        .provenance
        .steps
        .iter()
        .map(|step| format!("{}: {}", step.action, step.detail))
        .collect();
    insta::assert_snapshot!(steps.join("\n"), @r"
    read: 2 rows of 11 fields separated by commas; names on line 5
    convert: column 8 (energy-mean-field) from Ha to eV: the header cell `E_KS` on line 5; Ha by the comment `# energies in Ha relative to the Fermi level` on line 2
    convert: column 9 (energy-quasiparticle) from Ha to eV: the header cell `E_QP (Ha)` on line 5
    leave out: column 11 `note`: not a name that is known here
    reference: fermi by the comment `# energies in Ha relative to the Fermi level` on line 2
    ");
    let place = parsed.place_of(0, Role::EnergyQuasiparticle).unwrap();
    assert_eq!((place.line, place.column), (6, 24));
    let place = parsed.header_place(Role::KIndex).unwrap();
    assert_eq!((place.line, place.column), (5, 1));
    assert_eq!(
        parsed
            .statement(ConditionKey::SpinOrbit)
            .unwrap()
            .place
            .line,
        4
    );
}

#[test]
fn curve_with_conditions() {
    let text = "# photon energy: 21.218 eV\n# analyser work function = 4.5 eV\n# T: 300 K\n# sample bias: -5 V\n\
                # resolution (FWHM): 100 meV\n# pass energy (eV): 5\n# dwell time: 500 ms\n# scans: 4\n# technique: UPS\n\
                #  Kinetic energy / eV  counts  sigma\n  10.0  5  2.2\n  10.1  7  2.6\n";
    let parsed = spectrum(text, &hints()).unwrap();
    let document = &parsed.document;
    assert_eq!(document.axis, AxisKind::Kinetic);
    assert_eq!(document.reference, Reference::Unknown);
    assert_eq!(document.energy_ev, [10.0, 10.1]);
    assert_eq!(document.intensity_kind, IntensityKind::Counts);
    assert_eq!(document.standard_uncertainty, Some(vec![2.2, 2.6]));
    let conditions = &document.conditions;
    assert_eq!(conditions.photon_energy_ev, Some(21.218));
    assert_eq!(conditions.analyser_work_function_ev, Some(4.5));
    assert_eq!(conditions.temperature_k, Some(300.0));
    assert_eq!(conditions.sample_bias_v, Some(-5.0));
    assert_eq!(conditions.resolution_fwhm_ev, Some(0.1));
    assert_eq!(conditions.pass_energy_ev, Some(5.0));
    assert_eq!(conditions.dwell_s, Some(0.5));
    assert_eq!(conditions.sweeps, Some(4.0));
    assert_eq!(conditions.technique.as_deref(), Some("UPS"));
    insta::assert_snapshot!(parsed.columns[2].evidence, @"the header cell `sigma` on line 10; counts by the intensities, by the header cell `counts` on line 10");
}

#[test]
fn axis_is_read_from_header_comment_or_user() {
    let body = "Energy (eV);counts\n1;2\n";
    let by_user = Hints {
        axis: Some(AxisKind::Binding),
        ..hints()
    };
    assert_eq!(
        spectrum(body, &by_user).unwrap().document.axis,
        AxisKind::Binding
    );
    let by_comment = format!("# axis: kinetic\n{body}");
    assert_eq!(
        spectrum(&by_comment, &hints()).unwrap().document.axis,
        AxisKind::Kinetic
    );
    assert!(spectrum(&by_comment, &by_user).is_err());
    let wavelength = spectrum("wavelength (nm),cps\n58.4334,2\n", &hints()).unwrap();
    assert_eq!(wavelength.document.axis, AxisKind::Photon);
    assert!((wavelength.document.energy_ev[0] - 21.218).abs() < 1e-3);
}

#[test]
fn user_may_name_columns() {
    let text = "E (eV),E2 (eV),k\n-1,-2,3\n";
    let by = |choice| Hints {
        columns: [(Role::EnergyQuasiparticle, choice)].into(),
        ..hints()
    };
    for choice in [
        ColumnChoice::Number(1),
        ColumnChoice::Header("E (eV)".into()),
    ] {
        let parsed = levels(text, &by(choice)).unwrap();
        assert_eq!(parsed.document.energy_quasiparticle_ev, Some(vec![-1.0]));
        assert_eq!(parsed.document.k_index, Some(vec![3]));
        assert_eq!(parsed.columns[1].role, None);
    }
    let mut nameless = by(ColumnChoice::Number(2));
    assert!(levels("1 -2.5\n2 -3.5\n", &nameless).is_err(), "no unit");
    nameless.units.insert(Role::Energy, "eV".into());
    let parsed = levels("1 -2.5\n2 -3.5\n", &nameless).unwrap();
    assert_eq!(
        parsed.document.energy_quasiparticle_ev,
        Some(vec![-2.5, -3.5])
    );
    assert_eq!(parsed.header_place(Role::EnergyQuasiparticle), None);
    // A damaged first row is not passed over as a header.
    assert!(levels("1,x,y,z\n2,-3.5,3,4\n", &nameless).is_err());
    assert!(levels(text, &by(ColumnChoice::Number(4))).is_err());
    // Two energies of unsaid kind beside one that says it are left out.
    let parsed = levels("E (eV),E (eV),E_QP (eV)\n-1,-2,-3\n", &hints()).unwrap();
    assert_eq!(parsed.document.energy_quasiparticle_ev, Some(vec![-3.0]));
    assert!(levels(text, &by(ColumnChoice::Header("E".into()))).is_err());
}

#[test]
fn refusals_of_levels() {
    insta::assert_snapshot!(refused("k,E (eV)\n1,-5.5\n", &hints()), @r"
    levels.csv:1:3: column 2 `E (eV)` is an energy, but nothing says whether mean-field or quasiparticle
      help: name it, as in `E_KS (eV)` or `E_QP (eV)`, or write `column.energy-mean-field = 2` or `column.energy-quasiparticle = 2` under [computed] in study.toml
    ");
    insta::assert_snapshot!(refused("k,E_QP\n1,-5.5\n", &hints()), @r#"
    levels.csv:1:3: nothing says the unit of column 2 `E_QP`, read as energy-quasiparticle
      help: write it in the header, or as `unit.energy-quasiparticle = "eV"` under [computed] in study.toml; energies are in eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm, K
    "#);
    insta::assert_snapshot!(refused("k,E_QP (eV),GW (eV)\n1,-5.5,2\n", &hints()), @r"
    levels.csv:1:3: columns 2 `E_QP (eV)` and 3 `GW (eV)` both read as energy-quasiparticle
      levels.csv:1:13: the other column
      help: say which one is meant, as in `column.energy-quasiparticle = 2` under [computed] in study.toml
    ");
    insta::assert_snapshot!(refused("k,foo\n1,-5.5\n", &hints()), @r"
    levels.csv:1:1: no column is known to hold energies; the columns are 1 `k`, 2 `foo`
      help: say which one does, as in `column.energy-mean-field = 1` or `column.energy-quasiparticle = 1` under [computed] in study.toml
    ");
    insta::assert_snapshot!(refused("1,-5.5\n2,-5\n", &hints()), @r"
    levels.csv:1:1: no header says what the 2 columns from line 1 on are
      help: write a line of names above the numbers, as in `k,band,E_KS (eV),E_QP (eV)`, or name the columns by number: `column.energy-quasiparticle = 4` under [computed] in study.toml
    ");
    insta::assert_snapshot!(refused("# k index\n1,-5.5\n2,-5\n", &hints()), @r"
    levels.csv:2:1: no header says what the 2 columns from line 2 on are
      levels.csv:1:3: this comment does not have one known name for each column
      help: write a line of names above the numbers, as in `k,band,E_KS (eV),E_QP (eV)`, or name the columns by number: `column.energy-quasiparticle = 4` under [computed] in study.toml
    ");
    insta::assert_snapshot!(refused("k;E_QP (eV)\n1;-5,5\n2;-5.4\n", &hints()), @r"
    levels.csv:2:3: `-5,5` has a comma and `-5.4` a point: both cannot be decimal marks
      levels.csv:3:3: the other number
      help: write a point where the fraction begins and nothing elsewhere, in the whole file
    ");
    insta::assert_snapshot!(refused("k;E_QP (eV)\n1;-5,125\n2;-5,250\n", &hints()), @r#"
    levels.csv:2:3: `-5,125` may be a decimal fraction or grouped in thousands, and no number of the table tells
      help: say which, as `decimal = "comma"` under [computed] in study.toml, or write the numbers without separators of thousands
    "#);
    insta::assert_snapshot!(refused("k,E_QP (eV)\n1,-5.5\n2,-5,5\n3,-5.5\n", &hints()), @r"
    levels.csv:3:6: expected 2 fields separated by commas, as in most rows, and found 3
      help: if commas are decimal marks here, write points
    ");
    insta::assert_snapshot!(refused("k,E_QP (eV)\n1,-5,5\n2,-5,5\n", &hints()), @r"
    levels.csv:1:1: the header has 2 cells, but the rows have 3 fields separated by commas
      help: give every column one name, and separate names by two blanks or more where a name has blanks in it; where commas are decimal marks, write points
    ");
    insta::assert_snapshot!(refused("k,E_QP (eV)\n1.5,-5\n", &hints()), @r"
    levels.csv:2:1: expected a whole number in column `k` and found `1.5`
      help: write the number there; a row that has none may be removed on purpose, and `#` before a line makes it a comment
    ");
    insta::assert_snapshot!(refused("# energies in Ha\nk,E_QP (eV)\n1,-5\n", &hints()), @r"
    levels.csv:2:3: the unit of energy-quasiparticle is given as eV by the header cell `E_QP (eV)` on line 2, and as Ha by the comment `# energies in Ha` on line 1
      levels.csv:1:3: the comment `# energies in Ha` on line 1
      help: find out which one is true and remove or correct the other
    ");
    insta::assert_snapshot!(refused("k,E_QP (eV) [Ha]\n1,-5\n", &hints()), @r"
    levels.csv:1:3: the unit of energy-quasiparticle is given as eV by the header cell `E_QP (eV) [Ha]` on line 1, and as Ha by the header cell `E_QP (eV) [Ha]` on line 1
      help: find out which one is true and remove or correct the other
    ");
    insta::assert_snapshot!(refused("k,E_QP (keV)\n1,-5\n", &hints()), @r"
    levels.csv:1:3: `keV` in the header cell `E_QP (keV)` on line 1 is not the spelling of a unit for it
      help: energies are in eV, meV, Ha, Ry, kJ/mol, kcal/mol, cm-1, nm, K; a remark goes elsewhere than in the brackets of a unit
    ");
    insta::assert_snapshot!(refused("k,E_QP (nm)\n1,5\n", &hints()), @"levels.csv:1:3: column 2 is given in nm by the header cell `E_QP (nm)` on line 1, but only photon energies are given by a wavelength");
    insta::assert_snapshot!(refused("energy KS energy\n1 5\n", &hints()), @r"
    levels.csv:1:1: the header can be read in more than one way as 2 columns: energy | KS energy or energy KS | energy
      help: separate the names by two blanks or more, or by commas
    ");
    insta::assert_snapshot!(refused("k,\"E_QP (eV)\n1,2\n", &hints()), @r"
    levels.csv:1:3: a quoted cell does not end on its line
      help: a quoted cell begins and ends with a quote, on one line; double a quote within it
    ");
    let unit = Hints {
        units: [(Role::EnergyQuasiparticle, "Ha".into())].into(),
        ..hints()
    };
    insta::assert_snapshot!(refused("k,E_QP (eV)\n1,-5\n", &unit), @r"
    levels.csv:1:3: the unit of energy-quasiparticle is given as eV by the header cell `E_QP (eV)` on line 1, and as Ha by unit.energy-quasiparticle under [computed] in study.toml
      help: find out which one is true and remove or correct the other
    ");
    let unit = Hints {
        units: [(Role::Band, "eV".into())].into(),
        ..hints()
    };
    insta::assert_snapshot!(refused("k,E_QP (eV)\n1,-5\n", &unit), @"unit.band under [computed] in study.toml: a table of levels has no such unit");
}

#[test]
fn refusals_of_curves() {
    insta::assert_snapshot!(refused_curve("Energy (eV),counts\n1,2\n"), @r#"
    curve.txt:1:1: nothing says what the energies in column 1 `Energy (eV)` are counted along: kinetic, binding, final-state or photon
      help: name it in the header, as in `Kinetic energy (eV)`, or write `axis = "kinetic"` under [computed] in study.toml
    "#);
    insta::assert_snapshot!(refused_curve("Kinetic energy (eV),Intensity\n1,2\n"), @r#"
    curve.txt:1:21: nothing says the unit of column 2 `Intensity`, read as intensity
      help: write it in the header, or as `unit.intensity = "counts"` under [computed] in study.toml; intensities are in counts, counts/s or arb. u.
    "#);
    insta::assert_snapshot!(refused_curve("Kinetic energy (eV),Counts (arb. u.)\n1,2\n"), @r"
    curve.txt:1:21: the unit of intensity is given as arb. u. by the header cell `Counts (arb. u.)` on line 1, and as counts by the header cell `Counts (arb. u.)` on line 1
      help: find out which one is true and remove or correct the other
    ");
    insta::assert_snapshot!(refused_curve("KE (eV),BE (eV),counts\n1,2,3\n"), @r"
    curve.txt:1:1: columns 1 `KE (eV)` and 2 `BE (eV)` both read as energy
      curve.txt:1:9: the other column
      help: say which one is meant, as in `column.energy = 1` under [computed] in study.toml
    ");
    insta::assert_snapshot!(refused_curve("KE (eV),counts,sigma (cps)\n1,2,3\n"), @r"
    curve.txt:1:16: the unit of the intensities and of their uncertainties is given as counts/s by the header cell `sigma (cps)` on line 1, and as counts by the intensities, by the header cell `counts` on line 1
      curve.txt:1:9: the intensities, by the header cell `counts` on line 1
      help: find out which one is true and remove or correct the other
    ");
    insta::assert_snapshot!(refused_curve("# reference: vacuum\nE - E_F (eV),counts\n1,2\n"), @r"
    curve.txt:2:1: the zero of the energies is given as fermi by the header cell `E - E_F (eV)` on line 2, and as vacuum by the comment `# reference: vacuum` on line 1
      curve.txt:1:3: the comment `# reference: vacuum` on line 1
      help: find out which one is true and remove or correct the other
    ");
    insta::assert_snapshot!(refused_curve("# nothing here\n"), @r"
    there are no rows of numbers in `curve.txt`
      help: expected lines of numbers separated by commas, semicolons, tabs or blanks, under a line of column names
    ");
}

#[test]
fn many_problems_are_counted() {
    let text = format!("k,E_QP (eV)\n{}", "1,2\n".repeat(3) + &"1,x\n".repeat(50));
    let problems = levels(&text, &hints()).unwrap_err();
    assert_eq!(problems.len(), 21);
    assert_eq!(problems[20].message, "and 30 more like these");
}

#[test]
fn plain_columns_come_back_to_the_last_bit() {
    let values = [
        0.1 + 0.2,
        -0.0,
        5e-324,
        f64::MAX,
        f64::NAN,
        f64::NEG_INFINITY,
    ];
    let mut text = String::from("\"energy, eV\",total\n");
    for value in values {
        text.push_str(&format!("{value},{value:e}\n"));
    }
    let columns = read_columns(&Source::from_text("t", &text)).unwrap();
    assert_eq!(columns[0].0, "energy, eV");
    for (_, column) in &columns {
        for (read, meant) in column.iter().zip(values) {
            assert!(read.to_bits() == meant.to_bits() || (read.is_nan() && meant.is_nan()));
        }
    }
    assert!(read_columns(&Source::from_text("t", "1,2\n3,4\n")).is_err());
}

/// A way to write a table.
#[derive(Debug, Clone)]
struct Style {
    delimiter: &'static str,
    mark: &'static str,
    end: &'static str,
    bom: bool,
    names: [&'static str; 3],
    order: Vec<usize>,
    comments: bool,
}

fn style() -> impl Strategy<Value = Style> {
    (
        prop::sample::select(vec![",", ";", "\t", "  ", " ", ", "]),
        prop::sample::select(vec!["", "# ", "#", "! ", "%"]),
        prop::sample::select(vec!["\n", "\r\n", "\r"]),
        any::<bool>(),
        prop::sample::select(vec!["k", "k index", "ik"]),
        prop::sample::select(vec![
            "E_QP (eV)",
            "GW energy / eV",
            "qp_energy_eV",
            "E QP in eV",
            "ε_{QP}[eV]",
        ]),
        prop::sample::select(vec!["occ", "f", "occupation number"]),
        Just(vec![0usize, 1, 2]).prop_shuffle(),
        any::<bool>(),
    )
        .prop_map(
            |(delimiter, mark, end, bom, k, e, f, order, comments)| Style {
                delimiter,
                mark,
                end,
                bom,
                names: [k, e, f],
                order,
                comments,
            },
        )
}

fn number_text() -> impl Strategy<Value = String> {
    prop_oneof![
        any::<f64>()
            .prop_filter("finite", |v| v.is_finite())
            .prop_map(|v| format!("{v:e}")),
        (-1e4..1e4f64).prop_map(|v| format!("{v}")),
        (-1e4..1e4f64).prop_map(|v| format!("{v:.6}")),
    ]
}

fn written(style: &Style, rows: &[(u32, String, String)]) -> String {
    let line = |cells: [&str; 3]| {
        let ordered: Vec<&str> = style.order.iter().map(|&field| cells[field]).collect();
        ordered.join(style.delimiter) + style.end
    };
    let mut text = String::from(if style.bom { "\u{feff}" } else { "" });
    if style.comments {
        text += &format!("# invented data: see README{}", style.end);
    }
    text += style.mark;
    text += &line(style.names);
    for (at, (k, e, f)) in rows.iter().enumerate() {
        text += &line([&k.to_string(), e, f]);
        if style.comments && at % 3 == 1 {
            text += &format!("{}# µ between{}", style.end, style.end);
        }
    }
    text
}

proptest! {
    #[test]
    fn written_table_reads_back_bit_for_bit_and_its_places_hold_the_text(
        style in style(),
        rows in prop::collection::vec((0u32..10_000, number_text(), number_text()), 1..30),
    ) {
        let text = written(&style, &rows);
        let parsed = match levels(&text, &hints()) {
            Ok(parsed) => parsed,
            Err(problems) => return Err(TestCaseError::fail(format!("{text}\n{problems:?}"))),
        };
        let energies = parsed.document.energy_quasiparticle_ev.as_ref().unwrap();
        let occupations = parsed.document.occupation.as_ref().unwrap();
        prop_assert_eq!(energies.len(), rows.len());
        for (row, (k, e, f)) in rows.iter().enumerate() {
            prop_assert_eq!(parsed.document.k_index.as_ref().unwrap()[row], i64::from(*k));
            prop_assert_eq!(energies[row].to_bits(), e.parse::<f64>().unwrap().to_bits());
            prop_assert_eq!(occupations[row].to_bits(), f.parse::<f64>().unwrap().to_bits());
            let field = parsed.field_of(Role::EnergyQuasiparticle).unwrap();
            let span = parsed.locate(row, field).unwrap();
            prop_assert_eq!(&text[span], e.as_str());
            let place = parsed.place_of(row, Role::EnergyQuasiparticle).unwrap();
            let shown: String = place.excerpt.chars().skip(place.highlight.start).take(place.highlight.len()).collect();
            prop_assert_eq!(&shown, e);
        }
        for column in &parsed.columns {
            prop_assert_eq!(&text[parsed.locate_header(column.index).unwrap()], column.header.as_str());
        }
    }

    #[test]
    fn readers_never_panic(bytes in prop::collection::vec(any::<u8>(), 0..200)) {
        if let Ok(source) = Source::from_bytes("t", bytes) {
            no_panic(&source);
        }
    }

    #[test]
    fn readers_never_panic_on_what_looks_like_a_table(
        text in "(\u{feff})?([#!%]?(E|_|QP|KS|kin|F|eV|Ha| |  |-|/|\\(|\\)|\\[|@|in|counts|k|,|;|\t|\"|:|=|axis|T|µ|−|1|2.5|1,5|nan|1D5|\r|\n|\r\n)){0,40}"
    ) {
        no_panic(&Source::from_text("t", &text));
    }
}

fn no_panic(source: &Source) {
    let mut hints = hints();
    for _ in 0..2 {
        for problem in read_levels(source.clone(), &hints)
            .err()
            .into_iter()
            .flatten()
        {
            let _ = (problem.to_string(), render(&problem));
        }
        for problem in read_spectrum(source.clone(), &hints)
            .err()
            .into_iter()
            .flatten()
        {
            let _ = render(&problem);
        }
        let _ = read_columns(source);
        hints
            .columns
            .insert(Role::EnergyQuasiparticle, ColumnChoice::Number(1));
        hints.columns.insert(Role::Energy, ColumnChoice::Number(1));
        hints
            .columns
            .insert(Role::Intensity, ColumnChoice::Number(2));
        hints.units.insert(Role::Energy, "eV".into());
    }
}
