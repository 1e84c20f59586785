//! The fit of one side as a record and as curves over the whole measured range.

use super::bands::SideLevels;
use super::cautions::competing;
use super::side::SideResult;
use crate::align::{Density, Domain, Misfit, Plan, Sampler};
use crate::schema::{DensityCurve, FitRecord, Quantity, Side, SideCurve};

/// The fit of one side.
pub(super) fn fit_record(side: &SideResult) -> FitRecord {
    let fit = &side.fit;
    let (gaussian, gaussian_u) = fit.gaussian_fwhm();
    let (lorentzian, lorentzian_u) = fit.lorentzian_fwhm();
    FitRecord {
        side: side.side,
        shift: Quantity::new(fit.shift, fit.shift_uncertainty()),
        gaussian_fwhm: Quantity::new(gaussian, gaussian_u),
        lorentzian_fwhm: Quantity::new(lorentzian, lorentzian_u),
        window_start_ev: fit.window.start,
        window_stop_ev: fit.window.stop,
        channels: fit.channels,
        degrees_of_freedom: fit.degrees_of_freedom,
        statistics: side.curve.statistics.to_owned(),
        reduced_chi_square: fit.reduced_chi_square,
        runs_probability: fit.runs_probability,
        evaluations: fit.evaluations,
        converged: fit.converged,
        alternatives: competing(side),
    }
}

/// The curves of one side over the whole measured range.
pub(super) fn drawn(side: &SideResult, levels: &SideLevels) -> (SideCurve, DensityCurve) {
    let fit = &side.fit;
    let curve = &side.curve;
    let points = &curve.energies;
    let (first, last) = (points[0], points[points.len() - 1]);
    let domain = Domain {
        centre: 0.5 * (first + last) - fit.shift,
        half_width: 0.5 * (last - first) + 0.1,
        sigma_min: fit.total_variance.sqrt(),
        sigma_max: fit.total_variance.sqrt(),
    };
    let plan = Plan::new(&levels.energies, &levels.weights, domain);
    let at = Density {
        shift: fit.shift,
        variance: fit.total_variance,
        gamma: fit.gamma,
    };
    let values = Sampler::new(points, &plan).values(&plan, at);
    let gap_end = match side.side {
        Side::Valence => fit.window.indices(points).end.saturating_sub(1),
        Side::Conduction => fit.window.indices(points).start,
    };
    let zero = values.integral[gap_end];
    let primary = values.integral.iter().map(|x| match side.side {
        Side::Valence => (zero - x).max(0.0),
        Side::Conduction => (x - zero).max(0.0),
    });
    let background: Vec<f64> = primary
        .map(|p| fit.constant + fit.amplitude * fit.step * p)
        .collect();
    let density: Vec<f64> = values.density.iter().map(|d| fit.amplitude * d).collect();
    let model: Vec<f64> = background
        .iter()
        .zip(&density)
        .map(|(b, d)| b + d)
        .collect();
    let misfit = Misfit {
        values: &curve.values,
        noise: &curve.noise,
    };
    let standard_uncertainty = (0..model.len())
        .map(|i| misfit.variance(i, curve.values[i].max(1.0)).sqrt())
        .collect();
    let part = DensityCurve {
        side: side.side,
        energy_ev: points.clone(),
        density,
    };
    let whole = SideCurve {
        side: side.side,
        intensity_unit: curve.unit,
        energy_ev: points.clone(),
        measured: curve.values.clone(),
        standard_uncertainty,
        residual: misfit.standardised(&model),
        model,
        background,
        window_ev: (fit.window.start, fit.window.stop),
    };
    (whole, part)
}
