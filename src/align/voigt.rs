//! The Voigt profile, exactly.
//!
//! V(x; sigma, gamma) = Re w(z) / (sigma sqrt(2 pi)),  z = (x + i gamma) / (sigma sqrt 2)
//!
//! with w the Faddeeva function (DLMF 7.19), sigma the standard deviation of the Gaussian and gamma
//! the half width at half maximum of the Lorentzian; the area is one. The limits sigma = 0 and
//! gamma = 0 are the pure profiles. Relative accuracy is that of w, about 1e-13.

use std::f64::consts::{PI, SQRT_2};

use errorfunctions::ComplexErrorFunctions;
use nalgebra::Complex;

/// The Voigt profile at distance `x` from its centre, in the reciprocal of the unit of `x`.
/// Both widths zero is a profile that no number describes: the result is then not finite or zero.
///
/// ```
/// // Value by 50-digit arithmetic.
/// let peak = bandrule::align::voigt(0.0, 1.0, 1.0);
/// assert!((peak - 0.208_709_280_520_367_7).abs() < 1e-14);
/// ```
#[must_use]
pub fn voigt(x: f64, sigma: f64, gamma: f64) -> f64 {
    if sigma == 0.0 {
        return gamma / (PI * (x * x + gamma * gamma));
    }
    let scale = 1.0 / (sigma * SQRT_2);
    if gamma == 0.0 {
        return (-(x * scale).powi(2)).exp() * scale / PI.sqrt();
    }
    Complex::new(x * scale, gamma * scale).w().re * scale / PI.sqrt()
}

/// The profile with its derivatives with respect to the distance (first and half of the second, which
/// is that with respect to the Gaussian's variance) and to gamma, for sigma > 0.
///
/// w'(z) = -2 z w(z) + 2i/sqrt(pi), w'' = -2 w - 2 z w'.
#[must_use]
pub fn voigt_derivatives(x: f64, sigma: f64, gamma: f64) -> [f64; 4] {
    let scale = 1.0 / (sigma * SQRT_2);
    let norm = scale / PI.sqrt();
    let z = Complex::new(x * scale, gamma * scale);
    let w = z.w();
    let first = -2.0 * z * w + Complex::new(0.0, 2.0 / PI.sqrt());
    let second = -2.0 * w - 2.0 * z * first;
    [
        w.re * norm,
        first.re * scale * norm,
        0.5 * second.re * scale * scale * norm,
        -first.im * scale * norm,
    ]
}

/// The density of states `energies` (each with its weight) broadened by one Voigt profile, at each
/// point of `grid`, by adding up every profile at every point.
///
/// Shapes: `energies` and `weights` alike; `grid` any. Cost: one Faddeeva function (about 35 ns) for
/// each pair of a state and a grid point. This is the reference that faster ways are held to.
#[must_use]
pub fn direct_sum(
    energies: &[f64],
    weights: &[f64],
    grid: &[f64],
    sigma: f64,
    gamma: f64,
) -> Vec<f64> {
    let at = |point: f64| {
        let terms = energies.iter().zip(weights);
        terms
            .map(|(energy, weight)| weight * voigt(point - energy, sigma, gamma))
            .sum()
    };
    grid.iter().map(|&point| at(point)).collect()
}

/// Full width at half maximum of a Voigt profile from those of its parts, by
/// 0.5346 `f_L` + sqrt(0.2166 `f_L`^2 + `f_G`^2) (Olivero and Longbothum, JQSRT 17, 233 (1977)); the
/// largest error of this form is 0.024 %. For choosing windows, not for results.
#[must_use]
pub fn voigt_fwhm(gaussian: f64, lorentzian: f64) -> f64 {
    0.5346 * lorentzian + (0.2166 * lorentzian * lorentzian + gaussian * gaussian).sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn derivatives_equal_differences() {
        for (x, sigma, gamma) in [(0.1, 0.2, 0.05), (-0.7, 0.1, 0.3), (1.5, 0.3, 1e-4)] {
            let [value, by_x, by_variance, by_gamma] = voigt_derivatives(x, sigma, gamma);
            let h = 1e-6;
            let of_variance = |v: f64| voigt(x, v.sqrt(), gamma);
            let v = sigma * sigma;
            let wanted = [
                (voigt(x + h, sigma, gamma) - voigt(x - h, sigma, gamma)) / (2.0 * h),
                (of_variance(v + h) - of_variance(v - h)) / (2.0 * h),
                (voigt(x, sigma, gamma + h) - voigt(x, sigma, gamma - h)) / (2.0 * h),
            ];
            assert!((value - voigt(x, sigma, gamma)).abs() < 1e-13);
            for (got, want) in [by_x, by_variance, by_gamma].iter().zip(wanted) {
                assert!(
                    (got - want).abs() < 1e-6 * (1.0 + want.abs()),
                    "{got} {want}"
                );
            }
        }
    }
}
