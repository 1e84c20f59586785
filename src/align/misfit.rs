//! How far a model is from data: Poisson likelihood for counts, least squares otherwise.
//!
//! For counts n and a model mu the deviance 2 (mu - n + n ln(n/mu)) is twice the log-likelihood ratio
//! against the saturated model (Cash, `ApJ` 228, 939 (1979)). Its signed root is a residual whose sum of
//! squares is the statistic itself, so a least-squares solver minimises the likelihood exactly.

use statrs::distribution::{ContinuousCDF, Normal};

use super::noise::Noise;

/// A model smaller than this, in counts, is taken as this: a logarithm needs it.
const LEAST_MODEL: f64 = 1e-9;

/// Data with their law of noise.
#[derive(Debug, Clone, Copy)]
pub struct Misfit<'a> {
    /// The measured values.
    pub values: &'a [f64],
    /// Their noise, of the same length where it has one.
    pub noise: &'a Noise,
}

impl Misfit<'_> {
    /// Residual of channel `index` against `model`, and its derivative with respect to the model.
    #[must_use]
    pub fn residual(&self, index: usize, model: f64) -> (f64, f64) {
        let value = self.values[index];
        match self.noise {
            Noise::Poisson => deviance_residual(value, model),
            Noise::Variance(variances) => {
                let sigma = variances[index].sqrt();
                ((model - value) / sigma, 1.0 / sigma)
            }
        }
    }

    /// Variance that the law of noise gives channel `index` where the model is right.
    #[must_use]
    pub fn variance(&self, index: usize, model: f64) -> f64 {
        match self.noise {
            Noise::Poisson => model.max(LEAST_MODEL),
            Noise::Variance(variances) => variances[index],
        }
    }

    /// Sum of squared residuals: the deviance for counts, chi-square otherwise.
    #[must_use]
    pub fn deviance(&self, model: &[f64]) -> f64 {
        let residuals = model.iter().enumerate();
        residuals
            .map(|(index, &mu)| self.residual(index, mu).0.powi(2))
            .sum()
    }

    /// Measured minus model over the standard uncertainty (Pearson residuals).
    #[must_use]
    pub fn standardised(&self, model: &[f64]) -> Vec<f64> {
        let channels = model.iter().enumerate();
        channels
            .map(|(index, &mu)| (self.values[index] - mu) / self.variance(index, mu).sqrt())
            .collect()
    }
}

/// Signed root of the deviance of `count` from `model`, positive where the model is too high, and its
/// derivative with respect to the model. Smooth through `count == model`.
///
/// ```
/// let (residual, slope) = bandrule::align::deviance_residual(100.0, 100.0);
/// assert!(residual.abs() < 1e-12 && (slope - 0.1).abs() < 1e-12);
/// ```
#[must_use]
pub fn deviance_residual(count: f64, model: f64) -> (f64, f64) {
    let mu = model.max(LEAST_MODEL);
    let excess = count / mu - 1.0;
    if excess.abs() < 1e-3 {
        // 2 ((1 + d) ln(1 + d) - d) = d^2 (1 - d/3 + d^2/6 - d^3/10 + ...)
        let root = (1.0 - excess / 3.0 + excess * excess / 6.0 - excess.powi(3) / 10.0).sqrt();
        return (-excess * mu.sqrt() * root, 1.0 / (mu.sqrt() * root));
    }
    let log_term = if count > 0.0 {
        count * (count / mu).ln()
    } else {
        0.0
    };
    let residual = -excess.signum() * (2.0 * (mu - count + log_term)).max(0.0).sqrt();
    (residual, -excess / residual)
}

/// Probability of as few or fewer runs of one sign among `residuals` where signs are independent
/// (Wald and Wolfowitz, Ann. Math. Stat. 11, 147 (1940); normal approximation).
#[must_use]
pub fn runs_probability(residuals: &[f64]) -> f64 {
    let signs: Vec<bool> = residuals.iter().map(|&r| r >= 0.0).collect();
    let n = count(signs.len());
    let up = count(signs.iter().filter(|&&sign| sign).count());
    let down = n - up;
    if up < 5.0 || down < 5.0 {
        return 1.0;
    }
    let runs = 1.0 + count(signs.windows(2).filter(|pair| pair[0] != pair[1]).count());
    let mean = 1.0 + 2.0 * up * down / n;
    let variance = (mean - 1.0) * (mean - 2.0) / (n - 1.0);
    Normal::standard().cdf((runs + 0.5 - mean) / variance.sqrt())
}

// Numbers of channels are far below 2^52.
#[allow(clippy::cast_precision_loss)]
fn count(n: usize) -> f64 {
    n as f64
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slope_is_the_derivative_everywhere() {
        for count in [0.0f64, 0.5, 3.0, 100.0, 1e5] {
            for ratio in [0.1, 0.9, 0.9989, 0.9995, 1.0001, 1.0011, 1.5, 20.0] {
                let mu = (count * ratio).max(0.3);
                let h = 1e-6 * mu;
                let up = deviance_residual(count, mu + h).0;
                let down = deviance_residual(count, mu - h).0;
                let slope = deviance_residual(count, mu).1;
                let want = (up - down) / (2.0 * h);
                assert!(
                    (slope - want).abs() < 1e-5 * want,
                    "{count} {mu}: {slope} {want}"
                );
            }
        }
    }

    #[test]
    fn few_runs_are_improbable() {
        let long: Vec<f64> = (0..60).map(|i| if i < 30 { 1.0 } else { -1.0 }).collect();
        assert!(runs_probability(&long) < 1e-6);
        let alternating: Vec<f64> = (0..60)
            .map(|i| if i % 2 == 0 { 1.0 } else { -1.0 })
            .collect();
        assert!(runs_probability(&alternating) > 0.999);
    }
}
