//! A text with its name, and the one conversion from byte offsets to line and column.

use std::fs::{self, File, Metadata};
use std::io::ErrorKind;
use std::ops::Range;
use std::path::Path;
use std::sync::{Arc, OnceLock};

use memchr::memchr2;
use rayon::prelude::*;
use sha2::{Digest, Sha256};

use super::Problem;
use super::decode::{Decoded, Encoding, decode, plain_text};
use crate::schema::SourceRecord;

/// Lines between two remembered line starts.
const ANCHOR_LINES: usize = 32;
/// Bytes from the beginning in which lines are counted without anchors.
const NEAR: usize = 1 << 16;
/// Bytes of a file that one task reads.
const READ_AT_ONCE: usize = 8 << 20;
/// Characters of a line that evidence quotes.
const QUOTED_CHARS: usize = 60;
/// Characters of a line that an excerpt shows.
const EXCERPT_CHARS: usize = 120;
/// Characters shown before the span where a line is cut.
const EXCERPT_BEFORE: usize = 40;
const BOM: [u8; 3] = [0xef, 0xbb, 0xbf];

/// A text that was read, with its name and the record of its bytes.
///
/// Offsets are zero-based bytes of the text in UTF-8, a byte order mark included: those of the file
/// itself where it is UTF-8.
#[derive(Debug, Clone)]
pub struct Source {
    name: String,
    text: Arc<String>,
    encoding: Encoding,
    gzip: bool,
    /// Shared by clones, of which a file of many curves has many.
    record: Arc<OnceLock<SourceRecord>>,
    anchors: Arc<OnceLock<Vec<usize>>>,
}

impl PartialEq for Source {
    fn eq(&self, other: &Self) -> bool {
        (&self.name, &self.text) == (&other.name, &other.text) && self.record() == other.record()
    }
}

/// A place in a text, ready to be shown.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Place {
    /// The shown name of the file.
    pub file: String,
    /// The 1-based line; LF, CRLF and CR each end one.
    pub line: usize,
    /// The 1-based column in characters; a tab counts one, a byte order mark none.
    pub column: usize,
    /// The line, cut around the span where it is long, with blanks for control characters.
    pub excerpt: String,
    /// The span within the excerpt, in characters.
    pub highlight: Range<usize>,
}

/// One line of a text, in bytes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Line {
    /// Its first byte.
    pub start: usize,
    /// The end of its content.
    pub end: usize,
    /// The first byte after its terminator.
    pub next: usize,
}

impl Place {
    /// The beginning of the line, as evidence quotes it.
    pub(super) fn quoted(&self) -> String {
        let text = self.excerpt.trim();
        let cut = text.chars().nth(QUOTED_CHARS).map_or("", |_| "…");
        text.chars().take(QUOTED_CHARS).collect::<String>() + cut
    }
}

impl Source {
    /// Reads a regular file of text: UTF-8, UTF-16 or Latin-1, or gzip of one of them.
    ///
    /// # Errors
    /// A file that is missing, unreadable, not regular, or no text.
    pub fn read(path: &Path, shown: &str) -> Result<Self, Problem> {
        let name = path.display();
        let unreadable =
            |error: std::io::Error| Problem::new(format!("cannot read `{name}`: {error}"));
        let metadata = fs::metadata(path).map_err(|error| match error.kind() {
            ErrorKind::NotFound => Problem::new(format!("there is no file `{name}`")),
            _ => unreadable(error),
        })?;
        // Asked before opening, which may wait for ever, and again of what was opened.
        regular(path, &metadata)?;
        let file = File::open(path).map_err(unreadable)?;
        let metadata = file.metadata().map_err(unreadable)?;
        regular(path, &metadata)?;
        let bytes = read_whole(&file, metadata.len()).map_err(unreadable)?;
        Self::from_bytes(shown, bytes)
    }

    /// A source from text in memory.
    #[must_use]
    pub fn from_text(shown: &str, text: &str) -> Self {
        Self::new(shown, Decoded::verbatim(text.to_owned()))
    }

    /// A source from the bytes of a file.
    ///
    /// # Errors
    /// Bytes that are no text.
    pub fn from_bytes(shown: &str, bytes: Vec<u8>) -> Result<Self, Problem> {
        // Made from the text where that is the bytes, and only when asked for.
        match plain_text(bytes) {
            Ok(text) => Ok(Self::new(shown, Decoded::verbatim(text))),
            Err(bytes) => {
                let record = record_of(shown, &bytes);
                let mut source = Self::new(shown, decode(shown, bytes)?);
                source.record = Arc::new(record.into());
                Ok(source)
            }
        }
    }

    fn new(shown: &str, decoded: Decoded) -> Self {
        Self {
            name: shown.to_owned(),
            text: Arc::new(decoded.text),
            encoding: decoded.encoding,
            gzip: decoded.gzip,
            record: Arc::default(),
            anchors: Arc::default(),
        }
    }

    /// How the file's bytes are text.
    #[must_use]
    pub fn encoding(&self) -> Encoding {
        self.encoding
    }

    /// Whether the file was compressed (gzip).
    #[must_use]
    pub fn is_gzip(&self) -> bool {
        self.gzip
    }

    /// The name to show.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// The whole text, a byte order mark included, so that offsets are bytes of the file.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The size and hash of the raw bytes.
    #[must_use]
    pub fn record(&self) -> &SourceRecord {
        self.record
            .get_or_init(|| record_of(&self.name, self.text.as_bytes()))
    }

    /// The place of a span of bytes. A span outside the text is moved to its nearest place.
    #[must_use]
    pub fn place(&self, span: Range<usize>) -> Place {
        let (number, line) = self.line_at(span.start);
        let content = &self.text[line.start..line.end];
        let before = chars_before(content, span.start.saturating_sub(line.start));
        let until = chars_before(content, span.end.saturating_sub(line.start)).max(before);
        let (excerpt, highlight) = excerpt(content, before..until);
        Place {
            file: self.name.clone(),
            line: number,
            column: before + 1,
            excerpt,
            highlight,
        }
    }

    /// The text of a span; empty where it is none.
    pub(super) fn slice(&self, span: Range<usize>) -> &str {
        self.text.get(span).unwrap_or("")
    }

    /// The lines from a byte that starts one.
    pub(super) fn lines_from(&self, start: usize) -> impl Iterator<Item = Line> + '_ {
        lines(&self.text, start)
    }

    /// The number of the line that holds a byte, 1-based, and the line.
    fn line_at(&self, byte: usize) -> (usize, Line) {
        let anchors: &[usize] = match byte {
            // Near the beginning the lines are counted at once, before all of them are needed.
            0..NEAR => &[0],
            _ => self.anchors.get_or_init(|| anchors(&self.text)),
        };
        let anchor = anchors
            .partition_point(|&start| start <= byte)
            .saturating_sub(1);
        let start = anchors.get(anchor).copied().unwrap_or(0);
        let first = Line {
            start,
            end: start,
            next: start,
        };
        self.lines_from(start)
            .enumerate()
            .take_while(|(index, line)| *index == 0 || line.start <= byte)
            .last()
            .map_or((1, first), |(index, line)| {
                (anchor * ANCHOR_LINES + index + 1, line)
            })
    }
}

fn record_of(shown: &str, bytes: &[u8]) -> SourceRecord {
    use std::fmt::Write as _;
    let mut sha256 = String::with_capacity(64);
    for byte in Sha256::digest(bytes) {
        // Writing to a string cannot fail.
        let _ = write!(sha256, "{byte:02x}");
    }
    SourceRecord {
        file: shown.to_owned(),
        size_bytes: bytes.len() as u64,
        sha256,
    }
}

/// The bytes that a file had when it was opened: some files have no end. Read in parallel, because
/// the first touch of so much memory takes longer than the copy.
#[cfg(unix)]
fn read_whole(file: &File, size: u64) -> std::io::Result<Vec<u8>> {
    use std::os::unix::fs::FileExt;
    let mut bytes = room(size)?;
    bytes
        .par_chunks_mut(READ_AT_ONCE)
        .enumerate()
        .try_for_each(|(index, part)| file.read_exact_at(part, (index * READ_AT_ONCE) as u64))?;
    Ok(bytes)
}

/// The bytes that a file had when it was opened: some files have no end.
#[cfg(not(unix))]
fn read_whole(mut file: &File, size: u64) -> std::io::Result<Vec<u8>> {
    let mut bytes = room(size)?;
    std::io::Read::read_exact(&mut file, &mut bytes)?;
    Ok(bytes)
}

/// Zeros to read into.
fn room(size: u64) -> std::io::Result<Vec<u8>> {
    let too_large = || std::io::Error::from(ErrorKind::OutOfMemory);
    let size = usize::try_from(size).map_err(|_| too_large())?;
    // Asked for first: making the zeros would abort.
    Vec::<u8>::new()
        .try_reserve_exact(size)
        .map_err(|_| too_large())?;
    Ok(vec![0; size])
}

fn regular(path: &Path, metadata: &Metadata) -> Result<(), Problem> {
    if metadata.is_file() {
        return Ok(());
    }
    let kind = if metadata.is_dir() {
        "a directory"
    } else {
        "a device, pipe or socket"
    };
    let name = path.display();
    Err(Problem::new(format!(
        "`{name}` is {kind}; expected a regular file"
    )))
}

fn anchors(text: &str) -> Vec<usize> {
    let starts = lines(text, 0).map(|line| line.start);
    starts.step_by(ANCHOR_LINES).collect()
}

/// The lines of a text from a byte that starts one; a byte order mark before one, as where files were
/// joined, belongs to none.
fn lines(text: &str, start: usize) -> impl Iterator<Item = Line> + '_ {
    let bytes = text.as_bytes();
    let mut at = start;
    std::iter::from_fn(move || {
        while bytes.get(at..).is_some_and(|rest| rest.starts_with(&BOM)) {
            at += BOM.len();
        }
        let rest = bytes.get(at..).filter(|rest| !rest.is_empty())?;
        let length = memchr2(b'\n', b'\r', rest).unwrap_or(rest.len());
        let terminator = match &rest[length..] {
            [b'\r', b'\n', ..] => 2,
            [] => 0,
            _ => 1,
        };
        let line = Line {
            start: at,
            end: at + length,
            next: at + length + terminator,
        };
        at = line.next;
        Some(line)
    })
}

/// The number of characters that start before a byte of the text.
fn chars_before(text: &str, byte: usize) -> usize {
    text.char_indices()
        .take_while(|(at, character)| at + character.len_utf8() <= byte)
        .count()
}

/// The line as shown, cut around the span, and the span within it.
fn excerpt(line: &str, span: Range<usize>) -> (String, Range<usize>) {
    let length = line.chars().count();
    let shown = |character: char| {
        if character.is_control() {
            ' '
        } else {
            character
        }
    };
    if length <= EXCERPT_CHARS {
        return (line.chars().map(shown).collect(), span);
    }
    let from = span
        .start
        .saturating_sub(EXCERPT_BEFORE)
        .min(length - EXCERPT_CHARS);
    let to = from + EXCERPT_CHARS;
    let mut text: String = if from > 0 {
        "…".into()
    } else {
        String::new()
    };
    let shift = usize::from(from > 0);
    text.extend(line.chars().skip(from).take(EXCERPT_CHARS).map(shown));
    if to < length {
        text.push('…');
    }
    let end = span.end.min(to);
    (text, span.start - from + shift..end - from + shift)
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn at(text: &str, needle: &str) -> Place {
        let start = text.find(needle).unwrap();
        Source::from_text("t", text).place(start..start + needle.len())
    }

    #[test]
    fn line_ends_tabs_marks_and_wide_characters_count_as_people_count() {
        for (text, line, column) in [
            ("a\nbb X", 2, 4),
            ("a\r\nbb X", 2, 4),
            ("a\rbb X", 2, 4),
            ("\u{feff}X", 1, 1),
            ("\u{feff}a\n\tX", 2, 2),
            ("a\n\u{feff}X", 2, 1),
            ("µ−世 X", 1, 5),
            ("\n\n\r\n\rX", 5, 1),
        ] {
            let place = at(text, "X");
            assert_eq!((place.line, place.column), (line, column), "{text:?}");
            let shown: String = place
                .excerpt
                .chars()
                .skip(place.highlight.start)
                .take(place.highlight.len())
                .collect();
            assert_eq!(shown, "X", "{text:?}");
        }
    }

    #[test]
    fn long_line_is_cut_around_the_span() {
        let text = format!("{}X{}", "a".repeat(500), "b".repeat(500));
        let place = at(&text, "X");
        assert_eq!(place.column, 501);
        assert_eq!(place.excerpt.chars().count(), EXCERPT_CHARS + 2);
        assert_eq!(place.excerpt.chars().nth(place.highlight.start), Some('X'));
    }

    #[test]
    fn lines_beyond_the_anchors_are_found() {
        let text = "x\r\n".repeat(3_500);
        let place = Source::from_text("t", &text).place(3 * 3_210..3 * 3_210 + 1);
        assert_eq!((place.line, place.column), (3_211, 1));
    }

    #[test]
    fn only_regular_files_are_read() {
        let folder = tempfile::tempdir().unwrap();
        let refused = Source::read(folder.path(), "d").unwrap_err();
        assert!(refused.message.contains("a directory"), "{refused}");
        let absent = folder.path().join("absent.txt");
        let missing = Source::read(&absent, "absent.txt").unwrap_err();
        assert!(missing.message.contains(absent.to_str().unwrap()));
        let file = folder.path().join("there.txt");
        std::fs::write(&file, "\u{feff}abc").unwrap();
        let source = Source::read(&file, "there.txt").unwrap();
        assert_eq!(source.record().size_bytes, 6);
        assert!(Source::read(Path::new("/dev/null"), "null").is_err());
    }

    #[test]
    fn hash_is_of_the_bytes() {
        // FIPS 180-4, the example message "abc".
        assert_eq!(
            Source::from_text("t", "abc").record().sha256,
            "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
        );
    }

    proptest! {
        #[test]
        fn place_never_panics(text in "[a\r\n\tµ世\u{feff}]{0,40}", a in 0usize..200, b in 0usize..200) {
            let place = Source::from_text("t", &text).place(a..b);
            prop_assert!(place.highlight.end <= place.excerpt.chars().count());
            prop_assert!(place.highlight.start <= place.highlight.end);
        }
    }
}
