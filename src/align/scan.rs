//! The global scan of the shift, over the whole measured curve.
//!
//! At each shift the best non-negative amplitude, constant and step follow from a weighted linear
//! least-squares problem of three unknowns; the widths take a few values. The scan says where fits
//! are to start and which other shifts the data do not rule out; no result comes from it.

use super::density::{Density, Domain, Plan, Sampler};
use super::misfit::Misfit;
use super::noise::moving_average;
use super::window::Window;
use crate::schema::Side;

/// Standard deviations of the sample's Gaussian that are tried, eV.
const SAMPLE_SIGMAS: [f64; 3] = [0.03, 0.1, 0.2];
/// Lorentzian half width that is tried, eV.
const GAMMA: f64 = 0.03;

/// What a scan found.
#[derive(Debug, Clone, PartialEq)]
pub struct Alignment {
    /// Measured minus computed, at the least misfit.
    pub shift: f64,
    /// Other local minima: shift, and chi-square above the least one over the dispersion.
    pub alternatives: Vec<(f64, f64)>,
}

/// Scans the shift over a range.
///
/// `levels` are energies and weights of one side, `energies` the ascending measured scale, all of
/// `misfit`'s channels used; `sigma` the instrument's standard deviation. `None` where no shift gives
/// a positive amplitude.
#[must_use]
pub fn scan(
    levels: (&[f64], &[f64]),
    energies: &[f64],
    misfit: Misfit<'_>,
    side: Side,
    sigma: f64,
    range: Window,
) -> Option<Alignment> {
    let (first, last) = (*energies.first()?, *energies.last()?);
    let weights = weights(misfit);
    let step = (0.3 * sigma.hypot(SAMPLE_SIGMAS[0])).clamp(0.005, 0.05);
    let domain = Domain {
        centre: 0.5 * (first + last) - 0.5 * (range.start + range.stop),
        half_width: 0.5 * (last - first) + 0.5 * (range.stop - range.start),
        sigma_min: sigma.hypot(SAMPLE_SIGMAS[0]),
        sigma_max: sigma.hypot(SAMPLE_SIGMAS[2]),
    };
    let plan = Plan::new(levels.0, levels.1, domain);
    let fine = grid(
        domain.centre - domain.half_width,
        domain.centre + domain.half_width,
        step,
    );
    let sampler = Sampler::new(&fine, &plan);
    let shifts = grid(range.start, range.stop, step);
    let mut profile = vec![f64::INFINITY; shifts.len()];
    for sample in SAMPLE_SIGMAS {
        let at = Density {
            shift: 0.0,
            variance: sigma.powi(2) + sample.powi(2),
            gamma: GAMMA,
        };
        let values = sampler.values(&plan, at);
        let table = Table {
            start: fine[0],
            step,
            density: &values.density,
            integral: &values.integral,
        };
        for (slot, &shift) in profile.iter_mut().zip(&shifts) {
            *slot = slot.min(chi_square(
                &table,
                energies,
                misfit.values,
                &weights,
                side,
                shift,
            ));
        }
    }
    minima(&shifts, &profile, energies.len(), 2.0 * sigma.max(0.05))
}

/// Weights one over variance, from the smoothed data.
fn weights(misfit: Misfit<'_>) -> Vec<f64> {
    let smooth = moving_average(misfit.values, 2);
    (0..smooth.len())
        .map(|i| 1.0 / misfit.variance(i, smooth[i].max(0.2)))
        .collect()
}

fn grid(start: f64, stop: f64, spacing: f64) -> Vec<f64> {
    // A count of grid points is positive and small.
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
    let intervals = ((stop - start) / spacing).ceil().clamp(1.0, 1e6) as u32;
    (0..=intervals)
        .map(|i| start + spacing * f64::from(i))
        .collect()
}

/// Density and integral on an even grid, read between points by straight lines.
struct Table<'a> {
    start: f64,
    step: f64,
    density: &'a [f64],
    integral: &'a [f64],
}

impl Table<'_> {
    fn read(&self, energy: f64) -> (f64, f64) {
        let position = ((energy - self.start) / self.step).max(0.0);
        // Clamped to the grid.
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
        let index = (position as usize).min(self.density.len() - 2);
        #[allow(clippy::cast_precision_loss)] // An index of the grid.
        let fraction = (position - index as f64).min(1.0);
        let between = |list: &[f64]| list[index] + fraction * (list[index + 1] - list[index]);
        (between(self.density), between(self.integral))
    }
}

/// Least chi-square at one shift over non-negative amplitude, constant and step.
fn chi_square(
    table: &Table<'_>,
    energies: &[f64],
    values: &[f64],
    weights: &[f64],
    side: Side,
    shift: f64,
) -> f64 {
    let gap_end = match side {
        Side::Valence => energies[energies.len() - 1],
        Side::Conduction => energies[0],
    };
    let reference = table.read(gap_end - shift).1;
    let mut normal = Normal::default();
    for ((&energy, &value), &weight) in energies.iter().zip(values).zip(weights) {
        let (density, integral) = table.read(energy - shift);
        normal.add([density, 1.0, (integral - reference).abs()], value, weight);
    }
    normal.least()
}

/// Normal equations of three unknowns.
#[derive(Debug, Default)]
struct Normal {
    matrix: [[f64; 3]; 3],
    right: [f64; 3],
    total: f64,
}

impl Normal {
    fn add(&mut self, row: [f64; 3], value: f64, weight: f64) {
        for i in 0..3 {
            for j in 0..3 {
                self.matrix[i][j] += weight * row[i] * row[j];
            }
            self.right[i] += weight * row[i] * value;
        }
        self.total += weight * value * value;
    }

    /// The least sum of squares with every unknown non-negative and the first one positive: the best
    /// of the four sets of active unknowns whose solution is non-negative.
    fn least(&self) -> f64 {
        let sets: [&[usize]; 4] = [&[0, 1, 2], &[0, 1], &[0, 2], &[0]];
        sets.into_iter()
            .filter_map(|set| self.solve(set))
            .fold(f64::INFINITY, f64::min)
    }

    fn solve(&self, set: &[usize]) -> Option<f64> {
        let n = set.len();
        let matrix = nalgebra::DMatrix::from_fn(n, n, |i, j| self.matrix[set[i]][set[j]]);
        let right = nalgebra::DVector::from_fn(n, |i, _| self.right[set[i]]);
        let solution = matrix.cholesky()?.solve(&right);
        (solution.iter().all(|&x| x >= 0.0)).then(|| self.total - solution.dot(&right))
    }
}

/// The least value of a profile and its other local minima at least `apart` away.
fn minima(shifts: &[f64], profile: &[f64], channels: usize, apart: f64) -> Option<Alignment> {
    let best = (0..profile.len())
        .filter(|&i| profile[i].is_finite())
        .min_by(|&a, &b| profile[a].total_cmp(&profile[b]))?;
    #[allow(clippy::cast_precision_loss)] // A number of channels.
    let dispersion = (profile[best] / channels.saturating_sub(5).max(1) as f64).max(1.0);
    let alternatives = (1..profile.len().saturating_sub(1))
        .filter(|&i| profile[i] <= profile[i - 1] && profile[i] < profile[i + 1])
        .filter(|&i| (shifts[i] - shifts[best]).abs() > apart)
        .map(|i| (shifts[i], (profile[i] - profile[best]) / dispersion))
        .collect();
    Some(Alignment {
        shift: shifts[best],
        alternatives,
    })
}
