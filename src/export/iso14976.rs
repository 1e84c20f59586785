//! A document of the surface chemical analysis standard data transfer format (ISO 14976) as text.
//!
//! The order of the items is the reader's own. Every number is written with the fewest digits that
//! read back as itself, an unknown one as 1E37. What the format cannot carry is refused.

use std::fmt;
use std::sync::Arc;

use crate::parse::iso14976::{
    Block, Carrier, END, Experiment, Frame, Item, Keyword, List, Part, Selection, Text, UNKNOWN,
    Whole, block, header,
};

/// Characters that the standard allows in a line.
const LINE_CHARS: usize = 80;

/// What the format cannot carry.
#[derive(thiserror::Error, Debug, Clone, PartialEq, Eq)]
#[error("{place}: {what}; ISO 14976 cannot carry it")]
pub struct NotCarried {
    /// The block, the item of the standard and its name.
    pub place: String,
    /// What was found.
    pub what: String,
}

/// The text of a document, with LF line ends.
///
/// # Errors
/// The first item that the format cannot carry: a text of more than one line or more than 80
/// characters, a number that is not finite, a value that the modes and the technique have no place
/// for or lack, a part that a later block leaves out and whose value is not the first block's.
///
/// ```
/// use bandrule::export::iso14976;
/// use bandrule::parse::{Source, iso14976::{Experiment, read}};
/// let empty = Experiment { spectral_regions: Some(0), ..Experiment::default() };
/// let text = iso14976::text(&empty).unwrap();
/// assert_eq!(read(&Source::from_text("a", &text)), Ok(empty));
/// ```
pub fn text(experiment: &Experiment) -> Result<String, NotCarried> {
    // The walk takes what it visits by reference to change, for the reader's sake.
    let mut copy = experiment.clone();
    let mut writer = Writer::default();
    let mut out = String::new();
    header(&mut writer, &mut copy)?;
    listed(&writer, &copy.selection, &experiment.selection)?;
    writer
        .lines
        .drain(..)
        .for_each(|(_, line)| push(&mut out, &line));
    let (frame, selection) = (Frame::of(&copy), &experiment.selection);
    for (index, given) in copy.blocks.iter_mut().enumerate() {
        writer.enter(index, selection);
        block(&mut writer, &frame, given)?;
        let lines = std::mem::take(&mut writer.lines);
        writer.same_where_left_out(&lines)?;
        for (_, line) in lines.iter().filter(|&&(item, _)| !writer.leaves_out(item)) {
            push(&mut out, line);
        }
        writer.values(given, &mut out)?;
        if index == 0 {
            writer.keep(lines);
        }
    }
    push(&mut out, END);
    Ok(out)
}

fn push(out: &mut String, line: &str) {
    out.push_str(line);
    out.push('\n');
}

/// Refuses a list of parts with none in it, which would read back as no list.
fn listed(writer: &Writer, carried: &Selection, given: &Selection) -> Result<(), NotCarried> {
    if carried == given {
        return Ok(());
    }
    let item = Item(14, "parameter inclusion or exclusion list");
    Err(writer.refusal(item, "a list with no entries"))
}

/// The numbered parts of a block, and one place for lines without a number.
const PARTS: usize = Part::LAST as usize + 1;

/// A line and the item that it holds.
type Line = (Item, String);

struct Writer {
    /// The lines of the header or of a block, before any is left out.
    lines: Vec<Line>,
    block: Option<usize>,
    left_out: [bool; PARTS],
    /// The first block's lines, by part.
    first: [Vec<Line>; PARTS],
    /// Where the first block's lists are in memory, by part. A reading shares them between blocks,
    /// and a list that is left out and shared is not gone through again.
    first_lists: [Option<usize>; PARTS],
    shared: [bool; PARTS],
}

impl Default for Writer {
    fn default() -> Self {
        Self {
            lines: Vec::new(),
            block: None,
            left_out: [false; PARTS],
            first: std::array::from_fn(|_| Vec::new()),
            first_lists: [None; PARTS],
            shared: [false; PARTS],
        }
    }
}

impl Writer {
    /// Turns to a block.
    fn enter(&mut self, index: usize, selection: &Selection) {
        self.block = Some(index);
        self.shared = [false; PARTS];
        if index == 1 {
            for (part, left_out) in (0..).zip(&mut self.left_out) {
                *left_out = part > 0 && !selection.has(part);
            }
        }
    }

    /// Keeps the lines of the first block, which later ones may leave out.
    fn keep(&mut self, lines: Vec<Line>) {
        for (item, line) in lines {
            self.first[usize::from(item.0)].push((item, line));
        }
    }

    fn leaves_out(&self, item: Item) -> bool {
        self.left_out[usize::from(item.0)]
    }

    fn refusal(&self, Item(number, name): Item, what: impl fmt::Display) -> NotCarried {
        let block = self.block.map(|index| format!("block {}, ", index + 1));
        let item = (number > 0).then(|| format!("item {number}, "));
        NotCarried {
            place: [block.as_deref(), item.as_deref(), Some(name)]
                .into_iter()
                .flatten()
                .collect(),
            what: what.to_string(),
        }
    }

    fn line(&mut self, item: Item, line: String) -> Result<(), NotCarried> {
        if let Some(what) = unfit(&line) {
            return Err(self.refusal(item, what));
        }
        self.lines.push((item, line));
        Ok(())
    }

    fn number(&self, item: Item, value: f64) -> Result<String, NotCarried> {
        number(value).ok_or_else(|| self.refusal(item, format!("the number {value}")))
    }

    /// Refuses a block whose lines of a part that is left out are not the first block's.
    fn same_where_left_out(&self, lines: &[Line]) -> Result<(), NotCarried> {
        for part in lines.chunk_by(|(a, _), (b, _)| a.0 == b.0) {
            let item = part[0].0;
            let number = usize::from(item.0);
            if self.leaves_out(item) && !self.shared[number] && self.first[number] != part {
                let what = "not the first block's value, and the parameter list leaves it out";
                return Err(self.refusal(item, what));
            }
        }
        Ok(())
    }

    fn values(&self, block: &Block, out: &mut String) -> Result<(), NotCarried> {
        let (count, variables) = (block.ordinates.len(), block.variables.len());
        if count > 0 && count.checked_rem(variables) != Some(0) {
            let item = Item(0, "number of ordinate values");
            let what = format!("{count} values of {variables} corresponding variables");
            return Err(self.refusal(item, what));
        }
        for &value in &block.ordinates {
            push(out, &self.number(Item(0, "ordinate value"), value)?);
        }
        Ok(())
    }
}

impl Carrier for Writer {
    type Error = NotCarried;

    fn text(&mut self, item: Item, value: &mut Text) -> Result<(), NotCarried> {
        self.line(item, value.to_string())
    }

    fn whole<N: Whole>(&mut self, item: Item, value: &mut N) -> Result<(), NotCarried> {
        self.line(item, value.number().to_string())
    }

    fn count<N: Whole>(&mut self, item: Item, _: u64, value: &mut N) -> Result<(), NotCarried> {
        self.whole(item, value)
    }

    fn real(&mut self, item: Item, value: &mut Option<f64>) -> Result<(), NotCarried> {
        if value.is_some_and(|number| number.to_bits() == UNKNOWN.to_bits()) {
            return Err(self.refusal(item, "the number 1E37, which stands for an unknown value"));
        }
        let text = self.number(item, value.unwrap_or(UNKNOWN))?;
        self.line(item, text)
    }

    fn keyword<K: Keyword>(&mut self, item: Item, value: &mut K) -> Result<(), NotCarried> {
        self.line(item, value.word().to_owned())
    }

    fn entries<T: Clone + Default>(
        &mut self,
        item: Item,
        count: u64,
        list: &mut List<T>,
        mut each: impl FnMut(&mut Self, &mut T) -> Result<(), NotCarried>,
    ) -> Result<(), NotCarried> {
        if list.len() as u64 != count {
            let what = format!("{} entries where {count} are announced", list.len());
            return Err(self.refusal(item, what));
        }
        let (number, place) = (usize::from(item.0), Arc::as_ptr(list).cast::<T>().addr());
        if self.leaves_out(item) && self.first_lists[number] == Some(place) {
            self.shared[number] = true;
            return Ok(());
        }
        if self.block == Some(0) {
            self.first_lists[number] = Some(place);
        }
        list.to_vec()
            .iter_mut()
            .try_for_each(|entry| each(self, entry))
    }

    fn optional<'a, T: Default>(
        &mut self,
        item: Item,
        applies: bool,
        value: &'a mut Option<T>,
    ) -> Result<Option<&'a mut T>, NotCarried> {
        match (applies, value.is_some()) {
            (true, false) => {
                Err(self.refusal(item, "no value, and the mode or the technique needs one"))
            }
            (false, true) => Err(self.refusal(
                item,
                "a value that the mode or the technique has no place for",
            )),
            _ => Ok(value.as_mut()),
        }
    }
}

/// Why a text is no line of the format.
fn unfit(line: &str) -> Option<String> {
    if line.contains(['\n', '\r']) {
        return Some("a line break within a text".into());
    }
    if line.starts_with('\u{feff}') {
        return Some("a byte order mark at the start of a text".into());
    }
    let length = line.chars().count();
    (length > LINE_CHARS).then(|| format!("a text of {length} characters, more than {LINE_CHARS}"))
}

/// The shortest text that reads back as the number; `None` where it is not finite.
fn number(value: f64) -> Option<String> {
    let plain = value == 0.0 || (1e-5..1e15).contains(&value.abs());
    value.is_finite().then(|| {
        if plain {
            format!("{value}")
        } else {
            format!("{value:E}")
        }
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::parse::iso14976::{Abscissa, ExperimentMode, Extent, Label, Pair};

    /// An experiment with two blocks whose every part is blank or zero.
    fn two_blocks() -> Experiment {
        Experiment {
            spectral_regions: Some(1),
            blocks: vec![
                Block {
                    abscissa: Some(Abscissa::default()),
                    ..Block::default()
                };
                2
            ],
            ..Experiment::default()
        }
    }

    fn refused(change: impl FnOnce(&mut Experiment)) -> String {
        let mut experiment = two_blocks();
        change(&mut experiment);
        text(&experiment).unwrap_err().to_string()
    }

    #[test]
    fn what_the_format_cannot_carry_is_refused() {
        assert!(text(&two_blocks()).is_ok());
        let part = |number| Part::new(number).unwrap();
        insta::assert_snapshot!(refused(|e| e.operator = "a\nb".into()), @"item 4, operator identifier: a line break within a text; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.comment = ["x".repeat(81).into()].into()), @"item 7, comment line: a text of 81 characters, more than 80; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.institution = "\u{feff}a".into()), @"item 2, institution identifier: a byte order mark at the start of a text; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.selection = Selection::Only([].into())), @"item 14, parameter inclusion or exclusion list: a list with no entries; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.mode = ExperimentMode::SdpSv), @"item 10, number of spectral regions: a value that the mode or the technique has no place for; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.blocks[0].position = Some(Pair::default())), @"block 1, item 10, x coordinate: a value that the mode or the technique has no place for; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.blocks[1].abscissa = None), @"block 2, item 31, abscissa label: no value, and the mode or the technique needs one; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.variables = [Label::default()].into()), @"block 1, item 11, value of experimental variable: 0 entries where 1 are announced; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.future_block_entries = 1), @"block 1, future upgrade block entry: 0 entries where 1 are announced; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.blocks[1].rotation_deg = Some(f64::NAN)), @"block 2, item 39, sample rotation angle: the number NaN; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.blocks[1].rotation_deg = Some(1e37)), @"block 2, item 39, sample rotation angle: the number 1E37, which stands for an unknown value; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| e.blocks[0].ordinates = vec![1.0]), @"block 1, number of ordinate values: 1 values of 0 corresponding variables; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| {
            e.selection = Selection::Without([part(26)].into());
            e.blocks[1].target_bias_v = Some(-5.0);
        }), @"block 2, item 26, target bias: not the first block's value, and the parameter list leaves it out; ISO 14976 cannot carry it");
        insta::assert_snapshot!(refused(|e| {
            e.selection = Selection::Only([part(6)].into());
            e.blocks[1].comment = ["a line more".into()].into();
        }), @"block 2, item 8, number of lines in block comment: not the first block's value, and the parameter list leaves it out; ISO 14976 cannot carry it");
    }

    #[test]
    fn values_are_finite() {
        let mut experiment = two_blocks();
        let block = &mut experiment.blocks[0];
        block.variables = [Label::default()].into();
        block.extents = [Extent::default()].into();
        block.ordinates = vec![f64::INFINITY];
        let refusal = text(&experiment).unwrap_err();
        insta::assert_snapshot!(refusal, @"block 1, ordinate value: the number inf; ISO 14976 cannot carry it");
    }

    #[test]
    fn numbers_are_short() {
        for (value, expected) in [
            (1e37, "1E37"),
            (0.1, "0.1"),
            (-0.0, "-0"),
            (1486.6, "1486.6"),
            (5e-324, "5E-324"),
            (-1.5e15, "-1.5E15"),
            (12.0, "12"),
        ] {
            assert_eq!(number(value).as_deref(), Some(expected));
        }
    }
}
