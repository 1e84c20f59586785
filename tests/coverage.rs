//! Known truth in, truth out within the stated uncertainty: seeded studies, event by event, through
//! the files and the whole comparison. `cargo test` runs a hundred; all four hundred run with
//! `cargo test --release --test coverage -- --ignored`.

// Numbers of studies are far below 2^52.
#![allow(clippy::cast_precision_loss)]

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
    cautions: Vec<String>,
    tangent_error: Option<f64>,
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
    let tangent = result.protocols[1].gap;
    Trial {
        gap_error: gap.value - truth.gap,
        gap_half_width: gap.upper.unwrap() - gap.value,
        difference_error: difference.value - truth.difference,
        difference_half_width: difference.upper.unwrap() - difference.value,
        cautions: result.cautions.iter().map(|c| c.name.clone()).collect(),
        tangent_error: tangent.map(|gap| gap.value - truth.gap),
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

/// Errors of one output with the half widths of its intervals.
struct Output {
    name: &'static str,
    errors: Vec<f64>,
    half_widths: Vec<f64>,
}

impl Output {
    fn covered(&self) -> f64 {
        let pairs = self.errors.iter().zip(&self.half_widths);
        let inside = pairs.filter(|(error, half)| error.abs() <= **half);
        inside.count() as f64 / self.errors.len() as f64
    }

    /// Median half width over what the true spread asks for.
    fn width_ratio(&self) -> f64 {
        median(self.half_widths.clone()) / (1.96 * spread(&self.errors))
    }

    fn tell(&self) {
        println!(
            "{}: bias {:+.4} eV, spread {:.4} eV, 95 % interval covers {:.3}, median half width \
             {:.4} eV, over 1.96 spreads {:.2}",
            self.name,
            mean(&self.errors),
            spread(&self.errors),
            self.covered(),
            median(self.half_widths.clone()),
            self.width_ratio()
        );
    }

    fn hold(&self) {
        assert!(self.covered() >= 0.93, "coverage of the {}", self.name);
        assert!(self.width_ratio() <= 1.6, "width of the {}", self.name);
    }
}

/// Runs studies with seeds 1 to `count` and holds them to the stated laws.
fn hold(count: u64) {
    let trials: Vec<Trial> = (1..=count).into_par_iter().map(trial).collect();
    let list = |part: fn(&Trial) -> f64| -> Vec<f64> { trials.iter().map(part).collect() };
    let gap = Output {
        name: "gap",
        errors: list(|t| t.gap_error),
        half_widths: list(|t| t.gap_half_width),
    };
    let difference = Output {
        name: "difference",
        errors: list(|t| t.difference_error),
        half_widths: list(|t| t.difference_half_width),
    };
    println!("studies: {count}");
    gap.tell();
    difference.tell();
    let tangent: Vec<f64> = trials.iter().filter_map(|t| t.tangent_error).collect();
    println!(
        "gap by tangents, corrected: found in {}, bias {:+.4} eV, spread {:.4} eV",
        tangent.len(),
        mean(&tangent),
        spread(&tangent)
    );
    let cautioned = trials.iter().filter(|t| !t.cautions.is_empty());
    let cautioned: Vec<&Trial> = cautioned.collect();
    let share = cautioned.len() as f64 / trials.len() as f64;
    println!("cautioned: {share:.3}");
    for trial in cautioned {
        println!("  seed {}: {:?}", trial.seed, trial.cautions);
    }
    let bias = mean(&gap.errors);
    assert!(bias.abs() <= 0.010, "bias of the gap: {bias}");
    gap.hold();
    difference.hold();
    assert!(share <= 0.05, "share cautioned: {share}");
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
