//! What the reader refuses, in its words.

use super::*;
use crate::parse::render;

#[test]
fn messages() {
    let shown = |line, with: &str| render(&refused(&changed("norm-regular", line, with)));
    insta::assert_snapshot!(shown(1, "VAMAS Surface Chemical Analysis 1986\n"), @r"
error: item 1, format identifier: expected `VAMAS Surface Chemical Analysis Standard Data Transfer Format 1988 May 4` and found `VAMAS Surface Chemical Analysis 1986`
 --> a.vms:1:1
  |
1 | VAMAS Surface Chemical Analysis 1986
  | ^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^
  |
  = help: the place of a line says what it is: look for a line too many or too few before this one
");
    insta::assert_snapshot!(shown(28, "x\n"), @r"
error: item 21, number of blocks: expected a whole number from 0 and found `x`
  --> a.vms:28:1
   |
28 | x
   | ^
   |
   = help: the place of a line says what it is: look for a line too many or too few before this one
");
    insta::assert_snapshot!(shown(28, "77\n"), @r"
error: item 21, number of blocks: expected no more entries than the file has lines for and found 77, of 5 or more lines each, with 118 lines left
  --> a.vms:28:1
   |
28 | 77
   | ^^
");
    insta::assert_snapshot!(shown(9, "norm\n"), @r"
error: item 8, experiment mode: expected `NORM`, `MAP`, `MAPDP`, `MAPSV`, `MAPSVDP`, `SDP`, `SDPSV` or `SEM` and found `norm`
 --> a.vms:9:1
  |
9 | norm
  | ^^^^
  |
  = help: the place of a line says what it is: look for a line too many or too few before this one
");
    insta::assert_snapshot!(shown(41, " UVS\n"), @r"
error: block 1, item 9, technique: expected `XPS`, `UPS`, `AES diff`, `AES dir`, `EDX`, `ELS`, `FABMS`, `FABMS energy spec`, `ISS`, `SIMS`, `SIMS energy spec`, `SNMS`, `SNMS energy spec` or `XRF` and found `UVS`
  --> a.vms:41:2
   |
41 |  UVS
   |  ^^^
   |
   = help: the place of a line says what it is: look for a line too many or too few before this one
");
}

#[test]
fn messages_about_numbers() {
    let shown = |line, with: &str| render(&refused(&changed("norm-regular", line, with)));
    insta::assert_snapshot!(shown(44, "21,218\n"), @r"
error: block 1, item 14, analysis source characteristic energy: expected a finite number and found `21,218`
  --> a.vms:44:1
   |
44 | 21,218
   | ^^^^^^
   |
   = help: write a point for the decimal mark
");
    insta::assert_snapshot!(shown(87, "5\n"), @r"
error: block 1, number of ordinate values: expected a multiple of the number of corresponding variables, 2, and found 5
  --> a.vms:87:1
   |
87 | 5
   | ^
");
    insta::assert_snapshot!(shown(94, "NaN\n"), @r"
error: block 1, ordinate value: expected a finite number and found `NaN`
  --> a.vms:94:1
   |
94 | NaN
   | ^^^
   |
   = help: the place of a line says what it is: look for a line too many or too few before this one
");
    insta::assert_snapshot!(shown(23, "41\n"), @r"
error: item 17, part that was entered by hand: expected the number of a part of a block (1 to 40) and found `41`
  --> a.vms:23:1
   |
23 | 41
   | ^^
   |
   = help: the place of a line says what it is: look for a line too many or too few before this one
");
    insta::assert_snapshot!(shown(44, "\n"), @r"
error: block 1, item 14, analysis source characteristic energy: expected a finite number and found a blank line
  --> a.vms:44:1
   |
44 |
   | ^
   |
   = help: the place of a line says what it is: look for a line too many or too few before this one
");
    insta::assert_snapshot!(shown(32, "-2\n"), @r"
error: block 1, item 2, month: expected a whole number from 0 (-1 where it is unknown) and found `-2`
  --> a.vms:32:1
   |
32 | -2
   | ^^
   |
   = help: the place of a line says what it is: look for a line too many or too few before this one
");
    insta::assert_snapshot!(shown(146, "end of experiment\n\n more\n"), @r"
error: experiment terminator: expected nothing after it and found `more`
   --> a.vms:148:2
    |
148 |  more
    |  ^^^^
");
    let cut = text("norm-regular")
        .split_inclusive('\n')
        .take(60)
        .collect::<String>();
    insta::assert_snapshot!(render(&refused(&cut)), @r"
error: block 1, item 30, charge of detected particle: expected a line and found the end of the file
  --> a.vms:60:13
   |
60 | valence band
   |             ^
");
}

#[test]
fn a_part_that_is_left_out_must_be_in_the_first_block() {
    // The first block's technique has no item 23, the second one's needs it and leaves it out.
    let text = changed("norm-regular", 107, "AES diff\n").replacen("-6\n8\n", "-7\n23\n8\n", 1);
    insta::assert_snapshot!(refused(&text), @"a.vms:117:1: block 2, item 23, differential width: the parameter list leaves it out, and the first block has none to take");
}

#[test]
fn announced_numbers_are_never_trusted() {
    for line in [6, 12, 22, 25, 26, 28, 38, 66, 78, 87, 135] {
        for huge in ["4294967295", "1000"] {
            let problem = refused(&changed("norm-regular", line, &format!("{huge}\n")));
            let place = problem.place.unwrap();
            // The number of lines that each block has is seen where the blocks are counted.
            let at = if line == 26 { 28 } else { line };
            assert_eq!((place.line, place.column), (at, 1), "{}", problem.message);
        }
    }
}

#[test]
fn a_file_that_ends_early_says_which_item_was_next() {
    for (name, text) in FIXTURES {
        let lines: Vec<&str> = text.lines().collect();
        for kept in 0..lines.len() {
            let cut = lines[..kept].join("\n");
            let problem = refused(&cut);
            let place = problem.place.clone().unwrap();
            assert!(place.line <= kept.max(1), "{name}: {problem}");
        }
    }
}

#[test]
fn a_line_lost_or_doubled_is_never_read_in_silence() {
    // Texts take any line and lists of them any number, so only what follows can tell: every item
    // after them is a number or a keyword.
    let whole = text("norm-regular");
    for line in 1..=146 {
        let old = whole.lines().nth(line - 1).unwrap();
        for with in [String::new(), format!("{old}\n{old}\n")] {
            let text = changed("norm-regular", line, &with);
            assert!(read(&source(&text)).is_err(), "line {line}");
        }
    }
}
