//! What several integration tests share. Each test crate uses a part of it.
#![allow(dead_code)]

mod bands;
pub mod events;
pub mod studies;
