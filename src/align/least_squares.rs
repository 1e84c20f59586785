//! The link to the least-squares solver: a model, a misfit and a start give a solution.

use levenberg_marquardt::{LeastSquaresProblem, LevenbergMarquardt};
use nalgebra::{Cholesky, DMatrix, DVector, Dyn, Owned, SVD};

use super::misfit::Misfit;

/// A model with free parameters, one value a channel.
pub(super) trait Model {
    /// Values of the model.
    fn values(&self, parameters: &[f64]) -> Vec<f64>;
    /// Values, and their derivatives: one row a channel, one column a parameter.
    fn jacobian(&self, parameters: &[f64]) -> (Vec<f64>, DMatrix<f64>);
}

/// What residuals are measured in.
#[derive(Debug, Clone, Copy)]
pub(super) enum Weighing<'a> {
    /// Channel by channel.
    Channels(Misfit<'a>),
    /// Model minus values under the inverse of a root of their covariance.
    Correlated {
        values: &'a [f64],
        root: &'a Cholesky<f64, Dyn>,
    },
}

impl Weighing<'_> {
    fn residuals(&self, model: &[f64]) -> DVector<f64> {
        match self {
            Self::Channels(misfit) => {
                let channels = model.iter().enumerate();
                let residuals = channels.map(|(index, &mu)| misfit.residual(index, mu).0);
                DVector::from_iterator(model.len(), residuals)
            }
            Self::Correlated { values, root } => {
                let differences = model.iter().zip(*values).map(|(mu, value)| mu - value);
                whiten(root, DMatrix::from_iterator(model.len(), 1, differences))
                    .column(0)
                    .into_owned()
            }
        }
    }

    fn jacobian(&self, model: &[f64], mut jacobian: DMatrix<f64>) -> DMatrix<f64> {
        match self {
            Self::Channels(misfit) => {
                for (index, &mu) in model.iter().enumerate() {
                    let slope = misfit.residual(index, mu).1;
                    jacobian.row_mut(index).scale_mut(slope);
                }
                jacobian
            }
            Self::Correlated { root, .. } => whiten(root, jacobian),
        }
    }
}

/// The inverse of the root L of V = L L' times a matrix.
pub(super) fn whiten(root: &Cholesky<f64, Dyn>, mut matrix: DMatrix<f64>) -> DMatrix<f64> {
    root.l_dirty().solve_lower_triangular_mut(&mut matrix);
    matrix
}

/// Where the solver stopped.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Solution {
    pub parameters: Vec<f64>,
    pub deviance: f64,
    pub evaluations: usize,
    pub converged: bool,
}

struct Problem<'a, M> {
    model: &'a M,
    weighing: Weighing<'a>,
    parameters: DVector<f64>,
}

impl<M: Model> LeastSquaresProblem<f64, Dyn, Dyn> for Problem<'_, M> {
    type ResidualStorage = Owned<f64, Dyn>;
    type JacobianStorage = Owned<f64, Dyn, Dyn>;
    type ParameterStorage = Owned<f64, Dyn>;

    fn set_params(&mut self, parameters: &DVector<f64>) {
        self.parameters.copy_from(parameters);
    }

    fn params(&self) -> DVector<f64> {
        self.parameters.clone()
    }

    fn residuals(&self) -> Option<DVector<f64>> {
        let model = self.model.values(self.parameters.as_slice());
        Some(self.weighing.residuals(&model))
    }

    fn jacobian(&self) -> Option<DMatrix<f64>> {
        let (model, jacobian) = self.model.jacobian(self.parameters.as_slice());
        Some(self.weighing.jacobian(&model, jacobian))
    }
}

/// Minimises the misfit of `model` from `start`. Not converging is part of the answer.
pub(super) fn minimise<M: Model>(model: &M, weighing: Weighing<'_>, start: Vec<f64>) -> Solution {
    let problem = Problem {
        model,
        weighing,
        parameters: DVector::from_vec(start),
    };
    // A small first step: parameters are logarithms, and one leap to minus a million would blind the
    // solver's measure of progress.
    let solver = LevenbergMarquardt::new()
        .with_stepbound(0.3)
        .with_ftol(1e-10)
        .with_xtol(1e-8)
        .with_gtol(1e-10)
        .with_patience(40);
    let (problem, report) = solver.minimize(problem);
    Solution {
        parameters: problem.parameters.as_slice().to_vec(),
        deviance: 2.0 * report.objective_function,
        evaluations: report.number_of_evaluations,
        converged: report.termination.was_successful(),
    }
}

/// Covariance of parameters from the derivatives of the weighted model, (J'J)^-1. A direction that
/// the data do not bear at all is left out (pseudo-inverse). Not a number where the model is not.
pub(super) fn covariance(weighted: &DMatrix<f64>) -> DMatrix<f64> {
    let information = weighted.tr_mul(weighted);
    let n = information.nrows();
    let scale: Vec<f64> = (0..n)
        .map(|i| information[(i, i)].sqrt().max(f64::MIN_POSITIVE))
        .collect();
    let scaled = DMatrix::from_fn(n, n, |i, j| information[(i, j)] / (scale[i] * scale[j]));
    let unknown = || DMatrix::from_element(n, n, f64::NAN);
    if scaled.iter().any(|x| !x.is_finite()) {
        return unknown();
    }
    let inverse = SVD::try_new(scaled, true, true, f64::EPSILON, 500)
        .and_then(|svd| svd.pseudo_inverse(1e-13).ok())
        .unwrap_or_else(unknown);
    DMatrix::from_fn(n, n, |i, j| inverse[(i, j)] / (scale[i] * scale[j]))
}
