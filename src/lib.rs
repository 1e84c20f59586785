//! bandrule compares computed quasiparticle band energies with photoemission and inverse
//! photoemission.
#![forbid(unsafe_code)]
#![deny(missing_docs)]

pub mod parse;
pub mod quantity;
pub mod schema;
