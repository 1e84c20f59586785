//! What was written is read again and compared with what was meant, value by value.

use std::fs;
use std::path::Path;

use super::Error;
use super::csv_curves::Table;
use crate::parse::{Source, read_columns};
use crate::schema::ResultDocument;

/// What the bytes of a file stand for.
pub(super) enum Meant<'a> {
    /// A table of numbers.
    Table(&'a Table),
    /// The result.
    Result(&'a ResultDocument),
    /// An SVG image.
    Svg,
    /// A page; there is no more to it than its bytes.
    Page,
}

/// Reads `path`, which will be called `file`, and compares it with what was meant.
pub(super) fn verify(path: &Path, file: &str, bytes: &[u8], meant: &Meant) -> Result<(), Error> {
    let found = fs::read(path).map_err(Error::io("read back", path))?;
    if found != bytes {
        return Err(differs(file, "its bytes changed on the way".to_owned()));
    }
    match meant {
        Meant::Table(table) => same_columns(file, &table.columns, &columns(path, file)?),
        Meant::Result(result) => same_result(file, result, &found),
        Meant::Svg => well_formed(file, &found),
        Meant::Page => Ok(()),
    }
}

fn differs(file: &str, what: String) -> Error {
    Error::RoundTrip {
        file: file.to_owned(),
        what,
    }
}

fn same_result(file: &str, meant: &ResultDocument, bytes: &[u8]) -> Result<(), Error> {
    let back: ResultDocument =
        serde_json::from_slice(bytes).map_err(|problem| differs(file, problem.to_string()))?;
    if &back == meant {
        return Ok(());
    }
    Err(differs(
        file,
        "a value differs from the result's".to_owned(),
    ))
}

fn well_formed(file: &str, bytes: &[u8]) -> Result<(), Error> {
    let refuse = |what: String| Error::NotWellFormed {
        file: file.to_owned(),
        what,
    };
    let text = std::str::from_utf8(bytes).map_err(|problem| refuse(problem.to_string()))?;
    roxmltree::Document::parse(text)
        .map(drop)
        .map_err(|problem| refuse(problem.to_string()))
}

type Columns = Vec<(String, Vec<f64>)>;

/// The columns of a table, by the reader that any user's table goes through.
fn columns(path: &Path, file: &str) -> Result<Columns, Error> {
    let source = Source::read(path, file).map_err(|problem| differs(file, problem.to_string()))?;
    read_columns(&source).map_err(|problems| {
        let first = problems.first().map(ToString::to_string);
        differs(file, first.unwrap_or_default())
    })
}

fn same_columns(file: &str, meant: &Columns, found: &Columns) -> Result<(), Error> {
    if meant.len() != found.len() {
        let what = format!("{} columns became {}", meant.len(), found.len());
        return Err(differs(file, what));
    }
    for ((header, values), (header_back, back)) in meant.iter().zip(found) {
        if header != header_back || values.len() != back.len() {
            let what = format!(
                "column `{header}` of {} rows became `{header_back}` of {}",
                values.len(),
                back.len()
            );
            return Err(differs(file, what));
        }
        same_values(header, values, back).map_err(|what| differs(file, what))?;
    }
    Ok(())
}

fn same_values(header: &str, meant: &[f64], found: &[f64]) -> Result<(), String> {
    let same = |a: f64, b: f64| a.to_bits() == b.to_bits() || (a.is_nan() && b.is_nan());
    match meant.iter().zip(found).position(|(&a, &b)| !same(a, b)) {
        Some(row) => Err(format!(
            "row {} of `{header}` was {:e} and became {:e}",
            row + 1,
            meant[row],
            found[row]
        )),
        None => Ok(()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::csv_curves::{render, tables};
    use crate::export::sample;
    use crate::parse::{Hints, read_spectrum};
    use crate::quantity::AxisKind;

    fn on_disk(text: &str, meant: &Meant) -> Result<(), Error> {
        let dir = tempfile::tempdir().unwrap();
        let path = dir.path().join("x");
        fs::write(&path, text).unwrap();
        verify(&path, "x", text.as_bytes(), meant)
    }

    #[test]
    fn one_digit_changed_is_noticed() {
        let (result, curves) = sample::two_sides();
        let table = tables(&result, &curves).unwrap().remove(0);
        let text = render(&table, &result);
        assert!(on_disk(&text, &Meant::Table(&table)).is_ok());
        let last = text.trim_end().rfind(',').unwrap();
        let mut changed = text;
        changed.replace_range(last + 1.., "1\n");
        let told = on_disk(&changed, &Meant::Table(&table))
            .unwrap_err()
            .to_string();
        assert!(told.contains("`in fitted window`"), "{told}");
    }

    #[test]
    fn any_title_and_any_number_survive_the_reader() {
        let (mut result, mut curves) = sample::two_sides();
        let odd = [f64::NAN, f64::INFINITY, -0.0, 5e-324, f64::MAX, 0.1 + 0.2];
        curves.sides[0].residual[..6].copy_from_slice(&odd);
        for title in [
            "unit: Ry",
            "axis: kinetic",
            "energy (Ha), intensity (counts)",
            "1.0,2.0,3.0",
            "photon energy: 21.2 furlongs",
            "delimiter: ;",
            "\"",
            "",
        ] {
            result.title = title.to_owned();
            for table in tables(&result, &curves).unwrap() {
                let told = on_disk(&render(&table, &result), &Meant::Table(&table));
                assert!(told.is_ok(), "{title:?}: {told:?}");
            }
        }
    }

    #[test]
    fn an_exported_curve_reads_as_the_spectrum_that_it_was() {
        let (result, curves) = sample::two_sides();
        let tables = tables(&result, &curves).unwrap();
        for (table, curve) in tables.iter().zip(&curves.sides) {
            let source = Source::from_text(table.file, &render(table, &result));
            let read = read_spectrum(source, &Hints::default()).unwrap().document;
            assert_eq!(read.reference, result.measured.reference);
            assert_eq!(read.axis, AxisKind::FinalState);
            assert_eq!(read.energy_ev, curve.energy_ev);
            assert_eq!(read.intensity, curve.measured);
            assert_eq!(
                read.standard_uncertainty.as_ref(),
                Some(&curve.standard_uncertainty)
            );
        }
    }

    #[test]
    fn a_computed_curve_is_no_spectrum() {
        let (result, curves) = sample::two_sides();
        let table = tables(&result, &curves).unwrap().remove(2);
        let source = Source::from_text(table.file, &render(&table, &result));
        let problems = read_spectrum(source, &Hints::default()).unwrap_err();
        let told = problems[0].to_string();
        assert!(
            told.contains("no column is known to hold intensities"),
            "{told}"
        );
    }

    #[test]
    fn broken_svg_is_noticed() {
        let told = on_disk("<svg><text>a & b</text></svg>", &Meant::Svg).unwrap_err();
        assert!(matches!(told, Error::NotWellFormed { .. }));
    }

    #[test]
    fn bytes_that_change_on_the_way_are_noticed() {
        let dir = tempfile::tempdir().unwrap();
        let path = dir.path().join("x");
        fs::write(&path, "a").unwrap();
        assert!(verify(&path, "x", b"b", &Meant::Page).is_err());
    }
}
