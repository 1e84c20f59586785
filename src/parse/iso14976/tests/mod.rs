//! The reader on the files in `fixtures/iso14976/`.

use super::*;
use crate::parse::Skipped;
use crate::quantity::{AxisKind, Reference};
use crate::schema::{IntensityKind, Spectrum};

mod refusals;

macro_rules! fixtures {
    ($($name:literal),* $(,)?) => {
        [$(($name, include_str!(concat!("../../../../fixtures/iso14976/", $name, ".vms")))),*]
    };
}

/// A file for each experiment mode and scan mode, all invented.
const FIXTURES: [(&str, &str); 13] = fixtures![
    "map-irregular",
    "map-regular",
    "mapdp-irregular",
    "mapdp-regular",
    "mapsv-mapping",
    "mapsvdp-mapping",
    "norm-irregular",
    "norm-regular",
    "sdp-irregular",
    "sdp-regular",
    "sdpsv-irregular",
    "sdpsv-regular",
    "sem-mapping",
];

fn text(name: &str) -> &'static str {
    FIXTURES.iter().find(|(other, _)| *other == name).unwrap().1
}

fn source(text: &str) -> Source {
    Source::from_text("a.vms", text)
}

fn fixture(name: &str) -> Experiment {
    read(&source(text(name))).unwrap()
}

fn spectra(name: &str) -> Vec<Result<Spectrum, Skipped>> {
    let source = source(text(name));
    read(&source).unwrap().spectra(&source)
}

/// The fixture with a line replaced by any number of lines.
fn changed(name: &str, line: usize, with: &str) -> String {
    let before = text(name).lines().enumerate();
    before
        .map(|(at, old)| {
            if at + 1 == line {
                with.to_owned()
            } else {
                format!("{old}\n")
            }
        })
        .collect()
}

fn refused(text: &str) -> Problem {
    let mut problems = read(&source(text)).unwrap_err();
    assert_eq!(problems.len(), 1);
    problems.remove(0)
}

fn label(label: &str, units: &str) -> Label {
    Label {
        label: label.into(),
        units: units.into(),
    }
}

fn pair<T>(x: T, y: T) -> Pair<T> {
    Pair { x, y }
}

fn first_block() -> Block {
    let parameter = |name, units, value| Parameter {
        label: label(name, units),
        value,
    };
    Block {
        identifier: "first".into(),
        sample: "tamrelite (invented)".into(),
        date: Date {
            year: Some(2031),
            month: Some(2),
            day: Some(17),
            hours: Some(13),
            minutes: Some(45),
            seconds: Some(59),
            hours_ahead_of_gmt: -3,
        },
        comment: ["invented".into(), "".into()].into(),
        technique: Technique::Ups,
        experimental_values: [Some(298.5)].into(),
        source_label: "He I".into(),
        source_energy_ev: Some(21.218),
        source_strength: Some(150.25),
        beam_width_um: pair(Some(300.5), Some(301.5)),
        source_direction: Direction {
            polar_deg: Some(54.7),
            azimuth_deg: Some(180.5),
        },
        analyser_mode: AnalyserMode::Fat,
        pass_energy_or_ratio: Some(5.5),
        magnification: Some(1.25),
        work_function_ev: Some(4.41),
        target_bias_v: Some(-7.5),
        analysis_width_um: pair(Some(60.5), Some(61.5)),
        take_off: Direction {
            polar_deg: Some(0.5),
            azimuth_deg: Some(1.5),
        },
        species: Species {
            label: "Tamrelite".into(),
            transition: "valence band".into(),
            charge: -1,
        },
        abscissa: Some(Abscissa {
            label: label("kinetic energy", "eV"),
            start: Some(16.5),
            increment: Some(0.05),
        }),
        variables: [label("counts", "d"), label("transmission", "d")].into(),
        signal_mode: SignalMode::PulseCounting,
        collection_time_s: Some(0.25),
        scans: 16,
        time_correction_s: Some(0.125),
        tilt: Direction {
            polar_deg: Some(2.5),
            azimuth_deg: Some(3.5),
        },
        rotation_deg: Some(4.5),
        parameters: [
            parameter("dose", "C", Some(0.375)),
            parameter("gas pressure", "Pa", None),
        ]
        .into(),
        future_entries: ["later a".into(), "later b".into()].into(),
        extents: [(7.0, 40.0), (0.7, 0.9)]
            .map(|(minimum, maximum)| Extent {
                minimum: Some(minimum),
                maximum: Some(maximum),
            })
            .into(),
        ordinates: vec![12.0, 0.9, 40.0, 0.8, 7.0, 0.7],
        ..Block::default()
    }
}

/// The order of the items is that of the published field list (Dench, Hazell and Seah 1988; from
/// memory), which the script that made the file has apart from the reader.
#[test]
fn every_item_of_a_block_is_where_the_field_list_has_it() {
    let part = |number| Part::new(number).unwrap();
    let second = Block {
        identifier: "second".into(),
        date: Date {
            seconds: None,
            ..first_block().date
        },
        experimental_values: [Some(77.5)].into(),
        work_function_ev: None,
        target_bias_v: Some(2.5),
        future_entries: ["".into(), "later d".into()].into(),
        ..first_block()
    };
    let expected = Experiment {
        institution: "Ostrevan Hollow laboratory".into(),
        instrument_model: "model of no instrument".into(),
        operator: "no operator".into(),
        identifier: "NORM REGULAR".into(),
        comment: [
            "Invented data: nothing was measured.".into(),
            "Made by tests/reference/make_iso14976.py.".into(),
        ]
        .into(),
        mode: ExperimentMode::Norm,
        scan_mode: ScanMode::Regular,
        spectral_regions: Some(1),
        map: None,
        variables: [label("sample temperature", "K")].into(),
        selection: Selection::Without([8, 12, 14, 31, 32, 40].map(part).into()),
        manual_parts: [26, 39].map(part).into(),
        future_entries: ["kept for a later version".into()].into(),
        future_block_entries: 2,
        blocks: vec![first_block(), second],
    };
    assert_eq!(fixture("norm-regular"), expected);
}

#[test]
fn modes_and_techniques_bring_their_items() {
    let map = fixture("mapdp-irregular");
    let size = MapSize {
        positions: 2,
        x_coordinates: 3,
        y_coordinates: 4,
    };
    assert_eq!(map.map, Some(size));
    let [one, two] = map.blocks.as_slice() else {
        panic!("two blocks");
    };
    let source = SputterSource {
        energy_ev: Some(2000.5),
        current_na: Some(1000.5),
        width_um: pair(Some(70.5), Some(71.5)),
        direction: Direction {
            polar_deg: Some(45.5),
            azimuth_deg: Some(46.5),
        },
        mode: SputterMode::Cyclic,
    };
    let particle = Particle {
        atomic_number: 18,
        atoms: 1,
        charge: 1,
    };
    for block in [one, two] {
        assert_eq!(block.sputter_source, Some(source));
        assert_eq!(block.particle, Some(particle));
        assert_eq!(block.differential_width_ev, Some(Some(0.75)));
        assert_eq!(block.field_of_view_um, Some(pair(Some(500.5), Some(501.5))));
        assert_eq!((&block.abscissa, block.variables.len()), (&None, 2));
    }
    assert_eq!(
        (one.position, two.position),
        (Some(pair(1, 4)), Some(pair(2, 4)))
    );
    let image = &fixture("mapsv-mapping").blocks[0];
    let lines = Linescans {
        first_start: pair(1, 2),
        first_finish: pair(3, 4),
        last_finish: pair(5, 6),
    };
    assert_eq!(image.linescans, Some(lines));
    assert_eq!(
        (image.particle, image.sputter_source),
        (Some(particle), None)
    );
    // A technique that sputters by itself has no source beside it; one that does not has.
    let profile = fixture("sdp-irregular");
    let sources = profile
        .blocks
        .iter()
        .map(|block| block.sputter_source.is_some());
    assert_eq!(sources.collect::<Vec<_>>(), [true, false]);
}

#[test]
fn parts_that_are_not_included_are_the_first_blocks() {
    let profile = fixture("sdp-regular");
    let parts = [6, 11, 26].map(|number| Part::new(number).unwrap());
    assert_eq!(profile.selection, Selection::Only(parts.into()));
    let [first, _, third] = profile.blocks.as_slice() else {
        panic!("three blocks");
    };
    assert_eq!(third.experimental_values.as_ref(), [Some(120.5)]);
    assert_eq!(third.date.seconds, Some(2));
    assert_eq!(
        (&third.comment, third.technique),
        (&first.comment, Technique::Xps)
    );
    assert_eq!(third.sputter_source, first.sputter_source);
    assert_eq!(third.ordinates, [7.0, 12.0, 40.0]);
}

#[test]
fn a_regular_ups_block_becomes_a_spectrum() {
    let spectra = spectra("norm-regular");
    let first = spectra[0].as_ref().unwrap();
    assert_eq!(
        (first.axis, first.reference),
        (AxisKind::Kinetic, Reference::Unknown)
    );
    assert_eq!(first.energy_ev, [16.5, 16.55, 16.6]);
    assert_eq!(first.intensity, [12.0, 40.0, 7.0]);
    assert_eq!(first.intensity_kind, IntensityKind::Counts);
    let conditions = &first.conditions;
    assert_eq!(conditions.photon_energy_ev, Some(21.218));
    assert_eq!(conditions.analyser_work_function_ev, Some(4.41));
    assert_eq!(conditions.sample_bias_v, Some(-7.5));
    assert_eq!(conditions.pass_energy_ev, Some(5.5));
    assert_eq!(
        (conditions.dwell_s, conditions.sweeps),
        (Some(0.25), Some(16.0))
    );
    assert_eq!(conditions.technique.as_deref(), Some("UPS"));
    // Nothing that the standard does not say.
    assert_eq!(
        (conditions.temperature_k, conditions.resolution_fwhm_ev),
        (None, None)
    );
    assert_eq!(conditions.cathode_work_function_ev, None);
    let second = spectra[1].as_ref().unwrap();
    assert_eq!(second.conditions.analyser_work_function_ev, None);
    assert_eq!(second.conditions.sample_bias_v, Some(2.5));
    let steps = second.provenance.steps.iter();
    let steps: Vec<String> = steps
        .map(|step| format!("{}: {}", step.action, step.detail))
        .collect();
    // Lines below 98 are the first block's, whose values the second one keeps.
    insta::assert_snapshot!(steps.join("\n"), @r"
read: block 2 `second` from line 98: 3 channels, values on lines 140 to 145
axis: kinetic by `kinetic energy` on line 62
intensity: variable 1 `counts` in `d` on line 66, pulse counting on line 126
condition: photon energy 21.218 eV, line 44
condition: pass energy 5.5 eV, line 115
condition: sample bias 2.5 V, line 118
condition: dwell time 0.25 s, line 127
condition: technique UPS, line 107
condition: sweeps 16, line 128
leave out: variable 2 `transmission`, line 66
leave out: experimental variable `sample temperature`, 77.5 K, line 108
leave out: parameter `dose`, 0.375 C, line 78
leave out: parameter `gas pressure`, unknown, line 78
");
    assert_eq!(second.provenance.sources[0].file, "a.vms");
}

#[test]
fn an_irregular_xps_block_becomes_a_spectrum() {
    let spectra = spectra("norm-irregular");
    let first = spectra[0].as_ref().unwrap();
    assert_eq!(first.axis, AxisKind::Binding);
    assert_eq!(first.energy_ev, [3.5, 3.0, 2.0]);
    assert_eq!((first.intensity[0], first.intensity[2]), (1.25, 0.75));
    // An unknown value is missing, and no large number.
    assert!(first.intensity[1].is_nan());
    assert_eq!(first.intensity_kind, IntensityKind::CountsPerSecond);
    // 1E37 is no photon energy, and a retarding ratio no pass energy.
    assert_eq!(first.conditions.photon_energy_ev, None);
    assert_eq!(first.conditions.pass_energy_ev, None);
}

#[test]
fn a_depth_profile_has_a_spectrum_a_block() {
    let intensities: Vec<Vec<f64>> = spectra("sdp-regular")
        .into_iter()
        .map(|spectrum| spectrum.unwrap().intensity)
        .collect();
    assert_eq!(
        intensities,
        [[12.0, 40.0, 7.0], [40.0, 7.0, 12.0], [7.0, 12.0, 40.0]]
    );
    assert_eq!(
        spectra("sdp-regular")[2].as_ref().unwrap().energy_ev,
        [5.0, 4.5, 4.0]
    );
}

#[test]
fn what_is_no_spectrum_is_skipped_with_the_reason() {
    let mut list = String::new();
    for (name, _) in FIXTURES {
        for (number, spectrum) in (1..).zip(spectra(name)) {
            if let Err(Skipped { line, reason }) = spectrum {
                list += &format!("{name} block {number}, line {line}: {reason}\n");
            }
        }
    }
    insta::assert_snapshot!(list, @r"
map-irregular block 1, line 24: experiment mode MAP is a map or an image and no single spectrum
map-irregular block 2, line 83: experiment mode MAP is a map or an image and no single spectrum
map-regular block 1, line 24: experiment mode MAP is a map or an image and no single spectrum
map-regular block 2, line 80: experiment mode MAP is a map or an image and no single spectrum
mapdp-irregular block 1, line 24: experiment mode MAPDP is a map or an image and no single spectrum
mapdp-irregular block 2, line 94: experiment mode MAPDP is a map or an image and no single spectrum
mapdp-regular block 1, line 24: experiment mode MAPDP is a map or an image and no single spectrum
mapdp-regular block 2, line 91: experiment mode MAPDP is a map or an image and no single spectrum
mapsv-mapping block 1, line 17: experiment mode MAPSV is a map or an image and no single spectrum
mapsvdp-mapping block 1, line 17: experiment mode MAPSVDP is a map or an image and no single spectrum
norm-irregular block 2, line 72: technique AES diff is no photoemission: UPS and XPS are read
norm-irregular block 3, line 128: the abscissa `retardation` is named as neither kinetic, binding nor photon energy
sdp-irregular block 2, line 83: technique SIMS energy spec is no photoemission: UPS and XPS are read
sdpsv-irregular block 1, line 17: experiment mode SDPSV has one value a depth and no spectrum
sdpsv-regular block 1, line 17: experiment mode SDPSV has one value a depth and no spectrum
sem-mapping block 1, line 17: experiment mode SEM is a map or an image and no single spectrum
");
}

#[test]
fn labels_and_units_of_an_abscissa_are_evidence_or_refused() {
    let spectrum = |name: &str, units: &str| {
        let text = changed("norm-regular", 62, &format!("{name}\n"));
        let text = text.replacen(&format!("{name}\neV\n"), &format!("{name}\n{units}\n"), 1);
        let source = source(&text);
        read(&source).unwrap().spectra(&source).remove(0)
    };
    for (name, axis, reference) in [
        ("Binding Energy", AxisKind::Binding, Reference::Unknown),
        ("E - E_F", AxisKind::FinalState, Reference::Fermi),
        ("Photon energy (eV)", AxisKind::Photon, Reference::Unknown),
        (
            "kinetic energy wrt vacuum",
            AxisKind::Kinetic,
            Reference::Vacuum,
        ),
    ] {
        let read = spectrum(name, "eV").unwrap();
        assert_eq!((read.axis, read.reference), (axis, reference), "{name}");
    }
    assert_eq!(
        spectrum("kinetic energy", "meV").unwrap().energy_ev[0],
        0.0165
    );
    for (name, units) in [
        ("energy", "eV"),
        ("energy loss", "eV"),
        ("time", "s"),
        ("", "eV"),
        ("kinetic energy", "d"),
        ("kinetic energy", "nm"),
        ("kinetic energy (meV)", "eV"),
    ] {
        assert!(spectrum(name, units).is_err(), "{name}, {units}");
    }
    for (line, with) in [
        (64, "1E37\n"),
        (65, "1E37\n"),
        (64, "1.7E308\n"),
        (67, "yield\n"),
    ] {
        let text = changed("norm-regular", line, with);
        let text = if line == 64 {
            text.replacen("\n0.05\n", "\n1.7E308\n", 1)
        } else {
            text
        };
        let source = source(&text);
        assert!(
            read(&source).unwrap().spectra(&source)[0].is_err(),
            "{with}"
        );
    }
}

#[test]
fn values_are_found_where_they_stand() {
    for ends in ["\n", "\r\n", "\r"] {
        let text = format!("\u{feff}{}", text("norm-regular").replace('\n', ends));
        let source = source(&text);
        let experiment = read(&source).unwrap();
        let shown = |curve, row, variable| {
            let span = experiment.value_span(&source, curve, row, variable)?;
            Some((
                source.place(span.clone()).line,
                source.slice(span).to_owned(),
            ))
        };
        assert_eq!(shown(0, 1, 0), Some((94, "40".into())));
        assert_eq!(shown(0, 1, 1), Some((95, "0.8".into())));
        assert_eq!(shown(1, 2, 1), Some((145, "0.7".into())));
        assert_eq!(experiment.intensity_variable(0), Some(0));
        for (curve, row, variable) in [(2, 0, 0), (0, 3, 0), (0, 0, 2), (0, usize::MAX, 1)] {
            assert_eq!(shown(curve, row, variable), None);
        }
        // Another text has other lines, or none.
        let other = Source::from_text("b", "µ");
        assert_eq!(experiment.value_span(&other, 0, 1, 0), None);
    }
}

#[test]
fn values_beyond_the_anchors_are_found() {
    let values: Vec<String> = (0..2_500).map(|value| format!(" {value}.5 \n")).collect();
    let values = values.concat();
    let text = changed("sdpsv-regular", 78, &format!("7\n{values}"));
    let text = text.replacen("\n3\n7.0\n40.0\n", "\n2503\n7.0\n40.0\n", 1);
    let source = source(&text);
    let experiment = read(&source).unwrap();
    for row in [0, 996, 997, 998, 2_499] {
        let span = experiment.value_span(&source, 0, row + 3, 0).unwrap();
        assert_eq!(source.slice(span), format!("{row}.5"));
    }
}

#[test]
fn sniffing() {
    for (_, text) in FIXTURES {
        assert!(is_like(text) && is_like(&format!("\u{feff}{text}")));
    }
    for text in [
        "",
        "VAMAS",
        "E (eV),counts\n1,2\n",
        "# VAMAS Surface Chemical Analysis",
    ] {
        assert!(!is_like(text));
    }
}
