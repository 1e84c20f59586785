//! What stands before the blocks.

use std::sync::Arc;

use super::block::Block;
use super::keyword::{ExperimentMode, ScanMode};

/// One line of text. Shared, because later blocks take over what the first one says.
pub type Text = Arc<str>;
/// A list, shared for the same reason.
pub type List<T> = Arc<[T]>;

/// A file of the format.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Experiment {
    /// Item 2: where it was done.
    pub institution: Text,
    /// Item 3: on which instrument.
    pub instrument_model: Text,
    /// Item 4: by whom.
    pub operator: Text,
    /// Item 5: what the experiment is called.
    pub identifier: Text,
    /// Items 6 and 7: comment lines.
    pub comment: List<Text>,
    /// Item 8: the experiment mode.
    pub mode: ExperimentMode,
    /// Item 9: the scan mode.
    pub scan_mode: ScanMode,
    /// Item 10: the number of spectral regions; in modes MAP, MAPDP, NORM and SDP.
    pub spectral_regions: Option<u32>,
    /// Item 11: the size of the map; in modes MAP and MAPDP.
    pub map: Option<MapSize>,
    /// Items 12 and 13: the experimental variables, whose values each block gives.
    pub variables: List<Label>,
    /// Items 14 and 15: which parts the blocks after the first one have.
    pub selection: Selection,
    /// Items 16 and 17: parts that were entered by hand.
    pub manual_parts: List<Part>,
    /// Items 18 and 20: lines kept for later versions of the format.
    pub future_entries: List<Text>,
    /// Item 19: how many such lines each block has.
    pub future_block_entries: u32,
    /// Item 21 and the blocks.
    pub blocks: Vec<Block>,
}

/// The size of a map.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct MapSize {
    /// Positions that were analysed.
    pub positions: u32,
    /// Discrete x coordinates of the full map.
    pub x_coordinates: u32,
    /// Discrete y coordinates of the full map.
    pub y_coordinates: u32,
}

/// The name of a quantity and its unit, in the file's words.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Label {
    /// Its name.
    pub label: Text,
    /// Its unit.
    pub units: Text,
}

/// The number of a part of a block, 1 to 40.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Part(u8);

impl Part {
    /// The last one.
    pub const LAST: u8 = 40;

    /// The part of a number, where there is one.
    #[must_use]
    pub fn new(number: u8) -> Option<Self> {
        (1..=Self::LAST).contains(&number).then_some(Self(number))
    }

    /// Its number.
    #[must_use]
    pub fn number(self) -> u8 {
        self.0
    }
}

impl Default for Part {
    fn default() -> Self {
        Self(1)
    }
}

/// Which parts the blocks after the first one have; the others keep the first block's value.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub enum Selection {
    /// Every part.
    #[default]
    Every,
    /// Those listed; there is at least one.
    Only(List<Part>),
    /// Those not listed; there is at least one listed.
    Without(List<Part>),
}

impl Selection {
    /// Whether blocks after the first one have a part.
    #[must_use]
    pub fn has(&self, part: u8) -> bool {
        let lists = |parts: &[Part]| parts.iter().any(|listed| listed.0 == part);
        match self {
            Self::Every => true,
            Self::Only(parts) => lists(parts),
            Self::Without(parts) => !lists(parts),
        }
    }

    /// The signed number of entries and the entries, as the file has them.
    pub(super) fn entries(&self) -> (i64, List<Part>) {
        let count = |parts: &List<Part>| i64::try_from(parts.len()).unwrap_or(i64::MAX);
        match self {
            Self::Every => (0, List::default()),
            Self::Only(parts) => (count(parts), parts.clone()),
            Self::Without(parts) => (-count(parts), parts.clone()),
        }
    }

    /// From the signed number of entries and the entries.
    pub(super) fn from_entries(count: i64, parts: List<Part>) -> Self {
        match count {
            0 => Self::Every,
            1.. => Self::Only(parts),
            _ => Self::Without(parts),
        }
    }
}
