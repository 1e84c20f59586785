//! The fast way through a line that is written plainly: its bytes become numbers without being cut
//! into cells first. Whatever is not plain is left to [`super::cells::split`].

use super::dialect::{Delimiter, Dialect};
use super::number::Decimal;
use super::values::{Slot, as_whole};

/// Reads the plain lines of one table.
pub(super) struct PlainLines<'p> {
    /// The whole text, of which every text here is what follows some place.
    text: &'p str,
    /// For each field, which of the slots it is.
    pub plan: &'p [Option<usize>],
    /// The delimiter; `None` for blanks.
    delimiter: Option<u8>,
}

impl<'p> PlainLines<'p> {
    /// For a dialect whose lines may be plain.
    pub fn new(text: &'p str, dialect: &Dialect, plan: &'p [Option<usize>]) -> Option<Self> {
        let may_be = dialect.decimal == Decimal::Point && dialect.delimiter != Delimiter::Pipe;
        may_be.then(|| Self {
            text,
            plan,
            delimiter: dialect.delimiter.byte(),
        })
    }

    /// Reads the line that begins at a byte into a row of the slots and returns the byte after its end;
    /// `None` where it is not plain, with no text kept of it.
    pub fn read(&self, at: usize, row: usize, slots: &mut [Slot<'_>]) -> Option<usize> {
        let text = &self.text.as_bytes()[at..];
        let rest = match self.delimiter {
            None => self.words(text, row, slots),
            Some(byte) => self.cells(text, byte, row, slots),
        };
        let next = rest.and_then(after_end);
        if next.is_none() {
            for slot in slots.iter_mut() {
                if let Slot::Texts(texts) = slot {
                    texts.truncate(row);
                }
            }
        }
        next.map(|rest| self.text.len() - rest.len())
    }

    fn words<'t>(&self, text: &'t [u8], row: usize, slots: &mut [Slot<'_>]) -> Option<&'t [u8]> {
        let mut rest = text;
        for slot in self.plan {
            rest = after_blanks(rest);
            let slot = slot.and_then(|slot| slots.get_mut(slot));
            rest = match slot {
                Some(Slot::Texts(texts)) => {
                    let (word, after) = self.word(rest)?;
                    texts.push(word);
                    after
                }
                None => self.word(rest)?.1,
                Some(slot) => number(rest, row, slot)?,
            };
            if !matches!(rest.first(), None | Some(b' ' | b'\t' | b'\n' | b'\r')) {
                return None;
            }
        }
        Some(after_blanks(rest))
    }

    fn cells<'t>(
        &self,
        text: &'t [u8],
        delimiter: u8,
        row: usize,
        slots: &mut [Slot<'_>],
    ) -> Option<&'t [u8]> {
        let mut rest = text;
        let last = self.plan.len() - 1;
        for (field, slot) in self.plan.iter().enumerate() {
            rest = after_spaces(rest);
            let slot = slot.and_then(|slot| slots.get_mut(slot));
            rest = match slot {
                Some(Slot::Texts(texts)) => {
                    let (text, after) = self.cell(rest, delimiter)?;
                    texts.push(text);
                    after
                }
                None => self.cell(rest, delimiter)?.1,
                Some(Slot::Numbers(numbers)) if rest.first() == Some(&delimiter) => {
                    numbers[row] = f64::NAN;
                    rest
                }
                Some(slot) => after_spaces(number(rest, row, slot)?),
            };
            let more = rest.first() == Some(&delimiter);
            match (field == last, more) {
                (_, true) => rest = &rest[1..],
                (false, false) => return None,
                (true, false) => {}
            }
        }
        Some(after_spaces(rest))
    }

    /// A word and what follows it; not where it might begin a remark or hold more than ASCII.
    fn word<'t>(&self, text: &'t [u8]) -> Option<(&str, &'t [u8])> {
        let is_end = |b: &u8| matches!(b, b' ' | b'\t' | b'\n' | b'\r');
        let end = text.iter().position(is_end).unwrap_or(text.len());
        (end > 0).then(|| self.plain_text(text, end)).flatten()
    }

    /// A cell without the blanks around it, and what follows it.
    fn cell<'t>(&self, text: &'t [u8], delimiter: u8) -> Option<(&str, &'t [u8])> {
        let is_end = |&b: &u8| b == delimiter || matches!(b, b'\n' | b'\r');
        let end = text.iter().position(is_end).unwrap_or(text.len());
        self.plain_text(text, end)
            .map(|(cell, after)| (cell.trim_ascii(), after))
    }

    /// The first bytes of a text as such, and what follows them.
    fn plain_text<'t>(&self, text: &'t [u8], length: usize) -> Option<(&str, &'t [u8])> {
        let (bytes, after) = text.split_at(length);
        let remark = matches!(bytes.first(), Some(b'#' | b'!'));
        if remark || !bytes.is_ascii() || bytes.contains(&b'"') {
            return None;
        }
        let start = self.text.len() - text.len();
        Some((self.text.get(start..start + length)?, after))
    }
}

/// What follows the end of a line; `None` where something else stands first.
fn after_end(text: &[u8]) -> Option<&[u8]> {
    match text {
        [] => Some(text),
        [b'\r', b'\n', rest @ ..] | [b'\n' | b'\r', rest @ ..] => Some(rest),
        _ => None,
    }
}

#[inline]
fn after_blanks(text: &[u8]) -> &[u8] {
    let mut rest = text;
    // Eight blanks at once: columns are padded.
    while let Some(eight) = rest.first_chunk::<8>() {
        let others = u64::from_le_bytes(*eight) ^ 0x2020_2020_2020_2020;
        let blanks = others.trailing_zeros() as usize / 8;
        rest = &rest[blanks..];
        if blanks < 8 {
            break;
        }
    }
    let at = rest.iter().position(|b| !matches!(b, b' ' | b'\t'));
    &rest[at.unwrap_or(rest.len())..]
}

fn after_spaces(text: &[u8]) -> &[u8] {
    let at = text.iter().position(|&b| b != b' ');
    &text[at.unwrap_or(text.len())..]
}

/// Reads the number that begins a text into its column, and returns what follows it.
#[inline]
fn number<'t>(text: &'t [u8], row: usize, slot: &mut Slot<'_>) -> Option<&'t [u8]> {
    let Some((digits, decimals, after)) = short_decimal(text) else {
        return long_number(text, row, slot);
    };
    match slot {
        // Digits below 10^15 and the powers of ten are exact, so that their quotient is rounded once,
        // as it must be (Clinger 1990).
        #[allow(clippy::cast_precision_loss)]
        Slot::Numbers(numbers) if digits != 0 => {
            numbers[row] = digits as f64 / TENS[decimals];
        }
        Slot::Whole(whole, _) if decimals == 0 => whole[row] = digits,
        _ => return long_number(text, row, slot),
    }
    Some(after)
}

/// The same for any number; words such as `nan` and `inf` are left to the careful way.
#[cold]
#[inline(never)]
fn long_number<'t>(text: &'t [u8], row: usize, slot: &mut Slot<'_>) -> Option<&'t [u8]> {
    let (value, length) = fast_float2::parse_partial::<f64, _>(text).ok()?;
    match slot {
        _ if !value.is_finite() => return None,
        Slot::Numbers(numbers) => numbers[row] = value,
        Slot::Whole(whole, _) => whole[row] = as_whole(value)?,
        Slot::Texts(_) => return None,
    }
    Some(&text[length..])
}

const TENS: [f64; 16] = [
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15,
];

/// A number of up to fifteen signs without an exponent: its digits with their sign, how many of them
/// follow the point, and what follows the number. Sixteen bytes are looked at in one word, because
/// numbers of changing length make a processor guess wrong.
#[inline]
fn short_decimal(text: &[u8]) -> Option<(i64, usize, &[u8])> {
    let negative = text.first() == Some(&b'-');
    let unsigned = &text[usize::from(negative)..];
    let word = u128::from_le_bytes(*unsigned.first_chunk::<16>()?) ^ repeated(b'0');
    // The high bit of each byte that is no digit: above nine, or above 127.
    let others = (((word & repeated(0x7f)) + repeated(0x76)) | word) & repeated(0x80);
    let first = others.trailing_zeros() as usize / 8;
    let second = (others & others.wrapping_sub(1)).trailing_zeros() as usize / 8;
    let has_point = unsigned.get(first) == Some(&b'.');
    let length = if has_point { second } else { first };
    let digits = length - usize::from(has_point);
    if length > 15 || digits == 0 {
        return None;
    }
    if !matches!(unsigned[length], b' ' | b'\t' | b'\n' | b'\r' | b',' | b';') {
        return None;
    }
    // Without the point, the digits move up to the end of the word; zeros stand before them.
    let below = (1u128 << (8 * first)) - 1;
    let joined = match has_point {
        true => (word & below) | ((word >> 8) & !below),
        false => word,
    };
    let aligned = joined << (8 * (16 - digits));
    let [high, low] = [aligned, aligned >> 64].map(eight_digits);
    let value = i64::try_from(high * 100_000_000 + low).ok()?;
    let decimals = digits - first.min(digits);
    Some((
        if negative { -value } else { value },
        decimals,
        &unsigned[length..],
    ))
}

fn repeated(byte: u8) -> u128 {
    u128::from_le_bytes([byte; 16])
}

/// The number that eight digits are, the first one in the lowest byte. Pairs, fours and eights of
/// them are put together in one word.
#[inline]
fn eight_digits(digits: u128) -> u64 {
    #[allow(clippy::cast_possible_truncation)] // The eight that are meant.
    let word = digits as u64;
    let pairs = (word.wrapping_mul(10).wrapping_add(word >> 8)) & 0x00ff_00ff_00ff_00ff;
    let fours = (pairs.wrapping_mul(100).wrapping_add(pairs >> 16)) & 0x0000_ffff_0000_ffff;
    (fours.wrapping_mul(10_000).wrapping_add(fours >> 32)) & 0xffff_ffff
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    fn read(text: &str) -> Option<f64> {
        let mut numbers = [f64::NAN];
        let mut slot = Slot::Numbers(&mut numbers);
        number(text.as_bytes(), 0, &mut slot)?;
        Some(numbers[0])
    }

    #[test]
    fn short_numbers_take_the_short_way() {
        for (text, digits, decimals) in [
            ("-12.34567890      ", -1_234_567_890, 8),
            ("0.5,              ", 5, 1),
            ("7\n                ", 7, 0),
            ("-.25 1234567890123", -25, 2),
            ("5. 1234567890123456", 5, 0),
            ("123456789.12345 abc", 12_345_678_912_345, 5),
        ] {
            let (value, after, _) = short_decimal(text.as_bytes()).unwrap();
            assert_eq!((value, after), (digits, decimals), "{text}");
        }
        for text in [
            "1.5e3               ",
            "1.2.3               ",
            "-                   ",
            ".                   ",
            "1/2                 ",
            "nan                 ",
            "1234567890.123456   ",
            "1:2                 ",
            "1.5",
        ] {
            assert_eq!(short_decimal(text.as_bytes()), None, "{text}");
        }
    }

    proptest! {
        #[test]
        fn numbers_are_what_the_standard_library_reads(
            text in "-?[0-9]{0,12}\\.?[0-9]{0,12}(e-?[0-9]{1,2})?",
            after in "[ ,;\t\n][0-9 ]{0,20}",
        ) {
            let known = text.parse::<f64>().ok();
            let read = read(&format!("{text}{after}"));
            prop_assert_eq!(read.map(f64::to_bits), known.map(f64::to_bits), "{}", text);
        }

        #[test]
        fn decimals_are_rounded_once(value in any::<f64>(), decimals in 0usize..9) {
            let text = format!("{:.*}", decimals, value % 1e7);
            let known: f64 = text.parse().unwrap();
            prop_assert_eq!(read(&format!("{text}                 ")).map(f64::to_bits), Some(known.to_bits()));
        }
    }
}
