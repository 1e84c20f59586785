use proptest::prelude::*;

use super::*;
use crate::parse::jcamp_dx::Points;

const PACKINGS: [Packing; 3] = [Packing::Fixed, Packing::Squeezed, Packing::Differences];

fn text_record(label: &str, text: &str) -> Record {
    Record::new(label, Value::Text(text.to_owned()))
}

fn number(label: &str, value: f64) -> Record {
    Record::new(label, Value::Number(value))
}

/// What every block of a table begins with.
fn head(title: &str, count: usize, factors: [f64; 2]) -> Vec<Record> {
    vec![
        text_record("TITLE", title),
        text_record("JCAMP-DX", "4.24"),
        text_record("DATA TYPE", "INFRARED SPECTRUM"),
        text_record("XUNITS", "1/CM"),
        text_record("YUNITS", "ABSORBANCE"),
        number("XFACTOR", factors[0]),
        number("YFACTOR", factors[1]),
        Record::new("NPOINTS", Value::Count(count as u64)),
    ]
}

/// A block of ordinates at equal steps with all that can be stated of them.
fn steps(first: f64, last: f64, factors: [f64; 2], values: Vec<f64>) -> Document {
    let mut records = head("invented", values.len(), factors);
    records.push(number("FIRSTX", first));
    records.push(number("LASTX", last));
    let real: Vec<f64> = values.iter().map(|value| value * factors[1]).collect();
    let valid = || real.iter().copied().filter(|value| value.is_finite());
    if let Some(value) = valid().reduce(f64::max) {
        records.push(number("MAXY", value));
    }
    if let Some(value) = valid().reduce(f64::min) {
        records.push(number("MINY", value));
    }
    if !real[0].is_nan() {
        records.push(number("FIRSTY", real[0]));
    }
    records.push(Record::new(
        "XYDATA",
        Value::Ordinates(Ordinates::new(values)),
    ));
    records.push(text_record("END", ""));
    Document {
        comments: Vec::new(),
        records,
    }
}

/// The lines of a table of ordinates at abscissas from 0 in steps of 1.
fn lines_of(values: &[f64], packing: Packing) -> Vec<String> {
    #[allow(clippy::cast_precision_loss)]
    let last = (values.len() - 1) as f64;
    let text = packed_text(&steps(0.0, last, [1.0, 1.0], values.to_vec()), packing).unwrap();
    let lines = text
        .lines()
        .skip_while(|line| !line.starts_with("##XYDATA"));
    let lines: Vec<String> = lines.skip(1).map(str::to_owned).collect();
    lines[..lines.len() - 1].to_vec()
}

#[test]
fn published_lines_are_written_as_published() {
    // The same lines as in fixtures/published/jcamp_dx_forms.csv, which says where they are from.
    let first = [1.0, 2.0, 3.0, 3.0, 2.0, 1.0, 0.0, -1.0, -2.0, -3.0];
    assert_eq!(
        lines_of(&first, Packing::Fixed),
        ["0 1 2 3 3 2 1 0 -1 -2 -3"]
    );
    assert_eq!(lines_of(&first, Packing::Squeezed), ["0ABCCBA@abc"]);
    assert_eq!(lines_of(&first, Packing::Differences), ["0AJT%jX", "9c"]);
    let second = [5.0, 4.0, 3.0, 2.0, 1.0, 5.0, 5.0, 5.0, 10.0, -102.0, 0.0];
    assert_eq!(
        lines_of(&second, Packing::Differences),
        ["0EjVM%TNj12J02", "10@"]
    );
    assert_eq!(lines_of(&second, Packing::Squeezed), ["0EDCBAEEEA0a02@"]);
    assert_eq!(lines_of(&[50.0; 4], Packing::Differences), ["0E0%U", "3E0"]);
}

#[test]
fn ordinates_that_are_not_valid_break_the_differences() {
    let nan = f64::NAN;
    let values = [nan, 7.0, 8.0, nan, nan, 3.0, nan];
    assert_eq!(lines_of(&values, Packing::Differences), ["0?GJ??C?"]);
    assert_eq!(lines_of(&values, Packing::Fixed), ["0 ? 7 8 ? ? 3 ?"]);
    assert_eq!(
        lines_of(&[nan, 1.0, 1.0], Packing::Differences),
        ["0?A%", "2A"]
    );
}

#[test]
fn lines_are_full_and_no_longer_than_allowed() {
    let values: Vec<f64> = (0..2_000)
        .map(|row| f64::from((row * row) % 977 - 300))
        .collect();
    for packing in PACKINGS {
        let lines = lines_of(&values, packing);
        assert!(lines.iter().all(|line| line.len() <= LINE));
        assert!(
            lines[..lines.len() - 2]
                .iter()
                .all(|line| line.len() > LINE - 8)
        );
    }
    let flat = lines_of(&vec![3.0; 100_000], Packing::Differences);
    assert_eq!(flat, ["0C%s9999", "99999C"]);
}

#[test]
fn fixtures_survive_in_every_form() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/fixtures/jcamp_dx");
    let mut count = 0;
    for entry in std::fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.extension().is_none_or(|it| it != "dx") {
            continue;
        }
        let source = Source::read(&path, "fixture").unwrap();
        let document = read(&source).unwrap();
        for packing in PACKINGS {
            let text = packed_text(&document, packing).unwrap();
            assert_eq!(read(&Source::from_text("t", &text)).unwrap(), document);
        }
        count += 1;
    }
    assert_eq!(count, 11);
}

#[test]
fn what_the_standard_cannot_carry_is_refused() {
    let with = |record: Record| {
        let mut document = steps(0.0, 2.0, [1.0, 1.0], vec![1.0, 2.0, 3.0]);
        document.records.insert(1, record);
        text(&document).unwrap_err().to_string()
    };
    let commented = |comment: &str| {
        let mut record = text_record("NOTE", "x");
        record.comments.push(comment.to_owned());
        record
    };
    for (record, said) in [
        (text_record("A=B", "x"), "a label has no `=`"),
        (text_record("A\nB", "x"), "a label has no `=`"),
        (text_record("$$A", "x"), "a label has no `=`"),
        (text_record("NOTE", "a $$ b"), "would begin a comment"),
        (text_record("NOTE", "a\n ##END="), "would be a record"),
        (text_record("NOTE", "a\rb"), "carriage return"),
        (
            text_record("NOTE", &"x".repeat(73)),
            "a line has at most 80 characters, and `##NOTE= xxxxxxxxxxxxxxxxxxxxxx…` has 81",
        ),
        (text_record("NOTE", "a "), "`##NOTE=` does not read back"),
        (text_record("NOTE", "a\n\n"), "does not read back"),
        (text_record(" NOTE", "a"), "does not read back"),
        (commented("a\nb"), "a comment is one line"),
        (commented(" a"), "does not read back"),
        (number("MAXX", f64::NAN), "NaN is no finite number"),
        (number("MAXX", 3.0), "breaks the standard: document:"),
        (number("NOTE", 3.0), "does not read back"),
        (
            Record::new("NPOINTS", Value::Count(3)),
            "expected this record once a block",
        ),
        (
            Record::new("XYPOINTS", Value::Points(Points::new(vec![1.0], vec![]))),
            "not as many ordinates as abscissas",
        ),
        (
            Record::new(
                "XYPOINTS",
                Value::Points(Points::new(vec![f64::NAN], vec![1.0])),
            ),
            "no finite number",
        ),
    ] {
        let told = with(record);
        assert!(told.contains(said), "{told}");
    }
    let mut document = steps(0.0, 2.0, [1.0, 1.0], vec![1.0, 2.0, 3.0]);
    document.comments.push("a\nb".to_owned());
    assert!(
        text(&document)
            .unwrap_err()
            .to_string()
            .contains("before the first record")
    );
    document.comments.clear();
    document.records.retain(|record| record.label != "LASTX");
    assert!(
        text(&document)
            .unwrap_err()
            .to_string()
            .contains("no number LASTX")
    );
    assert!(text(&Document::default()).is_err());
}

#[test]
fn packed_forms_hold_whole_numbers() {
    for value in [0.5, -0.0, 5e14, -1e300, f64::INFINITY] {
        let document = steps(0.0, 1.0, [1.0, 1.0], vec![1.0, value]);
        for packing in [Packing::Squeezed, Packing::Differences] {
            let told = packed_text(&document, packing).unwrap_err().to_string();
            assert!(told.contains("hold whole numbers"), "{told}");
        }
        assert_eq!(text(&document).is_ok(), value.is_finite());
    }
    let most = 499_999_999_999_999.0;
    for packing in PACKINGS {
        let document = steps(0.0, 3.0, [1.0, 1.0], vec![most, -most, most, -most]);
        assert!(packed_text(&document, packing).is_ok());
    }
}

#[test]
fn numbers_are_as_the_standard_writes_them() {
    for (value, written) in [
        (0.0, "0"),
        (-0.0, "-0"),
        (0.1, "0.1"),
        (1e15, "1E+15"),
        (-2.5e-7, "-2.5E-07"),
        (1.5e300, "1.5E+300"),
        (5e-324, "5E-324"),
    ] {
        assert_eq!(affn(value).unwrap(), written);
    }
}

/// A finite double of any size.
fn any_number() -> impl Strategy<Value = f64> {
    prop_oneof![
        any::<f64>().prop_filter("finite", |value| value.is_finite() && value.abs() < 1e200),
        -1e4..1e4,
        (-1000..1000_i32).prop_map(f64::from),
    ]
}

fn whole() -> impl Strategy<Value = f64> {
    prop_oneof![
        6 => (-20..20_i32).prop_map(f64::from),
        2 => (-1_000_000..1_000_000_i32).prop_map(f64::from),
        1 => Just(499_999_999_999_999.0),
        1 => Just(f64::NAN),
        1 => Just(5.0),
    ]
}

fn axis() -> impl Strategy<Value = (f64, f64, f64)> {
    let factor = prop_oneof![Just(1.0), Just(0.1), Just(-2.5), 1e-6..1e6];
    (
        -1e5..1e5_f64,
        prop_oneof![1e-6..1e-3_f64, 0.1..10.0, 1e3..1e5],
        any::<bool>(),
        factor,
    )
        .prop_map(|(first, width, down, factor): (f64, f64, bool, f64)| {
            (first, first + if down { -width } else { width }, factor)
        })
}

fn extra() -> impl Strategy<Value = Vec<Record>> {
    let text = "([!-\"%-~]([ -\"%-~]{0,30}[!-\"%-~])?(\n[!-\"%-~]{1,20})?)?";
    let record = (
        r"\$[A-Za-z][A-Za-z /_-]{0,10}[A-Za-z]",
        text,
        prop::collection::vec("([!-~]([ -~]{0,20}[!-~])?)?", 0..3),
    );
    prop::collection::vec(record, 0..4).prop_map(|records| {
        let record = |(label, text, comments): (String, String, Vec<String>)| {
            let mut record = text_record(&label, &text);
            record.comments = comments;
            record
        };
        records.into_iter().map(record).collect()
    })
}

fn pairs() -> impl Strategy<Value = Document> {
    let pair = (any_number(), prop_oneof![any_number(), Just(f64::NAN)]);
    prop::collection::vec(pair, 1..30).prop_map(|pairs| {
        let (x, y): (Vec<f64>, Vec<f64>) = pairs.into_iter().unzip();
        let mut records = head("invented pairs", x.len(), [0.5, 2.0]);
        records.push(number("FIRSTX", x[0] * 0.5));
        records.push(number("LASTX", x[x.len() - 1] * 0.5));
        records.push(Record::new("XYPOINTS", Value::Points(Points::new(x, y))));
        records.push(text_record("END", ""));
        Document {
            comments: vec!["invented".to_owned()],
            records,
        }
    })
}

/// Several documents one after the other, or in a LINK block.
fn joined(documents: Vec<Document>, link: bool) -> Document {
    let count = documents.len() as u64;
    let inner = documents.into_iter().flat_map(|document| document.records);
    if !link {
        return Document {
            comments: Vec::new(),
            records: inner.collect(),
        };
    }
    let mut records = vec![
        text_record("TITLE", "invented blocks"),
        text_record("JCAMP-DX", "4.24"),
        text_record("DATA TYPE", "LINK"),
        Record::new("BLOCKS", Value::Count(count)),
    ];
    records.extend(inner);
    records.push(text_record("END", ""));
    Document {
        comments: Vec::new(),
        records,
    }
}

/// Equal, and to the last bit where `==` says less.
fn same_bits(a: &Document, b: &Document) -> bool {
    let numbers = |document: &Document| -> Vec<u64> {
        let records = document.records.iter();
        records
            .filter_map(|record| match record.value {
                Value::Number(number) => Some(number.to_bits()),
                _ => None,
            })
            .collect()
    };
    a == b && numbers(a) == numbers(b)
}

proptest! {
    #[test]
    fn fixed_form_is_identity(
        (first, last, factor) in axis(),
        values in prop::collection::vec(prop_oneof![any_number(), Just(f64::NAN)], 1..60),
        extra in extra(),
    ) {
        let last = if values.len() == 1 { first } else { last };
        let mut document = steps(first, last, [factor, 0.001], values);
        document.records.splice(1..1, extra);
        let text = text(&document).map_err(|error| TestCaseError::fail(error.to_string()))?;
        let back = read(&Source::from_text("t", &text)).unwrap();
        prop_assert!(same_bits(&back, &document), "{text}");
        prop_assert!(text.lines().all(|line| line.chars().count() <= LINE));
    }

    #[test]
    fn packed_forms_are_identity(
        (first, last, factor) in axis(),
        values in prop::collection::vec((whole(), 1..12_usize), 1..60),
    ) {
        let values: Vec<f64> =
            values.into_iter().flat_map(|(value, times)| vec![value; times]).collect();
        let last = if values.len() == 1 { first } else { last };
        let document = steps(first, last, [factor, 0.01], values);
        for packing in PACKINGS {
            let text = packed_text(&document, packing)
                .map_err(|error| TestCaseError::fail(error.to_string()))?;
            let source = Source::from_text("t", &text);
            let back = read(&source).unwrap();
            prop_assert!(same_bits(&back, &document), "{text}");
            prop_assert!(text.lines().all(|line| line.len() <= LINE));
        }
    }

    #[test]
    fn compound_files_are_identity(
        documents in prop::collection::vec(pairs(), 1..4),
        link in any::<bool>(),
    ) {
        let document = joined(documents, link);
        let text = text(&document).map_err(|error| TestCaseError::fail(error.to_string()))?;
        let back = read(&Source::from_text("t", &text)).unwrap();
        prop_assert!(same_bits(&back, &document), "{text}");
    }
}
