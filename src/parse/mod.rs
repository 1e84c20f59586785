//! From bytes to neutral documents.
//!
//! This room owns decoding, the dialect of a table, the grammar of its header and comments, numbers
//! and quantities as text, and the way from a value back to its place. It lowers text faithfully and
//! judges no value: rules do that later. What a column is and which unit it has needs evidence from
//! the header, a comment or the user; what stays open or contradicts itself is refused, with the
//! setting that settles it. It knows nothing of rules, fits or studies.

// A problem carries its place and the places beside it: it is met once a run, not in a hot loop.
#![allow(clippy::result_large_err)]

mod condition;
mod dialect;
mod evidence;
mod header;
mod header_line;
pub mod jcamp_dx;
mod layout;
mod levels;
mod metadata;
mod number;
mod parsed;
mod plain_table;
mod problem;
mod quantity_text;
mod reference;
mod regroup;
mod role;
mod source;
mod spectrum;
mod table;
mod unit_of_column;
mod words;

#[cfg(test)]
mod nasty_tests;
#[cfg(test)]
mod tests;

pub use condition::ConditionKey;
pub use levels::read_levels;
pub use metadata::Statement;
pub use parsed::{Column, Parsed};
pub use plain_table::read_columns;
pub use problem::{Problem, render};
pub use quantity_text::{
    energy_text, linear_energy_text, potential_text, temperature_text, time_text,
};
pub use role::{ColumnChoice, Hints, Role};
pub use source::{Place, Source};
pub use spectrum::read_spectrum;
