//! What carries the items of the standard, one after the other: from a file into a document or back.

use super::experiment::{List, Part, Text};

/// An item: its number (0 where the standard gives none) and its name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Item(pub u8, pub &'static str);

/// A closed set of words.
pub(crate) trait Keyword: Copy + Default + PartialEq + 'static {
    /// All of them.
    const ALL: &'static [Self];
    /// The word in the file.
    fn word(self) -> &'static str;
}

/// A whole number with its range.
pub(crate) trait Whole: Copy {
    /// What is expected, in words.
    const EXPECTED: &'static str;
    /// From the number in the file, where it is in the range.
    fn from_number(number: i64) -> Option<Self>;
    /// The number in the file.
    fn number(self) -> i64;
}

/// One side of the transfer. The order of the calls is the standard's and stands in `layout`.
pub(crate) trait Carrier {
    /// Why an item cannot be carried.
    type Error;

    /// A line of text.
    fn text(&mut self, item: Item, value: &mut Text) -> Result<(), Self::Error>;
    /// A whole number.
    fn whole<N: Whole>(&mut self, item: Item, value: &mut N) -> Result<(), Self::Error>;
    /// A whole number that announces so many entries of so many lines each.
    fn count<N: Whole>(&mut self, item: Item, lines: u64, value: &mut N)
    -> Result<(), Self::Error>;
    /// A real number.
    fn real(&mut self, item: Item, value: &mut Option<f64>) -> Result<(), Self::Error>;
    /// A keyword.
    fn keyword<K: Keyword>(&mut self, item: Item, value: &mut K) -> Result<(), Self::Error>;
    /// The entries of a list whose number is known.
    fn entries<T: Clone + Default>(
        &mut self,
        item: Item,
        count: u64,
        list: &mut List<T>,
        each: impl FnMut(&mut Self, &mut T) -> Result<(), Self::Error>,
    ) -> Result<(), Self::Error>;
    /// An item that only some modes or techniques have: the value to carry, where it applies.
    fn optional<'a, T: Default>(
        &mut self,
        item: Item,
        applies: bool,
        value: &'a mut Option<T>,
    ) -> Result<Option<&'a mut T>, Self::Error>;
}

impl Whole for i64 {
    const EXPECTED: &'static str = "a whole number";

    fn from_number(number: i64) -> Option<Self> {
        Some(number)
    }

    fn number(self) -> i64 {
        self
    }
}

impl Whole for u32 {
    const EXPECTED: &'static str = "a whole number from 0";

    fn from_number(number: i64) -> Option<Self> {
        number.try_into().ok()
    }

    fn number(self) -> i64 {
        self.into()
    }
}

/// -1 where it is unknown.
impl Whole for Option<u32> {
    const EXPECTED: &'static str = "a whole number from 0 (-1 where it is unknown)";

    fn from_number(number: i64) -> Option<Self> {
        match number {
            -1 => Some(None),
            known => known.try_into().ok().map(Some),
        }
    }

    fn number(self) -> i64 {
        self.map_or(-1, i64::from)
    }
}

impl Whole for Part {
    const EXPECTED: &'static str = "the number of a part of a block (1 to 40)";

    fn from_number(number: i64) -> Option<Self> {
        number.try_into().ok().and_then(Part::new)
    }

    fn number(self) -> i64 {
        Part::number(self).into()
    }
}
