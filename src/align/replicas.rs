//! What a protocol reads off a curve, against the edge that is in it, measured on noisy replicas of
//! the fitted model.
//!
//! Each replica draws the six parameters of the fit from their covariance, makes the model's curve in
//! the same window, adds the noise that the data have, and lets the protocol read the onset. The mean
//! of onset minus edge is the bias; the spread of the same difference is the uncertainty of a
//! corrected edge: it holds the noise of the reading and that of the fitted model together.

use nalgebra::SymmetricEigen;
use rand::SeedableRng;
use rand_chacha::ChaCha8Rng;
use rand_distr::{Distribution, Normal, Poisson, StandardNormal};

use super::edge_fit::{EdgeFit, EdgeProblem};
use super::noise::Noise;
use super::tangent::{TangentOptions, tangent};

/// Bias of a protocol.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ReplicaBias {
    /// Mean of onset minus edge, eV.
    pub bias: f64,
    /// Its standard uncertainty, eV.
    pub bias_uncertainty: f64,
    /// Standard deviation of onset minus edge, eV.
    pub spread: f64,
    /// Replicas on which the protocol found an onset.
    pub replicas: usize,
}

/// Bias of the tangent protocol with `options` on the curve of a fit, whose edge is
/// `computed_edge` plus the shift. `None` where fewer than three quarters of the replicas give an
/// onset. The same seed gives the same answer.
#[must_use]
pub fn tangent_bias(
    problem: &EdgeProblem,
    fit: &EdgeFit,
    computed_edge: f64,
    options: TangentOptions,
    replicas: usize,
    seed: u64,
) -> Option<ReplicaBias> {
    let mut rng = ChaCha8Rng::seed_from_u64(seed);
    let root = root_of_covariance(fit);
    let mut errors = Vec::with_capacity(replicas);
    for _ in 0..replicas {
        let parameters = draw(fit, &root, &mut rng);
        let model = problem.model(&parameters);
        let values = noisy(&model, problem.noise(), &mut rng);
        let variances: Vec<f64> = match problem.noise() {
            Noise::Poisson => values.iter().map(|n| n.max(1.0)).collect(),
            Noise::Variance(variances) => variances.clone(),
        };
        if let Some(found) = tangent(problem.energies(), &values, &variances, options) {
            errors.push(found.onset - computed_edge - parameters[0]);
        }
    }
    (4 * errors.len() >= 3 * replicas && errors.len() > 2).then(|| summarise(&errors))
}

fn summarise(errors: &[f64]) -> ReplicaBias {
    let n = f64::from(u32::try_from(errors.len()).unwrap_or(u32::MAX));
    let bias = errors.iter().sum::<f64>() / n;
    let spread = (errors.iter().map(|e| (e - bias).powi(2)).sum::<f64>() / (n - 1.0)).sqrt();
    ReplicaBias {
        bias,
        bias_uncertainty: spread / n.sqrt(),
        spread,
        replicas: errors.len(),
    }
}

/// A matrix R with R R' the covariance, negative eigenvalues of rounding cut.
fn root_of_covariance(fit: &EdgeFit) -> nalgebra::DMatrix<f64> {
    let eigen = SymmetricEigen::new(fit.covariance.clone());
    let mut root = eigen.eigenvectors;
    for (column, value) in eigen.eigenvalues.iter().enumerate() {
        root.column_mut(column).scale_mut(value.max(0.0).sqrt());
    }
    root
}

/// Parameters drawn about those of the fit; what is bounded stays in its bounds.
fn draw(fit: &EdgeFit, root: &nalgebra::DMatrix<f64>, rng: &mut ChaCha8Rng) -> [f64; 6] {
    let normal = nalgebra::DVector::from_fn(6, |_, _| StandardNormal.sample(rng));
    let moved = root * normal;
    let mut parameters = fit.parameters();
    for (parameter, step) in parameters.iter_mut().zip(moved.iter()) {
        *parameter += step;
    }
    for bounded in &mut parameters[1..] {
        *bounded = bounded.max(0.0);
    }
    parameters
}

fn noisy(model: &[f64], noise: &Noise, rng: &mut ChaCha8Rng) -> Vec<f64> {
    let channels = model.iter().enumerate();
    channels
        .map(|(i, &mu)| match noise {
            Noise::Poisson => Poisson::new(mu.max(1e-12)).map_or(0.0, |law| law.sample(rng)),
            Noise::Variance(variances) => {
                Normal::new(mu, variances[i].sqrt()).map_or(mu, |law| law.sample(rng))
            }
        })
        .collect()
}
