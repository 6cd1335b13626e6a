//! The laws of motion and the inside of a move, against published values and independent arithmetic.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod accuracy;
mod bezier;
mod derivatives;
mod enclosure;
mod properties;
mod published;
mod skew;
mod support;
