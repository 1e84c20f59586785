//! From the bytes of a file to text: gzip is opened, and the encoding is concluded from a byte order
//! mark, from the bytes themselves, or else taken as Latin-1, which every byte can be.
//!
//! Sources: RFC 1952 (gzip), the Unicode Standard 3.10 (byte order marks), the WHATWG Encoding
//! Standard (windows-1252, which holds Latin-1's letters and signs).

use std::io::Read;

use encoding_rs::{UTF_16BE, UTF_16LE, WINDOWS_1252};
use flate2::read::MultiGzDecoder;
use rayon::prelude::*;

use super::Problem;

/// How the bytes of a file are text.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Encoding {
    /// UTF-8 without a byte order mark.
    Utf8,
    /// UTF-8 with a byte order mark.
    Utf8Marked,
    /// UTF-16, the low byte first.
    Utf16Le,
    /// UTF-16, the high byte first.
    Utf16Be,
    /// Latin-1, as the windows-1252 code page extends it.
    Latin1,
}

impl Encoding {
    /// The name shown.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Utf8 => "UTF-8",
            Self::Utf8Marked => "UTF-8 with a byte order mark",
            Self::Utf16Le => "UTF-16 (little-endian)",
            Self::Utf16Be => "UTF-16 (big-endian)",
            Self::Latin1 => "Latin-1 (windows-1252)",
        }
    }
}

/// A text and how it stood in the file.
#[derive(Debug, PartialEq)]
pub(super) struct Decoded {
    pub text: String,
    pub encoding: Encoding,
    /// Whether the file was compressed.
    pub gzip: bool,
}

impl Decoded {
    /// A text that is its file's bytes.
    pub fn verbatim(text: String) -> Self {
        let encoding = match text.starts_with('\u{feff}') {
            true => Encoding::Utf8Marked,
            false => Encoding::Utf8,
        };
        Self {
            text,
            encoding,
            gzip: false,
        }
    }
}

/// The bytes as UTF-8 text, or the bytes again where they are none or hold control characters.
pub(super) fn plain_text(bytes: Vec<u8>) -> Result<String, Vec<u8>> {
    match String::from_utf8(bytes) {
        Ok(text) if !has_binary(&text) => Ok(text),
        Ok(text) => Err(text.into_bytes()),
        Err(error) => Err(error.into_bytes()),
    }
}

/// Whether a text has control characters; bytes first and in parallel, because texts are long.
fn has_binary(text: &str) -> bool {
    let bytes = text.as_bytes();
    let (odd, wide) = bytes
        .par_chunks(1 << 20)
        .map(odd_and_wide)
        .reduce(|| (false, false), |a, b| (a.0 | b.0, a.1 | b.1));
    odd || (wide && text.contains(is_binary))
}

/// Whether some bytes hold control characters, and whether they hold more than ASCII. Without
/// branches, so that many bytes are looked at together.
fn odd_and_wide(bytes: &[u8]) -> (bool, bool) {
    let (odd, wide) = bytes.iter().fold((0u8, 0u8), |(odd, wide), &b| {
        let control = u8::from(b < 0x20) & u8::from(b.wrapping_sub(9) > 4) & u8::from(b != 26);
        (odd | control | u8::from(b == 0x7f), wide | (b & 0x80))
    });
    (odd != 0, wide != 0)
}

const GZIP: [u8; 2] = [0x1f, 0x8b];
/// Bytes that a compressed file may become: this many times its size, and this many in any case. A
/// table of numbers shrinks by less than twenty times; a bomb by a thousand.
const MOST_RATIO: u64 = 100;
const ALWAYS: u64 = 16 << 20;
const MOST: u64 = 2 << 30;
/// Bytes in which UTF-16 without a mark shows.
const PROBE: usize = 4_096;

/// Opens and decodes the bytes of a file.
pub(super) fn decode(name: &str, bytes: Vec<u8>) -> Result<Decoded, Problem> {
    let gzip = bytes.starts_with(&GZIP);
    let bytes = if gzip { opened(name, &bytes)? } else { bytes };
    let (text, encoding) = text_of(name, bytes)?;
    match text.find(is_binary) {
        None => Ok(Decoded {
            text,
            encoding,
            gzip,
        }),
        Some(at) => Err(binary(name, &text, at)),
    }
}

fn opened(name: &str, bytes: &[u8]) -> Result<Vec<u8>, Problem> {
    let most = (bytes.len() as u64).saturating_mul(MOST_RATIO);
    let most = most.clamp(ALWAYS, MOST);
    let mut opened = Vec::new();
    MultiGzDecoder::new(bytes)
        .take(most + 1)
        .read_to_end(&mut opened)
        .map_err(|error| {
            Problem::new(format!(
                "`{name}` begins as gzip and cannot be opened: {error}"
            ))
            .with_help("the file is damaged or was cut short: fetch it again")
        })?;
    if opened.len() as u64 > most {
        return Err(Problem::new(format!(
            "`{name}` is gzip of {} bytes and becomes more than {most} bytes",
            bytes.len()
        ))
        .with_help(
            "no table shrinks so much; if it is one, open it yourself and give the result",
        ));
    }
    if opened.starts_with(&GZIP) {
        return Err(Problem::new(format!("`{name}` is gzip within gzip"))
            .with_help("open it once yourself and give the result"));
    }
    Ok(opened)
}

fn text_of(name: &str, bytes: Vec<u8>) -> Result<(String, Encoding), Problem> {
    if let Some((encoding, reader)) = wide(&bytes) {
        let (text, bad) = reader.decode_with_bom_removal(&bytes);
        return if bad || bytes.len() % 2 == 1 {
            Err(Problem::new(format!(
                "`{name}` looks like {} and does not decode as it",
                encoding.name()
            ))
            .with_help("the file is damaged or was cut short; save it as UTF-8"))
        } else {
            Ok((text.into_owned(), encoding))
        };
    }
    match String::from_utf8(bytes) {
        Ok(text) => {
            let decoded = Decoded::verbatim(text);
            Ok((decoded.text, decoded.encoding))
        }
        Err(error) => {
            let (text, _) = WINDOWS_1252.decode_without_bom_handling(error.as_bytes());
            Ok((text.into_owned(), Encoding::Latin1))
        }
    }
}

/// UTF-16, by its mark or by zeros at every other place.
fn wide(bytes: &[u8]) -> Option<(Encoding, &'static encoding_rs::Encoding)> {
    let little = (Encoding::Utf16Le, UTF_16LE);
    let big = (Encoding::Utf16Be, UTF_16BE);
    match bytes {
        [0xff, 0xfe, ..] => return Some(little),
        [0xfe, 0xff, ..] => return Some(big),
        _ => {}
    }
    let probe = &bytes[..bytes.len().min(PROBE)];
    let zeros = |from: usize| {
        let zeros = probe.iter().skip(from).step_by(2).filter(|&&b| b == 0);
        2 * zeros.count()
    };
    let (even, odd) = (zeros(0), zeros(1));
    let most = probe.len() * 9 / 10;
    match (even, odd) {
        (0, odd) if odd > 0 && odd >= most => Some(little),
        (even, 0) if even > 0 && even >= most => Some(big),
        _ => None,
    }
}

/// A control character that no text has.
fn is_binary(c: char) -> bool {
    matches!(c, '\0'..='\x08' | '\x0e'..='\x19' | '\x1b'..='\x1f' | '\x7f'..='\u{9f}')
}

fn binary(name: &str, text: &str, at: usize) -> Problem {
    let before = &text[..at];
    let ends = before.matches('\n').count();
    let start = before.rfind('\n').map_or(0, |end| end + 1);
    let character = text[at..].chars().next().unwrap_or_default();
    Problem::new(format!(
        "`{name}` is no text: line {} has the control character {} at column {}",
        ends + 1,
        character.escape_unicode(),
        before[start..].chars().count() + 1
    ))
    .with_help("give a table or an open-standard spectrum as text; a spreadsheet exports CSV")
}

#[cfg(test)]
mod tests {
    use std::io::Write;

    use super::*;

    fn gzip(bytes: &[u8]) -> Vec<u8> {
        let mut writer = flate2::write::GzEncoder::new(Vec::new(), flate2::Compression::best());
        writer.write_all(bytes).unwrap();
        writer.finish().unwrap()
    }

    fn utf16(text: &str, little: bool, marked: bool) -> Vec<u8> {
        let mark = marked.then_some('\u{feff}');
        let text: String = mark.into_iter().chain(text.chars()).collect();
        text.encode_utf16()
            .flat_map(|unit| match little {
                true => unit.to_le_bytes(),
                false => unit.to_be_bytes(),
            })
            .collect()
    }

    #[test]
    fn encodings() {
        let text = "# 5 µm\nE (eV),counts\n1,2\n";
        let latin: Vec<u8> = text.chars().map(|c| u8::try_from(c).unwrap()).collect();
        for (bytes, encoding) in [
            (text.as_bytes().to_vec(), Encoding::Utf8),
            (utf16(text, true, true), Encoding::Utf16Le),
            (utf16(text, false, true), Encoding::Utf16Be),
            (utf16(text, true, false), Encoding::Utf16Le),
            (utf16(text, false, false), Encoding::Utf16Be),
            (latin, Encoding::Latin1),
        ] {
            let plain = decode("t", bytes.clone()).unwrap();
            assert_eq!((plain.text.as_str(), plain.encoding), (text, encoding));
            let packed = decode("t", gzip(&bytes)).unwrap();
            assert_eq!((packed.text.as_str(), packed.gzip), (text, true));
        }
        let marked = decode("t", format!("\u{feff}{text}").into_bytes()).unwrap();
        assert_eq!(marked.encoding, Encoding::Utf8Marked);
    }

    #[test]
    fn what_is_no_text_is_refused() {
        let whole = gzip(b"1 2\n");
        for (bytes, says) in [
            (vec![0, 1, 2, 3], "control character"),
            (b"E (eV),counts\n1,2\x07\n".to_vec(), "line 2"),
            (whole[..whole.len() - 4].to_vec(), "cut short"),
            (gzip(&vec![b' '; 50 << 20]), "becomes more than"),
            (gzip(&whole), "gzip within gzip"),
            (vec![0xff, 0xfe, b'a'], "does not decode"),
            (vec![0xff, 0xfe, 0x00, 0xd8], "does not decode"),
        ] {
            let problem = decode("t", bytes).unwrap_err();
            assert!(problem.to_string().contains(says), "{problem}");
        }
    }
}
