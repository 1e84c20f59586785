use super::token::Token::{Difference, Duplicate, Invalid, Number, Squeezed};
use super::token::{Token, line};

/// The abscissa and the ordinates of a line; the text that is refused and what was expected there.
fn read(text: &str) -> Result<(f64, Vec<Token>), (String, &'static str)> {
    let refuse = |fault: super::token::Fault| (text[fault.span].to_owned(), fault.expected);
    let (x, tokens) = line(text).map_err(refuse)?;
    let tokens: Result<Vec<_>, _> = tokens.collect();
    let tokens = tokens.map_err(refuse)?;
    Ok((x.1, tokens.into_iter().map(|token| token.1).collect()))
}

fn tokens(text: &str) -> Vec<Token> {
    read(text).unwrap().1
}

#[test]
fn every_letter_has_its_digit() {
    for (index, letter) in ('A'..='I').enumerate() {
        let digit = f64::from(u8::try_from(index).unwrap()) + 1.0;
        let small = letter.to_ascii_lowercase();
        assert_eq!(
            tokens(&format!("0{letter}")),
            [Squeezed(digit)],
            "SQZ {letter}"
        );
        assert_eq!(
            tokens(&format!("0{small}3")),
            [Squeezed(-digit * 10.0 - 3.0)]
        );
    }
    for (index, letter) in ('J'..='R').enumerate() {
        let digit = f64::from(u8::try_from(index).unwrap()) + 1.0;
        let small = letter.to_ascii_lowercase();
        assert_eq!(
            tokens(&format!("0{letter}07")),
            [Difference(digit * 100.0 + 7.0)]
        );
        assert_eq!(tokens(&format!("0{small}")), [Difference(-digit)]);
    }
    for (index, letter) in ('S'..='Z').chain(['s']).enumerate() {
        assert_eq!(tokens(&format!("0{letter}")), [Duplicate(index + 1)]);
        assert_eq!(
            tokens(&format!("0{letter}2")),
            [Duplicate(index * 10 + 12)],
            "DUP {letter}"
        );
    }
    assert_eq!(tokens("0@%?"), [Squeezed(0.0), Difference(0.0), Invalid]);
}

#[test]
fn letters_that_are_no_digit_are_refused() {
    for letter in ('t'..='z').chain(['`', '[', '_', '#', '$', 'é', '−', ';']) {
        let (found, _) = read(&format!("0 1 {letter} 2")).unwrap_err();
        assert_eq!(found, letter.to_string());
    }
}

#[test]
fn forms_and_what_separates_them() {
    for text in [
        "400 1 -2 3.5",
        "400+1-2+3.5",
        "400 +1 -2 +3.5",
        "400, 1, -2, 3.5",
        "  400\t1 -2\t3.5  ",
        "400.0 1.-2 35E-01",
    ] {
        assert_eq!(
            read(text),
            Ok((400.0, vec![Number(1.0), Number(-2.0), Number(3.5)])),
            "{text}"
        );
    }
    assert_eq!(
        tokens("400 12A3 4b%S-7"),
        [
            Number(12.0),
            Squeezed(13.0),
            Number(4.0),
            Squeezed(-2.0),
            Difference(0.0),
            Duplicate(1),
            Number(-7.0)
        ]
    );
    assert_eq!(read("-4.5E+02"), Ok((-450.0, vec![])));
}

#[test]
fn a_letter_e_is_an_exponent_only_where_it_can_be_nothing_else() {
    let e = Squeezed(5.0);
    assert_eq!(tokens("0EDe"), [e, Squeezed(4.0), Squeezed(-5.0)]);
    assert_eq!(read("400E12"), Ok((400.0, vec![Squeezed(512.0)])));
    assert_eq!(read("400.5e12"), Ok((400.5, vec![Squeezed(-512.0)])));
    assert_eq!(tokens("0 1E+05 2E-123"), [Number(1e5), Number(2e-123)]);
    assert_eq!(tokens("0 5E D"), [Number(5.0), e, Squeezed(4.0)]);
    for text in [
        "5E3", "5e3", "5E+3", "5e-03", "5E+0300", "1.5e-05", "1.5E5", "5E+12E3",
    ] {
        let (found, expected) = read(&format!("0 1 {text} 2")).unwrap_err();
        assert_eq!(found, text);
        assert!(
            expected.contains("exponent") || expected.contains("finite"),
            "{text}: {expected}"
        );
    }
    for text in ["400E+5 1", "400e-12 1"] {
        assert!(read(text).unwrap_err().1.contains("exponent"), "{text}");
    }
}

#[test]
fn decimal_commas_and_overlong_numbers_are_refused() {
    for (text, at) in [
        ("400,5 1 2", ",5"),
        ("400 1,5 2", ",5"),
        ("400 1 ,5 2", ",5"),
        ("400 A,5", ",5"),
        ("400 1, , 2", ","),
    ] {
        let (found, expected) = read(text).unwrap_err();
        assert_eq!(found, at, "{text}");
        assert!(expected.contains("decimal mark"), "{text}: {expected}");
    }
    assert_eq!(
        tokens("0A99999999999999"),
        [Squeezed(199_999_999_999_999.0)]
    );
    for text in ["0A999999999999999", "0Jj1111111111111111"] {
        assert!(read(text).unwrap_err().1.contains("15 digits"), "{text}");
    }
    assert_eq!(read("0 1E+999").unwrap_err().1, "a finite number");
    for text in [
        "0 Z999999999",
        "0 A1.5",
        "0 J1.5",
        "0 1.5.5",
        "0 +",
        "0 NaN",
        "0 1 inf",
        "0 1 nan 2",
        "0 1 -inf",
    ] {
        assert!(read(text).is_err(), "{text}");
    }
    for text in ["", "A12", "?", "+", "E5", "1.2.3 5", "x"] {
        assert_eq!(
            read(text).unwrap_err().1,
            "the abscissa of the line",
            "{text}"
        );
    }
}
