//! Sampling of the Brillouin zone: what a table of few k-points leaves open in its density.
//!
//! The model of channel j is a sum over k-points, `mu_j` = `sum_k` `c_jk`. Had other k-points been drawn,
//! it would differ; with points drawn at random the covariance of the model is estimated by
//!
//!   C = N/(N - 1) `sum_k` `d_k` `d_k`',   `d_k` = `c_k` - (`w_k` / sum w) mu,
//!
//! (the jackknife of a weighted sum, in its infinitesimal form; Efron and Tibshirani, An Introduction
//! to the Bootstrap (1993), chapter 11). Any estimate that is linear in the data by weights g then
//! carries the influence g'`d_k` of each k-point, whose squares add to its sampling variance; two
//! estimates from the same k-points share them.
//!
//! A model that is off by sampling has derivatives that are off by it too, and the two go together: a
//! plain fit broadens the density too much, since that smooths the lumps of few k-points, and moves
//! the edge with it. The expected chi-square of the sampling alone, tr(V^-1 C), shrinks with the
//! broadening; a fit to the unbiased objective subtracts it (corrected score; Nakamura, Biometrika 77,
//! 127 (1990)). Its gradient is 2 `sum_k` (`dd_k/dp`)' V^-1 `d_k`.
//!
//! A regular grid does better than random points, so
//! for it the estimate errs on the large side.

use nalgebra::DMatrix;
use rand::SeedableRng;
use rand::seq::SliceRandom;
use rand_chacha::ChaCha8Rng;

use super::density::Density;
use super::voigt::voigt_derivatives;
use crate::schema::Side;

/// Most groups that k-points are dealt into; beyond, several share a group.
const GROUPS: usize = 1_000;
/// Levels farther than this many widths from a window are left out of its sampling, which they
/// reach by smooth tails only.
const REACH: f64 = 6.0;

/// The groups of k-points of a table, the same for every use.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Groups {
    /// The group of each k-point.
    group: Vec<usize>,
    /// Number of groups; zero where the table names too few k-points.
    count: usize,
    /// Whether the points are those of a regular grid.
    regular: bool,
}

impl Groups {
    /// Deals `points` k-points into groups: one each, or nearly equal shares after a shuffle with a
    /// fixed seed. Fewer than four points make no groups. `regular` says that they are a regular grid.
    #[must_use]
    pub fn new(points: usize, regular: bool) -> Self {
        if points < 4 {
            return Self::default();
        }
        let count = GROUPS.min(points);
        let mut order: Vec<usize> = (0..points).collect();
        if count < points {
            order.shuffle(&mut ChaCha8Rng::seed_from_u64(0x6b_706f_696e_7473));
        }
        let mut group = vec![0; points];
        for (position, point) in order.into_iter().enumerate() {
            group[point] = position % count;
        }
        Self {
            group,
            count,
            regular,
        }
    }

    /// Whether the points are those of a regular grid.
    #[must_use]
    pub fn are_regular(&self) -> bool {
        self.regular
    }
}

/// Levels of one side with the k-points they belong to.
#[derive(Debug, Clone, Copy)]
pub struct Sampled<'a> {
    /// Energies.
    pub energies: &'a [f64],
    /// Weights of their k-points.
    pub weights: &'a [f64],
    /// Number of their k-points, from 0; may be empty where there are no groups.
    pub points: &'a [usize],
    /// The groups.
    pub groups: &'a Groups,
}

/// Deviations of the model by group of k-points: one row a channel, one column a group; no columns
/// where there are no groups.
#[derive(Debug, Clone, PartialEq)]
pub struct Deviations {
    /// Of the model.
    pub model: DMatrix<f64>,
    /// Derivatives with respect to shift, variance, gamma and step, in this order.
    pub derivatives: [DMatrix<f64>; 4],
}

impl Deviations {
    /// No deviations, of a model of so many channels.
    #[must_use]
    pub fn none(channels: usize) -> Self {
        let empty = DMatrix::zeros(channels, 0);
        Self {
            derivatives: [empty.clone(), empty.clone(), empty.clone(), empty.clone()],
            model: empty,
        }
    }

    /// The same deviations where only a share of their covariance is there.
    #[must_use]
    pub fn with_share(mut self, share: f64) -> Self {
        let scale = share.sqrt();
        self.model *= scale;
        for derivative in &mut self.derivatives {
            *derivative *= scale;
        }
        self
    }
}

impl Sampled<'_> {
    /// The deviations `d_k` of the broadened density plus `step` times its integral from the gap end,
    /// times `amplitude`, at ascending `channels`. Cost: four interpolations a level near the window
    /// and a channel.
    #[must_use]
    pub fn deviations(
        &self,
        channels: &[f64],
        side: Side,
        at: Density,
        amplitude: f64,
        step: f64,
    ) -> Deviations {
        let count = self.groups.count;
        let empty = DMatrix::zeros(channels.len(), count);
        let mut parts = [empty.clone(), empty.clone(), empty.clone(), empty];
        let weights = self.broaden(channels, at, &mut parts);
        let mut primary = DMatrix::zeros(channels.len(), count);
        for (index, part) in parts.iter_mut().enumerate() {
            for (group, mut column) in part.column_iter_mut().enumerate() {
                let integral = integral(column.as_slice(), channels, side);
                for (row, (value, sum)) in column.iter_mut().zip(integral).enumerate() {
                    *value += step * sum;
                    if index == 0 {
                        primary[(row, group)] = sum;
                    }
                }
            }
        }
        let [mut model, mut by_shift, mut by_variance, mut by_gamma] = parts;
        for part in [
            &mut model,
            &mut by_shift,
            &mut by_variance,
            &mut by_gamma,
            &mut primary,
        ] {
            centre(part, &weights);
            *part *= amplitude;
        }
        Deviations {
            model,
            derivatives: [by_shift, by_variance, by_gamma, primary],
        }
    }

    /// Adds up the profiles of each group with their derivatives; returns the groups' weights.
    fn broaden(&self, channels: &[f64], at: Density, parts: &mut [DMatrix<f64>; 4]) -> Vec<f64> {
        let mut weights = vec![0.0; self.groups.count];
        let (Some(first), Some(last)) = (channels.first(), channels.last()) else {
            return weights;
        };
        if self.groups.count == 0 {
            return weights;
        }
        let sigma = at.variance.sqrt();
        let reach = REACH * (sigma + at.gamma);
        let profile = Profile::new(sigma, at.gamma, last - first + reach);
        for (row, &level) in self.energies.iter().enumerate() {
            let group = self.groups.group[self.points[row]];
            let weight = self.weights[row];
            weights[group] += weight;
            let energy = level + at.shift;
            if energy < first - reach || energy > last + reach {
                continue;
            }
            for (channel, at_channel) in channels.iter().enumerate() {
                let [value, by_x, by_variance, by_gamma] = profile.at(at_channel - energy);
                parts[0][(channel, group)] += weight * value;
                parts[1][(channel, group)] -= weight * by_x;
                parts[2][(channel, group)] += weight * by_variance;
                parts[3][(channel, group)] += weight * by_gamma;
            }
        }
        weights
    }
}

/// The profile and its derivatives at even distances, read between by straight lines: an estimate of a
/// covariance needs no more than the part in ten thousand that this keeps.
struct Profile {
    per_step: f64,
    values: Vec<[f64; 4]>,
}

impl Profile {
    fn new(sigma: f64, gamma: f64, extent: f64) -> Self {
        let per_step = 40.0 / sigma;
        // A count of some thousand points.
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
        let points = (extent * per_step).ceil().clamp(1.0, 1e5) as u32 + 2;
        let values = (0..points)
            .map(|i| voigt_derivatives(f64::from(i) / per_step, sigma, gamma))
            .collect();
        Self { per_step, values }
    }

    fn at(&self, x: f64) -> [f64; 4] {
        let position = x.abs() * self.per_step;
        // Not negative; clamped to the table.
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
        let index = (position as usize).min(self.values.len() - 2);
        #[allow(clippy::cast_precision_loss)] // An index of the table.
        let fraction = (position - index as f64).min(1.0);
        let (left, right) = (&self.values[index], &self.values[index + 1]);
        let mut read = [0.0; 4];
        for (slot, (a, b)) in read.iter_mut().zip(left.iter().zip(right)) {
            *slot = a + fraction * (b - a);
        }
        read[1] *= x.signum();
        read
    }
}

/// The integral from the gap end, by trapezoids.
fn integral(values: &[f64], channels: &[f64], side: Side) -> Vec<f64> {
    let n = values.len();
    let mut sums = vec![0.0; n];
    for step in 1..n {
        let (before, here) = match side {
            Side::Valence => (n - step, n - step - 1),
            Side::Conduction => (step - 1, step),
        };
        let width = (channels[here] - channels[before]).abs();
        sums[here] = sums[before] + 0.5 * (values[here] + values[before]) * width;
    }
    sums
}

/// Takes from each group its share of the sum, and scales for the degree of freedom that costs.
fn centre(parts: &mut DMatrix<f64>, weights: &[f64]) {
    let total: f64 = weights.iter().sum();
    let sum = parts.column_sum();
    let count = f64::from(u32::try_from(weights.len()).unwrap_or(u32::MAX));
    let scale = (count / (count - 1.0)).sqrt();
    for (mut column, weight) in parts.column_iter_mut().zip(weights) {
        column.axpy(-weight / total, &sum, 1.0);
        column *= scale;
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::align::voigt;

    /// The sampling variance of a density at one energy, against the spread over many tables.
    #[test]
    fn deviations_give_the_spread_over_tables() {
        use rand::Rng;
        let mut rng = ChaCha8Rng::seed_from_u64(9);
        let at = Density {
            shift: 0.0,
            variance: 0.04,
            gamma: 0.02,
        };
        let channels = [-0.5, 0.0, 0.5];
        let groups = Groups::new(200, false);
        let points: Vec<usize> = (0..200).collect();
        let weights = vec![1.0; 200];
        let (mut sum, mut squares, mut claimed) = (0.0, 0.0, 0.0);
        let tables = 300u16;
        for _ in 0..tables {
            let energies: Vec<f64> = (0..200).map(|_| rng.random_range(-2.0..2.0)).collect();
            let sampled = Sampled {
                energies: &energies,
                weights: &weights,
                points: &points,
                groups: &groups,
            };
            let deviations = sampled.deviations(&channels, Side::Valence, at, 1.0, 0.1);
            claimed += deviations.model.row(1).norm_squared();
            let density: Vec<f64> = channels
                .iter()
                .map(|c| energies.iter().map(|e| voigt(c - e, 0.2, 0.02)).sum())
                .collect();
            let value = density[1] + 0.1 * 0.25 * (density[1] + density[2]);
            sum += value;
            squares += value * value;
        }
        let n = f64::from(tables);
        let spread = squares / n - (sum / n).powi(2);
        // The channels are few, so the trapezoid is coarse, but it is the same on both sides.
        assert!(
            (claimed / n / spread - 1.0).abs() < 0.25,
            "{} {spread}",
            claimed / n
        );
    }
}
