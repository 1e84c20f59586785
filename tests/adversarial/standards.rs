//! Files in open standards that announce what they do not hold.

use super::Input;
use super::Want::{Any, Read, Refused};

const ISO: &str = include_str!("../../fixtures/iso14976/norm-regular.vms");

/// A JCAMP-DX block with a table in the given form.
fn block(points: &str, table: &str) -> String {
    format!(
        "##TITLE= invented\n##JCAMP-DX= 4.24\n##DATA TYPE= PHOTOELECTRON SPECTRUM\n##ORIGIN= x\n\
         ##OWNER= x\n##XUNITS= BINDING ENERGY (EV)\n##YUNITS= COUNTS\n##XFACTOR= 1\n##YFACTOR= 1\n\
         ##FIRSTX= 1\n##LASTX= 4\n##NPOINTS= {points}\n##FIRSTY= 1\n##XYDATA= (X++(Y..Y))\n{table}\n\
         ##END=\n"
    )
}

pub fn inputs() -> Vec<Input> {
    let mut inputs = jcamp_dx();
    inputs.extend(iso14976());
    inputs
}

// One list of inputs.
#[allow(clippy::too_many_lines)]
fn jcamp_dx() -> Vec<Input> {
    let table = "1 1 2 3 4";
    let jcamp = |name: &str, points: &str, table: &str| {
        Input::bytes(format!("JCAMP-DX: {name}"), Refused, block(points, table))
    };
    let whole = block("4", table);
    let link = |times: usize, blocks: &str| {
        let blocks_of = block("4", table).repeat(times);
        format!(
            "##TITLE= all\n##JCAMP-DX= 4.24\n##DATA TYPE= LINK\n##BLOCKS= {blocks}\n\
             ##ORIGIN= x\n##OWNER= x\n{blocks_of}##END=\n"
        )
    };
    let deep = "##TITLE= x\n##JCAMP-DX= 4.24\n##DATA TYPE= LINK\n##BLOCKS= 1\n";
    vec![
        Input::bytes("JCAMP-DX: whole", Read, whole.clone()),
        jcamp("10^18 points announced", "1000000000000000000", table),
        jcamp("1e300 points announced", "1e300", table),
        jcamp("no points announced", "0", table),
        jcamp("negative points announced", "-4", table),
        jcamp("nan points announced", "nan", table),
        jcamp("a DUP bomb", "4", "1A0000S99999999999999999999"),
        jcamp("a DUP of 10^9", "4", "1A0S999999999"),
        jcamp("a DUP of 10^9, announced", "1000000000", "1A0S999999999"),
        jcamp("a DUP of 2^64", "4", "1A0S18446744073709551617"),
        jcamp(
            "DUPs in a row",
            "4",
            &format!("1A0{}", "S999999".repeat(5_000)),
        ),
        jcamp("a DUP of nothing", "4", "1S9"),
        jcamp(
            "DIFs that overflow",
            "4",
            &format!("1A0{}", "R999999999999999".repeat(500)),
        ),
        jcamp(
            "digits without end",
            "4",
            &format!("1A{}", "0".repeat(100_000)),
        ),
        jcamp("question marks", "4", &format!("1A{}", "?".repeat(100_000))),
        jcamp("a table of no table", "4", "\u{202e}hello"),
        jcamp("an empty table", "4", ""),
        Input::bytes("JCAMP-DX: title only", Refused, "##TITLE= x\n"),
        Input::bytes("JCAMP-DX: end only", Refused, "##END=\n"),
        Input::bytes("JCAMP-DX: label only", Refused, "##=\n##\n##=\n"),
        Input::bytes(
            "JCAMP-DX: without end",
            Refused,
            whole.replace("##END=\n", ""),
        ),
        Input::bytes(
            "JCAMP-DX: two units",
            Refused,
            whole.replacen("##XFACTOR", "##XUNITS= 1/CM\n##XFACTOR", 1),
        ),
        Input::bytes(
            "JCAMP-DX: a factor of 0",
            Refused,
            whole.replacen("XFACTOR= 1", "XFACTOR= 0", 1),
        ),
        Input::bytes(
            "JCAMP-DX: a factor of 1e308",
            Any,
            whole.replacen("YFACTOR= 1", "YFACTOR= 1e308", 1),
        ),
        Input::bytes(
            "JCAMP-DX: LASTX moved",
            Any,
            whole.replacen("LASTX= 4", "LASTX= 5", 1),
        ),
        Input::bytes(
            "JCAMP-DX: no room between",
            Any,
            whole.replacen("LASTX= 4", "LASTX= 1", 1),
        ),
        Input::bytes(
            "JCAMP-DX: 10^9 blocks announced",
            Refused,
            link(2, "1000000000"),
        ),
        Input::made("JCAMP-DX: 20,000 blocks", Any, move || {
            link(20_000, "20000").into_bytes()
        })
        .big(),
        Input::made(
            "JCAMP-DX: 100,000 blocks in one another",
            Refused,
            move || deep.repeat(100_000).into_bytes(),
        ),
        Input::made("JCAMP-DX: 200,000 private labels", Any, || {
            let labels = (0..200_000).map(|i| format!("##$P{i}= {i}\n"));
            block("4", "1 1 2 3 4")
                .replacen("##XUNITS", &(labels.collect::<String>() + "##XUNITS"), 1)
                .into_bytes()
        }),
        Input::made("JCAMP-DX: a label of 10 MB", Refused, || {
            format!("##TITLE= x\n##{}= 1\n##END=\n", "L".repeat(10_000_000)).into_bytes()
        }),
        Input::made("JCAMP-DX: 1,000,000 comment lines", Any, || {
            ("$$ nothing\n".repeat(1_000_000) + &block("4", "1 1 2 3 4")).into_bytes()
        })
        .big(),
    ]
}

fn iso14976() -> Vec<Input> {
    let lines: Vec<&str> = ISO.lines().collect();
    let line = |name: &str, number: usize, text: &str| {
        let mut changed = lines.clone();
        changed[number] = text;
        Input::bytes(format!("ISO 14976: {name}"), Refused, changed.join("\n"))
    };
    // The first line with a count of comment lines, of blocks, and of ordinate values.
    let comments = 5;
    let values = lines.len() - 1;
    vec![
        Input::bytes("ISO 14976: whole", Read, ISO),
        Input::bytes("ISO 14976: the first line", Refused, lines[0]),
        Input::bytes(
            "ISO 14976: nothing after the first line",
            Refused,
            format!("{}\n", lines[0]).repeat(2),
        ),
        line("10^9 comment lines announced", comments, "1000000000"),
        line(
            "10^18 comment lines announced",
            comments,
            "1000000000000000000",
        ),
        line(
            "2^64 comment lines announced",
            comments,
            "18446744073709551616",
        ),
        line("negative comment lines announced", comments, "-1"),
        line("a word for a count", comments, "many"),
        line("a mode that is none", 8, "NONE"),
        line("a scan that is none", 9, "SIDEWAYS"),
        line("10^9 experimental variables", 11, "1000000000"),
        line("10^12 entries left out", 14, "-1000000000000"),
        line("another end", values, "end"),
        Input::bytes(
            "ISO 14976: every number huge",
            Refused,
            numbers(&lines, "1000000000000"),
        ),
        Input::bytes(
            "ISO 14976: every number 1E308",
            Refused,
            numbers(&lines, "1E308"),
        ),
        Input::bytes(
            "ISO 14976: every number negative",
            Refused,
            numbers(&lines, "-1"),
        ),
        Input::bytes(
            "ISO 14976: every number zero",
            Refused,
            numbers(&lines, "0"),
        ),
        Input::bytes(
            "ISO 14976: rubbish after the end",
            Any,
            format!("{ISO}\nrubbish\n"),
        ),
        Input::made("ISO 14976: a line of 10 MB", Refused, || {
            let mut lines: Vec<&str> = ISO.lines().collect();
            let long = "9".repeat(10_000_000);
            lines[5] = &long;
            lines.join("\n").into_bytes()
        }),
    ]
}

/// The file with every whole number after the comments replaced.
fn numbers(lines: &[&str], number: &str) -> String {
    let changed = lines.iter().enumerate().map(|(index, line)| {
        match index > 9 && line.parse::<i64>().is_ok() {
            true => number,
            false => line,
        }
    });
    changed.collect::<Vec<_>>().join("\n")
}
