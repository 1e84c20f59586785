//! Files in open standards: their curves as documents, and where their values stand.

use std::ops::Range;
use std::sync::Arc;

use super::iso14976::{self, Experiment};
use super::jcamp_dx::{self, Document};
use super::parsed::{self, Column, Manner, Parsed};
use super::role::{Hints, Role};
use super::skipped::Skipped;
use super::summary::Summary;
use super::values::Values;
use super::{Problem, Source};
use crate::schema::Spectrum;

/// Curves that a message lists.
const LISTED: usize = 20;

/// A file in an open standard.
#[derive(Debug, Clone, PartialEq)]
enum File {
    Iso14976(Arc<Experiment>),
    JcampDx(Arc<Document>),
}

/// One curve of a file in an open standard.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Curve {
    file: File,
    /// Which curve of the file it is, 0-based.
    index: usize,
}

impl File {
    fn read(source: &Source) -> Option<Result<Self, Vec<Problem>>> {
        if iso14976::is_like(source.text()) {
            return Some(iso14976::read(source).map(|file| Self::Iso14976(Arc::new(file))));
        }
        if jcamp_dx::is_like(source.text()) {
            return Some(jcamp_dx::read(source).map(|file| Self::JcampDx(Arc::new(file))));
        }
        None
    }

    fn name(&self) -> &'static str {
        match self {
            Self::Iso14976(_) => "ISO 14976",
            Self::JcampDx(_) => "JCAMP-DX",
        }
    }

    fn spectra(&self, source: &Source) -> Vec<Result<Spectrum, Skipped>> {
        match self {
            Self::Iso14976(file) => file.spectra(source),
            Self::JcampDx(file) => file.spectra(source),
        }
    }

    /// What the energies and the intensities of each curve are called.
    fn labels(&self) -> Vec<[String; 2]> {
        match self {
            Self::Iso14976(file) => (0..file.blocks.len()).map(|at| file.labels(at)).collect(),
            Self::JcampDx(file) => {
                let text = |block: &jcamp_dx::Block, label: &str| {
                    block.text(label).unwrap_or_default().to_owned()
                };
                let blocks = file.blocks().into_iter();
                blocks
                    .map(|block| ["XUNITS", "YUNITS"].map(|label| text(&block, label)))
                    .collect()
            }
        }
    }
}

impl Curve {
    /// Where the energy (field 0) or the intensity (field 1) of a row stands; energies that are
    /// counted by steps stand nowhere.
    pub fn value_span(&self, source: &Source, row: usize, field: usize) -> Option<Range<usize>> {
        match &self.file {
            File::Iso14976(file) => file.field_span(source, self.index, row, field),
            // The ordinate is variable 0, the abscissa of a pair variable 1.
            File::JcampDx(file) => file.value_span(source, self.index, row, 1 - field.min(1)),
        }
    }
}

/// Every curve of a file in an open standard; `None` where it is in none. With `every` the columns
/// are summed up.
pub(super) fn curves(
    source: &Source,
    hints: &Hints,
    every: bool,
) -> Option<Result<Vec<Parsed<Spectrum>>, Vec<Problem>>> {
    Some(match File::read(source)? {
        Ok(file) => parsed_curves(source, &file, hints, every).map_err(|why| vec![why]),
        Err(problems) => Err(problems),
    })
}

/// The one curve of a file in an open standard, or the one that the user names.
pub(super) fn one_curve(
    source: &Source,
    hints: &Hints,
    every: bool,
) -> Option<Result<Parsed<Spectrum>, Vec<Problem>>> {
    let curves = curves(source, hints, every)?;
    Some(
        curves.and_then(|mut curves| match (curves.len(), curves.pop()) {
            (1, Some(only)) => Ok(only),
            (several, _) => Err(vec![
                Problem::new(format!("`{}` holds {several} curves", source.name())).with_help(
                    format!(
                        "say which one is meant, as in {}; `bandrule look` lists them",
                        hints.setting("block = 1")
                    ),
                ),
            ]),
        }),
    )
}

fn parsed_curves(
    source: &Source,
    file: &File,
    hints: &Hints,
    every: bool,
) -> Result<Vec<Parsed<Spectrum>>, Problem> {
    let all = file.spectra(source);
    let count = all.len();
    if let Some(block) = hints.block.filter(|&block| block == 0 || block > count) {
        return Err(Problem::new(format!(
            "{} is {block}, but `{}` has {count} curves, counted from 1",
            hints.says("block"),
            source.name()
        )));
    }
    let (mut curves, mut skipped) = (Vec::new(), Vec::new());
    for (index, curve) in all.into_iter().enumerate() {
        if hints.block.is_some_and(|block| block != index + 1) {
            continue;
        }
        match curve {
            Ok(spectrum) => curves.push((index, spectrum)),
            Err(why) => skipped.push(why),
        }
    }
    if curves.is_empty() {
        return Err(no_spectrum(source, file, &skipped));
    }
    let labels = file.labels();
    let parsed = curves.into_iter().map(|(index, spectrum)| {
        let manner = Manner {
            dialect: format!("{}, curve {} of {count}", file.name(), index + 1),
            curve: Some(index + 1),
            rows: spectrum.energy_ev.len(),
            blocks: 1,
            skipped: skipped.iter().take(LISTED).cloned().collect(),
            skipped_lines: skipped.len(),
            ..Manner::default()
        };
        let columns = columns(&labels[index], &spectrum, every);
        let curve = Curve {
            file: file.clone(),
            index,
        };
        Parsed::of_curve(spectrum, source.clone(), columns, manner, curve)
    });
    Ok(parsed.collect())
}

fn no_spectrum(source: &Source, file: &File, skipped: &[Skipped]) -> Problem {
    let reasons: Vec<String> = skipped
        .iter()
        .take(LISTED)
        .map(|why| format!("line {}: {}", why.line, why.reason))
        .collect();
    Problem::new(format!(
        "`{}` ({}) holds no curve that is read as a spectrum: {}",
        source.name(),
        file.name(),
        reasons.join("; ")
    ))
    .with_help(
        "give a file with a curve of intensities over energies, or write that part as a table",
    )
}

fn columns(labels: &[String; 2], spectrum: &Spectrum, every: bool) -> Vec<Column> {
    let [energy, intensity] = labels;
    let summary = |values: &Vec<f64>| every.then(|| Summary::of(&Values::Numbers(values.clone())));
    let column = |index, role, header: &str, unit: &str, values| Column {
        header: header.to_owned(),
        index,
        role: Some(role),
        unit: Some(unit.to_owned()),
        evidence: format!("the label `{header}`; its numbers here in {unit}"),
        summary: summary(values),
    };
    let unit = parsed::intensity_symbol(spectrum.intensity_kind);
    vec![
        column(0, Role::Energy, energy, "eV", &spectrum.energy_ev),
        column(1, Role::Intensity, intensity, unit, &spectrum.intensity),
    ]
}
