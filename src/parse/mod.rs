//! From bytes to neutral documents.
//!
//! This room owns decoding, the dialect of a table, the grammar of its header and comments, numbers
//! and quantities as text, and the way from a value back to its place. It lowers text faithfully and
//! judges no value: rules do that later. What a column is and which unit it has needs evidence from
//! the header, a comment or the user; what stays open or contradicts itself is refused, with the
//! setting that settles it. It knows nothing of rules, fits or studies.

// A problem carries its place and the places beside it: it is met once a run, not in a hot loop.
#![allow(clippy::result_large_err)]

mod any;
mod blocks;
mod cells;
mod condition;
mod decode;
mod density;
mod dialect;
mod dispersion;
mod document;
mod evidence;
mod forms;
mod gaps;
mod header;
mod header_line;
pub mod iso14976;
pub mod jcamp_dx;
mod layout;
mod levels;
mod line;
mod look;
mod lowering;
mod metadata;
mod number;
mod parsed;
mod plain_line;
mod plain_table;
mod problem;
mod quantity_text;
mod reference;
mod regroup;
mod role;
mod sentence;
mod series;
mod skipped;
mod source;
mod spectrum;
mod standards;
mod summary;
mod table;
mod title;
mod unit_of_column;
mod values;
mod words;

#[cfg(test)]
mod header_tests;
#[cfg(test)]
mod nasty_tests;
#[cfg(test)]
mod tests;

pub use any::{AnyParsed, read_any};
pub use condition::ConditionKey;
pub use decode::Encoding;
pub use dialect::Delimiter;
pub use levels::read_levels;
pub use metadata::Statement;
pub use number::Decimal;
pub use parsed::{Column, Manner, Parsed};
pub use plain_table::read_columns;
pub use problem::{Problem, render};
pub use quantity_text::{
    energy_text, linear_energy_text, potential_text, temperature_text, time_text,
};
pub use role::{ColumnChoice, Hints, Kind, Role, Settle};
pub use skipped::Skipped;
pub use source::{Place, Source};
pub use spectrum::read_spectrum;
pub use summary::Summary;
