//! Sampling of the Brillouin zone, by the delete-a-group jackknife over k-points.
//!
//! cov(a, b) = (G - 1)/G sum_g (a_g - mean a)(b_g - mean b), where g runs over G groups of k-points
//! and `a_g` is the estimate without group g (Efron and Tibshirani, An Introduction to the Bootstrap
//! (1993), chapter 11). It takes k-points as drawn at random; for a regular grid it errs on the large
//! side.

use rand::SeedableRng;
use rand::seq::SliceRandom;
use rand_chacha::ChaCha8Rng;

/// Number of groups where there are enough k-points.
pub const GROUPS: usize = 20;

/// Deals `points` k-points into at most [`GROUPS`] groups of nearly equal size, shuffled with a fixed
/// seed. Returns the group of each point and the number of groups.
#[must_use]
pub fn random_groups(points: usize) -> (Vec<usize>, usize) {
    let groups = GROUPS.min(points);
    let mut order: Vec<usize> = (0..points).collect();
    order.shuffle(&mut ChaCha8Rng::seed_from_u64(0x6b_706f_696e_7473));
    let mut group = vec![0; points];
    for (position, point) in order.into_iter().enumerate() {
        group[point] = position % groups.max(1);
    }
    (group, groups)
}

/// Jackknife covariance of two estimates from their values without each group.
#[must_use]
pub fn jackknife_covariance(first: &[f64], second: &[f64]) -> f64 {
    let groups = f64::from(u32::try_from(first.len()).unwrap_or(1));
    let mean = |list: &[f64]| list.iter().sum::<f64>() / groups;
    let (a, b) = (mean(first), mean(second));
    let sum: f64 = first
        .iter()
        .zip(second)
        .map(|(x, y)| (x - a) * (y - b))
        .sum();
    sum * (groups - 1.0) / groups
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn jackknife_of_a_mean_is_its_standard_error() {
        let data = [3.0, 1.0, 4.0, 1.0, 5.0, 9.0, 2.0, 6.0];
        let without: Vec<f64> = data.iter().map(|x| (31.0 - x) / 7.0).collect();
        let mean = 31.0 / 8.0;
        let variance = data.iter().map(|x| (x - mean) * (x - mean)).sum::<f64>() / 7.0 / 8.0;
        assert!((jackknife_covariance(&without, &without) - variance).abs() < 1e-12);
    }

    #[test]
    fn groups_differ_by_at_most_one_point() {
        let (group, groups) = random_groups(47);
        let sizes: Vec<usize> = (0..groups)
            .map(|g| group.iter().filter(|&&x| x == g).count())
            .collect();
        assert!(sizes.iter().all(|&s| s == 2 || s == 3));
    }
}
