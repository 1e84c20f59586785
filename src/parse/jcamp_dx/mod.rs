//! JCAMP-DX, versions 4.10 and 4.24: spectra as labelled data records.
//!
//! Specification: R. S. `McDonald` and P. A. Wilks, "JCAMP-DX: A Standard Form for Exchange of Infrared
//! Spectra in Computer Readable Form", Appl. Spectrosc. 42, 151 (1988). Read are `XYDATA=(X++(Y..Y))`
//! in every form of its ordinates (AFFN, PAC, SQZ, DIF, DUP, mixed), `XYPOINTS=(XY..XY)`, and compound
//! files (a LINK block, or blocks one after the other). The checks of the standard are made while
//! reading: the repeated ordinate after differences, the abscissa of every line, NPOINTS, FIRSTY, LASTX
//! and the extremes. Left out: peak tables, peak assignments and interferograms (RADATA) are kept as
//! text and skipped as curves; NTUPLES and `XYPOINTS` of version 5 and above are refused. A label that
//! the standard does not list is kept as text, as a private one (`##$`) is. Lines longer than the
//! standard's 80 characters are read and never written.
//!
//! This folder knows sources, problems, the header words of its parent and the documents of `schema`.

mod abscissa;
mod axis;
mod block;
mod checks;
#[cfg(test)]
mod checks_tests;
mod document;
mod label;
mod number;
mod ordinates;
mod place;
mod points;
mod raw;
#[cfg(test)]
mod robust_tests;
mod spectra;
#[cfg(test)]
mod spectra_tests;
mod structure;
#[cfg(test)]
mod test_texts;
#[cfg(test)]
mod tests;
mod token;
#[cfg(test)]
mod token_tests;

use super::{Problem, Source};

pub use document::{Block, Document, Ordinates, Points, Record, Value};
pub use label::normal as normal_label;

/// Lines that [`is_like`] looks at.
const SNIFFED_LINES: usize = 60;

/// Reads a document; the first problem stops the reading.
///
/// # Errors
/// One problem: a record that is no such, a block that is not closed, a value that is not of its kind,
/// or a check of the standard that fails, with both numbers.
///
/// ```
/// use bandrule::parse::{Source, jcamp_dx};
/// let text = [
///     "##TITLE= invented", "##JCAMP-DX= 4.24", "##DATA TYPE= INFRARED SPECTRUM",
///     "##XUNITS= 1/CM", "##YUNITS= ABSORBANCE", "##XFACTOR= 1", "##YFACTOR= 1",
///     "##FIRSTX= 0", "##LASTX= 9", "##NPOINTS= 10", "##FIRSTY= 1",
///     "##XYDATA= (X++(Y..Y))", "0AJT%jX", "9c", "##END=",
/// ].join("\n");
/// let document = jcamp_dx::read(&Source::from_text("doc.dx", &text)).unwrap();
/// let jcamp_dx::Value::Ordinates(table) = &document.records[11].value else { panic!() };
/// assert_eq!(table.values, [1.0, 2.0, 3.0, 3.0, 2.0, 1.0, 0.0, -1.0, -2.0, -3.0]);
/// ```
pub fn read(source: &Source) -> Result<Document, Vec<Problem>> {
    document(source).map_err(|problem| vec![problem])
}

fn document(source: &Source) -> Result<Document, Problem> {
    let (comments, raws) = raw::split(source)?;
    let blocks = structure::blocks(source, &raws)?;
    let mut records = Vec::with_capacity(raws.len());
    for raw in &raws {
        records.push(raw.record(source)?);
    }
    let mut room = ordinates::room(source);
    for block in blocks {
        block::read_table(source, &raws[block.clone()], &mut records[block], &mut room)?;
    }
    Ok(Document { comments, records })
}

/// Whether a text looks like a document of this standard: its first record is `##TITLE=`, and
/// `##JCAMP-DX=` follows soon.
#[must_use]
pub fn is_like(text: &str) -> bool {
    let lines = text.trim_start_matches('\u{feff}').split(['\n', '\r']);
    let mut labels = lines
        .map(str::trim_start)
        .filter(|line| !line.is_empty() && !line.starts_with("$$"))
        .take(SNIFFED_LINES)
        .map(|line| {
            line.strip_prefix("##")
                .and_then(|rest| rest.split_once('='))
                .map(|(label, _)| label::normal(label))
        });
    labels.next().flatten().as_deref() == Some(label::TITLE)
        && labels.any(|label| label.as_deref() == Some(label::VERSION))
}
