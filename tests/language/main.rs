//! Text → syntax tree → resolved rig and show: the cases of `cases/`, and what holds for every text.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    clippy::print_stderr
)]

mod cases;
mod dump;
mod hostile;
mod properties;
