//! The broadened density of states and its running integral, with derivatives, exactly and fast.
//!
//! B(x) = `sum_i` `w_i` V(x - `E_i`; sigma, gamma). On a circle of circumference L the sum is a Fourier
//! series, (1/L) `sum_m` `F_m` exp(i `t_m` x - sigma^2 `t_m^2` / 2 - gamma |`t_m`|), `t_m` = 2 pi m / L,
//! `F_m` = `sum_i` `w_i` exp(-i `t_m` `E_i`), which converges like a Gaussian. What the circle adds, the
//! periodic images at distances n L, is removed in closed form. Far from its centre a Voigt profile
//! is -(1/pi) Im of exp((sigma^2/2) d^2/dz^2) (1/z), z = x + i gamma, and
//!
//!   sum_{n != 0} 1/(z - n L) = -2 sum_{k >= 1} zeta(2k) z^(2k-1) / L^(2k)   (|z| < L)
//!
//! so all images together are the imaginary part of one polynomial with real coefficients; levels
//! too far for the series enter the same polynomial through 1/(z - E) = -(1/E) `sum_j` (z/E)^j. The
//! heat operator acts on its coefficients, and shift, widths and integral act on it as derivatives
//! and antiderivative. Gaussian tails of what is far away, below exp(-40), are left out.
//!
//! Cost: levels times modes once for a plan; then grid points times modes for an evaluation, whatever
//! the number of levels.

use std::f64::consts::PI;

use nalgebra::{Complex, DMatrix};

/// Degree of the polynomial: with arguments within half the radius of convergence, 2^-56.
const DEGREE: usize = 56;
/// Gaussian standard deviations beyond which a tail is left out.
const FAR: f64 = 9.0;
/// A mode is kept until its damping falls below exp of minus this.
const DAMPING: f64 = 36.0;

/// Where a plan is to be evaluated and with which widths.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Domain {
    /// Middle of the points, minus shift, at which the density is wanted.
    pub centre: f64,
    /// Half of their extent.
    pub half_width: f64,
    /// The least standard deviation of the Gaussian; must be positive.
    pub sigma_min: f64,
    /// The largest.
    pub sigma_max: f64,
}

/// The levels of one side, ready to be broadened.
#[derive(Debug, Clone)]
pub struct Plan {
    domain: Domain,
    reach: f64,
    period: f64,
    fourier: Vec<Complex<f64>>,
    polynomial: Vec<f64>,
}

/// Shift and widths of an evaluation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Density {
    /// The levels move up by this much.
    pub shift: f64,
    /// Variance of the Gaussian, sigma squared.
    pub variance: f64,
    /// Half width at half maximum of the Lorentzian.
    pub gamma: f64,
}

/// Density and antiderivative at the points of a sampler.
#[derive(Debug, Clone, PartialEq)]
pub struct Values {
    /// States per eV.
    pub density: Vec<f64>,
    /// An antiderivative of the density; its constant is arbitrary but smooth in the parameters only
    /// as a difference of two points.
    pub integral: Vec<f64>,
}

/// Derivatives of [`Values`] with respect to the fields of [`Density`]. Those of the integral with
/// respect to shift and variance are minus the density and minus half of `density_shift`.
#[derive(Debug, Clone, PartialEq)]
pub struct Derivatives {
    /// Of the density, with respect to the shift.
    pub density_shift: Vec<f64>,
    /// Of the density, with respect to the variance.
    pub density_variance: Vec<f64>,
    /// Of the density, with respect to gamma.
    pub density_gamma: Vec<f64>,
    /// Of the integral, with respect to gamma.
    pub integral_gamma: Vec<f64>,
}

impl Plan {
    /// Prepares levels for a domain. `energies` and `weights` have the same length.
    #[must_use]
    pub fn new(energies: &[f64], weights: &[f64], domain: Domain) -> Self {
        let a = domain.half_width;
        let reach = (2.0 * a).max(a + FAR * domain.sigma_max);
        let period = 2.0 * (a + reach);
        let t_max = (2.0 * DAMPING).sqrt() / domain.sigma_min;
        let modes = modes_below(t_max, period);
        let mut plan = Self {
            domain,
            reach,
            period,
            fourier: vec![Complex::new(0.0, 0.0); modes + 1],
            polynomial: vec![0.0; DEGREE + 1],
        };
        plan.add(energies, weights);
        plan
    }

    fn add(&mut self, energies: &[f64], weights: &[f64]) {
        let mut moments = vec![0.0; DEGREE + 1];
        for (energy, weight) in energies.iter().zip(weights) {
            let x = energy - self.domain.centre;
            if x.abs() <= self.reach {
                self.add_modes(x, *weight);
                add_powers(&mut moments, x / self.period, *weight);
            } else {
                self.add_far(x, *weight);
            }
        }
        self.remove_images(&moments);
    }

    fn add_modes(&mut self, x: f64, weight: f64) {
        let step = Complex::from_polar(1.0, -2.0 * PI * x / self.period);
        let mut phase = Complex::new(weight, 0.0);
        for mode in &mut self.fourier {
            *mode += phase;
            phase *= step;
        }
    }

    fn add_far(&mut self, x: f64, weight: f64) {
        let ratio = self.period / x;
        let mut term = -weight / x;
        for coefficient in &mut self.polynomial {
            *coefficient += term;
            term *= ratio;
        }
    }

    /// Minus all images: + 2 `sum_k` zeta(2k) (u - e)^(2k-1) / L with u = z/L, e = E/L, expanded in u.
    fn remove_images(&mut self, moments: &[f64]) {
        for power in (1..=DEGREE).step_by(2) {
            let scale = 2.0 * zeta_even(power + 1) / self.period;
            let mut binomial = 1.0;
            for j in 0..=power {
                let rest = power - j;
                let sign = if rest % 2 == 0 { 1.0 } else { -1.0 };
                self.polynomial[j] += scale * sign * binomial * moments[rest];
                binomial *= as_f64(rest) / as_f64(j + 1);
            }
        }
    }

    /// Coefficients after the Gaussian: exp((variance/2) d^2/dz^2).
    fn heated(&self, variance: f64) -> Vec<f64> {
        let rate = variance / (2.0 * self.period * self.period);
        let mut total = self.polynomial.clone();
        let mut term = self.polynomial.clone();
        for m in 1..=DEGREE / 2 {
            for j in 0..=DEGREE {
                let above = term.get(j + 2).copied().unwrap_or(0.0);
                term[j] = above * as_f64((j + 1) * (j + 2)) * rate / as_f64(m);
            }
            for (sum, part) in total.iter_mut().zip(&term) {
                *sum += part;
            }
        }
        total
    }
}

/// Number of modes with t <= `t_max` on a circle.
fn modes_below(t_max: f64, period: f64) -> usize {
    // A count of modes is small and positive.
    #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)]
    let modes = (t_max * period / (2.0 * PI)).ceil().min(1e6) as usize;
    modes
}

fn add_powers(moments: &mut [f64], e: f64, weight: f64) {
    let mut power = weight;
    for moment in moments {
        *moment += power;
        power *= e;
    }
}

/// The Riemann zeta function at an even integer from 2 on, by its sum with the tail of Euler and
/// Maclaurin.
fn zeta_even(s: usize) -> f64 {
    let exponent = -as_f64(s);
    let n = 20.0f64;
    let head: f64 = (1..20u8).map(|k| f64::from(k).powf(exponent)).sum();
    head + n.powf(exponent + 1.0) / (as_f64(s) - 1.0)
        + 0.5 * n.powf(exponent)
        + as_f64(s) / 12.0 * n.powf(exponent - 1.0)
        - as_f64(s * (s + 1) * (s + 2)) / 720.0 * n.powf(exponent - 3.0)
        + as_f64(s * (s + 1) * (s + 2) * (s + 3) * (s + 4)) / 30_240.0 * n.powf(exponent - 5.0)
}

// Counts here are far below 2^52.
#[allow(clippy::cast_precision_loss)]
fn as_f64(count: usize) -> f64 {
    count as f64
}

/// A grid of points with the trigonometric functions that every evaluation on it shares.
#[derive(Debug, Clone)]
pub struct Sampler {
    points: Vec<f64>,
    cosines: DMatrix<f64>,
    sines: DMatrix<f64>,
}

impl Sampler {
    /// Prepares `points` (any order, any spacing) for plans of the same domain and widths as `plan`.
    /// Points minus shift must stay in the domain of the plan.
    #[must_use]
    pub fn new(points: &[f64], plan: &Plan) -> Self {
        let unit = 2.0 * PI / plan.period;
        let rows = points.len();
        let modes = plan.fourier.len();
        let mut cosines = DMatrix::zeros(rows, modes);
        let mut sines = DMatrix::zeros(rows, modes);
        for (row, point) in points.iter().enumerate() {
            let step = Complex::from_polar(1.0, unit * (point - plan.domain.centre));
            let mut phase = Complex::new(1.0, 0.0);
            for mode in 0..modes {
                cosines[(row, mode)] = phase.re;
                sines[(row, mode)] = phase.im;
                phase *= step;
            }
        }
        Self {
            points: points.to_vec(),
            cosines,
            sines,
        }
    }

    /// Density and integral.
    #[must_use]
    pub fn values(&self, plan: &Plan, at: Density) -> Values {
        let sums = self.series(
            plan,
            at,
            [Operator::Identity, Operator::Integral].as_slice(),
        );
        let polynomials = Polynomials::new(plan, at);
        let unit = 1.0 / plan.period;
        let mut values = Values {
            density: sums.column(0).iter().copied().collect(),
            integral: sums.column(1).iter().copied().collect(),
        };
        for (row, point) in self.points.iter().enumerate() {
            let x = point - at.shift - plan.domain.centre;
            let u = Complex::new(x * unit, at.gamma * unit);
            values.density[row] -= horner(&polynomials.value, u).im / PI;
            values.integral[row] +=
                plan.fourier[0].re * x * unit - horner(&polynomials.integral, u).im / PI;
        }
        values
    }

    /// Density and integral with their derivatives.
    #[must_use]
    pub fn derivatives(&self, plan: &Plan, at: Density) -> (Values, Derivatives) {
        let values = self.values(plan, at);
        let sums = self.series(
            plan,
            at,
            [
                Operator::Shift,
                Operator::Variance,
                Operator::Gamma,
                Operator::IntegralGamma,
            ]
            .as_slice(),
        );
        let column = |index: usize| sums.column(index).iter().copied().collect::<Vec<f64>>();
        let mut out = Derivatives {
            density_shift: column(0),
            density_variance: column(1),
            density_gamma: column(2),
            integral_gamma: column(3),
        };
        let polynomials = Polynomials::new(plan, at);
        let unit = 1.0 / plan.period;
        for (row, point) in self.points.iter().enumerate() {
            let x = point - at.shift - plan.domain.centre;
            let u = Complex::new(x * unit, at.gamma * unit);
            let first = horner(&polynomials.first, u);
            out.density_shift[row] += first.im / PI;
            out.density_variance[row] -= horner(&polynomials.second, u).im / (2.0 * PI);
            out.density_gamma[row] -= first.re / PI;
            out.integral_gamma[row] -= horner(&polynomials.value, u).re / PI;
        }
        (values, out)
    }

    /// Sums of the damped series, one column an operator; constants of integrals left out.
    fn series(&self, plan: &Plan, at: Density, operators: &[Operator]) -> DMatrix<f64> {
        let kept = modes_kept(plan, at);
        let mut real = DMatrix::zeros(kept, operators.len());
        let mut imaginary = DMatrix::zeros(kept, operators.len());
        let unit = 2.0 * PI / plan.period;
        for mode in 0..kept {
            let t = unit * as_f64(mode);
            let count = if mode == 0 { 1.0 } else { 2.0 };
            let damping = (-0.5 * at.variance * t * t - at.gamma * t).exp();
            let phase = Complex::from_polar(count * damping / plan.period, -t * at.shift);
            let coefficient = plan.fourier[mode] * phase;
            for (column, operator) in operators.iter().enumerate() {
                let term = operator.apply(coefficient, t);
                real[(mode, column)] = term.re;
                imaginary[(mode, column)] = -term.im;
            }
        }
        self.cosines.columns(0, kept) * real + self.sines.columns(0, kept) * imaginary
    }
}

/// What acts on a mode exp(i t (x - shift)).
#[derive(Debug, Clone, Copy)]
enum Operator {
    Identity,
    Integral,
    Shift,
    Variance,
    Gamma,
    IntegralGamma,
}

impl Operator {
    fn apply(self, c: Complex<f64>, t: f64) -> Complex<f64> {
        let i = Complex::new(0.0, 1.0);
        match self {
            Self::Identity => c,
            Self::Integral | Self::IntegralGamma if t == 0.0 => Complex::new(0.0, 0.0),
            Self::Integral => -i * c / t,
            Self::Shift => -i * c * t,
            Self::Variance => -0.5 * c * t * t,
            Self::Gamma => -c * t,
            Self::IntegralGamma => i * c,
        }
    }
}

/// Modes whose damping is above the threshold, at least one.
fn modes_kept(plan: &Plan, at: Density) -> usize {
    // variance t^2 / 2 + gamma t = DAMPING
    let t = 2.0 * DAMPING
        / (at.gamma + (at.gamma * at.gamma + 2.0 * DAMPING * at.variance).sqrt())
            .max(f64::MIN_POSITIVE);
    (modes_below(t, plan.period) + 1).min(plan.fourier.len())
}

/// The far polynomial in u = z/L at one variance, with its derivatives in z and its antiderivative.
struct Polynomials {
    value: Vec<f64>,
    first: Vec<f64>,
    second: Vec<f64>,
    integral: Vec<f64>,
}

impl Polynomials {
    fn new(plan: &Plan, at: Density) -> Self {
        let value = plan.heated(at.variance);
        let unit = 1.0 / plan.period;
        let differentiate = |from: &[f64]| -> Vec<f64> {
            let powers = from.iter().enumerate().skip(1);
            powers.map(|(j, c)| c * as_f64(j) * unit).collect()
        };
        let first = differentiate(&value);
        let second = differentiate(&first);
        let integral = std::iter::once(0.0)
            .chain(
                value
                    .iter()
                    .enumerate()
                    .map(|(j, c)| c * plan.period / as_f64(j + 1)),
            )
            .collect();
        Self {
            value,
            first,
            second,
            integral,
        }
    }
}

fn horner(coefficients: &[f64], u: Complex<f64>) -> Complex<f64> {
    coefficients
        .iter()
        .rev()
        .fold(Complex::new(0.0, 0.0), |sum, &c| sum * u + c)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::align::direct_sum;

    fn levels() -> (Vec<f64>, Vec<f64>) {
        // A spread of levels near and far, uneven weights.
        let energies: Vec<f64> = (0..400u16)
            .map(|i| {
                let x = f64::from(i);
                -6.0 + 0.031 * x + 0.4 * (x * 1.7).sin() + if i % 41 == 0 { -60.0 } else { 0.0 }
            })
            .collect();
        let weights = (0..400u16).map(|i| 1.0 + 0.5 * f64::from(i % 7)).collect();
        (energies, weights)
    }

    fn grid() -> Vec<f64> {
        (0..150u16).map(|i| -2.0 + 0.02 * f64::from(i)).collect()
    }

    const DOMAIN: Domain = Domain {
        centre: -0.5,
        half_width: 2.0,
        sigma_min: 0.03,
        sigma_max: 0.5,
    };

    #[test]
    fn density_equals_the_direct_sum() {
        let (energies, weights) = levels();
        let plan = Plan::new(&energies, &weights, DOMAIN);
        let sampler = Sampler::new(&grid(), &plan);
        let mut worst: f64 = 0.0;
        for sigma in [0.03, 0.1, 0.5] {
            for gamma in [0.0, 1e-5, 0.003, 0.1, 0.5] {
                for shift in [0.0, 0.3, -0.4] {
                    let at = Density {
                        shift,
                        variance: sigma * sigma,
                        gamma,
                    };
                    let got = sampler.values(&plan, at).density;
                    let moved: Vec<f64> = energies.iter().map(|e| e + shift).collect();
                    let want = direct_sum(&moved, &weights, &grid(), sigma, gamma);
                    let peak = want.iter().copied().fold(0.0, f64::max);
                    for (g, w) in got.iter().zip(&want) {
                        worst = worst.max((g - w).abs() / peak);
                    }
                }
            }
        }
        assert!(worst < 1e-11, "largest error over the peak: {worst:e}");
    }

    #[test]
    fn derivatives_equal_differences() {
        let (energies, weights) = levels();
        let plan = Plan::new(&energies, &weights, DOMAIN);
        let sampler = Sampler::new(&grid(), &plan);
        let at = Density {
            shift: 0.1,
            variance: 0.02,
            gamma: 0.04,
        };
        let (values, slopes) = sampler.derivatives(&plan, at);
        let h = 1e-5;
        let vary = |field: usize, sign: f64| {
            let mut moved = at;
            match field {
                0 => moved.shift += sign * h,
                1 => moved.variance += sign * h,
                _ => moved.gamma += sign * h,
            }
            sampler.values(&plan, moved)
        };
        for (field, density) in [
            &slopes.density_shift,
            &slopes.density_variance,
            &slopes.density_gamma,
        ]
        .into_iter()
        .enumerate()
        {
            let (up, down) = (vary(field, 1.0), vary(field, -1.0));
            let scale = density.iter().fold(0.0f64, |m, x| m.max(x.abs()));
            for row in 0..grid().len() {
                let want = (up.density[row] - down.density[row]) / (2.0 * h);
                assert!(
                    (density[row] - want).abs() < 1e-5 * scale,
                    "field {field} row {row}"
                );
                // Constants of integration cancel between two rows.
                let integral = |v: &Values| v.integral[row] - v.integral[0];
                let want = (integral(&up) - integral(&down)) / (2.0 * h);
                let got = |r: usize| match field {
                    0 => -values.density[r],
                    1 => -0.5 * slopes.density_shift[r],
                    _ => slopes.integral_gamma[r],
                };
                assert!(
                    (got(row) - got(0) - want).abs() < 1e-5 * scale,
                    "integral {field} {row}"
                );
            }
        }
    }

    #[test]
    fn integral_is_the_area_below_the_density() {
        let (energies, weights) = levels();
        let plan = Plan::new(&energies, &weights, DOMAIN);
        let points: Vec<f64> = (0..=2000u16).map(|i| -1.5 + 0.001 * f64::from(i)).collect();
        let at = Density {
            shift: 0.0,
            variance: 0.01,
            gamma: 0.05,
        };
        let values = Sampler::new(&points, &plan).values(&plan, at);
        let trapezoid: f64 = values
            .density
            .windows(2)
            .map(|w| 0.0005 * (w[0] + w[1]))
            .sum();
        let got = values.integral[2000] - values.integral[0];
        assert!(
            (got - trapezoid).abs() < 1e-5 * trapezoid,
            "{got} {trapezoid}"
        );
    }

    #[test]
    fn zeta_has_its_known_values() {
        assert!((zeta_even(2) - PI * PI / 6.0).abs() < 1e-13);
        assert!((zeta_even(4) - PI.powi(4) / 90.0).abs() < 1e-14);
        assert!((zeta_even(40) - 1.0).abs() < 1e-11);
    }
}
