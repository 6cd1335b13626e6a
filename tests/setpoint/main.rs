//! Rows and the forms they are written in.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    clippy::print_stderr,
    missing_docs
)]

mod bytes;
mod closed_forms;
mod columns;
mod line;
mod plans;
