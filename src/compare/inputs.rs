//! The files of a study, read, checked and reconciled with what the study says of them.

use super::error::Error;
use super::study::{NamedFile, SideSection, Stated, Study};
use crate::check::{Validated, validate_levels, validate_spectrum};
use crate::parse::{ConditionKey, Hints, Parsed, Problem, Source, read_levels, read_spectrum};
use crate::schema::{Conditions, Finding, Levels, Severity, Side, Spectrum};

/// One measured side, ready to be put on the common scale.
#[derive(Debug, Clone)]
pub(super) struct SideInput {
    pub side: Side,
    pub spectrum: Validated<Spectrum>,
    pub metal: Option<Validated<Spectrum>>,
    /// The study's section with what the files say filled in.
    pub section: SideSection,
}

/// Everything that a comparison works on.
#[derive(Debug, Clone)]
pub(super) struct Inputs {
    pub levels: Validated<Levels>,
    pub sides: Vec<SideInput>,
    pub findings: Vec<Finding>,
}

/// What could not be taken, collected over all files.
#[derive(Debug, Default)]
struct Trouble {
    problems: Vec<Problem>,
    findings: Vec<Finding>,
}

/// Reads every file of a study.
pub(super) fn read(study: &Study) -> Result<Inputs, Error> {
    let mut trouble = Trouble::default();
    let levels = trouble.levels(&study.computed.levels, &study.computed.hints);
    let mut sides = Vec::new();
    for (side, section) in [
        (Side::Valence, &study.photoemission),
        (Side::Conduction, &study.inverse_photoemission),
    ] {
        if let Some(section) = section {
            sides.extend(trouble.side(side, section));
        }
    }
    let Trouble { problems, findings } = trouble;
    if !problems.is_empty() {
        return Err(Error::Refused(problems));
    }
    match levels {
        Some(levels) if findings.iter().all(|f| f.severity < Severity::Error) => Ok(Inputs {
            levels,
            sides,
            findings,
        }),
        _ => Err(Error::Findings(findings)),
    }
}

impl Trouble {
    fn source(&mut self, file: &NamedFile) -> Option<Source> {
        match Source::read(&file.path, &file.shown) {
            Ok(source) => Some(source),
            Err(problem) => {
                let label = "named in the study here";
                self.problems
                    .push(problem.with_related(file.place.clone(), label));
                None
            }
        }
    }

    fn levels(&mut self, file: &NamedFile, hints: &Hints) -> Option<Validated<Levels>> {
        let source = self.source(file)?;
        match read_levels(source, hints) {
            Ok(parsed) => {
                let (validated, findings) = validate_levels(parsed);
                self.findings.extend(findings);
                validated
            }
            Err(problems) => {
                self.problems.extend(problems);
                None
            }
        }
    }

    fn spectrum(&mut self, file: &NamedFile, hints: &Hints) -> Option<Validated<Spectrum>> {
        let source = self.source(file)?;
        match read_spectrum(source, hints) {
            Ok(parsed) => {
                let (validated, findings) = validate_spectrum(parsed);
                self.findings.extend(findings);
                validated
            }
            Err(problems) => {
                self.problems.extend(problems);
                None
            }
        }
    }

    fn side(&mut self, side: Side, section: &SideSection) -> Option<SideInput> {
        let spectrum = self.spectrum(&section.spectrum, &section.hints);
        let metal_file = section.fermi_edge.as_ref();
        let metal = metal_file.map(|file| self.spectrum(file, &section.hints));
        let spectrum = spectrum?;
        let metal = match metal {
            Some(metal) => Some(metal?),
            None => None,
        };
        let section = match reconciled(section, &spectrum, metal.as_deref()) {
            Ok(section) => section,
            Err(problems) => {
                self.problems.extend(problems);
                return None;
            }
        };
        Some(SideInput {
            side,
            spectrum,
            metal,
            section,
        })
    }
}

/// One condition of a measurement: where the study has it, and where a document does.
type Condition = (
    ConditionKey,
    &'static str,
    fn(&mut SideSection) -> &mut Option<Stated>,
    fn(&Conditions) -> Option<f64>,
);

const CONDITIONS: [Condition; 8] = [
    (
        ConditionKey::PhotonEnergy,
        "photon energy",
        |s| &mut s.photon_energy,
        |c| c.photon_energy_ev,
    ),
    (
        ConditionKey::AnalyserWorkFunction,
        "analyser work function",
        |s| &mut s.analyser_work_function,
        |c| c.analyser_work_function_ev,
    ),
    (
        ConditionKey::CathodeWorkFunction,
        "cathode work function",
        |s| &mut s.cathode_work_function,
        |c| c.cathode_work_function_ev,
    ),
    (
        ConditionKey::SampleBias,
        "sample bias",
        |s| &mut s.sample_bias,
        |c| c.sample_bias_v,
    ),
    (
        ConditionKey::Resolution,
        "resolution",
        |s| &mut s.resolution_fwhm,
        |c| c.resolution_fwhm_ev,
    ),
    (
        ConditionKey::Temperature,
        "temperature",
        |s| &mut s.temperature,
        |c| c.temperature_k,
    ),
    (
        ConditionKey::Dwell,
        "dwell time",
        |s| &mut s.dwell,
        |c| c.dwell_s,
    ),
    (
        ConditionKey::Sweeps,
        "number of sweeps",
        |s| &mut s.sweeps,
        |c| c.sweeps,
    ),
];

/// The unit that a condition is kept in, as it follows a number.
fn unit(key: ConditionKey) -> &'static str {
    match key {
        ConditionKey::SampleBias => " V",
        ConditionKey::Temperature => " K",
        ConditionKey::Dwell => " s",
        ConditionKey::Sweeps => "",
        _ => " eV",
    }
}

/// The section with what the file says filled in. What the two say differently is a problem that
/// shows both; what the metal's file says must fit too, where the axis depends on it.
fn reconciled(
    section: &SideSection,
    spectrum: &Parsed<Spectrum>,
    metal: Option<&Parsed<Spectrum>>,
) -> Result<SideSection, Vec<Problem>> {
    let mut merged = section.clone();
    let mut problems = Vec::new();
    for (key, name, study_value, file_value) in CONDITIONS {
        let slot = study_value(&mut merged);
        if let Some(found) = stated_in(spectrum, key, file_value) {
            match slot {
                Some(known) if differ(known.value, found.value) => problems.push(
                    Problem::new(format!(
                        "the study and {} state different values of the {name}: {} and {}{}",
                        spectrum.source.name(),
                        known.value,
                        found.value,
                        unit(key)
                    ))
                    .at(known.place.clone())
                    .with_related(found.place.clone(), "the file says")
                    .with_help("correct the one that is wrong, or remove it from the study"),
                ),
                Some(_) => {}
                None => *slot = Some(found),
            }
        }
        let on_axis = matches!(key, ConditionKey::PhotonEnergy | ConditionKey::SampleBias);
        let of_metal = metal.and_then(|metal| stated_in(metal, key, file_value));
        if let (true, Some(known), Some(found)) = (on_axis, &slot, of_metal)
            && differ(known.value, found.value)
        {
            problems.push(
                Problem::new(format!(
                    "the metal was measured at another {name} than the sample: {} and {}{}",
                    found.value,
                    known.value,
                    unit(key)
                ))
                .at(found.place)
                .with_related(known.place.clone(), "the sample's")
                .with_help("use a metal edge that was measured on the same axis"),
            );
        }
    }
    if problems.is_empty() {
        Ok(merged)
    } else {
        Err(problems)
    }
}

fn stated_in(
    parsed: &Parsed<Spectrum>,
    key: ConditionKey,
    value: fn(&Conditions) -> Option<f64>,
) -> Option<Stated> {
    Some(Stated {
        value: value(&parsed.document.conditions)?,
        standard_uncertainty: None,
        place: parsed.statement(key)?.place.clone(),
    })
}

/// Whether two statements of one number are more than a rounding apart.
fn differ(a: f64, b: f64) -> bool {
    (a - b).abs() > 1e-6 * a.abs().max(b.abs())
}
