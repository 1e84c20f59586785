//! From a measured axis to energies against a common reference, with what that costs in uncertainty.
//!
//! Photoemission, kinetic axis from the analyser's vacuum level: E - `E_F` = `E_kin` + phi + e V minus
//! h nu, with V the potential of the sample against the spectrometer: a sample at -5 V pushes its
//! electrons to kinetic energies 5 eV higher. From the sample's vacuum level: E - `E_F` = `E_kin` +
//! `phi_sample` minus h nu; from the Fermi level: E - `E_F` = `E_kin` - h nu. A metal's Fermi edge on the
//! same axis supersedes all of these. Binding axis: E = -`E_B`.
//!
//! Inverse photoemission, isochromat: E - `E_F` = e U + `phi_cathode` + 2 k `T_cathode` - h nu.

use super::budget::Cause;
use super::inputs::SideInput;
use super::study::Stated;
use crate::align::{MetalEdge, Noise, fit_metal_edge};
use crate::check::Validated;
use crate::parse::{Problem, Role};
use crate::quantity::{AxisKind, IntensityUnit, Reference, Temperature};
use crate::schema::{IntensityKind, Provenance, Side, Spectrum};

/// How an axis becomes the common scale: energy = sign * axis + offset.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Scale {
    pub sign: f64,
    pub offset: f64,
    pub reference: Reference,
    pub causes: Vec<Cause>,
    pub metal: Option<MetalEdge>,
}

/// Work out the scale of one side.
pub(super) fn scale(input: &SideInput, provenance: &mut Provenance) -> Result<Scale, Problem> {
    let spectrum = &input.spectrum.document;
    let sign = match spectrum.axis {
        AxisKind::Kinetic | AxisKind::FinalState => 1.0,
        AxisKind::Binding => -1.0,
        AxisKind::Photon => return Err(no_photon_axis(input)),
    };
    let mut scale = if let Some(metal) = &input.metal {
        from_metal(input, metal, sign)?
    } else if spectrum.axis == AxisKind::Kinetic {
        from_kinetic(input)?
    } else {
        Scale {
            sign,
            offset: 0.0,
            reference: spectrum.reference,
            causes: Vec::new(),
            metal: None,
        }
    };
    add_offset(input, &mut scale);
    provenance.step(
        format!("{} axis", input.side.technique()),
        format!(
            "energy = {}{} axis {} {:.4} eV, against reference {}",
            if scale.sign < 0.0 { "-" } else { "" },
            spectrum.axis,
            if scale.offset < 0.0 { "-" } else { "+" },
            scale.offset.abs(),
            scale.reference
        ),
    );
    Ok(scale)
}

fn no_photon_axis(input: &SideInput) -> Problem {
    let problem = Problem::new("a curve against photon energy has no binding energies to compare");
    at_energy_header(problem, &input.spectrum)
        .with_help("give a curve on a kinetic, binding or final-state axis")
}

fn at_energy_header(problem: Problem, spectrum: &Validated<Spectrum>) -> Problem {
    match spectrum.header_place(Role::Energy) {
        Some(place) => problem.at(place),
        None => problem,
    }
}

/// A cause of uncertainty of the whole axis of one side.
fn cause(input: &SideInput, what: &str, stated: &Stated, sensitivity: f64) -> Cause {
    let name = format!("{what}, {}", input.side.technique());
    let basis = format!("{}:{}", stated.place.file, stated.place.line);
    let u = stated.standard_uncertainty.map(|u| u * sensitivity);
    Cause::of_edge(name, input.side, u, basis)
}

/// The user's own correction of the axis.
fn add_offset(input: &SideInput, scale: &mut Scale) {
    if let Some(offset) = &input.section.energy_offset {
        scale.offset += offset.value;
        scale
            .causes
            .push(cause(input, "energy offset", offset, 1.0));
    } else if scale.causes.is_empty() {
        scale.causes.push(Cause::of_edge(
            format!("calibration of the axis, {}", input.side.technique()),
            input.side,
            None,
            "not stated: give energy_offset with a standard_uncertainty, or a metal edge"
                .to_owned(),
        ));
    }
}

/// The zero of a kinetic axis from work function and photon energy.
fn from_kinetic(input: &SideInput) -> Result<Scale, Problem> {
    let section = &input.section;
    let Some(photon) = &section.photon_energy else {
        return Err(kinetic_needs(input, without_photon_energy(input)));
    };
    let mut scale = Scale {
        sign: 1.0,
        offset: -photon.value,
        reference: Reference::Fermi,
        causes: vec![cause(input, "photon energy", photon, 1.0)],
        metal: None,
    };
    match input.side {
        Side::Valence => kinetic_zero(input, &mut scale)?,
        Side::Conduction => cathode_zero(input, &mut scale)?,
    }
    Ok(scale)
}

/// What ties a kinetic axis that has no photon energy.
fn without_photon_energy(input: &SideInput) -> &'static str {
    let section = &input.section;
    let has_zero = match input.side {
        Side::Valence => {
            section.analyser_work_function.is_some()
                || section.sample_work_function.is_some()
                || input.spectrum.document.reference != Reference::Unknown
        }
        Side::Conduction => section.cathode_work_function.is_some(),
    };
    match (has_zero, input.side) {
        (true, _) => {
            "photon_energy = \"… eV\", or fermi_edge = \"FILE\" of a metal on the same axis"
        }
        (false, Side::Valence) => {
            "fermi_edge = \"FILE\" of a metal on the same axis, or photon_energy = \"… eV\" and \
             analyser_work_function = \"… eV\""
        }
        (false, Side::Conduction) => {
            "fermi_edge = \"FILE\" of a metal on the same axis, or photon_energy = \"… eV\", \
             cathode_work_function = \"… eV\" and cathode_temperature = \"… K\""
        }
    }
}

/// Photoemission: one of the three zeros of a kinetic axis.
fn kinetic_zero(input: &SideInput, scale: &mut Scale) -> Result<(), Problem> {
    let section = &input.section;
    let reference = input.spectrum.document.reference;
    match (
        &section.analyser_work_function,
        &section.sample_work_function,
        reference,
    ) {
        (Some(analyser), Some(sample), _) => Err(Problem::new(
            "two zeros of the kinetic axis: analyser_work_function and sample_work_function",
        )
        .at(sample.place.clone())
        .with_related(analyser.place.clone(), "the other one")
        .with_help("keep the one that the kinetic energies are counted from")),
        (Some(phi), None, Reference::Unknown) => {
            scale.offset += phi.value;
            scale
                .causes
                .push(cause(input, "analyser work function", phi, 1.0));
            if let Some(bias) = &section.sample_bias {
                scale.offset += bias.value;
                scale.causes.push(cause(input, "sample bias", bias, 1.0));
            }
            Ok(())
        }
        (Some(phi), None, stated) => Err(Problem::new(format!(
            "kinetic energies against {stated} need no analyser work function"
        ))
        .at(phi.place.clone())
        .with_help("remove it, or the reference")),
        (None, Some(phi), Reference::Vacuum | Reference::Unknown) => {
            scale.offset += phi.value;
            scale
                .causes
                .push(cause(input, "sample work function", phi, 1.0));
            Ok(())
        }
        (None, None, Reference::Vacuum) => {
            scale.reference = Reference::Vacuum;
            Ok(())
        }
        (None, None, Reference::Fermi) => Ok(()),
        _ => Err(kinetic_needs(
            input,
            "analyser_work_function = \"… eV\", or fermi_edge = \"FILE\" of a metal on the same axis",
        )),
    }
}

/// Inverse photoemission: the cathode.
fn cathode_zero(input: &SideInput, scale: &mut Scale) -> Result<(), Problem> {
    let section = &input.section;
    let Some(phi) = &section.cathode_work_function else {
        return Err(kinetic_needs(
            input,
            "cathode_work_function = \"… eV\", or fermi_edge = \"FILE\" of a metal on the same axis",
        ));
    };
    scale.offset += phi.value;
    scale
        .causes
        .push(cause(input, "cathode work function", phi, 1.0));
    if let Some(temperature) = &section.cathode_temperature {
        let thermal = Temperature::from_kelvin(temperature.value).thermal_energy();
        scale.offset += 2.0 * thermal;
        let sensitivity = 2.0 * thermal / temperature.value;
        scale.causes.push(cause(
            input,
            "cathode temperature",
            temperature,
            sensitivity,
        ));
    } else {
        return Err(kinetic_needs(
            input,
            "cathode_temperature = \"… K\": the mean thermal energy 2kT is about 0.19 eV at 1100 K",
        ));
    }
    Ok(())
}

fn kinetic_needs(input: &SideInput, key: &str) -> Problem {
    let section = match input.side {
        Side::Valence => "photoemission",
        Side::Conduction => "inverse_photoemission",
    };
    at_energy_header(
        Problem::new(format!(
            "a kinetic axis without what ties it to the Fermi level ({})",
            input.side.technique()
        )),
        &input.spectrum,
    )
    .with_help(format!("under [{section}] add {key}"))
}

/// The scale from a metal's Fermi edge, checked against a work function where both are there.
fn from_metal(input: &SideInput, metal: &Validated<Spectrum>, sign: f64) -> Result<Scale, Problem> {
    let spectrum = &input.spectrum.document;
    if metal.document.axis != spectrum.axis {
        return Err(at_energy_header(
            Problem::new(format!(
                "the metal's axis is {} and the sample's is {}",
                metal.document.axis, spectrum.axis
            )),
            metal,
        )
        .with_help("measure or export both on the same axis"));
    }
    let edge = fitted(input, metal, sign)?;
    check_against_work_function(input, &edge)?;
    let rule = "metal Fermi edge";
    let file = metal.source.name();
    let name = format!("{rule}, {}", input.side.technique());
    let degrees = f64::from(u32::try_from(edge.degrees_of_freedom).unwrap_or(u32::MAX));
    Ok(Scale {
        sign,
        offset: -edge.position,
        reference: Reference::Fermi,
        causes: vec![
            Cause::of_edge(
                name,
                input.side,
                Some(edge.position_uncertainty),
                format!("fit of {file}"),
            )
            .shared_as(format!("{rule} {file}"))
            .by_statistics(degrees),
        ],
        metal: Some(edge),
    })
}

fn fitted(input: &SideInput, metal: &Validated<Spectrum>, sign: f64) -> Result<MetalEdge, Problem> {
    let temperature = metal.document.conditions.temperature_k.or(input
        .section
        .temperature
        .as_ref()
        .map(|t| t.value));
    let Some(temperature) = temperature else {
        return Err(at_energy_header(
            Problem::new("the temperature of the metal is not stated"),
            metal,
        )
        .with_help("add temperature = \"300 K\" beside fermi_edge"));
    };
    let curve = Curve::new(&metal.document, sign, 0.0, None);
    let thermal = Temperature::from_kelvin(temperature).thermal_energy();
    let edge = fit_metal_edge(
        &curve.energies,
        &curve.values,
        &curve.noise,
        thermal,
        input.side,
    );
    edge.filter(|edge| edge.converged && edge.position_uncertainty.is_finite())
        .ok_or_else(|| {
            let what = match input.side {
                Side::Valence => "falls from a plateau to the background as energy rises",
                Side::Conduction => "rises from the background to a plateau as energy rises",
            };
            at_energy_header(
                Problem::new("no Fermi edge could be fitted to the metal's curve"),
                metal,
            )
            .with_help(format!(
                "give a curve of at least twelve channels that {what}"
            ))
        })
}

/// Where a work function is given too, the two must agree.
fn check_against_work_function(input: &SideInput, edge: &MetalEdge) -> Result<(), Problem> {
    if input.spectrum.document.axis != AxisKind::Kinetic {
        return Ok(());
    }
    let given = match input.side {
        Side::Valence => &input.section.analyser_work_function,
        Side::Conduction => &input.section.cathode_work_function,
    };
    let (Some(phi), Ok(other)) = (given, from_kinetic(input)) else {
        return Ok(());
    };
    let u: f64 = other
        .causes
        .iter()
        .map(|cause| cause.size().powi(2))
        .sum::<f64>()
        + edge.position_uncertainty.powi(2);
    let apart = -edge.position - other.offset;
    let limit = 3.0 * u.sqrt().max(0.01);
    if apart.abs() <= limit {
        return Ok(());
    }
    let file = input.section.fermi_edge.as_ref();
    let problem = Problem::new(format!(
        "the metal's Fermi edge and the work function put the Fermi level {:.3} eV apart, more \
         than {limit:.3} eV",
        apart.abs()
    ))
    .at(phi.place.clone())
    .with_help(format!(
        "the edge stands at {:.3} eV on the axis, the work function puts it at {:.3} eV: correct \
         or remove the one that is wrong (work function, photon energy, bias and its sign)",
        edge.position, -other.offset
    ));
    Err(match file {
        Some(file) => problem.with_related(file.place.clone(), "the metal"),
        None => problem,
    })
}

/// A curve on the common scale, ascending, with its noise.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Curve {
    pub energies: Vec<f64>,
    pub values: Vec<f64>,
    pub noise: Noise,
    pub unit: &'static str,
    pub statistics: &'static str,
}

impl Curve {
    /// Puts a document on the common scale. `seconds` is dwell time times sweeps, where known: rates
    /// become counts where that gives whole numbers.
    pub(super) fn new(spectrum: &Spectrum, sign: f64, offset: f64, seconds: Option<f64>) -> Self {
        let axis: Vec<f64> = spectrum
            .energy_ev
            .iter()
            .map(|e| sign * e + offset)
            .collect();
        let descending = axis.first() > axis.last();
        let ordered = |list: &[f64]| -> Vec<f64> {
            if descending {
                list.iter().rev().copied().collect()
            } else {
                list.to_vec()
            }
        };
        let values = ordered(&spectrum.intensity);
        let whole = values.iter().all(|n| n.fract() == 0.0);
        let counted = match (spectrum.intensity_kind, seconds) {
            (IntensityKind::Counts, _) if whole => Some(values.clone()),
            (IntensityKind::CountsPerSecond, Some(seconds)) => {
                crate::align::recovered_counts(&values, seconds)
            }
            _ => None,
        };
        let energies = ordered(&axis);
        if let Some(uncertainty) = &spectrum.standard_uncertainty {
            let variances = ordered(uncertainty).iter().map(|u| u * u).collect();
            return Self {
                energies,
                values,
                noise: Noise::Variance(variances),
                unit: unit(spectrum.intensity_kind),
                statistics: "stated-uncertainty",
            };
        }
        match counted {
            Some(values) => Self {
                energies,
                values,
                noise: Noise::Poisson,
                unit: IntensityUnit::Counts.symbol(),
                statistics: "poisson",
            },
            None => Self {
                energies,
                noise: Noise::Variance(crate::align::estimate_noise(&values)),
                values,
                unit: unit(spectrum.intensity_kind),
                statistics: "estimated-variance",
            },
        }
    }

    /// Mean width of a channel.
    pub(super) fn step(&self) -> f64 {
        let n = f64::from(u32::try_from(self.energies.len()).unwrap_or(u32::MAX));
        match (self.energies.first(), self.energies.last()) {
            (Some(first), Some(last)) if n > 1.0 => (last - first) / (n - 1.0),
            _ => 0.0,
        }
    }
}

fn unit(kind: IntensityKind) -> &'static str {
    match kind {
        IntensityKind::Counts => IntensityUnit::Counts,
        IntensityKind::CountsPerSecond => IntensityUnit::CountsPerSecond,
        IntensityKind::Arbitrary => IntensityUnit::Arbitrary,
    }
    .symbol()
}
