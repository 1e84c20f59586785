//! Items from the lines of a file.

use std::ops::Range;

use super::anchor::{Anchor, PARTS, trimmed};
use super::block::Block;
use super::carrier::{Carrier, Item, Keyword, Whole};
use super::experiment::{Experiment, List, Selection, Text};
use super::layout::{self, END, Frame};
use super::number::{has_decimal_comma, real, whole};
use crate::parse::problem::visible;
use crate::parse::{Problem, Source};

/// Where the lines are in the file, and what a later block leaves out.
struct Reader<'a> {
    source: &'a Source,
    /// The first byte of the next line.
    at: usize,
    /// The 1-based number of the line before it.
    line: usize,
    /// Lines from there to the end.
    left: u64,
    /// The 0-based block.
    block: Option<usize>,
    left_out: [bool; PARTS],
    part_lines: [usize; PARTS],
    /// The part whose start was noted last.
    noted: usize,
    /// The number that announced the values now read.
    announced: Range<usize>,
}

/// Reads a whole file.
pub(super) fn experiment(source: &Source) -> Result<Experiment, Problem> {
    let mut reader = Reader::new(source);
    let mut experiment = Experiment::default();
    let blocks = layout::header(&mut reader, &mut experiment)?;
    let frame = Frame::of(&experiment);
    // What later blocks start from: the first one without its values.
    let mut first: Option<Block> = None;
    for index in 0..blocks as usize {
        let mut block = first.clone().unwrap_or_default();
        reader.enter(index, &experiment.selection, &block.anchor);
        let line = reader.line + 1;
        let values = layout::block(&mut reader, &frame, &mut block)?;
        block.anchor.line = line;
        block.anchor.parts = reader.part_lines;
        if first.is_none() {
            first = Some(block.clone());
        }
        reader.ordinates(values, &mut block)?;
        experiment.blocks.push(block);
    }
    reader.end()?;
    Ok(experiment)
}

impl<'a> Reader<'a> {
    fn new(source: &'a Source) -> Self {
        Self {
            source,
            at: 0,
            line: 0,
            left: source.lines_from(0).count() as u64,
            block: None,
            left_out: [false; PARTS],
            part_lines: [0; PARTS],
            noted: 0,
            announced: 0..0,
        }
    }

    /// Turns to a block.
    fn enter(&mut self, index: usize, selection: &Selection, first: &Anchor) {
        self.block = Some(index);
        self.part_lines = first.parts;
        self.noted = 0;
        if index == 1 {
            for (part, left_out) in (0..).zip(&mut self.left_out) {
                *left_out = part > 0 && !selection.has(part);
            }
        }
    }

    fn leaves_out(&self, item: Item) -> bool {
        self.left_out[usize::from(item.0)]
    }

    /// The next line, without its terminator.
    fn line(&mut self, item: Item) -> Result<Range<usize>, Problem> {
        let Some(line) = self.source.lines_from(self.at).next() else {
            let end = self.source.text().len();
            let found = "expected a line and found the end of the file";
            return Err(self.problem(item, found, end..end));
        };
        self.at = line.next;
        self.line += 1;
        self.left = self.left.saturating_sub(1);
        Ok(line.start..line.end)
    }

    /// The next line without blanks at its ends.
    fn word(&mut self, item: Item) -> Result<(Range<usize>, &'a str), Problem> {
        let span = self.line(item)?;
        let span = trimmed(self.source, span);
        Ok((span.clone(), self.source.slice(span)))
    }

    /// Notes where a part of a block starts.
    fn note(&mut self, item: Item) {
        let part = usize::from(item.0);
        if self.noted != part {
            self.part_lines[part] = self.line + 1;
            self.noted = part;
        }
    }

    fn problem(&self, item: Item, what: &str, span: Range<usize>) -> Problem {
        Problem::new(format!("{}: {what}", self.name(item))).at(self.source.place(span))
    }

    fn name(&self, Item(number, name): Item) -> String {
        let block = self.block.map(|index| format!("block {}, ", index + 1));
        let item = (number > 0).then(|| format!("item {number}, "));
        format!(
            "{}{}{name}",
            block.unwrap_or_default(),
            item.unwrap_or_default()
        )
    }

    fn unexpected(&self, item: Item, expected: &str, span: Range<usize>) -> Problem {
        let found = self.source.slice(span.clone());
        let what = match found {
            "" => format!("expected {expected} and found a blank line"),
            text => format!("expected {expected} and found `{}`", visible(text)),
        };
        let help = if has_decimal_comma(found) {
            "write a point for the decimal mark"
        } else {
            "the place of a line says what it is: look for a line too many or too few before this one"
        };
        self.problem(item, &what, span).with_help(help)
    }

    fn number(&mut self, item: Item) -> Result<f64, Problem> {
        let (span, text) = self.word(item)?;
        real(text).ok_or_else(|| self.unexpected(item, "a finite number", span))
    }

    /// A whole number and where it stands.
    fn integer<N: Whole>(&mut self, item: Item) -> Result<(N, Range<usize>), Problem> {
        let (span, text) = self.word(item)?;
        match whole(text).and_then(N::from_number) {
            Some(number) => Ok((number, span)),
            None => Err(self.unexpected(item, N::EXPECTED, span)),
        }
    }

    /// The values of a block, so many as its head announces.
    fn ordinates(&mut self, count: u32, block: &mut Block) -> Result<(), Problem> {
        let (count, variables) = (count as usize, block.variables.len());
        if count > 0 && count.checked_rem(variables) != Some(0) {
            let what = format!(
                "expected a multiple of the number of corresponding variables, {variables}, and found {count}"
            );
            let item = Item(0, "number of ordinate values");
            return Err(self.problem(item, &what, self.announced.clone()));
        }
        block.anchor.first_value_line = self.line + 1;
        for index in 0..count {
            block.anchor.note(index, self.at);
            block
                .ordinates
                .push(self.number(Item(0, "ordinate value"))?);
        }
        Ok(())
    }

    /// The last line, with nothing but blank lines after it.
    fn end(&mut self) -> Result<(), Problem> {
        self.block = None;
        let item = Item(0, "experiment terminator");
        let (span, text) = self.word(item)?;
        if text != END {
            return Err(self.unexpected(item, &format!("`{END}`"), span));
        }
        while self.left > 0 {
            let (span, text) = self.word(item)?;
            if !text.is_empty() {
                let what = format!("expected nothing after it and found `{}`", visible(text));
                return Err(self.problem(item, &what, span));
            }
        }
        Ok(())
    }
}

impl Carrier for Reader<'_> {
    type Error = Problem;

    fn text(&mut self, item: Item, value: &mut Text) -> Result<(), Problem> {
        if !self.leaves_out(item) {
            self.note(item);
            let span = self.line(item)?;
            *value = self.source.slice(span).into();
        }
        Ok(())
    }

    fn whole<N: Whole>(&mut self, item: Item, value: &mut N) -> Result<(), Problem> {
        if !self.leaves_out(item) {
            self.note(item);
            (*value, _) = self.integer(item)?;
        }
        Ok(())
    }

    fn count<N: Whole>(&mut self, item: Item, lines: u64, value: &mut N) -> Result<(), Problem> {
        if self.leaves_out(item) {
            return Ok(());
        }
        self.note(item);
        let (number, span) = self.integer::<N>(item)?;
        let entries = number.number().unsigned_abs();
        if entries.saturating_mul(lines) > self.left {
            let what = format!(
                "expected no more entries than the file has lines for and found {entries}, of {lines} or more lines each, with {} lines left",
                self.left
            );
            return Err(self.problem(item, &what, span));
        }
        self.announced = span;
        *value = number;
        Ok(())
    }

    fn real(&mut self, item: Item, value: &mut Option<f64>) -> Result<(), Problem> {
        if !self.leaves_out(item) {
            self.note(item);
            let number = self.number(item)?;
            *value = super::known(number);
        }
        Ok(())
    }

    fn keyword<K: Keyword>(&mut self, item: Item, value: &mut K) -> Result<(), Problem> {
        if self.leaves_out(item) {
            return Ok(());
        }
        self.note(item);
        let (span, text) = self.word(item)?;
        let known = K::ALL.iter().find(|word| word.word() == text);
        *value = *known.ok_or_else(|| self.unexpected(item, &one_of::<K>(), span))?;
        Ok(())
    }

    fn entries<T: Clone + Default>(
        &mut self,
        item: Item,
        count: u64,
        list: &mut List<T>,
        mut each: impl FnMut(&mut Self, &mut T) -> Result<(), Problem>,
    ) -> Result<(), Problem> {
        if self.leaves_out(item) {
            return Ok(());
        }
        let mut entries = Vec::new();
        for _ in 0..count {
            let mut entry = T::default();
            each(self, &mut entry)?;
            entries.push(entry);
        }
        *list = entries.into();
        Ok(())
    }

    fn optional<'b, T: Default>(
        &mut self,
        item: Item,
        applies: bool,
        value: &'b mut Option<T>,
    ) -> Result<Option<&'b mut T>, Problem> {
        if !applies {
            *value = None;
        } else if value.is_none() {
            if self.leaves_out(item) {
                let what = "the parameter list leaves it out, and the first block has none to take";
                return Err(self.problem(item, what, self.at..self.at));
            }
            *value = Some(T::default());
        }
        Ok(value.as_mut())
    }
}

/// The words that are allowed, in words.
fn one_of<K: Keyword>() -> String {
    let words: Vec<String> = K::ALL
        .iter()
        .map(|word| format!("`{}`", word.word()))
        .collect();
    match words.split_last() {
        Some((last, [])) => last.clone(),
        Some((last, before)) => format!("{} or {last}", before.join(", ")),
        None => String::new(),
    }
}
