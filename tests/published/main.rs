//! The main job against sources outside the project, each named beside its check: a publication, "from memory" where
//! its text was not at hand, or "common practice" where there is none.

#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    clippy::print_stderr,
    reason = "a test may stop at the first thing that is not so, and says what it skipped"
)]

#[path = "../common/mod.rs"]
mod common;
mod curves;
mod lissajous;
mod optimum;
mod practice;
mod support;
mod table;
