//! The law of a curve's noise.

use rand_distr::num_traits::ToPrimitive;

/// The law of the noise of a curve.
#[derive(Debug, Clone, PartialEq)]
pub enum Noise {
    /// Counts: the variance is the expectation.
    Poisson,
    /// A variance for each channel.
    Variance(Vec<f64>),
}

/// Counts behind rates: `rate` times the time spent on a channel, where that gives whole numbers to
/// one part in 10^4 of a count plus rounding of the rate; `None` otherwise.
#[must_use]
pub fn recovered_counts(rate: &[f64], seconds: f64) -> Option<Vec<f64>> {
    let counts: Vec<f64> = rate.iter().map(|r| (r * seconds).round()).collect();
    let whole = rate
        .iter()
        .zip(&counts)
        .all(|(r, n)| *n >= 0.0 && (r * seconds - n).abs() <= 1e-4 + 1e-5 * n.abs());
    (whole && seconds > 0.0 && counts.iter().any(|&n| n > 0.0)).then_some(counts)
}

/// Variances a + b I of a curve with no known statistics. The second difference of three channels
/// has six times the variance of one where the signal is locally straight; a, b >= 0 are fitted to
/// these by weighted least squares, the weights from the last pass. `values` in order of energy, at
/// least five; the result has the same length and is positive.
#[must_use]
pub fn estimate_noise(values: &[f64]) -> Vec<f64> {
    let smooth = moving_average(values, 3);
    let scatter: Vec<(f64, f64)> = values
        .windows(3)
        .enumerate()
        .map(|(i, w)| {
            let second = w[0] - 2.0 * w[1] + w[2];
            (smooth[i + 1].max(0.0), second * second / 6.0)
        })
        .collect();
    let mean = scatter.iter().map(|s| s.1).sum::<f64>() / scatter.len().to_f64().unwrap_or(1.0);
    let mut line = (mean, 0.0);
    for _ in 0..20 {
        line = weighted_line(&scatter, line, 1e-6 * mean);
    }
    let floor = (1e-6 * mean).max(f64::MIN_POSITIVE);
    let variance = |level: &f64| (line.0 + line.1 * level.max(0.0)).max(floor);
    smooth.iter().map(variance).collect()
}

/// One pass of the fit of variance against level with both coefficients non-negative.
fn weighted_line(scatter: &[(f64, f64)], last: (f64, f64), floor: f64) -> (f64, f64) {
    let [mut w, mut wx, mut wxx, mut wy, mut wxy] = [0.0; 5];
    for &(x, y) in scatter {
        let weight = (last.0 + last.1 * x).max(floor).powi(-2);
        w += weight;
        wx += weight * x;
        wxx += weight * x * x;
        wy += weight * y;
        wxy += weight * x * y;
    }
    let determinant = w * wxx - wx * wx;
    if determinant > 1e-12 * w * wxx {
        let a = (wxx * wy - wx * wxy) / determinant;
        let b = (w * wxy - wx * wy) / determinant;
        if a >= 0.0 && b >= 0.0 {
            return (a, b);
        }
        if a < 0.0 && wxx > 0.0 {
            return (0.0, wxy / wxx);
        }
    }
    (wy / w, 0.0)
}

/// Mean over `half` channels on either side, fewer at the ends.
pub(super) fn moving_average(values: &[f64], half: usize) -> Vec<f64> {
    (0..values.len())
        .map(|i| {
            let part = &values[i.saturating_sub(half)..(i + half + 1).min(values.len())];
            part.iter().sum::<f64>() / part.len().to_f64().unwrap_or(1.0)
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand::SeedableRng;
    use rand_distr::{Distribution, Normal};

    #[test]
    fn counts_come_back_from_rates() {
        let counts = [0.0, 3.0, 17.0, 12_345.0];
        let rates: Vec<f64> = counts.iter().map(|n| n / 2.5).collect();
        assert_eq!(recovered_counts(&rates, 2.5).unwrap(), counts);
        assert_eq!(recovered_counts(&[0.13, 0.4], 1.0), None);
    }

    #[test]
    fn variance_of_a_line_with_scatter_is_found() {
        let mut rng = rand_chacha::ChaCha8Rng::seed_from_u64(5);
        let level = |i: u16| 10.0 + f64::from(i) * 0.5;
        let values: Vec<f64> = (0..2000u16)
            .map(|i| {
                let sigma = (4.0 + 0.3 * level(i)).sqrt();
                level(i) + Normal::new(0.0, sigma).unwrap().sample(&mut rng)
            })
            .collect();
        let found = estimate_noise(&values);
        for i in [100u16, 1000, 1900] {
            let want = 4.0 + 0.3 * level(i);
            let got = found[usize::from(i)];
            assert!((got / want - 1.0).abs() < 0.15, "{i}: {got} {want}");
        }
    }
}
