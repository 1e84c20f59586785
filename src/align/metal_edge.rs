//! Fermi edge of a metal: where it stands on the measured axis, and how broad the instrument makes it.
//!
//! mu(E) = b + a (1 + c (E - E0)) F(+-(E - E0); kT, sigma)
//!
//! F is the Fermi function convolved with the instrument's Gaussian; occupied states (photoemission)
//! show f, empty ones (inverse photoemission) 1 - f. The band may slope. The slope stands outside the
//! convolution: over a few kT and sigma the difference is of second order in c sigma.

use nalgebra::DMatrix;

use super::FWHM_PER_SIGMA;
use super::fermi::fermi_gauss;
use super::least_squares::{Model, Weighing, covariance, minimise};
use super::misfit::Misfit;
use super::noise::{Noise, moving_average};
use crate::schema::Side;

/// A fitted Fermi edge.
#[derive(Debug, Clone, PartialEq)]
pub struct MetalEdge {
    /// Position on the axis that was fitted.
    pub position: f64,
    /// Its standard uncertainty.
    pub position_uncertainty: f64,
    /// Full width at half maximum of the Gaussian, without thermal broadening.
    pub gaussian_fwhm: f64,
    /// Its standard uncertainty.
    pub gaussian_fwhm_uncertainty: f64,
    /// Pearson's chi-square over the degrees of freedom.
    pub reduced_chi_square: f64,
    /// Channels minus parameters.
    pub degrees_of_freedom: usize,
    /// Whether the solver converged.
    pub converged: bool,
}

struct EdgeModel<'a> {
    energies: &'a [f64],
    thermal: f64,
    /// +1 where occupied states are seen, -1 where empty ones are.
    sign: f64,
}

/// Parameters: E0, ln sigma, ln a, c, sqrt b.
impl EdgeModel<'_> {
    fn value(&self, energy: f64, p: &[f64]) -> f64 {
        let x = energy - p[0];
        let band = p[2].exp() * (1.0 + p[3] * x);
        band * fermi_gauss(self.sign * x, self.thermal, p[1].exp()) + p[4] * p[4]
    }
}

impl Model for EdgeModel<'_> {
    fn values(&self, parameters: &[f64]) -> Vec<f64> {
        let energies = self.energies.iter();
        energies.map(|&e| self.value(e, parameters)).collect()
    }

    fn jacobian(&self, parameters: &[f64]) -> (Vec<f64>, DMatrix<f64>) {
        let values = self.values(parameters);
        let columns: Vec<Vec<f64>> = (0..parameters.len())
            .map(|index| {
                // Central differences: the model is analytic and costs little.
                let h = 1e-5;
                let moved = |step: f64| {
                    let mut p = parameters.to_vec();
                    p[index] += step;
                    self.values(&p)
                };
                let (up, down) = (moved(h), moved(-h));
                up.iter()
                    .zip(&down)
                    .map(|(u, d)| (u - d) / (2.0 * h))
                    .collect()
            })
            .collect();
        let matrix = DMatrix::from_fn(values.len(), columns.len(), |i, j| columns[j][i]);
        (values, matrix)
    }
}

/// Fits the Fermi edge of a metal.
///
/// `energies` ascending on the electron scale (kinetic or final-state energy, or minus binding
/// energy) and `values` of the same length, at least twelve; `thermal` is kT. Returns `None` where
/// there is no edge to fit: too few channels, or a curve that does not step.
#[must_use]
pub fn fit_metal_edge(
    energies: &[f64],
    values: &[f64],
    noise: &Noise,
    thermal: f64,
    side: Side,
) -> Option<MetalEdge> {
    if energies.len() < 12 {
        return None;
    }
    let model = EdgeModel {
        energies,
        thermal,
        sign: if side == Side::Valence { 1.0 } else { -1.0 },
    };
    let misfit = Misfit { values, noise };
    let start = start(energies, values, side)?;
    let solution = [0.02f64, 0.1, 0.3]
        .into_iter()
        .map(|sigma| {
            let mut p = start;
            p[1] = sigma.ln();
            minimise(&model, Weighing::Channels(misfit), p.to_vec())
        })
        .min_by(|a, b| a.deviance.total_cmp(&b.deviance))?;
    let p = &solution.parameters;
    let (mu, mut jacobian) = model.jacobian(p);
    for (index, &value) in mu.iter().enumerate() {
        let weight = misfit.variance(index, value).sqrt().recip();
        jacobian.row_mut(index).scale_mut(weight);
    }
    let cov = covariance(&jacobian);
    let residuals = misfit.standardised(&mu);
    let dof = energies.len() - p.len();
    let chi_square: f64 = residuals.iter().map(|r| r * r).sum();
    #[allow(clippy::cast_precision_loss)] // A number of channels.
    let reduced = chi_square / dof as f64;
    let inflation = reduced.max(1.0).sqrt();
    let fwhm = FWHM_PER_SIGMA * p[1].exp();
    Some(MetalEdge {
        position: p[0],
        position_uncertainty: cov[(0, 0)].sqrt() * inflation,
        gaussian_fwhm: fwhm,
        gaussian_fwhm_uncertainty: fwhm * cov[(1, 1)].sqrt() * inflation,
        reduced_chi_square: reduced,
        degrees_of_freedom: dof,
        converged: solution.converged,
    })
}

/// Start values: plateaus from the two ends, position where the smoothed curve crosses their middle.
fn start(energies: &[f64], values: &[f64], side: Side) -> Option<[f64; 5]> {
    let n = values.len();
    let mean =
        |part: &[f64]| part.iter().sum::<f64>() / f64::from(u32::try_from(part.len()).unwrap_or(1));
    let fifth = (n / 5).max(2);
    let (left, right) = (mean(&values[..fifth]), mean(&values[n - fifth..]));
    let (high, low) = match side {
        Side::Valence => (left, right),
        Side::Conduction => (right, left),
    };
    if high <= low {
        return None;
    }
    let half = 0.5 * (high + low);
    let smooth = moving_average(values, 2);
    let crossing = (1..n).find(|&i| (smooth[i - 1] - half) * (smooth[i] - half) <= 0.0)?;
    Some([
        energies[crossing],
        0.1f64.ln(),
        (high - low).ln(),
        0.0,
        low.max(0.01).sqrt(),
    ])
}
