//! Fit of the broadened computed density to the edge region of one measured curve.
//!
//! mu(E) = A [ D(E - s) + B S(E - s) ] + b
//!
//! D is the Voigt density of the levels of this side, with the instrument's Gaussian variance plus a
//! free variance v >= 0 and a free Lorentzian half width gamma >= 0; S its integral from the gap end
//! of the window into the band, which is the primary signal between an energy and the gap: inelastic
//! electrons of photoemission lie below their primaries, in inverse photoemission above (the idea of
//! Shirley, Phys. Rev. B 5, 4709 (1972), without reusing the data's noise). A > 0, B >= 0, b >= 0.
//! This is the density fit of Kraut, Grant, Waldrop and Kowalczyk, Phys. Rev. Lett. 44, 1620 (1980),
//! by Poisson likelihood; edge = computed edge + s. The model is smooth in every parameter: bounded
//! ones run through sines, logistic functions and exponentials, so that the solver needs no bounds and
//! a width that wants to be zero gets there in a few steps.
//!
//! The levels stand at a finite number of k-points. A Poisson fit comes first; with C the covariance
//! of the model that follows from their sampling (`sampling.rs`) and kappa the share of it that the
//! misfit shows (`spread.rs`), the fit is then brought to the solution of J' V^-1 (y - mu) = 0,
//! V = diag(mu) + kappa C, which is the Poisson score where C is zero.
//!
//! For a regular grid whose plain fit is good to the noise the plain fit stays, and kappa C enters its
//! uncertainty alone.
//!
//! The Fermi occupation is left out: it matters only where an edge lies within a few kT of the Fermi
//! level.

use nalgebra::DMatrix;
use statrs::distribution::{ContinuousCDF, Normal};

use super::FWHM_PER_SIGMA;
use super::density::{Density, Derivatives, Domain, Plan, Sampler, Values};
use super::least_squares::{Model, Solution, Weighing, covariance, minimise, whiten};
use super::misfit::{Misfit, runs_probability};
use super::noise::Noise;
use super::sampling::{Deviations, Sampled};
use super::spread::{PARAMETERS, Spread};
use super::window::Window;
use crate::schema::Side;

/// Largest variance of the sample's own Gaussian, eV^2: 0.7 eV full width.
const VARIANCE_MAX: f64 = 0.09;
/// Largest Lorentzian half width, eV.
const GAMMA_MAX: f64 = 0.5;
/// A fit worse than this probability is called inadequate and its uncertainties are enlarged.
const INADEQUATE: f64 = 1e-3;
/// Where a bounded parameter starts that was at its bound, as a fraction of its range.
const BARELY: f64 = 1e-3;

/// What broadens a curve by known instrument.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Instrument {
    /// Standard deviation of the instrument's Gaussian, eV; zero where it is not known.
    pub sigma: f64,
}

/// What a fit is made of besides the data.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct EdgeFitOptions {
    /// Which side of the gap.
    pub side: Side,
    /// The window of the fit on the measured scale.
    pub window: Window,
    /// Where the shift is sought.
    pub shift: f64,
    /// How far from there it may end.
    pub shift_range: f64,
    /// The instrument.
    pub instrument: Instrument,
}

/// The levels of one side and the channels of one window, ready to be fitted.
#[derive(Debug, Clone)]
pub struct EdgeProblem {
    options: EdgeFitOptions,
    energies: Vec<f64>,
    values: Vec<f64>,
    noise: Noise,
    variance_floor: f64,
    plan: Plan,
    sampler: Sampler,
}

/// A fitted edge region. `covariance` is that of shift, amplitude, variance, gamma, constant, step.
#[derive(Debug, Clone, PartialEq)]
pub struct EdgeFit {
    /// Measured minus computed, eV.
    pub shift: f64,
    /// Intensity a state per eV.
    pub amplitude: f64,
    /// Variance of the sample's own Gaussian, eV^2.
    pub variance: f64,
    /// Lorentzian half width at half maximum, eV.
    pub gamma: f64,
    /// Constant background.
    pub constant: f64,
    /// Step background a primary signal, 1/eV.
    pub step: f64,
    /// Covariance of the six parameters in that order.
    pub covariance: DMatrix<f64>,
    /// Variance of the whole Gaussian, instrument included, eV^2.
    pub total_variance: f64,
    /// Variance of the shift by the noise of the data alone, eV^2.
    pub noise_variance: f64,
    /// Influence of each group of k-points on the shift, eV; the squares add to its sampling variance.
    pub influence: Vec<f64>,
    /// Share of the covariance of randomly drawn k-points that the misfit shows.
    pub sampling_share: f64,
    /// Chi-square over the degrees of freedom, by the covariance of data and model.
    pub reduced_chi_square: f64,
    /// Probability of as large a chi-square in a right model.
    pub fit_probability: f64,
    /// Probability of as few runs of one sign in a right model.
    pub runs_probability: f64,
    /// Number of channels.
    pub channels: usize,
    /// Channels minus parameters.
    pub degrees_of_freedom: usize,
    /// Model evaluations of the solver.
    pub evaluations: usize,
    /// Whether the solver converged.
    pub converged: bool,
    /// The window.
    pub window: Window,
}

impl EdgeFit {
    /// Standard uncertainty of the shift.
    #[must_use]
    pub fn shift_uncertainty(&self) -> f64 {
        self.covariance[(0, 0)].sqrt()
    }

    /// Gaussian full width at half maximum, instrument and sample, and its standard uncertainty.
    #[must_use]
    pub fn gaussian_fwhm(&self) -> (f64, f64) {
        let sigma = self.total_variance.sqrt();
        let uncertainty = self.covariance[(2, 2)].max(0.0).sqrt() / (2.0 * sigma);
        (FWHM_PER_SIGMA * sigma, FWHM_PER_SIGMA * uncertainty)
    }

    /// Lorentzian full width at half maximum and its standard uncertainty.
    #[must_use]
    pub fn lorentzian_fwhm(&self) -> (f64, f64) {
        let uncertainty = self.covariance[(3, 3)].max(0.0).sqrt();
        (2.0 * self.gamma, 2.0 * uncertainty)
    }

    /// Whether the residuals are larger, or in longer runs, than chance makes them.
    #[must_use]
    pub fn is_inadequate(&self) -> bool {
        self.fit_probability < INADEQUATE || self.runs_probability < INADEQUATE
    }

    /// The six parameters in the order of the covariance.
    #[must_use]
    pub fn parameters(&self) -> [f64; PARAMETERS] {
        [
            self.shift,
            self.amplitude,
            self.variance,
            self.gamma,
            self.constant,
            self.step,
        ]
    }
}

impl EdgeProblem {
    /// Prepares a fit. `energies` ascending on the measured scale with `values` of the same length;
    /// only channels in the window are kept. `None` where these are not more than parameters by five.
    #[must_use]
    pub fn new(
        levels: (&[f64], &[f64]),
        energies: &[f64],
        values: &[f64],
        noise: &Noise,
        options: EdgeFitOptions,
    ) -> Option<Self> {
        let part = options.window.indices(energies);
        if part.len() < PARAMETERS + 5 {
            return None;
        }
        let kept = energies[part.clone()].to_vec();
        let noise = match noise {
            Noise::Poisson => Noise::Poisson,
            Noise::Variance(all) => Noise::Variance(all[part.clone()].to_vec()),
        };
        let (first, last) = (kept[0], kept[kept.len() - 1]);
        let step = (last - first) / f64::from(u32::try_from(kept.len() - 1).unwrap_or(1));
        let variance_floor = options.instrument.sigma.max(0.5 * step).powi(2);
        let domain = Domain {
            centre: 0.5 * (first + last) - options.shift,
            half_width: 0.5 * (last - first) + options.shift_range,
            sigma_min: variance_floor.sqrt(),
            sigma_max: (variance_floor + VARIANCE_MAX).sqrt(),
        };
        let plan = Plan::new(levels.0, levels.1, domain);
        let sampler = Sampler::new(&kept, &plan);
        Some(Self {
            options,
            energies: kept,
            values: values[part].to_vec(),
            noise,
            variance_floor,
            plan,
            sampler,
        })
    }

    /// The energies of the window, ascending.
    #[must_use]
    pub fn energies(&self) -> &[f64] {
        &self.energies
    }

    /// The law of noise of the window's channels.
    #[must_use]
    pub fn noise(&self) -> &Noise {
        &self.noise
    }

    /// The options it was built with.
    #[must_use]
    pub fn options(&self) -> &EdgeFitOptions {
        &self.options
    }

    fn misfit(&self) -> Misfit<'_> {
        Misfit {
            values: &self.values,
            noise: &self.noise,
        }
    }

    /// Fits from a guess of the amplitude and two pairs of widths; the best is kept.
    #[must_use]
    pub fn fit(&self, levels: Sampled<'_>) -> EdgeFit {
        let starts = [(0.05, 0.02), (0.15, 0.1)];
        let [narrow, wide] =
            starts.map(|(sigma, gamma)| self.solve(self.start(self.options.shift, sigma, gamma)));
        self.finish(
            if wide.deviance < narrow.deviance {
                wide
            } else {
                narrow
            },
            levels,
        )
    }

    /// Fits from another fit of nearly the same problem.
    #[must_use]
    pub fn fit_from(&self, near: &EdgeFit, levels: Sampled<'_>) -> EdgeFit {
        self.finish(self.solve(self.internal(&near.parameters())), levels)
    }

    fn solve(&self, start: Vec<f64>) -> Solution {
        self.settle(Weighing::Channels(self.misfit()), start)
    }

    /// Minimises, and once more from just inside the bounds: a solver that overshoots to a bound sees
    /// no slope there. The better of the two is kept.
    fn settle(&self, weighing: Weighing<'_>, start: Vec<f64>) -> Solution {
        let first = minimise(self, weighing, start);
        let again = self.internal(&self.natural(&first.parameters));
        let at_bound = first
            .parameters
            .iter()
            .zip(&again)
            .any(|(there, inside)| there < &(inside - 1e-9));
        if !at_bound {
            return first;
        }
        let second = minimise(self, weighing, again);
        let evaluations = first.evaluations + second.evaluations;
        let better = if second.deviance < first.deviance {
            second
        } else {
            first
        };
        Solution {
            evaluations,
            ..better
        }
    }

    /// Brings a Poisson fit to the one that knows of the sampling, the covariance taken twice.
    fn finish(&self, mut solution: Solution, levels: Sampled<'_>) -> EdgeFit {
        let mut evaluations = solution.evaluations;
        let p = self.natural(&solution.parameters);
        let (model, jacobian) = self.model_and_derivatives(&p);
        let misfit: Vec<f64> = model.iter().zip(&self.values).map(|(m, y)| y - m).collect();
        let deviations = self.deviations(&p, levels);
        let (noise, regular) = (self.variances(&model), levels.groups.are_regular());
        let share = Spread::share(&misfit, &jacobian, &noise, &deviations, regular);
        let plain = Spread::new(noise, deviations.clone().with_share(0.0));
        let first = self.report(&solution, &plain, &deviations.clone().with_share(share));
        if share == 0.0 || (regular && !first.is_inadequate()) {
            return EdgeFit {
                sampling_share: share,
                ..first
            };
        }
        let none = Deviations::none(model.len());
        let mut spread = Spread::new(plain.variances, deviations.with_share(share));
        for pass in 0..2 {
            if pass > 0 {
                let p = self.natural(&solution.parameters);
                let deviations = self.deviations(&p, levels).with_share(share);
                spread = Spread::new(self.variances(&self.model(&p)), deviations);
            }
            let weighing = Weighing::Correlated {
                values: &self.values,
                root: &spread.root,
            };
            solution = self.settle(weighing, solution.parameters);
            evaluations += solution.evaluations;
        }
        EdgeFit {
            evaluations,
            sampling_share: share,
            ..self.report(&solution, &spread, &none)
        }
    }

    fn variances(&self, model: &[f64]) -> Vec<f64> {
        let misfit = self.misfit();
        let channels = model.iter().enumerate();
        channels.map(|(i, &mu)| misfit.variance(i, mu)).collect()
    }

    fn deviations(&self, p: &[f64; PARAMETERS], levels: Sampled<'_>) -> Deviations {
        let (channels, side) = (&self.energies, self.options.side);
        levels.deviations(channels, side, self.density(p), p[1], p[5])
    }

    fn start(&self, shift: f64, sigma: f64, gamma: f64) -> Vec<f64> {
        let at = Density {
            shift,
            variance: self.variance_floor + sigma * sigma,
            gamma,
        };
        let values = self.sampler.values(&self.plan, at);
        let top = |list: &[f64]| list.iter().copied().fold(0.0, f64::max);
        let least = self.values.iter().copied().fold(f64::INFINITY, f64::min);
        let amplitude = (top(&self.values) - least).max(1e-3) / top(&values.density).max(1e-12);
        self.internal(&[
            shift,
            amplitude,
            sigma * sigma,
            gamma,
            least.max(1e-2 * top(&self.values)),
            0.02,
        ])
    }

    /// From the six parameters to those of the solver.
    fn internal(&self, p: &[f64; PARAMETERS]) -> Vec<f64> {
        let logit = |value: f64, most: f64| {
            let fraction = (value / most).clamp(BARELY, 1.0 - BARELY);
            (fraction / (1.0 - fraction)).ln()
        };
        let turn = (p[0] - self.options.shift) / self.options.shift_range;
        vec![
            turn.clamp(-0.95, 0.95).asin(),
            p[1].max(f64::MIN_POSITIVE).ln(),
            logit(p[2], VARIANCE_MAX),
            logit(p[3], GAMMA_MAX),
            p[4].max(BARELY).ln(),
            p[5].max(1e-2 * BARELY).ln(),
        ]
    }

    /// From the solver's parameters to the six.
    fn natural(&self, q: &[f64]) -> [f64; PARAMETERS] {
        [
            self.options.shift + self.options.shift_range * q[0].sin(),
            bounded_exp(q[1]),
            VARIANCE_MAX * logistic(q[2]),
            GAMMA_MAX * logistic(q[3]),
            bounded_exp(q[4]),
            bounded_exp(q[5]),
        ]
    }

    /// Derivatives of the six with respect to the solver's.
    fn chain(&self, q: &[f64]) -> [f64; PARAMETERS] {
        let slope = |x: f64| logistic(x) * (1.0 - logistic(x));
        [
            self.options.shift_range * q[0].cos(),
            bounded_exp(q[1]),
            VARIANCE_MAX * slope(q[2]),
            GAMMA_MAX * slope(q[3]),
            bounded_exp(q[4]),
            bounded_exp(q[5]),
        ]
    }

    /// The model at six parameters, in the window.
    #[must_use]
    pub fn model(&self, p: &[f64; PARAMETERS]) -> Vec<f64> {
        let values = self.sampler.values(&self.plan, self.density(p));
        let primary = self.primary(&values.integral);
        let channels = values.density.iter().zip(&primary);
        channels
            .map(|(d, s)| p[1] * (d + p[5] * s) + p[4])
            .collect()
    }

    fn density(&self, p: &[f64; PARAMETERS]) -> Density {
        Density {
            shift: p[0],
            variance: self.variance_floor + p[2],
            gamma: p[3],
        }
    }

    /// Integral from the gap end of the window to each channel, from an antiderivative.
    fn primary(&self, integral: &[f64]) -> Vec<f64> {
        let last = integral.len() - 1;
        match self.options.side {
            Side::Valence => integral.iter().map(|x| integral[last] - x).collect(),
            Side::Conduction => integral.iter().map(|x| x - integral[0]).collect(),
        }
    }

    /// Model and derivatives with respect to the six parameters.
    fn model_and_derivatives(&self, p: &[f64; PARAMETERS]) -> (Vec<f64>, DMatrix<f64>) {
        let (values, slopes) = self.sampler.derivatives(&self.plan, self.density(p));
        let Values { density, integral } = values;
        let Derivatives {
            density_shift,
            density_variance,
            density_gamma,
            integral_gamma,
        } = slopes;
        let primary = self.primary(&integral);
        let minus =
            |list: &[f64], factor: f64| -> Vec<f64> { list.iter().map(|x| -factor * x).collect() };
        let primary_shift = self.primary(&minus(&density, 1.0));
        let primary_variance = self.primary(&minus(&density_shift, 0.5));
        let primary_gamma = self.primary(&integral_gamma);
        let rows = density.len();
        let mut jacobian = DMatrix::zeros(rows, PARAMETERS);
        let mut model = Vec::with_capacity(rows);
        for i in 0..rows {
            let shape = density[i] + p[5] * primary[i];
            model.push(p[1] * shape + p[4]);
            jacobian[(i, 0)] = p[1] * (density_shift[i] + p[5] * primary_shift[i]);
            jacobian[(i, 1)] = shape;
            jacobian[(i, 2)] = p[1] * (density_variance[i] + p[5] * primary_variance[i]);
            jacobian[(i, 3)] = p[1] * (density_gamma[i] + p[5] * primary_gamma[i]);
            jacobian[(i, 4)] = 1.0;
            jacobian[(i, 5)] = p[1] * primary[i];
        }
        (model, jacobian)
    }

    /// The fit with its covariance. `spread` is what it was weighed by, `added` are deviations of the
    /// model that it was not weighed by and that its uncertainty still holds.
    fn report(&self, solution: &Solution, spread: &Spread, added: &Deviations) -> EdgeFit {
        let p = self.natural(&solution.parameters);
        let (model, jacobian) = self.model_and_derivatives(&p);
        let weighted = whiten(&spread.root, jacobian);
        let mut cov = covariance(&weighted);
        let differences = model.iter().zip(&self.values).map(|(mu, value)| value - mu);
        let rows = model.len();
        let residuals = whiten(&spread.root, DMatrix::from_iterator(rows, 1, differences));
        let chi_square = residuals.norm_squared();
        let degrees_of_freedom = rows - PARAMETERS;
        let fit_probability = self.fit_probability(chi_square, &spread.variances);
        let runs_probability = runs_probability(residuals.as_slice());
        #[allow(clippy::cast_precision_loss)] // A number of channels.
        let reduced_chi_square = chi_square / degrees_of_freedom as f64;
        let gains = spread.gains(&cov, &weighted);
        let p = spread.unbiased(p, &cov);
        let unweighed = added.model.tr_mul(&gains);
        cov += unweighed.tr_mul(&unweighed);
        let inadequate = fit_probability < INADEQUATE || runs_probability < INADEQUATE;
        let inflation = if inadequate || matches!(self.noise, Noise::Variance(_)) {
            reduced_chi_square.max(1.0)
        } else {
            1.0
        };
        cov *= inflation;
        let shift_gains = gains.column(0);
        let by_noise = shift_gains
            .iter()
            .zip(&spread.variances)
            .map(|(g, v)| g * g * v);
        let by_weight = spread.deviations.model.tr_mul(&shift_gains);
        let influence = if added.model.ncols() > 0 {
            unweighed.column(0).into_owned()
        } else {
            by_weight
        };
        EdgeFit {
            shift: p[0],
            amplitude: p[1],
            variance: p[2],
            gamma: p[3],
            constant: p[4],
            step: p[5],
            covariance: cov,
            total_variance: self.variance_floor + p[2],
            noise_variance: by_noise.sum::<f64>() * inflation,
            influence: (influence * inflation.sqrt()).as_slice().to_vec(),
            sampling_share: 0.0,
            reduced_chi_square,
            fit_probability,
            runs_probability,
            channels: rows,
            degrees_of_freedom,
            evaluations: solution.evaluations,
            converged: solution.converged,
            window: self.options.window,
        }
    }

    /// Probability of as large a chi-square, by the normal law with its exact mean and variance for
    /// counts: a Pearson residual of a Poisson count has kurtosis 3 + 1/mu.
    fn fit_probability(&self, chi_square: f64, variances: &[f64]) -> f64 {
        let excess = |variance: &f64| match self.noise {
            Noise::Poisson => 2.0 + 1.0 / variance,
            Noise::Variance(_) => 2.0,
        };
        let spread = variances.iter().map(excess).sum::<f64>().sqrt();
        #[allow(clippy::cast_precision_loss)] // A number of channels.
        let dof = (variances.len() - PARAMETERS) as f64;
        Normal::standard().sf((chi_square - dof) / spread)
    }
}

/// The exponential, kept finite.
fn bounded_exp(x: f64) -> f64 {
    x.min(80.0).exp()
}

fn logistic(x: f64) -> f64 {
    1.0 / (1.0 + (-x).exp())
}

impl Model for EdgeProblem {
    fn values(&self, parameters: &[f64]) -> Vec<f64> {
        self.model(&self.natural(parameters))
    }

    fn jacobian(&self, parameters: &[f64]) -> (Vec<f64>, DMatrix<f64>) {
        let (model, mut jacobian) = self.model_and_derivatives(&self.natural(parameters));
        for (column, slope) in self.chain(parameters).into_iter().enumerate() {
            jacobian.column_mut(column).scale_mut(slope);
        }
        (model, jacobian)
    }
}
