//! The surface chemical analysis standard data transfer format, ISO 14976:1998; W. A. Dench, L. B.
//! Hazell and M. P. Seah, Surf. Interface Anal. 13, 63 (1988).
//!
//! One item stands on a line, and its place says what it is. This folder owns the standard's items,
//! their order and their keywords, reads them into an [`Experiment`] and lowers what is a
//! photoelectron spectrum to the neutral document. The writer in `export` walks the same order.
//!
//! The numbers of the items and their names are the standard's. The order and the conditions come
//! from a summary written from memory, not from the standard's text. Where that leaves doubt: the real
//! number 1E37 stands for an unknown value, and -1 for an unknown part of a date; a text has at most
//! 80 characters (longer ones are read, and not written); a number of ordinate values counts every
//! value of every corresponding variable; the unit `d` is dimensionless; hours ahead of GMT are whole;
//! which experiment mode goes with which scan mode is not known here, so that every pair is read; in
//! scan mode IRREGULAR the abscissa is the first corresponding variable.
//!
//! Left out: an experiment mode beyond the eight of the summary, file sets spread over several files,
//! and any meaning of future-upgrade entries, which are kept as text.

mod abscissa;
mod anchor;
mod block;
mod carrier;
mod experiment;
mod keyword;
mod layout;
mod number;
mod reader;
mod signal;
mod spectra;
mod steps;

#[cfg(test)]
mod tests;

pub use anchor::Anchor;
pub use block::{
    Abscissa, Block, Date, Direction, Extent, Linescans, Pair, Parameter, Particle, Real, Species,
    SputterSource,
};
pub use experiment::{Experiment, Label, List, MapSize, Part, Selection, Text};
pub use keyword::{AnalyserMode, ExperimentMode, ScanMode, SignalMode, SputterMode, Technique};

pub(crate) use carrier::{Carrier, Item, Keyword, Whole};
pub(crate) use layout::{END, Frame, block, header};

use super::{Problem, Source};

/// What the first line of every file begins with; a date follows.
const OPENING: &str = "VAMAS Surface Chemical Analysis Standard Data Transfer Format";

/// The real number that stands for an unknown value.
pub(crate) const UNKNOWN: f64 = 1e37;

/// A real number of the file; `None` where it stands for an unknown value.
#[allow(clippy::float_cmp)] // It is this number and no other.
fn known(number: f64) -> Option<f64> {
    (number != UNKNOWN).then_some(number)
}

/// Reads a file of the format.
///
/// # Errors
/// The first item that is not what the standard has in its place: what stands after it cannot be told.
///
/// ```
/// use bandrule::parse::{Source, iso14976};
/// let source = Source::from_text("a.vms", "VAMAS Surface Chemical Analysis\n");
/// let problem = &iso14976::read(&source).unwrap_err()[0];
/// assert!(problem.message.starts_with("item 1, format identifier: expected"));
/// ```
pub fn read(source: &Source) -> Result<Experiment, Vec<Problem>> {
    reader::experiment(source).map_err(|problem| vec![problem])
}

/// Whether a text is of this format, by its first line.
#[must_use]
pub fn is_like(text: &str) -> bool {
    let text = text.strip_prefix('\u{feff}').unwrap_or(text);
    text.trim_start_matches([' ', '\t']).starts_with(OPENING)
}
