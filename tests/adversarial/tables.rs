//! Small tables that no one should write, and some that people do.

use super::Want::{Any, Read, Refused};
use super::{Input, Want};

/// A whole table of each kind.
pub fn whole() -> Vec<(&'static str, String)> {
    let levels = include_str!("../../fixtures/demo/levels.csv");
    let levels = levels.lines().take(40).collect::<Vec<_>>().join("\n") + "\n";
    vec![
        ("levels", levels),
        (
            "spectrum",
            include_str!("../../fixtures/demo/pes.csv").to_owned(),
        ),
        (
            "density",
            "E - E_F (eV),total DOS (states/eV)\n-2.0,0.10\n-1.5,0.50\n-1.0,1.25\n-0.5,0.75\n"
                .into(),
        ),
        (
            "dispersion",
            "k_x (1/A),E - E_F (eV)\n0.00,-1.20\n0.10,-1.10\n0.20,-0.90\n0.30,-0.60\n".into(),
        ),
        (
            "gaps",
            "material,gap (eV),method,excitation\nXa,2.50,G0W0,optical\nYb,3.10,G0W0,optical\n"
                .into(),
        ),
        (
            "series",
            "cutoff (Ha),gap (eV)\n10,2.10\n20,2.40\n30,2.48\n40,2.50\n".into(),
        ),
    ]
}

const CURVE: &str = "E - E_F (eV),counts\n-1.00,74\n-0.95,75\n-0.90,56\n-0.85,66\n";

/// Texts with what must become of each.
const TEXTS: &[(&str, Want, &str)] = &[
    ("nothing", Refused, ""),
    ("one blank", Refused, " "),
    ("one line end", Refused, "\n"),
    ("one letter", Refused, "x"),
    ("one cell", Refused, "5"),
    ("one cell and its name", Refused, "E (eV)\n5\n"),
    ("a header only", Refused, "E - E_F (eV),counts\n"),
    ("a header without end", Refused, "E - E_F (eV),counts"),
    ("comments only", Refused, "# a\n# E - E_F (eV),counts\n#\n"),
    ("delimiters only", Refused, ",,,,\n,,,,\n,,,,\n"),
    ("tabs only", Refused, "\t\t\t\n\t\t\t\n"),
    ("signs only", Refused, "+ - + -\n- + - +\n"),
    (
        "prose",
        Refused,
        "Dear all,\nplease find the counts attached.\n",
    ),
    (
        "mixed decimal marks",
        Refused,
        "E - E_F (eV);counts\n-1.00;74\n-0,95;75\n-0.90;56\n",
    ),
    (
        "mixed marks in a row",
        Refused,
        "E - E_F (eV);I (a.u.)\n-1.5;7,4\n-0.5;7,5\n",
    ),
    (
        "grouped or decimal",
        Refused,
        "E - E_F (eV);I\n-1;1,074\n-2;1,075\n-3;1,056\n",
    ),
    (
        "two groupings",
        Refused,
        "E - E_F (eV);counts\n-1;1.074.000\n-2;1,075,000\n",
    ),
    (
        "two units in a cell",
        Refused,
        "E - E_F (eV) [Ha],counts\n-1.00,74\n-0.95,75\n",
    ),
    (
        "comment against header",
        Refused,
        "# energies in Hartree\nE - E_F (eV),counts\n-1.0,74\n-0.9,75\n",
    ),
    (
        "unit line against header",
        Refused,
        "E - E_F (eV),counts\nmeV,\n-1.0,74\n-0.9,75\n",
    ),
    (
        "a unit of no energy",
        Refused,
        "E - E_F (kg),counts\n-1.0,74\n-0.9,75\n",
    ),
    (
        "two axes",
        Refused,
        "# axis: binding energy\nKinetic energy (eV),counts\n1.0,74\n0.9,75\n",
    ),
    (
        "short row",
        Refused,
        "E - E_F (eV),counts\n-1.00,74\n-0.95\n-0.90,56\n",
    ),
    (
        "long row",
        Refused,
        "E - E_F (eV),counts\n-1.00,74\n-0.95,75,12\n-0.90,56\n",
    ),
    (
        "every row another length",
        Refused,
        "E - E_F (eV),counts\n1\n1,2\n1,2,3\n1,2,3,4\n",
    ),
    ("stairs of blanks", Any, "1\n1 2\n1 2 3\n1 2 3 4\n"),
    (
        "duplicate energies",
        Refused,
        "E - E_F (eV),E - E_F (eV),counts\n-1,-1.1,74\n-0.9,-1.0,75\n",
    ),
    (
        "two different energies",
        Refused,
        "Kinetic energy (eV),Binding energy (eV),counts\n1,2,74\n2,1,75\n",
    ),
    (
        "duplicate levels",
        Refused,
        "k,band,E_QP (eV),E_QP (eV)\n1,1,-1.0,-2.0\n1,2,1.0,2.0\n",
    ),
    (
        "names without a unit",
        Refused,
        "k,band,E_QP\n1,1,-1.0\n1,2,1.0\n",
    ),
    (
        "words for numbers",
        Refused,
        "E - E_F (eV),counts\none,two\nthree,four\n",
    ),
    (
        "a letter in a number",
        Refused,
        "E - E_F (eV),counts\n-1.00,74\n-0.9O,75\n-0.80,56\n",
    ),
    (
        "hexadecimal",
        Refused,
        "E - E_F (eV),counts\n0x10,74\n0x11,75\n",
    ),
    (
        "huge exponents",
        Refused,
        "E - E_F (eV),counts\n1e999999999999999999999,74\n2,75\n",
    ),
    (
        "an exponent beyond doubles",
        Refused,
        "E - E_F (eV),counts\n-1,1e400\n-2,75\n",
    ),
    (
        "tiny exponents",
        Any,
        "E - E_F (eV),I\n-1,1e-999999999999\n-2,75\n",
    ),
    (
        "exponent without digits",
        Refused,
        "E - E_F (eV),counts\n-1,7e\n-2,7e+\n",
    ),
    (
        "infinities",
        Any,
        "E - E_F (eV),counts\ninf,74\n-inf,75\n1,Infinity\n",
    ),
    ("only nan", Any, "E - E_F (eV),counts\nnan,nan\nnan,nan\n"),
    (
        "formulas",
        Refused,
        "E - E_F (eV),counts\n=CMD(\"/c calc\"),74\n=1+1,75\n",
    ),
    (
        "a formula for a name",
        Any,
        "=HYPERLINK(\"x\"),E - E_F (eV),counts\n1,-1,74\n2,-2,75\n",
    ),
    (
        "at formulas",
        Refused,
        "E - E_F (eV),counts\n@SUM(1),74\n+cmd|' /C calc'!A0,75\n",
    ),
    (
        "unclosed quote in the header",
        Any,
        "\"E - E_F (eV),counts\n-1.0,74\n-0.9,75\n",
    ),
    (
        "unclosed quote in a row",
        Refused,
        "E - E_F (eV),counts\n-1.0,\"74\n-0.9,75\n",
    ),
    (
        "quote within a field",
        Refused,
        "E - E_F (eV),counts\n-1.0,7\"4\n-0.9,75\n",
    ),
    (
        "quoted line ends",
        Any,
        "\"E - E_F\n(eV)\",counts\n-1.0,74\n-0.9,75\n",
    ),
    (
        "quoted numbers",
        Read,
        "E - E_F (eV),counts\n\"-1.0\",\"74\"\n\"-0.9\",\"75\"\n",
    ),
    ("only quotes", Refused, "\"\"\"\"\"\"\"\"\"\n\"\"\"\n"),
    (
        "right-to-left marks",
        Any,
        "\u{202e}E - E_F (eV)\u{202c},counts\n-1.0,74\n-0.9,75\n",
    ),
    (
        "right-to-left number",
        Refused,
        "E - E_F (eV),counts\n\u{202e}-1.0\u{202c},74\n-0.9,75\n",
    ),
    (
        "isolates in a cell",
        Refused,
        "E - E_F (eV),counts\n\u{2066}x\u{2069},74\n-0.9,75\n",
    ),
    (
        "zero width names",
        Any,
        "E\u{200b} - E_F (eV),co\u{200d}unts\n-1.0,74\n-0.9,75\n",
    ),
    (
        "combining marks",
        Any,
        "E\u{301}\u{302}\u{303} (eV),counts\n-1.0,74\n-0.9,75\n",
    ),
    (
        "arabic digits",
        Refused,
        "E - E_F (eV),counts\n-\u{661}.\u{662},74\n-0.9,75\n",
    ),
    (
        "full width digits",
        Refused,
        "E - E_F (eV),counts\n\u{ff11}.0,74\n-0.9,75\n",
    ),
    (
        "escape sequences",
        Refused,
        "E - E_F (eV),counts\n\u{1b}[31m-1.0,74\n-0.9,75\n",
    ),
    (
        "bells and backspaces",
        Refused,
        "E - E_F (eV),counts\n-1.0\u{7}\u{8}\u{8},74\n-0.9,75\n",
    ),
    (
        "CR only",
        Read,
        "E - E_F (eV),counts\r-1.0,74\r-0.9,75\r-0.8,71\r",
    ),
    (
        "every line end",
        Read,
        "E - E_F (eV),counts\r\n-1.0,74\r-0.9,75\n-0.8,71\r\n",
    ),
    (
        "line feeds by twos",
        Any,
        "E - E_F (eV),counts\r\r\n-1.0,74\r\r\n-0.9,75\r\r\n",
    ),
    (
        "vertical tabs and form feeds",
        Any,
        "E - E_F (eV),counts\u{b}-1.0,74\u{c}-0.9,75\n",
    ),
    (
        "unicode line ends",
        Any,
        "E - E_F (eV),counts\u{2028}-1.0,74\u{2029}-0.9,75\n",
    ),
    (
        "end of file sign",
        Any,
        "E - E_F (eV),counts\n-1.0,74\n-0.9,75\n\u{1a}",
    ),
    (
        "blocks that differ",
        Refused,
        "E (eV),counts\n1,2\n2,3\n\nk,band,E_QP (eV)\n1,1,2\n",
    ),
    (
        "a rule as text",
        Any,
        "-----\nE - E_F (eV) counts\n-----\n-1.0 74\n-0.9 75\n-----\n",
    ),
    (
        "markup",
        Refused,
        "<html><body><table><tr><td>1</td></tr></table></body></html>\n",
    ),
    (
        "a study",
        Refused,
        "[computed]\nfile = \"levels.csv\"\nunit.energy = \"eV\"\n",
    ),
    (
        "a dash for a number",
        Any,
        "E - E_F (eV),counts\n-1.0,-\n-0.9,75\n-0.8,71\n",
    ),
    (
        "minus signs apart",
        Any,
        "E - E_F (eV),counts\n- 1.0,74\n- 0.9,75\n",
    ),
    (
        "complex numbers",
        Refused,
        "k,band,E_QP (eV)\n1,1,(1.0,0.0)\n1,2,(2.0,0.5)\n",
    ),
    (
        "fractions",
        Refused,
        "E - E_F (eV),counts\n1/2,74\n3/4,75\n",
    ),
    (
        "percentages",
        Refused,
        "E - E_F (eV),counts\n-1.0,74%\n-0.9,75%\n",
    ),
    (
        "dates",
        Refused,
        "E - E_F (eV),counts\n2024-01-02,74\n2024-01-03,75\n",
    ),
    (
        "times",
        Refused,
        "E - E_F (eV),counts\n12:30,74\n12:31,75\n",
    ),
    (
        "stars of overflow",
        Any,
        "E - E_F (eV) counts\n******* 74\n-0.9 75\n",
    ),
    (
        "repeat counts",
        Refused,
        "E - E_F (eV) counts\n3*1.0\n-0.9 75\n",
    ),
];

pub fn inputs() -> Vec<Input> {
    let whole = whole().into_iter();
    let mut inputs: Vec<Input> = whole
        .map(|(kind, text)| Input::bytes(format!("whole {kind}"), Read, text))
        .collect();
    let texts = TEXTS.iter();
    inputs.extend(texts.map(|&(name, want, text)| Input::bytes(name, want, text)));
    inputs.extend(repeated());
    inputs
}

/// Something small, many times.
fn repeated() -> Vec<Input> {
    let glued = |number: &str, want| {
        let text = format!("{CURVE}-0.80,{}\n", number.repeat(1_000));
        Input::bytes(format!("{number} glued a thousand times"), want, text)
    };
    let words = |word: &str| {
        let header = format!("{word} ").repeat(10_000);
        let rows = "1.0 ".repeat(10_000);
        Input::bytes(
            format!("a header of 10,000 times {word}"),
            Any,
            format!("{header}\n{rows}\n{rows}\n"),
        )
    };
    let nested = |open: &str, close: &str| {
        let text = format!(
            "E {}eV{},counts\n-1.0,74\n-0.9,75\n",
            open.repeat(20_000),
            close.repeat(20_000)
        );
        Input::bytes(format!("20,000 times {open} in a name"), Any, text)
    };
    let units = ["eV", "Ha", "Ry", "meV"].map(|unit| format!("({unit})"));
    vec![
        glued("1.0", Refused),
        glued("-1.0", Refused),
        glued("1e5", Refused),
        glued("1,", Refused),
        glued("7", Any),
        words("E"),
        words("counts"),
        words("eV"),
        words("the"),
        nested("(", ")"),
        nested("[", "]"),
        nested("{", ""),
        nested("\"", "\""),
        nested("^", ""),
        Input::bytes(
            "ten thousand units in a name",
            Refused,
            format!(
                "E {},counts\n-1.0,74\n-0.9,75\n",
                units.concat().repeat(2_500)
            ),
        ),
        Input::bytes(
            "a long name in a message",
            Refused,
            format!("E - E_F (eV),{}\n-1.0,a\n-0.9,b\n", "x".repeat(100_000)),
        ),
        Input::bytes(
            "a long cell in a message",
            Refused,
            format!(
                "E - E_F (eV),counts\n-1.0,{}\n",
                "\u{202e}x".repeat(100_000)
            ),
        ),
        Input::bytes(
            "a number of 100,000 digits",
            Any,
            format!("E - E_F (eV),I\n-1.0,0.{}\n-0.9,2\n", "3".repeat(100_000)),
        ),
    ]
}
