//! The numerics: broadening, the Fermi edge, the misfit and the fits.
//!
//! This room owns every formula between a list of numbers and an edge with its covariance. Its
//! kernels take slices of energies in eV on the electron scale; it knows nothing of files, study
//! keys or reports. A plan is built once and run on many inputs.

mod density;
mod edge_fit;
mod fermi;
mod least_squares;
mod metal_edge;
mod misfit;
mod noise;
mod replicas;
mod sampling;
mod scan;
mod spread;
mod tangent;
mod voigt;
mod window;

pub use density::{Density, Derivatives, Domain, Plan, Sampler, Values};
pub use edge_fit::{EdgeFit, EdgeFitOptions, EdgeProblem, Instrument};
pub use fermi::{fermi, fermi_gauss};
pub use metal_edge::{MetalEdge, fit_metal_edge};
pub use misfit::{Misfit, deviance_residual, runs_probability};
pub use noise::{Noise, estimate_noise, recovered_counts};
pub use replicas::{ReplicaBias, tangent_bias};
pub use sampling::{Deviations, Groups, Sampled};
pub use scan::{Alignment, scan};
pub use tangent::{Tangent, TangentOptions, tangent};
pub use voigt::{direct_sum, voigt, voigt_derivatives, voigt_fwhm};
pub use window::Window;

/// Full width at half maximum of a Gaussian over its standard deviation, 2 sqrt(2 ln 2).
pub const FWHM_PER_SIGMA: f64 = 2.354_820_045_030_949;
