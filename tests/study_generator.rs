//! The generator of studies itself: what it writes agrees with the truth that it tells.
// Counts and channel numbers here are far below 2^52.
#![allow(clippy::cast_possible_truncation, clippy::cast_precision_loss)]

mod support;

use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

use rand::SeedableRng;
use rand_chacha::ChaCha8Rng;
use support::events::{Background, Channels, MetalEdge, Secondaries, Widths, spectrum};
use support::studies::{Truth, truth_of, write_study};

const NARROW: Widths = Widths {
    instrument_fwhm: 1e-6,
    sample_gaussian_fwhm: 1e-6,
    sample_lorentzian_fwhm: 1e-9,
};
const NONE: Background = Background {
    constant: 0.0,
    step: 0.0,
    side: Secondaries::Below,
};

fn study(seed: u64) -> (tempfile::TempDir, Truth) {
    let folder = tempfile::tempdir().unwrap();
    let truth = write_study(seed, folder.path());
    (folder, truth)
}

/// The columns of a table as numbers.
fn columns(path: &Path) -> Vec<Vec<f64>> {
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_path(path)
        .unwrap();
    let width = reader.headers().unwrap().len();
    let mut columns = vec![Vec::new(); width];
    for record in reader.records() {
        for (column, field) in columns.iter_mut().zip(&record.unwrap()) {
            column.push(field.parse().unwrap());
        }
    }
    columns
}

fn mean_and_deviation(values: &[f64]) -> (f64, f64) {
    let count = values.len() as f64;
    let mean = values.iter().sum::<f64>() / count;
    let variance = values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / (count - 1.0);
    (mean, variance.sqrt())
}

fn near(found: f64, expected: f64, tolerance: f64) {
    assert!(
        (found - expected).abs() <= tolerance,
        "{found} is not within {tolerance} of {expected}"
    );
}

#[test]
fn table_holds_the_true_extrema_and_two_thousand_points() {
    for seed in [1, 2, 3] {
        let (folder, truth) = study(seed);
        let columns = columns(&folder.path().join("levels.csv"));
        let (k, energy, occupation) = (&columns[0], &columns[7], &columns[8]);
        let edge = |occupied: bool| {
            energy
                .iter()
                .zip(occupation)
                .filter(move |(_, f)| (**f > 1.0) == occupied)
                .map(|(e, _)| *e)
        };
        near(edge(true).fold(f64::MIN, f64::max), 0.0, 1e-9);
        near(
            edge(false).fold(f64::MAX, f64::min),
            truth.computed_gap,
            1e-6,
        );
        let mut levels_at = BTreeMap::new();
        for number in k {
            *levels_at.entry(*number as i64).or_insert(0) += 1;
        }
        assert_eq!(levels_at.len(), 2_000);
        let bands = levels_at[&1];
        assert!((9..=13).contains(&bands));
        assert!(levels_at.values().all(|&count| count == bands));
    }
}

#[test]
fn truths_follow_from_one_another() {
    for seed in 0..500 {
        let t = truth_of(seed);
        near(t.gap, t.conduction_edge - t.valence_edge, 1e-12);
        near(
            t.difference,
            t.computed_gap_converged + t.zero_point - t.gap,
            1e-12,
        );
        let table = t.computed_gap_converged + t.k_grid_error + t.empty_states_error;
        near(t.computed_gap, table, 1e-12);
        near(t.shift_valence, t.valence_edge, 1e-12);
        near(
            t.shift_conduction,
            t.conduction_edge - t.computed_gap,
            1e-12,
        );
        assert!(t.valence_edge <= -0.5 && t.conduction_edge >= 0.5 - 1e-12);
        assert!((1.0..6.0).contains(&t.gap));
    }
}

#[test]
fn errors_have_the_stated_spread() {
    let truths: Vec<Truth> = (0..4_000).map(truth_of).collect();
    let spread = |value: fn(&Truth) -> f64, mean: f64, deviation: f64| {
        let values: Vec<f64> = truths.iter().map(value).collect();
        let found = mean_and_deviation(&values);
        // Five standard errors of a mean and of a deviation over 4,000 draws.
        near(found.0, mean, 0.08 * deviation);
        near(found.1, deviation, 0.06 * deviation);
    };
    spread(|t| t.difference, 0.0, 0.1);
    spread(|t| t.zero_point, -0.05, 0.01);
    spread(|t| t.k_grid_error, 0.0, 0.03);
    spread(|t| t.empty_states_error, 0.0, 0.05);
    spread(|t| t.work_function_error, 0.0, 0.02);
    spread(|t| t.ipes_offset, 0.0, 0.03);
    spread(|t| t.pes_widths.instrument_fwhm, 0.10, 0.005);
    spread(|t| t.ipes_widths.instrument_fwhm, 0.42, 0.02);
    spread(|t| t.pes_displacement, 0.0, 0.025 / 12f64.sqrt());
    spread(|t| t.ipes_displacement, 0.0, 0.05 / 12f64.sqrt());
    let stated = |t: &&Truth| t.states_photon_uncertainty;
    let photon: Vec<f64> = truths
        .iter()
        .filter(stated)
        .map(|t| t.photon_energy_error)
        .collect();
    near(mean_and_deviation(&photon).1, 0.01, 0.001);
    let metals = truths.iter().filter(|t| t.metal_edge.is_some()).count();
    near(metals as f64, 2_000.0, 160.0);
}

#[test]
fn the_same_seed_writes_the_same_bytes() {
    let ((one, truth), (again, _), (other, _)) = (study(7), study(7), study(8));
    for name in ["study.toml", "levels.csv", "pes.csv", "ipes.csv"] {
        let read = |folder: &tempfile::TempDir| fs::read(folder.path().join(name)).unwrap();
        assert_eq!(read(&one), read(&again), "{name}");
        assert_ne!(read(&one), read(&other), "{name}");
    }
    let metal = one.path().join("metal.csv");
    assert_eq!(metal.exists(), truth.metal_edge.is_some());
    let text = fs::read_to_string(one.path().join("study.toml")).unwrap();
    assert!(text.parse::<toml::Table>().is_ok());
    assert_eq!(text.contains("fermi_edge"), truth.metal_edge.is_some());
}

#[test]
fn spectra_have_their_channels_counts_and_edges() {
    for seed in 20..26 {
        let (folder, truth) = study(seed);
        let pes = columns(&folder.path().join("pes.csv"));
        let ipes = columns(&folder.path().join("ipes.csv"));
        assert_eq!((pes[0].len(), ipes[0].len()), (401, 191));
        near(pes[0][1] - pes[0][0], 0.025, 1e-9);
        near(ipes[0][1] - ipes[0][0], 0.05, 1e-9);
        let peak = |counts: &[f64]| counts.iter().copied().fold(0.0, f64::max);
        assert!((6e3..2e4).contains(&peak(&pes[1])), "seed {seed}");
        assert!((1.3e3..6e3).contains(&peak(&ipes[1])), "seed {seed}");
        // Beyond the edge the counts sink to the dark rate, and they rise within 1 eV behind it.
        let valence = truth.recorded_fermi_level() + truth.valence_edge;
        let dark = average(&pes, valence + 1.2, valence + 1.9);
        assert!(dark < 0.02 * peak(&pes[1]) + 60.0);
        assert!(average(&pes, valence - 1.0, valence) > 2.0 * dark);
        let conduction = truth.conduction_edge + truth.ipes_displacement - truth.ipes_offset;
        let dark = average(&ipes, conduction - 2.3, conduction - 1.2);
        assert!(dark < 0.05 * peak(&ipes[1]) + 100.0);
        assert!(average(&ipes, conduction, conduction + 1.0) > 1.2 * dark);
    }
}

/// The average count of the channels between two energies.
fn average(spectrum: &[Vec<f64>], low: f64, high: f64) -> f64 {
    let inside: Vec<f64> = spectrum[0]
        .iter()
        .zip(&spectrum[1])
        .filter(|(energy, _)| (low..high).contains(*energy))
        .map(|(_, count)| *count)
        .collect();
    inside.iter().sum::<f64>() / inside.len() as f64
}

/// Counts of one level at 5.0 in channels of 0.01 from 0 to 10.
fn one_level(widths: Widths, background: Background, seed: u64) -> (Channels, Vec<u64>) {
    let channels = Channels::over(0.0, 10.0, 0.01);
    let mut rng = ChaCha8Rng::seed_from_u64(seed);
    let counts = spectrum(&mut rng, &[5.0], channels, widths, background, 1e4);
    (channels, counts)
}

#[test]
fn gaussian_widths_add_in_quadrature() {
    let widths = Widths {
        instrument_fwhm: 0.3,
        sample_gaussian_fwhm: 0.4,
        ..NARROW
    };
    let (channels, counts) = one_level(widths, NONE, 1);
    let total: u64 = counts.iter().sum();
    near(total as f64, 2e5, 5.0 * 2e5f64.sqrt());
    let moment = |power: i32| {
        counts
            .iter()
            .enumerate()
            .map(|(i, &n)| n as f64 * (channels.centre(i) - 5.0).powi(power))
            .sum::<f64>()
            / total as f64
    };
    near(moment(1), 0.0, 0.003);
    near(moment(2).sqrt(), 0.5 / 2.354_820_045, 0.002);
}

#[test]
fn half_of_a_lorentzian_lies_within_its_half_width() {
    let widths = Widths {
        sample_lorentzian_fwhm: 0.41,
        ..NARROW
    };
    let (_, counts) = one_level(widths, NONE, 2);
    // 41 channels about the centre are one full width.
    let inside: u64 = counts[480..=520].iter().sum();
    near(inside as f64, 1e5, 5.0 * 1e5f64.sqrt());
    // The part outside 0..10 is lost: 2/pi atan(0.205/5) = 2.6 % of 200,000.
    let total: u64 = counts.iter().sum();
    near(total as f64, 2e5 - 5_217.0, 5.0 * 2e5f64.sqrt());
}

#[test]
fn secondary_events_fill_one_side_only() {
    for (side, filled, empty) in [
        (Secondaries::Below, 0..500, 501..1001),
        (Secondaries::Above, 501..1001, 0..500),
    ] {
        let background = Background {
            constant: 3.0,
            step: 0.05,
            side,
        };
        let (_, counts) = one_level(NARROW, background, 3);
        let rate = |range: std::ops::Range<usize>| {
            let length = range.len() as f64;
            counts[range].iter().sum::<u64>() as f64 / length
        };
        // 200,000 primary events, 0.05 per eV, channels of 0.01: 100 a channel beside the dark 3.
        near(rate(filled), 103.0, 2.5);
        near(rate(empty), 3.0, 0.4);
    }
}

#[test]
fn metal_edge_has_half_its_height_at_the_fermi_level() {
    let metal = MetalEdge {
        edge: 16.8,
        thermal_energy: 0.025_852,
        slope: 0.0,
        depth: 1.5,
        instrument_fwhm: 0.1,
        height: 4_000.0,
        constant: 20.0,
    };
    let channels = Channels::over(16.0, 17.3, 0.01);
    let mut rng = ChaCha8Rng::seed_from_u64(4);
    let counts = metal.counts(&mut rng, channels);
    let mean = |range: std::ops::Range<usize>| {
        let length = range.len() as f64;
        counts[range].iter().sum::<u64>() as f64 / length
    };
    near(mean(0..40), 4_020.0, 60.0);
    near(mean(79..82), 2_020.0, 150.0);
    near(mean(115..130), 20.0, 6.0);
}
