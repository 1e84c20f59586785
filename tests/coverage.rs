//! Known truth in, truth out within the stated uncertainty: seeded studies, event by event, through
//! the files and the whole comparison. `cargo test` runs a hundred; all four hundred run with
//! `cargo test --release --test coverage -- --ignored`.

mod support;

use bandrule::compare::{Study, compare};
use rayon::prelude::*;
use support::studies::{Truth, write_study};

/// What one study gave against its truth.
struct Trial {
    gap_error: f64,
    gap_half_width: f64,
    difference_error: f64,
    difference_half_width: f64,
    statistical: f64,
    cautions: Vec<String>,
    tangent_error: Option<f64>,
    tangent_uncertainty: Option<f64>,
    seed: u64,
}

fn trial(seed: u64) -> Trial {
    let folder = tempfile::tempdir().unwrap();
    let truth: Truth = write_study(seed, folder.path());
    let path = folder.path().join("study.toml");
    let study = Study::read(&path, "study.toml").unwrap();
    let result = compare(&study)
        .unwrap_or_else(|error| panic!("seed {seed}: {error}"))
        .result;
    let gap = result.measured.gap.unwrap();
    let difference = result.difference.unwrap();
    let fit = &result.protocols[0];
    let tangent = result.protocols[1].gap;
    Trial {
        gap_error: gap.value - truth.gap,
        gap_half_width: gap.upper.unwrap() - gap.value,
        difference_error: difference.value - truth.difference,
        difference_half_width: difference.upper.unwrap() - difference.value,
        statistical: fit.gap.unwrap().uncertainty_or_zero(),
        cautions: result.cautions.iter().map(|c| c.name.clone()).collect(),
        tangent_error: tangent.map(|gap| gap.value - truth.gap),
        tangent_uncertainty: tangent.map(|gap| gap.uncertainty_or_zero()),
        seed,
    }
}

fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len() as f64
}

fn spread(values: &[f64]) -> f64 {
    let middle = mean(values);
    let sum: f64 = values.iter().map(|x| (x - middle).powi(2)).sum();
    (sum / (values.len() as f64 - 1.0)).sqrt()
}

fn median(mut values: Vec<f64>) -> f64 {
    values.sort_by(f64::total_cmp);
    values[values.len() / 2]
}

fn covered(errors: &[f64], half_widths: &[f64]) -> f64 {
    let inside = errors
        .iter()
        .zip(half_widths)
        .filter(|(e, u)| e.abs() <= **u);
    inside.count() as f64 / errors.len() as f64
}

/// Runs studies with seeds 1 to `count` and holds them to the stated laws.
fn hold(count: u64) {
    let trials: Vec<Trial> = (1..=count).into_par_iter().map(trial).collect();
    let gap: Vec<f64> = trials.iter().map(|t| t.gap_error).collect();
    let gap_widths: Vec<f64> = trials.iter().map(|t| t.gap_half_width).collect();
    let difference: Vec<f64> = trials.iter().map(|t| t.difference_error).collect();
    let widths: Vec<f64> = trials.iter().map(|t| t.difference_half_width).collect();
    let cautioned: Vec<&Trial> = trials.iter().filter(|t| !t.cautions.is_empty()).collect();
    let share = cautioned.len() as f64 / trials.len() as f64;
    let width_ratio =
        |widths: &[f64], errors: &[f64]| median(widths.to_vec()) / (1.96 * spread(errors));
    println!("studies: {count}");
    println!(
        "gap: bias {:+.4} eV, spread {:.4} eV, 95 % interval covers {:.3}, median half width {:.4} eV, over 1.96 spreads {:.2}",
        mean(&gap),
        spread(&gap),
        covered(&gap, &gap_widths),
        median(gap_widths.clone()),
        width_ratio(&gap_widths, &gap)
    );
    println!(
        "difference: bias {:+.4} eV, spread {:.4} eV, 95 % interval covers {:.3}, median half width {:.4} eV, over 1.96 spreads {:.2}",
        mean(&difference),
        spread(&difference),
        covered(&difference, &widths),
        median(widths.clone()),
        width_ratio(&widths, &difference)
    );
    println!(
        "median statistical uncertainty of the gap: {:.4} eV",
        median(trials.iter().map(|t| t.statistical).collect())
    );
    let tangent: Vec<f64> = trials.iter().filter_map(|t| t.tangent_error).collect();
    let tangent_u: Vec<f64> = trials
        .iter()
        .filter_map(|t| t.tangent_uncertainty)
        .collect();
    println!(
        "tangent: found {}, bias {:+.4} eV, spread {:.4} eV, median u {:.4}",
        tangent.len(),
        mean(&tangent),
        spread(&tangent),
        median(tangent_u)
    );
    println!("cautioned: {:.3}", share);
    for trial in &cautioned {
        println!(
            "  seed {}: {:?}, gap error {:+.3} of {:.3}",
            trial.seed, trial.cautions, trial.gap_error, trial.gap_half_width
        );
    }
    for trial in &trials {
        if trial.gap_error.abs() > 1.5 * trial.gap_half_width {
            println!(
                "  far: seed {} gap error {:+.3} of {:.3} {:?}",
                trial.seed, trial.gap_error, trial.gap_half_width, trial.cautions
            );
        }
    }
    assert!(mean(&gap).abs() <= 0.010, "bias of the gap");
    assert!(covered(&gap, &gap_widths) >= 0.93, "coverage of the gap");
    assert!(
        covered(&difference, &widths) >= 0.93,
        "coverage of the difference"
    );
    assert!(
        width_ratio(&gap_widths, &gap) <= 1.6,
        "width of the gap's interval"
    );
    assert!(
        width_ratio(&widths, &difference) <= 1.6,
        "width of the difference's interval"
    );
    assert!(share <= 0.05, "share cautioned");
}

#[test]
fn a_hundred_studies() {
    hold(100);
}

#[test]
#[ignore = "four hundred studies: a few minutes in release"]
fn four_hundred_studies() {
    hold(400);
}
