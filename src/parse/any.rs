//! A file of any kind: which one it is, concluded from the roles of its columns.

use super::header_line;
use super::layout::Layout;
use super::lowering;
use super::parsed::{Column, Manner, Parsed};
use super::role::{Hints, Kind};
use super::standards;
use super::{Problem, Source, Statement, document};
use crate::quantity::Reference;
use crate::schema::{Density, Dispersion, Gaps, Levels, Provenance, Series, Spectrum};

/// A document of any kind.
#[derive(Debug, Clone, PartialEq)]
pub enum AnyParsed {
    /// Computed levels.
    Levels(Parsed<Levels>),
    /// A measured curve.
    Spectrum(Parsed<Spectrum>),
    /// A density of states.
    Density(Parsed<Density>),
    /// Measured peaks.
    Dispersion(Parsed<Dispersion>),
    /// Gaps.
    Gaps(Parsed<Gaps>),
    /// A convergence series.
    Series(Parsed<Series>),
}

/// Does the same with the document of any kind.
macro_rules! each {
    ($any:expr, $parsed:ident => $body:expr) => {
        match $any {
            AnyParsed::Levels($parsed) => $body,
            AnyParsed::Spectrum($parsed) => $body,
            AnyParsed::Density($parsed) => $body,
            AnyParsed::Dispersion($parsed) => $body,
            AnyParsed::Gaps($parsed) => $body,
            AnyParsed::Series($parsed) => $body,
        }
    };
}

impl AnyParsed {
    /// The kind.
    #[must_use]
    pub fn kind(&self) -> Kind {
        match self {
            Self::Levels(_) => Kind::Levels,
            Self::Spectrum(_) => Kind::Spectrum,
            Self::Density(_) => Kind::Density,
            Self::Dispersion(_) => Kind::Dispersion,
            Self::Gaps(_) => Kind::Gaps,
            Self::Series(_) => Kind::Series,
        }
    }

    /// The columns of the file.
    #[must_use]
    pub fn columns(&self) -> &[Column] {
        each!(self, parsed => &parsed.columns)
    }

    /// How the file was read.
    #[must_use]
    pub fn manner(&self) -> &Manner {
        each!(self, parsed => &parsed.manner)
    }

    /// The text.
    #[must_use]
    pub fn source(&self) -> &Source {
        each!(self, parsed => &parsed.source)
    }

    /// The comment lines that conditions were read from.
    #[must_use]
    pub fn conditions(&self) -> Vec<&Statement> {
        each!(self, parsed => parsed.conditions().collect())
    }

    /// The zero of the energies, where the kind has one.
    #[must_use]
    pub fn reference(&self) -> Option<Reference> {
        match self {
            Self::Levels(parsed) => Some(parsed.document.reference),
            Self::Spectrum(parsed) => Some(parsed.document.reference),
            Self::Density(parsed) => Some(parsed.document.reference),
            Self::Dispersion(parsed) => Some(parsed.document.reference),
            Self::Gaps(_) | Self::Series(_) => None,
        }
    }

    /// Where the numbers come from.
    #[must_use]
    pub fn provenance(&self) -> &Provenance {
        each!(self, parsed => &parsed.document.provenance)
    }

    /// The document as JSON.
    ///
    /// # Errors
    /// None for documents that were read.
    pub fn to_json(&self) -> serde_json::Result<String> {
        each!(self, parsed => serde_json::to_string(&parsed.document))
    }
}

/// Reads a file of any kind; every column is read and summed up.
///
/// # Errors
/// Everything that keeps the file from being read; a kind that is not certain is asked for.
pub fn read_any(
    source: Source,
    kind: Option<Kind>,
    hints: &Hints,
) -> Result<Vec<AnyParsed>, Vec<Problem>> {
    if document::is_like(source.text()) {
        return read_document(source, kind)
            .map(|one| vec![one])
            .map_err(|why| vec![why]);
    }
    if let Some(curves) = standards::curves(&source, hints, true) {
        return Ok(curves?.into_iter().map(AnyParsed::Spectrum).collect());
    }
    let layout = Layout::of(&source, hints).map_err(|problem| vec![problem])?;
    let kind = match kind {
        Some(kind) => kind,
        None => conclude(&source, &layout, hints).map_err(|problem| vec![problem])?,
    };
    let read = match kind {
        Kind::Levels => lowering::read_laid_out(source, layout, hints, true).map(AnyParsed::Levels),
        Kind::Spectrum | Kind::Any => {
            lowering::read_laid_out(source, layout, hints, true).map(AnyParsed::Spectrum)
        }
        Kind::Density => {
            lowering::read_laid_out(source, layout, hints, true).map(AnyParsed::Density)
        }
        Kind::Dispersion => {
            lowering::read_laid_out(source, layout, hints, true).map(AnyParsed::Dispersion)
        }
        Kind::Gaps => lowering::read_laid_out(source, layout, hints, true).map(AnyParsed::Gaps),
        Kind::Series => lowering::read_laid_out(source, layout, hints, true).map(AnyParsed::Series),
    };
    read.map(|one| vec![one])
}

fn read_document(source: Source, wanted: Option<Kind>) -> Result<AnyParsed, Problem> {
    let kind = document::kind(&source)?;
    if let Some(wanted) = wanted.filter(|&wanted| wanted != kind) {
        return Err(Problem::new(format!(
            "`{}` is a document of {}, not of {}",
            source.name(),
            kind.name(),
            wanted.name()
        )));
    }
    match kind {
        Kind::Levels => document::read(source).map(AnyParsed::Levels),
        Kind::Spectrum | Kind::Any => document::read(source).map(AnyParsed::Spectrum),
        Kind::Density => document::read(source).map(AnyParsed::Density),
        Kind::Dispersion => document::read(source).map(AnyParsed::Dispersion),
        Kind::Gaps => document::read(source).map(AnyParsed::Gaps),
        Kind::Series => document::read(source).map(AnyParsed::Series),
    }
}

/// The one kind whose needed roles the columns have.
fn conclude(source: &Source, layout: &Layout, hints: &Hints) -> Result<Kind, Problem> {
    let (mut fitting, mut totals) = (Vec::new(), false);
    let mut best: Option<(usize, Kind, Option<Problem>)> = None;
    for kind in Kind::ALL {
        let names = header_line::find(source, layout, kind, hints);
        let (names, problem) = match names {
            Ok(names) => (names.unwrap_or_default(), None),
            Err(problem) => (Vec::new(), Some(problem)),
        };
        let roles: Vec<_> = names
            .iter()
            .filter_map(|name| name.reading.role)
            .chain(hints.columns.keys().copied())
            .filter(|role| kind.roles().contains(role))
            .collect();
        let has = |role: &super::Role| roles.contains(role);
        totals |= has(&super::Role::Density);
        if kind.needs().iter().any(|needed| needed.iter().all(has)) {
            fitting.push((kind, roles.len()));
        }
        if best.as_ref().is_none_or(|(known, ..)| roles.len() > *known) {
            best = Some((roles.len(), kind, problem));
        }
    }
    // Letters may be elements: a density without a total loses to a curve.
    let by_letters = |kind: Kind| kind == Kind::Density && !totals;
    if fitting.iter().any(|&(kind, _)| kind == Kind::Spectrum) {
        fitting.retain(|&(kind, _)| !by_letters(kind));
    }
    // A kind that leaves columns unknown which another kind knows is doubtful.
    let known_by_best = best.as_ref().map_or(0, |(known, ..)| *known);
    let rival = best
        .as_ref()
        .is_some_and(|(_, kind, _)| *kind == Kind::Levels);
    fitting.retain(|&(kind, known)| !(rival && kind == Kind::Dispersion && known < known_by_best));
    let most = fitting.iter().map(|&(_, known)| known).max().unwrap_or(0);
    let kinds: Vec<Kind> = fitting
        .iter()
        .filter(|&&(_, known)| known == most)
        .map(|&(kind, _)| kind)
        .collect();
    match (kinds.as_slice(), best) {
        (&[kind], _) => Ok(kind),
        ([], Some((_, _, Some(problem)))) => Err(problem),
        ([], Some((1.., kind, None))) if half_known(kind) => Ok(kind),
        _ => Err(unsure(source, layout, &kinds, hints)),
    }
}

/// Whether a table with some columns of a kind, but not all it needs, is read as that kind, so that
/// what is missing can be named.
fn half_known(kind: Kind) -> bool {
    matches!(kind, Kind::Levels | Kind::Spectrum | Kind::Gaps)
}

fn unsure(source: &Source, layout: &Layout, kinds: &[Kind], hints: &Hints) -> Problem {
    let names = |kinds: &[Kind]| -> Vec<&str> { kinds.iter().map(|kind| kind.name()).collect() };
    let line = layout.bare.last().cloned();
    let line = line.or_else(|| layout.row(source, 0)).unwrap_or(0..0);
    let (what, list) = match kinds {
        [] => ("no kind of table has such columns", names(&Kind::ALL)),
        several => (
            "the columns are those of more than one kind",
            names(several),
        ),
    };
    Problem::new(format!("{what}: the file may be {}", list.join(", ")))
        .at(source.place(line))
        .with_help(format!(
            "say which, as in {}, and what the columns are where their names do not tell, as in {}",
            hints.setting("as = \"levels\""),
            hints.setting("column.energy-quasiparticle = 2")
        ))
}
