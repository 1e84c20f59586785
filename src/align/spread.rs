//! What data and model may be off by together, V = diag(mu) + kappa C, and what follows for a fit.
//!
//! C is the covariance of a model whose k-points were drawn at random. The points of a regular grid are
//! not, and its density may be far closer to the true one; how much of C there is, kappa, is seen in
//! the misfit r of the plain fit. Its restricted likelihood, with the parameters' directions J taken
//! out (Patterson and Thompson, Biometrika 58, 545 (1971)),
//!
//!   -2 ln L = ln det V + ln det(J'V^-1 J) + r'P r,   P = V^-1 - V^-1 J (J'V^-1 J)^-1 J'V^-1,
//!
//! weighs values from none to twice that of random points, all as probable beforehand; the mean is used.
//! For a regular grid, whose error is small unless its lumps show, it is the most probable value.

use nalgebra::{Cholesky, DMatrix, DVector, Dyn};

use super::least_squares::whiten;
use super::sampling::Deviations;

/// Number of parameters of an edge: shift, amplitude, variance, gamma, constant, step.
pub(super) const PARAMETERS: usize = 6;

/// The covariance of data and model.
pub(super) struct Spread {
    /// Its root.
    pub root: Cholesky<f64, Dyn>,
    /// Variances of the data.
    pub variances: Vec<f64>,
    /// Deviations of the model by group of k-points.
    pub deviations: Deviations,
}

impl Spread {
    /// How much of the deviations of random k-points the misfit shows.
    pub(super) fn share(
        misfit: &[f64],
        jacobian: &DMatrix<f64>,
        variances: &[f64],
        deviations: &Deviations,
        regular: bool,
    ) -> f64 {
        if deviations.model.ncols() == 0 {
            return 0.0;
        }
        let covariance = &deviations.model * deviations.model.transpose();
        let misfit = DMatrix::from_column_slice(misfit.len(), 1, misfit);
        let steps: Vec<(f64, f64)> = (0..=SHARES)
            .filter_map(|step| {
                // Closer together near none, where regular grids are.
                let kappa = 2.0 * (f64::from(step) / f64::from(SHARES)).powi(4);
                let mut total = &covariance * kappa;
                for (index, variance) in variances.iter().enumerate() {
                    total[(index, index)] += variance;
                }
                Some((
                    kappa,
                    restricted(&Cholesky::new(total)?, &misfit, jacobian)?,
                ))
            })
            .collect();
        if regular {
            let best = steps.iter().min_by(|a, b| a.1.total_cmp(&b.1));
            best.map_or(1.0, |step| step.0)
        } else {
            mean_over(&steps)
        }
    }

    /// Adds the variances of the data, which are positive, to the covariance of the model.
    pub(super) fn new(variances: Vec<f64>, deviations: Deviations) -> Self {
        let mut covariance = &deviations.model * deviations.model.transpose();
        for (index, variance) in variances.iter().enumerate() {
            covariance[(index, index)] += variance;
        }
        let rows = variances.len();
        // Positive by its diagonal. Where it holds no number no root stands in, and the fit is then
        // refused for its covariance.
        let root = Cholesky::new(covariance).unwrap_or_else(|| {
            Cholesky::pack_dirty(DMatrix::from_diagonal_element(rows, rows, f64::NAN))
        });
        Self {
            root,
            variances,
            deviations,
        }
    }

    /// One Newton step from the solution of the plain objective to that of the unbiased one: the six
    /// parameters move by (J'V^-1 J)^-1 times half the gradient of tr(V^-1 C).
    pub(super) fn unbiased(&self, p: [f64; PARAMETERS], cov: &DMatrix<f64>) -> [f64; PARAMETERS] {
        let Deviations { model, derivatives } = &self.deviations;
        let inverse = self.root.solve(model);
        let half = |derivative: &DMatrix<f64>| derivative.dot(&inverse);
        let [shift, variance, gamma, step] = derivatives.each_ref().map(half);
        let amplitude = model.dot(&inverse) / p[1];
        let gradient = DVector::from_column_slice(&[shift, amplitude, variance, gamma, 0.0, step]);
        bounded_step(p, cov * gradient, cov)
    }

    /// How much each parameter moves with each channel, V^-1 J (J'V^-1 J)^-1.
    pub(super) fn gains(&self, cov: &DMatrix<f64>, weighted: &DMatrix<f64>) -> DMatrix<f64> {
        let mut gains = weighted * cov;
        self.root
            .l_dirty()
            .tr_solve_lower_triangular_mut(&mut gains);
        gains
    }
}

/// The step, where it would take a parameter below zero stopped there and the others moved on as the
/// covariance binds them to it.
fn bounded_step(
    p: [f64; PARAMETERS],
    mut step: DVector<f64>,
    cov: &DMatrix<f64>,
) -> [f64; PARAMETERS] {
    let mut cov = cov.clone();
    for _ in 1..PARAMETERS {
        let below = |i: &usize| p[*i] + step[*i] < -1e-12 && cov[(*i, *i)] > 0.0;
        let Some(held) = (1..PARAMETERS).find(below) else {
            break;
        };
        let tie = cov.column(held) / cov[(held, held)];
        step += &tie * (-p[held] - step[held]);
        let variance = cov[(held, held)];
        cov -= &tie * tie.transpose() * variance;
    }
    let mut moved = p;
    for (index, (parameter, by)) in moved.iter_mut().zip(step.iter()).enumerate() {
        *parameter += by;
        if index > 0 {
            *parameter = parameter.max(0.0);
        }
    }
    moved
}

/// Number of intervals between the values of kappa.
const SHARES: u16 = 40;

/// Minus twice the logarithm of the restricted likelihood.
fn restricted(
    root: &Cholesky<f64, Dyn>,
    misfit: &DMatrix<f64>,
    jacobian: &DMatrix<f64>,
) -> Option<f64> {
    let log_determinant = |root: &Cholesky<f64, Dyn>| -> f64 {
        2.0 * root
            .l_dirty()
            .diagonal()
            .iter()
            .map(|x| x.ln())
            .sum::<f64>()
    };
    let (r, j) = (whiten(root, misfit.clone()), whiten(root, jacobian.clone()));
    let information = Cholesky::new(j.tr_mul(&j))?;
    let shared = whiten(&information, j.tr_mul(&r));
    Some(
        log_determinant(root) + log_determinant(&information) + r.norm_squared()
            - shared.norm_squared(),
    )
}

/// Mean of kappa over minus twice a log-likelihood at ascending values, by trapezoids.
fn mean_over(steps: &[(f64, f64)]) -> f64 {
    let least = steps
        .iter()
        .map(|step| step.1)
        .fold(f64::INFINITY, f64::min);
    let likelihood = |step: &(f64, f64)| (-0.5 * (step.1 - least)).exp();
    let (mut sum, mut moment) = (0.0, 0.0);
    for pair in steps.windows(2) {
        let width = 0.5 * (pair[1].0 - pair[0].0);
        let (left, right) = (likelihood(&pair[0]), likelihood(&pair[1]));
        sum += width * (left + right);
        moment += width * (left * pair[0].0 + right * pair[1].0);
    }
    if sum > 0.0 { moment / sum } else { 1.0 }
}
