//! The transfer format of ISO 14976 there and back: what is written reads as what was meant.

use std::path::Path;

use bandrule::export::iso14976::text;
use bandrule::parse::Source;
use bandrule::parse::iso14976::{
    Abscissa, AnalyserMode, Block, Date, Direction, Experiment, ExperimentMode, Extent, Label,
    Linescans, List, MapSize, Pair, Parameter, Part, Particle, Real, ScanMode, Selection,
    SignalMode, Species, SputterMode, SputterSource, Technique, Text, is_like, read,
};
use proptest::collection::vec;
use proptest::prelude::*;
use proptest::sample::select;

fn fixtures() -> Vec<(String, String)> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("fixtures/iso14976");
    let mut files: Vec<_> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|end| end == "vms"))
        .map(|path| {
            (
                path.display().to_string(),
                std::fs::read_to_string(&path).unwrap(),
            )
        })
        .collect();
    files.sort();
    files
}

#[test]
fn fixtures_survive_writing() {
    let files = fixtures();
    assert_eq!(files.len(), 13);
    for (name, file) in files {
        let experiment = read(&Source::from_text(&name, &file)).unwrap();
        let written = text(&experiment).unwrap();
        assert_eq!(
            read(&Source::from_text(&name, &written)),
            Ok(experiment),
            "{name}"
        );
        // Only the spelling of numbers may change.
        let same = |(a, b): (&str, &str)| a == b || a.parse::<f64>() == b.parse::<f64>();
        assert!(file.lines().zip(written.lines()).all(same), "{name}");
        assert_eq!(file.lines().count(), written.lines().count(), "{name}");
    }
}

const MODES: [ExperimentMode; 8] = [
    ExperimentMode::Norm,
    ExperimentMode::Map,
    ExperimentMode::MapDp,
    ExperimentMode::MapSv,
    ExperimentMode::MapSvDp,
    ExperimentMode::Sdp,
    ExperimentMode::SdpSv,
    ExperimentMode::Sem,
];

const TECHNIQUES: [Technique; 14] = [
    Technique::Xps,
    Technique::Ups,
    Technique::AesDiff,
    Technique::AesDir,
    Technique::Edx,
    Technique::Els,
    Technique::Fabms,
    Technique::FabmsEnergy,
    Technique::Iss,
    Technique::Sims,
    Technique::SimsEnergy,
    Technique::Snms,
    Technique::SnmsEnergy,
    Technique::Xrf,
];

/// Any finite number, every bit pattern as likely.
fn number() -> impl Strategy<Value = f64> {
    let is_number = |value: &f64| value.is_finite() && value.to_bits() != 1e37f64.to_bits();
    prop_oneof![
        any::<u64>()
            .prop_map(f64::from_bits)
            .prop_filter("a finite number", is_number),
        select(vec![
            0.0,
            -0.0,
            0.1,
            1486.6,
            f64::MAX,
            f64::MIN_POSITIVE,
            5e-324
        ]),
    ]
}

fn real() -> impl Strategy<Value = Real> {
    proptest::option::weighted(0.9, number())
}

fn line() -> impl Strategy<Value = Text> {
    prop_oneof![
        "[ -~]{0,80}",
        "[ \tµ°世a]{0,12}",
        Just("end of experiment".to_owned()),
        Just("-1".to_owned())
    ]
    .prop_map(Text::from)
}

fn list<T: std::fmt::Debug + 'static>(
    entry: impl Strategy<Value = T>,
    size: impl Into<proptest::collection::SizeRange>,
) -> impl Strategy<Value = List<T>> {
    vec(entry, size).prop_map(List::from)
}

fn pair<T: std::fmt::Debug>(
    x: impl Strategy<Value = T>,
    y: impl Strategy<Value = T>,
) -> impl Strategy<Value = Pair<T>> {
    (x, y).prop_map(|(x, y)| Pair { x, y })
}

fn reals() -> impl Strategy<Value = Pair<Real>> {
    pair(real(), real())
}

fn direction() -> impl Strategy<Value = Direction> {
    reals().prop_map(|Pair { x, y }| Direction {
        polar_deg: x,
        azimuth_deg: y,
    })
}

fn label() -> impl Strategy<Value = Label> {
    (line(), line()).prop_map(|(label, units)| Label { label, units })
}

fn part() -> impl Strategy<Value = Part> {
    (1..=Part::LAST).prop_map(|number| Part::new(number).unwrap())
}

fn selection() -> impl Strategy<Value = Selection> {
    prop_oneof![
        Just(Selection::Every),
        list(part(), 1..45).prop_map(Selection::Only),
        list(part(), 1..45).prop_map(Selection::Without),
    ]
}

fn date() -> impl Strategy<Value = Date> {
    (any::<[Option<u32>; 6]>(), any::<i64>()).prop_map(|(parts, hours_ahead_of_gmt)| {
        let [year, month, day, hours, minutes, seconds] = parts;
        Date {
            year,
            month,
            day,
            hours,
            minutes,
            seconds,
            hours_ahead_of_gmt,
        }
    })
}

/// What is before the analysis source, and the labels.
fn origin(values: usize) -> impl Strategy<Value = Block> {
    let texts = [(); 5].map(|()| line());
    (
        texts,
        date(),
        list(line(), 0..3),
        select(TECHNIQUES.to_vec()),
        pair(any::<i64>(), any::<i64>()),
        list(real(), values),
        any::<[i64; 4]>(),
        any::<[i64; 6]>(),
    )
        .prop_map(
            |(texts, date, comment, technique, position, values, whole, lines)| {
                let [identifier, sample, source_label, label, transition] = texts;
                let [atomic_number, atoms, charge, detected] = whole;
                let at = |index: usize| Pair {
                    x: lines[index],
                    y: lines[index + 1],
                };
                Block {
                    identifier,
                    sample,
                    date,
                    comment,
                    technique,
                    position: Some(position),
                    experimental_values: values,
                    source_label,
                    particle: Some(Particle {
                        atomic_number,
                        atoms,
                        charge,
                    }),
                    linescans: Some(Linescans {
                        first_start: at(0),
                        first_finish: at(2),
                        last_finish: at(4),
                    }),
                    species: Species {
                        label,
                        transition,
                        charge: detected,
                    },
                    ..Block::default()
                }
            },
        )
}

/// The numbers of the source, the analyser and the sample.
fn instrument(block: Block) -> impl Strategy<Value = Block> {
    let analyser = select(vec![
        AnalyserMode::Fat,
        AnalyserMode::Frr,
        AnalyserMode::ConstantDeltaM,
        AnalyserMode::ConstantRelative,
    ]);
    let sputter = select(vec![SputterMode::Continuous, SputterMode::Cyclic]);
    let reals_alone = [(); 12].map(|()| real());
    let pairs = [(); 4].map(|()| reals());
    let directions = [(); 4].map(|()| direction());
    (
        Just(block),
        analyser,
        sputter,
        reals_alone,
        pairs,
        directions,
    )
        .prop_map(|(block, analyser_mode, mode, r, pairs, directions)| Block {
            source_energy_ev: r[0],
            source_strength: r[1],
            beam_width_um: pairs[0],
            field_of_view_um: Some(pairs[1]),
            source_direction: directions[0],
            analyser_mode,
            pass_energy_or_ratio: r[2],
            differential_width_ev: Some(r[3]),
            magnification: r[4],
            work_function_ev: r[5],
            target_bias_v: r[6],
            analysis_width_um: pairs[2],
            take_off: directions[1],
            collection_time_s: r[7],
            time_correction_s: r[8],
            sputter_source: Some(SputterSource {
                energy_ev: r[9],
                current_na: r[10],
                width_um: pairs[3],
                direction: directions[2],
                mode,
            }),
            tilt: directions[3],
            rotation_deg: r[11],
            ..block
        })
}

fn parameter() -> impl Strategy<Value = Parameter> {
    (label(), real()).prop_map(|(label, value)| Parameter { label, value })
}

fn extent() -> impl Strategy<Value = Extent> {
    (real(), real()).prop_map(|(minimum, maximum)| Extent { minimum, maximum })
}

/// The signal, its variables and their values; an unknown value is 1E37 among the ordinates.
fn signal(block: Block, future: usize) -> impl Strategy<Value = Block> {
    let signal = select(vec![SignalMode::Analogue, SignalMode::PulseCounting]);
    let abscissa = (label(), real(), real());
    let data = (0..4usize, 0..5usize).prop_flat_map(|(variables, rows)| {
        let value = prop_oneof![9 => number(), 1 => Just(1e37)];
        let values = vec(value, variables * rows);
        (list(label(), variables), list(extent(), variables), values)
    });
    let parameters = list(parameter(), 0..3);
    (
        Just(block),
        signal,
        any::<i64>(),
        abscissa,
        data,
        parameters,
        list(line(), future),
    )
        .prop_map(
            |(block, signal_mode, scans, abscissa, data, parameters, future_entries)| {
                let (label, start, increment) = abscissa;
                let (variables, extents, ordinates) = data;
                Block {
                    abscissa: Some(Abscissa {
                        label,
                        start,
                        increment,
                    }),
                    variables,
                    signal_mode,
                    scans,
                    parameters,
                    future_entries,
                    extents,
                    ordinates,
                    ..block
                }
            },
        )
}

fn block(values: usize, future: usize) -> impl Strategy<Value = Block> {
    origin(values)
        .prop_flat_map(instrument)
        .prop_flat_map(move |block| signal(block, future))
}

/// An experiment in which later blocks say what they like; see [`valid`].
fn experiment() -> impl Strategy<Value = Experiment> {
    let texts = [(); 4].map(|()| line());
    let scan = select(vec![
        ScanMode::Regular,
        ScanMode::Irregular,
        ScanMode::Mapping,
    ]);
    let head = (
        texts,
        list(line(), 0..3),
        select(MODES.to_vec()),
        scan,
        any::<[u32; 4]>(),
    );
    let plan = (
        list(label(), 0..3),
        selection(),
        list(part(), 0..3),
        list(line(), 0..3),
        0..3u32,
    );
    (head, plan).prop_flat_map(|(head, plan)| {
        let (texts, comment, mode, scan_mode, whole) = head;
        let (variables, selection, manual_parts, future_entries, future) = plan;
        let [institution, instrument_model, operator, identifier] = texts;
        let [regions, positions, x_coordinates, y_coordinates] = whole;
        let experiment = Experiment {
            institution,
            instrument_model,
            operator,
            identifier,
            comment,
            mode,
            scan_mode,
            spectral_regions: Some(regions),
            map: Some(MapSize {
                positions,
                x_coordinates,
                y_coordinates,
            }),
            variables,
            selection,
            manual_parts,
            future_entries,
            future_block_entries: future,
            blocks: Vec::new(),
        };
        let blocks = vec(block(experiment.variables.len(), future as usize), 0..4);
        blocks.prop_map(move |blocks| {
            valid(Experiment {
                blocks,
                ..experiment.clone()
            })
        })
    })
}

/// The experiment with what its modes, techniques and parameter list allow. The conditions stand
/// here apart from the program's, as the field list has them.
fn valid(mut e: Experiment) -> Experiment {
    use ExperimentMode::{Map, MapDp, MapSv, MapSvDp, Norm, Sdp, SdpSv, Sem};
    let mode = e.mode;
    keep(
        &mut e.spectral_regions,
        matches!(mode, Map | MapDp | Norm | Sdp),
    );
    keep(&mut e.map, matches!(mode, Map | MapDp));
    let (depth, image) = (
        matches!(mode, MapDp | MapSvDp | Sdp | SdpSv),
        matches!(mode, MapSv | MapSvDp | Sem),
    );
    let (mut blocks, selection) = (std::mem::take(&mut e.blocks), e.selection.clone());
    if let Some((first, later)) = blocks.split_first_mut() {
        for block in later {
            take_over(block, first, &selection);
        }
    }
    for b in &mut blocks {
        let ion = b.technique.to_string();
        let ion = ["FABMS", "ISS", "SIMS", "SNMS"]
            .iter()
            .any(|word| ion.starts_with(word));
        keep(&mut b.position, matches!(mode, Map | MapDp));
        keep(&mut b.particle, depth || ion);
        keep(
            &mut b.field_of_view_um,
            matches!(mode, Map | MapDp) || image,
        );
        keep(&mut b.linescans, image);
        keep(
            &mut b.differential_width_ev,
            b.technique == Technique::AesDiff,
        );
        keep(&mut b.abscissa, e.scan_mode == ScanMode::Regular);
        keep(&mut b.sputter_source, depth && !ion);
    }
    e.blocks = blocks;
    e
}

fn keep<T>(value: &mut Option<T>, applies: bool) {
    if !applies {
        *value = None;
    }
}

/// The parts of the first block where the list leaves them out. A part that only some techniques
/// have needs the first block's technique, which every block has here.
fn take_over(block: &mut Block, first: &Block, selection: &Selection) {
    let given = std::mem::replace(block, first.clone());
    macro_rules! parts {
        ($($number:literal $($field:ident).+),* $(,)?) => {
            $(if selection.has($number) { block.$($field).+ = given.$($field).+.clone(); })*
        };
    }
    parts!(
        1 date.year, 2 date.month, 3 date.day, 4 date.hours, 5 date.minutes, 6 date.seconds,
        7 date.hours_ahead_of_gmt, 8 comment, 10 position, 11 experimental_values,
        12 source_label, 13 particle, 14 source_energy_ev, 15 source_strength, 16 beam_width_um,
        17 field_of_view_um, 18 linescans, 19 source_direction.polar_deg,
        20 source_direction.azimuth_deg, 21 analyser_mode, 22 pass_energy_or_ratio,
        23 differential_width_ev, 24 magnification, 25 work_function_ev, 26 target_bias_v,
        27 analysis_width_um, 28 take_off, 29 species.label, 30 species.transition,
        30 species.charge, 31 abscissa, 33 signal_mode, 34 collection_time_s, 35 scans,
        36 time_correction_s, 37 sputter_source, 38 tilt, 39 rotation_deg, 40 parameters,
    );
    if [13, 23, 37].iter().all(|&part| selection.has(part)) && selection.has(9) {
        block.technique = given.technique;
    }
    block.identifier = given.identifier;
    block.sample = given.sample;
    block.future_entries = given.future_entries;
    if selection.has(32) {
        block.variables = given.variables;
        block.extents = given.extents;
        block.ordinates = given.ordinates;
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(300))]

    #[test]
    fn documents_survive_writing_to_the_last_bit(experiment in experiment()) {
        let written = text(&experiment).unwrap();
        prop_assert!(is_like(&written));
        for ends in ["\n", "\r\n", "\r"] {
            let source = Source::from_text("a.vms", &written.replace('\n', ends));
            let back = read(&source).unwrap();
            // Written alike means equal in every bit, the sign of a zero included.
            prop_assert_eq!(&text(&back).unwrap(), &written);
            prop_assert_eq!(&back, &experiment);
            let spectra = back.spectra(&source);
            prop_assert_eq!(spectra.len(), back.blocks.len());
            for (curve, block) in back.blocks.iter().enumerate() {
                let variables = block.variables.len();
                for (index, value) in block.ordinates.iter().enumerate() {
                    let span = back.value_span(&source, curve, index / variables, index % variables);
                    let there = source.text()[span.unwrap()].parse::<f64>().unwrap();
                    prop_assert_eq!(there.to_bits(), value.to_bits());
                }
            }
        }
    }

    #[test]
    fn mutated_files_never_panic(
        which in 0..13usize,
        changes in vec((any::<prop::sample::Index>(), any::<u8>(), 0..4u8), 1..6),
    ) {
        let mut bytes = fixtures().swap_remove(which).1.into_bytes();
        for (at, byte, how) in changes {
            let at = at.index(bytes.len());
            match how {
                0 => bytes[at] = byte,
                1 => bytes.insert(at, byte),
                2 => drop(bytes.remove(at)),
                _ => bytes[at] = b"0123456789-+.\n\rEe "[usize::from(byte) % 18],
            }
        }
        let mutated = String::from_utf8_lossy(&bytes);
        let source = Source::from_text("a.vms", &mutated);
        let _ = is_like(&mutated);
        match read(&source) {
            Ok(experiment) => {
                let _ = experiment.spectra(&source);
                let _ = experiment.value_span(&source, 0, 0, 0);
                // A line that grew too long is read and not written; all else comes back.
                if let Ok(written) = text(&experiment) {
                    prop_assert_eq!(read(&Source::from_text("b", &written)), Ok(experiment));
                }
            }
            Err(problems) => prop_assert!(problems.len() == 1 && problems[0].place.is_some()),
        }
    }
}
