//! What several integration tests share. Each test crate uses a part of it.
#![allow(dead_code)]
// Counts and channel numbers here are far below 2^52 and never negative.
#![allow(
    clippy::cast_possible_truncation,
    clippy::cast_precision_loss,
    clippy::cast_sign_loss
)]

mod bands;
pub mod events;
pub mod studies;
