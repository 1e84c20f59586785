//! Which records belong together: blocks from `##TITLE=` to `##END=`, alone, one after the other, or
//! inside a LINK block.

use std::ops::Range;

use super::document::is_link;
use super::label::{self, BLOCKS, DATA_TYPE, END, TITLE, VERSION};
use super::number::decimal;
use super::raw::{Raw, no_title};
use crate::parse::{Problem, Source};

/// The oldest version that is read.
const OLDEST: f64 = 4.10;

/// A LINK block that is open.
struct Link {
    title: usize,
    /// Data blocks in it so far.
    inner: u64,
}

/// What is open while the records go by.
struct Walk<'a> {
    source: &'a Source,
    raws: &'a [Raw],
    link: Option<Link>,
    /// The title of the data block that is open.
    data: Option<usize>,
    /// The record that says how many blocks the LINK block holds.
    announced: Option<usize>,
    blocks: Vec<Range<usize>>,
}

/// The records of each data block.
pub(super) fn blocks(source: &Source, raws: &[Raw]) -> Result<Vec<Range<usize>>, Problem> {
    let mut walk = Walk {
        source,
        raws,
        link: None,
        data: None,
        announced: None,
        blocks: Vec::new(),
    };
    for index in 0..raws.len() {
        walk.record(index)?;
    }
    match walk.data.or(walk.link.map(|link| link.title)) {
        Some(title) => Err(not_closed(source, &raws[title], "the text ends")),
        None if raws.is_empty() => Err(Problem::new(
            "`##TITLE=`: expected it as the first record and found no record at all",
        )
        .at(source.place(0..0))),
        None => Ok(walk.blocks),
    }
}

impl Walk<'_> {
    fn record(&mut self, index: usize) -> Result<(), Problem> {
        let raw = &self.raws[index];
        if raw.normal == TITLE {
            return self.title(index);
        }
        if self.data.is_none() && self.link.is_none() {
            return Err(no_title(self.source, raw.label.clone()));
        }
        refuse_ntuples(self.source, raw)?;
        match raw.normal.as_str() {
            VERSION => version(self.source, raw).map(|_| ()),
            DATA_TYPE if is_link(&raw.text(self.source)) => self.link(index),
            BLOCKS if self.data.is_none() || self.link.is_none() => {
                self.announced = Some(index);
                Ok(())
            }
            END => self.end(index),
            _ => Ok(()),
        }
    }

    fn title(&mut self, index: usize) -> Result<(), Problem> {
        if let Some(open) = self.data {
            let raw = &self.raws[index];
            let place = self.source.place(raw.label.clone());
            return Err(
                not_closed(self.source, &self.raws[open], "another `##TITLE=` follows")
                    .with_related(place, "the next block begins here")
                    .with_help("only a block with `##DATA TYPE= LINK` holds other blocks"),
            );
        }
        self.data = Some(index);
        match &mut self.link {
            Some(link) => link.inner += 1,
            None => self.announced = None,
        }
        Ok(())
    }

    fn link(&mut self, index: usize) -> Result<(), Problem> {
        let raw = &self.raws[index];
        match (self.data.take(), &self.link) {
            (Some(title), None) => {
                self.link = Some(Link { title, inner: 0 });
                Ok(())
            }
            _ => Err(raw.expected(
                self.source,
                "a data type other than LINK inside a LINK block",
                "LINK",
            )),
        }
    }

    fn end(&mut self, index: usize) -> Result<(), Problem> {
        let raw = &self.raws[index];
        // Old systems end a text with the character 1A.
        let text = raw.text(self.source);
        if !text
            .trim_matches(|c: char| c.is_whitespace() || c == '\u{1a}')
            .is_empty()
        {
            let more = raw.pieces(self.source).filter_map(|piece| piece.content);
            let found = more.into_iter().find(|content| !content.is_empty());
            let found = found.unwrap_or_else(|| raw.label.clone());
            return Err(Problem::new(
                "`##END=`: expected nothing more but `##TITLE=` of another block or `##END=` of \
                 the LINK block, and found text",
            )
            .at(self.source.place(found)));
        }
        if let Some(title) = self.data.take() {
            self.blocks.push(title..index + 1);
        } else if let Some(link) = self.link.take() {
            self.counted(&link)?;
        }
        Ok(())
    }

    /// Holds the number of blocks to what the LINK block holds; itself may be counted with them.
    fn counted(&mut self, link: &Link) -> Result<(), Problem> {
        let Some(raw) = self.announced.take().map(|index| &self.raws[index]) else {
            return Ok(());
        };
        let text = raw.text(self.source);
        // What is no number is refused where numbers are read.
        match text.parse::<u64>() {
            Ok(count) if count != link.inner && count != link.inner.saturating_add(1) => {
                let what = format!(
                    "the number of blocks in the LINK block, {} ({} with itself),",
                    link.inner,
                    link.inner + 1
                );
                Err(raw.expected(self.source, &what, &text))
            }
            _ => Ok(()),
        }
    }
}

fn not_closed(source: &Source, title: &Raw, what: &str) -> Problem {
    Problem::new(format!(
        "`##END=`: expected it to close the block that begins here, and {what}"
    ))
    .at(source.place(title.label.clone()))
}

/// The version of a block.
pub(super) fn version(source: &Source, raw: &Raw) -> Result<f64, Problem> {
    let text = raw.text(source);
    match decimal(&text) {
        Ok((rest, version)) if rest.is_empty() || rest.starts_with(char::is_whitespace) => {
            if version >= OLDEST {
                return Ok(version);
            }
            Err(raw.expected(source, "version 4.10 or later, such as 4.24,", &text))
        }
        _ => Err(raw.expected(source, "a version such as 4.24", &text)),
    }
}

fn refuse_ntuples(source: &Source, raw: &Raw) -> Result<(), Problem> {
    let says = |raw: &Raw| label::normal(&raw.text(source)).contains("NTUPLES");
    let class = matches!(raw.normal.as_str(), DATA_TYPE | "DATACLASS");
    if !(label::NTUPLES.contains(&raw.normal.as_str()) || class && says(raw)) {
        return Ok(());
    }
    Err(Problem::new(format!(
        "`{}`: NTUPLES blocks, which hold several variables a page, are not read",
        source.slice(raw.label.clone())
    ))
    .at(source.place(raw.head(source)))
    .with_help("write each curve as a block of its own with `##XYDATA= (X++(Y..Y))`"))
}
