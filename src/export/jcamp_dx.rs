//! JCAMP-DX 4.24 (`McDonald` and Wilks, Appl. Spectrosc. 42, 151 (1988)): a document as its text.
//!
//! Every number is written in the shortest form that reads back to its last bit, lines have at most
//! the standard's 80 characters, and each text is read back and compared with the document before it is
//! given away. Ordinates are written in AFFN form; whole ones in SQZ form or as differences with counts
//! of equal ones (DIF, DUP) where that is asked for.

use crate::parse::jcamp_dx::{Block, Document, Ordinates, Record, Value, normal_label, read};
use crate::parse::{Problem, Source};

/// Most characters of a line.
const LINE: usize = 80;
/// From here on a whole number has more digits than the packed forms are read with.
const PACKED_BELOW: f64 = 1e15;

/// How ordinates are written.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Packing {
    /// AFFN: decimal numbers with blanks between them.
    Fixed,
    /// SQZ: whole numbers without blanks, the first digit of each a letter that has the sign.
    Squeezed,
    /// DIF and DUP: differences of whole numbers, and counts of equal differences.
    Differences,
}

/// Why a document cannot be written.
#[derive(thiserror::Error, Debug)]
pub enum Error {
    /// The standard cannot carry a record.
    #[error("`##{label}=` cannot be written: {what}")]
    Record {
        /// Its label.
        label: String,
        /// What stands against it.
        what: String,
    },
    /// The comments before the first record cannot be carried.
    #[error("the comments before the first record cannot be written: {0}")]
    Comments(String),
    /// The text is refused when it is read again.
    #[error("the document breaks the standard: {0}")]
    Refused(Box<Problem>),
    /// The text reads as another document.
    #[error(
        "{0} does not read back as it was meant; look for blanks at the ends of labels and lines"
    )]
    RoundTrip(String),
}

/// The text of a document, ordinates in AFFN form.
///
/// # Errors
/// What the standard cannot carry, or a document that breaks its rules.
pub fn text(document: &Document) -> Result<String, Error> {
    packed_text(document, Packing::Fixed)
}

/// The text of a document, ordinates in the form that is asked for.
///
/// # Errors
/// As [`text`]; also an ordinate that is not whole, or has more than 15 digits, in a packed form.
pub fn packed_text(document: &Document, packing: Packing) -> Result<String, Error> {
    let text = render(document, packing)?;
    let source = Source::from_text("document", &text);
    let back = read(&source).map_err(|problems| match problems.into_iter().next() {
        Some(problem) => Error::Refused(Box::new(problem)),
        None => Error::RoundTrip("the document".to_owned()),
    })?;
    if back == *document {
        return Ok(text);
    }
    let mut pairs = document.records.iter().zip(&back.records);
    let differs = pairs.find(|(meant, back)| meant != back);
    Err(Error::RoundTrip(match differs {
        Some((record, _)) => format!("`##{}=`", record.label),
        None => "the document".to_owned(),
    }))
}

fn render(document: &Document, packing: Packing) -> Result<String, Error> {
    let mut out = String::new();
    comments(&document.comments, &mut out).map_err(Error::Comments)?;
    let mut start = 0;
    for (index, record) in document.records.iter().enumerate() {
        if normal_label(&record.label) == "TITLE" {
            start = index;
        }
        lines(record, &document.records[start..], packing, &mut out).map_err(|what| {
            Error::Record {
                label: record.label.clone(),
                what,
            }
        })?;
    }
    Ok(out)
}

/// The records up to the first `##END=`.
fn block_from(records: &[Record]) -> Block<'_> {
    let end = records
        .iter()
        .position(|record| normal_label(&record.label) == "END");
    Block {
        records: &records[..end.unwrap_or(records.len())],
    }
}

/// Adds the lines of a record; `block` are the records from the beginning of its block on.
fn lines(
    record: &Record,
    block: &[Record],
    packing: Packing,
    out: &mut String,
) -> Result<(), String> {
    let label = &record.label;
    if label.contains(['=', '\n', '\r']) || label.contains("$$") {
        return Err("a label has no `=`, no `$$` and no line break".to_owned());
    }
    match &record.value {
        Value::Text(text) => text_lines(label, text, out)?,
        Value::Number(number) => line(&format!("##{label}= {}", affn(*number)?), out)?,
        Value::Count(count) => line(&format!("##{label}= {count}"), out)?,
        Value::Ordinates(table) => {
            line(&format!("##{label}= (X++(Y..Y))"), out)?;
            ordinates(
                table,
                &Abscissas::of(block_from(block), table)?,
                packing,
                out,
            )?;
        }
        Value::Points(points) => {
            line(&format!("##{label}= (XY..XY)"), out)?;
            if points.abscissas.len() != points.ordinates.len() {
                return Err("there are not as many ordinates as abscissas".to_owned());
            }
            for (&x, &y) in points.abscissas.iter().zip(&points.ordinates) {
                line(&format!("{}, {}", affn(x)?, fixed(y)?), out)?;
            }
        }
    }
    comments(&record.comments, out)
}

fn text_lines(label: &str, text: &str, out: &mut String) -> Result<(), String> {
    for (index, content) in text.split('\n').enumerate() {
        if content.contains("$$") {
            return Err("`$$` in a text would begin a comment".to_owned());
        }
        match index {
            0 if content.is_empty() => line(&format!("##{label}="), out)?,
            0 => line(&format!("##{label}= {content}"), out)?,
            _ if content.trim_start().starts_with("##") => {
                return Err("a line of text that begins with `##` would be a record".to_owned());
            }
            _ => line(content, out)?,
        }
    }
    Ok(())
}

fn comments(comments: &[String], out: &mut String) -> Result<(), String> {
    for comment in comments {
        if comment.contains('\n') {
            return Err("a comment is one line".to_owned());
        }
        line(format!("$$ {comment}").trim_end(), out)?;
    }
    Ok(())
}

/// Adds a line, where it is one.
fn line(content: &str, out: &mut String) -> Result<(), String> {
    let length = content.chars().count();
    if length > LINE {
        return Err(format!(
            "a line has at most {LINE} characters, and `{}…` has {length}: break the text into lines",
            content.chars().take(30).collect::<String>()
        ));
    }
    if content.contains('\r') {
        return Err("a line has no carriage return in it".to_owned());
    }
    out.push_str(content);
    out.push('\n');
    Ok(())
}

/// A finite number in AFFN form: the shortest text that reads back to it.
fn affn(value: f64) -> Result<String, String> {
    if !value.is_finite() {
        return Err(format!("{value} is no finite number"));
    }
    if value == 0.0 || (1e-5..1e15).contains(&value.abs()) {
        return Ok(format!("{value}"));
    }
    let text = format!("{value:e}");
    let (mantissa, exponent) = text.split_once('e').unwrap_or((&text, "0"));
    let (sign, digits) = match exponent.strip_prefix('-') {
        Some(digits) => ('-', digits),
        None => ('+', exponent),
    };
    Ok(format!("{mantissa}E{sign}{digits:0>2}"))
}

/// An ordinate in AFFN form, `?` where it is not valid.
fn fixed(value: f64) -> Result<String, String> {
    if value.is_nan() {
        return Ok("?".to_owned());
    }
    affn(value)
}

/// The abscissas that lines begin with: before XFACTOR, as finely as the X check needs.
struct Abscissas {
    first: f64,
    step: f64,
    decimals: usize,
}

impl Abscissas {
    fn of(block: Block<'_>, table: &Ordinates) -> Result<Self, String> {
        let number = |label| {
            let missing = || format!("the block has no number {label}");
            block.number(label).ok_or_else(missing)
        };
        let factor = number("XFACTOR")?;
        let (first, last) = (number("FIRSTX")? / factor, number("LASTX")? / factor);
        #[allow(clippy::cast_precision_loss)] // Rows are held in memory.
        let steps = table.values.len().saturating_sub(1).max(1) as f64;
        let step = (last - first) / steps;
        // A hundredth of a step.
        #[allow(clippy::cast_possible_truncation, clippy::cast_sign_loss)] // Within 0 and 17.
        let decimals = (2.0 - step.abs().log10().floor()).clamp(0.0, 17.0) as usize;
        Ok(Self {
            first,
            step,
            decimals,
        })
    }

    fn at(&self, row: usize) -> Result<String, String> {
        #[allow(clippy::cast_precision_loss)] // Rows are held in memory.
        let x = self.first + row as f64 * self.step;
        let short = format!("{x:.*}", self.decimals);
        if self.decimals == 17 || self.step == 0.0 || short.len() > 24 {
            return affn(x);
        }
        Ok(match short.split_once('.') {
            Some(_) => short.trim_end_matches('0').trim_end_matches('.').to_owned(),
            None => short,
        })
    }
}

fn ordinates(
    table: &Ordinates,
    abscissas: &Abscissas,
    packing: Packing,
    out: &mut String,
) -> Result<(), String> {
    let values = &table.values;
    if packing != Packing::Fixed {
        values.iter().try_for_each(|&value| can_be_packed(value))?;
    }
    let mut row = 0;
    let mut repeats = false;
    while row < values.len() || repeats {
        let at = row - usize::from(repeats);
        let mut content = abscissas.at(at)?;
        (row, repeats) = match packing {
            Packing::Fixed => {
                let text = |value| Ok(format!(" {}", fixed(value)?));
                (fill(values, at, &mut content, text)?, false)
            }
            Packing::Squeezed => (
                fill(values, at, &mut content, |value| Ok(squeezed(value)))?,
                false,
            ),
            Packing::Differences => differences(values, at, &mut content),
        };
        line(&content, out)?;
    }
    Ok(())
}

/// Adds ordinates while they fit; the first always is added. Returns the row after the last.
fn fill(
    values: &[f64],
    from: usize,
    content: &mut String,
    text: impl Fn(f64) -> Result<String, String>,
) -> Result<usize, String> {
    for (row, &value) in values.iter().enumerate().skip(from) {
        let text = text(value)?;
        if row > from && content.len() + text.len() > LINE {
            return Ok(row);
        }
        content.push_str(&text);
    }
    Ok(values.len())
}

/// Adds an ordinate and differences while they fit. Returns the row after the last, and whether the
/// line ends in a difference.
fn differences(values: &[f64], from: usize, content: &mut String) -> (usize, bool) {
    content.push_str(&squeezed(values[from]));
    let mut row = from + 1;
    let mut ends = false;
    while row < values.len() {
        let difference = values[row] - values[row - 1];
        let (text, rows) = if difference.is_nan() {
            (squeezed(values[row]), 1)
        } else {
            let same = |row: &usize| exactly(values[*row] - values[row - 1], difference);
            let rows = (row..values.len()).take_while(same).count();
            (difference_text(difference, rows), rows)
        };
        if content.len() + text.len() > LINE {
            break;
        }
        content.push_str(&text);
        row += rows;
        ends = !difference.is_nan();
    }
    (row, ends)
}

fn can_be_packed(value: f64) -> Result<(), String> {
    let signed_zero = value == 0.0 && value.is_sign_negative();
    let whole = value.fract() == 0.0 && value.abs() < PACKED_BELOW / 2.0 && !signed_zero;
    if whole || value.is_nan() {
        return Ok(());
    }
    Err(format!(
        "the packed forms hold whole numbers of at most 14 digits, and an ordinate is {value:?}: \
         write AFFN form, or scale by YFACTOR"
    ))
}

#[allow(clippy::float_cmp)] // Differences of whole numbers are exact.
fn exactly(a: f64, b: f64) -> bool {
    a == b
}

/// An ordinate in SQZ form, `?` where it is not valid.
fn squeezed(value: f64) -> String {
    if value.is_nan() {
        return "?".to_owned();
    }
    pseudo(value, '@', 'A', 'a')
}

/// A difference in DIF form, with the count of equal ones where there is more than one.
fn difference_text(difference: f64, count: usize) -> String {
    let mut text = pseudo(difference, '%', 'J', 'j');
    if count > 1 {
        let digits = count.to_string();
        let first = digits.as_bytes()[0];
        text.push(if first == b'9' {
            's'
        } else {
            char::from(b'S' + first - b'1')
        });
        text.push_str(&digits[1..]);
    }
    text
}

/// A whole number whose first digit, with its sign, is a letter.
fn pseudo(value: f64, zero: char, plus: char, minus: char) -> String {
    let digits = format!("{}", value.abs());
    let first = digits.as_bytes()[0];
    let mut text = String::new();
    let letter = |base: char| char::from(base as u8 + first - b'1');
    text.push(match first {
        b'0' => zero,
        _ if value < 0.0 => letter(minus),
        _ => letter(plus),
    });
    text.push_str(&digits[1..]);
    text
}

#[cfg(test)]
#[path = "jcamp_dx_tests.rs"]
mod tests;
