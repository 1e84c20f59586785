//! Data labels: their normal form, and what kind of value each has.

pub(super) const TITLE: &str = "TITLE";
pub(super) const VERSION: &str = "JCAMPDX";
/// The sister standard for chemical structures: its blocks may stand in a compound file.
pub(super) const STRUCTURE: &str = "JCAMPCS";
pub(super) const DATA_TYPE: &str = "DATATYPE";
pub(super) const END: &str = "END";
pub(super) const BLOCKS: &str = "BLOCKS";
pub(super) const XY_DATA: &str = "XYDATA";
pub(super) const XY_POINTS: &str = "XYPOINTS";

/// What a record's value is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Kind {
    /// A real number.
    Number,
    /// A whole number from zero.
    Count,
    /// The table `(X++(Y..Y))`.
    Ordinates,
    /// The table `(XY..XY)`.
    Points,
    /// Anything else.
    Text,
}

/// Real numbers.
const NUMBERS: [&str; 10] = [
    "FIRSTX", "LASTX", "FIRSTY", "XFACTOR", "YFACTOR", "DELTAX", "MAXX", "MINX", "MAXY", "MINY",
];

/// Tables that are kept as text, each with the reason why it is no curve.
const OTHER_TABLES: [(&str, &str); 4] = [
    ("PEAKTABLE", "a peak table holds peaks, not a curve"),
    (
        "PEAKASSIGNMENTS",
        "peak assignments name peaks and are not a curve",
    ),
    (
        "ASSIGNMENTS",
        "peak assignments name peaks and are not a curve",
    ),
    (
        "RADATA",
        "an interferogram (RADATA) is counted along a path difference, not an energy",
    ),
];

/// Labels that only NTUPLES blocks have.
pub(super) const NTUPLES: [&str; 4] = ["NTUPLES", "VARNAME", "PAGE", "DATATABLE"];

/// The other labels of the standard, all of them text.
const TEXTS: [&str; 39] = [
    "ORIGIN",
    "OWNER",
    "XUNITS",
    "YUNITS",
    "XLABEL",
    "YLABEL",
    "RESOLUTION",
    "CLASS",
    "DATE",
    "TIME",
    "LONGDATE",
    "SOURCEREFERENCE",
    "CROSSREFERENCE",
    "SAMPLEDESCRIPTION",
    "CASNAME",
    "NAMES",
    "MOLFORM",
    "CASREGISTRYNO",
    "WISWESSER",
    "BEILSTEINLAWSONNO",
    "MP",
    "BP",
    "REFRACTIVEINDEX",
    "DENSITY",
    "MW",
    "CONCENTRATIONS",
    "SPECTROMETERDATASYSTEM",
    "INSTRUMENTPARAMETERS",
    "INSTRUMENTALPARAMETERS",
    "SAMPLINGPROCEDURE",
    "STATE",
    "PATHLENGTH",
    "PRESSURE",
    "TEMPERATURE",
    "DATAPROCESSING",
    "ALIAS",
    "ZPD",
    "BLOCKID",
    "DATACLASS",
];

/// The label without what does not count: case, blanks, `-`, `/` and `_`.
#[must_use]
pub fn normal(label: &str) -> String {
    label
        .chars()
        .filter(|c| !c.is_whitespace() && !matches!(c, '-' | '/' | '_'))
        .map(|c| c.to_ascii_uppercase())
        .collect()
}

/// The kind of value of a label in normal form.
pub(super) fn kind(normal: &str) -> Kind {
    match normal {
        "NPOINTS" | BLOCKS => Kind::Count,
        XY_DATA => Kind::Ordinates,
        XY_POINTS => Kind::Points,
        number if NUMBERS.contains(&number) => Kind::Number,
        _ => Kind::Text,
    }
}

/// Why a table with this label is no curve; `None` where it is no such table.
pub(super) fn no_curve(normal: &str) -> Option<&'static str> {
    let mut tables = OTHER_TABLES.iter();
    tables.find(|(table, _)| *table == normal).map(|it| it.1)
}

/// Whether a label is neither of the standard nor private, nor one of a particular technique (`.`).
pub(super) fn is_unlisted(normal: &str) -> bool {
    const FRAME: [&str; 5] = [TITLE, VERSION, STRUCTURE, DATA_TYPE, END];
    !normal.is_empty()
        && !normal.starts_with(['$', '.'])
        && kind(normal) == Kind::Text
        && no_curve(normal).is_none()
        && !FRAME.contains(&normal)
        && !TEXTS.contains(&normal)
}

/// Whether a record may stand in a block once only, because it says how a number is read.
pub(super) fn is_single(normal: &str) -> bool {
    const ONE: [&str; 4] = [VERSION, DATA_TYPE, "XUNITS", "YUNITS"];
    kind(normal) != Kind::Text || ONE.contains(&normal)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_does_not_count_in_a_label() {
        for label in [
            "DATA TYPE",
            "Data-Type",
            "data_type",
            "DATA/TYPE",
            " datatype ",
        ] {
            assert_eq!(normal(label), DATA_TYPE, "{label}");
        }
        assert_eq!(normal("$My Label"), "$MYLABEL");
    }

    #[test]
    fn labels_that_nobody_lists() {
        for label in ["NPONTS", "YFACTR", "COLOUR"] {
            assert!(is_unlisted(label), "{label}");
        }
        for label in [
            "$COLOUR",
            ".COLOUR",
            "",
            "ORIGIN",
            "TITLE",
            "MAXY",
            "PEAKTABLE",
        ] {
            assert!(!is_unlisted(label), "{label}");
        }
    }

    #[test]
    fn lists_are_in_normal_form() {
        let tables = OTHER_TABLES.iter().map(|it| &it.0);
        for label in TEXTS.iter().chain(&NUMBERS).chain(tables).chain(&NTUPLES) {
            assert_eq!(normal(label), *label);
        }
    }
}
