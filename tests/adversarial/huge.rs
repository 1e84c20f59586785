//! Much of one thing. Each is made when it is needed, so that few are in memory at a time.

use super::Want::{Any, Read, Refused};
use super::{Input, Want};

const HEADER: &str = "E - E_F (eV),counts\n";
const ROWS: &str = "-1.00,74\n-0.95,75\n-0.90,56\n-0.85,66\n";
const MANY: usize = 1_000_000;
const COLUMNS: usize = 200_000;

/// Something before, something many times, something after.
fn many(name: &str, want: Want, parts: [&str; 3], times: usize) -> Input {
    let [before, part, after] = parts.map(str::to_owned);
    Input::made(name, want, move || {
        [before.as_str(), &part.repeat(times), &after]
            .concat()
            .into_bytes()
    })
    .big()
}

/// A table of very many columns.
fn columns(name: &str, sign: &'static str, named: bool) -> Input {
    let what = if named { "a header and rows" } else { "rows" };
    Input::made(
        format!("{COLUMNS} columns by {name}, {what}"),
        Any,
        move || {
            let row = |cell: &dyn Fn(usize) -> String| {
                (0..COLUMNS).map(cell).collect::<Vec<_>>().join(sign) + "\n"
            };
            let mut text = String::new();
            if named {
                text += &row(&|i| match i {
                    0 => "Energy[eV]".into(),
                    i => format!("c{i}"),
                });
            }
            for line in 0..3 {
                text += &row(&|i| format!("{}", i % 1_000 + line));
            }
            text.into_bytes()
        },
    )
    .big()
}

pub fn inputs() -> Vec<Input> {
    let mut inputs = lines();
    inputs.extend(single_lines());
    for (name, sign) in [("comma", ","), ("blank", " "), ("tab", "\t")] {
        inputs.push(columns(name, sign, true));
        inputs.push(columns(name, sign, false));
    }
    inputs.extend(documents());
    inputs
}

/// Many lines.
fn lines() -> Vec<Input> {
    let table = [HEADER, ROWS].concat();
    vec![
        many(
            "comment lines before a table",
            Any,
            ["", "# nothing\n", &table],
            MANY,
        ),
        many(
            "comment lines after a table",
            Any,
            [&table, "# nothing\n", ""],
            MANY,
        ),
        many("comment lines only", Refused, ["", "# nothing\n", ""], MANY),
        many(
            "comment lines that state",
            Any,
            ["", "# temperature: 300 K\n", &table],
            200_000,
        ),
        many(
            "comment lines with units",
            Any,
            ["", "# energies in eV\n", &table],
            200_000,
        ),
        many("blank lines before a table", Any, ["", "\n", &table], MANY),
        many("blank lines after a table", Any, [&table, "\n", ""], MANY),
        many("blank lines only", Refused, ["", "\n", ""], MANY),
        many(
            "lines of blanks only",
            Refused,
            ["", "   \t \r\n", ""],
            MANY,
        ),
        many("CRs only", Refused, ["", "\r", ""], MANY),
        many(
            "lines of dashes before a table",
            Any,
            ["", "-----\n", &table],
            100_000,
        ),
        many("lines of dashes only", Refused, ["", "-----\n", ""], MANY),
        many("titles", Refused, ["", "a title of the run\n", ""], 100_000),
        many(
            "titles before a table",
            Any,
            ["", "a title of the run\n", &table],
            100_000,
        ),
        many(
            "headers before a table",
            Any,
            [HEADER, HEADER, ROWS],
            100_000,
        ),
        many("blocks", Any, ["", &format!("{table}\n"), ""], 100_000),
        many("rows that are words", Refused, [HEADER, "x,y\n", ""], MANY),
        many("rows that are short", Refused, [&table, "1\n", ""], MANY),
        many(
            "rows in two marks",
            Refused,
            [HEADER, "-1.5;7,5\n", ""],
            200_000,
        ),
        many(
            "rows of quotes",
            Any,
            [HEADER, "\"-1.0\",\"7\"\n", ""],
            300_000,
        ),
        many("equal rows", Any, [HEADER, "-1.00,74\n", ""], MANY),
        many("rows of nothing", Refused, [HEADER, ",\n", ""], MANY),
        many(
            "rows in CR",
            Read,
            ["E - E_F (eV),counts\r", "-1.00,74\r", ""],
            300_000,
        ),
        many("rows of one number", Any, ["", "1.5\n", ""], MANY),
        many(
            "rows glued",
            Refused,
            ["E (eV) counts\n", "-1.0-2.0-3.0\n", ""],
            200_000,
        ),
        many("opened quotes", Refused, [HEADER, "\"1,2\n", ""], 500_001),
    ]
}

/// One line.
fn single_lines() -> Vec<Input> {
    let long = 30_000_000;
    vec![
        many("a line of 30 MB of letters", Refused, ["", "x", ""], long),
        many("a line of 30 MB of digits", Refused, ["", "7", ""], long),
        many(
            "a line of 30 MB of numbers",
            Any,
            ["", "1.5 ", ""],
            long / 4,
        ),
        many("a line of 30 MB of cells", Any, ["", "1,", "\n"], long / 2),
        many("a line of 30 MB of blanks", Refused, ["", " ", ""], long),
        many(
            "a line of 30 MB of words",
            Refused,
            ["", "E (eV) ", "\n"],
            long / 7,
        ),
        many(
            "a comment of 30 MB",
            Any,
            ["# ", "unit eV ", &["\n", HEADER, ROWS].concat()],
            long / 8,
        ),
        many(
            "a line of 30 MB of brackets",
            Refused,
            ["E ", "(", "\n1 2\n2 3\n"],
            long,
        ),
        many(
            "a line of 10 MB in a table",
            Refused,
            [HEADER, "-1.0,74,", "\n"],
            1_250_000,
        ),
        many(
            "a cell of 10 MB",
            Refused,
            [&[HEADER, "-1.0,"].concat(), "7x", "\n-0.9,75\n"],
            5_000_000,
        ),
        many(
            "a number of 10 MB",
            Any,
            [&[HEADER, "-1.0,0."].concat(), "7", "\n-0.9,75\n"],
            10_000_000,
        ),
        many(
            "a name of 10 MB",
            Any,
            ["E - E_F (eV),", "counts", "\n-0.9,75\n-0.8,74\n"],
            1_600_000,
        ),
        many(
            "a quoted cell of 10 MB",
            Refused,
            [&[HEADER, "-1.0,\""].concat(), "a,\n", "\"\n-0.9,75\n"],
            3_300_000,
        ),
        many(
            "an open quote of 10 MB",
            Refused,
            [&[HEADER, "-1.0,\""].concat(), "a,\n", ""],
            3_300_000,
        ),
        many("10 MB of quotes", Refused, [HEADER, "\"", "\n"], 10_000_000),
        many(
            "10 MB of quotes in the header",
            Refused,
            ["E,", "\"", "\n1,2\n2,3\n"],
            10_000_001,
        ),
        many("10 MB of carets", Refused, ["", "^", "\n1,2\n"], 10_000_000),
        many(
            "10 MB of zero width signs",
            Refused,
            ["", "\u{200b}", "\n1,2\n"],
            3_300_000,
        ),
        many(
            "5 MB of combining marks",
            Refused,
            ["E", "\u{301}", " (eV),counts\n1,2\n"],
            2_500_000,
        ),
    ]
}

fn documents() -> Vec<Input> {
    let begun = "{\"schema\":\"bandrule/spectrum/1\",";
    vec![
        many(
            "a document of a long list",
            Refused,
            [&format!("{begun}\"energy_ev\":["), "1.5,", "1]}"],
            5_000_000,
        ),
        many(
            "a document of many keys",
            Refused,
            [begun, "\"x\":1,", "\"y\":1}"],
            MANY,
        ),
        many(
            "a document of lists",
            Refused,
            [&format!("{begun}\"a\":["), "[],", "[]]}"],
            MANY,
        ),
        many(
            "a document with a text of 30 MB",
            Refused,
            [&format!("{begun}\"a\":\""), "\\u00b5", "\"}"],
            5_000_000,
        ),
        many(
            "a schema of 10 MB",
            Refused,
            ["{\"schema\":\"bandrule/", "levels/", "1\"}"],
            1_400_000,
        ),
        many(
            "a schema of a long kind",
            Refused,
            ["{\"schema\":\"bandrule/", "levels", "/1\"}"],
            1_600_000,
        ),
        many(
            "a key of 10 MB",
            Refused,
            [&format!("{begun}\""), "k", "\":1}"],
            10_000_000,
        ),
    ]
}
