//! The curves as tables: comma-separated, `#` comments above one header line, every number in the
//! shortest form that reads back to its last bit.

use std::fmt::Write as _;

use super::Error;
use super::words::{counted_from, energy_title, plain};
use crate::schema::{Curves, DensityCurve, ResultDocument, Side, SideCurve};

/// A table that becomes a CSV file.
pub(super) struct Table {
    /// The name of the file.
    pub(super) file: &'static str,
    /// What it holds, in words.
    about: String,
    /// Header and values of each column.
    pub(super) columns: Vec<(String, Vec<f64>)>,
}

/// The file of a measured side.
pub(super) const fn measured_file(side: Side) -> &'static str {
    match side {
        Side::Valence => "photoemission.csv",
        Side::Conduction => "inverse_photoemission.csv",
    }
}

/// The file of a computed density.
pub(super) const fn computed_file(side: Side) -> &'static str {
    match side {
        Side::Valence => "computed_valence.csv",
        Side::Conduction => "computed_conduction.csv",
    }
}

/// One table for each curve that is there.
pub(super) fn tables(result: &ResultDocument, curves: &Curves) -> Result<Vec<Table>, Error> {
    let energy = energy_title(result.measured.reference);
    let measured = curves.sides.iter().map(|side| measured(side, energy));
    let computed = curves.densities.iter().map(|density| {
        let side = curves.sides.iter().find(|side| side.side == density.side);
        let unit = side.map_or("arb. u.", |side| side.intensity_unit);
        computed(density, energy, unit)
    });
    let tables: Vec<Table> = measured.chain(computed).collect();
    for (index, table) in tables.iter().enumerate() {
        check(table, &tables[..index])?;
    }
    Ok(tables)
}

fn check(table: &Table, before: &[Table]) -> Result<(), Error> {
    let refuse = |what: String| Error::Columns {
        file: table.file.to_owned(),
        what,
    };
    if before.iter().any(|other| other.file == table.file) {
        return Err(refuse("there are two curves of one side".to_owned()));
    }
    let rows = table.columns.first().map_or(0, |(_, values)| values.len());
    match table
        .columns
        .iter()
        .find(|(_, values)| values.len() != rows)
    {
        Some((header, values)) => Err(refuse(format!(
            "`{header}` has {} entries beside {rows} energies",
            values.len()
        ))),
        None => Ok(()),
    }
}

fn measured(curve: &SideCurve, energy: &str) -> Table {
    let unit = curve.intensity_unit;
    let (first, last) = curve.window_ev;
    let fitted = |e: &f64| f64::from(u8::from((first..=last).contains(e)));
    let column = |header: String, values: &[f64]| (header, values.to_vec());
    Table {
        file: measured_file(curve.side),
        about: format!("{}, measured and fitted", curve.side.technique()),
        columns: vec![
            column(energy.to_owned(), &curve.energy_ev),
            column(format!("intensity ({unit})"), &curve.measured),
            column(
                format!("standard uncertainty ({unit})"),
                &curve.standard_uncertainty,
            ),
            column(format!("model ({unit})"), &curve.model),
            column(format!("background ({unit})"), &curve.background),
            column("residual (sigma)".to_owned(), &curve.residual),
            (
                "in fitted window".to_owned(),
                curve.energy_ev.iter().map(fitted).collect(),
            ),
        ],
    }
}

fn computed(curve: &DensityCurve, energy: &str, unit: &str) -> Table {
    Table {
        file: computed_file(curve.side),
        about: format!(
            "computed density of the {} side, shifted and broadened as fitted",
            curve.side.name()
        ),
        columns: vec![
            (energy.to_owned(), curve.energy_ev.clone()),
            (format!("computed density ({unit})"), curve.density.clone()),
        ],
    }
}

/// The table as text.
pub(super) fn render(table: &Table, result: &ResultDocument) -> String {
    let reference = result.measured.reference;
    let mut text = String::new();
    let comments = [
        ("title", plain(&result.title)),
        ("content", table.about.clone()),
        (
            "reference",
            format!(
                "{reference} (energies are counted from {})",
                counted_from(reference)
            ),
        ),
        ("program", plain(&result.provenance.program)),
    ];
    for (key, value) in comments {
        let _ = writeln!(text, "# {key}: {value}");
    }
    let headers: Vec<&str> = table
        .columns
        .iter()
        .map(|(header, _)| header.as_str())
        .collect();
    text.push_str(&headers.join(","));
    text.push('\n');
    let rows = table.columns.first().map_or(0, |(_, values)| values.len());
    for row in 0..rows {
        let cells: Vec<String> = table
            .columns
            .iter()
            .map(|(_, values)| number(values[row]))
            .collect();
        text.push_str(&cells.join(","));
        text.push('\n');
    }
    text
}

/// The shortest text that reads back to the same double, without long runs of zeros.
fn number(value: f64) -> String {
    if value == 0.0 || (1e-5..1e16).contains(&value.abs()) {
        format!("{value}")
    } else {
        format!("{value:e}")
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::export::sample;
    use crate::quantity::Reference;

    #[test]
    fn numbers_survive_to_the_last_bit() {
        for value in [
            0.1 + 0.2,
            -0.0,
            5e-324,
            f64::MAX,
            1e-5,
            1e16,
            -12.5,
            f64::INFINITY,
        ] {
            let back: f64 = number(value).parse().unwrap();
            assert_eq!(back.to_bits(), value.to_bits(), "{}", number(value));
            assert!(number(value).len() < 26, "{}", number(value));
        }
    }

    #[test]
    fn a_title_with_line_breaks_stays_in_its_comment() {
        let (mut result, curves) = sample::two_sides();
        result.title = "one\ntwo\r\n3,4".to_owned();
        let text = render(&tables(&result, &curves).unwrap()[0], &result);
        let lines: Vec<&str> = text.lines().take(6).collect();
        assert!(
            lines[..4].iter().all(|line| line.starts_with("# ")),
            "{lines:?}"
        );
        assert_eq!(
            lines[2],
            "# reference: fermi (energies are counted from the Fermi level)"
        );
        assert_eq!(
            lines[4],
            "E - E_F (eV),intensity (counts),standard uncertainty (counts),model (counts),\
             background (counts),residual (sigma),in fitted window"
        );
    }

    #[test]
    fn the_header_names_no_fermi_level_where_there_is_none() {
        let (mut result, curves) = sample::two_sides();
        result.measured.reference = Reference::Vacuum;
        for table in tables(&result, &curves).unwrap() {
            let text = render(&table, &result);
            assert!(
                text.contains("\nE (eV),") && !text.contains("E_F"),
                "{}",
                table.file
            );
            assert!(text.contains("# reference: vacuum"));
        }
    }

    #[test]
    fn uneven_columns_and_doubled_sides_are_refused() {
        let (result, curves) = sample::two_sides();
        let mut uneven = curves.clone();
        uneven.sides[0].model.pop();
        let told = tables(&result, &uneven).err().unwrap().to_string();
        assert!(
            told.contains("photoemission.csv") && told.contains("`model (counts)`"),
            "{told}"
        );
        let mut doubled = curves;
        doubled.sides[1].side = Side::Valence;
        assert!(tables(&result, &doubled).is_err());
    }
}
