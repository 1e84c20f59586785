//! What a block holds.

use super::anchor::Anchor;
use super::experiment::{Label, List, Text};
use super::keyword::{AnalyserMode, SignalMode, SputterMode, Technique};

/// A real number; `None` where the file has 1E37, which stands for an unknown value.
pub type Real = Option<f64>;

/// One block. Parts that a later block leaves out hold the first block's value.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Block {
    /// What the block is called.
    pub identifier: Text,
    /// What was measured.
    pub sample: Text,
    /// Items 1 to 7: when.
    pub date: Date,
    /// Item 8: comment lines.
    pub comment: List<Text>,
    /// Item 9: the technique.
    pub technique: Technique,
    /// Item 10: the position in the map, from 1; in modes MAP and MAPDP.
    pub position: Option<Pair<i64>>,
    /// Item 11: a value for each experimental variable.
    pub experimental_values: List<Real>,
    /// Item 12: the analysis source.
    pub source_label: Text,
    /// Item 13: the sputtering particle; in depth profiles and ion or atom techniques.
    pub particle: Option<Particle>,
    /// Item 14: characteristic energy of the analysis source, in eV.
    pub source_energy_ev: Real,
    /// Item 15: strength of the analysis source, in W for X-rays, in nA for beams.
    pub source_strength: Real,
    /// Item 16: width of the analysis beam, in micrometres.
    pub beam_width_um: Pair<Real>,
    /// Item 17: field of view, in micrometres; in modes MAP, MAPDP, MAPSV, MAPSVDP and SEM.
    pub field_of_view_um: Option<Pair<Real>>,
    /// Item 18: where the lines of an image run; in modes MAPSV, MAPSVDP and SEM.
    pub linescans: Option<Linescans>,
    /// Items 19 and 20: where the analysis source comes from.
    pub source_direction: Direction,
    /// Item 21: how the analyser is driven.
    pub analyser_mode: AnalyserMode,
    /// Item 22: pass energy in eV, retarding ratio or mass resolution, as the mode has it.
    pub pass_energy_or_ratio: Real,
    /// Item 23: differential width in eV; with technique AES diff.
    pub differential_width_ev: Option<Real>,
    /// Item 24: magnification of the analyser's transfer lens.
    pub magnification: Real,
    /// Item 25: work function of the analyser, or acceptance energy of an atom or ion, in eV.
    pub work_function_ev: Real,
    /// Item 26: potential of the sample, in V, with the file's sign.
    pub target_bias_v: Real,
    /// Item 27: width of the analysed area, in micrometres.
    pub analysis_width_um: Pair<Real>,
    /// Item 28: where the analyser looks from.
    pub take_off: Direction,
    /// Items 29 and 30: what is detected.
    pub species: Species,
    /// Item 31: the abscissa; in scan mode REGULAR.
    pub abscissa: Option<Abscissa>,
    /// Item 32: the corresponding variables, whose values the ordinates are.
    pub variables: List<Label>,
    /// Item 33: how the signal is taken.
    pub signal_mode: SignalMode,
    /// Item 34: collection time of a channel in one scan, in s.
    pub collection_time_s: Real,
    /// Item 35: number of scans that were added.
    pub scans: i64,
    /// Item 36: correction of the signal for time, in s.
    pub time_correction_s: Real,
    /// Item 37: the sputtering source; in depth profiles, unless the technique itself sputters.
    pub sputter_source: Option<SputterSource>,
    /// Item 38: tilt of the sample's normal.
    pub tilt: Direction,
    /// Item 39: rotation of the sample, in degrees.
    pub rotation_deg: Real,
    /// Item 40: additional numerical parameters.
    pub parameters: List<Parameter>,
    /// Lines kept for later versions of the format, as many as the experiment announces.
    pub future_entries: List<Text>,
    /// The smallest and the largest value of each corresponding variable.
    pub extents: List<Extent>,
    /// The values, row by row, each with one value for every corresponding variable. An unknown one
    /// is 1E37 here, as in the file.
    pub ordinates: Vec<f64>,
    /// Where the block stood.
    pub anchor: Anchor,
}

/// A moment. `None` where the file has -1, which stands for an unknown part.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Date {
    /// Item 1.
    pub year: Option<u32>,
    /// Item 2.
    pub month: Option<u32>,
    /// Item 3.
    pub day: Option<u32>,
    /// Item 4.
    pub hours: Option<u32>,
    /// Item 5.
    pub minutes: Option<u32>,
    /// Item 6.
    pub seconds: Option<u32>,
    /// Item 7: hours in advance of Greenwich mean time.
    pub hours_ahead_of_gmt: i64,
}

/// A value along x and one along y.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Pair<T> {
    /// Along x.
    pub x: T,
    /// Along y.
    pub y: T,
}

/// A sputtering ion or atom.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Particle {
    /// Its atomic number.
    pub atomic_number: i64,
    /// Number of atoms in it.
    pub atoms: i64,
    /// Its charge, with its sign.
    pub charge: i64,
}

/// Where the lines of an image run, in coordinates of the map.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Linescans {
    /// Start of the first line.
    pub first_start: Pair<i64>,
    /// End of the first line.
    pub first_finish: Pair<i64>,
    /// End of the last line.
    pub last_finish: Pair<i64>,
}

/// A direction against the sample.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Direction {
    /// Polar angle in degrees.
    pub polar_deg: Real,
    /// Azimuth in degrees.
    pub azimuth_deg: Real,
}

/// What is detected.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Species {
    /// Item 29: the element or molecule.
    pub label: Text,
    /// Item 30: its transition or charge state.
    pub transition: Text,
    /// Item 30: charge of the detected particle, -1 for electrons.
    pub charge: i64,
}

/// A regular abscissa.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Abscissa {
    /// Its name and unit.
    pub label: Label,
    /// Its first value.
    pub start: Real,
    /// The step from each value to the next.
    pub increment: Real,
}

/// A sputtering source beside the analysis source.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct SputterSource {
    /// Its energy in eV.
    pub energy_ev: Real,
    /// Its beam current in nA.
    pub current_na: Real,
    /// Its width in micrometres.
    pub width_um: Pair<Real>,
    /// Where it comes from.
    pub direction: Direction,
    /// How it runs.
    pub mode: SputterMode,
}

/// An additional numerical parameter.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Parameter {
    /// Its name and unit.
    pub label: Label,
    /// Its value.
    pub value: Real,
}

/// The range of a corresponding variable.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Extent {
    /// Its smallest value.
    pub minimum: Real,
    /// Its largest value.
    pub maximum: Real,
}
