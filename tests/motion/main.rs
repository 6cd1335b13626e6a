//! The laws of motion and the inside of a move, against published values and independent arithmetic.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod bezier;
mod published;
mod support;
