//! Texts that the tests of this folder read, and what they hold.

use super::*;

/// The ordinates of the invented band that the fixtures hold in every form; `None` is `?`.
pub(super) const BAND: [Option<i32>; 28] = [
    Some(12),
    Some(12),
    Some(12),
    Some(12),
    Some(15),
    Some(15),
    Some(40),
    Some(163),
    Some(902),
    Some(1734),
    Some(2051),
    Some(1730),
    Some(905),
    Some(160),
    Some(41),
    Some(-3),
    Some(-3),
    Some(-3),
    Some(0),
    Some(0),
    Some(7),
    None,
    None,
    Some(10),
    Some(12),
    Some(11),
    Some(12),
    Some(12),
];
pub(super) const FORMS: [&str; 8] = [
    "affn",
    "pac",
    "sqz",
    "sqz_dup",
    "dif",
    "dif_dup",
    "mixed",
    "affn_crlf",
];

pub(super) fn fixture(name: &str) -> Source {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/fixtures/jcamp_dx");
    let text = std::fs::read_to_string(format!("{folder}/{name}.dx")).unwrap();
    Source::from_text(&format!("{name}.dx"), &text)
}

pub(super) fn refusal(text: &str) -> Problem {
    let mut problems = read(&Source::from_text("t.dx", text)).unwrap_err();
    assert_eq!(problems.len(), 1);
    problems.remove(0)
}

/// A table of one block: abscissas from 0 in steps of 1.
pub(super) fn table(points: usize, lines: &str) -> String {
    format!(
        "##TITLE= t\n##JCAMP-DX= 4.24\n##DATA TYPE= INFRARED SPECTRUM\n##XUNITS= 1/CM\n\
         ##YUNITS= ABSORBANCE\n##XFACTOR= 1\n##YFACTOR= 1\n##FIRSTX= 0\n##LASTX= {}\n\
         ##NPOINTS= {points}\n##XYDATA= (X++(Y..Y))\n{lines}\n##END=\n",
        points - 1
    )
}

pub(super) fn values(text: &str) -> Vec<f64> {
    let document = read(&Source::from_text("t.dx", text)).map_err(|it| it[0].to_string());
    let document = document.unwrap();
    let found = document
        .records
        .iter()
        .find_map(|record| match &record.value {
            Value::Ordinates(table) => Some(table.values.clone()),
            _ => None,
        });
    found.unwrap()
}

/// The line, column and message of a refusal, in one text.
pub(super) fn told(text: &str) -> String {
    refusal(text).to_string()
}

/// The affn fixture with a text replaced.
pub(super) fn altered(from: &str, to: &str) -> String {
    let source = fixture("affn");
    assert_eq!(source.text().matches(from).count(), 1, "{from}");
    source.text().replace(from, to)
}
