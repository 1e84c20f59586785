//! bandrule compares computed quasiparticle band energies (GW and its kin) with photoemission and
//! inverse photoemission.
//!
//! Data flow one way through the rooms below: bytes become neutral documents ([`parse`]), rules are
//! asked ([`check`]), levels are aligned with curves ([`align`]), a study is answered ([`compare`])
//! and written ([`export`]). Energies are in eV on the electron scale inside; units and constants have
//! one place, [`quantity`]; the documents are in [`schema`].
//!
//! A comparison does not replace calibration, reference samples or licensed safety practice at the
//! instrument.
#![forbid(unsafe_code)]
#![deny(missing_docs)]
// In tests exact equality of numbers is often the point, and plain loops read best.
#![cfg_attr(
    test,
    allow(
        clippy::float_cmp,
        clippy::format_push_string,
        clippy::maybe_infinite_iter,
        clippy::needless_range_loop
    )
)]

pub mod align;
pub mod check;
pub mod cli;
pub mod compare;
pub mod export;
pub mod parse;
pub mod quantity;
pub mod schema;
