//! What a comparison found.

use schemars::JsonSchema;
use serde::{Deserialize, Serialize};

use super::{Document, Finding, Provenance, Quantity, Side};
use crate::quantity::Reference;

/// The measured side of the comparison.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Measured {
    /// The level that the edges are counted from.
    pub reference: Reference,
    /// Highest occupied level, corrected for the protocol's bias.
    pub valence_edge: Option<Quantity>,
    /// Lowest empty level, corrected for the protocol's bias.
    pub conduction_edge: Option<Quantity>,
    /// Their difference.
    pub gap: Option<Quantity>,
    /// The difference of the raw onsets.
    pub onset_gap: Option<Quantity>,
}

/// Where an extremum of the computed bands stands.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct EdgeLocation {
    /// Energy on the computed scale, eV.
    pub energy_ev: f64,
    /// The k-point, as the table names it.
    pub k: String,
    /// The band, as the table counts.
    pub band: Option<i64>,
    /// The spin channel, as the table counts.
    pub spin: Option<i64>,
    /// The 1-based line of the table, where it was read from one.
    pub line: Option<usize>,
}

/// The computed side of the comparison.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Computed {
    /// Fundamental gap of the table: lowest empty minus highest occupied.
    pub gap: Option<Quantity>,
    /// The least gap at equal k and spin.
    pub direct_gap: Option<Quantity>,
    /// Fundamental gap with the study's corrections, which is compared with the measured one.
    pub corrected_gap: Option<Quantity>,
    /// Fundamental gap of each spin channel, where there is more than one.
    pub spin_gaps: Vec<SpinGap>,
    /// Highest occupied level.
    pub valence_edge: EdgeLocation,
    /// Lowest empty level.
    pub conduction_edge: EdgeLocation,
    /// Pairs of occupied and empty mean-field levels at equal k and spin whose order the
    /// quasiparticle energies turn around.
    pub reordered_levels: usize,
}

/// The gap of one spin channel.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct SpinGap {
    /// The channel, as the table counts.
    pub spin: i64,
    /// Its fundamental gap, eV.
    pub gap_ev: f64,
}

/// Measured minus computed, each side by itself.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Shift {
    /// From the valence side.
    pub valence: Option<Quantity>,
    /// From the conduction side.
    pub conduction: Option<Quantity>,
}

/// How a contribution to the uncertainty was evaluated (GUM 3.3.4).
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
pub enum Evaluation {
    /// By statistics.
    A,
    /// By other means: stated in the study, or a distribution assumed.
    B,
}

/// One contribution to the uncertainty. The four columns are standard uncertainties in eV that this
/// one cause gives to four outputs; a cause that moves both edges alike leaves the gap.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct BudgetRow {
    /// What contributes.
    pub name: String,
    /// How it was evaluated.
    pub evaluation: Evaluation,
    /// To the measured valence edge.
    pub valence_edge_ev: f64,
    /// To the measured conduction edge.
    pub conduction_edge_ev: f64,
    /// To the measured gap.
    pub gap_ev: f64,
    /// To the difference, computed minus measured.
    pub difference_ev: f64,
    /// Degrees of freedom; null means very many.
    pub degrees_of_freedom: Option<f64>,
    /// False where the study states no uncertainty for this cause, which then enters with none.
    pub stated: bool,
    /// Where the number comes from.
    pub basis: String,
}

/// The expanded uncertainty of the difference.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Expanded {
    /// Combined standard uncertainty, eV.
    pub standard_uncertainty_ev: f64,
    /// Effective degrees of freedom (Welch-Satterthwaite, GUM G.4.1); null means very many.
    pub effective_degrees_of_freedom: Option<f64>,
    /// Coverage factor for 95 % (Student's t).
    pub coverage_factor: f64,
    /// Their product, eV.
    pub expanded_uncertainty_ev: f64,
}

/// The answer.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Verdict {
    /// Whether computed and measured agree; null where the data cannot tell.
    pub agrees: Option<bool>,
    /// One sentence.
    pub statement: String,
}

/// Something that a reader of the numbers should know.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Caution {
    /// Its name.
    pub name: String,
    /// What was seen, and what to do.
    pub message: String,
}

/// One edge by one protocol.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct ProtocolEdge {
    /// What the protocol reads off the curve.
    pub onset: Quantity,
    /// Onset minus edge, as measured on replicas of the fitted model.
    pub bias: Quantity,
    /// Onset minus bias.
    pub edge: Quantity,
}

/// Both edges by one protocol. Uncertainties are of this protocol's reading alone: counting
/// statistics and its own spread, without calibration or computed contributions.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct ProtocolRecord {
    /// `density-fit` or `tangent`.
    pub protocol: String,
    /// Whether the edge rests on the computed density.
    pub model_dependent: bool,
    /// Whether the headline numbers are this protocol's.
    pub headline: bool,
    /// Valence side.
    pub valence: Option<ProtocolEdge>,
    /// Conduction side.
    pub conduction: Option<ProtocolEdge>,
    /// Difference of the corrected edges.
    pub gap: Option<Quantity>,
    /// Difference of the onsets.
    pub onset_gap: Option<Quantity>,
}

/// Another minimum of the misfit.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct Alternative {
    /// Its shift, measured minus computed, eV.
    pub shift_ev: f64,
    /// Deviance above the best minimum's, divided by the dispersion.
    pub deviance_above_best: f64,
}

/// The fit of one side.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct FitRecord {
    /// Which side.
    pub side: Side,
    /// Measured minus computed.
    pub shift: Quantity,
    /// Gaussian full width at half maximum, instrument and sample together, eV.
    pub gaussian_fwhm: Quantity,
    /// Lorentzian full width at half maximum, eV.
    pub lorentzian_fwhm: Quantity,
    /// First energy of the fitted window on the common scale, eV.
    pub window_start_ev: f64,
    /// Last energy of the fitted window, eV.
    pub window_stop_ev: f64,
    /// Number of channels fitted.
    pub channels: usize,
    /// Channels minus parameters.
    pub degrees_of_freedom: usize,
    /// `poisson`, `stated-uncertainty` or `estimated-variance`.
    pub statistics: String,
    /// Pearson's chi-square over the degrees of freedom.
    pub reduced_chi_square: f64,
    /// Probability of as few or fewer runs of residuals of one sign in a right model.
    pub runs_probability: f64,
    /// Model evaluations.
    pub evaluations: usize,
    /// Whether the fit converged.
    pub converged: bool,
    /// Other minima of the misfit that the data do not rule out.
    pub alternatives: Vec<Alternative>,
}

/// A file that belongs to the result.
#[derive(Debug, Clone, PartialEq, Eq, Serialize, Deserialize, JsonSchema)]
pub struct FileRecord {
    /// Path, relative to the folder of the result.
    pub file: String,
    /// Its size in bytes.
    pub size_bytes: u64,
    /// The SHA-256 of its bytes, in lower-case hexadecimal.
    pub sha256: String,
}

/// What a comparison found.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize, JsonSchema)]
pub struct ResultDocument {
    /// `bandrule/result/1`.
    pub schema: String,
    /// The study's title.
    pub title: String,
    /// The measured side.
    pub measured: Measured,
    /// The computed side.
    pub computed: Computed,
    /// Measured minus computed.
    pub shift: Shift,
    /// Computed gap with corrections minus measured gap.
    pub difference: Option<Quantity>,
    /// The difference over its expanded uncertainty (ISO/IEC 17043).
    pub en_score: Option<f64>,
    /// The expanded uncertainty of the difference.
    pub expanded: Option<Expanded>,
    /// The largest expanded uncertainty at which the study calls agreement, eV.
    pub tolerance_ev: f64,
    /// One row a contribution.
    pub budget: Vec<BudgetRow>,
    /// The answer.
    pub verdict: Verdict,
    /// What a reader should know.
    pub cautions: Vec<Caution>,
    /// Every protocol's edges.
    pub protocols: Vec<ProtocolRecord>,
    /// The fits.
    pub fits: Vec<FitRecord>,
    /// What the rules say of the files.
    pub findings: Vec<Finding>,
    /// Where the numbers come from.
    pub provenance: Provenance,
    /// The other files of the result.
    pub files: Vec<FileRecord>,
}

impl Document for ResultDocument {
    const KIND: &'static str = "result";
}
