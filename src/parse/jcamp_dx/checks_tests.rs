use super::test_texts::{altered, fixture, refusal, table, told, values};
use super::*;

#[test]
fn text_of_a_line_is_refused_where_it_is() {
    for (lines, said) in [
        ("0J1", "an ordinate in AFFN or SQZ form at the start"),
        ("0T", "an ordinate in AFFN or SQZ form at the start"),
        ("0 1TT", "an ordinate between two counts"),
        ("0 1.5J", "a whole ordinate before a difference"),
        ("0 1?J", "valid before a difference"),
        ("0", "an ordinate after the abscissa"),
        ("0 1 2\n2", "an ordinate after the abscissa"),
        ("0AJ\n1?", "(Y check)"),
        ("0AJ\n1T", "(Y check)"),
        ("0I99999999999999R99999999999999s", "2^53"),
        ("0 1 ##", "AFFN, PAC, SQZ"),
        ("0 1 NaN 2", "AFFN, PAC, SQZ"),
    ] {
        let told = told(&table(3, lines));
        assert!(told.contains(said), "{lines}: {told}");
        assert!(
            told.starts_with("t.dx:12:") || told.starts_with("t.dx:13:"),
            "{told}"
        );
    }
}

#[test]
fn counts_are_not_trusted_with_memory() {
    let told = told(&table(3, "0 1Z99999999"));
    assert!(
        told.contains("ten million in counts and found `Z99999999`"),
        "{told}"
    );
    let many = table(3, &"0 1Y000000".repeat(2));
    assert!(refusal(&many).to_string().contains("ten million"));
    let huge = table(3, "0 1 2 3").replace("NPOINTS= 3", "NPOINTS= 18446744073709551615");
    let told = refusal(&huge).to_string();
    assert!(told.starts_with("t.dx:10:12: `##NPOINTS=`"), "{told}");
}

#[test]
fn numbers_that_the_block_states_are_held_to_the_table() {
    for (from, to, at) in [
        (
            "##NPOINTS= 28",
            "##NPOINTS= 27",
            "t.dx:14:12: `##NPOINTS=`: expected the number of ordinates in `##XYDATA=`, 28, and found 27",
        ),
        ("##NPOINTS= 28", "##NPOINTS= 29", "t.dx:14:12: `##NPOINTS=`"),
        (
            "##FIRSTY= 0.012",
            "##FIRSTY= 0.013",
            "t.dx:15:11: `##FIRSTY=`: expected the first ordinate times YFACTOR, 0.012, and found 0.013",
        ),
        (
            "##LASTX= 3946",
            "##LASTX= 3940",
            "t.dx:12:10: `##LASTX=`: expected FIRSTX + (NPOINTS - 1) DELTAX within half a step, 3946, and found 3940",
        ),
        (
            "##DELTAX= -2",
            "##DELTAX= 2",
            "t.dx:12:10: `##LASTX=`: expected FIRSTX + (NPOINTS - 1) DELTAX within half a step, 4054, and found 3946",
        ),
        (
            "##MAXX= 4000",
            "##MAXX= 4002",
            "t.dx:16:9: `##MAXX=`: expected the greatest value of the table, 4000, and found 4002",
        ),
        ("##MINX= 3946", "##MINX= 3944", "t.dx:17:9: `##MINX=`"),
        (
            "##MAXY= 2.051",
            "##MAXY= 2.052",
            "t.dx:18:9: `##MAXY=`: expected the greatest value of the table, 2.051, and found 2.052",
        ),
        (
            "##MINY= -0.003",
            "##MINY= 0",
            "t.dx:19:9: `##MINY=`: expected the least value of the table, -0.003, and found 0",
        ),
    ] {
        let told = told(&altered(from, to));
        assert!(told.starts_with(at), "{told}");
    }
    // Within the rounding of YFACTOR, or of the number's own text.
    for (from, to) in [
        ("##MAXY= 2.051", "##MAXY= 2.0513"),
        ("##MAXY= 2.051", "##MAXY= 2.1"),
        ("##MINY= -0.003", "##MINY= -0.00349"),
        ("##FIRSTY= 0.012", "##FIRSTY= 0.01"),
        ("##DELTAX= -2", "##DELTAX= -2.0"),
        ("##LASTX= 3946", "##LASTX= 3946.4"),
        ("##FIRSTY= 0.012", "##$NOTHING="),
        ("##DELTAX= -2", "##$NOTHING="),
    ] {
        let text = altered(from, to);
        let read = read(&Source::from_text("t", &text)).map_err(|it| it[0].to_string());
        assert!(read.is_ok(), "{to}: {}", read.unwrap_err());
    }
    // Ordinates with a fraction are not rounded to YFACTOR.
    let fractions = |first: &str| {
        table(2, "0 0.25 0.75").replace("##NPOINTS", &format!("##FIRSTY= {first}\n##NPOINTS"))
    };
    assert_eq!(values(&fractions("0.25")), [0.25, 0.75]);
    assert!(told(&fractions("0.31")).contains("expected the first ordinate times YFACTOR, 0.25"));
}

#[test]
fn abscissas_of_lines_are_held_to_half_a_step() {
    assert_eq!(values(&table(4, "0 1 2\n2.4 3 4")).len(), 4);
    assert_eq!(values(&table(4, "0 1 2\n1.5 3 4")).len(), 4);
    for lines in [
        "0 1 2\n2.6 3 4",
        "0 1 2\n1.4 3 4",
        "1 1 2\n2 3 4",
        "0AJ\n2BJJ\n3D",
    ] {
        assert!(told(&table(4, lines)).contains("(X check)"), "{lines}");
    }
    let one = table(1, "0 5");
    assert_eq!(values(&one), [5.0]);
    assert!(told(&one.replace("LASTX= 0", "LASTX= 1")).contains("one point only"));
    assert!(told(&table(1, "1 5")).contains("(X check)"));
}

#[test]
fn pairs_are_held_to_what_the_block_states() {
    let source = fixture("points");
    let altered = |from: &str, to: &str| {
        assert!(source.text().contains(from), "{from}");
        source.text().replacen(from, to, 1)
    };
    for (from, to, said) in [
        (
            "##FIRSTX= 4000",
            "##FIRSTX= 4001",
            "the first abscissa times XFACTOR, 4000",
        ),
        (
            "##LASTX= 3946",
            "##LASTX= 3945",
            "the last abscissa times XFACTOR, 3946",
        ),
        (
            "##FIRSTY= 0.012",
            "##FIRSTY= 0.02",
            "the first ordinate times YFACTOR, 0.012",
        ),
        ("##MAXX= 4000", "##MAXX= 4100", "the greatest value"),
        ("##MINY= -0.003", "##MINY= -0.1", "the least value"),
        (
            "##NPOINTS= 28",
            "##NPOINTS= 30",
            "`##XYPOINTS=`, 28, and found 30",
        ),
        ("##XFACTOR= 1", "##XFACTOR= 0", "a factor other than zero"),
        ("##YFACTOR= 0.001", "##YFACTOR= 1E306", "finite"),
        ("= (XY..XY)", "= (X++(Y..Y))", "expected `(XY..XY)`"),
        ("4000, 12;", "4000, 12,", "a pair `x, y`"),
        ("4000, 12;", "4000; 12;", "a pair `x, y`"),
        ("4000, 12;", "4000, NaN;", "a pair `x, y`"),
        ("4000, 12;", "4000, 12A;", "a pair `x, y`"),
        ("4000, 12;", "?, 12;", "a pair `x, y`"),
        ("4000, 12;", "4000,", "a pair `x, y`"),
        ("4000, 12;", "4000, 1e999;", "a pair `x, y`"),
    ] {
        let told = told(&altered(from, to));
        assert!(told.contains(said), "{to}: {told}");
    }
    for same in [
        "4000 12;",
        "4000,12 ",
        "4000.0 , 1.2E1;",
        "4000, 12 ; ",
        " 4000\t+12\n",
    ] {
        let text = altered("4000, 12;", same);
        assert_eq!(
            read(&Source::from_text("t", &text)).map(|_| ()),
            Ok(()),
            "{same}"
        );
    }
    let without = altered("##XFACTOR= 1\n", "").replace("##YFACTOR= 0.001\n", "##YFACTOR= 1E-3\n");
    assert!(read(&Source::from_text("t", &without)).is_ok());
}

#[test]
fn numbers_of_records() {
    let block = table(3, "0 1 2 3");
    for (from, to, said) in [
        (
            "##YFACTOR= 1",
            "##YFACTOR= 0,001",
            "t.dx:7:12: `##YFACTOR=`: expected a finite decimal number and found `0,001`",
        ),
        (
            "##YFACTOR= 1",
            "##YFACTOR= 1E400",
            "a finite decimal number",
        ),
        ("##YFACTOR= 1", "##YFACTOR= 1 V", "a finite decimal number"),
        ("##YFACTOR= 1", "##YFACTOR=", "found nothing"),
        ("##YFACTOR= 1", "##YFACTOR= 0.0", "a factor other than zero"),
        (
            "##YFACTOR= 1",
            "##YFACTOR= 1E308",
            "keeps every ordinate finite",
        ),
        (
            "##NPOINTS= 3",
            "##NPOINTS= 3.0",
            "a whole number from zero and found `3.0`",
        ),
        ("##NPOINTS= 3", "##NPOINTS= +3", "a whole number"),
        (
            "##NPOINTS= 3",
            "##NPOINTS= 99999999999999999999",
            "a whole number",
        ),
        ("##FIRSTX= 0", "##FIRSTX= -1.7E308", "(X check)"),
        ("##XFACTOR= 1", "##XFACTOR= 2", "(X check)"),
        ("0 1 2 3\n", "", "a table needs one ordinate at least"),
    ] {
        let text = block.replace(from, to);
        assert_ne!(text, block);
        let text = match to {
            "##XFACTOR= 2" => text.replace("0 1 2 3", "0 1\n1 2 3"),
            _ => text,
        };
        let told = told(&text);
        assert!(told.contains(said), "{to}: {told}");
    }
    let far = block
        .replace("FIRSTX= 0", "FIRSTX= -1.7E308")
        .replace("LASTX= 2", "LASTX= 1.7E308");
    assert!(told(&far).contains("at a finite distance from FIRSTX"));
}

#[test]
fn messages() {
    insta::assert_snapshot!(told(&table(6, "0AJJJ\n3EJJ\n5F")), @r"
    t.dx:13:2: first ordinate of the line (Y check): expected 4, the last ordinate of the line before, and found 5
      t.dx:12:1: the line before
      help: a line that ends in differences is followed by one that repeats its last ordinate; where the two differ, a line is damaged or missing
    ");
    insta::assert_snapshot!(told(&table(6, "0 1 2 3\n4 4 5 6")), @r"
    t.dx:13:1: abscissa of the line (X check): expected 3 for ordinate 4, within half a step of 1, and found 4
      help: the abscissa times XFACTOR is FIRSTX plus as many steps as ordinates stand before; a step is (LASTX - FIRSTX)/(NPOINTS - 1)
    ");
    insta::assert_snapshot!(told(&table(6, "0 1 2 3\n4 5 6")), @r"
    t.dx:10:12: `##NPOINTS=`: expected the number of ordinates in `##XYDATA=`, 5, and found 6
      t.dx:13:1: ordinate 5 is the last
      t.dx:13:1: with this NPOINTS the first abscissa that does not fit: if a line is missing, it is before here
    ");
    insta::assert_snapshot!(told(&table(3, "0 1 2,5 3")), @"t.dx:12:6: `##XYDATA=`: expected a blank between values and a point for the decimal mark and found `,5`");
    insta::assert_snapshot!(told(&table(3, "0 1 2e-05 3")), @"t.dx:12:5: `##XYDATA=`: expected an exponent of `E`, a sign and two or three digits, or a blank before a digit in SQZ form, and found `2e-05`");
    insta::assert_snapshot!(told(&table(3, "0 1 2 3").replace("##YFACTOR", "##YFACTR")), @r"
    t.dx:1:1: `##YFACTOR=`: expected it in the block that begins here, and found no such record
      t.dx:7:1: no label of the standard: is it misspelt?
      help: a block needs TITLE, JCAMP-DX and DATA TYPE; one with XYDATA also XUNITS, YUNITS, FIRSTX, LASTX, NPOINTS, XFACTOR and YFACTOR; one with XYPOINTS also XUNITS, YUNITS and NPOINTS
    ");
    insta::assert_snapshot!(told(&table(3, "0 1 2 3").replace("XYDATA= (X++(Y..Y))", "XYDATA= (R++(A..A))")), @r"
    t.dx:11:11: `##XYDATA=`: expected `(X++(Y..Y))` and found `(R++(A..A))`
      help: `##XYDATA=` has the form `(X++(Y..Y))`, `##XYPOINTS=` the form `(XY..XY)`; values begin on the next line
    ");
    insta::assert_snapshot!(told(&altered("##DELTAX= -2", "##DELTAX= -1.9")), @r"
    t.dx:12:10: `##LASTX=`: expected FIRSTX + (NPOINTS - 1) DELTAX within half a step, 3948.7, and found 3946
      t.dx:13:11: DELTAX; (LASTX - FIRSTX)/(NPOINTS - 1) is -2
    ");
}
