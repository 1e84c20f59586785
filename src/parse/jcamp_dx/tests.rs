use super::test_texts::{BAND, FORMS, fixture, table, told, values};
use super::*;

#[test]
fn published_examples() {
    let path = concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/fixtures/published/jcamp_dx_forms.csv"
    );
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .from_path(path)
        .unwrap();
    let mut count = 0;
    for record in reader.records().map(Result::unwrap) {
        let meant: Vec<f64> = record[3].split(' ').map(|it| it.parse().unwrap()).collect();
        let mut lines = record[2].replace('|', "\n");
        if &record[0] == "first" {
            // The example has no abscissa; a blank keeps it from running into the first ordinate.
            lines = format!("0 {lines}");
        }
        assert_eq!(values(&table(meant.len(), &lines)), meant, "{lines}");
        count += 1;
    }
    assert_eq!(count, 13);
}

#[test]
fn records_are_typed_and_keep_their_order() {
    let text = "$$ before\n##title=  A \n##JCAMPDX=4.10 $$ by hand\n##Data-Type= INFRARED SPECTRUM\n\
                ##= a comment record\n##$My Label= kept\n  more  \n\n$$ alone\n##NOTE=\ntext = below\n\
                  ##MAX_X= -2.5e3\n##END= $$ done\n";
    let document = read(&Source::from_text("t", text)).unwrap();
    assert_eq!(document.comments, ["before"]);
    let labels: Vec<&str> = document
        .records
        .iter()
        .map(|it| it.label.as_str())
        .collect();
    assert_eq!(
        labels,
        [
            "title",
            "JCAMPDX",
            "Data-Type",
            "",
            "$My Label",
            "NOTE",
            "MAX_X",
            "END"
        ]
    );
    let value = |index: usize| document.records[index].value.clone();
    assert_eq!(value(0), Value::Text("A".into()));
    assert_eq!(value(1), Value::Text("4.10".into()));
    assert_eq!(value(4), Value::Text("kept\n  more".into()));
    assert_eq!(value(5), Value::Text("\ntext = below".into()));
    assert_eq!(value(6), Value::Number(-2500.0));
    let comments = |index: usize| document.records[index].comments.clone();
    assert_eq!(comments(1), ["by hand"]);
    assert_eq!(comments(4), ["alone"]);
    assert_eq!(comments(7), ["done"]);
    let block = document.blocks()[0];
    assert_eq!(block.text("DATA TYPE"), Some("INFRARED SPECTRUM"));
    assert_eq!(block.number("maxx"), Some(-2500.0));
    assert_eq!((block.number("title"), block.text("MAXX")), (None, None));
}

#[test]
fn texts_that_look_like_it() {
    for name in FORMS {
        assert!(is_like(fixture(name).text()), "{name}");
    }
    assert!(is_like("\u{feff}\n##title=x\r##JCAMP_DX=5"));
    for text in [
        "",
        "##TITLE= x\n##END=",
        "energy,counts\n1,2",
        "##JCAMP-DX= 4.24\n##TITLE= x",
        "# TITLE= x\n##JCAMP-DX= 4.24",
        "##TITLE",
    ] {
        assert!(!is_like(text), "{text}");
    }
}

#[test]
fn every_value_is_found_where_it_stands() {
    for name in FORMS {
        let source = fixture(name);
        let document = read(&source).unwrap();
        let mut before = 0;
        for row in 0..BAND.len() {
            let span = document.value_span(&source, 0, row, 0).unwrap();
            assert!(span.start >= before, "{name} {row}");
            before = span.start;
        }
        assert_eq!(document.value_span(&source, 0, BAND.len(), 0), None);
        assert_eq!(document.value_span(&source, 1, 0, 0), None);
        assert_eq!(document.value_span(&source, 0, 0, 1), None);
        let at = |row| &source.text()[document.value_span(&source, 0, row, 0).unwrap()];
        let meant = match name {
            "affn" | "affn_crlf" => ["12", "12", "40", "902", "?", "12"],
            "pac" => ["+12", "+12", "+40", "+902", "?", "+12"],
            "sqz" => ["A2", "A2", "D0", "I02", "?", "A2"],
            "sqz_dup" => ["A2", "V", "D0", "I02", "?", "A2"],

            "dif" | "dif_dup" => ["A2", "%", "K5", "P39", "?", "%"],
            _ => ["12", "V", "K5", "P39", "?", "%"],
        };
        assert_eq!([0, 1, 6, 8, 21, 27].map(at), meant, "{name}");
    }
    let points = fixture("points");
    let document = read(&points).unwrap();
    let at =
        |row, variable| &points.text()[document.value_span(&points, 0, row, variable).unwrap()];
    assert_eq!((at(9, 0), at(9, 1)), ("1734", "3982"));
    assert_eq!((at(21, 0), at(27, 1)), ("?", "3946"));
    assert_eq!(document.value_span(&points, 0, 28, 0), None);
    assert_eq!(document.value_span(&points, 0, 0, 2), None);
}

#[test]
fn values_of_long_tables_are_found() {
    let mut lines = String::new();
    for line in 0..1_000 {
        let value = |row: i32| (row * 7) % 100;
        let first = line * 3;
        lines.push_str(&format!("{first} "));
        lines.push_str(&format!("{}", value(first)));
        for row in first..first + 3 {
            let difference = value(row + 1) - value(row);
            let letter = if difference < 0 { 'r' } else { 'P' };
            assert!(difference == 7 || difference == -93);
            lines.push_str(&format!(
                "{letter}{}",
                if difference < 0 { "3" } else { "" }
            ));
        }
        lines.push_str(" $$ 1 2 3\n");
        if line % 5 == 0 {
            lines.push_str("\n$$ between\n");
        }
    }
    let source = Source::from_text("t", &table(3_001, &lines));
    let document = read(&source).unwrap_or_else(|problems| panic!("{}", problems[0]));
    for row in [1, 2, 3, 768, 769, 1_500, 2_999, 3_000] {
        let span = document.value_span(&source, 0, row, 0).unwrap();
        let place = source.place(span.clone());
        let line = (row - 1) / 3;
        assert!(
            place.excerpt.starts_with(&format!("{} ", line * 3)),
            "{row}: {}",
            place.excerpt
        );
        assert!(["P", "r3"].contains(&&source.text()[span]));
    }
}

#[test]
fn counts_of_equal_ordinates() {
    assert_eq!(
        values(&table(6, "0 7S 8T 9U")),
        [7.0, 8.0, 8.0, 9.0, 9.0, 9.0]
    );
    assert_eq!(values(&table(4, "0A0V")), [10.0; 4]);
    assert_eq!(values(&table(12, "0 1S2")), [1.0; 12]);
    assert_eq!(values(&table(9, "0 1s")), [1.0; 9]);
    // The repeat of the last ordinate counts for what it stands for, once.
    assert_eq!(values(&table(4, "0AJ\n1BU")), [1.0, 2.0, 2.0, 2.0]);
    assert_eq!(values(&table(22, "0 1.5T2")).len(), 22);
    assert!(values(&table(3, "0 1?T"))[1..].iter().all(|it| it.is_nan()));
}

#[test]
fn structure_is_held_to_the_standard() {
    let block = table(3, "0 1 2 3");
    let link = |count: &str, inner: &str| {
        format!(
            "##TITLE= l\n##JCAMP-DX= 4.24\n##DATA TYPE= LINK\n##BLOCKS= {count}\n{inner}##END=\n"
        )
    };
    assert!(read(&Source::from_text("t", &link("1", &block))).is_ok());
    assert!(read(&Source::from_text("t", &link("2", &block))).is_ok());
    for (text, said) in [
        (String::new(), "found no record at all"),
        (
            "text\n##TITLE= x\n".into(),
            "t.dx:1:1: `##TITLE=`: expected it as the first record of a block and found `text`",
        ),
        (
            "##ORIGIN= x\n##TITLE= y\n".into(),
            "as the first record of a block and found `##ORIGIN=`",
        ),
        (
            format!("{block}##END=\n"),
            "as the first record of a block and found `##END=`",
        ),
        (
            format!("{block}more\n"),
            "t.dx:14:1: `##END=`: expected nothing more",
        ),
        (
            block.replace("##END=", "##END= x"),
            "`##END=`: expected nothing more",
        ),
        (
            block.replace("##END=\n", ""),
            "t.dx:1:1: `##END=`: expected it to close the block that begins here, and the text ends",
        ),
        (
            block.replace("##END=\n", &block),
            "another `##TITLE=` follows",
        ),
        (
            link("3", &block),
            "t.dx:4:11: `##BLOCKS=`: expected the number of blocks in the LINK block, 1 (2 with itself), and found `3`",
        ),
        (link("0", &block), "`##BLOCKS=`"),
        (
            link("-1", &block),
            "a whole number from zero and found `-1`",
        ),
        (
            link("1", &link("1", &block)),
            "a data type other than LINK inside a LINK block",
        ),
        (
            "##TITLE= x\n##JCAMP-DX 4.24\n".into(),
            "t.dx:2:1: labelled data record: expected `##LABEL=`",
        ),
        (
            "##TITLE= x\n##NOTE $$ a = b\n".into(),
            "labelled data record",
        ),
        (
            block.replace("##JCAMP-DX= 4.24\n", ""),
            "`##JCAMP-DX=`: expected it in the block that begins here",
        ),
        (
            block.replace("##DATA TYPE= INFRARED SPECTRUM\n", ""),
            "`##DATA TYPE=`: expected it in the block",
        ),
        (
            block.replace("4.24", "4.24\n##JCAMPDX= 4.10"),
            "expected this record once a block and found a second",
        ),
        (
            block.replace("##END=", "##PEAK TABLE= (XY..XY)\n##END="),
            "expected one table a block and found a second",
        ),
        (
            block.replace("(X++(Y..Y))", "(XY..XY)"),
            "expected `(X++(Y..Y))` and found `(XY..XY)`",
        ),
        (
            block.replace("(X++(Y..Y))", ""),
            "expected `(X++(Y..Y))` and found nothing",
        ),
    ] {
        let told = told(&text);
        assert!(told.contains(said), "{text}: {told}");
    }
    for label in [
        "XUNITS", "YUNITS", "XFACTOR", "YFACTOR", "FIRSTX", "LASTX", "NPOINTS",
    ] {
        let told = told(&block.replace(&format!("##{label}="), "##$PRIVATE="));
        assert!(
            told.contains(&format!("`##{label}=`: expected it in the block")),
            "{told}"
        );
    }
}

#[test]
fn versions() {
    let block = table(3, "0 1 2 3");
    for version in [
        "4.24",
        "4.10",
        "5.01",
        "5.00 $$ x",
        "4.24 of something",
        "6",
    ] {
        let text = block.replace("4.24", version);
        assert!(read(&Source::from_text("t", &text)).is_ok(), "{version}");
    }
    for version in ["4.0", "3", "four", "", "4.24b", "NaN", "4,24"] {
        let told = told(&block.replace("4.24", version));
        assert!(
            told.contains("`##JCAMP-DX=`: expected"),
            "{version}: {told}"
        );
    }
    let points = fixture("points").text().replace("4.24", "5.01");
    assert!(told(&points).contains("of version 5.01 only blocks with `##XYDATA="));
    let empty = "##TITLE= x\n##JCAMP-DX= 5.01\n##DATA TYPE= y\n##END=\n";
    assert!(told(empty).contains("of version 5.01"));
    assert!(read(&Source::from_text("t", &empty.replace("5.01", "4.24"))).is_ok());
    let peaks = empty.replace("##END=", "##PEAK TABLE= (XY..XY)\n1, 2\n##END=");
    assert!(read(&Source::from_text("t", &peaks)).is_ok());
    for ntuples in ["##NTUPLES= X", "##DATA CLASS= NTUPLES", "##PAGE= N=1"] {
        let text = empty.replace("##END=", &format!("{ntuples}\n##END="));
        assert!(told(&text).contains("NTUPLES blocks, which hold several variables"));
    }
}
