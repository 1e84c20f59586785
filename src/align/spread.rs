//! What data and model may be off by together, V = diag(mu) + C, and what follows for a fit.

use nalgebra::{Cholesky, DMatrix, DVector, Dyn};

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
    /// Adds the variances of the data, which are positive, to the covariance of the model.
    pub(super) fn new(variances: Vec<f64>, deviations: Deviations) -> Self {
        let mut covariance = &deviations.model * deviations.model.transpose();
        for (index, variance) in variances.iter().enumerate() {
            covariance[(index, index)] += variance;
        }
        let rows = variances.len();
        // Positive by its diagonal; the identity stands in only where it holds no number, and the fit
        // is then refused for its covariance.
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
        let move_by = cov * gradient;
        let mut moved = p;
        for (parameter, by) in moved.iter_mut().zip(move_by.iter()) {
            *parameter += by;
        }
        for bounded in &mut moved[1..] {
            *bounded = bounded.max(0.0);
        }
        moved
    }

    /// How much the shift moves with each channel: the first row of (J'V^-1 J)^-1 J'V^-1.
    pub(super) fn gains(&self, cov: &DMatrix<f64>, weighted: &DMatrix<f64>) -> DVector<f64> {
        let mut gains = weighted * cov.column(0);
        self.root
            .l_dirty()
            .tr_solve_lower_triangular_mut(&mut gains);
        gains
    }
}
