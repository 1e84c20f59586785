//! Tables that invite a misreading: each is read as it says, or refused with words to act on.

use std::time::{Duration, Instant};

use super::*;
use crate::quantity::{AxisKind, Reference};

fn problems(text: &str, levels: bool) -> Vec<Problem> {
    let (source, hints) = (Source::from_text("t", text), Hints::default());
    if levels {
        read_levels(source, &hints).err()
    } else {
        read_spectrum(source, &hints).err()
    }
    .unwrap_or_default()
}

/// Where the first problem stands, and what it and its advice must say.
fn refused(levels: bool, cases: &[(&str, &str, &str)]) {
    for (text, place, says) in cases {
        let problems = problems(text, levels);
        let first = problems.first().map(ToString::to_string);
        let first = first.unwrap_or_else(|| panic!("read: {text:?}"));
        assert!(first.starts_with(&format!("t:{place}: ")), "{first}");
        assert!(first.contains(says), "{text:?}\n{first}");
    }
}

#[test]
fn curves_are_refused_where_they_invite_a_misreading() {
    refused(
        false,
        &[
            // Numbers.
            (
                "KE (eV);counts\n1.0;1,234\n",
                "2:5",
                "both cannot be decimal marks",
            ),
            ("KE (eV);counts\n1.0;1'234\n", "2:5", "found `1'234`"),
            (
                "KE (eV),counts\n1,1e400\n",
                "2:3",
                "beyond the largest number",
            ),
            ("KE (eV),counts\n0x10,2\n", "2:1", "found `0x10`"),
            ("KE (eV),counts\n1_000,2\n", "2:1", "found `1_000`"),
            ("KE (eV),counts\n1,5\0\n", "2:3", r"found `5\u{0}`"),
            // Rows.
            (
                "KE (eV),counts\n1,2\n3,4\nend\n",
                "4:4",
                "a remark begins with #",
            ),
            (
                "KE (eV),counts,c\n1,2,\"a\n#b\"\n3,4,5\n",
                "2:5",
                "does not end on its line",
            ),
            ("KE (eV),counts\n1, \"2\"\n", "2:4", "blanks stand before"),
            (
                "KE (eV) counts\n**** ****\n3 4\n",
                "2:1",
                "between the names and the numbers",
            ),
            (
                "KE (eV),counts\n,,\n3,4,\n",
                "2:1",
                "between the names and the numbers",
            ),
            ("**** ****\n3 4\n", "1:1", "it has no letter"),
            (
                "#KE (eV) counts\n1 2\n#BE (eV) counts\n2 3\n",
                "3:2",
                "one table in a file",
            ),
            // Names.
            ("-E_B (eV),counts\n1,2\n", "1:1", "hold energies"),
            ("E_B - E_F (eV),counts\n1,2\n", "1:1", "counted along"),
            (
                "Binding energy above E_F (eV),counts\n1,2\n",
                "1:1",
                "counted along",
            ),
            ("KE (eV),√counts\n1,2\n", "1:1", "hold intensities"),
            ("KE (eV),-counts\n1,2\n", "1:1", "hold intensities"),
            ("KE (eV),counts,error (%)\n1,2,3\n", "1:16", "`%`"),
            ("KE (eV),counts (x1000)\n1,2\n", "1:9", "`x1000`"),
            (
                "# energies below E_F\nKE (eV),counts\n1,2\n",
                "2:1",
                "as binding by the comment",
            ),
        ],
    );
}

#[test]
fn levels_are_refused_where_they_invite_a_misreading() {
    refused(
        true,
        &[
            ("n,-E_QP (eV)\n1,5\n", "1:1", "hold energies"),
            ("n,∆E_QP (eV)\n1,5\n", "1:1", "hold energies"),
            ("n,E - E_KS (eV)\n1,5\n", "1:1", "hold energies"),
            ("n,|E_QP| (eV)\n1,5\n", "1:1", "hold energies"),
            (
                "n,E_QP up (eV),E_QP down (eV)\n1,5,6\n",
                "1:1",
                "hold energies",
            ),
            (
                "k,n,E_KS - E_F (eV),E_QP - E_VBM (eV)\n1,1,5,6\n",
                "1:5",
                "the zero",
            ),
            (
                "# energies in eV below E_F\nn,E_QP\n1,5\n",
                "1:3",
                "downwards",
            ),
            ("n,E_QP (1)\n1,5\n", "1:3", "`1`"),
            ("spin,n,E_QP (eV)\nα,1,5\n", "2:1", "`up` or `down`"),
        ],
    );
}

#[test]
fn odd_texts_are_read_as_they_say() {
    for (text, axis, reference, energy) in [
        (
            "(E − E_F)/eV,counts\n-1,2\n",
            AxisKind::FinalState,
            Reference::Fermi,
            -1.0,
        ),
        (
            "E-EF_meV counts\n-100 2\n",
            AxisKind::FinalState,
            Reference::Fermi,
            -0.1,
        ),
        (
            "binding energy / eV,counts\n-1,2\n",
            AxisKind::Binding,
            Reference::Unknown,
            -1.0,
        ),
        (
            "# energies below E_F\nE (eV),counts\n1,2\n",
            AxisKind::Binding,
            Reference::Fermi,
            1.0,
        ),
        (
            "KE (eV),counts,\r1,2,\r",
            AxisKind::Kinetic,
            Reference::Unknown,
            1.0,
        ),
        (
            "KE (eV)\tcounts\r\n\"1\"\t2\r\n",
            AxisKind::Kinetic,
            Reference::Unknown,
            1.0,
        ),
        (
            "KE,cps\neV,1/s\n1,2\n",
            AxisKind::Kinetic,
            Reference::Unknown,
            1.0,
        ),
        (
            "Scan 12\nKE (eV),counts\n1,2\n",
            AxisKind::Kinetic,
            Reference::Unknown,
            1.0,
        ),
        (
            "# Energy in eV, intensity in counts\n# photon energy 21.2 eV\nK.E. I\n−1,5 2\n2,5 4\n",
            AxisKind::Kinetic,
            Reference::Unknown,
            -1.5,
        ),
        (
            "# x\n\u{feff}KE (eV),counts\n\u{feff}1,2\n",
            AxisKind::Kinetic,
            Reference::Unknown,
            1.0,
        ),
        (
            "KE (eV),counts\n1,2\n# KE (eV),counts\n2,3\n",
            AxisKind::Kinetic,
            Reference::Unknown,
            1.0,
        ),
    ] {
        let parsed = read_spectrum(Source::from_text("t", text), &Hints::default());
        let document = parsed
            .unwrap_or_else(|why| panic!("{text:?}: {why:?}"))
            .document;
        assert_eq!(
            (document.axis, document.reference),
            (axis, reference),
            "{text:?}"
        );
        assert_eq!(document.energy_ev[0], energy, "{text:?}");
    }
    // Numbers that fill their columns, beside a row that keeps to none.
    let text = "k E_KS (eV) E_QP (eV)\n1 -12.34567890-13.45678901\n2 5.1 6.25D0\n";
    let read = read_levels(Source::from_text("t", text), &Hints::default()).unwrap();
    let energies = read.document.energy_quasiparticle_ev.unwrap();
    assert_eq!(energies, [-13.456_789_01, 6.25]);
    let hartree = read_levels(
        Source::from_text("t", "n,E_HF (a.u.)\n1,-0.5\n"),
        &Hints::default(),
    );
    let energies = hartree.unwrap().document.energy_mean_field_ev.unwrap();
    assert!((energies[0] + 0.5 * 27.211_386_245_981).abs() < 1e-12);
}

/// Lines of any length are read, or refused in few words, in time that grows as they do.
#[test]
fn long_lines_are_no_trap() {
    let many = 30_000;
    let wide = |name: &str, cell: &str, by: &str| {
        let names = format!("KE (eV){by}counts{}", format!("{by}{name}").repeat(many));
        format!("{names}\n1{by}2{}\n", format!("{by}{cell}").repeat(many))
    };
    let started = Instant::now();
    for (text, columns) in [
        (wide("x", "1", ","), many + 2),
        (wide("x", "1", "  "), many + 2),
        (
            format!("#{}\nKE (eV),counts\n1,2\n", "a=b,".repeat(many)),
            2,
        ),
        (
            format!("#{}a=b\nKE (eV),counts\n1,2\n", "a=b,".repeat(many)),
            2,
        ),
    ] {
        let parsed = read_spectrum(Source::from_text("t", &text), &Hints::default());
        assert_eq!(parsed.unwrap().columns.len(), columns);
    }
    let text = format!("KE (eV),counts\n1,2\n{},2\n", "x".repeat(500_000));
    assert!(problems(&text, false)[0].to_string().len() < 300);
    assert!(started.elapsed() < Duration::from_secs(20));
}

/// What a file of any kind is read as, or its first problem.
fn any(text: &str, hints: &Hints) -> Result<serde_json::Value, String> {
    match read_any(Source::from_text("t", text), None, hints) {
        Ok(read) => Ok(serde_json::from_str(&read[0].to_json().unwrap()).unwrap()),
        Err(problems) => Err(problems.first().expect("a reason").to_string()),
    }
}

#[test]
fn reciprocal_units_are_read_with_raised_signs() {
    let read = any("k (Å⁻¹),E_B (eV)\n0.1,1\n", &Hints::default()).unwrap();
    assert_eq!(read["k_unit"], "1/Å");
    let read = any("KE (eV),I (counts s⁻¹)\n1,2\n", &Hints::default()).unwrap();
    assert_eq!(read["intensity_kind"], "counts-per-second");
}

#[test]
fn temperatures_are_in_kelvin_or_refused() {
    for unit in ["°C", "°F", "mK"] {
        let text = format!("material,gap (eV),T ({unit})\nalpha,1,20\n");
        let why = any(&text, &Hints::default()).unwrap_err();
        assert!(why.contains("temperatures are in K"), "{why}");
    }
    let read = any("T / K,material,gap (eV)\n20,alpha,1\n", &Hints::default()).unwrap();
    assert_eq!(read["temperature_k"][0], 20.0);
}

#[test]
fn an_uncertainty_takes_the_unit_that_the_user_gives_its_value() {
    let mut hints = Hints::default();
    hints.units.insert(Role::Value, "meV".into());
    let read = any("material,gap,gap error\nalpha,600,20\n", &hints).unwrap();
    assert_eq!(read["uncertainty_ev"][0], 0.02);
}

#[test]
fn long_names_and_kinds_are_cut_in_messages() {
    let name = "(eV)(Ha)".repeat(5_000);
    let document = format!("{{\"schema\":\"bandrule/{name}/1\"}}");
    for text in [
        format!("E {name},counts\n1,2\n"),
        format!("E {{{name},counts\n1,2\n"),
        document,
    ] {
        for problem in read_any(Source::from_text("t", &text), None, &Hints::default()).unwrap_err()
        {
            assert!(problem.message.len() < 1_000, "{}", problem.message.len());
        }
    }
}

#[test]
fn broken_quotes_and_documents_say_what_to_do() {
    for text in [
        "KE (eV),counts\n1,\"2\n2,3\n",
        "KE (eV),\"counts\n1,2\n2,3\n",
        "{\"schema\":\"bandrule/spectrum/1\",",
    ] {
        let problems = read_any(Source::from_text("t", text), None, &Hints::default()).unwrap_err();
        assert!(problems[0].help.is_some(), "{}", problems[0]);
    }
}

#[test]
fn many_comments_and_names_above_a_table_take_no_long() {
    let begun = Instant::now();
    let curve = "KE (eV),counts\n1,2\n2,3\n";
    for many in ["# T: 300 K\n", "# nothing\n", "KE (eV),counts\n"] {
        read_spectrum(
            Source::from_text("t", &(many.repeat(50_000) + curve)),
            &Hints::default(),
        )
        .unwrap();
    }
    assert!(begun.elapsed() < Duration::from_secs(5));
}

/// What may change a number or a meaning beside what is understood is not read past.
#[test]
fn nothing_changes_a_number_in_silence() {
    for (text, says) in [
        (
            "k band E_QP(eV)\n1 1 -5.6 meV\n1 2 2.1 meV\n",
            "`meV` stands in a column without a name",
        ),
        (
            "k,band,E_QP (eV),\n1,1,-560,meV\n1,2,210,meV\n",
            "`meV` stands in a column without a name",
        ),
        (
            "k band E_QP(eV)\n1 1 -5.6 E+01\n1 2 2.1 E+00\n",
            "`E+01` stands in a column without a name",
        ),
        (
            "k,band,E_QP (eV),unit\n1,1,-560,meV\n1,2,210,meV\n",
            "the unit of this row is `meV`",
        ),
        (
            "# energies in eV, sign reversed\nk,band,E_GW\n1,1,-5.6\n",
            "nothing says the unit",
        ),
        (
            "# DFT energies in Ha\nk,band,E_KS,E_GW\n1,1,-0.2,-5.6\n",
            "the unit of column 4",
        ),
        (
            "# a\nKE (eV),counts\n9,2\n8,2\n\n# b\n9,1\n8,1\n",
            "begin anew",
        ),
        (
            "# a\nKE (eV),counts\n9,2\n8,2\n# b\n9,1\n8,1\n",
            "begin anew",
        ),
        (
            "# spin up\n# E (eV) DOS\n-1 0.1\n0 0.2\n\n# spin down\n-1 0.15\n0 0.25\n",
            "begin anew",
        ),
        (
            "material PBE(eV) GW(eV)\nAlpha 0.6 1.17\nBeta 0.7 1.20\nGamma 1.1-1.2\n",
            "expected 3 fields",
        ),
        ("k,band,E_QP (eV),occ (%)\n1,1,-5,100\n", "has no unit `%`"),
        (
            "# k-point 1  weight 0.25\nband E_QP(eV)\n1 -5\n2 2\n# k-point 2  weight 0.75\n1 -5\n2 2\n",
            "begins as the title of a block",
        ),
        (
            "k,band,E_QP - E_F (eV),E_MF (eV)\n1,1,-1,-0.5\n",
            "the zero of column 4",
        ),
        (
            "# resolution: 50 meV (sigma)\nKE (eV),counts\n1,2\n",
            "`resolution`",
        ),
        (
            "material,method,gap (eV)\nAlpha,PBE,0.6\n,G0W0,1.17\n",
            "no material",
        ),
        ("k,band,binding energy (eV),occ\n1,1,5,2\n", "hold energies"),
        (
            "KE (eV),sweep 1 (counts),sweep 3 (counts)\n9,1,2\n8,3,4\n",
            "not every sweep is known",
        ),
    ] {
        let why = any(text, &Hints::default()).expect_err(text);
        assert!(why.contains(says), "{text:?}\n{why}");
    }
    // The number of a band ends its name, whatever digits its method has.
    let read = any(
        "kpath,G0W0 band 5 (eV),G0W0 band 6 (eV)\n0,-1,2\n",
        &Hints::default(),
    )
    .unwrap();
    assert_eq!(read["band"], serde_json::json!([5, 6]));
    // A difference of methods is no gap; blank lines in a path make no bands, bands that go on no k.
    let read = any(
        "material,GW (eV),exp (eV),GW-exp (eV)\nAlpha,1.17,1.15,0.02\n",
        &Hints::default(),
    );
    assert_eq!(read.unwrap()["value_ev"], serde_json::json!([1.17, 1.15]));
    let read = any(
        "kpath E_QP(eV)\n0 -1\n0.1 -2\n\n0.2 -3\n0.3 -4\n",
        &Hints::default(),
    )
    .unwrap();
    assert_eq!(read["band"], serde_json::Value::Null);
    let read = any("band,E_QP (eV)\n1,-1\n2,0\n\n3,1\n4,2\n", &Hints::default()).unwrap();
    assert_eq!(read["k_index"], serde_json::Value::Null);
}
