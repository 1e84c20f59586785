//! The grammar of a line of `(X++(Y..Y))`: an abscissa, then ordinates in the standard's forms.
//!
//! - AFFN: sign, digits, point; an exponent is `E`, a sign and two or three digits.
//! - PAC: the same with nothing between the values but their signs.
//! - SQZ: `@ A-I a-i` stand for a first digit 0, +1..+9, -1..-9.
//! - DIF: `% J-R j-r` stand for the first digit of a difference to the ordinate before.
//! - DUP: `S-Z s` stand for the first digit of a count of equal ordinates, or of equal differences,
//!   the one before included.
//! - `?` is an ordinate that is not valid.
//!
//! As an `E` is a digit too, `5E3` could be 5000, or 5 and 53: such a text is refused, and so is a
//! `NaN` between blanks, which could be +5, -1, +5.

use std::ops::Range;

use nom::branch::alt;
use nom::bytes::complete::take_while_m_n;
use nom::character::complete::{anychar, char, digit1, one_of, satisfy, space1};
use nom::combinator::{eof, map, map_opt, not, opt, recognize};
use nom::error::Error;
use nom::sequence::{preceded, terminated};
use nom::{IResult, Parser};

use super::number::{blanks, digits, finite, mantissa};

/// Most digits of a whole number, so that sums of two are exact.
const DIGITS: usize = 15;
/// Most digits of a count of equal ordinates.
const COUNT_DIGITS: usize = 9;

/// One ordinate, or what stands for some.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Token {
    /// An ordinate in AFFN or PAC form.
    Number(f64),
    /// An ordinate in SQZ form.
    Squeezed(f64),
    /// A difference to the ordinate before.
    Difference(f64),
    /// How often the token before counts.
    Duplicate(usize),
    /// An ordinate that is not valid.
    Invalid,
}

impl Token {
    /// How many ordinates it adds to those before it.
    pub fn rows(self) -> usize {
        match self {
            Self::Duplicate(count) => count - 1,
            _ => 1,
        }
    }

    /// Whether a line that ends in it ends in a difference, and so repeats its last ordinate at the
    /// start of the next one; `before` is the same of what stands before it.
    pub fn ends_in_difference(self, before: bool) -> bool {
        match self {
            Self::Duplicate(_) => before,
            Self::Difference(_) => true,
            _ => false,
        }
    }
}

/// Something with the bytes of the line that it stands in.
pub(super) type At<T> = (Range<usize>, T);

/// Why a text is no line of ordinates.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Fault {
    /// The bytes of the line that are not understood.
    pub span: Range<usize>,
    /// What was expected there.
    pub expected: &'static str,
}

/// The ordinates of a line, one after the other; nothing follows a fault.
pub(super) struct Tokens<'a> {
    text: &'a str,
    rest: &'a str,
}

/// Reads the abscissa of a line; its ordinates follow.
pub(super) fn line(text: &str) -> Result<(At<f64>, Tokens<'_>), Fault> {
    let start = text.len() - text.trim_start().len();
    match abscissa(&text[start..]) {
        Ok((rest, x)) => Ok(((start..text.len() - rest.len(), x), Tokens { text, rest })),
        Err(_) => Err(fault(text, start, "the abscissa of the line")),
    }
}

impl Iterator for Tokens<'_> {
    type Item = Result<At<Token>, Fault>;

    fn next(&mut self) -> Option<Self::Item> {
        let start = separator(self.rest).map_or(self.rest.trim_start(), |(rest, ())| rest);
        if start.is_empty() {
            return None;
        }
        let at = self.text.len() - start.len();
        let word = start.len() < self.rest.len() && is_no_number(start);
        match token(start) {
            Ok((rest, token)) if !word => {
                self.rest = rest;
                Some(Ok((at..self.text.len() - rest.len(), token)))
            }
            _ => {
                self.rest = "";
                Some(Err(fault(self.text, at, ORDINATE)))
            }
        }
    }
}

const ORDINATE: &str = "an ordinate in AFFN, PAC, SQZ, DIF or DUP form, or `?`";

/// Whether a field is a word for what is no finite number. Its letters could be digits of packed forms,
/// which no one sets apart by blanks.
fn is_no_number(field: &str) -> bool {
    let field = field.split([' ', '\t', ',']).next().unwrap_or("");
    let words = ["nan", "inf", "infinity", "na"];
    words.iter().any(|word| field.eq_ignore_ascii_case(word))
}

/// What is wrong with the text at a byte.
fn fault(text: &str, at: usize, otherwise: &'static str) -> Fault {
    let rest = &text[at..];
    let number = recognize((opt(one_of::<_, _, Error<&str>>("+-")), mantissa)).parse(rest);
    let after = number.map_or("", |(after, _)| after);
    let digits = |c: char| c.is_ascii_digit();
    let long = rest.chars().skip(1).take_while(|&c| digits(c)).count() >= DIGITS;
    let expected = if rest.starts_with(',') {
        "a blank between values and a point for the decimal mark"
    } else if exponent(after).is_ok() {
        "a finite number"
    } else if after.starts_with(['e', 'E']) {
        "an exponent of `E`, a sign and two or three digits, or a blank before a digit in SQZ form,"
    } else if long {
        "a whole number of at most 15 digits"
    } else {
        otherwise
    };
    let taken = rest.find([' ', '\t']).unwrap_or(rest.len());
    Fault {
        span: at..at + taken,
        expected,
    }
}

/// Between values: blanks, or a comma that a blank follows, or nothing.
fn separator(input: &str) -> IResult<&str, ()> {
    let comma = terminated(char(','), alt((space1, eof)));
    map((blanks, opt(comma), blanks, not(char(','))), |_| ()).parse(input)
}

fn exponent(input: &str) -> IResult<&str, &str> {
    let digits = take_while_m_n(2, 3, |c: char| c.is_ascii_digit());
    let after = not(satisfy(|c| c.is_ascii_digit()));
    recognize((char('E'), one_of("+-"), digits, after)).parse(input)
}

fn affn(input: &str) -> IResult<&str, f64> {
    let text = recognize((opt(one_of("+-")), mantissa, opt(exponent)));
    map_opt(text, finite).parse(input)
}

/// An abscissa; an ordinate in SQZ form may follow at once.
fn abscissa(input: &str) -> IResult<&str, f64> {
    let exponent = preceded(one_of("eE"), (one_of("+-"), digit1));
    let unclear = alt((recognize(exponent), recognize(char('.'))));
    terminated(affn, not(unclear)).parse(input)
}

fn token(input: &str) -> IResult<&str, Token> {
    let exponent = preceded(one_of("eE"), (opt(one_of("+-")), digit1));
    let unclear = alt((recognize(exponent), recognize(char('.'))));
    alt((
        map(terminated(affn, not(unclear)), Token::Number),
        map(|input| pseudo(input, squeezed), Token::Squeezed),
        map(|input| pseudo(input, difference), Token::Difference),
        map(duplicate, Token::Duplicate),
        map(char('?'), |_| Token::Invalid),
    ))
    .parse(input)
}

/// A whole number whose first digit, with its sign, is a letter.
fn pseudo(input: &str, digit: fn(char) -> Option<i8>) -> IResult<&str, f64> {
    let number = map_opt(
        (map_opt(anychar, digit), digits),
        |(first, rest): (i8, &str)| {
            let magnitude = f64::from(first.unsigned_abs());
            let sign = if first < 0 { -1.0 } else { 1.0 };
            (rest.len() < DIGITS).then(|| sign * followed(magnitude, rest))
        },
    );
    terminated(number, not(char('.'))).parse(input)
}

/// A digit with more digits after it.
fn followed(first: f64, rest: &str) -> f64 {
    rest.bytes()
        .fold(first, |value, digit| value * 10.0 + f64::from(digit - b'0'))
}

fn duplicate(input: &str) -> IResult<&str, usize> {
    map_opt(
        (map_opt(anychar, count), digits),
        |(first, rest): (u8, &str)| {
            let digit = |count: usize, digit: u8| count * 10 + usize::from(digit - b'0');
            (rest.len() < COUNT_DIGITS).then(|| rest.bytes().fold(usize::from(first), digit))
        },
    )
    .parse(input)
}

/// The signed digit that a letter stands for: `zero`, then `plus` to plus 8, `minus` to minus 8.
fn signed_digit(letter: char, zero: char, plus: char, minus: char) -> Option<i8> {
    let place = |first: char| {
        let place = u32::from(letter).checked_sub(u32::from(first))?;
        i8::try_from(place).ok().filter(|place| *place < 9)
    };
    match (place(plus), place(minus)) {
        _ if letter == zero => Some(0),
        (Some(place), _) => Some(place + 1),
        (_, Some(place)) => Some(-place - 1),
        _ => None,
    }
}

fn squeezed(letter: char) -> Option<i8> {
    signed_digit(letter, '@', 'A', 'a')
}

fn difference(letter: char) -> Option<i8> {
    signed_digit(letter, '%', 'J', 'j')
}

fn count(letter: char) -> Option<u8> {
    match letter {
        'S'..='Z' => u8::try_from(u32::from(letter) - u32::from('R')).ok(),
        's' => Some(9),
        _ => None,
    }
}
