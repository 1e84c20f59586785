//! The study file: what is to be compared with what, in TOML, every problem located and told at once.

mod section;
mod sections;

use std::path::{Path, PathBuf};

use crate::parse::{Hints, Place, Problem, Source};
use crate::quantity::Reference;
use section::Reader;

/// A number as somebody stated it, with where.
#[derive(Debug, Clone, PartialEq)]
pub struct Stated {
    /// The value: energies in eV, potentials in V, temperatures in K, times in s.
    pub value: f64,
    /// Its standard uncertainty in the same unit, where stated.
    pub standard_uncertainty: Option<f64>,
    /// Where it stands.
    pub place: Place,
}

/// A file that the study names.
#[derive(Debug, Clone, PartialEq)]
pub struct NamedFile {
    /// Where it is.
    pub path: PathBuf,
    /// As the study spells it.
    pub shown: String,
    /// Where the study names it.
    pub place: Place,
}

/// Which energies of the table are compared.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum ComputedEnergies {
    /// Quasiparticle energies.
    #[default]
    Quasiparticle,
    /// Mean-field energies.
    MeanField,
}

/// `[computed]`.
#[derive(Debug, Clone, PartialEq)]
pub struct ComputedSection {
    /// The table of levels.
    pub levels: NamedFile,
    /// The zero of its energies.
    pub reference: Option<Reference>,
    /// Where `reference` stands.
    pub reference_place: Option<Place>,
    /// Which energies are compared.
    pub energies: ComputedEnergies,
    /// Number of occupied bands at every k-point and spin, where the table has no occupations.
    pub occupied_bands: Option<Stated>,
    /// How to read the table.
    pub hints: Hints,
    /// `[computed.uncertainty]`: name and standard uncertainty of the gap, eV.
    pub uncertainty: Vec<(String, Stated)>,
}

/// `[photoemission]` or `[inverse_photoemission]`.
#[derive(Debug, Clone, PartialEq)]
pub struct SideSection {
    /// The measured curve.
    pub spectrum: NamedFile,
    /// How to read it.
    pub hints: Hints,
    /// Photon energy.
    pub photon_energy: Option<Stated>,
    /// Work function of the analyser (photoemission).
    pub analyser_work_function: Option<Stated>,
    /// Work function of the sample, where kinetic energies count from its vacuum level.
    pub sample_work_function: Option<Stated>,
    /// Work function of the cathode (inverse photoemission).
    pub cathode_work_function: Option<Stated>,
    /// Temperature of the cathode.
    pub cathode_temperature: Option<Stated>,
    /// A metal measured on the same axis.
    pub fermi_edge: Option<NamedFile>,
    /// Potential of the sample against the spectrometer, in volts.
    pub sample_bias: Option<Stated>,
    /// Added to the energies on the electron scale.
    pub energy_offset: Option<Stated>,
    /// Full width at half maximum of the instrument's Gaussian.
    pub resolution_fwhm: Option<Stated>,
    /// Temperature of sample and metal.
    pub temperature: Option<Stated>,
    /// Time on a channel in one sweep.
    pub dwell: Option<Stated>,
    /// Number of sweeps.
    pub sweeps: Option<Stated>,
}

/// How an edge is read off a curve.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Protocol {
    /// The broadened computed density fitted to the edge region.
    DensityFit,
    /// The leading edge continued to the background.
    Tangent,
}

impl Protocol {
    /// Every protocol.
    pub const ALL: [Self; 2] = [Self::DensityFit, Self::Tangent];

    /// The name in study files and results.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::DensityFit => "density-fit",
            Self::Tangent => "tangent",
        }
    }
}

/// `[comparison]`.
#[derive(Debug, Clone, PartialEq)]
pub struct ComparisonSection {
    /// The protocols; the first gives the headline numbers.
    pub protocols: Vec<Protocol>,
    /// The largest expanded uncertainty at which agreement is called, eV.
    pub tolerance: f64,
    /// How far into the band the fit reaches, eV; by the resolution where not given.
    pub window: Option<f64>,
}

/// One entry of `[corrections]`.
#[derive(Debug, Clone, PartialEq)]
pub struct Correction {
    /// Its key.
    pub name: &'static str,
    /// Its value in eV with its uncertainty.
    pub stated: Stated,
    /// What one unit of it does to the computed gap: +1, or -1 for a shift of the valence edge.
    pub sign: f64,
}

/// A study.
#[derive(Debug, Clone, PartialEq)]
pub struct Study {
    /// The file itself.
    pub source: Source,
    /// Its title; the name of the file where it has none.
    pub title: String,
    /// The computation.
    pub computed: ComputedSection,
    /// The photoemission measurement.
    pub photoemission: Option<SideSection>,
    /// The inverse photoemission measurement.
    pub inverse_photoemission: Option<SideSection>,
    /// How to compare.
    pub comparison: ComparisonSection,
    /// What to add to the computed gap.
    pub corrections: Vec<Correction>,
}

impl Study {
    /// Reads a study file. `shown` is its path as the user gave it.
    ///
    /// # Errors
    /// Every problem of the file, located: what is no TOML, unknown keys, missing keys, wrong units,
    /// files that are not there.
    pub fn read(path: &Path, shown: &str) -> Result<Self, Vec<Problem>> {
        let source = Source::read(path, shown).map_err(|problem| vec![problem])?;
        let folder = path.parent().unwrap_or(Path::new("")).to_owned();
        Self::from_source(&source, &folder)
    }

    /// Reads a study from text; the paths in it are relative to `folder`.
    ///
    /// # Errors
    /// As [`Study::read`].
    pub fn from_source(source: &Source, folder: &Path) -> Result<Self, Vec<Problem>> {
        let text = source.text();
        let (table, errors) = toml::de::DeTable::parse_recoverable(text);
        if !errors.is_empty() {
            return Err(errors
                .iter()
                .map(|error| {
                    let span = error.span().unwrap_or(0..0);
                    Problem::new(format!("not TOML: {}", error.message()))
                        .at(source.place(span))
                        .with_help(
                            "a study is TOML: [table] on a line of its own, then key = \"text\" \
                             line by line",
                        )
                })
                .collect());
        }
        let mut reader = Reader::new(source, folder);
        let study = sections::study(&mut reader, table.get_ref());
        let problems = reader.into_problems();
        match study {
            Some(study) if problems.is_empty() => Ok(study),
            _ => Err(problems),
        }
    }
}
