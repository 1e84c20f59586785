use super::test_texts::{BAND, FORMS, altered, fixture, table};
use super::*;
use crate::quantity::{AxisKind, Reference};
use crate::schema::IntensityKind;

#[test]
fn every_form_gives_the_same_ordinates() {
    for name in FORMS {
        let source = fixture(name);
        let document = read(&source).unwrap_or_else(|problems| panic!("{}", problems[0]));
        assert_eq!(document.comments.len(), 1);
        let spectra = document.spectra(&source);
        assert_eq!(spectra.len(), 1, "{name}");
        let spectrum = spectra[0].as_ref().unwrap();
        for (row, (found, meant)) in spectrum.intensity.iter().zip(BAND).enumerate() {
            match meant {
                Some(meant) => assert_eq!(*found, f64::from(meant) * 0.001, "{name} {row}"),
                None => assert!(found.is_nan(), "{name} {row}"),
            }
        }
        assert_eq!(spectrum.intensity.len(), BAND.len(), "{name}");
        assert_eq!(spectrum.axis, AxisKind::Photon);
        assert_eq!(spectrum.intensity_kind, IntensityKind::Arbitrary);
        // 4000 and 3946 reciprocal centimetres, by the CODATA 2022 factor 8065.543937.
        assert!((spectrum.energy_ev[0] - 4000.0 / 8_065.543_937).abs() < 1e-9);
        assert!((spectrum.energy_ev[27] - 3946.0 / 8_065.543_937).abs() < 1e-9);
    }
}

#[test]
fn pairs_give_the_same_curve() {
    let (points, steps) = (fixture("points"), fixture("affn"));
    let points = read(&points).unwrap().spectra(&points).remove(0).unwrap();
    let steps = read(&steps).unwrap().spectra(&steps).remove(0).unwrap();
    assert_eq!(points.energy_ev, steps.energy_ev);
    let bits = |values: &[f64]| values.iter().map(|it| it.to_bits()).collect::<Vec<_>>();
    assert_eq!(bits(&points.intensity), bits(&steps.intensity));
}

#[test]
fn blocks_of_a_compound_file() {
    let source = fixture("compound");
    let document = read(&source).unwrap_or_else(|problems| panic!("{}", problems[0]));
    let spectra = document.spectra(&source);
    assert_eq!((document.blocks().len(), spectra.len()), (4, 4));

    let binding = spectra[0].as_ref().unwrap();
    assert_eq!(binding.axis, AxisKind::Binding);
    assert_eq!(binding.reference, Reference::Unknown);
    assert_eq!(binding.intensity_kind, IntensityKind::Counts);
    assert_eq!(binding.intensity[..3], [912.0, 898.0, 767.0]);
    assert_eq!((binding.energy_ev[0], binding.energy_ev[13]), (0.5, -0.15));
    assert_eq!(binding.conditions.temperature_k, Some(298.15));
    let technique = binding.conditions.technique.as_deref();
    assert_eq!(technique, Some("PHOTOELECTRON SPECTRUM"));

    let kinetic = spectra[1].as_ref().unwrap();
    assert_eq!(kinetic.axis, AxisKind::Kinetic);
    assert_eq!(kinetic.intensity_kind, IntensityKind::CountsPerSecond);
    assert_eq!(kinetic.energy_ev, [16.5, 16.8, 17.2]);
    assert_eq!(kinetic.intensity, [12.5, 15.5, 2.0]);

    let peaks = spectra[2].as_ref().unwrap_err();
    assert_eq!(peaks.reason, "a peak table holds peaks, not a curve");
    assert!(
        source
            .text()
            .lines()
            .nth(peaks.line - 1)
            .unwrap()
            .starts_with("##PEAK TABLE")
    );
    let shift = spectra[3].as_ref().unwrap_err();
    assert!(shift.reason.contains("Raman shift"), "{}", shift.reason);
}

#[test]
fn blocks_one_after_the_other_and_a_structure_between() {
    let one = table(3, "0 1 2 3");
    let structure = "##TITLE= s\n##JCAMP-CS= 3.7\n##MAX_XY= 1 1\n##END=\n";
    let source = Source::from_text("t", &format!("{one}{structure}{one}\u{1a}"));
    let document = read(&source).unwrap();
    let spectra = document.spectra(&source);
    assert!(spectra[0].is_ok() && spectra[2].is_ok());
    let skipped = spectra[1].as_ref().unwrap_err();
    assert_eq!(skipped.line, 14);
    assert_eq!(skipped.reason, "the block holds no table of a curve");
}

#[test]
fn provenance_names_the_lines() {
    let source = fixture("affn");
    let spectrum = read(&source).unwrap().spectra(&source).remove(0).unwrap();
    let steps: Vec<String> = spectrum
        .provenance
        .steps
        .iter()
        .map(|step| format!("{}: {}", step.action, step.detail))
        .collect();
    insta::assert_snapshot!(steps.join("\n"), @r"
    read: 28 ordinates of `##XYDATA=` from line 21 on; XFACTOR 1 (line 9); YFACTOR 0.001 (line 10)
    axis: photon by `##DATA TYPE= INFRARED SPECTRUM` (line 4), `##XUNITS= 1/CM` (line 7)
    convert: abscissas to eV: `##XUNITS= 1/CM` (line 7)
    intensity: arb. u. by `##YUNITS= ABSORBANCE` (line 8)
    leave out: records that make no number here: ORIGIN, OWNER, $BATCH
    ");
    assert_eq!(spectrum.provenance.sources, [source.record().clone()]);
}

#[test]
fn wavelengths_are_photon_energies() {
    let source = fixture("wavelength");
    let spectrum = read(&source).unwrap().spectra(&source).remove(0).unwrap();
    // h c = 1239.841984 eV nm.
    assert!((spectrum.energy_ev[0] - 1_239.841_984 / 400.0).abs() < 1e-8);
    let micro = source.text().replace("NANOMETERS", "MICROMETERS");
    let micro = Source::from_text("t", &micro);
    let spectrum = read(&micro).unwrap().spectra(&micro).remove(0).unwrap();
    assert!((spectrum.energy_ev[4] - 1.239_841_984 / 402.0).abs() < 1e-11);
}

#[test]
fn what_is_no_curve_of_energy_is_skipped_with_its_reason() {
    let skipped = |from: &str, to: &str| {
        let source = Source::from_text("t", &altered(from, to));
        let document = read(&source).unwrap_or_else(|problems| panic!("{}", problems[0]));
        let skipped = document.spectra(&source).remove(0).unwrap_err();
        assert_eq!(skipped.line, 7, "the line of XUNITS");
        skipped.reason
    };
    for (from, to, said) in [
        ("= 1/CM", "= SECONDS", "gives no unit"),
        ("= 1/CM", "= MEV", "gives no unit"),
        ("= 1/CM", "= KINETIC ENERGY (EV)", "says kinetic energy and"),
        ("INFRARED SPECTRUM", "RAMAN SPECTRUM", "Raman shift"),
        (
            "INFRARED SPECTRUM",
            "MASS SPECTRUM",
            "neither kinetic, binding nor photon",
        ),
        (
            "INFRARED SPECTRUM",
            "INFRARED INTERFEROGRAM",
            "neither kinetic",
        ),
    ] {
        let reason = skipped(from, to);
        assert!(reason.contains(said), "{reason}");
    }
    let electrons = altered("INFRARED SPECTRUM", "X-RAY PHOTOELECTRON SPECTRUM");
    for (units, said) in [
        ("BINDING ENERGY (NM)", "a wavelength for binding"),
        ("BINDING ENERGY", "gives no unit"),
        ("ENERGY (EV)", "neither"),
        ("EV", "neither"),
        ("EV\n##XLABEL= MASS", "neither"),
        ("KINETIC ENERGY (EV)\n##XLABEL= BINDING ENERGY", "disagree"),
        (
            "BINDING ENERGY REFERENCED TO VACUUM (EV)\n##XLABEL= BINDING ENERGY REFERENCED TO FERMI LEVEL",
            "two zeros",
        ),
    ] {
        let source = Source::from_text("t", &electrons.replace("1/CM", units));
        let skipped = read(&source)
            .unwrap()
            .spectra(&source)
            .remove(0)
            .unwrap_err();
        assert!(skipped.reason.contains(said), "{units}: {}", skipped.reason);
    }
    let zero = Source::from_text(
        "t",
        &fixture("wavelength")
            .text()
            .replace("= 400\n", "= 0\n")
            .replace("= 402", "= 4")
            .replace("\n4000 ", "\n0 "),
    );
    let skipped = read(&zero).unwrap().spectra(&zero).remove(0).unwrap_err();
    assert!(skipped.reason.contains("a wavelength must be above zero"));
}

#[test]
fn labels_of_electron_spectra_give_axis_and_reference() {
    for (units, axis, reference) in [
        ("BINDING ENERGY (EV)", AxisKind::Binding, Reference::Unknown),
        ("Kinetic energy / eV", AxisKind::Kinetic, Reference::Unknown),
        ("PHOTON ENERGY (EV)", AxisKind::Photon, Reference::Unknown),
        ("E - E_F (EV)", AxisKind::FinalState, Reference::Fermi),
        (
            "BINDING ENERGY (EV, WRT E_F)",
            AxisKind::Binding,
            Reference::Fermi,
        ),
        (
            "EV\n##XLABEL= BINDING ENERGY",
            AxisKind::Binding,
            Reference::Unknown,
        ),
    ] {
        let text = altered("INFRARED SPECTRUM", "PHOTOELECTRON SPECTRUM").replace("1/CM", units);
        let source = Source::from_text("t", &text);
        let spectrum = read(&source).unwrap().spectra(&source).remove(0).unwrap();
        assert_eq!(
            (spectrum.axis, spectrum.reference),
            (axis, reference),
            "{units}"
        );
        assert_eq!(spectrum.energy_ev[0], 4000.0);
    }
}

#[test]
fn temperature_needs_its_unit() {
    let kelvin = |value: &str| {
        let text = altered(
            "##$BATCH= a private record",
            &format!("##TEMPERATURE= {value}"),
        );
        let source = Source::from_text("t", &text);
        let spectrum = read(&source).unwrap().spectra(&source).remove(0).unwrap();
        let left_out = spectrum
            .provenance
            .steps
            .iter()
            .any(|it| it.detail.contains("TEMPERATURE"));
        assert_ne!(
            left_out,
            spectrum.conditions.temperature_k.is_some(),
            "{value}"
        );
        spectrum.conditions.temperature_k
    };
    assert_eq!(kelvin("77 K"), Some(77.0));
    assert_eq!(kelvin("25 deg C"), Some(298.15));
    for unclear in ["25", "25 F", "-5 K", "room", ""] {
        assert_eq!(kelvin(unclear), None, "{unclear}");
    }
}
