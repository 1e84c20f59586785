//! Writes a table in one of the dialects that clusters and laboratories write, and says which numbers
//! a reader must find in it.

use std::collections::BTreeMap;
use std::io::Write as _;

use bandrule::parse::Kind;
use rand::Rng;
use rand::seq::IndexedRandom;
use rand_chacha::ChaCha8Rng;
use serde_json::{Value, json};

use super::tables::{Cells, Column, Join, Quantity, Table};

type Random = ChaCha8Rng;
/// What the document must hold: by key, the values.
pub type Expected = Vec<(String, Vec<Value>)>;

/// eV in a unit, CODATA 2022; seen in the NIST tables.
const ENERGIES: [(&str, f64); 6] = [
    ("eV", 1.0),
    ("meV", 1e-3),
    ("Ha", 27.211_386_245_981),
    ("Hartree", 27.211_386_245_981),
    ("Ry", 13.605_693_122_990),
    ("a.u.", 27.211_386_245_981),
];

#[derive(Debug, Clone, Copy, PartialEq)]
enum Units {
    Brackets,
    Square,
    Slash,
    In,
    Underscore,
    Comment,
    Line,
    Column,
}

#[derive(Debug, Clone, Copy, PartialEq)]
enum Header {
    Bare,
    Comment,
}

/// One way to write a table.
struct Dialect {
    delimiter: &'static str,
    aligned: bool,
    glued: bool,
    comma: bool,
    digits: usize,
    exponent: Option<&'static str>,
    end: &'static str,
    mark: &'static str,
    header: Header,
    units: Units,
    unit: (&'static str, f64),
    trailing: bool,
    remark: bool,
    repeated: bool,
    missing: f64,
}

impl Dialect {
    fn random(table: &Table, random: &mut Random) -> Self {
        let delimiters = [
            ",", ", ", ";", "\t", "|", "| ", " ", "  ", "aligned", "aligned",
        ];
        let delimiter = *delimiters.choose(random).unwrap();
        let aligned = delimiter == "aligned";
        let delimiter = if aligned { " " } else { delimiter };
        let blank = delimiter.trim_matches(' ').is_empty();
        let units = [
            Units::Brackets,
            Units::Square,
            Units::Slash,
            Units::In,
            Units::Underscore,
            Units::Comment,
            Units::Line,
            Units::Column,
        ];
        let mut units = *units.choose(random).unwrap();
        let has_column = matches!(table.kind, Kind::Levels | Kind::Gaps | Kind::Series);
        let own = table.columns.iter().any(|column| {
            matches!(
                column.quantity,
                Quantity::Density | Quantity::Momentum | Quantity::Kelvin
            )
        });
        if (units == Units::Column && !has_column) || (units == Units::Comment && own) {
            units = Units::Brackets;
        }
        let header = match random.random_bool(0.6) || units == Units::Column {
            true => Header::Bare,
            false => Header::Comment,
        };
        let comma = !delimiter.contains(',') && random.random_bool(0.25);
        Self {
            delimiter,
            aligned,
            glued: aligned && !comma && random.random_bool(0.3),
            comma,
            digits: random.random_range(3..10),
            exponent: random
                .random_bool(0.3)
                .then(|| *["E", "D", "d", "e"].choose(random).unwrap()),
            end: ["\n", "\n", "\r\n", "\r"].choose(random).unwrap(),
            mark: ["#", "!", "%", "//", ";", "@", "\"", "##"]
                .choose(random)
                .unwrap(),
            header,
            units,
            unit: *ENERGIES.choose(random).unwrap(),
            trailing: !blank && !delimiter.contains('|') && random.random_bool(0.15),
            remark: blank && random.random_bool(0.15),
            repeated: header == Header::Bare && random.random_bool(0.15),
            missing: if random.random_bool(0.3) { 0.15 } else { 0.0 },
        }
    }

    fn is_blank(&self) -> bool {
        self.delimiter.trim_matches(' ').is_empty()
    }

    /// A comment's text behind its mark.
    fn comment(&self, text: &str) -> String {
        format!("{} {text}{}", self.mark, self.end)
    }

    /// A number as text, and the number that the text is.
    fn number(&self, value: f64) -> (String, f64) {
        let plain = match self.exponent {
            None => format!("{value:.*}", self.digits),
            Some(letter) => {
                let text = format!("{value:.*e}", self.digits);
                let (mantissa, exponent) = text.split_once('e').unwrap();
                let exponent: i32 = exponent.parse().unwrap();
                format!("{mantissa}{letter}{exponent:+03}")
            }
        };
        let number = plain.replace(['D', 'd'], "e").parse().unwrap();
        let text = if self.comma {
            plain.replace('.', ",")
        } else {
            plain
        };
        (text, number)
    }

    /// How a value that is not there is written.
    fn nothing(&self, random: &mut Random) -> &'static str {
        let words = ["NaN", "--", "****", "nan"];
        match self.is_blank() && !self.aligned || random.random_bool(0.5) {
            true => words.choose(random).unwrap(),
            false => "",
        }
    }

    fn name(&self, column: &Column, unit: &str) -> String {
        let mut name = match self.is_blank() && !self.aligned {
            true => column
                .name
                .replace(' ', if column.name.contains('-') { "" } else { "_" }),
            false => column.name.clone(),
        };
        if column.key.starts_with("projections=") || column.name == "K.E." {
            name.clone_from(&column.name);
        }
        let unit = match self.units {
            Units::Comment | Units::Line | Units::Column => "",
            _ => unit,
        };
        match (unit, self.units) {
            ("", _) => name,
            (_, Units::Brackets) => format!("{name} ({unit})"),
            (_, Units::Square) => format!("{name}[{unit}]"),
            (_, Units::Slash) => format!("{name} / {unit}"),
            (_, Units::In) => format!("{name} in {unit}"),
            // A point or a slash does not go into a name.
            (_, _) if unit.contains(['.', '/', ' ']) || unit == "K" => format!("{name} ({unit})"),
            _ => format!("{name}_{unit}"),
        }
    }
}

/// The unit of a column, and the factor that brings its numbers to the document's.
fn unit_of(column: &Column, dialect: &Dialect, random: &mut Random) -> (&'static str, f64) {
    match column.quantity {
        Quantity::Energy => dialect.unit,
        Quantity::Intensity => (["counts", "cts"].choose(random).unwrap(), 1.0),
        Quantity::Density => match dialect.unit.0 {
            "meV" => ("states/eV", 1.0),
            "eV" => ("1/eV", 1.0),
            "Ry" => ("states/Ry", 1.0 / 13.605_693_122_990),
            _ => ("states/Ha", 1.0 / 27.211_386_245_981),
        },
        Quantity::Momentum => ("1/Å", 1.0),
        Quantity::Kelvin => ("K", 1.0),
        Quantity::None => ("", 1.0),
    }
}

/// The table as a file, and what must be found in it.
pub fn written(table: &Table, random: &mut Random) -> (Vec<u8>, Expected) {
    let dialect = Dialect::random(table, random);
    let units: Vec<(&str, f64)> = table
        .columns
        .iter()
        .map(|column| unit_of(column, &dialect, random))
        .collect();
    let (mut cells, values) = cells(table, &dialect, &units, random);
    let mut names: Vec<String> = table
        .columns
        .iter()
        .zip(&units)
        .map(|(column, (unit, _))| dialect.name(column, unit))
        .collect();
    let mut below: Vec<String> = units.iter().map(|unit| unit.0.to_owned()).collect();
    if dialect.units == Units::Column {
        let at = random.random_range(0..=names.len());
        names.insert(at, "unit".to_owned());
        below.insert(at, String::new());
        cells.insert(at, vec![dialect.unit.0.to_owned(); cells[0].len()]);
    }
    let text = text(table, &dialect, &names, &below, &cells, random);
    (encoded(&text, random), expected(table, &values))
}

/// The texts of every column, and the values that they mean.
fn cells(
    table: &Table,
    dialect: &Dialect,
    units: &[(&str, f64)],
    random: &mut Random,
) -> (Vec<Vec<String>>, Vec<Vec<Value>>) {
    let (mut texts, mut values) = (Vec::new(), Vec::new());
    for (column, &(_, factor)) in table.columns.iter().zip(units) {
        let (mut of_column, mut meant) = (Vec::new(), Vec::new());
        match &column.cells {
            Cells::Numbers(numbers) => {
                for (row, &number) in numbers.iter().enumerate() {
                    if column.gaps && row > 0 && random.random_bool(dialect.missing) {
                        of_column.push(dialect.nothing(random).to_owned());
                        meant.push(json!("nan"));
                        continue;
                    }
                    let (text, value) = dialect.number(number);
                    of_column.push(text);
                    meant.push(json!(value * factor));
                }
            }
            Cells::Whole(numbers) => {
                of_column.extend(numbers.iter().map(ToString::to_string));
                meant.extend(numbers.iter().map(|number| json!(number)));
            }
            Cells::Texts(list) => {
                of_column.extend(list.iter().cloned());
                meant.extend(list.iter().map(|text| json!(text)));
            }
        }
        texts.push(of_column);
        values.push(meant);
    }
    (texts, values)
}

fn expected(table: &Table, values: &[Vec<Value>]) -> Expected {
    let mut expected: BTreeMap<String, Vec<Vec<Value>>> = BTreeMap::new();
    for (column, values) in table.columns.iter().zip(values) {
        if column.key != "-" {
            expected
                .entry(column.key.clone())
                .or_default()
                .push(values.clone());
        }
    }
    let rows = values[0].len();
    let mut all: Expected = Vec::new();
    for (key, columns) in expected {
        let joined = table.joined.filter(|(joined, _)| *joined == key);
        let row = |row: usize| columns.iter().map(move |column| column[row].clone());
        let values = match joined {
            Some((_, Join::Melt)) => (0..rows).flat_map(row).collect(),
            Some((_, Join::Sum)) => (0..rows)
                .map(|r| json!(row(r).filter_map(|v| v.as_f64()).sum::<f64>()))
                .collect(),
            None => columns[0].clone(),
        };
        if let Some((_, Join::Melt)) = table.joined
            && joined.is_none()
        {
            let times = table
                .columns
                .iter()
                .filter(|c| Some(c.key.as_str()) == table.joined.map(|j| j.0))
                .count();
            let repeated = values
                .into_iter()
                .flat_map(|v: Value| std::iter::repeat_n(v, times));
            all.push((key, repeated.collect()));
            continue;
        }
        all.push((key, values));
    }
    for (_, _, key, value) in &table.statements {
        all.push(((*key).to_owned(), vec![json!(value)]));
    }
    if let Some((block, key, _)) = table.blocks {
        let numbers = (0..rows).map(|row| json!(row / block + 1));
        all.push((key.to_owned(), numbers.collect()));
    }
    all
}

fn text(
    table: &Table,
    dialect: &Dialect,
    names: &[String],
    units: &[String],
    cells: &[Vec<String>],
    random: &mut Random,
) -> String {
    let mut text = String::new();
    let end = dialect.end;
    text += &dialect.comment("invented data, 5 µm spot at 20 °C");
    let separators = [": ", " = "];
    for (key, value, ..) in &table.statements {
        text += &dialect.comment(&format!(
            "{key}{}{value}",
            separators.choose(random).unwrap()
        ));
    }
    let in_comment = dialect.units == Units::Comment;
    match (table.sentence, in_comment) {
        (Some(sentence), true) => {
            text += &dialect.comment(&format!("{sentence} in {}", dialect.unit.0));
        }
        (Some(sentence), false) => text += &dialect.comment(sentence),
        (None, true) => text += &dialect.comment(&format!("energies in {}", dialect.unit.0)),
        (None, false) => {}
    }
    if in_comment
        && table
            .columns
            .iter()
            .any(|column| column.quantity == Quantity::Intensity)
    {
        text += &dialect.comment("intensities in counts");
    }
    let widths = widths(names, units, cells, dialect);
    let line = |cells: Vec<&str>| joined(&cells, dialect, &widths);
    let names_line = match dialect.is_blank() && !dialect.aligned {
        true => names.join("  "),
        false => line(names.iter().map(String::as_str).collect()),
    };
    let header = |line: &str| match dialect.header {
        Header::Bare => format!("{line}{end}"),
        Header::Comment => dialect.comment(line),
    };
    text += &header(&names_line);
    if dialect.units == Units::Line {
        let dashed: Vec<&str> = units
            .iter()
            .map(|unit| if unit.is_empty() { "-" } else { unit })
            .collect();
        text += &header(&line(dashed));
    }
    for row in 0..cells[0].len() {
        if let Some((block, _, word)) = table.blocks.filter(|(block, ..)| row % block == 0) {
            let number = row / block + 1;
            if row > 0 {
                text += end;
            }
            // Titles in every block, or in none.
            if block % 2 == 0 {
                text += &dialect.comment(&format!("{word} {number}"));
            }
        }
        if dialect.repeated && row == 2 {
            text += &format!("{names_line}{end}");
        }
        text += &line(cells.iter().map(|column| column[row].as_str()).collect());
        if dialect.trailing {
            text += dialect.delimiter.trim_end();
        }
        if dialect.remark && row % 3 == 1 {
            text += "  # a remark";
        }
        text += end;
    }
    text
}

/// The widths of aligned columns. Numbers of neighbouring columns may fill theirs.
fn widths(
    names: &[String],
    units: &[String],
    cells: &[Vec<String>],
    dialect: &Dialect,
) -> Vec<usize> {
    let longest = |column: &Vec<String>| {
        column
            .iter()
            .map(|cell| cell.chars().count())
            .max()
            .unwrap_or(0)
    };
    let is_number = |column: &Vec<String>| {
        column.iter().all(|cell| {
            cell.is_empty() || cell.contains('.') && !cell.contains(char::is_alphabetic)
        })
    };
    let mut widths = Vec::new();
    for (index, column) in cells.iter().enumerate() {
        let full = dialect.glued
            && dialect.exponent.is_none()
            && index > 0
            && is_number(column)
            && is_number(&cells[index - 1]);
        let names = match dialect.header {
            Header::Bare if !full => names[index]
                .chars()
                .count()
                .max(units[index].chars().count()),
            _ => 0,
        };
        widths.push(if full {
            longest(column)
        } else {
            longest(column).max(names) + 2
        });
    }
    widths
}

/// One line of cells.
fn joined(cells: &[&str], dialect: &Dialect, widths: &[usize]) -> String {
    if !dialect.aligned {
        let line = cells.join(dialect.delimiter);
        return match dialect.delimiter {
            "| " => format!("| {line} |"),
            _ => line,
        };
    }
    cells
        .iter()
        .zip(widths)
        .map(|(cell, width)| {
            // A name longer than its column is set apart by two blanks.
            let pad = width.saturating_sub(cell.chars().count());
            match cell.contains(char::is_alphabetic) && pad < 2 {
                true => format!("  {cell}"),
                false => format!("{}{cell}", " ".repeat(pad)),
            }
        })
        .collect()
}

fn encoded(text: &str, random: &mut Random) -> Vec<u8> {
    let wide = |little: bool, marked: bool| -> Vec<u8> {
        let mark = if marked { "\u{feff}" } else { "" };
        format!("{mark}{text}")
            .encode_utf16()
            .flat_map(|unit| {
                if little {
                    unit.to_le_bytes()
                } else {
                    unit.to_be_bytes()
                }
            })
            .collect()
    };
    let bytes = match random.random_range(0..8) {
        0 => format!("\u{feff}{text}").into_bytes(),
        1 => wide(true, true),
        2 => wide(false, true),
        3 => wide(true, false),
        // Signs that Latin-1 lacks would be lost.
        4 | 5 if text.chars().all(|c| u32::from(c) < 256) => text
            .chars()
            .map(|c| u8::try_from(u32::from(c)).unwrap())
            .collect(),
        _ => text.as_bytes().to_vec(),
    };
    match random.random_bool(0.2) {
        false => bytes,
        true => {
            let mut writer = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::fast());
            writer.write_all(&bytes).unwrap();
            writer.finish().unwrap()
        }
    }
}
