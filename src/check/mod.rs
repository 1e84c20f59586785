//! Findings: what the rules say of a user's data, and the proof that they were asked.
//!
//! This room owns the catalogue (one trait, one slice, one file a rule) and [`Validated`], which only
//! the runner here makes. It knows documents and where their values stand; it changes none of them
//! and knows no numerics beyond comparing numbers.

mod catalogue;
mod rules;
mod subject;
mod validated;

pub use catalogue::{CATALOGUE, Rule};
pub use subject::Subject;
pub use validated::{Validated, validate_levels, validate_spectrum};
