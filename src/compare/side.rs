//! One measured side against the computed levels: scan, window, fit, protocols, and what each of
//! them leaves uncertain.

use super::bands::SideLevels;
use super::budget::Cause;
use super::inputs::SideInput;
use super::scale::{Curve, Scale};
use super::study::{ComparisonSection, Protocol};
use crate::align::{
    Alignment, EdgeFit, EdgeFitOptions, EdgeProblem, FWHM_PER_SIGMA, Groups, Instrument, Misfit,
    Noise, ReplicaBias, Sampled, Tangent, TangentOptions, Window, scan, tangent, tangent_bias,
    voigt_fwhm,
};
use crate::parse::{Problem, Role};
use crate::quantity::Temperature;
use crate::schema::{Conditions, ProtocolEdge, Quantity, Side};

/// How far a fit may move from where it starts, eV.
const SHIFT_RANGE: f64 = 0.8;
/// Replicas behind a protocol's bias.
const REPLICAS: usize = 200;
/// Resolution that windows are chosen by where none is known, eV.
const USUAL_FWHM: f64 = 0.3;
/// Temperature of a sample of which none is stated, K.
const ROOM: f64 = 300.0;
/// Windows by which the choice is judged: factors on depth and on the gap side.
const OTHER_WINDOWS: [(f64, f64); 3] = [(0.7, 1.0), (1.4, 1.0), (1.0, 0.6)];

/// What is known of one side after its fit.
#[derive(Debug, Clone)]
pub(super) struct SideResult {
    pub side: Side,
    pub scale: Scale,
    pub curve: Curve,
    pub computed_edge: f64,
    pub fit: EdgeFit,
    pub alignment: Alignment,
    pub edges: Vec<(Protocol, ProtocolEdge)>,
    pub causes: Vec<Cause>,
    pub angle_resolved: bool,
    /// Thermal energy kT of the sample, eV; at room temperature where none is stated.
    pub thermal: f64,
}

/// The levels of one side with the groups of their k-points.
#[derive(Debug, Clone, Copy)]
pub(super) struct Computed<'a> {
    pub levels: &'a SideLevels,
    pub edge: f64,
    pub groups: &'a Groups,
}

/// Fits one side.
pub(super) fn side(
    input: &SideInput,
    scale: Scale,
    computed: Computed<'_>,
    comparison: &ComparisonSection,
) -> Result<SideResult, Problem> {
    let section = &input.section;
    let seconds = match (&section.dwell, &section.sweeps) {
        (Some(dwell), Some(sweeps)) => Some(dwell.value * sweeps.value),
        _ => None,
    };
    let curve = Curve::new(&input.spectrum.document, scale.sign, scale.offset, seconds);
    let instrument = instrument(input, &scale);
    let fitter = Fitter {
        input,
        curve: &curve,
        computed,
        comparison,
    };
    let alignment = fitter.scan(instrument)?;
    let (problem, fit) = fitter.fit(alignment.shift + computed.edge, instrument)?;
    let edges = fitter.edges(&problem, &fit);
    let causes = fitter.causes(&scale, &fit, instrument);
    let temperature = section.temperature.as_ref().map_or(ROOM, |t| t.value);
    Ok(SideResult {
        side: input.side,
        computed_edge: computed.edge,
        fit,
        alignment,
        edges,
        causes,
        angle_resolved: is_angle_resolved(&input.spectrum.document.conditions),
        thermal: Temperature::from_kelvin(temperature).thermal_energy(),
        curve,
        scale,
    })
}

fn is_angle_resolved(conditions: &Conditions) -> bool {
    let technique = conditions.technique.as_deref().unwrap_or("").to_lowercase();
    let words = ["angle-resolved", "angle resolved", "arpes", "arups"];
    words.iter().any(|word| technique.contains(word))
}

/// The instrument's Gaussian: stated, else as fitted to the metal, else not known.
fn instrument(input: &SideInput, scale: &Scale) -> Instrument {
    let stated = input.section.resolution_fwhm.as_ref().map(|r| r.value);
    let fitted = scale.metal.as_ref().map(|metal| metal.gaussian_fwhm);
    Instrument {
        sigma: stated.or(fitted).unwrap_or(0.0) / FWHM_PER_SIGMA,
    }
}

struct Fitter<'a> {
    input: &'a SideInput,
    curve: &'a Curve,
    computed: Computed<'a>,
    comparison: &'a ComparisonSection,
}

impl Fitter<'_> {
    fn refuse(&self, message: String, help: &str) -> Problem {
        let problem = Problem::new(message).with_help(help);
        match self.input.spectrum.header_place(Role::Intensity) {
            Some(place) => problem.at(place),
            None => problem,
        }
    }

    fn levels(&self) -> (&[f64], &[f64]) {
        (
            &self.computed.levels.energies,
            &self.computed.levels.weights,
        )
    }

    /// Where on the whole curve the levels fit best.
    fn scan(&self, instrument: Instrument) -> Result<Alignment, Problem> {
        let energies = &self.curve.energies;
        let misfit = Misfit {
            values: &self.curve.values,
            noise: &self.curve.noise,
        };
        let name = self.input.spectrum.source.name();
        let (Some(first), Some(last)) = (energies.first(), energies.last()) else {
            return Err(self.refuse(format!("{name} has no rows"), "give a curve with channels"));
        };
        let range = Window {
            start: first - self.computed.edge,
            stop: last - self.computed.edge,
        };
        let side = self.input.side;
        scan(
            self.levels(),
            energies,
            misfit,
            side,
            instrument.sigma,
            range,
        )
        .ok_or_else(|| {
            self.refuse(
                format!("nothing in {name} looks like the broadened levels at any shift"),
                "the curve must hold the edge of the band, rising out of a background",
            )
        })
    }

    /// The window about an edge: `depth` into the band and `gap` out of it.
    fn window(&self, edge: f64, instrument: Instrument, factors: (f64, f64)) -> Window {
        let fwhm = match instrument.sigma * FWHM_PER_SIGMA {
            0.0 => USUAL_FWHM,
            known => known,
        };
        let usual = (3.0 * fwhm).max(1.0);
        let depth = factors.0 * self.comparison.window.unwrap_or(usual);
        let gap = factors.1 * usual;
        match self.input.side {
            Side::Valence => Window {
                start: edge - depth,
                stop: edge + gap,
            },
            Side::Conduction => Window {
                start: edge - gap,
                stop: edge + depth,
            },
        }
    }

    fn problem(
        &self,
        edge: f64,
        window: Window,
        instrument: Instrument,
    ) -> Result<EdgeProblem, Problem> {
        let options = EdgeFitOptions {
            side: self.input.side,
            window,
            shift: edge - self.computed.edge,
            shift_range: SHIFT_RANGE,
            instrument,
        };
        let curve = self.curve;
        EdgeProblem::new(
            self.levels(),
            &curve.energies,
            &curve.values,
            &curve.noise,
            options,
        )
        .ok_or_else(|| {
            self.refuse(
                format!(
                    "too few channels about the edge of {} at {edge:.2} eV",
                    self.input.spectrum.source.name()
                ),
                "a fit needs eleven channels or more within the window; measure a finer or \
                     longer curve, or set edge_window under [comparison]",
            )
        })
    }

    /// Fits in a window about a guess of the edge, then once more about the edge that was found.
    fn fit(&self, guess: f64, instrument: Instrument) -> Result<(EdgeProblem, EdgeFit), Problem> {
        let window = self.window(guess, instrument, (1.0, 1.0));
        let first = self.problem(guess, window, instrument)?.fit(self.sampled());
        let edge = self.computed.edge + first.shift;
        let window = self.window(edge, instrument, (1.0, 1.0));
        let problem = self.problem(edge, window, instrument)?;
        let fit = problem.fit_from(&first, self.sampled());
        if fit.shift_uncertainty().is_finite() && fit.reduced_chi_square.is_finite() {
            return Ok((problem, fit));
        }
        Err(self.refuse(
            format!(
                "the curve of {} does not determine the edge: the fit has no covariance",
                self.input.spectrum.source.name()
            ),
            "the curve must hold the edge of the band with signal on one side and background on \
             the other",
        ))
    }

    fn sampled(&self) -> Sampled<'_> {
        let levels = self.computed.levels;
        Sampled {
            energies: &levels.energies,
            weights: &levels.weights,
            points: &levels.points,
            groups: self.computed.groups,
        }
    }

    /// The edge by each protocol of the study.
    fn edges(&self, problem: &EdgeProblem, fit: &EdgeFit) -> Vec<(Protocol, ProtocolEdge)> {
        let protocols = self.comparison.protocols.iter();
        protocols
            .filter_map(|&protocol| {
                let edge = match protocol {
                    Protocol::DensityFit => Some(self.by_density(fit)),
                    Protocol::Tangent => self.by_tangent(problem, fit),
                };
                edge.map(|edge| (protocol, edge))
            })
            .collect()
    }

    fn by_density(&self, fit: &EdgeFit) -> ProtocolEdge {
        let edge = Quantity::new(self.computed.edge + fit.shift, fit.shift_uncertainty());
        ProtocolEdge {
            onset: edge,
            bias: Quantity::new(0.0, 0.0),
            edge,
        }
    }

    fn by_tangent(&self, problem: &EdgeProblem, fit: &EdgeFit) -> Option<ProtocolEdge> {
        let width = voigt_fwhm(fit.gaussian_fwhm().0, fit.lorentzian_fwhm().0);
        let options = TangentOptions {
            side: self.input.side,
            width: width.max(4.0 * self.curve.step()),
            reach: 2.0 * width,
        };
        let Tangent { onset, .. } = self.tangent(fit.window, options)?;
        let ReplicaBias {
            bias,
            bias_uncertainty,
            spread,
            ..
        } = tangent_bias(
            problem,
            fit,
            self.computed.edge,
            options,
            REPLICAS,
            self.seed(),
        )?;
        Some(ProtocolEdge {
            onset: Quantity::new(onset, spread),
            bias: Quantity::new(bias, bias_uncertainty),
            edge: Quantity::new(onset - bias, spread.hypot(bias_uncertainty)),
        })
    }

    fn tangent(&self, window: Window, options: TangentOptions) -> Option<Tangent> {
        let part = window.indices(&self.curve.energies);
        let values = &self.curve.values[part.clone()];
        let variances: Vec<f64> = match &self.curve.noise {
            Noise::Poisson => values.iter().map(|n| n.max(1.0)).collect(),
            Noise::Variance(all) => all[part.clone()].to_vec(),
        };
        tangent(&self.curve.energies[part], values, &variances, options)
    }

    /// One stream of random numbers a side, always the same.
    fn seed(&self) -> u64 {
        match self.input.side {
            Side::Valence => 1,
            Side::Conduction => 2,
        }
    }

    /// Everything but the shared sampling of the Brillouin zone.
    fn causes(&self, scale: &Scale, fit: &EdgeFit, instrument: Instrument) -> Vec<Cause> {
        let mut causes = scale.causes.clone();
        causes.push(self.resolution(scale, fit, instrument));
        causes.push(self.window_choice(fit, instrument));
        causes.extend(self.channel_width(scale));
        causes
    }

    fn cause(&self, what: &str, uncertainty: Option<f64>, basis: String) -> Cause {
        let name = format!("{what}, {}", self.input.side.technique());
        Cause::of_edge(name, self.input.side, uncertainty, basis)
    }

    /// Refits with the resolution one standard uncertainty up and down.
    fn resolution(&self, scale: &Scale, fit: &EdgeFit, instrument: Instrument) -> Cause {
        let stated = self.input.section.resolution_fwhm.as_ref();
        let fitted = scale.metal.as_ref().map(|m| m.gaussian_fwhm_uncertainty);
        let uncertainty = match stated {
            Some(stated) => stated.standard_uncertainty,
            None => fitted,
        };
        let Some(uncertainty) = uncertainty.map(|u| u / FWHM_PER_SIGMA) else {
            let basis = "not stated: give resolution_fwhm with a standard_uncertainty";
            return self.cause("resolution", None, basis.to_owned());
        };
        let edge = self.computed.edge + fit.shift;
        let shift = |sign: f64| {
            let moved = Instrument {
                sigma: (instrument.sigma + sign * uncertainty).max(0.0),
            };
            let window = self.window(edge, instrument, (1.0, 1.0));
            let problem = self.problem(edge, window, moved);
            problem.map_or(fit.shift, |problem| {
                problem.fit_from(fit, self.sampled()).shift
            })
        };
        let half = 0.5 * (shift(1.0) - shift(-1.0));
        let basis = format!(
            "refitted with {:.4} eV more and less",
            uncertainty * FWHM_PER_SIGMA
        );
        self.cause("resolution", Some(half.abs()), basis)
    }

    /// Refits in other windows. What their shifts differ by beyond what counting explains, the
    /// difference of the variances of two estimates of which one uses all data of the other
    /// (Hausman, Econometrica 46, 1251 (1978)), is put down to the choice.
    fn window_choice(&self, fit: &EdgeFit, instrument: Instrument) -> Cause {
        let edge = self.computed.edge + fit.shift;
        let variance = fit.shift_uncertainty().powi(2);
        let excess: Vec<f64> = OTHER_WINDOWS
            .into_iter()
            .filter_map(|factors| {
                let window = self.window(edge, instrument, factors);
                let problem = self.problem(edge, window, instrument).ok()?;
                let other = problem.fit_from(fit, self.sampled());
                let explained = (other.shift_uncertainty().powi(2) - variance).abs();
                Some(((other.shift - fit.shift).powi(2) - explained).max(0.0))
            })
            .collect();
        let count = f64::from(u32::try_from(excess.len().max(1)).unwrap_or(1));
        let mean = excess.iter().sum::<f64>() / count;
        let basis = format!(
            "{} other windows, beyond what counting explains",
            excess.len()
        );
        self.cause("choice of window", Some(mean.sqrt()), basis)
    }

    /// A table does not say whether an energy is the middle or the end of its channel. A metal edge
    /// on the same axis shares the convention, and only the difference of the steps is left.
    fn channel_width(&self, scale: &Scale) -> Option<Cause> {
        let metal = self.input.metal.as_ref().filter(|_| scale.metal.is_some());
        let metal_step = metal.map_or(0.0, |metal| {
            Curve::new(&metal.document, scale.sign, 0.0, None).step()
        });
        let width = (self.curve.step() - metal_step).abs();
        (width > 1e-9).then(|| {
            let basis = format!("rectangular, {width:.4} eV wide: middle or end of a channel");
            self.cause("channel width", Some(width / 12f64.sqrt()), basis)
        })
    }
}
